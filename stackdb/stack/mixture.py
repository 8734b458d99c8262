"""A porous or filled layer: solid and host mixed by a rule, the texture's bounds in its range."""

from __future__ import annotations

from math import exp, log, sqrt
from typing import TYPE_CHECKING

from stackdb.dielectrics import mixing
from stackdb.errors import InputError
from stackdb.evidence.material import Evidence, evidence_for
from stackdb.evidence.naming import material_named
from stackdb.evidence.quantiles import two_sided
from stackdb.quantities import Span

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue, Material
    from stackdb.evidence.judge import Conditions
    from stackdb.stack.layers import Layer

DEFAULT_RULE = "looyenga"  # between series and parallel, as fibres lying in the plane are
DEFAULT_HOST = "air"
PERCOLATES = 0.05  # conducting grains may join from a few percent on (segregated carbon black: less); common practice
TEXTURE = 0.5  # half of the Wiener span, rectangular, is what the unknown texture may owe
ARCHIE = 1.5  # conductivity of a host round grains: (1 - f)^1.5 (Bruggeman 1935, recalled)


def _refuse_percolation(material: Material, host: Material, fill: float) -> None:
    """A conducting solid in an insulating host has no permittivity near or above its percolation."""
    if material.conducts == "yes" and host.conducts != "yes" and fill > PERCOLATES:
        text = f"{100 * fill:.0f} % of {material.key} conducts in {host.key}: no mixing rule holds there"
        raise InputError(
            "percolation", text, f"below {100 * PERCOLATES:.0f} %, or measure the sheet resistance and write rs="
        )


def bounds_text(fill: float, solid: float, host: float) -> str:
    """Both pairs of bounds [-] in words, for a fraction [-] of a solid in a host [-]."""
    wiener = mixing.wiener_bounds(fill, solid, host)
    isotropic = mixing.hashin_shtrikman_bounds(fill, solid, host)
    return (
        f"bounds {wiener.low:.3g} .. {wiener.high:.3g} (any texture),"
        f" {isotropic.low:.3g} .. {isotropic.high:.3g} (isotropic)"
    )


def _range(fill: float, solid: Span, host: Span, rule: str, level: float) -> Span:
    """The mixture's value by the rule; its range from both materials' ranges and half the Wiener span."""
    mix = mixing.RULES[rule]
    value = mix(fill, solid.value, host.value).real
    low, high = mix(fill, solid.low, host.low).real, mix(fill, solid.high, host.high).real
    wiener = mixing.wiener_bounds(fill, solid.value, host.value)
    texture = TEXTURE * log(wiener.high / wiener.low) / (2.0 * sqrt(3.0)) if rule not in ("series", "parallel") else 0.0
    half = sqrt((0.5 * log(high / low)) ** 2 + (two_sided(level) * texture) ** 2)
    floor = mixing.wiener_bounds(fill, solid.low, host.low).low
    ceiling = mixing.wiener_bounds(fill, solid.high, host.high).high
    return Span(value, min(value, max(value * exp(-half), floor)), max(value, min(value * exp(half), ceiling)))


def mixed(
    catalogue: Catalogue, layer: Layer, material: Material, solid: Evidence, conditions: Conditions, level: float
) -> Evidence:
    """Evidence for a layer with ``fill=``: bounds are always stated; a conducting host makes the layer conduct.

    Raises InputError near the percolation of a conducting solid.
    """
    fill = layer.fill or 1.0
    host_material = material_named(catalogue, layer.host or DEFAULT_HOST)
    host = evidence_for(catalogue, host_material, conditions, level=level)
    _refuse_percolation(material, host_material, fill)
    rule = layer.rule or DEFAULT_RULE
    span = _range(fill, solid.permittivity, host.permittivity, rule, level)
    sigma = host.conductivity_s_per_m
    carried = sigma * (1.0 - fill) ** ARCHIE if sigma and host_material.conducts == "yes" else None
    why = (
        f"{100 * fill:g} % solid in {host_material.key} by the {rule} rule;"
        f" {bounds_text(fill, solid.permittivity.value, host.permittivity.value)}; solid: {solid.why}"
    )
    return solid._replace(
        permittivity=span,
        loss_tangent=_loss(fill, solid, host, rule),
        conductivity_s_per_m=carried,
        confidence="guess" if solid.confidence == "guess" else "weak",
        why=why,
        sources=tuple(dict.fromkeys((*solid.sources, *host.sources))),
        recommended=None,
    )


def _loss(fill: float, solid: Evidence, host: Evidence, rule: str) -> float | None:
    if solid.loss_tangent is None:
        return None
    host_loss = host.loss_tangent or 0.0
    inclusion = complex(solid.permittivity.value, -solid.permittivity.value * solid.loss_tangent)
    matrix = complex(host.permittivity.value, -host.permittivity.value * host_loss)
    found = mixing.RULES[rule](fill, inclusion, matrix)
    return max(0.0, -found.imag / found.real)
