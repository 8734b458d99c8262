"""The tables, described once: the checks of ``data/*.csv`` and the schema of the database both come from here."""

from __future__ import annotations

from typing import NamedTuple

SCHEMA_VERSION = 1

KINDS = (
    "cover-lens",
    "adhesive",
    "film",
    "coating",
    "ink",
    "substrate",
    "spacer",
    "glove",
    "textile",
    "liquid",
    "skin",
    "conductor",
)
CHECKED = ("read", "quoted", "recalled")
FLAGS = ("midpoint", "upper-limit", "lower-limit", "misprint", "other-substance", "computed", "unfit")


class Column(NamedTuple):
    """A column: its name in the text, its SQLite type, what its values may be.

    ``column`` and ``scale`` say how it is stored where that differs (millimetres become metres).
    """

    name: str
    type: str = "TEXT"
    required: bool = False
    words: tuple[str, ...] = ()
    low: float | None = None
    high: float | None = None
    refers: str = ""
    column: str = ""
    scale: float = 1.0

    @property
    def stored(self) -> str:
        """The column's name in the database."""
        return self.column or self.name


class Table(NamedTuple):
    """A table: its columns, its key, and conditions between columns as (SQL, what is wrong)."""

    name: str
    columns: tuple[Column, ...]
    key: tuple[str, ...] = ()
    conditions: tuple[tuple[str, str], ...] = ()


def _cited() -> tuple[Column, ...]:
    return (
        Column("source", required=True, refers="source"),
        Column("locator", required=True),
        Column("checked", required=True, words=CHECKED),
    )


def _millimetres(name: str, low: float = 0.0) -> Column:
    return Column(name, "REAL", low=low, high=1000.0, column=name.removesuffix("_mm") + "_m", scale=1e-3)


_MATERIAL = Column("material", required=True, refers="material")
_FREQUENCY = Column("frequency_hz", "REAL", low=1e-6, high=1e16)
_TEMPERATURE = Column("temperature_c", "REAL", low=-273.15, high=2000.0)
_REMARK = Column("remark")

TABLES = (
    Table(
        "source",
        (
            Column("key", required=True),
            Column(
                "kind",
                required=True,
                words=("standard", "handbook", "paper", "patent", "supplier-sheet", "dataset", "web", "practice"),
            ),
            Column("authors"),
            Column("title"),
            Column("year", "INTEGER", low=1700, high=2100),
            Column("publisher"),
            Column("identifier"),
            Column("anonymous", "INTEGER", words=("yes", "no")),
            Column("note"),
        ),
        ("key",),
    ),
    Table(
        "material",
        (
            Column("key", required=True),
            Column("name", required=True),
            Column("kind", required=True, words=KINDS),
            Column("fixity", required=True, words=("defined", "graded", "compounded", "porous")),
            Column("substance", refers="material"),
            Column("description"),
            Column("conducts", required=True, words=("no", "yes", "unknown")),
            Column("refractive_index", "REAL", low=1.0, high=5.0),
            Column("index_axis", words=("isotropic", "through", "in-plane", "unknown")),
            Column("index_band", words=("sodium", "long-wave")),
            Column("index_source", refers="source"),
            Column("index_locator"),
            Column("index_checked", words=CHECKED),
            Column("uptake_pct", "REAL", low=0.0, high=1000.0),
            Column("uptake_source", refers="source"),
            Column("uptake_locator"),
            Column("uptake_checked", words=CHECKED),
        ),
        ("key",),
        (
            ("(refractive_index IS NULL) = (index_source IS NULL)", "an index needs its source and a source its index"),
            ("(uptake_pct IS NULL) = (uptake_source IS NULL)", "an uptake needs its source and a source its uptake"),
        ),
    ),
    Table("alias", (_MATERIAL, Column("alias", required=True)), ("material", "alias")),
    Table(
        "permittivity",
        (
            _MATERIAL,
            Column("value", "REAL", low=1.0, high=1e6),
            Column("low", "REAL", low=1.0, high=1e6),
            Column("high", "REAL", low=1.0, high=1e6),
            Column("loss_tangent", "REAL", low=0.0, high=1e5),
            _FREQUENCY,
            _TEMPERATURE,
            Column("humidity_pct", "REAL", low=0.0, high=100.0),
            Column("conditioning", words=("dry", "conditioned", "wet")),
            Column("direction", required=True, words=("through", "in-plane", "isotropic", "unknown")),
            Column("method"),
            *_cited(),
            Column("quoted_in", refers="source"),
            Column("flags"),
            _REMARK,
        ),
        (),
        (
            ("value IS NOT NULL OR loss_tangent IS NOT NULL", "neither a permittivity nor a loss tangent"),
            ("low IS NULL OR value IS NULL OR low <= value", "low is above value"),
            ("high IS NULL OR value IS NULL OR high >= value", "high is below value"),
        ),
    ),
    Table(
        "thickness",
        (
            _MATERIAL,
            _millimetres("nominal_mm", 1e-7),
            _millimetres("from_mm"),
            _millimetres("to_mm"),
            _millimetres("minus_mm"),
            _millimetres("plus_mm"),
            Column("minus_share", "REAL", low=0.0, high=0.95),
            Column("plus_share", "REAL", low=0.0, high=5.0),
            Column(
                "form",
                required=True,
                words=(
                    "sheet",
                    "film",
                    "tape",
                    "coating",
                    "bond-line",
                    "glove-wall",
                    "fabric",
                    "laminate",
                    "other",
                ),
            ),
            *_cited(),
            _REMARK,
        ),
        (),
        (
            ("nominal_m IS NOT NULL OR from_m IS NOT NULL", "neither a thickness nor a span"),
            ("minus_m IS NULL OR nominal_m IS NULL OR minus_m < nominal_m", "the tolerance is larger than the layer"),
        ),
    ),
    Table(
        "conductivity",
        (
            _MATERIAL,
            Column("quantity", required=True, words=("conductivity", "sheet-resistance")),
            Column("value", "REAL", required=True, low=0.0, high=1e18),
            Column("low", "REAL", low=0.0, high=1e18),
            Column("high", "REAL", low=0.0, high=1e18),
            Column("unit", required=True, words=("S/m", "ohm/sq")),
            _FREQUENCY,
            _TEMPERATURE,
            Column("conditions"),
            *_cited(),
            _REMARK,
        ),
        (),
        (("(quantity = 'conductivity') = (unit = 'S/m')", "quantity and unit do not go together"),),
    ),
    Table(
        "dispersion",
        (
            _MATERIAL,
            Column(
                "model",
                required=True,
                words=("debye", "cole-cole", "water-static", "ice", "sea-water", "salt-water", "moist-air"),
            ),
            Column("parameters", required=True),
            Column("frequency_low_hz", "REAL", low=0.0, high=1e16),
            Column("frequency_high_hz", "REAL", low=0.0, high=1e16),
            Column("temperature_low_c", "REAL", low=-273.15, high=2000.0),
            Column("temperature_high_c", "REAL", low=-273.15, high=2000.0),
            *_cited(),
            _REMARK,
        ),
        (),
        (("json_valid(parameters)", "parameters are not JSON"),),
    ),
    Table(
        "touch_case",
        (
            Column("key", required=True),
            Column("name", required=True),
            Column("group", required=True, words=("hand", "surface")),
            Column("layers", required=True),
            _millimetres("contact_mm"),
            Column("verdict", words=("refused",)),
            *_cited(),
            _REMARK,
        ),
        ("key",),
    ),
    Table(
        "kind",
        (
            Column("kind", required=True, words=KINDS),
            Column("tolerance_share", "REAL", required=True, low=0.0, high=0.95),
            Column("loss_tangent", "REAL", low=0.0, high=10.0),
            *_cited(),
            _REMARK,
        ),
        ("kind",),
    ),
)
LEFT_OUT = Table(
    "left_out",
    (
        Column("material", required=True),
        Column("quantity", required=True),
        Column("value"),
        Column("unit"),
        Column("frequency_hz"),
        Column("source", required=True),
        Column("reason", required=True),
    ),
)


def _check(column: Column) -> str:
    name = f'"{column.stored}"'
    checks = []
    if column.words:
        if column.type == "INTEGER":
            checks.append(f"{name} IN (0, 1)")
        else:
            words = ", ".join(f"'{word}'" for word in column.words)
            checks.append(f"{name} IN ({words})")
    if not column.words and column.low is not None:
        checks.append(f"{name} >= {column.low * column.scale!r}")
    return f" CHECK ({' AND '.join(checks)})" if checks else ""


def ddl(table: Table) -> str:
    """CREATE TABLE of a table: STRICT, with what physics fixes as CHECK constraints."""
    lines = []
    for c in table.columns:
        null = " NOT NULL" if c.required else ""
        refers = f" REFERENCES {c.refers} (key)" if c.refers else ""
        lines.append(f'"{c.stored}" {c.type}{null}{_check(c)}{refers}')
    if table.key:
        lines.append("PRIMARY KEY ({})".format(", ".join(f'"{k}"' for k in table.key)))
    lines += [f"CHECK ({sql})" for sql, _ in table.conditions]
    rowid = ", WITHOUT ROWID" if table.key else ""
    return f"CREATE TABLE {table.name} (\n  " + ",\n  ".join(lines) + f"\n) STRICT{rowid}"


INDEXES = (
    "CREATE TABLE name (folded TEXT NOT NULL, material TEXT NOT NULL REFERENCES material (key), shown TEXT NOT NULL,"
    " PRIMARY KEY (folded, material)) STRICT, WITHOUT ROWID",
    "CREATE TABLE gram (gram TEXT NOT NULL, folded TEXT NOT NULL, PRIMARY KEY (gram, folded)) STRICT, WITHOUT ROWID",
    "CREATE VIRTUAL TABLE search USING fts5 (material UNINDEXED, text, tokenize = 'unicode61')",
    "CREATE INDEX permittivity_material ON permittivity (material)",
    "CREATE INDEX permittivity_source ON permittivity (source)",
    "CREATE INDEX thickness_material ON thickness (material)",
    "CREATE INDEX conductivity_material ON conductivity (material)",
    "CREATE INDEX dispersion_material ON dispersion (material)",
    "CREATE INDEX material_substance ON material (substance)",
    "CREATE TABLE edition (schema INTEGER NOT NULL, edition TEXT NOT NULL, digest TEXT NOT NULL) STRICT",
)


def create_statements() -> list[str]:
    """Every statement that makes the empty catalogue."""
    return [*(ddl(t) for t in TABLES), *INDEXES]
