"""The screen of ``compare``."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.compose import limit_lines, verdict_line
from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, line, paragraph
from stackdb.output.numbers import cases, length_and_range, value_and_range
from stackdb.quantities import format_frequency, format_length
from stackdb.touch.verdicts import OK, percent

if TYPE_CHECKING:
    from stackdb.studies.compare import Compared, CompareResult, Difference


def _row(s: Compared) -> list[str]:
    if s.gap is None or s.gap_ratio is None:
        return [s.name, "none", "", "-", "", "", "see Conduction"]
    gap, limits = length_and_range(s.gap)
    ratio, spread = value_and_range(s.gap_ratio, 100.0)
    signal = "" if s.signal_ratio is None else f"{100 * s.signal_ratio:.0f} %"
    told = {None: "", True: "different", False: "not distinguishable"}[s.distinguishable]
    return [s.name, gap, limits, f"{ratio} %", spread, signal, told]


def difference_lines(differences: tuple[Difference, ...], columns: int) -> list[Line]:
    """What differs, a line each."""
    drawn = []
    for d in differences:
        change = (
            f", gap {'+' if d.gap_change_m > 0 else '-'}{format_length(abs(d.gap_change_m))}" if d.gap_change_m else ""
        )
        text = f"{d.field}: {d.before or 'none'} -> {d.after or 'none'}{change}"
        drawn += paragraph(f"{d.stack}, layer {d.layer}", text, columns - 1)
    return drawn


def table(stacks: tuple[Compared, ...]) -> list[Line]:
    """Stacks with their gaps and ratios."""
    head = ["stack", "gap", "range", "ratio", "range", "signal", "on this evidence"]
    rows = [head, *(_row(s) for s in stacks)]
    keep = [i for i in range(7) if i != 5 or any(r[5] for r in rows[1:])]
    texts = aligned([[r[i] for i in keep] for r in rows], "".join("<>>>>><"[i] for i in keep))
    return [line(INDENT, Piece(texts[0], "dim")), *(line(INDENT, t) for t in texts[1:])]


def notes(result: CompareResult, columns: int) -> list[Line]:
    """Conduction that is not plain, constraints, moves, what equal gap does not mean."""
    drawn = []
    for s in result.stacks:
        if s.conduction.state != OK:
            drawn += verdict_line("conduction", s.conduction, columns)
        for claim in s.claims:
            drawn += paragraph("Constraint", f"{'kept' if claim.kept else 'NOT KEPT'}: {claim.text}", columns - 1)
        drawn += limit_lines(s.limits, columns)
        if s.edge_share is not None and abs(s.edge_share) > 0.05:
            text = f"{s.name}: the signal ratio differs from the gap ratio by {percent(abs(s.edge_share))}: edge field"
            drawn += paragraph("Validity", text, columns - 1)
    for w in result.warnings:
        if w.code in ("moved", "frequency-unknown"):
            drawn += paragraph("Moved", w.text, columns - 1)
    if all(s.signal_ratio is None for s in result.stacks):
        drawn += paragraph(
            "Validity", "ratios are by gap; equal gap is not equal signal across thicknesses", columns - 1
        )
    return drawn


def draw_compare(result: CompareResult, columns: int) -> list[Line]:
    """The whole screen."""
    c = result.conditions
    title = f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C. Ranges hold in {cases(result.level)} cases."
    title += " Shared errors cancelled."
    drawn = [line(INDENT, title), BLANK, *table(result.stacks), BLANK]
    drawn += difference_lines(result.differences, columns)
    return [*drawn, BLANK, *notes(result, columns)]
