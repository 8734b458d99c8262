"""A resistive film as a distributed RC line: strips and discs driven from an edge.

The uniform RC line (J. W. Thomson, Lord Kelvin 1855, recalled); g^2 = j w R C'', R sheet resistance [ohm/sq], C'' areal capacitance
[F/m2] to the plane it faces.
"""

from __future__ import annotations

from cmath import cosh, exp, tanh
from math import exp as real_exp
from math import pi, sqrt
from typing import Any


def diffusion_length(*, frequency_hz: float, sheet_ohm: float, capacitance_per_area: float) -> float:
    """sqrt(2/(w R C'')) [m]: frequency [Hz], sheet resistance [ohm/sq], areal capacitance [F/m2]."""
    return sqrt(2.0 / (2.0 * pi * frequency_hz * sheet_ohm * capacitance_per_area))


def strip_charge(length_over_diffusion: float) -> complex:
    """Charge of a strip driven at one end over that of a perfect conductor [-]: tanh(gL)/(gL), g = (1 + j)/delta.

    ``length_over_diffusion`` [-]; driven at both ends, use half the length.
    """
    z = (1 + 1j) * length_over_diffusion
    return tanh(z) / z if z else 1.0 + 0j


def strip_end_voltage(length_over_diffusion: float) -> complex:
    """Voltage at the open end of a strip over that at its driven end [-]: 1/cosh(gL)."""
    z = (1 + 1j) * length_over_diffusion
    # cosh overflows long before the voltage matters
    return 1.0 / cosh(z) if z.real < 300.0 else 2.0 * exp(-z)


def rim_driven_disc(radius_over_diffusion: float) -> complex:
    """Charge of a disc driven at its rim over that of a perfect conductor [-]: 2 I1(z)/(z I0(z)), z = (1 + j) a/delta."""
    from scipy import special

    functions: Any = special  # its stubs know no complex scalars of this kind
    z = (1 + 1j) * radius_over_diffusion
    if not z:
        return 1.0 + 0j
    return complex(2.0 * functions.ive(1, z) / (z * functions.ive(0, z)))


def step_response(time_over_rc: float, terms: int = 60) -> float:
    """Voltage at the open end after a step [-], at a time over R C of the whole line [-]."""
    if time_over_rc <= 0.0:
        return 0.0
    total = 0.0
    for n in range(terms):
        k = 2 * n + 1
        total += (-1) ** n / k * real_exp(-((0.5 * pi * k) ** 2) * time_over_rc)
    return 1.0 - 4.0 / pi * total


def time_to_level(level: float) -> float:
    """Time over R C [-] at which the open end reaches a level [-] of the step."""
    from scipy.optimize import brentq

    return float(brentq(lambda t: step_response(t) - level, 1e-3, 20.0, xtol=1e-14, rtol=1e-13))
