"""Discs beside figures in print, and the sanity figures of the field solution."""

import numpy as np
import pytest

from stackdb.fields.discs import solve
from stackdb.fields.kernel import FieldLayer

EPS0 = 8.8541878188e-12
GLASS = [FieldLayer(3e-3, 7.0)]
ACRYLIC = [FieldLayer(1.2e-3, 2.8)]


def touch(cover, around, diameter=8e-3):
    return solve(cover=cover, pad_diameter_m=diameter, finger_diameter_m=diameter, around=around)


def test_kirchhoff_capacitor_as_a_field_solvers_example_prints_it():
    # P2-KS, read: a public field solver's example file prints 1.1387534097e-08 F for R = 1 m, d = 10 mm and
    # eps 3.54e-11 F/m by Kirchhoff's formula of 1877, at d/a = 0.01 1.8e-4 below the truth (check values, head P2).
    found = touch([FieldLayer(0.01, 1.0)], "alone", 2.0).pair_farad * 3.54e-11 / EPS0
    assert 1.1387534097e-08 / found - 1 == pytest.approx(-1.75e-4, abs=5e-6)


@pytest.mark.parametrize(("permittivity", "ratio"), [(1.0, 0.1), (2.65, 0.1), (2.65, 0.5), (9.6, 0.05), (9.6, 0.5)])
def test_microstrip_disc_formula_of_chew_and_kong(permittivity, ratio):
    # W. C. Chew and J. A. Kong, IEEE Trans. MTT-28 (1980) 98; the formula is recalled, not read; within 0.75 %
    # (check values, head P3)
    a, d = 1e-3, ratio * 1e-3
    edge = np.log(a / (2 * d)) + 1.41 * permittivity + 1.77 + ratio * (0.268 * permittivity + 1.65)
    formula = permittivity * EPS0 * np.pi * a**2 / d * (1 + 2 * d / (np.pi * permittivity * a) * edge)
    found = solve(
        cover=[FieldLayer(1e-3, 1.0)],
        below=[FieldLayer(d, permittivity)],
        below_ending="ground",
        pad_diameter_m=2 * a,
        finger_diameter_m=a,
        around="alone",
    )
    assert found.self_untouched_farad == pytest.approx(formula, rel=0.008)


def test_parallel_plate_number_is_near_three_times_too_high_among_grounded_neighbours():
    assert 1 / touch(GLASS, "grounded").edge_factor == pytest.approx(2.7, abs=0.1)


def test_parallel_plate_number_is_a_quarter_too_high_among_driven_neighbours():
    assert 1 / touch(GLASS, "driven").edge_factor == pytest.approx(1.25, abs=0.05)


def test_parallel_plate_number_is_right_within_a_tenth_for_a_pad_alone():
    assert touch(GLASS, "alone").edge_factor == pytest.approx(1.0, abs=0.1)


def test_equal_gap_is_not_equal_signal():
    glass, acrylic = touch(GLASS, "grounded"), touch(ACRYLIC, "grounded")
    assert acrylic.parallel_plate_farad == pytest.approx(glass.parallel_plate_farad, rel=1e-12)
    assert acrylic.change_farad / glass.change_farad == pytest.approx(1.73, abs=0.01)
