"""Values computed without this code: series, Maxwell-Wagner, uncertainty, mixtures, films, charge sharing.

Ids are those of the project's collection of check values; the numbers were computed by independent scratch solvers.
"""

from __future__ import annotations

import cmath
import math

import pytest

from stackdb.dielectrics import mixing
from stackdb.fields import films
from stackdb.quantities import EPS0, Span
from stackdb.stack.series import Slab, complex_permittivity, series_gap
from stackdb.touch import readout

COVER = ((0.15e-3, 3.0, 0.02), (0.10e-3, 3.2, 0.015), (1.1e-3, 7.0, 0.005))


def slabs(loss: bool = False, extra: tuple[tuple[float, float, float], ...] = ()) -> list[Slab]:
    return [
        Slab(t, complex_permittivity(permittivity=e, loss_tangent=d if loss else 0.0, frequency_hz=1e5))
        for t, e, d in (*COVER, *extra)
    ]


def test_effective_permittivity_and_areal_capacitance():
    gap = series_gap(slabs())
    assert gap.effective_permittivity == pytest.approx(5.66292134831461, rel=1e-12)  # P1-02
    assert gap.capacitance_per_area == pytest.approx(3.7141162386e-08, rel=1e-9)  # P1-03
    with_air = series_gap(slabs(extra=((0.05e-3, 1.00059, 0.0),)))
    assert with_air.effective_permittivity == pytest.approx(4.85498549267907, rel=1e-12)  # P1-05


def test_loss_goes_through_the_same_sum():
    gap = series_gap(slabs(loss=True))
    # P1-06 is Re(T/g*); the loss tangent of the whole is P1-08
    assert gap.effective_permittivity == pytest.approx(5.663150280342, rel=1e-11)
    assert gap.loss_tangent == pytest.approx(0.0094559545467857, rel=1e-11)


MAXWELL_WAGNER = {
    # id: (eps, sigma, d) twice, frequency, eps', eps''
    "P1-MW1": ((3.0, 1e-9, 0.5e-3), (6.0, 1e-7, 0.5e-3), 201.720606756, None, 1.11792961474),
    "P1-MW2": ((2.0, 1e-8, 1e-3), (4.0, 1e-6, 2e-3), 2291.82570547, 4.38465974625, 1.61534025375),
    "P1-MW3": ((7.0, 1e-10, 1e-3), (80.0, 1e-3, 1e-4), 222739.823446, 7.6666046318, 0.0334040912019),
}


@pytest.mark.parametrize("name", MAXWELL_WAGNER)
def test_maxwell_wagner_comes_out_of_the_sum(name):
    one, two, frequency, real, imaginary = MAXWELL_WAGNER[name]
    layers = [
        Slab(d, complex_permittivity(permittivity=e, conductivity_s_per_m=s, frequency_hz=frequency))
        for e, s, d in (one, two)
    ]
    gap = series_gap(layers)
    effective = gap.thickness_m / gap.complex_gap_m
    if real is not None:
        assert effective.real == pytest.approx(real, rel=1e-9)
    assert -effective.imag == pytest.approx(imaginary, rel=1e-9)


MIXTURES = {
    # matrix, inclusion, fraction: values by rule (P5)
    (3.0, 1.0, 0.3): {
        "parallel": 2.4, "maxwell-garnett": 2.289473684211, "bruggeman-hanai": 2.277064123179,
        "lichtenecker": 2.157669279975, "looyenga": 2.245902134754,
    },
    (2.5, 80.0, 0.05): {
        "series": 2.627257799672, "parallel": 6.375, "maxwell-garnett": 2.858243451464, "bruggeman": 2.891895546991,
        "lichtenecker": 2.973017787507, "looyenga": 3.407448336661, "square-root": 3.799752884254,
    },
    (2.5, 80.0, 0.3): {
        "series": 3.52422907489, "parallel": 25.75, "maxwell-garnett": 5.323886639676, "bruggeman-hanai": 6.274670764629,
        "lichtenecker": 7.071067811865, "looyenga": 11.28022088819, "square-root": 14.36469696197,
    },
    (3.5, 9.0, 0.2): {
        "parallel": 4.6, "maxwell-garnett": 4.275167785235, "bruggeman": 4.306912229068, "bruggeman-hanai": 4.290834796382,
        "lichtenecker": 4.227688079203, "looyenga": 4.335948794222, "square-root": 4.395995545651,
    },
}  # fmt: skip


@pytest.mark.parametrize("case", MIXTURES)
def test_mixing_rules(case):
    matrix, inclusion, fraction = case
    for rule, expected in MIXTURES[case].items():
        found = mixing.RULES[rule](fraction, inclusion, matrix)
        assert complex(found).real == pytest.approx(expected, rel=1e-10), rule


@pytest.mark.parametrize(
    ("case", "low", "high"),
    [
        ((3.0, 1.0, 0.3), 2.166666666667, 2.289473684211),
        ((2.5, 80.0, 0.05), 2.858243451464, 5.166754896771),
        ((3.5, 9.0, 0.2), 4.275167785235, 4.413127413127),
    ],
)
def test_isotropic_bounds(case, low, high):
    matrix, inclusion, fraction = case
    assert tuple(mixing.hashin_shtrikman_bounds(fraction, inclusion, matrix)) == pytest.approx((low, high), rel=1e-10)


def test_charge_sharing():
    # 10 pF into 10 nF at half supply: 693.4937 transfers, 694 whole; 10.5 pF: 660.4867
    given = {"threshold_share": 0.5, "integrator_farad": 10e-9}
    assert readout.transfers_to(unknown_farad=10e-12, **given) == pytest.approx(693.4937, abs=5e-5)
    assert readout.count_to(unknown_farad=10e-12, **given) == 694
    assert readout.transfers_to(unknown_farad=10.5e-12, **given) == pytest.approx(660.4867, abs=5e-5)
    change = readout.count_change(unknown_farad=10e-12, change_farad=0.5e-12, **given)
    assert change == pytest.approx(660.4867 - 693.4937, abs=1e-4)


def test_diffusion_length_is_root_two_smear_lengths():
    # delta = sqrt(2/(w Rs C)) of the uniform RC line; the smear length is 1/sqrt(w Rs C)
    from stackdb.touch.conduction import smear_length

    w, sheet, area = 2 * math.pi * 2e5, 1e6, 2.5e-7
    assert smear_length(frequency_hz=2e5, sheet_ohm=sheet, capacitance_per_area=area) * math.sqrt(2) == pytest.approx(
        math.sqrt(2.0 / (w * sheet * area)), rel=1e-12
    )


def test_closed_film_forms_meet_their_limits():
    for ga in (0.3 * cmath.exp(0.25j * math.pi), 2.0 * cmath.exp(0.25j * math.pi)):
        # a very wide free disc is an unbounded film, and so is a wide film with its rim at ground
        assert films.free_disc_film(ga, 60 * ga) == pytest.approx(films.unbounded_film(ga), rel=1e-6)
        assert films.grounded_rim_film(ga, 60 * ga) == pytest.approx(films.unbounded_film(ga), rel=1e-6)
        assert films.free_disc_film(ga, 0.9 * ga) == 0
    # a perfect conductor: a free disc of radius b looks like 1 - a^2/b^2 of a touch
    small = 1e-4 * cmath.exp(0.25j * math.pi)
    assert films.free_disc_film(small, 2 * small).real == pytest.approx(0.75, rel=1e-4)


def test_combined_uncertainty_of_the_gap():
    """P8-01 to P8-05: d_eq of 0.15 mm (3.0), 0.10 mm (3.2), 1.1 mm (7.0) with u of thickness and permittivity."""
    from stackdb.stack.firstorder import Form, spread

    thickness = {"a": (0.15, 0.01), "f": (0.10, 0.004), "g": (1.1, 0.05)}
    permittivity = {"a": (3.0, 0.15), "f": (3.2, 0.1), "g": (7.0, 0.2)}
    gap = sum(thickness[k][0] / permittivity[k][0] for k in thickness)
    shares = {k: thickness[k][0] / permittivity[k][0] / gap for k in thickness}
    form = Form(gap, {("t", k): s for k, s in shares.items()} | {("e", k): -s for k, s in shares.items()})
    inputs = {("t", k): u / v for k, (v, u) in thickness.items()} | {
        ("e", k): u / v for k, (v, u) in permittivity.items()
    }
    # contributions in mm: adhesive t 0.003333, e 0.002500; film t 0.001250, e 0.000977; glass t 0.007143, e 0.004490: 0.009542
    assert gap * spread(form, inputs) == pytest.approx(0.009542, abs=1e-6)


def test_constants():
    assert EPS0 == 8.8541878188e-12  # CODATA 2022
    assert Span(1.0, 0.5, 2.0)._fields == ("value", "low", "high")
