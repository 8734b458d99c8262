"""Compile ``data/*.csv`` into the catalogue, with the standard library alone; all faults are reported at once."""

from __future__ import annotations

import csv
import hashlib
import os
import re
import sqlite3
from collections.abc import Iterator
from pathlib import Path
from typing import NamedTuple

from stackdb.catalogue.folding import fold, grams
from stackdb.catalogue.tables import FLAGS, LEFT_OUT, SCHEMA_VERSION, TABLES, Column, Table, create_statements
from stackdb.errors import StackdbError

Value = str | float | int | None
FORBIDDEN = re.compile(r"[/=#,()\[\]{}<>|;:\"]")
GRAMMAR_WORDS = {"in", "or", "by", "none"}
UNITS = {
    "nm", "um", "mm", "cm", "m", "mil", "thou", "hz", "khz", "mhz", "ghz", "c", "k", "ff", "pf", "nf", "ohm", "kohm", "mohm",
}  # fmt: skip


class Fault(NamedTuple):
    """What is wrong, and where: file, line, column name."""

    file: str
    line: int
    column: str
    reason: str

    def __str__(self) -> str:
        return f"{self.file}:{self.line}:{self.column} {self.reason}"


class DataFaults(StackdbError):
    """All faults of a data folder."""

    exit_status = 2

    def __init__(self, faults: list[Fault]) -> None:
        super().__init__("data-faults", "\n".join(str(f) for f in faults))
        self.faults = faults


class Row(NamedTuple):
    """A checked row and where it stands."""

    line: int
    values: dict[str, Value]


def _number(column: Column, text: str) -> tuple[Value, str]:
    try:
        number = float(text)
    except ValueError:
        return None, f'"{text}" is not a number'
    if number != number or number in (float("inf"), float("-inf")):
        return None, f'"{text}" is not finite'
    if (column.low is not None and number < column.low) or (column.high is not None and number > column.high):
        return None, f'"{text}" is outside {column.low:g} to {column.high:g}'
    if column.type == "INTEGER":
        return (int(number), "") if number == int(number) else (None, f'"{text}" is not a whole number')
    return (float(f"{text}e-3") if column.scale == 1e-3 and "e" not in text.lower() else number * column.scale), ""


def _value(column: Column, text: str) -> tuple[Value, str]:
    """A cell's value and what is wrong with it, if anything."""
    if text == "":
        return (0 if column.words == ("yes", "no") else None), "missing" if column.required else ""
    if column.words and text not in column.words:
        return None, f'"{text}" is none of {", ".join(column.words)}'
    if column.words == ("yes", "no"):
        return int(text == "yes"), ""
    if column.type == "TEXT":
        return text, "" if text == text.strip() else "blanks at an end"
    return _number(column, text)


def _rows(path: Path, table: Table, faults: list[Fault]) -> list[Row]:
    """The checked rows of a file, every fault noted."""
    with path.open(encoding="utf-8", newline="") as handle:
        reader = csv.reader(handle)
        header = next(reader, [])
        names = [c.name for c in table.columns]
        if header != names:
            faults.append(Fault(path.name, 1, "-", f"the header should be {','.join(names)}"))
            return []
        found = []
        for cells in reader:
            if len(cells) != len(names):
                faults.append(Fault(path.name, reader.line_num, "-", f"{len(cells)} cells, {len(names)} expected"))
                continue
            values: dict[str, Value] = {}
            for column, text in zip(table.columns, cells, strict=True):
                values[column.stored], wrong = _value(column, text)
                if wrong:
                    faults.append(Fault(path.name, reader.line_num, column.name, wrong))
            found.append(Row(reader.line_num, values))
    return found


def name_fault(name: str) -> str:
    """Why a key, name or alias cannot be one, or an empty text."""
    found = FORBIDDEN.search(name)
    if found:
        return f'"{name}" holds "{found.group()}"'
    for word in name.casefold().split():
        if re.fullmatch(r"[+.]?\d+([.]\d+)?", word):
            return f'"{name}" holds the free-standing number {word}'
        if word in UNITS or word in GRAMMAR_WORDS:
            return f'"{name}" holds the free-standing word {word}'
    return ""


def _name_faults(rows: dict[str, list[Row]]) -> Iterator[Fault]:
    for row in rows["material"]:
        for column in ("key", "name"):
            reason = name_fault(str(row.values[column] or ""))
            if reason:
                yield Fault("material.csv", row.line, column, reason)
        key = str(row.values["key"])
        if key != fold(key):
            yield Fault("material.csv", row.line, "key", f'"{key}" should be "{fold(key)}"')
    for row in rows["alias"]:
        reason = name_fault(str(row.values["alias"] or ""))
        if reason:
            yield Fault("alias.csv", row.line, "alias", reason)


def _reference_faults(rows: dict[str, list[Row]]) -> Iterator[Fault]:
    """Keys that stand twice, keys that resolve to nothing, sources that nothing uses."""
    keys: dict[str, set[Value]] = {}
    for name in ("source", "material"):
        seen: set[Value] = set()
        for row in rows[name]:
            if row.values["key"] in seen:
                yield Fault(f"{name}.csv", row.line, "key", f'"{row.values["key"]}" stands twice')
            seen.add(row.values["key"])
        keys[name] = seen
    used: set[Value] = set()
    for table, column in ((t, c) for t in TABLES for c in t.columns if c.refers):
        values = {row.values[column.stored] for row in rows[table.name]}
        used |= values if column.refers == "source" else set()
        loose = values - keys[column.refers] - {None}
        for row in rows[table.name] if loose else ():
            if row.values[column.stored] in loose:
                text = f'no {column.refers} "{row.values[column.stored]}"'
                yield Fault(f"{table.name}.csv", row.line, column.name, text)
    for row in rows["source"]:
        if row.values["key"] not in used:
            yield Fault("source.csv", row.line, "key", f'nothing rests on "{row.values["key"]}"')


def _row_faults(rows: dict[str, list[Row]]) -> Iterator[Fault]:
    """Rules between the cells of a permittivity row, and rows that stand twice."""
    seen: dict[tuple[Value, ...], int] = {}
    kinds = {r.values["key"]: r.values["kind"] for r in rows["source"]}
    for row in rows["permittivity"]:
        v = row.values
        for flag in str(v["flags"] or "").split():
            if flag not in FLAGS:
                yield Fault("permittivity.csv", row.line, "flags", f'no flag "{flag}"')
        if kinds.get(v["source"]) == "practice" and v["checked"] != "recalled":
            yield Fault("permittivity.csv", row.line, "checked", "memory and common practice are always recalled")
        place = tuple(x for k, x in v.items() if k not in ("remark", "flags", "low", "high", "method", "quoted_in"))
        if place in seen:
            yield Fault("permittivity.csv", row.line, "-", f"the same as line {seen[place]}")
        seen[place] = row.line


def read_data(folder: Path) -> dict[str, list[Row]]:
    """All tables of a data folder, checked. Raises DataFaults with every fault."""
    faults: list[Fault] = []
    rows = {}
    for table in (*TABLES, LEFT_OUT):
        path = folder / f"{table.name}.csv"
        if path.exists():
            rows[table.name] = _rows(path, table, faults)
        else:
            rows[table.name] = []
            faults.append(Fault(path.name, 0, "-", "the file is missing"))
    if not faults:
        faults += [*_name_faults(rows), *_reference_faults(rows), *_row_faults(rows)]
    if faults:
        raise DataFaults(faults)
    return rows


def digest(folder: Path) -> str:
    """SHA-256 over the names and contents of the text that a catalogue is built from."""
    total = hashlib.sha256()
    for name in sorted(p.name for p in folder.iterdir() if p.suffix in (".csv", ".txt")):
        total.update(name.encode() + b"\0" + (folder / name).read_bytes() + b"\0")
    return total.hexdigest()


def _insert(database: sqlite3.Connection, table: Table, rows: list[Row], faults: list[Fault]) -> None:
    names = [c.stored for c in table.columns]
    marks = ", ".join("?" * len(names))
    columns = ", ".join(f'"{n}"' for n in names)
    for row in rows:
        try:
            database.execute(
                f"INSERT INTO {table.name} ({columns}) VALUES ({marks})",  # noqa: S608 - names of our own tables
                [row.values[n] for n in names],
            )
        except sqlite3.IntegrityError as error:
            text = str(error)
            reason = next((why for sql, why in table.conditions if sql in text), text)
            faults.append(Fault(f"{table.name}.csv", row.line, "-", reason))


def _index_names(database: sqlite3.Connection, rows: dict[str, list[Row]]) -> None:
    shown: dict[tuple[str, str], str] = {}
    texts: dict[str, list[str]] = {}
    for row in rows["material"]:
        key, name = str(row.values["key"]), str(row.values["name"])
        texts[key] = [key, name, str(row.values["description"] or "")]
        for text in (key, name):
            shown.setdefault((fold(text), key), text)
    for row in rows["alias"]:
        key, alias = str(row.values["material"]), str(row.values["alias"])
        shown.setdefault((fold(alias), key), alias)
        texts[key].append(alias)
    database.executemany("INSERT INTO name VALUES (?, ?, ?)", [(f, m, s) for (f, m), s in sorted(shown.items())])
    pairs = sorted({(g, folded) for folded, _ in shown for g in grams(folded)})
    database.executemany("INSERT INTO gram VALUES (?, ?)", pairs)
    database.executemany("INSERT INTO search VALUES (?, ?)", [(k, " ".join(t)) for k, t in sorted(texts.items())])


def build(folder: Path, target: Path) -> None:
    """Compile a data folder into a new SQLite file that replaces ``target`` at the end. Raises DataFaults."""
    rows = read_data(folder)
    edition = (folder / "edition.txt").read_text(encoding="utf-8").strip()
    target.parent.mkdir(parents=True, exist_ok=True)
    fresh = target.with_suffix(f".{os.getpid()}.tmp")
    fresh.unlink(missing_ok=True)
    database = sqlite3.connect(fresh)
    try:
        # Rows may refer to rows that follow; what refers to nothing is found by read_data, and once more here at the end.
        database.execute("PRAGMA foreign_keys = OFF")
        with database:
            for statement in create_statements():
                database.execute(statement)
            faults: list[Fault] = []
            for table in TABLES:
                _insert(database, table, rows[table.name], faults)
            if faults:
                raise DataFaults(faults)
            _index_names(database, rows)
            database.execute("INSERT INTO edition VALUES (?, ?, ?)", (SCHEMA_VERSION, edition, digest(folder)))
        if database.execute("PRAGMA foreign_key_check").fetchall():
            raise DataFaults([Fault("-", 0, "-", "a row refers to nothing")])
        database.execute("PRAGMA optimize")
        database.execute("VACUUM")
    except BaseException:
        database.close()
        fresh.unlink(missing_ok=True)
        raise
    database.close()
    os.replace(fresh, target)


def write_sorted(folder: Path) -> None:
    """Rewrite every file in the canonical order: rows sorted by their cells, LF, one header."""
    for table in (*TABLES, LEFT_OUT):
        path = folder / f"{table.name}.csv"
        with path.open(encoding="utf-8", newline="") as handle:
            header, *body = list(csv.reader(handle))
        with path.open("w", encoding="utf-8", newline="") as handle:
            writer = csv.writer(handle, lineterminator="\n")
            writer.writerows([header, *sorted(body)])
