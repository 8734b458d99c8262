"""Results as JSON: one object, numbers in full, no NaN."""

from __future__ import annotations

from typing import Any

from stackdb.errors import InputError


def dumps(body: dict[str, Any]) -> str:
    """One JSON object as text; a number that is not finite is a fault of ours and raises ValueError."""
    import json

    return json.dumps(body, ensure_ascii=False, allow_nan=False, indent=1)


def picked(body: dict[str, Any], path: str) -> str:
    """One number of the JSON by its path, parted by dots: ``air_equivalent_gap_m.value``, ``layers.1.share``.

    An uncertain number named without a part gives its value. Lists count from 1. Raises InputError naming what is there.
    """
    found: Any = body
    walked = ""
    for part in path.split("."):
        keys = _keys(found)
        if part not in keys:
            there = ", ".join(keys) if keys else "nothing below"
            raise InputError("get-unknown", f'--get: no "{part}" in {walked or "the answer"}', f"there is {there}")
        found = found[int(part) - 1] if isinstance(found, list) else found[part]
        walked = f"{walked}.{part}" if walked else part
    if isinstance(found, dict) and "value" in found:
        found = found["value"]
    if isinstance(found, dict | list):
        raise InputError("get-unknown", f'--get: "{path}" is not one number', f"there is {', '.join(_keys(found))}")
    return "null" if found is None else str(found)


def _keys(found: Any) -> list[str]:
    if isinstance(found, dict):
        return list(found)
    return [str(n) for n in range(1, len(found) + 1)] if isinstance(found, list) else []
