"""Conductive films and water over a pad: how much of a touch a film looks like, and over what length it smears.

A film of sheet admittance Y [S/sq] over a pad is answered by the layered solution; the closed forms of the thin cover are its
limit. The apparent touch F is the change by the film over the change by an unbounded grounded plane, complex: its real part is
capacitance.
"""

from __future__ import annotations

from cmath import sqrt as complex_sqrt
from collections.abc import Sequence
from math import pi
from typing import TYPE_CHECKING, Any

import numpy as np

from stackdb.fields.kernel import INFINITE, FieldLayer, Sheet, look, series_gap_limit, sheet_term
from stackdb.fields.quadrature import grid
from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    Array = NDArray[Any]


def sheet_admittance(
    *, conductivity_s_per_m: float, permittivity: float, thickness_m: float, frequency_hz: float
) -> complex:
    """Sheet admittance [S/sq] of a liquid film: (sigma + j w eps0 (eps - 1)) h.

    Conductivity [S/m], permittivity [-], thickness [m], frequency [Hz].
    """
    w = 2.0 * pi * frequency_hz
    return (conductivity_s_per_m + 1j * w * EPS0 * (permittivity - 1.0)) * thickness_m


def propagation(*, frequency_hz: float, admittance: complex, capacitance_per_area: float) -> complex:
    """G [1/m] of a film on a plane: sqrt(j w C''/Y). Frequency [Hz], sheet admittance [S/sq], areal capacitance [F/m2]."""
    return complex_sqrt(2j * pi * frequency_hz * capacitance_per_area / admittance)


def _bessel(order: int, z: complex) -> tuple[complex, complex]:
    """I and K of an order, each without its exponential growth: I exp(-Re z), K exp(z)."""
    from scipy import special

    functions: Any = special  # its stubs know no complex scalars of this kind
    return complex(functions.ive(order, z)), complex(functions.kve(order, z))


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
    """F [-] of an unbounded film when neighbours are driven out to radius c: 2 (c/a) I1(ga) K1(gc); ``ga``, ``gc`` [-]."""
    return 2.0 * (gc / ga) * _ik(1, ga, 1, gc)


def driven_rim_film(ga: complex, gb: complex) -> complex:
    """F [-] of a film with its rim at ground, all under it driven: 2 I1(ga)/(ga I0(gb)); its real part can be negative."""
    i1a, i0b = _bessel(1, ga)[0], _bessel(0, gb)[0]
    return complex(2.0 * i1a / (ga * i0b) * np.exp(ga.real - gb.real))


def apparent_touch(
    *,
    cover: Sequence[FieldLayer],
    film_under: int,
    film: Sheet | FieldLayer,
    pad_diameter_m: float,
    around: str = "grounded",
) -> complex:
    """F [-] of an unbounded film by the layered solution, all of the electrode plane at given potentials.

    ``cover`` from the touched side down to the electrode; ``film_under`` how many of its layers lie above the film (0: the film
    is on the touched surface); ``film`` a sheet, or a liquid as a layer of complex permittivity. Pad diameter [m]. Among grounded
    neighbours the exact integral 2 pi a^2 int [Y_film - Y_open] J1(ka)^2 dk over that of a grounded plane on the film's face;
    among driven ones an unbounded floating film changes nothing.
    """
    if around == "driven":
        return 0j
    from scipy.special import j1

    a = 0.5 * pad_diameter_m
    under = tuple(reversed(tuple(cover)[film_under:]))
    above = tuple(reversed(tuple(cover)[:film_under]))
    reach = 20.0 / min(x.thickness_m for x in (*cover,) if x.thickness_m > 0.0)
    nodes = grid(a, reach)
    k, weight = nodes.k, nodes.weight
    air = look(above, 1.0, k).admittance
    if isinstance(film, Sheet):
        over: Array = air + sheet_term(film, k)
    else:
        over = look([film], air, k).admittance
    with_film = look(under, over, k).admittance
    without = look(under, air, k).admittance
    grounded = look(under, INFINITE, k).admittance
    waves = weight * j1(k * a) ** 2
    return complex((waves @ (with_film - without)) / (waves @ (grounded - without)))


def touch_through(*, cover: Sequence[FieldLayer], film_under: int, film: Sheet, pad_diameter_m: float) -> complex:
    """Share [-] of a touch by a grounded plane on the cover that comes through a floating film inside or on it.

    Change by the plane with the film present over the change without the film, pad among grounded neighbours, pad diameter [m];
    the layered solution.
    """
    from scipy.special import j1

    a = 0.5 * pad_diameter_m
    under = tuple(reversed(tuple(cover)[film_under:]))
    above = tuple(reversed(tuple(cover)[:film_under]))
    if not above:
        return 0j
    reach = 20.0 / min(x.thickness_m for x in (*cover,) if x.thickness_m > 0.0)
    nodes = grid(a, reach)
    k, weight = nodes.k, nodes.weight
    waves = weight * j1(k * a) ** 2
    sheet = sheet_term(film, k)
    air, plane = look(above, 1.0, k).admittance, look(above, INFINITE, k).admittance
    filmed = look(under, plane + sheet, k).admittance - look(under, air + sheet, k).admittance
    bare = look(under, plane, k).admittance - look(under, air, k).admittance
    return complex((waves @ filmed) / (waves @ bare))


def thin_cover_parameter(
    *, cover: Sequence[FieldLayer], admittance: complex, frequency_hz: float, pad_diameter_m: float
) -> complex:
    """G times the pad radius [-] of the closed forms: sheet admittance [S/sq], frequency [Hz], pad diameter [m]."""
    capacitance = EPS0 / series_gap_limit(cover).real
    g = propagation(frequency_hz=frequency_hz, admittance=admittance, capacitance_per_area=capacitance)
    return g * 0.5 * pad_diameter_m
