"""The text of a stack file: TOML keys to the fields of a Stack, and back in one canonical order."""

from __future__ import annotations

import tomllib
from collections.abc import Callable, Mapping
from typing import Any, NamedTuple

from stackdb import quantities
from stackdb.errors import FileError, InputError
from stackdb.quantities.printing import shortened
from stackdb.stack.filevalues import (
    number_reader,
    quantity_reader,
    read_around,
    read_flag,
    read_layer_number,
    read_text,
    shown,
    write_celsius,
    write_farad,
    write_flag,
    write_hertz,
    write_length,
    write_list,
    write_number,
    write_string,
    wrong_type,
)
from stackdb.stack.grammar import parse_below, parse_stack
from stackdb.stack.layers import Constraint, Stack, to_text

FORMAT = 1


class Key(NamedTuple):
    """A key of a stack file: the field it fills, how its value is read, and how it is written."""

    field: str
    read: Callable[[Any], Any]
    write: Callable[[Any], str]


def _named(name: str, read: Callable[[Any], Any], value: object) -> Any:
    """What ``read`` makes of a value; its error is given the key's name."""
    try:
        return read(value)
    except InputError as error:
        place = f"layer {error.layer}: " if error.layer is not None else ""
        raise InputError(error.code, f"{name}: {place}{error.text}", error.hint) from None


def _below(value: object) -> str:
    text = read_text(value)
    parse_below(text)
    return text


def _layers_text(value: object) -> str:
    text = read_text(value)
    if not text.strip().casefold().endswith(".toml"):  # another stack file is read when it is asked for
        parse_stack(text)
    return text


def _case(value: object) -> str:
    text = read_text(value)
    if not text.strip():
        raise InputError("empty", "a case is empty", "write a case's name or layers")
    return text


def _cases(value: object) -> tuple[str, ...]:
    if not isinstance(value, list):
        raise wrong_type(value, 'a list, ["bare", "thin-nitrile-glove"]')
    return tuple(_case(item) for item in value)


def _zones(value: object) -> tuple[tuple[str, str], ...]:
    if not isinstance(value, dict):
        raise wrong_type(value, "a table [zones]")
    return tuple((name, _named(shortened(name), _layers_text, text)) for name, text in value.items())


INFINITE = float("inf")
_LENGTH = quantity_reader(quantities.parse_length, "0.4mm")
_FARAD = quantity_reader(quantities.parse_capacitance, "100pF")
_RATIO = number_reader(quantities.parse_share, 0.0, INFINITE)
_COUNT = number_reader(quantities.parse_number, 0.0, INFINITE)
KEYS = {
    "name": Key("name", read_text, write_string),
    "revision": Key("revision", read_text, write_string),
    "frequency": Key("frequency_hz", quantity_reader(quantities.parse_frequency, "250kHz"), write_hertz),
    "temperature": Key("temperature_c", quantity_reader(quantities.parse_temperature, "23C"), write_celsius),
    "humidity": Key("humidity_pct", number_reader(quantities.parse_percent, 0.0, 100.0), write_number),
    "level": Key("level", number_reader(quantities.parse_share, 0.5, 0.999), write_number),
    "edition": Key("edition", read_text, write_string),
    "own": Key("own", read_flag, write_flag),
    "max-gap": Key("max_gap_m", _LENGTH, write_length),
    "min-ratio": Key("min_ratio", _RATIO, write_number),
    "min-signal": Key("min_signal_farad", _FARAD, write_farad),
    "reference": Key("reference", _layers_text, write_string),
    "cases": Key("cases", _cases, write_list),
    "pad": Key("pad_m", _LENGTH, write_length),
    "finger": Key("finger_m", _LENGTH, write_length),
    "pitch": Key("pitch_m", _LENGTH, write_length),
    "around": Key("around", read_around, write_string),
    "clearance": Key("clearance_m", _LENGTH, write_length),
    "below": Key("below", _below, write_string),
    "body": Key("body_farad", _FARAD, write_farad),
    "device": Key("device_farad", _FARAD, write_farad),
    "counts": Key("counts", _COUNT, write_number),
    "noise": Key("noise", _COUNT, write_number),
}
CONSTRAINT_KEYS = {
    "rule": Key("rule", read_text, write_string),
    "owner": Key("owner", read_text, write_string),
    "clause": Key("clause", read_text, write_string),
    "layer": Key("layer", read_layer_number, str),
    "material": Key("material", read_text, write_string),
    "minimum-thickness": Key("minimum_thickness_m", _LENGTH, write_length),
    "banned": Key("banned", read_flag, write_flag),
    "note": Key("note", read_text, write_string),
}
TABLES = ("zones", "constraints")
KEY_NAMES = ("format", "layers", *KEYS, *TABLES)


def _unknown_key(key: str, known: tuple[str, ...]) -> InputError:
    from difflib import get_close_matches

    near = get_close_matches(key.casefold().replace("_", "-"), known, 1, 0.5)
    hint = f"nearest: {near[0]}" if near else f"there is {', '.join(known)}"
    return InputError("key-unknown", f'no key "{shortened(key)}" in a stack file', hint)


def _fields(table: Mapping[str, object], keys: Mapping[str, Key], known: tuple[str, ...]) -> dict[str, Any]:
    found = {}
    for name, value in table.items():
        if name not in keys:
            raise _unknown_key(name, known)
        found[keys[name].field] = _named(name, keys[name].read, value)
    return found


def _constraint(table: object, layers: int) -> Constraint:
    if not isinstance(table, dict):
        raise wrong_type(table, "a table [[constraints]]")
    fields = _fields(table, CONSTRAINT_KEYS, tuple(CONSTRAINT_KEYS))
    if "rule" not in fields:
        raise InputError("rule-missing", "a constraint without a rule", 'add rule = "whose rule it is"')
    found = Constraint(**fields)
    if (found.layer is None) == (found.material is None):
        raise InputError("constraint-place", "a constraint is for one layer or one material", "write one of the two")
    if (found.minimum_thickness_m is None) != found.banned:
        raise InputError("constraint-claim", "a constraint claims a minimum-thickness or a ban", "write one of the two")
    if found.layer is not None and found.layer > layers:
        raise InputError("out-of-range", f"layer {found.layer}, but the stack has {layers}", f"write 1 to {layers}")
    return found


def _constraints(value: object, layers: int) -> tuple[Constraint, ...]:
    if not isinstance(value, list):
        raise wrong_type(value, "tables [[constraints]]")
    return tuple(
        _named(f"constraint {number}", lambda table: _constraint(table, layers), table)
        for number, table in enumerate(value, 1)
    )


def _table(text: str, where: str) -> dict[str, Any]:
    try:
        return tomllib.loads(text)
    except (ValueError, RecursionError) as error:
        reason = shortened(str(error), 120) if isinstance(error, tomllib.TOMLDecodeError) else "too large a value"
        hint = 'write layers = """ and """ around the layers, other texts in quotes'
        raise FileError("file-damaged", f"{where} is not TOML: {reason}", hint) from None


def is_stack_file(text: str) -> bool:
    """Whether a text is a stack file's, of this or another format."""
    try:
        table = tomllib.loads(text)
    except (ValueError, RecursionError):
        return False
    return "format" in table and "layers" in table


def _check_format(table: dict[str, Any], where: str) -> None:
    version = table.get("format")
    if version is None:
        raise InputError("format-missing", f"{where}: format is missing", "begin with format = 1")
    if not isinstance(version, int) or isinstance(version, bool) or version < 1:
        raise InputError("format", f"{where}: format {shortened(shown(version))} is none", "write format = 1")
    if version > FORMAT:
        hint = "take a newer stackdb, or write the file anew"
        raise FileError("file-newer", f"{where} is of format {version}; this program reads {FORMAT}", hint)


def stack_of(text: str, where: str) -> Stack:
    """A stack from the text of a stack file. FileError where it is damaged or newer; InputError names key or layer."""
    table = _table(text.removeprefix("\ufeff"), where)
    _check_format(table, where)
    plain = {key: value for key, value in table.items() if key not in ("format", "layers", *TABLES)}
    try:
        fields = _fields(plain, KEYS, KEY_NAMES)
        if "layers" not in table:
            raise InputError("layers-missing", "layers are missing", 'write layers = """ and """ around them')
        layers_text = _named("layers", read_text, table["layers"])
        fields["zones"] = _named("zones", _zones, table.get("zones", {}))
    except InputError as error:
        raise InputError(error.code, f"{where}: {error.text}", error.hint) from None
    stack = _layers(layers_text, where)
    try:
        fields["constraints"] = _constraints(table.get("constraints", []), len(stack.layers))
    except InputError as error:
        raise InputError(error.code, f"{where}: {error.text}", error.hint) from None
    return stack._replace(**fields)


def _layers(text: str, where: str) -> Stack:
    try:
        return parse_stack(text)
    except InputError as error:
        raise InputError(
            error.code, f"{error.text} (in {where})", error.hint, layer=error.layer, span=error.span
        ) from None


def _lines_of(values: Any, keys: Mapping[str, Key]) -> list[str]:
    """One line a field that says something."""
    rows = []
    for name, key in keys.items():
        value = getattr(values, key.field)
        if value is not None and value is not False and value != ():
            rows.append(f"{name} = {key.write(value)}")
    return rows


def toml_text(stack: Stack) -> str:
    """A stack as the text of a stack file; InputError where no text reads back to the same stack.

    >>> print(toml_text(parse_stack("pmma 2mm / acrylic-oca 150um")._replace(name="Lid")).replace(chr(34), "'"))
    format = 1
    name = 'Lid'
    layers = '''
    pmma 2mm
    acrylic-oca 150um
    '''
    <BLANKLINE>
    """
    layers = to_text(stack, "\n")
    rows = [f"format = {FORMAT}", *_lines_of(stack, KEYS), f'layers = """\n{layers}\n"""']
    if stack.zones:
        rows += ["", "[zones]", *(f"{write_string(name)} = {write_string(text)}" for name, text in stack.zones)]
    for constraint in stack.constraints:
        rows += ["", "[[constraints]]", *_lines_of(constraint, CONSTRAINT_KEYS)]
    text = "\n".join(rows) + "\n"
    try:
        same = stack_of(text, "this stack") == stack
    except FileError:
        same = False
    if not same:
        raise InputError("no-text", "this stack has no text that reads back the same", "look at names and sizes")
    return text
