"""Stack files: the same layers in TOML, with conditions, limits, sizes, cases and constraints beside them."""

from __future__ import annotations

import os
from collections.abc import Callable
from pathlib import Path
from typing import Any

from stackdb import quantities
from stackdb.errors import FileError, InputError
from stackdb.quantities import printable, shortened
from stackdb.stack.grammar import parse_stack
from stackdb.stack.layers import Constraint, Stack, layer_text, length_text

FORMAT = 1
AROUND = ("alone", "driven", "grounded")
LONGEST_FILE = 2_000_000


def _text(value: Any) -> str:
    if not isinstance(value, str):
        raise InputError("not-text", f"{value!r} should be text in quotes")
    return value


def _quantity(parse: Callable[[str], float]) -> Callable[[Any], float]:
    return lambda value: parse(_text(value))


def _number(value: Any) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float):
        raise InputError("not-a-number", f"{value!r} should be a number")
    return float(value)


def _share(value: Any) -> float:
    return quantities.parse_share(value) if isinstance(value, str) else _number(value)


def _percent(value: Any) -> float:
    return quantities.parse_percent(value) if isinstance(value, str) else _number(value)


def _flag(value: Any) -> bool:
    if not isinstance(value, bool):
        raise InputError("not-a-flag", f"{value!r} should be true or false")
    return value


def _around(value: Any) -> str:
    if value not in AROUND:
        raise InputError("word-unknown", f"{value!r} is none of {', '.join(AROUND)}")
    return str(value)


def _cases(value: Any) -> tuple[str, ...]:
    if not isinstance(value, list):
        raise InputError("not-a-list", f"{value!r} should be a list of names or stacks")
    return tuple(_text(v) for v in value)


def _zones(value: Any) -> tuple[tuple[str, str], ...]:
    if not isinstance(value, dict):
        raise InputError("not-a-table", f"{value!r} should be a table of zones")
    return tuple((name, _text(text)) for name, text in value.items())


CONSTRAINT_KEYS: dict[str, tuple[str, Callable[[Any], Any]]] = {
    "rule": ("rule", _text),
    "owner": ("owner", _text),
    "clause": ("clause", _text),
    "layer": ("layer", lambda v: int(_number(v))),
    "material": ("material", _text),
    "minimum-thickness": ("minimum_thickness_m", _quantity(quantities.parse_length)),
    "banned": ("banned", _flag),
    "note": ("note", _text),
}


def _constraints(value: Any) -> tuple[Constraint, ...]:
    if not isinstance(value, list) or not all(isinstance(v, dict) for v in value):
        raise InputError("not-a-table", "constraints should be tables, each [[constraints]]")
    found = []
    for table in value:
        fields = {}
        for key, cell in table.items():
            name, parse = _known(key, CONSTRAINT_KEYS, "constraints.")
            fields[name] = _keyed(f"constraints.{key}", parse, cell)
        if "rule" not in fields:
            raise InputError("rule-missing", "a constraint has no rule", 'add rule = "whose rule it is"')
        found.append(Constraint(**fields))
    return tuple(found)


KEYS: dict[str, tuple[str, Callable[[Any], Any]]] = {
    "name": ("name", _text),
    "revision": ("revision", _text),
    "frequency": ("frequency_hz", _quantity(quantities.parse_frequency)),
    "temperature": ("temperature_c", _quantity(quantities.parse_temperature)),
    "humidity": ("humidity_pct", _percent),
    "level": ("level", _share),
    "max-gap": ("max_gap_m", _quantity(quantities.parse_length)),
    "min-ratio": ("min_ratio", _share),
    "min-signal": ("min_signal_farad", _quantity(quantities.parse_capacitance)),
    "reference": ("reference", _text),
    "cases": ("cases", _cases),
    "pad": ("pad_m", _quantity(quantities.parse_length)),
    "finger": ("finger_m", _quantity(quantities.parse_length)),
    "pitch": ("pitch_m", _quantity(quantities.parse_length)),
    "around": ("around", _around),
    "clearance": ("clearance_m", _quantity(quantities.parse_length)),
    "below": ("below", _text),
    "body": ("body_farad", _quantity(quantities.parse_capacitance)),
    "device": ("device_farad", _quantity(quantities.parse_capacitance)),
    "counts": ("counts", _number),
    "noise": ("noise", _number),
    "edition": ("edition", _text),
    "own": ("own", _flag),
    "zones": ("zones", _zones),
    "constraints": ("constraints", _constraints),
}
ALL_KEYS = ("format", "layers", *KEYS)


def _known(key: str, keys: dict[str, Any], prefix: str = "") -> Any:
    if key in keys:
        return keys[key]
    from difflib import get_close_matches

    near = get_close_matches(key, keys, 1, 0.5)
    hint = f"nearest: {prefix}{near[0]}" if near else f"there is {', '.join(keys)}"
    raise InputError("key-unknown", f'no key "{prefix}{shortened(key)}" in a stack file', hint)


def _keyed(key: str, parse: Callable[[Any], Any], value: Any) -> Any:
    try:
        return parse(value)
    except InputError as error:
        raise InputError(error.code, f"{key}: {error.text}", error.hint) from None


def parse_file_text(text: str, where: str) -> Stack:
    """A stack file's text to a Stack. InputError names the key."""
    import tomllib

    try:
        table = tomllib.loads(text.removeprefix("\ufeff"))
    except tomllib.TOMLDecodeError as error:
        raise InputError("toml", f"{where}: {printable(str(error))}", "layers stand between triple quotes") from None
    version = table.pop("format", None)
    if version is None:
        raise InputError("format-missing", f"{where}: format is missing", "begin with: format = 1")
    if version != FORMAT:
        raise InputError("format-newer", f"{where}: format {version!r} is not known", "this program reads format 1")
    layers = table.pop("layers", None)
    if layers is None:
        raise InputError("layers-missing", f"{where}: layers are missing", 'add layers = """ ... """')
    fields = {}
    for key, value in table.items():
        name, parse = _known(key, KEYS)
        fields[name] = _keyed(key, parse, value)
    return parse_stack(_keyed("layers", _text, layers))._replace(**fields)


def _read(path: str) -> str:
    try:
        if path == "-":
            import sys

            return sys.stdin.buffer.read(LONGEST_FILE).decode("utf-8-sig").replace("\r\n", "\n")
        with open(path, "rb") as handle:
            return handle.read(LONGEST_FILE).decode("utf-8-sig").replace("\r\n", "\n")
    except OSError as error:
        raise FileError("file-unreadable", f"{printable(path)}: {error.strerror}") from None
    except UnicodeDecodeError:
        raise FileError("file-encoding", f"{printable(path)} is not UTF-8 text") from None


def _is_toml(text: str) -> bool:
    """Whether standard input holds a stack file rather than bare layers."""
    return any(line.split("=")[0].strip() in ("format", "layers") for line in text.splitlines() if "=" in line)


def read_stack(path: str) -> Stack:
    """A stack from a .toml file, or from standard input (``-``: a stack file or bare layers)."""
    text = _read(path)
    if path == "-" and not _is_toml(text):
        return parse_stack(text)
    return parse_file_text(text, printable(path) if path != "-" else "standard input")


def load(stack: str | os.PathLike[str] | Stack) -> Stack:
    """A stack from text, a path, ``-``, or a Stack. A single word that ends in .toml is a file."""
    if isinstance(stack, Stack):
        return stack
    if isinstance(stack, os.PathLike):
        return read_stack(os.fspath(stack))
    word = stack.strip()
    if word == "-" or (word.endswith(".toml") and "\n" not in word and (" " not in word or Path(word).exists())):
        return read_stack(word)
    return parse_stack(stack)


def _toml_text(value: str) -> str:
    escaped = value.replace("\\", "\\\\").replace('"', '\\"')
    return '"' + "".join(c if c.isprintable() else f"\\u{ord(c):04X}" for c in escaped) + '"'


def _hertz(value: float) -> str:
    return f"{value!r}Hz"


def _farad(value: float) -> str:
    return f"{value * 1e15:.17g}fF"


WRITERS: dict[str, Callable[[Any], str]] = {
    "frequency": lambda v: _toml_text(_hertz(v)),
    "temperature": lambda v: _toml_text(f"{v!r}C"),
    "max-gap": lambda v: _toml_text(length_text(v)),
    "pad": lambda v: _toml_text(length_text(v)),
    "finger": lambda v: _toml_text(length_text(v)),
    "pitch": lambda v: _toml_text(length_text(v)),
    "clearance": lambda v: _toml_text(length_text(v)),
    "min-signal": lambda v: _toml_text(_farad(v)),
    "body": lambda v: _toml_text(_farad(v)),
    "device": lambda v: _toml_text(_farad(v)),
    "cases": lambda v: "[" + ", ".join(_toml_text(x) for x in v) + "]",
    "own": lambda v: "true" if v else "false",
}


def _key_line(key: str, value: Any) -> str:
    writer = WRITERS.get(key)
    if writer is None:
        writer = repr if isinstance(value, float) else _toml_text
    return f"{key} = {writer(value)}"


def file_text(stack: Stack) -> str:
    """A stack as the text of a stack file, in one canonical order."""
    rows = [f"format = {FORMAT}"]
    tables = []
    for key, (name, _) in KEYS.items():
        value = getattr(stack, name)
        if value in (None, (), False):
            continue
        if key == "zones":
            tables += ["", "[zones]", *(f"{_toml_text(n)} = {_toml_text(t)}" for n, t in value)]
        elif key == "constraints":
            tables += [line for c in value for line in _constraint_lines(c)]
        else:
            rows.append(_key_line(key, value))
    layers = "\n".join(layer_text(layer) for layer in stack.layers)
    return "\n".join([*rows, f'layers = """\n{layers}\n"""', *tables]) + "\n"


def _constraint_lines(constraint: Constraint) -> list[str]:
    rows = ["", "[[constraints]]"]
    for key, (name, _) in CONSTRAINT_KEYS.items():
        value = getattr(constraint, name)
        if value in (None, False):
            continue
        shown = {"minimum-thickness": lambda v: _toml_text(length_text(v)), "layer": str, "banned": lambda v: "true"}
        rows.append(f"{key} = {shown.get(key, _toml_text)(value)}")
    return rows


def write_stack(stack: Stack, path: str) -> None:
    """Write a stack file; an existing file is replaced only when it is a stack file. FileError otherwise."""
    target = Path(path)
    if target.suffix != ".toml":
        raise InputError("save-name", f'"{shortened(path)}" should end in .toml')
    if target.exists():
        try:
            read_stack(path)
        except (InputError, FileError):
            raise FileError(
                "file-other", f"{printable(path)} is there and is no stack file", "choose another name"
            ) from None
    fresh = target.with_name(f".{target.name}.{os.getpid()}")
    try:
        fresh.write_text(file_text(stack), encoding="utf-8", newline="\n")
        os.replace(fresh, target)
    except OSError as error:
        raise FileError("file-unwritable", f"{printable(path)}: {error.strerror}") from None
