"""What a user sees of ``find``, ``show`` and ``sources``."""

from __future__ import annotations

import json

import pytest

PLAIN_NAMES = {
    "PMMA": "pmma",
    "polycarbonate": "polycarbonate",
    "PET": "pet-film",
    "PEN": "pen-film",
    "ABS": "abs",
    "FR-4": "fr4-laminate",
    "polypropylene": "polypropylene",
    "polystyrene": "polystyrene",
    "fused silica": "fused-silica",
    "borosilicate glass": "borosilicate-glass",
    "PET film": "pet-film",
    "pet_film": "pet-film",
}


@pytest.mark.parametrize("name", PLAIN_NAMES)
def test_plain_names_find_their_material(stackdb, name):
    body = json.loads(stackdb("show", name, "--json").out)
    assert body["material"]["key"] == PLAIN_NAMES[name]


def test_acrylic_falls_with_frequency_as_its_records_do(stackdb):
    body = json.loads(stackdb("show", "PMMA", "--freq", "60Hz,1kHz,1MHz", "--json").out)
    values = [row["permittivity"]["value"] for row in body["frequencies"]]
    assert values[0] > values[1] > values[2]
    # US Plastic Corp. prints 3.6, 3.3, 2.8 at 60 Hz, 1 kHz, 100 kHz: the pooled fall must be of that size
    assert 1.1 < values[0] / values[2] < 1.5


def test_a_moved_record_says_so_and_what_it_cost(stackdb):
    body = json.loads(stackdb("show", "PMMA", "--freq", "250kHz", "--json").out)
    record = next(r for r in body["records"] if r["frequency_hz"] == 60 and r["used"])
    assert record["moved_by"]
    assert record["moved_value"] < record["value"]
    assert record["move_uncertainty"] > 0
    assert "moved" in stackdb("show", "PMMA", "--freq", "250kHz").out


def test_memory_alone_shows_in_grade_and_range(stackdb):
    body = json.loads(stackdb("show", "acrylic-oca", "--json").out)
    eps = body["permittivity"]
    if all(r["checked"] == "recalled" for r in body["records"] if r["used"]):
        assert eps["confidence"] == "guess"
        assert "memory" in eps["why"]
    assert eps["high"] / eps["low"] > 1.3


def test_every_record_resolves_its_source(stackdb):
    body = json.loads(stackdb("show", "soda-lime-glass", "--json").out)
    assert {r["source"] for r in body["records"]} <= set(body["sources"])
    for record in body["records"]:
        assert record["used"] or record["why_not"]


def test_find_fits_the_screen_and_pipes_names(stackdb):
    ran = stackdb("find", "oca")
    assert all(len(line) <= 80 for line in ran.out.splitlines())
    names = stackdb("find", "oca", "--names").out.split()
    assert "acrylic-oca" in names
    narrow = json.loads(stackdb("find", "--kind", "cover-lens", "--eps", "5..8", "--json").out)["materials"]
    assert narrow
    assert all(5 <= m["permittivity"]["value"] <= 8 for m in narrow)


def test_sources_say_what_rests_on_them(stackdb):
    every = json.loads(stackdb("sources", "--json").out)["sources"]
    assert len(every) > 100
    one = json.loads(stackdb("sources", every[0]["key"], "--json").out)
    assert one["rests"]


def test_bare_command_prints_headings_and_commands(stackdb):
    ran = stackdb()
    assert ran.status == 0
    for word in ("Look up", "Work out", "compose", "stackdb show soda-lime-glass"):
        assert word in ran.out
