"""Comparing and sizing."""

from __future__ import annotations

import json

import pytest


def test_shared_errors_cancel(stackdb):
    one = "soda-lime-glass 1.8mm tol=0.01mm / acrylic-oca 150um tol=1um"
    other = "soda-lime-glass 2.2mm tol=0.01mm / acrylic-oca 150um tol=1um"
    body = json.loads(stackdb("compare", one, other, "--json").out)
    ratio = body["stacks"][1]["gap_ratio"]
    own = body["stacks"][1]["air_equivalent_gap_m"]
    # the glass's permittivity error stands in both stacks: the ratio is known far better than either gap
    assert (ratio["high"] - ratio["low"]) / ratio["value"] < 0.4 * (own["high"] - own["low"]) / own["value"]
    assert body["distinguishable"] is True


def test_what_evidence_cannot_tell_apart(stackdb):
    body = json.loads(stackdb("compare", "soda-lime-glass 1.8mm", "alkali-aluminosilicate-glass 1.8mm", "--json").out)
    assert body["distinguishable"] is False
    assert body["differences"][0]["field"] == "material"


def test_signal_is_another_target_than_gap(stackdb):
    given = ("pmma-extruded 3mm / acrylic-oca 175um", "--layer", "1")
    sizes = ("--pad", "8mm", "--finger", "8mm", "--around", "grounded")
    signal = json.loads(stackdb("size", *given, *sizes, "--signal", "300fF", "--json").out)
    assert signal["target"]["kind"] == "signal"
    thickness = signal["thickness_m"]["value"]
    again = json.loads(
        stackdb("compose", f"pmma-extruded {thickness * 1e3:.6f}mm / acrylic-oca 175um", *sizes, "--json").out
    )
    assert again["field"]["change_farad"] == pytest.approx(300e-15, rel=1e-4)
    refused = stackdb("size", *given, "--signal", "300fF")
    assert refused.status == 2
    assert "--around" in refused.err


def test_an_empty_range_is_an_answer(stackdb, tmp_path):
    path = tmp_path / "front.toml"
    path.write_text(
        'format = 1\nlayers = """\nsoda-lime-glass 3mm\nacrylic-oca 150um\n"""\n'
        '[[constraints]]\nlayer = 1\nminimum-thickness = "2.8mm"\nrule = "impact"\nowner = "safety"\nclause = "4.2"\n'
    )
    body = json.loads(stackdb("size", str(path), "--layer", "1", "--gap", "0.3mm", "--json").out)
    assert body["reachable"] is False
    assert "empty" in body["reason"]
    assert "safety" in body["reason"]
    assert body["constraints"][0]["clause"] == "4.2"
    nothing = json.loads(stackdb("size", "a 1mm eps=3 / b 1mm eps=1", "--layer", "1", "--gap", "0.5mm", "--json").out)
    assert nothing["thickness_m"] is None
    assert "fill air gaps" in nothing["reason"]


def test_the_permittivity_a_layer_would_need(stackdb):
    body = json.loads(
        stackdb(
            "size", "a 1mm eps=3 / b 1mm eps=4", "--layer", "1", "--solve", "permittivity", "--gap", "0.45mm", "--json"
        ).out
    )
    assert body["permittivity"]["value"] == pytest.approx(5.0)


def test_a_ratio_refers_to_a_reference(stackdb):
    body = json.loads(
        stackdb("size", "a 1mm eps=3", "--layer", "1", "--ratio", "50%", "--reference", "a 1mm eps=3", "--json").out
    )
    assert body["thickness_m"]["value"] == pytest.approx(2e-3)
    assert stackdb("size", "a 1mm eps=3", "--layer", "1", "--ratio", "50%").status == 2


def test_market_sizes_stand_beside(stackdb):
    body = json.loads(
        stackdb("size", "pmma-extruded 3mm / acrylic-oca 175um", "--layer", "1", "--gap", "1mm", "--json").out
    )
    assert body["market"]
    assert all(m["source"] in body["sources"] for m in body["market"])
