"""What starts up: an allow list of what ``show`` and ``compose`` may import, in a fresh interpreter."""

from __future__ import annotations

import subprocess
import sys

import pytest

HEAVY = {
    "numpy", "pandas", "scipy", "sqlite_utils", "matplotlib", "tomllib", "difflib", "platformdirs", "statistics",
    "decimal", "hypothesis", "json",
}  # fmt: skip
OURS = {
    "stackdb", "stackdb.errors", "stackdb.results", "stackdb.quantities", "stackdb.catalogue", "stackdb.evidence",
    "stackdb.dielectrics", "stackdb.stack", "stackdb.studies", "stackdb.touch", "stackdb.output", "stackdb.cli",
}  # fmt: skip
CODE = """
import sys
from stackdb.cli import run
status = run({arguments!r})
sys.stderr.write("\\n".join(sorted(sys.modules)))
sys.exit(status)
"""


def loaded(*arguments: str) -> set[str]:
    ran = subprocess.run(
        [sys.executable, "-c", CODE.format(arguments=list(arguments))], capture_output=True, check=True, text=True
    )
    return set(ran.stderr.split())


@pytest.mark.parametrize(
    "arguments",
    [("show", "soda-lime-glass"), ("compose", "soda-lime-glass 1.8mm / acrylic-oca 150um / pet-film 125um")],
)
def test_nothing_heavy_is_loaded(arguments):
    modules = loaded(*arguments)
    tops = {m.split(".")[0] for m in modules}
    assert not tops & HEAVY
    assert not {m for m in modules if m.startswith("stackdb.fields")}
    ours = {".".join(m.split(".")[:2]) for m in modules if m.startswith("stackdb")}
    assert ours <= OURS


ALLOWED = {
    "locale",
    "_locale",
    "keyword",
    "_opcode",
    "opcode",
    "dis",
    "inspect",
    "token",
    "tokenize",
    "linecache",
    "copy",
    "ast",
    "_ast",
    "__future__",
}


@pytest.mark.parametrize(
    "arguments",
    [("show", "soda-lime-glass"), ("compose", "soda-lime-glass 1.8mm / acrylic-oca 150um / pet-film 125um")],
)
def test_the_allow_list(arguments):
    baseline = "import click, sqlite3, sys; from rich.table import Table; from rich.console import Console; print(*sys.modules)"
    ran = subprocess.run([sys.executable, "-c", baseline], capture_output=True, check=True, text=True)
    extra = {
        m for m in loaded(*arguments) - set(ran.stdout.split()) if not m.startswith(("stackdb", "click", "encodings"))
    }
    assert extra <= ALLOWED, sorted(extra - ALLOWED)


def test_json_loads_no_rich():
    modules = loaded("compose", "soda-lime-glass 1.8mm", "--json")
    assert "rich" not in {m.split(".")[0] for m in modules}
    assert "json" in modules
