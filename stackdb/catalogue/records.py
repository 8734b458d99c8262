"""Rows of the catalogue as immutable records; the field names are the column names."""

from __future__ import annotations

from typing import NamedTuple


class Material(NamedTuple):
    """A material: how people call it, what it is used as, how well its name fixes it, whether it conducts."""

    key: str
    name: str
    kind: str
    fixity: str
    substance: str | None
    description: str | None
    conducts: str
    refractive_index: float | None
    index_axis: str | None
    index_band: str | None
    index_source: str | None
    index_locator: str | None
    index_checked: str | None
    uptake_pct: float | None
    uptake_source: str | None
    uptake_locator: str | None
    uptake_checked: str | None


class Source(NamedTuple):
    """Who says so."""

    key: str
    kind: str
    authors: str | None
    title: str | None
    year: int | None
    publisher: str | None
    identifier: str | None
    anonymous: int
    note: str | None


class PermittivityRecord(NamedTuple):
    """One figure with its conditions and its place in its source."""

    material: str
    value: float | None
    low: float | None
    high: float | None
    loss_tangent: float | None
    frequency_hz: float | None
    temperature_c: float | None
    humidity_pct: float | None
    conditioning: str | None
    direction: str
    method: str | None
    source: str
    locator: str
    checked: str
    quoted_in: str | None
    flags: str | None
    remark: str | None


class ThicknessRecord(NamedTuple):
    """A thickness on the market, or a tolerance rule for a span of thicknesses."""

    material: str
    nominal_m: float | None
    from_m: float | None
    to_m: float | None
    minus_m: float | None
    plus_m: float | None
    minus_share: float | None
    plus_share: float | None
    form: str
    source: str
    locator: str
    checked: str
    remark: str | None


class ConductivityRecord(NamedTuple):
    """A conductivity [S/m] or a sheet resistance [ohm/sq] with its conditions."""

    material: str
    quantity: str
    value: float
    low: float | None
    high: float | None
    unit: str
    frequency_hz: float | None
    temperature_c: float | None
    conditions: str | None
    source: str
    locator: str
    checked: str
    remark: str | None


class DispersionRecord(NamedTuple):
    """A published model with its parameters (JSON) and its range."""

    material: str
    model: str
    parameters: str
    frequency_low_hz: float | None
    frequency_high_hz: float | None
    temperature_low_c: float | None
    temperature_high_c: float | None
    source: str
    locator: str
    checked: str
    remark: str | None


class TouchCase(NamedTuple):
    """A named way of touching: layers on top of the cover, as stack text."""

    key: str
    name: str
    group: str
    layers: str
    contact_m: float | None
    verdict: str | None
    source: str
    locator: str
    checked: str
    remark: str | None


class KindDefault(NamedTuple):
    """What a kind of material gets where nothing better is recorded."""

    kind: str
    tolerance_share: float
    loss_tangent: float | None
    source: str
    locator: str
    checked: str
    remark: str | None


class Edition(NamedTuple):
    """Which text a catalogue was built from."""

    schema: int
    edition: str
    digest: str
