"""The library is the command line in Python."""

from __future__ import annotations

import json

import pytest

import stackdb as library


def test_results_equal_the_json_and_print_as_the_terminal(stackdb):
    text = "soda-lime-glass 1.8mm / acrylic-oca 150um"
    result = library.compose(text)
    assert json.loads(stackdb("compose", text, "--json").out) == json.loads(json.dumps(result.to_dict()))
    assert str(result).strip() == stackdb("compose", text).out.strip()
    assert result._repr_html_().startswith("<pre>")
    assert len(result.to_frame()) == 2


def test_the_catalogue_answers(stackdb):
    with library.open_catalogue() as catalogue:
        found = catalogue.permittivity("PMMA", frequency_hz=1e6)
    body = json.loads(stackdb("show", "PMMA", "--freq", "1MHz", "--json").out)
    assert found.permittivity.value == body["permittivity"]["value"]


def test_a_stack_may_be_given_as_text_path_or_stack(tmp_path):
    stack = library.parse_stack("a 1mm eps=4")
    path = tmp_path / "a.toml"
    path.write_text('format = 1\nlayers = "a 1mm eps=4"\n')
    gaps = {library.compose(s).air_equivalent_gap_m.value for s in ("a 1mm eps=4", stack, path)}
    assert gaps == {0.25e-3}


def test_importing_costs_nothing_and_unknown_names_are_errors():
    assert "compose" in dir(library)
    with pytest.raises(AttributeError):
        _ = library.nothing


def test_every_command_has_a_page_of_help_and_a_topic_explains(stackdb):
    from stackdb.output.explanations import TOPICS

    for topic in TOPICS:
        ran = stackdb("explain", topic)
        assert ran.status == 0
        assert topic == "codes" or len(ran.out.splitlines()) <= 16
    assert stackdb("explain", "confidense").status == 2
    assert json.loads(stackdb("explain", "gap", "--json").out)["text"]


def test_every_code_is_explained():
    import re
    from pathlib import Path

    from stackdb.output.explanations import CODES

    package = Path(library.__file__).parent
    pattern = re.compile(
        r'(?:InputError|FileError|Warned|refuse|_refuse_at|_refuse)\(\s*(?:\w+, )?"([a-z]+(?:-[a-z]+)*)"'
    )
    used = {code for path in package.rglob("*.py") for code in pattern.findall(path.read_text(encoding="utf-8"))}
    assert used <= set(CODES), sorted(used - set(CODES))
    assert len(used) > 60


def test_verify(stackdb):
    ran = stackdb("verify", "--calibration")
    assert ran.status == 0
    assert all(len(line) <= 80 for line in ran.out.splitlines())
    body = json.loads(stackdb("verify", "--json").out)
    assert all(c["ok"] for c in body["checks"])
