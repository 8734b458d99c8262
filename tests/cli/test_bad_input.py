"""Bad input: one clear line on standard error, exit status 2, no traceback; the same as JSON with --json."""

from __future__ import annotations

import json

import pytest

BAD = {
    "empty": ("", "empty"),
    "no unit": ("pet-film 150", "150um or 150mm"),
    "two units": ("pet-film 1mm mm", "mm"),
    "decimal comma": ("pet-film 1,8mm", "decimal"),
    "unit case": ("pet-film 1.8MM", "mm"),
    "unknown name": ("soda-lime-glas 1mm", "soda-lime-glass"),
    "shared name": ("acrylic 1mm", "pmma-cast"),
    "negative": ("pet-film -1mm", "below 0"),
    "not a number": ("pet-film nan mm", "finite"),
    "infinite": ("pet-film inf mm", "finite"),
    "absurd": ("pet-film 2m", "1 m"),
    "eps below one": ("a 1mm eps=0.7", "below 1"),
    "tolerance": ("pet-film 1mm tol=2mm", "larger"),
    "unknown setting": ("pet-film 1mm foo=3", "foo"),
    "doubled setting": ("pet-film 1mm tol=1um tol=2um", "twice"),
    "leading": (" / pet-film 1mm", "/"),
    "trailing": ("pet-film 1mm / ", "/"),
    "slash": ("pc/pmma 1mm", " / "),
    "1001 layers": (" / ".join(["a 1mm eps=2"] * 1001), "1,000"),
    "control": ("pet\x1b[31m 1mm", "x1b"),
    "direction": ("pet\u202e 1mm", "u202e"),
    "full width": ("pet-film １mm", "digit"),
    "5000 digits": ("pet-film " + "9" * 5000 + "mm", "5000"),
    "sql": ("x'; DROP TABLE material;-- 1mm", "x"),
    "markup": ("[bold]x[/bold] 1mm", "["),
    "choice": ("pet-film 1mm or pet-film 2mm", "sweep"),
    "no thickness": ("pet-film 0", "thickness"),
}


@pytest.mark.parametrize("case", BAD)
def test_one_clear_line(stackdb, case):
    text, word = BAD[case]
    ran = stackdb("compose", text)
    assert ran.status == 2
    assert ran.out == ""
    assert len(ran.err.strip().splitlines()) == 1
    assert "Traceback" not in ran.err
    assert len(ran.err) < 400
    assert word.replace(",", "") in ran.err.replace(",", "")
    assert "\x1b" not in ran.err
    assert "\u202e" not in ran.err


@pytest.mark.parametrize("case", BAD)
def test_the_same_as_json(stackdb, case):
    ran = stackdb("compose", BAD[case][0], "--json")
    body = json.loads(ran.out)
    assert ran.status == 2
    assert ran.err == ""
    assert body["format"] == 1
    assert set(body["error"]) == {"code", "text", "hint", "layer", "span"}


@pytest.mark.parametrize(
    "arguments",
    [
        ("nonsense",),
        ("compose", "a 1mm eps=2", "--nonsense"),
        ("compose", "a 1mm eps=2", "--freq", "250 khz"),
        ("compose", "a 1mm eps=2", "--level", "2"),
        ("show",),
        ("show", "nonsense-material"),
        ("find", "--eps", "3"),
        ("sources", "nonsense"),
        ("compose", "missing.toml"),
        ("compose", "a 1mm eps=2", "--catalogue", "missing.sqlite"),
        ("size", "a 1mm eps=2", "--layer", "1"),
        ("touch", "soda-lime-glass 1mm", "--case", "nonsense"),
        ("compare", "a 1mm eps=2"),
    ],
)
def test_wrong_options_are_errors_of_ours(stackdb, arguments):
    ran = stackdb(*arguments)
    assert ran.status in (2, 3)
    assert len(ran.err.strip().splitlines()) == 1
    body = json.loads(stackdb(*arguments, "--json").out)
    assert body["error"]["text"]


def test_a_damaged_catalogue_is_named(stackdb, tmp_path):
    path = tmp_path / "damaged.sqlite"
    path.write_bytes(b"not a database" * 100)
    ran = stackdb("show", "pmma", "--catalogue", str(path))
    assert ran.status == 3
    assert "damaged.sqlite" in ran.err


@pytest.mark.parametrize("text", ['soda-lime OR "x', "a* NEAR b", "'); DROP TABLE material; --", "%_", '"', "\0"])
def test_search_text_is_inert(stackdb, text):
    assert stackdb("find", text).status == 0
    assert stackdb("show", "pmma").status == 0
