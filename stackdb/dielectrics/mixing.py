"""Mixing rules: the permittivity of inclusions in a matrix, by volume fraction, real or complex.

Bounds hold always (Wiener) or for isotropic mixtures (Hashin and Shtrikman); each rule is one picture of the texture.
"""

from __future__ import annotations

from cmath import exp, log, sqrt
from collections.abc import Callable
from typing import NamedTuple

PERCOLATION = {"bruggeman": 1.0 / 3.0}


class Bounds(NamedTuple):
    """Lower and upper bound of a mixture's permittivity [-]."""

    low: float
    high: float


def series(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """Layers across the field: 1/(f/e_i + (1 - f)/e_m) [-], the lower Wiener bound (O. Wiener 1912, recalled)."""
    return 1.0 / (fraction / inclusion + (1.0 - fraction) / matrix)


def parallel(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """Columns along the field: f e_i + (1 - f) e_m [-], the upper Wiener bound (O. Wiener 1912, recalled)."""
    return fraction * inclusion + (1.0 - fraction) * matrix


def maxwell_garnett(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """Spheres spread in a matrix: J. C. Maxwell Garnett 1904, exact to first order in the fraction [-].

    >>> round(maxwell_garnett(0.18, 114.0, 3.5).real, 2)
    5.57
    """
    step = inclusion - matrix
    return matrix + 3.0 * fraction * matrix * step / (inclusion + 2.0 * matrix - fraction * step)


def bruggeman(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """Both components alike, random grains [-]: D. A. G. Bruggeman, Ann. Phys. 416 (1935) 636 (recalled), the symmetric rule."""
    b = (3.0 * fraction - 1.0) * inclusion + (2.0 - 3.0 * fraction) * matrix
    root = sqrt(b * b + 8.0 * matrix * inclusion)
    found = 0.25 * (b + root)
    return found if found.real > 0.0 and found.imag <= 1e-12 * abs(found) else 0.25 * (b - root)


def bruggeman_hanai(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """Spheres of all sizes added little by little [-]: (e_i - e)/(e_i - e_m) (e_m/e)^(1/3) = 1 - f (T. Hanai 1960, recalled).

    Newton's method, led from no filling to the fraction asked so that it stays on the right branch.
    """
    if inclusion == matrix:
        return matrix
    e = complex(matrix)
    steps = 40
    for n in range(1, steps + 1):
        target = 1.0 - fraction * n / steps
        for _ in range(30):
            left = (inclusion - e) / (inclusion - matrix) * exp(log(matrix / e) / 3.0) - target
            slope = (left + target) * (-1.0 / (inclusion - e) - 1.0 / (3.0 * e))
            step = left / slope
            e -= step
            if abs(step) < 1e-14 * abs(e):
                break
    return e


def power_law(fraction: float, inclusion: complex, matrix: complex, exponent: float) -> complex:
    """e^a = f e_i^a + (1 - f) e_m^a [-] for a real exponent a [-] from -1 (series) to 1 (parallel)."""
    mean = fraction * exp(exponent * log(inclusion)) + (1.0 - fraction) * exp(exponent * log(matrix))
    return exp(log(mean) / exponent)


def looyenga(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """The cube-root rule [-]: H. Looyenga, Physica 31 (1965) 401 (recalled)."""
    return power_law(fraction, inclusion, matrix, 1.0 / 3.0)


def square_root(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """The square-root rule [-]: J. R. Birchak and others, Proc. IEEE 62 (1974) 93 (recalled)."""
    return power_law(fraction, inclusion, matrix, 0.5)


def lichtenecker(fraction: float, inclusion: complex, matrix: complex) -> complex:
    """The logarithmic rule [-]: K. Lichtenecker 1926 (recalled). May leave the Hashin-Shtrikman band, never Wiener's."""
    return exp(fraction * log(inclusion) + (1.0 - fraction) * log(matrix))


RULES: dict[str, Callable[[float, complex, complex], complex]] = {
    "maxwell-garnett": maxwell_garnett,
    "bruggeman": bruggeman,
    "bruggeman-hanai": bruggeman_hanai,
    "looyenga": looyenga,
    "lichtenecker": lichtenecker,
    "square-root": square_root,
    "series": series,
    "parallel": parallel,
}


def wiener_bounds(fraction: float, inclusion: float, matrix: float) -> Bounds:
    """What no mixture of two real permittivities [-] can leave, whatever its texture."""
    return Bounds(series(fraction, inclusion, matrix).real, parallel(fraction, inclusion, matrix).real)


def hashin_shtrikman_bounds(fraction: float, inclusion: float, matrix: float) -> Bounds:
    """Bounds [-] of an isotropic mixture: Z. Hashin and S. Shtrikman, J. Appl. Phys. 33 (1962) 3125 (recalled)."""
    one = maxwell_garnett(fraction, inclusion, matrix).real
    other = maxwell_garnett(1.0 - fraction, matrix, inclusion).real
    return Bounds(min(one, other), max(one, other))


def solid_fraction(*, areal_mass_kg_m2: float, thickness_m: float, density_kg_m3: float) -> float:
    """Solid volume fraction [-] of a fabric from its areal mass [kg/m2], thickness [m] and fibre density [kg/m3].

    Definition of volume fraction; fibre densities as in W. E. Morton and J. W. S. Hearle, Physical Properties of Textile Fibres.
    """
    return areal_mass_kg_m2 / (thickness_m * density_kg_m3)
