"""What a user sees of ``compose``."""

from __future__ import annotations

import json
import os
import subprocess
import sys

import pytest

DESIGN = "soda-lime-glass 1.8mm tol=0.1mm / acrylic-oca 150um / pet-film 125um"


def test_the_main_job_fits_one_screen(stackdb):
    ran = stackdb("compose", DESIGN, "--freq", "250kHz")
    assert ran.status == 0
    lines = ran.out.splitlines()
    assert len(lines) <= 24
    assert max(map(len, lines)) <= 80
    for word in ("touch", "electrode", "Gap", "Dielectric", "Conduction", "Validity", "[1]"):
        assert word in ran.out


def test_the_words_of_a_stack_need_no_quotes(stackdb):
    quoted = stackdb("compose", DESIGN)
    assert stackdb("compose", *DESIGN.split()).out == quoted.out


def test_the_gap_follows_from_the_printed_layers(stackdb):
    body = json.loads(stackdb("compose", DESIGN, "--freq", "250kHz", "--json").out)
    again = sum(x["thickness_m"]["value"] / x["permittivity"]["value"] for x in body["layers"])
    # loss moves the gap in second order: tan^2 of a few percent
    assert body["air_equivalent_gap_m"]["value"] == pytest.approx(again, rel=2e-3)


def test_given_permittivities_give_the_exact_sum(stackdb):
    text = "a 1.8mm eps=7 / b 150um eps=3.5 / c 125um eps=3.2"
    body = json.loads(stackdb("compose", text, "--json").out)
    expected = 1.8e-3 / 7 + 150e-6 / 3.5 + 125e-6 / 3.2
    # no loss: the sum is exact but for rounding
    assert body["air_equivalent_gap_m"]["value"] == pytest.approx(expected, rel=1e-12)
    assert all(layer["given"] for layer in body["layers"])
    assert body["loss_tangent"] is None


def test_json_holds_the_contract(stackdb):
    body = json.loads(stackdb("compose", DESIGN, "--json").out)
    assert next(iter(body)) == "format"
    assert body["format"] == 1
    for key in (
        "conditions", "level", "layers", "thickness_m", "air_equivalent_gap_m", "cover_equivalent_gap_m",
        "effective_permittivity", "capacitance_per_area_farad_per_m2", "loss_tangent", "measure_next", "verdicts",
        "limits", "warnings", "sources", "catalogue",
    ):  # fmt: skip
        assert key in body
    for layer in body["layers"]:
        assert set(layer["sources"]) <= set(body["sources"])
        low, value, high = (layer["permittivity"][k] for k in ("low", "value", "high"))
        assert low <= value <= high
    assert set(body["verdicts"]) == {"dielectric", "conduction", "validity"}
    assert sum(layer["share"] for layer in body["layers"]) == pytest.approx(1.0)


def test_a_missed_limit_exits_with_one(stackdb):
    assert stackdb("compose", DESIGN, "--max-gap", "0.4mm").status == 0
    missed = stackdb("compose", DESIGN, "--max-gap", "0.1mm")
    assert missed.status == 1
    assert "NOT met" in missed.out


def test_a_conductor_leaves_no_gap_and_meets_no_limit(stackdb):
    ran = stackdb("compose", "soda-lime-glass 1mm / ito-film 20nm", "--max-gap", "1m", "--json")
    body = json.loads(ran.out)
    assert ran.status == 1
    assert body["air_equivalent_gap_m"] is None
    assert body["verdicts"]["conduction"]["state"] == "refused"
    assert any(w["code"] == "conductor-in-path" for w in body["warnings"])


def test_a_conducting_liquid_is_not_summed(stackdb):
    body = json.loads(stackdb("compose", "tap-water 1mm / soda-lime-glass 1mm", "--json").out)
    assert body["air_equivalent_gap_m"] is None
    assert "conducts below" in body["verdicts"]["conduction"]["text"]


def test_an_ink_of_unknown_sheet_resistance_is_open(stackdb):
    body = json.loads(stackdb("compose", "soda-lime-glass 1mm / black-ink 10um / acrylic-oca 0.1mm", "--json").out)
    assert body["verdicts"]["conduction"]["state"] == "open"
    assert "harmless here above" in body["verdicts"]["conduction"]["text"]


@pytest.mark.parametrize(("rs", "state"), [("50kohm/sq", "refused"), ("0.9Mohm/sq", "caution"), ("200Mohm/sq", "ok")])
def test_an_ink_is_judged_by_its_sheet_resistance(stackdb, rs, state):
    text = f"cover 4mm eps=6.5 / black-ink 24um eps=4 rs={rs} / bond 0.13mm eps=3.5"
    body = json.loads(stackdb("compose", text, "--freq", "200kHz", "--json").out)
    assert body["verdicts"]["conduction"]["state"] == state


def test_get_prints_one_number(stackdb):
    ran = stackdb("compose", "a 1mm eps=4", "--get", "air_equivalent_gap_m")
    assert float(ran.out) == pytest.approx(0.25e-3)
    wrong = stackdb("compose", "a 1mm eps=4", "--get", "nonsense")
    assert wrong.status == 2
    assert "there is" in wrong.err


def test_a_stack_file_a_pipe_and_save(stackdb, tmp_path):
    path = tmp_path / "front.toml"
    saved = stackdb("compose", DESIGN, "--save", str(path))
    assert saved.status == 0
    again = stackdb("compose", str(path), "--json")
    assert json.loads(again.out)["layers"] == json.loads(stackdb("compose", DESIGN, "--json").out)["layers"]
    piped = subprocess.run(
        [sys.executable, "-m", "stackdb", "compose", "-", "--get", "air_equivalent_gap_m"],
        input=b"\xef\xbb\xbfa 1mm eps=4\r\nb 2mm eps=4\r\n",
        capture_output=True,
        check=True,
    )
    assert float(piped.stdout) == pytest.approx(0.75e-3)


def test_source_lets_one_source_alone_speak(stackdb):
    body = json.loads(stackdb("compose", "pmma-extruded 2mm", "--source", "us-plastic-extruded", "--json").out)
    keys = {key for layer in body["layers"] for key in layer["sources"]}
    if "error" not in body:
        assert keys == {"us-plastic-extruded"}


def test_sizes_bring_the_field_solution(stackdb):
    ran = stackdb("compose", "glass 3mm eps=7", "--pad", "8mm", "--finger", "8mm", "--around", "grounded", "--json")
    body = json.loads(ran.out)
    assert body["field"]["edge_factor"] == pytest.approx(0.371, abs=0.002)
    assert body["verdicts"]["validity"]["state"] == "caution"
    without = json.loads(stackdb("compose", "glass 3mm eps=7", "--pad", "8mm", "--finger", "8mm", "--json").out)
    assert set(without["field"]) == {"alone", "driven", "grounded"}


def test_the_reference_gives_a_ratio(stackdb):
    body = json.loads(stackdb("compose", "a 2mm eps=4", "--reference", "a 1mm eps=4", "--json").out)
    assert body["gap_ratio"]["value"] == pytest.approx(0.5)


def _process(*arguments, **more):
    environment = {**os.environ, **more.pop("environment", {})}
    command = [sys.executable, "-m", "stackdb", *arguments]
    return subprocess.run(command, capture_output=True, check=False, env=environment, **more)


def test_plain_ascii_where_the_stream_can_do_no_better():
    ran = _process("compose", DESIGN, environment={"PYTHONIOENCODING": "ascii"})
    assert ran.returncode == 0
    ran.stdout.decode("ascii")
    latin = _process("compose", DESIGN, environment={"PYTHONIOENCODING": "latin-1"})
    assert "±" in latin.stdout.decode("latin-1")
    assert b"\x1b" not in ran.stdout


def test_a_reader_that_closes_early_ends_us_quietly():
    command = f'"{sys.executable}" -m stackdb sources | head -n 1'
    ran = subprocess.run(["bash", "-o", "pipefail", "-c", command], capture_output=True, check=False)
    assert ran.returncode == 0
    assert ran.stderr == b""


def test_the_example_of_every_command_runs(stackdb):
    import shlex

    from stackdb.cli import COMMANDS, group

    context = __import__("click").Context(group)
    for name in COMMANDS:
        command = group.get_command(context, name)
        assert command is not None
        assert command.epilog.startswith("Example: stackdb ")
        words = shlex.split(command.epilog.removeprefix("Example: stackdb "))
        assert stackdb(*words).status in (0, 1), name
        assert stackdb(name, "--help").status == 0
