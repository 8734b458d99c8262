"""Evidence against general libraries and published figures."""

from __future__ import annotations

import math

import pytest
from scipy import stats

from stackdb.evidence.pool import Figure, between_sources, paule_mandel
from stackdb.evidence.quantiles import normal_quantile, student_quantile


@pytest.mark.parametrize("probability", [0.6, 0.9, 0.95, 0.975, 0.995, 0.9999])
@pytest.mark.parametrize("df", [1.0, 2.5, 6.0, 7.7, 30.0, 300.0])
def test_quantiles_against_scipy(probability, df):
    assert normal_quantile(probability) == pytest.approx(stats.norm.ppf(probability), rel=1e-12)
    assert student_quantile(probability, df) == pytest.approx(stats.t.ppf(probability, df), rel=1e-11)


def test_one_absurd_record_does_not_decide():
    # worked by hand beside the design: 3.2, 3.25, 3.3, 3.35 and 9.0 (u 0.025 each, spread 0.045) give 3.29 (2.91 to 3.73)
    figures = [Figure(math.log(x), 0.025) for x in (3.2, 3.25, 3.3, 3.35, 9.0)]
    pooled = between_sources(figures, 0.045, 0.90)
    got = [math.exp(pooled.mean + s * pooled.half_width) for s in (0, -1, 1)]
    assert got == pytest.approx([3.29, 2.91, 3.73], abs=0.006)
    assert pooled.weights[-1] < 0.4


def test_two_that_disagree_cannot_choose():
    # same source: 3.3 and 9.0 give a range of 2.9 to 10.2
    pooled = between_sources([Figure(math.log(3.3), 0.025), Figure(math.log(9.0), 0.025)], 0.045, 0.90)
    low, high = (math.exp(pooled.mean + s * pooled.half_width) for s in (-1, 1))
    assert (low, high) == pytest.approx((2.9, 10.2), abs=0.06)


def test_paule_mandel_solves_its_own_equation():
    # Paule and Mandel 1982: the weighted residuals sum to k - 1 at the root
    figures = [Figure(y, u) for y, u in ((1.0, 0.02), (1.1, 0.03), (1.3, 0.02), (0.9, 0.05))]
    tau2 = paule_mandel(figures, [1.0] * 4)
    weights = [1.0 / (f.u**2 + tau2) for f in figures]
    mean = sum(w * f.y for w, f in zip(weights, figures, strict=True)) / sum(weights)
    assert sum(w * (f.y - mean) ** 2 for w, f in zip(weights, figures, strict=True)) == pytest.approx(3.0, rel=1e-9)


# refractive indices at the sodium line: Malitson 1965 (fused silica), Sultanova 2009 (polymers), Malitson and Dodge 1972 (sapphire)
INDICES = {"fused-silica": 1.4584, "pmma": 1.4905, "polycarbonate": 1.5846, "polystyrene": 1.5915, "sapphire": 1.760}


@pytest.mark.parametrize("key", INDICES)
def test_the_index_floor_stands_on_open_data(catalogue, key):
    material = catalogue.material(key)
    assert material.refractive_index == pytest.approx(INDICES[key], abs=0.004)
    from stackdb.evidence.judge import Conditions
    from stackdb.evidence.material import evidence_for

    found = evidence_for(catalogue, material, Conditions())
    assert found.permittivity.low >= 0.95 * INDICES[key] ** 2
