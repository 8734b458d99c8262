"""Layered dielectrics in front of a touch sensor, with sourced permittivities and ranges that hold.

The library is the command line in Python: ``stackdb.compose("soda-lime-glass 1.8mm / acrylic-oca 150um")``. Names are loaded when
first used, so that importing the package costs nothing.
"""

from __future__ import annotations

from typing import Any

__version__ = "0.1.0"

_HOMES = {
    "Limits": "stackdb.studies.asked",
    "Sizes": "stackdb.touch.contact",
    "Target": "stackdb.studies.size",
    "change_note": "stackdb.studies.change",
    "compare": "stackdb.studies.compare",
    "compose": "stackdb.studies.compose",
    "find": "stackdb.evidence.report",
    "open_catalogue": "stackdb.evidence.report",
    "parse_stack": "stackdb.stack.grammar",
    "show": "stackdb.evidence.report",
    "size": "stackdb.studies.size",
    "tolerance": "stackdb.studies.tolerance",
    "touch": "stackdb.studies.touch",
    "verify": "stackdb.evidence.verify",
}
__all__ = ["__version__", *_HOMES]


def __getattr__(name: str) -> Any:
    if name not in _HOMES:
        raise AttributeError(f"module 'stackdb' has no attribute {name!r}")
    from importlib import import_module

    return getattr(import_module(_HOMES[name]), name)


def __dir__() -> list[str]:
    return sorted(__all__)
