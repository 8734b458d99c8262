"""Discs and the layered kernel against values computed without this code.

The literals are those of the project's collection of check values (heads P2 and P3); its sources: Love's equation with
graded Gauss nodes and, agreeing to 1e-12, by cosine transforms; a generalised Love equation with layered kernel;
boundary elements. Strips, the isolated square and fits for squares are left to others.
"""

import numpy as np
import pytest
from numpy.polynomial.legendre import legval

from stackdb.fields import panels
from stackdb.fields.discs import solve
from stackdb.fields.kernel import INFINITE, FieldLayer, look
from stackdb.fields.planes import SQUARE_ERROR, equal_disc_diameter, plane_change
from stackdb.fields.quadrature import grid

EPS0 = 8.8541878188e-12
EX3 = [FieldLayer(1.1e-3, 7.0), FieldLayer(0.1e-3, 3.2), FieldLayer(0.15e-3, 3.0)]  # touched side first
A = 1e-3


def pair(separation, permittivity=1.0, tolerance=1e-7):
    return solve(
        cover=[FieldLayer(separation, permittivity)],
        pad_diameter_m=2 * A,
        finger_diameter_m=2 * A,
        around="alone",
        tolerance=tolerance,
    )


# C/(eps0 pi a^2/d) of two equal coaxial discs at d/a (check values, head P2, rows P2-L*)
LOVE = {
    0.01: 1.0241240233,
    0.02: 1.0440796533,
    0.05: 1.0970315493,
    0.1: 1.1755923194,
    0.2: 1.3179970351,
    0.3: 1.4513296914,
    0.4: 1.5799910655,
    0.5: 1.7058703024,
    0.6: 1.8299821720,
    0.7: 1.9529401858,
    0.8: 2.0751434210,
    1.0: 2.3182954426,
    1.5: 2.9248434184,
    2.0: 3.5345823284,
    3.0: 4.7674186040,
    4.0: 6.0137609924,
    5.0: 7.2684347183,
    10.0: 13.5920120084,
}


@pytest.mark.parametrize("ratio", LOVE)
def test_two_discs_hold_what_loves_equation_says(ratio):
    found = pair(ratio * A).pair_farad / (EPS0 * np.pi * A / ratio)
    assert found == pytest.approx(LOVE[ratio], rel=1e-9)  # the table is printed to 1e-10


def test_discs_far_apart_are_two_isolated_discs_in_series():
    # C/(4 eps0 a) at d/a = 100 (check values, head P2, expansion and exact value)
    assert pair(100 * A).pair_farad / (4 * EPS0 * A) == pytest.approx(1.006406556062, rel=1e-9)


def test_total_charge_of_two_discs_at_one_potential():
    # integral of f, Love's equation with + sign, d/a = 1 (check values, head P2); alone a disc has 8 eps0 a
    found = pair(A)
    own = found.self_touched_farad - found.pad_finger_farad
    assert own / (8 * EPS0 * A) == pytest.approx(0.6912070651, rel=1e-9)


# f(x) with + sign, d/a = 1: five digits printed by the NAG Library's example for d05abc (P2-N*)
@pytest.mark.parametrize(("x", "expected"), [(0.0, 0.65741), (0.5, 0.68318), (0.75, 0.71488), (1.0, 0.75572)])
def test_density_of_two_discs_at_one_potential(x, expected):
    nodes = grid(1.0, 40.0)
    disc = panels.basis(nodes, np.array([0.0, 1.0]), 16)
    matrix = panels.gram(disc, nodes.weight * 0.5 * np.exp(-nodes.k), 0.5, 0.0)  # 1/Y = (1 + exp(-kd))/2
    terms = np.linalg.solve(matrix, disc.charges) / (8 * EPS0)
    even = np.zeros(2 * len(terms))
    even[::2] = terms
    assert legval(x, even) == pytest.approx(expected, abs=6e-6)  # half the last digit printed, and 1e-6


# Kirchhoff 1877 and its next term: formula values P2-K*, P2-H*, and how far off head P2 finds them
@pytest.mark.parametrize(
    ("ratio", "formula", "off"),
    [
        (0.01, 1.02394482551862, -1.8e-4),
        (0.1, 1.16615469529821, -8.0e-3),
        (0.01, 1.02412374052973, -2.8e-7),
        (0.1, 1.17544767213898, -1.2e-4),
    ],
)
def test_edge_formulas_are_off_by_what_is_known(ratio, formula, off):
    found = pair(ratio * A).pair_farad / (EPS0 * np.pi * A / ratio)
    assert formula / found - 1 == pytest.approx(off, rel=0.05)  # the deviations are printed to two digits


# C/(eps_r eps0 pi a^2/d) of a disc on a grounded slab, air above (rows P3-D*)
SLAB = {
    (1.0, 0.05): 1.1755923194,
    (1.0, 0.1): 1.3179970351,
    (1.0, 0.2): 1.5799910655,
    (1.0, 0.5): 2.3182954426,
    (2.65, 0.05): 1.0969100795,
    (2.65, 0.1): 1.1809485508,
    (2.65, 0.2): 1.3408206512,
    (2.65, 0.5): 1.8100023591,
    (4.5, 0.05): 1.0759548006,
    (4.5, 0.1): 1.1445444298,
    (4.5, 0.2): 1.2777425303,
    (4.5, 0.5): 1.6780883486,
    (9.6, 0.05): 1.0595196146,
    (9.6, 0.1): 1.1160161244,
    (9.6, 0.2): 1.2284530031,
    (9.6, 0.5): 1.5757433642,
}


@pytest.mark.parametrize(("permittivity", "ratio"), SLAB)
def test_disc_on_a_grounded_slab(permittivity, ratio):
    found = solve(  # the finger is out of it: untouched, under a film of air
        cover=[FieldLayer(A, 1.0)],
        below=[FieldLayer(ratio * A, permittivity)],
        below_ending="ground",
        pad_diameter_m=2 * A,
        finger_diameter_m=A,
        around="alone",
        tolerance=1e-7,
    )
    unit = permittivity * EPS0 * np.pi * A / ratio
    assert found.self_untouched_farad / unit == pytest.approx(SLAB[permittivity, ratio], rel=1e-8)


# C/(eps0 pi a^2/d_eq) of a disc under EX3 with a grounded plane on top, 0.1 mm of eps 3.2 then air below (rows P3-F*)
@pytest.mark.parametrize(("radius_mm", "expected"), [(1, 2.5272336939), (2, 1.7543623317), (10, 1.1592263152)])
def test_layered_disc_under_a_grounded_plane(radius_mm, expected):
    a = 1e-3 * radius_mm
    found = solve(
        cover=EX3,
        below=[FieldLayer(0.1e-3, 3.2)],
        pad_diameter_m=2 * a,
        finger_diameter_m=2 * a,
        around="alone",
        tolerance=1e-7,
    )
    unit = EPS0 * np.pi * a**2 / 0.238392857142857e-3
    assert (found.self_untouched_farad + found.change_high_farad) / unit == pytest.approx(expected, rel=1e-8)


def test_disc_between_two_half_spaces():
    # P3-H: C = 4 (e1 + e2) eps0 a exactly; a layer so thick that what is beyond it counts for less than 1e-9
    found = solve(
        cover=[FieldLayer(A, 1.0)],
        below=[FieldLayer(1e10 * A, 7.0)],
        pad_diameter_m=2 * A,
        finger_diameter_m=A,
        around="alone",
        tolerance=1e-7,
    )
    assert found.self_untouched_farad / (EPS0 * A) == pytest.approx(32.0, rel=1e-9)


# k Y(k) of EX3 with its far face at ground [1/m] (rows P3-Y*)
@pytest.mark.parametrize(
    ("k", "expected"), [(100.0, 4211.185947274), (1000.0, 5592.836046065), (3000.0, 10908.62081334)]
)
def test_surface_admittance_of_a_grounded_stack(k, expected):
    seen = look(EX3[::-1], INFINITE, np.array([k]))
    assert k * seen.admittance[0].real == pytest.approx(expected, rel=1e-10)


# two equal square plates, C/(eps0 L^2/d) at d/L, by boundary elements (rows P2-SQ*)
SQUARES = {
    0.02: 1.0779608,
    0.1: 1.3057022,
    0.2: 1.5527569,
    0.5: 2.2364273,
    1.0: 3.3429843,
    2.0: 5.58089,
    5.0: 12.426346,
    10.0: 23.921369,
}


@pytest.mark.parametrize("ratio", SQUARES)
def test_disc_of_equal_area_stands_for_a_square_to_the_stated_error(ratio):
    side = 1e-3
    d = equal_disc_diameter(side)
    disc = solve(
        cover=[FieldLayer(ratio * side, 1.0)], pad_diameter_m=d, finger_diameter_m=d, around="alone"
    ).pair_farad
    excess = SQUARES[ratio] * EPS0 * side / ratio / disc - 1
    assert 0.0 < excess <= SQUARE_ERROR


def test_the_stated_error_of_squares_is_reached_and_not_idle():
    d = equal_disc_diameter(1e-3)
    disc = solve(cover=[FieldLayer(1e-3, 1.0)], pad_diameter_m=d, finger_diameter_m=d, around="alone").pair_farad
    assert SQUARES[1.0] * EPS0 * 1e-3 / disc - 1 > 0.95 * SQUARE_ERROR


@pytest.mark.parametrize(
    ("side", "thickness", "permittivity"), [(8e-3, 3e-3, 7.0), (5e-3, 1e-3, 2.8), (10e-3, 8e-3, 4.0)]
)
def test_square_under_a_plane_against_the_integral_in_two_dimensions(side, thickness, permittivity):
    # int int eps0 k [Y_ground - Y_open] |P|^2 dkx dky/(2 pi)^2 as it stands, on a grid of Gauss panels in one quadrant
    x, w = np.polynomial.legendre.leggauss(24)
    edges = np.concatenate([[0.0], np.geomspace(0.02, 1.0, 6), np.linspace(1.0, 18.0, 40)[1:]]) / thickness
    middle, half = 0.5 * (edges[1:] + edges[:-1]), 0.5 * (edges[1:] - edges[:-1])
    k1, w1 = (middle[:, None] + half[:, None] * x).ravel(), (half[:, None] * w).ravel()
    k = np.hypot(k1[:, None], k1[None, :])
    t = np.tanh(k * thickness)
    added = permittivity / t - permittivity * (1 + permittivity * t) / (permittivity + t)
    outline = (side * np.sinc(k1 * side / (2 * np.pi))) ** 2 * w1
    expected = 4 * EPS0 / (2 * np.pi) ** 2 * (outline @ (k * added) @ outline)
    found = plane_change(cover=[FieldLayer(thickness, permittivity)], pad_side_m=side, around="grounded")
    assert found.real == pytest.approx(expected, rel=1e-6)  # the grid ends at k = 18/T in each direction
    assert found.imag == 0.0
