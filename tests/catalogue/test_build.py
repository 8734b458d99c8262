"""Building the catalogue: every fault with its place, the digest, names that grammar can read."""

from __future__ import annotations

import csv
import shutil
import sqlite3
from pathlib import Path

import pytest

from stackdb.catalogue import build, open_catalogue
from stackdb.catalogue.folding import fold

DATA = Path(__file__).resolve().parents[2] / "data"


@pytest.fixture
def folder(tmp_path):
    target = tmp_path / "data"
    shutil.copytree(DATA, target)
    return target


def change(folder, table, edit):
    path = folder / f"{table}.csv"
    with path.open(newline="") as handle:
        rows = list(csv.reader(handle))
    edit(rows)
    with path.open("w", newline="") as handle:
        csv.writer(handle, lineterminator="\n").writerows(rows)


def setting(line, column, text):
    def edit(rows):
        rows[line - 1][rows[0].index(column)] = text

    return edit


@pytest.mark.parametrize(
    ("table", "edit", "place", "reason"),
    [
        ("permittivity", setting(2, "value", "0.5"), "permittivity.csv:2:value", "outside 1"),
        ("permittivity", setting(3, "frequency_hz", "often"), "permittivity.csv:3:frequency_hz", "not a number"),
        ("permittivity", setting(4, "material", "nothing"), "permittivity.csv:4:material", 'no material "nothing"'),
        ("permittivity", setting(5, "checked", "seen"), "permittivity.csv:5:checked", "none of read"),
        ("permittivity", setting(6, "flags", "odd"), "permittivity.csv:6:flags", 'no flag "odd"'),
        ("material", setting(2, "key", "a/b"), "material.csv:2:key", 'holds "/"'),
        ("material", setting(2, "kind", "thing"), "material.csv:2:kind", "none of"),
        ("alias", setting(2, "alias", "film 3 mm"), "alias.csv:2:alias", "free-standing number"),
        ("source", setting(2, "key", "no-one-uses-this"), "source.csv:2:key", "nothing rests on"),
        ("thickness", setting(2, "nominal_mm", "-1"), "thickness.csv:2:nominal_mm", "outside"),
    ],
)
def test_a_bad_row_stops_the_build_with_its_place(folder, tmp_path, table, edit, place, reason):
    change(folder, table, edit)
    with pytest.raises(build.DataFaults) as raised:
        build.build(folder, tmp_path / "built.sqlite")
    text = str(raised.value)
    assert place in text
    assert reason in text
    assert not (tmp_path / "built.sqlite").exists()


def test_all_faults_at_once(folder, tmp_path):
    change(folder, "permittivity", setting(2, "value", "0.5"))
    change(folder, "permittivity", setting(9, "frequency_hz", "-1"))
    with pytest.raises(build.DataFaults) as raised:
        build.build(folder, tmp_path / "built.sqlite")
    assert len(raised.value.faults) == 2


def test_a_wrong_header_is_named(folder, tmp_path):
    change(folder, "kind", lambda rows: rows[0].__setitem__(0, "sort"))
    with pytest.raises(build.DataFaults, match="header"):
        build.build(folder, tmp_path / "built.sqlite")


def test_the_shipped_catalogue_is_built_from_the_data(catalogue):
    assert catalogue.edition().digest == build.digest(DATA)


def test_the_build_replaces_at_the_end_and_round_trips(folder, tmp_path):
    target = tmp_path / "built.sqlite"
    build.build(folder, target)
    build.build(folder, target)
    assert not list(tmp_path.glob("*.tmp"))
    with open_catalogue(str(target)) as built, (folder / "permittivity.csv").open(newline="") as handle:
        rows = list(csv.DictReader(handle))
        count = sum(len([r for r in built.permittivities(m.key) if r.material == m.key]) for m in built.materials())
        assert count == len(rows)


def test_data_stand_in_canonical_order(folder):
    before = {p.name: p.read_bytes() for p in folder.glob("*.csv")}
    build.write_sorted(folder)
    for path in folder.glob("*.csv"):
        assert path.read_bytes() == before[path.name], f"{path.name}: run scripts/build_catalogue.py --sort"


def test_tables_are_strict(catalogue):
    database = sqlite3.connect(f"file:{catalogue.path}?mode=ro", uri=True)
    for name, sql in database.execute(
        "SELECT name, sql FROM sqlite_master WHERE type = 'table' AND name NOT LIKE 'search%'"
    ):
        assert "STRICT" in sql, name
    database.close()


def test_the_size_of_the_catalogue(catalogue):
    materials = catalogue.materials()
    records = [r for m in materials for r in catalogue.permittivities(m.key) if r.material == m.key]
    sizes = [t for m in materials for t in catalogue.thicknesses(m.key) if t.material == m.key]
    assert len(materials) >= 150
    assert len(records) >= 700
    assert len(sizes) >= 150


@pytest.mark.parametrize(
    ("one", "other"), [("PET film", "pet-film"), ("FR_4", "fr-4"), ("  Acrylic   OCA ", "acrylic-oca")]
)
def test_names_fold(one, other):
    assert fold(one) == other


@pytest.mark.parametrize(
    ("slip", "meant"),
    [("soda-lime-glas", "soda-lime-glass"), ("acrilic-oca", "acrylic-oca"), ("policarbonate", "polycarbonate")],
)
def test_nearest_names(catalogue, slip, meant):
    assert meant in catalogue.nearest(slip)


def test_every_recalled_kind_is_recalled(catalogue):
    kinds = {s.key: s.kind for s in catalogue.sources()}
    for material in catalogue.materials():
        for record in catalogue.permittivities(material.key):
            if kinds[record.source] == "practice":
                assert record.checked == "recalled"


def test_left_out_figures_have_a_reason():
    with (DATA / "left_out.csv").open(newline="") as handle:
        assert all(row["reason"] for row in csv.DictReader(handle))
