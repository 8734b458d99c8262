"""Conductive films and water over a pad: how much of a touch a film looks like, and over what length it smears.

A film of sheet admittance Y [S/sq] over a pad is answered by the layered solution; the closed forms of the thin cover
are its limit. The apparent touch F is the change by the film over the change by an unbounded grounded plane, complex:
its real part is capacitance.
"""

from __future__ import annotations

from cmath import sqrt as complex_sqrt
from collections.abc import Sequence
from math import pi
from typing import TYPE_CHECKING, Any, NamedTuple

import numpy as np

from stackdb.errors import InputError
from stackdb.fields.kernel import INFINITE, FieldLayer, Sheet, look, series_gap_limit, sheet_term
from stackdb.fields.panels import Abrupt, basis, breaks, disc_capacitance
from stackdb.fields.planes import disc_weight, plane_nodes
from stackdb.fields.quadrature import Grid
from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[Any]

THIN = 0.05  # cover over the shorter of pad radius and smear length up to which the closed forms serve


def sheet_admittance(
    *, conductivity_s_per_m: float, permittivity: float, thickness_m: float, frequency_hz: float
) -> complex:
    """Sheet admittance [S/sq] of a liquid film: (sigma + j w eps0 (eps - 1)) h.

    Conductivity [S/m], permittivity [-], thickness [m], frequency [Hz].
    """
    w = 2.0 * pi * frequency_hz
    return (conductivity_s_per_m + 1j * w * EPS0 * (permittivity - 1.0)) * thickness_m


def propagation(*, frequency_hz: float, admittance: complex, capacitance_per_area: float) -> complex:
    """Propagation constant g [1/m] of a film on a plane: sqrt(j w C''/Y).

    Frequency [Hz], sheet admittance [S/sq], areal capacitance [F/m2].
    """
    return complex_sqrt(2j * pi * frequency_hz * capacitance_per_area / admittance)


def _bessel(order: int, z: complex) -> tuple[complex, complex]:
    """I and K of an order, each without its exponential growth: I exp(-Re z), K exp(z)."""
    from scipy.special import ive, kve

    at = np.complex128(z)
    return complex(ive(order, at)), complex(kve(order, at))


def _ik(i_order: int, zi: complex, k_order: int, zk: complex) -> complex:
    """I(zi) K(zk) without overflow."""
    return _bessel(i_order, zi)[0] * _bessel(k_order, zk)[1] * complex(np.exp(zi.real - zk))


def unbounded_film(ga: complex) -> complex:
    """F [-] of an unbounded film over a pad among grounded neighbours: 2 I1(ga) K1(ga). ``ga`` [-], g times pad radius.

    Solution of the film equation in discs: the film over the plane is a lossy line in two dimensions.
    """
    return 2.0 * _ik(1, ga, 1, ga)


def free_disc_film(ga: complex, gb: complex) -> complex:
    """F [-] of a free disc of film of radius b over a pad of radius a among grounded neighbours; nothing when b <= a.

    2 I1(ga) [K1(ga) - K1(gb) I1(ga)/I1(gb)]; ``ga`` and ``gb`` [-].
    """
    if abs(gb) <= abs(ga):
        return 0j
    i1a, i1b = _bessel(1, ga)[0], _bessel(1, gb)[0]
    ratio = i1a / i1b * np.exp(ga.real - gb.real)
    return complex(2.0 * (_ik(1, ga, 1, ga) - _ik(1, ga, 1, gb) * ratio))


def grounded_rim_film(ga: complex, gb: complex) -> complex:
    """F [-] of a disc of film with its rim at ground: 2 I1(ga) [K1(ga) + K0(gb) I1(ga)/I0(gb)]; ``ga``, ``gb`` [-]."""
    i1a, i0b = _bessel(1, ga)[0], _bessel(0, gb)[0]
    ratio = i1a / i0b * np.exp(ga.real - gb.real)
    return complex(2.0 * (_ik(1, ga, 1, ga) + _ik(1, ga, 0, gb) * ratio))


def driven_unbounded_film(ga: complex, gc: complex) -> complex:
    """F [-] of an unbounded film, neighbours driven out to radius c: 2 (c/a) I1(ga) K1(gc); ``ga``, ``gc`` [-]."""
    return 2.0 * (gc / ga) * _ik(1, ga, 1, gc)


def driven_free_disc_film(ga: complex, gb: complex, gc: complex) -> complex:
    """F [-] of a free disc of film of radius b, neighbours driven out to c: nothing when b <= c.

    2 (c/a) I1(ga) [K1(gc) - K1(gb) I1(gc)/I1(gb)]; ``ga``, ``gb``, ``gc`` [-].
    """
    if abs(gb) <= abs(gc):
        return 0j
    ratio = _bessel(1, gc)[0] / _bessel(1, gb)[0] * np.exp(gc.real - gb.real)
    return complex(2.0 * (gc / ga) * (_ik(1, ga, 1, gc) - _ik(1, ga, 1, gb) * ratio))


def driven_rim_film(ga: complex, gb: complex) -> complex:
    """F [-] of a film with its rim at ground, all under it driven: 2 I1(ga)/(ga I0(gb)); it can be negative."""
    i1a, i0b = _bessel(1, ga)[0], _bessel(0, gb)[0]
    return complex(2.0 * i1a / (ga * i0b) * np.exp(ga.real - gb.real))


class ClosedFormFit(NamedTuple):
    """Whether the closed forms hold, and the cover's thickness over the shorter of pad radius and smear length [-]."""

    holds: bool
    thickness_share: float


def closed_form_fit(*, cover: Sequence[FieldLayer], pad_diameter_m: float, ga: complex) -> ClosedFormFit:
    """Whether the cover is thin enough for the closed forms: T well below pad radius and smear length 1/|g|.

    Pad diameter [m], ``ga`` [-]. At a twentieth they are within about 5 % of the layered solution, at a half a third
    off.
    """
    thickness = sum(x.thickness_m for x in cover)
    share = thickness / (0.5 * pad_diameter_m) * max(1.0, abs(ga))
    return ClosedFormFit(share <= THIN, share)


def apparent_touch(
    *,
    cover: Sequence[FieldLayer],
    film_under: int,
    film: Sheet | FieldLayer,
    pad_diameter_m: float,
    around: str = "grounded",
    driven_radius_m: float | None = None,
    below: Sequence[FieldLayer] = (),
    below_ending: str = "open",
) -> complex:
    """F [-] of an unbounded film by the layered solution: its change over that by a grounded plane in its place.

    ``cover`` from the touched side down to the electrode; ``film_under`` how many of its layers lie above the film (0:
    the film is on the touched surface); ``film`` a sheet, or a liquid as a layer of complex permittivity. Pad diameter
    [m]. Among ``grounded`` neighbours the exact integral
    2 pi a^2 int [Y_film - Y_open] J1(ka)^2 dk over that of the plane; among ``driven`` ones that reach out to a radius
    [m] one J1 belongs to that radius, and without end the floating film changes nothing. A pad ``alone`` is solved as a
    disc over what lies ``below`` (ending ``open`` or ``ground``).
    """
    if around == "driven" and driven_radius_m is None:
        return 0j
    a = 0.5 * pad_diameter_m
    outer = a if driven_radius_m is None else max(a, driven_radius_m)
    if around == "alone":
        return _disc_touch(cover, film_under, film, a, _Below(tuple(below), below_ending))
    if around not in ("grounded", "driven"):
        raise InputError("word-unknown", f'"{around}" is none of alone, grounded, driven')
    seen = _over(cover, film_under, film, 2.0 * outer)
    waves = seen.nodes.weight * disc_weight(seen.nodes.k, a, outer if around == "driven" else None)
    return complex((waves @ (seen.film - seen.open)) / (waves @ (seen.plane - seen.open)))


class _Below(NamedTuple):
    layers: tuple[FieldLayer, ...]
    ending: str


class _Seen(NamedTuple):
    """Nodes, and the cover's admittance with the film, without it, and with a grounded plane in its place."""

    nodes: Grid
    film: Array
    open: Array
    plane: Array


def _over(cover: Sequence[FieldLayer], film_under: int, film: Sheet | FieldLayer, size_m: float) -> _Seen:
    under = tuple(reversed(tuple(cover)[film_under:]))
    above = tuple(reversed(tuple(cover)[:film_under]))
    nodes = plane_nodes(under, size_m)
    k = nodes.k
    air = look(above, 1.0, k).admittance
    filmed = air + sheet_term(film, k) if isinstance(film, Sheet) else look([film], air, k).admittance
    admittances = (look(under, end, k).admittance for end in (filmed, air, INFINITE))
    return _Seen(nodes, *admittances)


def _disc_touch(
    cover: Sequence[FieldLayer], film_under: int, film: Sheet | FieldLayer, a: float, below: _Below
) -> complex:
    """F of a pad alone: its charge by panels, with the film, with a plane in its place, and with neither."""
    if below.ending not in ("open", "ground"):
        raise InputError("word-unknown", f'"{below.ending}" is none of open, ground for a film over a pad alone')
    seen = _over(cover, film_under, film, 2.0 * a)
    down = look(below.layers, 1.0 if below.ending == "open" else INFINITE, seen.nodes.k).admittance
    near = complex(tuple(cover)[-1].mean) + (complex(below.layers[0].mean) if below.layers else 1.0)
    scale = min(x.thickness_m for x in (tuple(cover)[-1], *below.layers[:1]))
    disc = basis(seen.nodes, breaks(a, [Abrupt(a, max(scale, 4.0 / float(seen.nodes.k[-1])))]), 12)
    with_film, without, with_plane = (
        disc_capacitance(disc, seen.nodes.weight, y + down, near) for y in (seen.film, seen.open, seen.plane)
    )
    return complex((with_film - without) / (with_plane - without))


def touch_through(*, cover: Sequence[FieldLayer], film_under: int, film: Sheet, pad_diameter_m: float) -> complex:
    """Share [-] of a touch by a grounded plane on the cover that comes through a floating film inside or on it.

    Change by the plane with the film present over the change without the film, pad among grounded neighbours, pad
    diameter [m]; the layered solution.
    """
    under = tuple(reversed(tuple(cover)[film_under:]))
    above = tuple(reversed(tuple(cover)[:film_under]))
    if not above:
        return 0j
    nodes = plane_nodes(under, pad_diameter_m)
    k = nodes.k
    waves = nodes.weight * disc_weight(k, 0.5 * pad_diameter_m)
    sheet = sheet_term(film, k)
    air, plane = look(above, 1.0, k).admittance, look(above, INFINITE, k).admittance
    filmed = look(under, plane + sheet, k).admittance - look(under, air + sheet, k).admittance
    bare = look(under, plane, k).admittance - look(under, air, k).admittance
    return complex((waves @ filmed) / (waves @ bare))


def thin_cover_parameter(
    *, cover: Sequence[FieldLayer], admittance: complex, frequency_hz: float, pad_diameter_m: float
) -> complex:
    """Product g a [-] of the closed forms: sheet admittance [S/sq], frequency [Hz], pad diameter [m]."""
    capacitance = EPS0 / series_gap_limit(cover).real
    g = propagation(frequency_hz=frequency_hz, admittance=admittance, capacitance_per_area=capacitance)
    return g * 0.5 * pad_diameter_m
