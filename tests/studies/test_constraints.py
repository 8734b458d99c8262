"""A recorded constraint stands beside every thickness and is never traded away."""

from __future__ import annotations

import json

import pytest

FILE = """format = 1
name = "Lens"
layers = \"\"\"
soda-lime-glass 1.8mm tol=0.1mm
acrylic-oca 150um
\"\"\"
[[constraints]]
layer = 1
minimum-thickness = "2mm"
rule = "recorded impact minimum"
owner = "product safety"
clause = "4.2"
[[constraints]]
material = "acrylic-oca"
banned = true
rule = "solvent list"
owner = "plant"
"""


@pytest.fixture
def lens(tmp_path):
    path = tmp_path / "lens.toml"
    path.write_text(FILE)
    return str(path)


@pytest.mark.parametrize("command", ["compose", "compare", "size"])
def test_it_is_printed_with_owner_and_clause(stackdb, lens, command):
    arguments = {"compose": [lens], "compare": [lens, lens], "size": [lens, "--layer", "1", "--gap", "0.5mm"]}[command]
    out = " ".join(stackdb(command, *arguments).out.split())
    assert "NOT KEPT" in out
    assert "product safety" in out
    assert "clause 4.2" in out
    assert "banned by solvent list" in out


def test_it_is_in_the_json(stackdb, lens):
    body = json.loads(stackdb("compose", lens, "--json").out)
    kept = {c["rule"]: c["kept"] for c in body["constraints"]}
    assert kept == {"recorded impact minimum": False, "solvent list": False}


def test_a_film_inside_says_what_comes_through(stackdb):
    text = "cover 4mm eps=6.5 / ink 24um eps=4 rs=0.9Mohm/sq / bond 0.13mm eps=3.5"
    body = json.loads(
        stackdb("compose", text, "--pad", "12mm", "--finger", "12mm", "--around", "grounded", "--json").out
    )
    assert "lets" in body["verdicts"]["conduction"]["text"]
    wide = json.loads(stackdb("compose", text, "--freq", "200kHz", "--blur", "20mm", "--json").out)
    assert wide["verdicts"]["conduction"]["state"] == "ok"


def test_own_figures_are_asked_for(stackdb, monkeypatch, tmp_path):
    from stackdb.catalogue import own

    monkeypatch.setattr(own, "own_path", lambda: tmp_path / "own.sqlite")
    ran = stackdb("show", "pmma", "--own")
    assert ran.status == 3
    assert "no own figures yet" in ran.err
