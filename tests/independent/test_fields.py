"""Discs and the kernel against values computed without this code (collection heads P2 and P3; strip rows are for mutual sensing)."""

from __future__ import annotations

import numpy as np
import pytest

from stackdb.fields.discs import plane_change, solve
from stackdb.fields.kernel import INFINITE, FieldLayer, look
from stackdb.quantities import EPS0

# Love's equation, C/(4 eps0 a) of two equal discs at separation over radius kappa (independent Nystrom solution, 1e-12)
LOVE = {
    0.01: 80.4345126991, 0.02: 41.0009121086, 0.05: 17.2321312805, 0.1: 9.2330804855, 0.2: 5.1757622538, 0.3: 3.7995722470,
    0.4: 3.1023052025, 0.5: 2.6795748051, 0.6: 2.3954410615, 0.7: 2.1911937645, 0.8: 2.0372672896, 1.0: 1.8207849828,
    1.5: 1.5314444327, 2.0: 1.3880272346, 3.0: 1.2481072719, 4.0: 1.1807992096, 5.0: 1.1417230557, 10.0: 1.0675141268,
}  # fmt: skip


@pytest.mark.parametrize("kappa", LOVE)
def test_two_discs_by_loves_equation(kappa):
    a = 1e-3
    found = solve(
        cover=[FieldLayer(kappa * a, 1.0)],
        pad_diameter_m=2 * a,
        finger_diameter_m=2 * a,
        around="alone",
        tolerance=1e-11,
    )
    assert found.pair_farad / (4 * EPS0 * a) == pytest.approx(LOVE[kappa], rel=1e-8)


# disc on a grounded slab: C/(eps_r eps0 pi a^2/d) by permittivity and d/a
SLAB = {
    (1.0, 0.05): 1.1755923194, (1.0, 0.1): 1.3179970351, (1.0, 0.2): 1.5799910655, (1.0, 0.5): 2.3182954426,
    (2.65, 0.05): 1.0969100795, (2.65, 0.1): 1.1809485508, (2.65, 0.2): 1.3408206512, (2.65, 0.5): 1.8100023591,
    (4.5, 0.05): 1.0759548006, (4.5, 0.1): 1.1445444298, (4.5, 0.2): 1.2777425303, (4.5, 0.5): 1.6780883486,
    (9.6, 0.05): 1.0595196146, (9.6, 0.1): 1.1160161244, (9.6, 0.2): 1.2284530031, (9.6, 0.5): 1.5757433642,
}  # fmt: skip


@pytest.mark.parametrize("case", SLAB)
def test_a_disc_on_a_grounded_slab(case):
    eps, share = case
    a = 1e-3
    found = solve(
        cover=[FieldLayer(a, 1.0)],
        below=[FieldLayer(share * a, eps)],
        below_ending="ground",
        pad_diameter_m=2 * a,
        finger_diameter_m=2 * a,
        around="alone",
        tolerance=1e-11,
    )
    plate = eps * EPS0 * np.pi * a**2 / (share * a)
    assert found.self_untouched_farad / plate == pytest.approx(SLAB[case], rel=1e-8)


COVER = [FieldLayer(1.1e-3, 7.0), FieldLayer(0.1e-3, 3.2), FieldLayer(0.15e-3, 3.0)]  # touched side first
GAP = 0.238392857142857e-3


@pytest.mark.parametrize(("radius_mm", "expected"), [(1.0, 2.5272336939), (2.0, 1.7543623317), (10.0, 1.1592263152)])
def test_a_pad_under_a_grounded_plane(radius_mm, expected):
    # P3-F: the pad's whole capacitance with a grounded plane on the cover, 0.1 mm film of 3.2 then air below
    from stackdb.fields import discs

    problem = discs.Problem(
        tuple(reversed(COVER)), (FieldLayer(0.1e-3, 3.2),), "open", radius_mm * 1e-3, radius_mm * 1e-3, "alone", 0.0
    )
    untouched = solve(
        cover=COVER,
        below=[FieldLayer(0.1e-3, 3.2)],
        pad_diameter_m=2e-3 * radius_mm,
        finger_diameter_m=2e-3 * radius_mm,
        around="alone",
        tolerance=1e-10,
    ).self_untouched_farad
    whole = plane_change(problem) + untouched
    plate = EPS0 * np.pi * (radius_mm * 1e-3) ** 2 / GAP
    # two solves at their own orders; the plane's is fixed at 36 functions
    assert whole / plate == pytest.approx(expected, rel=1e-7)


@pytest.mark.parametrize(
    ("k", "expected"), [(100.0, 4211.185947274), (1000.0, 5592.836046065), (3000.0, 10908.62081334)]
)
def test_the_kernel_of_a_grounded_stack(k, expected):
    found = look(tuple(reversed(COVER)), INFINITE, np.array([k])).admittance[0].real
    assert k * found == pytest.approx(expected, rel=1e-10)


def test_a_disc_on_a_half_space():
    # C = 4 (e1 + e2) eps0 a exactly: 32 eps0 a for 7 below, 1 above
    a = 1e-3
    found = solve(
        cover=[FieldLayer(a, 1.0)],
        below=[FieldLayer(3000 * a, 7.0)],
        pad_diameter_m=2 * a,
        finger_diameter_m=2 * a,
        around="alone",
    )
    # a slab of 3000 radii stands for the half-space: a/3000 off at the most
    assert found.self_untouched_farad / (EPS0 * a) == pytest.approx(32.0, rel=4e-4)


def test_everyday_edge_factors():
    # 8 mm pad and finger on 3 mm of glass of 7, computed independently: three times too high among grounded neighbours,
    # a quarter too high among driven ones, right within a tenth alone; 1.2 mm of acrylic of 2.8 has the gap of that glass and
    # nearly twice its signal
    def change(cover, around):
        return solve(cover=cover, pad_diameter_m=8e-3, finger_diameter_m=8e-3, around=around)

    glass = [FieldLayer(3e-3, 7.0)]
    factors = {a: change(glass, a).edge_factor for a in ("grounded", "driven", "alone")}
    assert 1 / factors["grounded"] == pytest.approx(3.0, abs=0.35)
    assert 1 / factors["driven"] == pytest.approx(1.25, abs=0.02)
    assert factors["alone"] == pytest.approx(1.0, abs=0.1)
    acrylic = change([FieldLayer(1.2e-3, 2.8)], "grounded").change_farad
    assert 1.6 < acrylic / change(glass, "grounded").change_farad < 2.0
