"""The screen of ``size``."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, line, paragraph
from stackdb.output.numbers import length_and_range, value_and_range
from stackdb.quantities import format_frequency, format_length

if TYPE_CHECKING:
    from stackdb.studies.size import SizeResult, Target


def _target(target: Target) -> str:
    texts = {
        "gap": f"a gap of {format_length(target.value)} of air",
        "areal-capacitance": f"{target.value * 1e9:.4g} fF/mm² or more",
        "ratio": f"{100 * target.value:.3g} % of the reference, by gap",
        "signal": f"a signal of {target.value * 1e15:.4g} fF, by the field solution",
    }
    return texts[target.kind]


def draw_size(result: SizeResult, columns: int) -> list[Line]:
    """The whole screen."""
    c = result.asked.conditions
    drawn = [
        line(INDENT, f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C. Asked: {_target(result.target)}."),
        BLANK,
    ]
    name = f"Layer {result.layer.number}"
    if result.thickness_m is not None:
        value, limits = length_and_range(result.thickness_m)
        drawn += paragraph(name, f"{result.layer.name} {value}   {limits}", columns - 1)
    if result.permittivity is not None:
        value, limits = value_and_range(result.permittivity)
        drawn += paragraph(name, f"needs a permittivity of {value}   {limits}", columns - 1)
    drawn += paragraph("Reachable" if result.reachable else "Not reachable", result.reason, columns - 1)
    if result.market:
        rows = [["sold", "gap", "", "source"]]
        for m in result.market:
            meets = "meets" if m.meets else "misses"
            rows.append([format_length(m.thickness_m), format_length(m.air_equivalent_gap_m), meets, m.source])
        texts = aligned(rows, ">><<")
        drawn += [BLANK, line(INDENT, Piece(texts[0], "dim")), *(line(INDENT, t) for t in texts[1:])]
    drawn.append(BLANK)
    for claim in result.claims:
        drawn += paragraph("Constraint", f"{'kept' if claim.kept else 'NOT KEPT'}: {claim.text}", columns - 1)
    for w in result.warnings:
        drawn += paragraph("Note", w.text, columns - 1)
    return drawn
