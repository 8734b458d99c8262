"""Walks with known answers: invented companies, permittivities as inputs; compared to the last digit shown."""

from __future__ import annotations

import json
from math import pi

import pytest

from stackdb.quantities import EPS0
from stackdb.touch.returnpath import ReturnPath, in_series

MEDICAL = "glass 1.80mm eps=7.0 / bond 0.15mm eps=3.5"
NITRILE, LATEX, AIR = "nitrile 0.10mm eps=6.0", "latex 0.20mm eps=2.8", "trapped 0.10mm eps=1"
DISC = pi * (4e-3) ** 2


def composed(stackdb, *arguments):
    return json.loads(stackdb("compose", *arguments, "--json").out)


def test_tessavane_bare_and_gloved(stackdb):
    body = composed(stackdb, MEDICAL)
    assert body["air_equivalent_gap_m"]["value"] * 1e3 == pytest.approx(0.3000, abs=5e-5)
    assert body["effective_permittivity"]["value"] == pytest.approx(6.500, abs=5e-4)
    area = body["capacitance_per_area_farad_per_m2"]["value"]
    assert area * 1e9 == pytest.approx(29.51, abs=5e-3)
    assert area * DISC * 1e12 == pytest.approx(1.484, abs=5e-4)
    for glove, ratio in ((NITRILE, 0.947), (f"{NITRILE} / {LATEX}", 0.773), (f"{NITRILE} / {LATEX} / {AIR}", 0.615)):
        worn = composed(stackdb, f"{glove} / {MEDICAL}", "--reference", MEDICAL)
        assert worn["gap_ratio"]["value"] == pytest.approx(ratio, abs=5e-4)


@pytest.mark.parametrize(
    ("device", "picofarad"), [(float("inf"), 1.462), (30e-12, 1.394), (10e-12, 1.275), (3e-12, 0.983)]
)
def test_tessavane_return_path(device, picofarad):
    plate = EPS0 / 0.3e-3 * DISC
    assert in_series(plate, ReturnPath(100e-12, device)) * 1e12 == pytest.approx(picofarad, abs=6e-4)


def test_tessavane_palm():
    plate = EPS0 / 0.3e-3 * 2500e-6
    assert plate * 1e12 == pytest.approx(73.8, abs=0.05)
    assert in_series(plate, ReturnPath(100e-12, 10e-12)) * 1e12 == pytest.approx(8.1, abs=0.05)


def test_tessavane_retransmission_guard(stackdb):
    # 30.5 fF/mm2 (US 2011/0100727 A1): the thinnest glass that keeps it over the 0.15 mm bond is 1.73 mm
    body = json.loads(stackdb("size", MEDICAL, "--layer", "1", "--areal", "30.5fF/mm2", "--json").out)
    assert body["thickness_m"]["value"] * 1e3 == pytest.approx(1.73, abs=6e-3)
    thin = json.loads(stackdb("touch", "glass 1.5mm eps=7 / bond 0.15mm eps=3.5", "--device", "10pF", "--json").out)
    assert any(w["code"] == "retransmission" for w in thin["warnings"])


def test_tessavane_saline_is_no_layer(stackdb):
    case = "saline film: saline 0.5mm sigma=1.5S/m"
    body = json.loads(stackdb("touch", MEDICAL, "--case", case, "--json").out)
    film = body["cases"][0]
    assert film["air_equivalent_gap_m"] is None
    assert film["film"]["sheet_ohm"] == pytest.approx(1333, abs=1)  # 1/(1.5 S/m 0.5 mm): about 1.3 kohm/sq
    assert "conductor" in film["verdicts"]["conduction"]["text"]
    from stackdb.dielectrics.relaxation import relaxation_frequency

    assert relaxation_frequency(permittivity=79.0, conductivity_s_per_m=1.5) == pytest.approx(340e6, rel=0.02)


HOB = "ceramic 4.00mm tol=0.20mm eps=6.5 / ink 0.024mm eps=4.0{} / bond 0.13mm eps=3.5"


def test_quillmarsh_gap_and_corners(stackdb):
    body = composed(stackdb, HOB.format(""), "--freq", "200kHz")
    gap = body["air_equivalent_gap_m"]["value"]
    assert gap * 1e3 == pytest.approx(0.6585, abs=5e-5)
    assert body["effective_permittivity"]["value"] == pytest.approx(6.308, abs=5e-4)
    electrode = pi * (6e-3) ** 2
    assert EPS0 / gap * electrode * 1e12 == pytest.approx(1.521, abs=5e-4)
    step = 0.2e-3 / 6.5
    assert 100 * (gap / (gap - step) - 1) == pytest.approx(4.9, abs=0.05)
    assert 100 * (1 - gap / (gap + step)) == pytest.approx(4.5, abs=0.05)
    assert 100 * body["layers"][1]["share"] == pytest.approx(0.9, abs=0.05)


@pytest.mark.parametrize(
    ("rs", "millimetres", "state"),
    [("50kohm/sq", 7.9, "refused"), ("0.9Mohm/sq", 1.9, "caution"), ("200Mohm/sq", 0.13, "ok")],
)
def test_quillmarsh_ink_on_the_rear(stackdb, rs, millimetres, state):
    from stackdb.studies.compose import resolved
    from stackdb.touch.conduction import smear_of

    text = HOB.format(f" rs={rs}")
    found = resolved(text, frequency_hz=2e5).stack
    assert smear_of(found, found.layers[1]).length_m * 1e3 == pytest.approx(
        millimetres, abs=0.06 if millimetres > 1 else 6e-3
    )
    assert composed(stackdb, text, "--freq", "200kHz")["verdicts"]["conduction"]["state"] == state


def test_quillmarsh_ink_on_the_front():
    from stackdb.studies.compose import resolved
    from stackdb.touch.conduction import smear_of

    text = "ink 0.024mm eps=4.0 rs=0.9Mohm/sq / ceramic 4.00mm eps=6.5 / bond 0.13mm eps=3.5"
    found = resolved(text, frequency_hz=2e5).stack
    # the walk prints 8.0 mm; ceramic and bond below the print give 8.07 mm
    assert smear_of(found, found.layers[0]).length_m * 1e3 == pytest.approx(8.0, abs=0.1)


def test_one_table_shows_what_matters(stackdb):
    ran = stackdb("touch", "soda-lime-glass 1.8mm / acrylic-oca 150um", "--min-ratio", "20%")
    body = json.loads(stackdb("touch", "soda-lime-glass 1.8mm / acrylic-oca 150um", "--min-ratio", "20%", "--json").out)
    ratios = {c["name"]: c["gap_ratio"]["value"] for c in body["cases"] if c["gap_ratio"]}
    assert 0.90 < ratios["thin nitrile glove"] < 0.99
    trapped = ratios["nitrile glove with trapped air"]
    assert 1 - trapped > 2 * (1 - ratios["thin nitrile glove"])
    assert ratios["ski glove"] < 0.2
    assert ran.status == 1
    assert "misses" in ran.out
    assert "conductor, smears the touch over" in next(x for x in ran.out.splitlines() if "sea water" in x)
    assert "protective equipment" in ran.out
    assert all(len(line) <= 80 for line in ran.out.splitlines())


def test_an_insulating_glove_is_refused(stackdb):
    body = json.loads(
        stackdb("touch", "soda-lime-glass 1.8mm", "--case", "insulating-live-working-glove", "--json").out
    )
    case = body["cases"][0]
    assert case["air_equivalent_gap_m"] is None
    assert case["verdicts"]["dielectric"]["state"] == "refused"
    assert "protective equipment" in case["verdicts"]["dielectric"]["text"]


def test_counts_and_noise_scale_with_the_ratio(stackdb):
    body = json.loads(
        stackdb(
            "touch", MEDICAL, "--case", "bare", "--case", f"worn: {LATEX}", "--counts", "50", "--noise", "10", "--json"
        ).out
    )
    bare, worn = body["cases"]
    assert bare["counts"] == pytest.approx(50)
    assert bare["snr"] == pytest.approx(
        5.0
    )  # 500 counts/pF, 100 fF, 10 counts: 50 counts, 5:1 (ednasia glove article 2015)
    assert worn["counts"] == pytest.approx(50 * worn["gap_ratio"]["value"])


def test_sizes_give_a_signal_and_what_water_leaves(stackdb):
    arguments = ("touch", MEDICAL, "--pad", "8mm", "--finger", "8mm", "--around", "grounded", "--json")
    body = json.loads(stackdb(*arguments).out)
    bare = next(c for c in body["cases"] if c["name"] == "bare finger")
    assert bare["signal_farad"]["value"] > 0
    assert bare["field"]["around"] == "grounded"
    sea = next(c for c in body["cases"] if c["name"] == "film of sea water")
    assert sea["film"]["apparent_touch_real"] > 0.9
    assert sea["film"]["remaining_touch"] == pytest.approx(1 - sea["film"]["apparent_touch_real"])


@pytest.mark.parametrize(
    "more",
    [("--matrix",), ("--pad", "8mm", "--finger", "8mm", "--around", "grounded", "--counts", "500", "--noise", "10")],
)
def test_wide_tables_keep_to_the_screen(stackdb, more):
    ran = stackdb("touch", "soda-lime-glass 1.8mm / acrylic-oca 150um", *more)
    assert all(len(line) <= 80 for line in ran.out.splitlines())


def test_a_floating_device_loses_signal(stackdb):
    arguments = [
        "touch",
        MEDICAL,
        "--case",
        "bare",
        "--pad",
        "8mm",
        "--finger",
        "8mm",
        "--around",
        "grounded",
        "--json",
    ]
    earthed = json.loads(stackdb(*arguments).out)["cases"][0]["signal_farad"]["value"]
    floating = json.loads(stackdb(*arguments, "--device", "3pF").out)["cases"][0]["signal_farad"]["value"]
    assert floating < earthed


def test_fabrics_state_their_bounds_and_conductors_percolate(stackdb):
    body = composed(stackdb, "wool 2mm fill=20% / soda-lime-glass 1mm")
    assert "bounds" in body["layers"][0]["why"]
    low, value, high = (body["layers"][0]["permittivity"][k] for k in ("low", "value", "high"))
    assert 1.0 <= low < value < high < 4.1
    refused = stackdb("compose", "carbon-ink 10um fill=20% host=epoxy / soda-lime-glass 1mm")
    assert refused.status == 2
    assert "no mixing rule holds" in refused.err
