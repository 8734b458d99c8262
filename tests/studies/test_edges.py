"""The map of edge factors, in the terminal and as a picture."""

from __future__ import annotations

import json

import pytest

STACK = ("soda-lime-glass 3mm / acrylic-oca 150um", "--pad", "8mm", "--around", "grounded")


def test_the_map_fits_and_falls_with_thickness(stackdb):
    ran = stackdb("edges", *STACK)
    assert ran.status == 0
    assert all(len(line) <= 80 for line in ran.out.splitlines())
    body = json.loads(stackdb("edges", *STACK, "--json").out)
    column = [row[2] for row in body["edge_factor"]]
    assert column == sorted(column, reverse=True)


@pytest.mark.parametrize("ending", ["svg", "png"])
def test_a_picture_is_written(stackdb, tmp_path, ending):
    path = tmp_path / f"map.{ending}"
    assert stackdb("edges", *STACK, "-o", str(path)).status == 0
    head = path.read_bytes()[:200]
    assert b"<svg" in path.read_bytes() if ending == "svg" else head.startswith(b"\x89PNG")


def test_what_it_needs_is_said(stackdb, tmp_path):
    assert stackdb("edges", "soda-lime-glass 3mm").status == 2
    assert stackdb("edges", *STACK, "-o", str(tmp_path / "map.txt")).status == 2
    assert stackdb("edges", *STACK, "-o", str(tmp_path / "no" / "map.png")).status == 3
