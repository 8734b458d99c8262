"""Relaxation models in the complex plane, with time factor exp(+j w t)."""

from __future__ import annotations

from collections.abc import Sequence
from math import pi
from typing import NamedTuple

EPS0 = 8.8541878188e-12  # F/m, CODATA 2022


class Term(NamedTuple):
    """One relaxation: strength [-], time [s] and broadening alpha [-] (0 is Debye's)."""

    strength: float
    tau_s: float
    alpha: float = 0.0


def cole_cole(
    *, frequency_hz: float, eps_inf: float, terms: Sequence[Term], conductivity_s_per_m: float = 0.0
) -> complex:
    """eps* = eps_inf + sum d/(1 + (j w tau)^(1 - alpha)) + sigma/(j w eps0) [-].

    Frequency [Hz], limit at high frequency [-], terms, ionic conductivity [S/m]. K. S. Cole and R. H. Cole, J. Chem. Phys. 9
    (1941) 341; in this four-term form S. Gabriel, R. W. Lau and C. Gabriel, Phys. Med. Biol. 41 (1996) 2271.

    >>> round(cole_cole(frequency_hz=1e5, eps_inf=4, terms=[Term(32, 7.234e-12), Term(1100, 32.481e-9, 0.2)]).real, 1)
    1119.2
    """
    jw = 2j * pi * frequency_hz
    total = complex(eps_inf)
    for term in terms:
        if term.strength:
            total += term.strength / (1.0 + (jw * term.tau_s) ** (1.0 - term.alpha))
    if conductivity_s_per_m:
        total += conductivity_s_per_m / (jw * EPS0)
    return total


def relaxation_frequency(*, permittivity: float, conductivity_s_per_m: float) -> float:
    """Frequency [Hz] below which a material of permittivity [-] and conductivity [S/m] conducts more than it polarises.

    sigma / (2 pi eps0 eps'), where the loss tangent of conduction is 1.
    """
    return conductivity_s_per_m / (2.0 * pi * EPS0 * permittivity)
