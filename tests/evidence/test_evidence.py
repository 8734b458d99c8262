"""What the evidence does: moves, directions, humidity, grades, calibration."""

from __future__ import annotations

import math

import pytest

from stackdb.evidence import settings
from stackdb.evidence.calibration import calibrate, groups
from stackdb.evidence.judge import Conditions, judge_records
from stackdb.evidence.material import evidence_for
from stackdb.evidence.moves import LossCurve, Pair, frequency_move


@pytest.fixture(scope="module")
def left_out(catalogue):
    return calibrate(catalogue)


def test_the_binomial_interval_of_the_coverage_holds_nine_tenths(left_out):
    every = groups(left_out, 0.9)[0]
    assert every.figures >= 100
    assert every.coverage_low <= 0.90 <= every.coverage_high


def test_the_interval_score_is_pinned(left_out):
    by_name = {g.name: g for g in groups(left_out, 0.9)}
    # a change of data or settings moves it; a worse score needs its reason in the commit
    assert by_name["three or more sources"].interval_score < 0.55
    assert by_name["all"].interval_score < 1.05


def test_better_grades_are_narrower(left_out):
    widths = {g.name: g.median_half_width for g in groups(left_out, 0.9)}
    assert widths["grade strong"] < widths["grade fair"] < widths["grade weak"]


def test_the_loss_rule_costs_half_its_move():
    # tan d 0.02 level: ln eps falls by (2/pi) 0.02 ln 10 = 0.0293 a decade (local Kramers-Kronig)
    curve = LossCurve(((math.log(1e5), math.log(0.02)),), True)
    move = frequency_move((), curve, 0.01, source="a", from_hz=1e6, to_hz=1e5)
    assert move.shift == pytest.approx(2 / math.pi * 0.02 * math.log(10))
    assert move.uncertainty == pytest.approx(math.hypot(0.5 * move.shift, 0.006))
    assert move.basis == "loss"


def test_measured_slopes_serve_where_they_reach():
    pairs = (Pair(math.log(1e3), math.log(1e6), -0.01, "a"),)
    curve = LossCurve(((0.0, math.log(0.01)),), False)
    own = frequency_move(pairs, curve, 0.01, source="a", from_hz=1e3, to_hz=1e6)
    others = frequency_move(pairs, curve, 0.01, source="b", from_hz=1e3, to_hz=1e6)
    assert own.shift == others.shift == pytest.approx(-0.01 * math.log(1e3))
    assert own.uncertainty < others.uncertainty


def test_there_and_back_is_no_move():
    pairs = (Pair(math.log(1e3), math.log(1e5), -0.02, "a"),)
    curve = LossCurve(((math.log(1e4), math.log(0.03)),), True)
    there = frequency_move(pairs, curve, 0.01, source="a", from_hz=100.0, to_hz=1e6)
    back = frequency_move(pairs, curve, 0.01, source="a", from_hz=1e6, to_hz=100.0)
    assert there.shift == pytest.approx(-back.shift)


def at(catalogue, key, **conditions):
    return evidence_for(catalogue, catalogue.material(key), Conditions(**conditions))


def test_sapphire_by_axis(catalogue):
    # CRC: 11.5 along the c axis, 9.4 across it
    through, across = (at(catalogue, "sapphire", direction=d).permittivity for d in ("through", "in-plane"))
    assert through.low < 11.54 < through.high
    assert across.low < 9.4 < across.high
    assert across.high < through.low
    swapped = [j for j in at(catalogue, "sapphire").recommended.judged if j.why_not == "misprint"]
    assert swapped


def test_polyamide_by_humidity(catalogue):
    dry, damp = (at(catalogue, "pa66", frequency_hz=1e6, humidity_pct=h).permittivity.value for h in (0.0, 50.0))
    assert dry < damp


def test_flagged_rows_are_shown_and_never_used(catalogue):
    warning = {"misprint", "upper-limit", "lower-limit", "other-substance", "unfit"}
    seen = 0
    for material in catalogue.materials():
        records = catalogue.permittivities(material.key)
        sources = {s.key: s for s in catalogue.sources({r.source for r in records})}
        for judged in judge_records(material, records, sources, Conditions()):
            if set((judged.record.flags or "").split()) & warning:
                seen += 1
                assert not judged.used
                assert judged.why_not
    assert seen > 20


def test_one_weak_source_says_so(catalogue):
    found = at(catalogue, "tac-film")
    assert found.confidence == "guess"
    assert found.why.startswith("1 source")


def test_the_settings_are_those_that_were_counted():
    assert settings.SPREAD == {"defined": 0.02, "graded": 0.045, "compounded": 0.13, "porous": 0.30}
    assert settings.PRIOR_SOURCES == 6.0
