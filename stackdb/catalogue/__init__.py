"""The catalogue: the only SQL of the project. Built from ``data/``, opened read only."""

from stackdb.catalogue.opening import Catalogue, open_catalogue
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

__all__ = [
    "Catalogue",
    "ConductivityRecord",
    "DispersionRecord",
    "Edition",
    "KindDefault",
    "Material",
    "PermittivityRecord",
    "Source",
    "ThicknessRecord",
    "TouchCase",
    "open_catalogue",
]
