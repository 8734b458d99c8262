"""Series sums against figures seen in print: textbook and examination answers. Expected values are literals with their source."""

from __future__ import annotations

import math

import pytest

from stackdb.stack.series import Slab, series_gap

EPS0_PRINTED = 8.85e-12  # the textbooks' rounded constant


def ratio(layers: list[tuple[float, float]]) -> float:
    """C over the empty capacitor of the same separation: eps_eff of layers (permittivity, thickness)."""
    return series_gap([Slab(t, e) for e, t in layers]).effective_permittivity


def test_two_slabs_of_a_third_and_two_thirds():
    # examination pool: C0 = 9 pF filled by k 3 over d/3 and k 6 over 2d/3 gives 40.5 pF (seen in print, P1-T03)
    assert 9.0 * ratio([(3, 1 / 3), (6, 2 / 3)]) == pytest.approx(40.5, rel=1e-12)


def test_half_a_gap_filled():
    # examination pool: half the gap filled with K = 4 gives C/C0 = 1.6 (P1-T04); K = 2 gives 4/3 (P1-T05)
    assert ratio([(1, 0.5), (4, 0.5)]) == pytest.approx(1.6, rel=1e-12)
    assert ratio([(1, 0.5), (2, 0.5)]) == pytest.approx(4 / 3, rel=1e-12)


def test_open_textbook_two_slab_energy():
    # OpenStax University Physics 2, module m58452: printed 0.185 uJ for 1.9 mm + 1.9 mm on 8 cm square at 86.0 V; that answer
    # needs permittivities 4.7 and 2.6 (P1-T02); three printed digits
    gap = series_gap([Slab(1.9e-3, 4.7), Slab(1.9e-3, 2.6)])
    energy = 0.5 * gap.capacitance_per_area * 0.08**2 * 86.0**2
    assert energy == pytest.approx(1.85e-7, rel=0.003)


def test_open_textbook_air_capacitors():
    # OpenStax University Physics 2, chapter Capacitance: 8.0 cm2 at 1.0 mm is 7.1 pF (P1-T12); 1 m2 at 1 mm is 8.85 nF (P1-T13)
    gap = series_gap([Slab(1e-3, 1.0)])
    assert gap.capacitance_per_area * 8e-4 == pytest.approx(7.1e-12, rel=0.008)
    assert gap.capacitance_per_area == pytest.approx(8.85e-9, rel=0.001)


def test_open_textbook_filled_capacitors():
    # same source: 50 cm2, 0.50 mm of Teflon (2.1) at 200 V holds 37 nC (P1-T15); 20.0 pF filled with 2.1 is 42 pF (P1-T20);
    # 8 pF with the gap halved and filled with 6 is 96 pF (P1-T19); 45.0 V falling to 11.5 V means 3.91 (P1-T10)
    gap = series_gap([Slab(0.5e-3, 2.1)])
    assert gap.capacitance_per_area * 5e-3 * 200.0 == pytest.approx(3.7e-8, rel=0.008)
    assert 20.0 * ratio([(2.1, 1.0)]) == pytest.approx(42.0, rel=1e-12)
    assert 8.0 * ratio([(6.0, 1.0)]) / 0.5 == pytest.approx(96.0, rel=1e-12)
    assert pytest.approx(3.91, rel=0.002) == 45.0 / 11.5


def test_dielectric_over_part_of_the_area_is_parallel():
    # same source: 45.0 V with kappa 45.0/11.5 over a third of the area becomes 22.8 V (P1-T11)
    from stackdb.dielectrics.mixing import parallel

    kappa = 45.0 / 11.5
    assert 45.0 / parallel(1 / 3, kappa, 1.0).real == pytest.approx(22.8, rel=0.003)


def test_least_area_of_a_capacitor():
    # same source: 1.25 nF, permittivity 3.60, 1.60e7 V/m, 5.5 kV need 0.0135 m2 (P1-T18)
    gap = series_gap([Slab(5.5e3 / 1.6e7, 3.6)])
    assert 1.25e-9 / gap.capacitance_per_area == pytest.approx(0.0135, rel=0.003)


def test_the_widespread_wrong_answer_is_not_ours():
    # the misprinted rule k1 k2 (d1 + d2)/(k1 d1 + k2 d2) gives 2.571 for k 2, d 1 and k 6, d 2; right is 3.6 (clay6.com/qa/75119)
    assert ratio([(2, 1.0), (6, 2.0)]) == pytest.approx(3.6, rel=1e-12)


def test_areal_limit_against_retransmission():
    # US 2011/0100727 A1, abstract: 0.0305 pF/mm2, which is a gap of 0.2903 mm (three printed digits)
    gap = series_gap([Slab(0.2903e-3, 1.0)])
    assert gap.capacitance_per_area == pytest.approx(0.0305e-12 / 1e-6, rel=2e-3)


def test_two_layers_of_very_unlike_permittivity():
    # forum thread on effective capacitance (electronicspoint 33009): equal layers, e1 = 999 e2, give 1.998 e2, not 500 e2
    assert ratio([(999.0, 1.0), (1.0, 1.0)]) == pytest.approx(1.998, rel=1e-9)


@pytest.mark.parametrize(
    ("what", "got", "expected", "rel"),
    [
        # common practice: facts of the trade
        ("8.854 fF/mm2 at a gap of 1 mm", series_gap([Slab(1e-3, 1.0)]).capacitance_per_area * 1e9, 8.854, 1e-4),
        ("0.1 mm of air costs 0.7 mm of glass of 7", series_gap([Slab(0.1e-3, 1.0)]).gap_m * 7.0, 0.7e-3, 1e-12),
    ],
)
def test_trade_facts(what, got, expected, rel):
    assert got == pytest.approx(expected, rel=rel), what


def test_two_hand_sized_foils():
    # common practice: two hand-sized foils with a plastic sheet between come to a few nanofarads
    hand_m2 = 0.10 * 0.18
    farad = series_gap([Slab(0.1e-3, 3.0)]).capacitance_per_area * hand_m2
    assert 1e-9 < farad < 10e-9
    assert math.isfinite(farad)
