"""Corners, first order and Monte Carlo: against analytic moments, against each other, against ``uncertainties``."""

from __future__ import annotations

import json
import math
import os
import signal
import subprocess
import sys
import time

import pytest

from stackdb.evidence.judge import Conditions
from stackdb.quantities import EPS0, Span
from stackdb.stack import firstorder
from stackdb.stack.resolve import ResolvedLayer, ResolvedStack
from stackdb.stack.series import Slab, series_gap
from stackdb.studies import montecarlo
from stackdb.studies.compose import resolved
from stackdb.studies.tolerance import corners_of, first_order, tolerance

# 0.15 mm +-0.02 (3.0 +-0.3), 0.10 mm +-0.01 (3.2 +-0.2), 1.1 mm +-0.1 (7.0 +-0.4)
LIMITS = "a 0.15mm tol=0.02mm eps=3.0+-0.3 / f 0.10mm tol=0.01mm eps=3.2+-0.2 / g 1.1mm tol=0.1mm eps=7.0+-0.4"


def test_worst_case_corners_of_the_gap():
    gap = corners_of(resolved(LIMITS).stack)[0]
    assert gap.low * 1e3 == pytest.approx(0.20099966276437, rel=1e-11)  # P8-04
    assert gap.high * 1e3 == pytest.approx(0.28144781144781, rel=1e-11)  # P8-05


def test_corners_of_the_effective_permittivity_by_trying_them_all():
    from itertools import product

    stack = resolved(LIMITS).stack
    found = corners_of(stack)[2]
    tried = []
    for choice in product((0, 1), repeat=6):
        t = [(x.thickness.low, x.thickness.high)[c] for x, c in zip(stack.layers, choice[:3], strict=True)]
        e = [(x.permittivity.low, x.permittivity.high)[c] for x, c in zip(stack.layers, choice[3:], strict=True)]
        tried.append(sum(t) / sum(a / b for a, b in zip(t, e, strict=True)))
    assert (found.low, found.high) == pytest.approx((min(tried), max(tried)), rel=1e-12)


def _layer(number: int, name: str, t: Span, e: Span) -> ResolvedLayer:
    return ResolvedLayer(
        number, name, None, t, True, None, e, None, None, None, "no", 1e5, 0.9, None, "given", (), (), None
    )


def _stack(layers: list[ResolvedLayer]) -> ResolvedStack:
    series = series_gap([Slab(x.thickness.value, x.permittivity.value) for x in layers])
    return ResolvedStack(tuple(layers), Conditions(), 0.9, series)


def test_first_order_against_uncertainties_with_shared_variables():
    from uncertainties import ufloat

    shared = Span(3.3, 3.0, 3.6)
    glass = Span(7.0, 6.6, 7.4)
    stack = _stack(
        [
            _layer(1, "glass", Span(1.8e-3, 1.7e-3, 1.9e-3), glass),
            _layer(2, "bond", Span(150e-6, 135e-6, 165e-6), shared),
            _layer(3, "bond", Span(100e-6, 90e-6, 110e-6), shared),
        ]
    )
    first = first_order(stack, firstorder.gap_form(stack))
    one, two, three = stack.layers
    eps_bond = ufloat(3.3, 3.3 * two.permittivity_u)
    eps_glass = ufloat(7.0, 7.0 * one.permittivity_u)
    t = [ufloat(x.thickness.value, x.thickness.value * x.thickness_u) for x in stack.layers]
    gap = t[0] / eps_glass + t[1] / eps_bond + t[2] / eps_bond
    assert first.value == pytest.approx(gap.nominal_value, rel=1e-12)
    assert first.standard_uncertainty == pytest.approx(gap.std_dev, rel=1e-9)
    effective = sum(t) / gap
    form = firstorder.permittivity_form(stack)
    assert first_order(stack, form).standard_uncertainty == pytest.approx(effective.std_dev, rel=1e-9)
    assert sum(c.share for c in first.contributions) == pytest.approx(1.0)
    assert three.error_name == two.error_name


def test_rectangular_limits_to_standard_uncertainty():
    # P8-06: rectangular half-widths of thickness and permittivity give 0.011071577257667 mm
    parts = []
    for t, u_t, e, u_e in ((0.15, 0.02, 3.0, 0.3), (0.10, 0.01, 3.2, 0.2), (1.1, 0.1, 7.0, 0.4)):
        parts += [(u_t / e) ** 2 / 3, (t * u_e / e**2) ** 2 / 3]
    assert math.sqrt(sum(parts)) == pytest.approx(0.011071577257667, rel=1e-11)
    stack = resolved(LIMITS).stack
    shares = firstorder.shares(stack.layers)
    for layer, (u_t, t) in zip(stack.layers, ((0.02, 0.15), (0.01, 0.10), (0.1, 1.1)), strict=True):
        assert layer.thickness_u == pytest.approx(u_t / t / math.sqrt(3), rel=1e-12)
    assert sum(shares) == pytest.approx(1.0)


def test_monte_carlo_meets_analytic_moments():
    # one layer, permittivity rectangular 3.0 +-0.3 sqrt 3: mean of 1/eps is 0.33672798313651 (P8-07)
    half = 0.3 * math.sqrt(3.0)
    layer = _layer(1, "x", Span(1e-3, 1e-3, 1e-3), Span(3.0, 3.0 - half, 3.0 + half))
    drawn = montecarlo.run(_stack([layer]), samples=400_000, seed=7, level=0.9, permittivity_shape="rectangular")
    # 400,000 samples of relative spread 0.1: four standard errors are 6e-4
    assert drawn.gap_m.mean / 1e-3 == pytest.approx(0.33672798313651, rel=6e-4)
    assert drawn.capacitance_per_area.mean == pytest.approx(EPS0 * 3.0 / 1e-3, rel=6e-4)


@pytest.mark.parametrize(("shape", "spread"), [("rectangular", 1 / math.sqrt(3)), ("triangular", 1 / math.sqrt(6))])
def test_shapes_have_their_spread(shape, spread):
    import numpy as np

    drawn = montecarlo.draw(np.random.default_rng(3), montecarlo.Input(1.0, 0.9, 1.1, 0.1, shape), 200_000)
    # the spread of 200,000 draws is known to 0.3 % (four standard errors of a light-tailed shape: 0.5 %)
    assert float(drawn.std()) == pytest.approx(0.1 * spread, rel=6e-3)
    assert drawn.min() >= 0.9
    assert drawn.max() <= 1.1


def test_monte_carlo_tends_to_the_worst_case():
    result = tolerance("a 1mm tol=0.1mm eps=3", samples=200_000, level=0.999)
    corners = result.gap.corners
    assert corners.low <= result.gap.drawn.low < corners.low * 1.01
    assert corners.high * 0.99 < result.gap.drawn.high <= corners.high


def test_first_order_says_when_it_is_off():
    wide = tolerance("a 1mm eps=2..20 / b 0.1mm eps=3", samples=50_000)
    assert any(w.code == "first-order-off" for w in wide.warnings) or wide.gap.span.low > 0
    calm = tolerance("a 1mm tol=0.02mm eps=3.0+-0.05", samples=50_000)
    assert not [w for w in calm.warnings if w.code == "first-order-off"]


def test_seeded_and_bounded(stackdb):
    arguments = ("tolerance", "soda-lime-glass 3mm / acrylic-oca 175um", "--samples", "20000", "--seed", "5", "--json")
    assert stackdb(*arguments).out == stackdb(*arguments).out
    body = json.loads(stackdb(*arguments, "--max-gap", "0.5mm").out)
    share = body["air_equivalent_gap_m"]["monte_carlo"]["yield"]
    assert 0.0 <= share <= 1.0
    assert {c["name"] for c in body["climate"]} == {"cold", "hot", "wet"}


def test_interrupted_ends_with_what_is_done():
    environment = {**os.environ, "COLUMNS": "80"}
    process = subprocess.Popen(
        [
            sys.executable,
            "-m",
            "stackdb",
            "tolerance",
            "soda-lime-glass 3mm / pet-film 125um",
            "--samples",
            "5000000000",
            "--json",
        ],
        stdout=subprocess.PIPE,
        stderr=subprocess.PIPE,
        env=environment,
    )
    time.sleep(4.0)
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=60)
    assert process.returncode == 130
    assert b"Traceback" not in err
    assert json.loads(out)["interrupted"] is True


def test_a_typed_limit_is_never_passed():
    stack = resolved("a 1mm tol=0.1mm eps=3 / b 1mm tol=0.1mm eps=5").stack
    span = firstorder.gap_span(stack, 0.999)
    low, high = firstorder.gap_corners(stack)
    assert low <= span.low <= span.value <= span.high <= high
