"""A name, as people write it, to the one material it means."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.errors import InputError
from stackdb.quantities import printable

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue, Material


def material_named(catalogue: Catalogue, name: str) -> Material:
    """The one material of that name; InputError when there is none (nearest shown) or several share it."""
    found = catalogue.materials_named(name)
    if len(found) == 1:
        return found[0]
    shown = printable(name if len(name) <= 60 else name[:57] + "...")
    if found:
        keys = [m.key for m in found]
        raise InputError("name-shared", f'"{shown}" is {", ".join(keys[:-1])} or {keys[-1]}', "write one of them")
    nearest = catalogue.nearest(name)
    hint = f"nearest: {', '.join(nearest)} (or add eps=)" if nearest else "stackdb find lists them (or add eps=)"
    raise InputError("name-unknown", f'no material "{shown}"', hint)
