#!/usr/bin/env python3
"""Compile ``data/`` into the catalogue: by hand, or as the build hook of the wheel.

python scripts/build_catalogue.py            build stackdb/catalogue/stackdb.sqlite
python scripts/build_catalogue.py --sort     rewrite data/*.csv in their canonical order first
"""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

ROOT = Path(__file__).resolve().parent.parent
TARGET = ROOT / "stackdb" / "catalogue" / "stackdb.sqlite"


def build_catalogue(*, sort: bool = False) -> Path:
    """Build the catalogue from the project's own data folder and return where it is."""
    sys.path.insert(0, str(ROOT))
    try:
        from stackdb.catalogue import build
    finally:
        sys.path.remove(str(ROOT))
    if sort:
        build.write_sorted(ROOT / "data")
    build.build(ROOT / "data", TARGET)
    return TARGET


try:
    from hatchling.builders.hooks.plugin.interface import BuildHookInterface
except ImportError:
    pass
else:

    class CatalogueHook(BuildHookInterface):  # type: ignore[type-arg]
        """Builds the catalogue before a wheel, an sdist or an editable install is made."""

        PLUGIN_NAME = "custom"

        def initialize(self, version: str, build_data: dict[str, Any]) -> None:
            """Called by the builder."""
            build_catalogue()
            build_data["artifacts"].append("stackdb/catalogue/stackdb.sqlite")


def main() -> None:
    """Build, or say every fault of the data."""
    from importlib import import_module

    try:
        print(build_catalogue(sort="--sort" in sys.argv[1:]))
    except Exception as error:
        sys.path.insert(0, str(ROOT))
        if isinstance(error, import_module("stackdb.errors").StackdbError):
            sys.exit(str(error))
        raise


if __name__ == "__main__":
    main()
