"""What the catalogue says of one material at the conditions asked: by its records, or by a published model."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

from stackdb.evidence.judge import Conditions
from stackdb.evidence.quantiles import two_sided
from stackdb.evidence.recommend import Recommended, recommend
from stackdb.quantities import Span

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue, Material

# What a conductor gets in the sum of a stack that is refused anyway.
CONDUCTOR = Span(1.0, 1.0, 1.0)


class Evidence(NamedTuple):
    """Permittivity [-] with range, loss tangent [-], conductivity [S/m], grade, reason and sources of a material.

    ``recommended`` is None where a published model, or no figure at all, speaks. ``exists`` is False for conductors
    without a permittivity.
    """

    permittivity: Span
    loss_tangent: float | None
    conductivity_s_per_m: float | None
    confidence: str
    why: str
    sources: tuple[str, ...]
    recalled_alone: bool
    recommended: Recommended | None
    exists: bool = True


def _conductivity(catalogue: Catalogue, material: Material) -> tuple[float | None, tuple[str, ...]]:
    """Median recorded conductivity [S/m] of a liquid or a solid, and its sources."""
    rows = [r for r in catalogue.conductivities(material.key) if r.quantity == "conductivity" and r.value is not None]
    if not rows:
        return None, ()
    ordered = sorted(rows, key=lambda r: r.value)
    middle = ordered[len(ordered) // 2]
    return middle.value, (middle.source,)


def _from_model(catalogue: Catalogue, material: Material, conditions: Conditions, level: float) -> Evidence | None:
    """The published dispersion model of a material where one is recorded and the conditions lie inside its range."""
    rows = catalogue.dispersions(material.key)
    for row in rows:
        from stackdb.evidence.models import evaluate, spread_of

        found = evaluate(row, conditions)
        if found is None:
            continue
        eps, sigma, why = found
        half = two_sided(level) * spread_of(row.model)
        factor = 2.718281828459045**half
        span = Span(eps.real, max(1.0, eps.real / factor), eps.real * factor)
        loss = None if sigma is not None else max(0.0, -eps.imag / eps.real) + 0.0
        read = row.checked == "read"
        return Evidence(span, loss, sigma, "strong" if read else "fair", why, (row.source,), not read, None)
    return None


def evidence_for(
    catalogue: Catalogue,
    material: Material,
    conditions: Conditions,
    *,
    level: float = 0.9,
    source: str | None = None,
) -> Evidence:
    """Value, range and grade of a material; a conductor without a permittivity comes back with ``exists`` False.

    Raises InputError when a dielectric has no usable record.
    """
    from stackdb.errors import InputError

    if source is None:
        modelled = _from_model(catalogue, material, conditions, level)
        if modelled is not None:
            return modelled
    sigma, sigma_sources = _conductivity(catalogue, material)
    found = recommend(catalogue, material, conditions, level=level, source=source)
    if found is None:
        if material.conducts == "no":
            raise InputError("no-usable-record", f"no usable permittivity of {material.key}", "add eps=")
        return Evidence(CONDUCTOR, None, sigma, "guess", "no permittivity recorded", sigma_sources, False, None, False)
    recalled = all(j.record.checked == "recalled" for j in found.judged if j.used)
    return Evidence(
        permittivity=found.permittivity,
        loss_tangent=found.loss_tangent,
        conductivity_s_per_m=sigma,
        confidence=found.confidence,
        why=found.why,
        sources=found.sources + sigma_sources,
        recalled_alone=recalled,
        recommended=found,
    )
