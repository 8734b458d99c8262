"""Stack files: read, written, and what is said of a bad one."""

import io
import os
import stat
import sys
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stackdb.cli import run
from stackdb.errors import FileError, InputError
from stackdb.quantities import Span
from stackdb.stack.filetext import stack_of, toml_text
from stackdb.stack.grammar import parse_stack
from stackdb.stack.layers import Constraint, Layer, Stack, Thickness
from stackdb.stack.stackfile import load, read_stack, write_stack

FRONT = '''
format = 1
name = "Front lens"
revision = "C"
frequency = "250kHz"
temperature = "23C"
layers = """
soda-lime-glass   1.8mm tol=0.1mm    # touched side
acrylic-oca       150um
pet-film          125um              # electrode underneath
"""
max-gap = "0.40mm"                   # exit status 1 when not met
'''
LAYERS = parse_stack("soda-lime-glass 1.8mm tol=0.1mm / acrylic-oca 150um / pet-film 125um").layers
FULL = Stack(
    layers=LAYERS,
    name='Lid "A" \\ µ',
    revision="C",
    frequency_hz=250e3,
    temperature_c=-20.5,
    humidity_pct=50.0,
    level=0.95,
    max_gap_m=0.0004,
    min_ratio=0.2,
    min_signal_farad=5e-15,
    reference="pmma 2mm",
    cases=("bare", "nitrile-rubber 0.1mm / air 12um"),
    pad_m=0.01,
    finger_m=0.008,
    pitch_m=0.012,
    around="grounded",
    clearance_m=0.0005,
    below="fr-4 1.6mm / ground",
    body_farad=1e-10,
    device_farad=3.5e-11,
    counts=1000.0,
    noise=2.5,
    edition="2026.1",
    own=True,
    zones=(("key area", "pmma 2mm"), ("slider", "pmma 3mm / air 0.1mm")),
    constraints=(
        Constraint("impact", owner="panel standard", clause="5.2", layer=1, minimum_thickness_m=0.0015),
        Constraint("no PVC", material="pvc-plasticised", banned=True, note="recycling"),
    ),
)


@pytest.fixture
def front(tmp_path: Path) -> Path:
    path = tmp_path / "front.toml"
    path.write_text(FRONT, encoding="utf-8")
    return path


def test_the_example_of_the_contract(front: Path) -> None:
    assert read_stack(front) == Stack(
        LAYERS, name="Front lens", revision="C", frequency_hz=250e3, temperature_c=23.0, max_gap_m=0.0004
    )


def test_byte_order_mark_and_cr_lf_change_nothing(front: Path, tmp_path: Path) -> None:
    other = tmp_path / "windows.toml"
    other.write_bytes(b"\xef\xbb\xbf" + FRONT.replace("\n", "\r\n").encode())
    assert read_stack(other) == read_stack(front)


def test_every_key_goes_to_a_file_and_comes_back(tmp_path: Path) -> None:
    path = tmp_path / "full.toml"
    write_stack(FULL, path)
    assert read_stack(path) == FULL


def test_every_field_of_a_stack_is_in_that_test() -> None:
    empty = Stack(LAYERS)
    assert [f for f in Stack._fields[1:] if getattr(FULL, f) == getattr(empty, f)] == []


def test_a_file_is_written_as_a_person_would() -> None:
    stack = Stack(LAYERS, name="Lid", frequency_hz=250e3, humidity_pct=40.0, own=True, pad_m=0.01)
    assert toml_text(stack).split("\n") == [
        "format = 1",
        'name = "Lid"',
        'frequency = "250kHz"',
        "humidity = 40",
        "own = true",
        'pad = "10mm"',
        'layers = """',
        "soda-lime-glass 1.8mm tol=0.1mm",
        "acrylic-oca 150um",
        "pet-film 125um",
        '"""',
        "",
    ]


any_text = st.text(st.characters(exclude_categories=["Cs"]), max_size=20)
FIELDS = {
    "name": st.none() | any_text,
    "frequency_hz": st.none() | st.floats(1e-3, 1e12),
    "temperature_c": st.none() | st.floats(-273.0, 1e4),
    "max_gap_m": st.none() | st.floats(0.0, 1.0).map(abs),
    "min_ratio": st.none() | st.floats(0.0, 1e6).map(abs),
    "body_farad": st.none() | st.floats(0.0, 1e-3).map(abs),
    "noise": st.none() | st.floats(0.0, 1e30).map(abs),
    "zones": st.dictionaries(any_text, st.just("a 1mm"), max_size=3).map(lambda found: tuple(found.items())),
}


@given(st.fixed_dictionaries(FIELDS))
@settings(deadline=None)
def test_any_stack_goes_to_toml_and_comes_back_the_same(fields: dict[str, Any]) -> None:
    stack = Stack(LAYERS, **fields)
    assert stack_of(toml_text(stack), "here") == stack


@pytest.mark.parametrize(
    "layer",
    [Layer("a  b", Thickness(0.001)), Layer("a / b", Thickness(0.001)), Layer("a", Thickness(0.001), Span(3, 2, 9))],
)
def test_a_stack_that_no_text_can_tell_is_refused(layer: Layer, tmp_path: Path) -> None:
    with pytest.raises(InputError):
        write_stack(Stack((layer,)), tmp_path / "odd.toml")
    assert list(tmp_path.iterdir()) == []


# Where a stack comes from.


def test_load_takes_text_a_name_a_path_and_a_stack(front: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(front.parent)
    stack = read_stack(front)
    assert load("front.toml") == load(" ./front.toml\n") == load(front) == load(str(front)) == load(stack) == stack
    assert load("pmma 2mm") == parse_stack("pmma 2mm")


def test_a_name_with_a_space_is_a_file_where_there_is_one(front: Path) -> None:
    spaced = front.rename(front.parent / "front lens.toml")
    assert load(str(spaced)).name == "Front lens"
    with pytest.raises(InputError):
        load("no such.toml")


@pytest.mark.parametrize(
    "text", [FRONT, "\n# a comment\n" + FRONT, "soda-lime-glass 1.8mm tol=0.1mm\nacrylic-oca 150um\npet-film 125um\n"]
)
def test_standard_input_is_a_stack_file_or_plain_layers(text: str, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.setattr(sys, "stdin", io.TextIOWrapper(io.BytesIO(b"\xef\xbb\xbf" + text.encode()), encoding="ascii"))
    assert load("-").layers == LAYERS


# What is said of a bad file: status 2 for what it says, 3 for a file that cannot be used.

HEAD = "format = 1\nlayers = 'pmma 2mm'\n"
BAD = [
    (HEAD + "frequencey = '1kHz'", "key-unknown", 'bad.toml: no key "frequencey" in a stack file; nearest: frequency'),
    (HEAD + "max_gap = '1mm'", "key-unknown", "nearest: max-gap"),
    (HEAD + "xyzzy = 1", "key-unknown", "there is format, layers, name,"),
    (HEAD + "max-gap = 0.4", "missing-unit", 'max-gap: 0.4 has no unit; write "0.4mm", in quotes'),
    (HEAD + "max-gap = '0.4'", "missing-unit", 'max-gap: "0.4" has no unit; write 0.4um or 0.4mm'),
    (HEAD + "frequency = '250khz'", "unit-case", "frequency:"),
    (HEAD + "humidity = 150", "out-of-range", "humidity: 150 is out of range; write a number from 0 to 100"),
    (HEAD + "level = 90", "out-of-range", "write a number from 0.5 to 0.999"),
    (HEAD + "noise = nan", "out-of-range", "noise: nan is out of range"),
    (HEAD + "counts = -1", "out-of-range", "write a number of 0 or above"),
    (HEAD + "counts = true", "wrong-type", "counts: true is not a number"),
    (HEAD + "own = 'yes'", "wrong-type", "own: yes is not true or false"),
    (HEAD + "name = 3", "wrong-type", "name: 3 stands without quotes; write it in quotes"),
    (HEAD + "edition = 2026.1", "wrong-type", "edition: 2026.1 stands without quotes"),
    (HEAD + "around = 'water'", "word-unknown", "there is alone, driven, grounded"),
    (HEAD + "cases = 'bare'", "wrong-type", "cases: bare is not a list"),
    (HEAD + "cases = ['bare', 3]", "wrong-type", "cases: 3 stands without quotes"),
    (HEAD + "reference = 'pmma 2mm / pc 1,5mm'", "decimal-comma", "reference: layer 2:"),
    (HEAD + "below = 'fr-4 / ground'", "no-thickness", "below: layer 1:"),
    (HEAD + "[zones]\nleft = 'pmma'", "no-thickness", "zones: left: layer 1:"),
    (HEAD + "zones = 3", "wrong-type", "zones: 3 is not a table"),
    (HEAD + "constraints = 3", "wrong-type", "is not tables [[constraints]]"),
    (HEAD + "[[constraints]]\nlayer = 1\nbanned = true", "rule-missing", "constraint 1: a constraint without a rule"),
    (HEAD + "[[constraints]]\nrule = 'r'\nbanned = true", "constraint-place", "one layer or one material"),
    (HEAD + "[[constraints]]\nrule = 'r'\nlayer = 1", "constraint-claim", "a minimum-thickness or a ban"),
    (HEAD + "[[constraints]]\nrule = 'r'\nlayer = 2\nbanned = true", "out-of-range", "layer 2, but the stack has 1"),
    (HEAD + "[[constraints]]\nrule = 'r'\nlayer = 0\nbanned = true", "wrong-type", "a layer's number from 1"),
    (HEAD + "[[constraints]]\nrule = 'r'\nminimum_thickness = '1mm'", "key-unknown", "nearest: minimum-thickness"),
    ("format = 1\n", "layers-missing", "layers are missing"),
    ("layers = 'pmma 2mm'\n", "format-missing", "begin with format = 1"),
    ("format = '1'\nlayers = 'pmma 2mm'\n", "format", "write format = 1"),
    ("format = 1\nlayers = 'pmma 2mm\\n'\n", "character", "layer 1:"),
    ("format = 1\nlayers = '''\na 1mm\nb 150\n'''", "missing-unit", 'layer 2: "150" has no unit (in bad.toml); write'),
    ("format = 1\nlayers = ''\n", "empty", "the stack is empty (in bad.toml)"),
]
DAMAGED = [
    (b"format = 1\nlayers = pmma\n", "file-damaged", "bad.toml is not TOML:"),
    (b"format = 1\nformat = 1\n", "file-damaged", "bad.toml is not TOML:"),
    (b"\xff\xfe\x00", "file-damaged", "bad.toml is not UTF-8 text"),
    (b"a = " + b"[" * 100_000, "file-damaged", "bad.toml is not TOML: too large a value"),
    (b"a = " + b"9" * 5000, "file-damaged", "bad.toml is not TOML: too large a value"),
    (b"a = '\x1b[31m'", "file-damaged", "bad.toml is not TOML:"),
    (b"format = 2\nlayers = 'x'", "file-newer", "bad.toml is of format 2; this program reads 1"),
    (b"#" * 2_000_001, "file-too-large", "bad.toml is above 2000000 bytes"),
]


@pytest.mark.parametrize(("text", "code", "told"), BAD, ids=[f"{c}-{i}" for i, (_, c, _) in enumerate(BAD)])
def test_what_a_file_says_is_refused_with_2(
    text: str, code: str, told: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    Path("bad.toml").write_text(text, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        load("bad.toml")
    assert (caught.value.code, caught.value.exit_status) == (code, 2)
    assert told in str(caught.value)
    assert "bad.toml" in str(caught.value)


@pytest.mark.parametrize(("data", "code", "told"), DAMAGED, ids=[f"{c}-{i}" for i, (_, c, _) in enumerate(DAMAGED)])
def test_a_damaged_or_newer_file_is_named_and_refused_with_3(
    data: bytes, code: str, told: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    monkeypatch.chdir(tmp_path)
    Path("bad.toml").write_bytes(data)
    with pytest.raises(FileError) as caught:
        load("bad.toml")
    assert (caught.value.code, caught.value.exit_status) == (code, 3)
    assert told in str(caught.value)
    assert str(caught.value).isprintable()


def test_a_missing_file_and_a_folder_are_file_errors(tmp_path: Path) -> None:
    with pytest.raises(FileError, match="no file") as caught:
        load(str(tmp_path / "none.toml"))
    assert caught.value.code == "file-missing"
    (tmp_path / "folder.toml").mkdir()
    with pytest.raises(FileError, match="cannot be read"):
        load(str(tmp_path / "folder.toml"))


@pytest.mark.parametrize("name", ["a\x00b.toml", "a\x1b[31m.toml", "x" * 5000 + ".toml"])
def test_an_odd_file_name_is_one_short_line(name: str) -> None:
    with pytest.raises(FileError) as caught:
        load(name)
    assert str(caught.value).isprintable()
    assert len(str(caught.value)) < 300


def test_the_command_line_ends_with_3_and_one_line(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert run(["compose", str(tmp_path / "none.toml")]) == 3
    shown = capsys.readouterr()
    assert (shown.out, shown.err.count("\n")) == ("", 1)


# Writing.


def test_writing_replaces_a_stack_file_and_keeps_its_mode(front: Path) -> None:
    front.chmod(0o640)
    write_stack(FULL, front)
    assert read_stack(front) == FULL
    assert stat.S_IMODE(front.stat().st_mode) == 0o640
    assert list(front.parent.iterdir()) == [front]


@pytest.mark.parametrize("data", [b"", b"[project]\nname = 'x'\n", b"notes", b"\xff\xfe"])
def test_writing_leaves_any_other_file_alone(data: bytes, tmp_path: Path) -> None:
    path = tmp_path / "other.toml"
    path.write_bytes(data)
    with pytest.raises(FileError, match="is there and is no stack file") as caught:
        write_stack(FULL, path)
    assert (caught.value.code, path.read_bytes()) == ("file-not-ours", data)


def test_writing_through_a_link_keeps_the_link(front: Path) -> None:
    link = front.parent / "link.toml"
    link.symlink_to(front)
    write_stack(FULL, link)
    assert link.is_symlink()
    assert read_stack(front) == FULL


@pytest.mark.parametrize("name", ["front.txt", "-", "front"])
def test_a_file_that_could_not_be_read_back_is_not_written(name: str, tmp_path: Path) -> None:
    with pytest.raises(InputError, match=r"does not end in \.toml"):
        write_stack(FULL, tmp_path / name)
    assert list(tmp_path.iterdir()) == []


def test_a_folder_that_is_not_there_is_a_file_error(tmp_path: Path) -> None:
    with pytest.raises(FileError, match="cannot be written") as caught:
        write_stack(FULL, tmp_path / "none" / "front.toml")
    assert caught.value.code == "file-unwritable"


def test_a_failed_write_leaves_the_old_file(front: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    def fail(_: int) -> None:
        raise OSError(28, "No space left on device")

    monkeypatch.setattr(os, "fsync", fail)
    with pytest.raises(FileError, match="No space left"):
        write_stack(FULL, front)
    assert front.read_text(encoding="utf-8") == FRONT
    assert list(front.parent.iterdir()) == [front]
