"""Walk 1: Brindlemoor Controls swaps glass for acrylic, late. Inputs of the scenario; answers to the last digit shown."""

from __future__ import annotations

import json
from math import pi

import pytest

from stackdb.quantities import EPS0

GLASS = "cover 3.000mm eps=7.0 / bond 0.175mm eps=3.5"
BROCHURE = "cover 3.000mm eps=3.6 / bond 0.175mm eps=3.5"
ACRYLIC = "cover 3.000mm eps=2.8 / bond 0.175mm eps=3.5"
DISC = pi * (4e-3) ** 2


def gap(stackdb, text):
    return json.loads(stackdb("compose", text, "--json").out)["air_equivalent_gap_m"]["value"]


def test_both_gaps(stackdb):
    body = json.loads(stackdb("compose", GLASS, "--json").out)
    assert body["air_equivalent_gap_m"]["value"] * 1e3 == pytest.approx(0.4786, abs=5e-5)
    assert body["effective_permittivity"]["value"] == pytest.approx(6.634, abs=5e-4)
    area = body["capacitance_per_area_farad_per_m2"]["value"]
    assert area * 1e9 == pytest.approx(18.50, abs=5e-3)
    assert area * DISC * 1e12 == pytest.approx(0.930, abs=5e-4)
    assert gap(stackdb, BROCHURE) * 1e3 == pytest.approx(0.8833, abs=5e-5)
    new = json.loads(stackdb("compose", ACRYLIC, "--json").out)
    assert new["air_equivalent_gap_m"]["value"] * 1e3 == pytest.approx(1.1214, abs=5e-5)
    assert new["effective_permittivity"]["value"] == pytest.approx(2.831, abs=5e-4)
    assert new["capacitance_per_area_farad_per_m2"]["value"] * DISC * 1e12 == pytest.approx(0.397, abs=5e-4)


def test_both_ratios_and_the_wrong_forecast(stackdb):
    body = json.loads(stackdb("compare", GLASS, ACRYLIC, BROCHURE, "--json").out)
    ratios = [s["gap_ratio"]["value"] for s in body["stacks"]]
    assert ratios[1] == pytest.approx(0.427, abs=5e-4)
    assert ratios[2] == pytest.approx(0.542, abs=5e-4)
    assert 100 * (ratios[2] / ratios[1] - 1) == pytest.approx(27, abs=0.5)
    assert body["distinguishable"] is True


def test_iso_gap_thickness_and_the_option(stackdb):
    target = f"{gap(stackdb, GLASS) * 1e3:.9f}mm"
    body = json.loads(stackdb("size", ACRYLIC, "--layer", "1", "--gap", target, "--json").out)
    assert body["thickness_m"]["value"] * 1e3 == pytest.approx(1.20, abs=5e-3)
    assert any("equal gap is not equal signal" in w["text"] for w in body["warnings"])
    option = gap(stackdb, "cover 1.5mm eps=2.8 / bond 0.175mm eps=3.5")
    assert gap(stackdb, GLASS) / option == pytest.approx(0.817, abs=5e-4)


def test_cast_sheet_tolerance_from_its_standard(stackdb):
    from stackdb.catalogue import open_catalogue
    from stackdb.stack.resolve import market_limits

    with open_catalogue() as catalogue:
        (low, high), source = market_limits(catalogue.thicknesses("pmma-cast"), 3e-3)
        assert (low * 1e3, high * 1e3) == pytest.approx((2.30, 3.70), abs=1e-9)  # ISO 7823-1: 0.4 mm + 0.1 t
        assert catalogue.sources([source])[0].kind in ("supplier-sheet", "standard", "web")
    nominal = gap(stackdb, ACRYLIC)
    corners = [gap(stackdb, f"cover {t}mm eps=2.8 / bond 0.175mm eps=3.5") for t in (2.3, 3.7)]
    assert 100 * (nominal / corners[0] - 1) == pytest.approx(29, abs=0.5)
    assert 100 * (1 - nominal / corners[1]) == pytest.approx(18, abs=0.5)
    assert gap(stackdb, GLASS) / corners[1] == pytest.approx(0.349, abs=5e-4)
    body = json.loads(stackdb("tolerance", "cover 3mm tol=0.7mm eps=2.8 / bond 0.175mm eps=3.5", "--json").out)
    corner = body["air_equivalent_gap_m"]["corners"]
    assert (corner["low"], corner["high"]) == pytest.approx(tuple(corners), rel=1e-9)


def test_air_in_place_of_the_bond(stackdb):
    for cover, loss in (("cover 3mm eps=7.0", 24), ("cover 3mm eps=2.8", 12)):
        bonded, aired = gap(stackdb, f"{cover} / bond 0.175mm eps=3.5"), gap(stackdb, f"{cover} / tape 0.2mm eps=1")
        assert 100 * (1 - bonded / aired) == pytest.approx(loss, abs=0.5)


def test_the_change_note_refuses_the_mains_frequency_figure(stackdb):
    ran = stackdb(
        "change", "soda-lime-glass 3mm / acrylic-oca 175um", "pmma-cast 3mm / acrylic-oca 175um", "--freq", "250kHz",
        "--offered", "pmma-cast=3.6",
    )  # fmt: skip
    assert ran.status == 0
    text = " ".join(ran.out.split())
    assert "refused" in text
    assert "Test again" in text
    body = json.loads(
        stackdb(
            "change", "soda-lime-glass 3mm / acrylic-oca 175um", "pmma-cast 3mm / acrylic-oca 175um", "--freq", "250kHz",
            "--offered", "pmma-cast=3.6", "--json",
        ).out
    )  # fmt: skip
    assert body["rejected"][0]["value"] == 3.6
    assert body["test_again"]
    assert body["gap_corners_m"]["to"]["high"] > body["gap_corners_m"]["from"]["high"]
    assert EPS0 > 0
