"""Series composition of layered dielectrics: the equivalent air gap and what follows from it.

Exact for plates much wider than the stack; J. C. Maxwell, A dynamical theory of the electromagnetic field (1864),
paragraphs 86 and 89: each layer counts by thickness over permittivity, and order does not matter.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import pi
from typing import NamedTuple

from stackdb.quantities import EPS0


class Slab(NamedTuple):
    """A layer as the sum sees it: thickness [m] and complex relative permittivity eps' - j eps'' [-]."""

    thickness_m: float
    permittivity: complex


class SeriesGap(NamedTuple):
    """The series sum of slabs.

    ``complex_gap_m`` sum of t/eps* [m]; ``gap_m`` eps0 over the real part of the areal capacitance [m];
    ``capacitance_per_area`` [F/m2]; ``effective_permittivity`` Re(T/g*) [-]; ``loss_tangent`` of the whole [-].
    """

    complex_gap_m: complex
    gap_m: float
    capacitance_per_area: float
    effective_permittivity: float
    loss_tangent: float
    thickness_m: float


def complex_permittivity(
    *, permittivity: float, loss_tangent: float = 0.0, conductivity_s_per_m: float = 0.0, frequency_hz: float
) -> complex:
    """eps'(1 - j tan d) - j sigma/(w eps0) [-] from eps' [-], loss tangent [-], conductivity [S/m], frequency [Hz].

    Sign convention of IEC 60050-121, 121-12-14. A record gives its loss or its conductivity, never both to one layer.

    >>> complex_permittivity(permittivity=3.0, loss_tangent=0.02, frequency_hz=1e5)
    (3-0.06j)
    """
    conduction = conductivity_s_per_m / (2.0 * pi * frequency_hz * EPS0) if conductivity_s_per_m else 0.0
    return complex(permittivity, -(permittivity * loss_tangent + conduction))


def series_gap(slabs: Sequence[Slab]) -> SeriesGap:
    """Compose slabs in series. Zero total thickness gives an infinite capacitance and is refused by the caller.

    >>> round(1e3 * series_gap([Slab(1.1e-3, 7.0), Slab(0.15e-3, 3.0)]).gap_m, 4)
    0.2071
    """
    total = sum(s.thickness_m for s in slabs)
    gap = sum((s.thickness_m / complex(s.permittivity) for s in slabs), 0j)
    inverse = 1.0 / gap if gap else complex("inf")
    return SeriesGap(
        complex_gap_m=gap,
        gap_m=1.0 / inverse.real,
        capacitance_per_area=EPS0 * inverse.real,
        effective_permittivity=total * inverse.real,
        loss_tangent=-inverse.imag / inverse.real if inverse.imag else 0.0,
        thickness_m=total,
    )
