"""Opening a catalogue read only, and every question that is asked of it."""

from __future__ import annotations

import sqlite3
from collections.abc import Iterable
from typing import TYPE_CHECKING, Any, NamedTuple, TypeVar

from stackdb.catalogue.folding import fold, grams
from stackdb.catalogue.records import (
    ConductivityRecord,
    DispersionRecord,
    Edition,
    KindDefault,
    Material,
    PermittivityRecord,
    Source,
    ThicknessRecord,
    TouchCase,
)
from stackdb.errors import FileError

if TYPE_CHECKING:
    from types import TracebackType

SCHEMA_VERSION = 1
LEAST_SQLITE = (3, 37)
SHIPPED = __file__.removesuffix("opening.py") + "stackdb.sqlite"
Record = TypeVar("Record", bound=NamedTuple)


class Check(NamedTuple):
    """One check of ``verify``."""

    name: str
    ok: bool
    text: str


def _columns(record: type[Any]) -> str:
    return ", ".join(f'"{name}"' for name in record._fields)


class Catalogue:
    """A catalogue opened read only. All SQL of the project is here and in ``build``."""

    def __init__(self, database: sqlite3.Connection, path: str) -> None:
        self._database = database
        self.path = path

    def __enter__(self) -> Catalogue:
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        self.close()

    @property
    def handle(self) -> tuple[sqlite3.Connection, str]:
        """The connection and the path, for a catalogue laid over this one."""
        return self._database, self.path

    def close(self) -> None:
        """Let the file go."""
        self._database.close()

    def _rows(self, sql: str, *values: Any) -> list[Any]:
        try:
            return self._database.execute(sql, values).fetchall()
        except sqlite3.DatabaseError as error:
            raise FileError("catalogue-damaged", f"{self.path} is damaged: {error}", "restore or rebuild it") from None

    def _select(self, record: type[Record], table: str, rest: str, *values: Any) -> tuple[Record, ...]:
        sql = f"SELECT {_columns(record)} FROM {table} {rest}"  # noqa: S608 - names of our own tables
        return tuple(record(*row) for row in self._rows(sql, *values))

    def materials_named(self, text: str) -> tuple[Material, ...]:
        """Materials of that key, name or alias, however it is written; a key of its own comes alone."""
        folded = fold(text)
        found = self._select(
            Material, "material", "WHERE key IN (SELECT material FROM name WHERE folded = ?) ORDER BY key", folded
        )
        exact = tuple(m for m in found if m.key == folded)
        return exact or found

    def material(self, key: str) -> Material | None:
        """The material of that key."""
        found = self._select(Material, "material", "WHERE key = ?", key)
        return found[0] if found else None

    def materials(self) -> tuple[Material, ...]:
        """All materials by key."""
        return self._select(Material, "material", "ORDER BY key")

    def aliases(self, key: str) -> tuple[str, ...]:
        """Every name of a material beside its key."""
        rows = self._rows("SELECT shown FROM name WHERE material = ? AND shown <> ? ORDER BY folded", key, key)
        return tuple(r[0] for r in rows)

    def permittivities(self, key: str) -> tuple[PermittivityRecord, ...]:
        """A material's records, those of the substance it is a form of, and those of its own forms."""
        return self._select(
            PermittivityRecord,
            "permittivity",
            "WHERE material IN (SELECT ?1 UNION SELECT substance FROM material WHERE key = ?1"
            " UNION SELECT key FROM material WHERE substance = ?1) ORDER BY material, source, frequency_hz, rowid",
            key,
        )

    def _own_or_substance(self, record: type[Record], table: str, key: str) -> tuple[Record, ...]:
        own = self._select(record, table, "WHERE material = ? ORDER BY rowid", key)
        if own:
            return own
        return self._select(
            record, table, "WHERE material = (SELECT substance FROM material WHERE key = ?) ORDER BY rowid", key
        )

    def thicknesses(self, key: str) -> tuple[ThicknessRecord, ...]:
        """Thicknesses on the market and tolerance rules, the substance's where the form has none."""
        return self._own_or_substance(ThicknessRecord, "thickness", key)

    def conductivities(self, key: str) -> tuple[ConductivityRecord, ...]:
        """Conductivities and sheet resistances."""
        return self._own_or_substance(ConductivityRecord, "conductivity", key)

    def dispersions(self, key: str) -> tuple[DispersionRecord, ...]:
        """Published models."""
        return self._select(DispersionRecord, "dispersion", "WHERE material = ? ORDER BY rowid", key)

    def sources(self, keys: Iterable[str] | None = None) -> tuple[Source, ...]:
        """Sources by key: those named, or all."""
        if keys is None:
            return self._select(Source, "source", "ORDER BY key")
        wanted = sorted(set(keys))
        marks = ", ".join("?" * len(wanted))
        return self._select(Source, "source", f"WHERE key IN ({marks}) ORDER BY key", *wanted)

    def uses_of_source(self, key: str) -> tuple[tuple[str, str, int], ...]:
        """Material, table and number of rows for everything that rests on a source."""
        parts = " UNION ALL ".join(
            f"SELECT material, '{table}' AS place FROM {table} WHERE source = ?1"  # noqa: S608 - our own tables
            for table in ("permittivity", "thickness", "conductivity", "dispersion")
        )
        parts += " UNION ALL SELECT material, 'quoted' FROM permittivity WHERE quoted_in = ?1"
        parts += " UNION ALL SELECT key, 'index' FROM material WHERE index_source = ?1"
        parts += " UNION ALL SELECT key, 'uptake' FROM material WHERE uptake_source = ?1"
        parts += " UNION ALL SELECT key, 'touch_case' FROM touch_case WHERE source = ?1"
        parts += " UNION ALL SELECT kind, 'kind' FROM kind WHERE source = ?1"
        rows = self._rows(f"SELECT material, place, count(*) FROM ({parts}) GROUP BY 1, 2 ORDER BY 1, 2", key)  # noqa: S608
        return tuple((r[0], r[1], r[2]) for r in rows)

    def kind_default(self, kind: str) -> KindDefault:
        """What a kind of material gets where nothing better is recorded."""
        return self._select(KindDefault, "kind", "WHERE kind = ?", kind)[0]

    def touch_cases(self) -> tuple[TouchCase, ...]:
        """The named ways of touching, hands first."""
        return self._select(TouchCase, "touch_case", 'ORDER BY "group", key')

    def touch_case(self, key: str) -> TouchCase | None:
        """One way of touching by its key or name."""
        folded = fold(key)
        return next((c for c in self.touch_cases() if folded in (c.key, fold(c.name))), None)

    def search(self, text: str, kind: str | None = None) -> tuple[Material, ...]:
        """Materials whose names or description hold every word; each word quoted, matched from its start."""
        words = fold(text).split("-") if text.strip() else []
        words = [w for w in words if w]
        where, values = [], []
        if words:
            where.append("key IN (SELECT material FROM search WHERE search MATCH ?)")
            values.append(" AND ".join('"{}"*'.format(w.replace('"', '""').replace("\0", "")) for w in words))
        if kind is not None:
            where.append("kind = ?")
            values.append(fold(kind))
        clause = f"WHERE {' AND '.join(where)} " if where else ""
        found = self._select(Material, "material", f"{clause}ORDER BY kind, key", *values)
        if found or not words:
            return found
        inside = self._rows("SELECT DISTINCT material FROM name WHERE instr(folded, ?) ORDER BY material", fold(text))
        hits = [m for (key,) in inside if (m := self.material(key)) is not None]
        return tuple(m for m in hits if kind is None or m.kind == fold(kind))

    def nearest(self, text: str, limit: int = 3) -> tuple[str, ...]:
        """The material keys or names most like a text, by shared trigrams; few at most, the best first."""
        wanted = sorted(grams(fold(text)[:80]))
        marks = ", ".join("?" * len(wanted))
        rows = self._rows(
            f"SELECT g.folded, count(*) AS shared, min(n.material) FROM gram g JOIN name n USING (folded)"  # noqa: S608
            f" WHERE gram IN ({marks}) GROUP BY g.folded",
            *wanted,
        )
        scored = sorted((-2.0 * shared / (len(wanted) + len(grams(f))), f, m) for f, shared, m in rows)
        found: list[str] = []
        for score, folded, material in scored:
            if -score < 0.4 or len(found) == limit:
                break
            shown = folded if folded == material else material
            if shown not in found:
                found.append(shown)
        return tuple(found)

    def edition(self) -> Edition:
        """The schema, edition and digest."""
        return self._select(Edition, "edition", "")[0]

    def check_integrity(self) -> tuple[Check, ...]:
        """The file's own checks: pages, foreign keys."""
        pages = self._rows("PRAGMA integrity_check")[0][0]
        foreign = self._rows("PRAGMA foreign_key_check")
        return (
            Check("pages", pages == "ok", f"integrity check says {pages}"),
            Check("references", not foreign, f"{len(foreign)} rows refer to nothing"),
        )


def open_catalogue(path: str | None = None) -> Catalogue:
    """Open the catalogue shipped, or the file named, read only; FileError when it cannot be used."""
    return Catalogue(*connect(path))


def connect(path: str | None = None) -> tuple[sqlite3.Connection, str]:
    """Connect read only to the catalogue shipped or to the file named.

    Raises FileError, naming the file, when it is missing, not a catalogue, damaged, or from a newer version; and when SQLite
    is older than 3.37.
    """
    if sqlite3.sqlite_version_info < LEAST_SQLITE:
        raise FileError("sqlite-old", f"SQLite {sqlite3.sqlite_version} is too old", "3.37 or newer is needed")
    where = str(path or SHIPPED)
    try:
        database = sqlite3.connect(f"file:{_quoted(where)}?mode=ro&immutable=1", uri=True)
        row = database.execute("SELECT schema FROM edition").fetchone()
    except sqlite3.Error as error:
        raise FileError(
            "catalogue-unusable", f"{where} is not a usable catalogue: {error}", "restore or rebuild it"
        ) from None
    if row is None or row[0] > SCHEMA_VERSION:
        raise FileError("catalogue-newer", f"{where} is from a newer version", "update stackdb")
    return database, where


def _quoted(path: str) -> str:
    """A path for a file URI: only what a URI would read otherwise is escaped."""
    return path.replace("%", "%25").replace("?", "%3f").replace("#", "%23")
