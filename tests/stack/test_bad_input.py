"""Bad input: one clear line that says what is wrong, where, and what would be right."""

import json
import time

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from stackdb.cli import run
from stackdb.errors import InputError
from stackdb.quantities import printable
from stackdb.stack.grammar import parse_below, parse_choices, parse_stack

# text, code, layer, the characters at fault, a part of the line
CASES = [
    ("", "empty", None, None, "the stack is empty; write layers such as"),
    (" \n # nothing\n", "empty", None, None, "the stack is empty"),
    ("g 1mm / pet-film 125", "missing-unit", 2, "125", 'layer 2: "125" has no unit; write 125um or 125mm'),
    ("g 125 mm mm", "unit-twice", 1, "mm", '"mm" stands beside 125mm'),
    ("g 125mmmm", "unit-twice", 1, "125mmmm", "write 125mm"),
    ("g 125mm um", "unit-twice", 1, "um", "write one unit"),
    ("g 1mm eps=3 tol=5um um", "unit-twice", 1, "um", 'has another unit, "um"'),
    ("g 1,8mm", "decimal-comma", 1, "1,8mm", "write a decimal point, 1.8mm"),
    ("g 1mm eps=2,5", "decimal-comma", 1, "2,5", "write a decimal point, 2.5"),
    ("g 1.8MM", "unit-case", 1, "1.8MM", "write 1.8mm"),
    ("g 150 UM", "unit-case", 1, "150 UM", "write 150um"),
    ("g 5kHz", "unknown-unit", 1, "5kHz", '"kHz" is no unit of a length; there is nm um mm cm m in mil thou'),
    ("g -1.8mm", "out-of-range", 1, "-1.8mm", "is below 0"),
    ("g nan", "not-finite", 1, "nan", "not a finite thickness"),
    ("g nanmm", "not-finite", 1, "nanmm", "not a finite thickness"),
    ("g -inf mm", "not-finite", 1, "-inf", "not a finite thickness"),
    ("g 1mm eps=nan", "not-finite", 1, "nan", "not a finite number"),
    ("g 1mm tan=inf", "not-finite", 1, "inf", "not a finite number"),
    ("g 1e999mm", "not-finite", 1, "1e999mm", "beyond what a number can be"),
    ("g 1.5m", "out-of-range", 1, "1.5m", "is above 1 m; write a length from 0 to 1 m"),
    ("g 1mm eps=0.7", "eps-below-one", 1, "0.7", "eps=0.7 is below 1; no passive layer has that"),
    ("g 1mm eps=1.1±0.2", "eps-below-one", 1, "1.1±0.2", "reaches below 1"),
    ("g 1mm tol=2mm", "tolerance-too-large", 1, "2mm", "is larger than the layer"),
    ("g 1±2mm", "tolerance-too-large", 1, "1±2mm", "is larger than the layer"),
    ("g 1mm tol=200%", "tolerance-too-large", 1, "200%", "is larger than the layer"),
    ("g 1.8±0.1mm tol=0.1mm", "thickness-twice", 1, "0.1mm", "keep one"),
    ("g 1mm 2mm", "thickness-twice", 1, "2mm", "two thicknesses, 1mm and 2mm"),
    ("g 1mm h 2mm", "thickness-twice", 1, "2mm", 'part layers with " / "'),
    ("g 1mm h", "name-split", 1, "h", 'part layers with " / "'),
    ("g 1mm eps", "name-split", 1, "eps", "write eps= and its value"),
    ("g 1mm epz=3", "setting-unknown", 1, "epz", 'no setting "epz="; nearest: eps='),
    ("g 1mm EPS=3", "setting-unknown", 1, "EPS", "nearest: eps="),
    ("g 1mm dk=3", "setting-unknown", 1, "dk", "nearest: eps="),
    ("g 1mm colour=3", "setting-unknown", 1, "colour", "there is tol= eps= tan= sigma= rs= fill= host= rule="),
    ("g thickness=3mm", "setting-unknown", 1, "thickness", "write the thickness beside the name"),
    ("g 1mm eps=3 eps=4", "setting-twice", 1, "eps", "eps= is given twice"),
    ("g 1mm eps=", "setting-empty", 1, "", "eps= has no value"),
    ("g 1mm eps=3 film", "setting-last", 1, "film", "settings stand last in a layer"),
    ("g 1mm eps=3mm", "unit-unwanted", 1, "3mm", "should be a pure number; write 3"),
    ("g 1mm tan=2%", "unit-unwanted", 1, "2%", "write 0.02"),
    ("g 1mm tan=-1", "out-of-range", 1, "-1", "outside 0 to 10000"),
    ("g 1mm fill=30", "out-of-range", 1, "30", "write 30%"),
    ("g 1mm sigma=5", "missing-unit", 1, "5", "write 5S/m or 5mS/cm"),
    ("g 1mm rs=5", "missing-unit", 1, "5", "write 5ohm/sq or 5kohm/sq"),
    ("g 1mm host=air", "fill-missing", 1, "g 1mm host=air", "add the solid volume fraction"),
    ("g 1mm fill=2% rule=mean", "rule-unknown", 1, "mean", "there is maxwell-garnett, bruggeman,"),
    ("g 1mm tan=0.1 sigma=1S/m", "loss-twice", 1, "g 1mm tan=0.1 sigma=1S/m", "keep one"),
    ("g 1um rs=1ohm sigma=1S/m", "conduction-twice", 1, "g 1um rs=1ohm sigma=1S/m", "keep one"),
    ("/ g 1mm", "layer-missing", 1, "/", 'no layer before the first " / "'),
    ("g 1mm / ", "layer-missing", 2, "/ ", 'no layer after the last " / "'),
    ("g 1mm / / h 1mm", "layer-missing", 2, "/ /", 'no layer between two " / "'),
    ("pc/pmma 1mm", "slash", 1, "pc/pmma", 'write " / " between layers'),
    ("g 1mm/h 2mm", "slash", 1, "1mm/h", 'write " / " between layers'),
    ("g 1mm /h 2mm", "slash", 1, "/h", 'write " / " between layers'),
    ("g 1.8+/-0.1mm", "slash", 1, "1.8+/-0.1mm", 'write +- for an uncertainty, " / " between layers'),
    (" / ".join(["g 1mm"] * 1001), "too-many-layers", None, None, "1001 layers are too many; at most 1000"),
    ("g\x1b[31m 1mm", "control-character", 1, "g\x1b[31m", "the control character \\x1b"),
    ("g\u202e 1mm", "control-character", 1, "g\u202e", "direction-changing character \\u202e"),
    ("g\rh 1mm", "control-character", 1, "g\rh", "the control character \\r"),
    ("g 1mm # \u202e / h", "control-character", None, "\u202e", "a comment holds the control or direction-changing"),
    ("g １.８mm", "foreign-digit", 1, "１.８mm", "the fullwidth digit one (U+FF11); write 1.8mm"),
    ("g 1mm eps=３", "foreign-digit", 1, "３", "the fullwidth digit three (U+FF13); write 3"),
    ("g " + "9" * 5000 + "mm", "too-long", 1, "9" * 5000 + "mm", "a number of 5000 characters, 99999999..."),
    ("9" * 5000, "too-long", 1, "9" * 5000, "a number of 5000 characters"),
    ("g 1mm eps=" + "9" * 5000, "too-long", 1, "9" * 5000, "a few digits are enough"),
    ("x" * 81 + " 1mm", "too-long", 1, "x" * 81, "at most 80 characters"),
    ("x'; DROP TABLE material; -- 1mm", "character", 1, "x';", "holds ;, which no name or number holds"),
    ("' OR 1=1 -- 1mm", "choice-outside-sweep", 1, "OR", "choices stand only in sweep"),
    ("[bold red]g[/] 1mm", "character", 1, "[bold", "holds [, which no name"),
    ("<b>g</b> 1mm", "character", 1, "<b>g</b>", "holds <, which no name"),
    ('"g 1mm"', "character", 1, '"g', "holds a quotation mark"),
    ("g 1.7–1.9mm", "character", 1, "1.7–1.9mm", "write .. for a range"),
    ("g#2 1mm", "character", 1, "g#2", "put a space before a comment"),
    ("g 1mm, h 2mm", "character", 1, "1mm,", 'write " / " between layers'),
    ("g 1mm or h 2mm", "choice-outside-sweep", 1, "or", "choices stand only in sweep"),
    ("g 1mm / none", "choice-outside-sweep", 2, "none", "choices stand only in sweep"),
    ("g 1..2mm by 0.1mm", "choice-outside-sweep", 1, "by", "choices stand only in sweep"),
    ("g", "no-thickness", 1, "g", "write g 125um"),
    ("PET125um", "no-thickness", 1, "PET125um", "write PET 125um"),
    ("g mm", "no-thickness", 1, "mm", 'the unit "mm" has no number before it'),
    ("1mm", "no-name", 1, "1mm", "write a name beside the thickness"),
    ("eps=3", "no-name", 1, "eps=3", "write a name and a thickness"),
    ("FR 4 1.6mm", "missing-unit", 1, "4", "a hyphen before it where it belongs to the name"),
    ("g 1 000um", "missing-unit", 1, "1", "write 1000um without a blank"),
    ("a 1mm\nb 150\nc 1mm", "missing-unit", 2, "150", 'layer 2: "150" has no unit'),
    ("\ufeffg 125", "missing-unit", 1, "125", '"125" has no unit'),
]
IDS = [f"{code}-{printable(text[:24])}" for text, code, *_ in CASES]


@pytest.mark.parametrize(("text", "code", "layer", "fault", "told"), CASES, ids=IDS)
def test_says_what_where_and_what_would_be_right(
    text: str, code: str, layer: int | None, fault: str | None, told: str
) -> None:
    with pytest.raises(InputError) as caught:
        parse_stack(text)
    error = caught.value
    assert (error.code, error.layer) == (code, layer)
    assert told in str(error)
    assert (text[slice(*error.span)] if error.span else None) == fault


@pytest.mark.parametrize("text", [case[0] for case in CASES], ids=IDS)
def test_is_one_short_line_that_cannot_act_on_a_terminal(text: str) -> None:
    with pytest.raises(InputError) as caught:
        parse_stack(text)
    line = str(caught.value)
    assert printable(line) == line
    assert "\n" not in line
    assert len(line) < 200
    assert caught.value.hint


@pytest.mark.parametrize(("text", "code"), [case[:2] for case in CASES], ids=IDS)
def test_command_line_says_the_same_and_ends_with_2(text: str, code: str, capsys: pytest.CaptureFixture[str]) -> None:
    assert run(["compose", text]) == 2
    plain = capsys.readouterr()
    assert run(["compose", text, "--json"]) == 2
    as_json = capsys.readouterr()
    error = json.loads(as_json.out)["error"]
    assert (plain.out, plain.err.count("\n"), as_json.err) == ("", 1, "")
    assert error["code"] == code
    assert error["text"] in plain.err
    assert "Traceback" not in plain.err


HOSTILE = [
    "x" * 199_999,
    "= " * 90_000,
    "1±" * 90_000,
    "1." * 90_000,
    "/" * 190_000,
    " / " * 60_000,
    "a/" * 90_000,
    "g 1mm " + "eps=3 " * 30_000,
    "g 1mm " + "a " * 90_000,
    "a" * 100_000 + " = " + "b" * 90_000,
    "g " + "9" * 190_000 + "x",
    "# " * 90_000,
    "x" * 1_000_000,
]


@pytest.mark.parametrize("text", HOSTILE, ids=[f"{t[:10]}-{len(t)}" for t in HOSTILE])
def test_long_input_is_refused_without_delay(text: str) -> None:
    begun = time.perf_counter()
    with pytest.raises(InputError):
        parse_stack(text)
    # 0.2 s at most where this was written; quadratic behaviour would take minutes.
    assert time.perf_counter() - begun < 5.0


pieces = st.sampled_from([
    "g", "pet-film", "1mm", "1.8", "mm", "µm", "±", "+-", "..", "0.1mm", "tol=", "eps=", "=", "/", "\n", "#", "5%",
    "nan", "or", "by", "none", "-1", "1e9", ",", "１", "\u202e", "\x00", "rs=", "5ohm/sq", "fill=", "host=", "rule=",
    "%", " ",
])  # fmt: skip
texts = st.lists(pieces, max_size=12).map(" ".join) | st.lists(pieces, max_size=8).map("".join) | st.text(max_size=40)


@given(texts, st.sampled_from([parse_stack, parse_choices, parse_below]))
@settings(deadline=None, max_examples=400)
def test_any_text_is_a_stack_or_one_line(text: str, parse: object) -> None:
    assert callable(parse)
    line = ""
    try:
        parse(text)
    except InputError as error:
        line = str(error)
        low, high = error.span or (0, 0)
        line += "" if 0 <= low <= high <= len(text) else "\n span outside"
    assert printable(line) == line
    assert len(line) < 300
