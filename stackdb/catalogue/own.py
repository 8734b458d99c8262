"""Own figures laid over the curated catalogue, read only: asked for by ``--own``, never mixed in silently."""

from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING

from stackdb.catalogue.opening import Catalogue, connect
from stackdb.errors import FileError

if TYPE_CHECKING:
    from collections.abc import Iterable

    from stackdb.catalogue.records import Material, PermittivityRecord, Source


def own_path() -> Path:
    """Where own figures live: the platform's folder for user data."""
    from platformdirs import user_data_path

    return user_data_path("stackdb") / "own.sqlite"


class WithOwn(Catalogue):
    """A curated catalogue with own records and materials beside its own."""

    def __init__(self, curated: Catalogue, own: Catalogue) -> None:
        super().__init__(*curated.handle)
        self._own = own

    def close(self) -> None:
        """Let both files go."""
        self._own.close()
        super().close()

    def materials_named(self, text: str) -> tuple[Material, ...]:
        """Curated materials of that name, else own ones."""
        return super().materials_named(text) or self._own.materials_named(text)

    def permittivities(self, key: str) -> tuple[PermittivityRecord, ...]:
        """Curated records, then own ones."""
        return super().permittivities(key) + self._own.permittivities(key)

    def sources(self, keys: Iterable[str] | None = None) -> tuple[Source, ...]:
        """Sources of both, curated first."""
        wanted = None if keys is None else list(keys)
        found = {s.key: s for s in (*self._own.sources(wanted), *super().sources(wanted))}
        return tuple(found[key] for key in sorted(found))


def with_own(curated: Catalogue) -> WithOwn:
    """The catalogue with own figures. FileError when there are none yet."""
    path = own_path()
    if not path.exists():
        raise FileError("own-missing", f"no own figures yet: {path} is not there", "leave --own out")
    return WithOwn(curated, Catalogue(*connect(str(path))))
