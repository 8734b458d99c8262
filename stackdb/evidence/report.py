"""Answers about materials: what one comes to and why, which there are, and what rests on which source."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, NamedTuple

from stackdb.catalogue import Catalogue
from stackdb.errors import InputError
from stackdb.evidence.judge import Conditions
from stackdb.evidence.material import Evidence, evidence_for
from stackdb.evidence.naming import material_named
from stackdb.quantities import Span
from stackdb.results import Result, source_dict, sources_dict, span_dict

if TYPE_CHECKING:
    from collections.abc import Sequence

    from stackdb.catalogue import ConductivityRecord, Material, Source, ThicknessRecord
    from stackdb.evidence.judge import Judged


class SourcedCatalogue(Catalogue):
    """A catalogue that answers with recommended values: what ``stackdb.open_catalogue()`` opens."""

    def permittivity(
        self,
        name: str,
        *,
        frequency_hz: float = 1e5,
        temperature_c: float = 23.0,
        humidity_pct: float = 50.0,
        direction: str = "through",
        level: float = 0.9,
        source: str | None = None,
    ) -> Evidence:
        """The recommended permittivity [-] of a material at a frequency [Hz], temperature [degC] and humidity [%].

        With its range at ``level`` [-], loss, grade, reason and sources. Raises InputError for an unknown or shared name.
        """
        material = material_named(self, name)
        conditions = Conditions(frequency_hz, temperature_c, humidity_pct, direction)
        return evidence_for(self, material, conditions, level=level, source=source)


def open_catalogue(path: str | None = None) -> SourcedCatalogue:
    """Open the catalogue shipped, or the file named, read only; FileError when it cannot be used."""
    from stackdb.catalogue.opening import connect

    return SourcedCatalogue(*connect(path))


class AtFrequency(NamedTuple):
    """A material's value at one of several frequencies asked."""

    frequency_hz: float
    permittivity: Span
    loss_tangent: float | None
    confidence: str


@dataclass(frozen=True, slots=True)
class ShowResult(Result):
    """A material at the conditions asked: value, range, grade, why, every record, thicknesses, disagreements."""

    material: Material
    aliases: tuple[str, ...]
    conditions: Conditions
    level: float
    evidence: Evidence
    by_frequency: tuple[AtFrequency, ...]
    thicknesses: tuple[ThicknessRecord, ...]
    conductivities: tuple[ConductivityRecord, ...]
    sources: dict[str, Any]

    def to_frame(self) -> Any:
        """The records as a pandas table, one row each."""
        import pandas as pd

        return pd.DataFrame([record_dict(j) for j in self.judged])

    @property
    def judged(self) -> tuple[Judged, ...]:
        """Every record with its judgement."""
        found = self.evidence.recommended
        return found.judged if found else ()

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        eps, m = self.evidence, self.material
        found = eps.recommended
        value = {**(span_dict(eps.permittivity) or {}), "confidence": eps.confidence, "why": eps.why}
        body: dict[str, Any] = {
            "format": 1,
            "material": {"key": m.key, "name": m.name, "kind": m.kind, "aliases": list(self.aliases)},
            "conditions": {
                "frequency_hz": self.conditions.frequency_hz,
                "temperature_c": self.conditions.temperature_c,
                "humidity_pct": self.conditions.humidity_pct,
            },
            "level": self.level,
            "permittivity": value if eps.exists else None,
            "loss_tangent": eps.loss_tangent,
            "conductivity_s_per_m": eps.conductivity_s_per_m,
            "index_floor": found.floor if found else None,
            "water_uptake_pct": m.uptake_pct,
            "records": [record_dict(j) for j in self.judged],
            "thicknesses": [thickness_dict(t) for t in self.thicknesses],
            "conductivities": [conductivity_dict(c) for c in self.conductivities],
            "disagreements": [
                {"source": w.source, "value": w.value, "weight": w.weight}
                for w in (found.disagreements if found else ())
            ],
        }
        if len(self.by_frequency) > 1:
            body["frequencies"] = [
                {
                    "frequency_hz": row.frequency_hz,
                    "permittivity": span_dict(row.permittivity),
                    "loss_tangent": row.loss_tangent,
                    "confidence": row.confidence,
                }
                for row in self.by_frequency
            ]
        body["warnings"] = [] if eps.exists else [{"code": "no-permittivity", "layer": None, "text": eps.why}]
        body["sources"] = self.sources
        return body


def record_dict(judged: Judged) -> dict[str, Any]:
    """A record and its judgement as the contract writes them."""
    r = judged.record
    return {
        "value": r.value,
        "moved_value": judged.moved_value,
        "loss_tangent": r.loss_tangent,
        "frequency_hz": r.frequency_hz,
        "temperature_c": r.temperature_c,
        "humidity_pct": r.humidity_pct,
        "conditioning": r.conditioning,
        "direction": r.direction,
        "material": r.material,
        "method": r.method,
        "source": r.source,
        "locator": r.locator,
        "checked": r.checked,
        "quoted_in": r.quoted_in,
        "used": judged.used,
        "why_not": judged.why_not or None,
        "moved_by": judged.move.basis or None,
        "move": judged.move.shift,
        "move_uncertainty": judged.move.uncertainty,
        "remark": r.remark,
    }


def thickness_dict(record: ThicknessRecord) -> dict[str, Any]:
    """A thickness on the market, or a tolerance rule, as JSON."""
    return {name: value for name, value in record._asdict().items() if name != "material"}


def conductivity_dict(record: ConductivityRecord) -> dict[str, Any]:
    """A conductivity or sheet resistance as JSON."""
    return {name: value for name, value in record._asdict().items() if name != "material"}


def _sources_of(
    judged: Sequence[Judged], evidence: Evidence, thicknesses: Sequence[ThicknessRecord], material: Material
) -> set[str]:
    keys = {j.record.source for j in judged} | {j.record.quoted_in for j in judged if j.record.quoted_in}
    keys |= set(evidence.sources) | {t.source for t in thicknesses}
    return {k for k in (*keys, material.index_source, material.uptake_source) if k}


def show(
    name: str,
    *,
    catalogue: Catalogue,
    frequencies_hz: Sequence[float] = (1e5,),
    temperature_c: float = 23.0,
    humidity_pct: float = 50.0,
    level: float = 0.9,
    source: str | None = None,
) -> ShowResult:
    """What the catalogue says of a material at the first of the frequencies [Hz], with a row for each further one.

    Temperature [degC], humidity [%], level [-]. Raises InputError for an unknown or shared name.
    """
    material = material_named(catalogue, name)
    conditions = Conditions(frequencies_hz[0], temperature_c, humidity_pct)
    rows = []
    for frequency in frequencies_hz:
        at = evidence_for(catalogue, material, conditions._replace(frequency_hz=frequency), level=level, source=source)
        rows.append((AtFrequency(frequency, at.permittivity, at.loss_tangent, at.confidence), at))
    evidence = rows[0][1]
    thicknesses = catalogue.thicknesses(material.key)
    conductivities = catalogue.conductivities(material.key)
    judged = evidence.recommended.judged if evidence.recommended else ()
    keys = _sources_of(judged, evidence, thicknesses, material) | {c.source for c in conductivities}
    return ShowResult(
        material=material,
        aliases=catalogue.aliases(material.key),
        conditions=conditions,
        level=level,
        evidence=evidence,
        by_frequency=tuple(row for row, _ in rows),
        thicknesses=thicknesses,
        conductivities=conductivities,
        sources=sources_dict(catalogue, keys),
    )


class FoundMaterial(NamedTuple):
    """A search hit with its recommended value; no value for a conductor."""

    material: Material
    permittivity: Span | None
    confidence: str | None
    also: tuple[str, ...]


@dataclass(frozen=True, slots=True)
class FindResult(Result):
    """Materials that match a search."""

    text: str
    conditions: Conditions
    found: tuple[FoundMaterial, ...]

    def to_frame(self) -> Any:
        """The hits as a pandas table, one row a material."""
        import pandas as pd

        return pd.json_normalize(self.to_dict()["materials"], sep="_")

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        return {
            "format": 1,
            "conditions": self.conditions._asdict() | {"direction": None},
            "materials": [
                {
                    "key": f.material.key,
                    "name": f.material.name,
                    "kind": f.material.kind,
                    "permittivity": span_dict(f.permittivity),
                    "confidence": f.confidence,
                    "also": list(f.also),
                }
                for f in self.found
            ],
        }


def find(
    text: str = "",
    *,
    catalogue: Catalogue,
    kind: str | None = None,
    at_least: float | None = None,
    at_most: float | None = None,
    frequency_hz: float = 1e5,
    temperature_c: float = 23.0,
    humidity_pct: float = 50.0,
    level: float = 0.9,
) -> FindResult:
    """Materials by name, alias or description, kind, and range of recommended permittivity [-] at the conditions asked."""
    conditions = Conditions(frequency_hz, temperature_c, humidity_pct)
    hits = []
    for material in catalogue.search(text, kind):
        hit = _found(catalogue, material, conditions, level)
        eps = hit.permittivity
        wanted = (at_least is None or (eps is not None and eps.value >= at_least)) and (
            at_most is None or (eps is not None and eps.value <= at_most)
        )
        if wanted:
            hits.append(hit)
    return FindResult(text, conditions, tuple(hits))


def _found(catalogue: Catalogue, material: Material, conditions: Conditions, level: float) -> FoundMaterial:
    also = tuple(a for a in catalogue.aliases(material.key) if a != material.key)
    try:
        at = evidence_for(catalogue, material, conditions, level=level)
    except InputError:
        return FoundMaterial(material, None, None, also)
    return FoundMaterial(material, at.permittivity if at.exists else None, at.confidence if at.exists else None, also)


class Rest(NamedTuple):
    """What rests on a source: the material, the table and how many rows."""

    material: str
    table: str
    rows: int


@dataclass(frozen=True, slots=True)
class SourcesResult(Result):
    """The bibliography, or one source with what rests on it."""

    sources: tuple[Source, ...]
    rests: tuple[Rest, ...]
    single: bool

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        body: dict[str, Any] = {
            "format": 1,
            "sources": [{"key": s.key, **source_dict(s)} for s in self.sources],
        }
        if self.single:
            body["rests"] = [r._asdict() for r in self.rests]
        return body


def list_sources(key: str | None = None, *, catalogue: Catalogue) -> SourcesResult:
    """All sources, or the one named with the materials that rest on it. Raises InputError for an unknown key."""
    if key is None:
        return SourcesResult(catalogue.sources(), (), False)
    found = catalogue.sources([key])
    if not found:
        near = [s.key for s in catalogue.sources() if key.casefold() in s.key or s.key.startswith(key[:4].casefold())]
        raise InputError("source-unknown", f'no source "{key[:60]}"', f"nearest: {', '.join(near[:3])}" if near else "")
    rests = tuple(Rest(*row) for row in catalogue.uses_of_source(key))
    return SourcesResult(found, rests, True)
