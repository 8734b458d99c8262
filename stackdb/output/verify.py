"""The screen of ``verify``."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, line, wrapped

if TYPE_CHECKING:
    from stackdb.evidence.verify import VerifyResult


def draw_verify(result: VerifyResult, columns: int) -> list[Line]:
    """Checks, then the calibration's groups and its worst misses."""
    drawn = []
    for c in result.checks:
        head = f"{INDENT}{c.name:<13} {'ok' if c.ok else 'FAULT':<6} "
        drawn += [line(m) for m in wrapped(c.text, columns - 1, head)]
    if not result.groups:
        return drawn
    rows = [["left out, counted by source", "figures", "inside", "coverage", "95 %", "half-width", "score"]]
    for g in result.groups:
        between = f"{100 * g.coverage_low:.0f} .. {100 * g.coverage_high:.0f}"
        width = f"{100 * g.median_half_width:.1f} %"
        rows.append(
            [
                g.name,
                str(g.figures),
                str(g.hits),
                f"{100 * g.coverage:.0f} %",
                between,
                width,
                f"{g.interval_score:.2f}",
            ]
        )
    texts = aligned(rows, "<>>>>>>", 1)
    drawn += [BLANK, line(INDENT, Piece(texts[0], "dim")), *(line(INDENT, t) for t in texts[1:])]
    rows = [["worst misses", "source", "printed", "predicted without it"]]
    for m in result.misses:
        rows.append([m.material, m.source[:28], f"{m.value:.4g}", f"{m.predicted:.3g}  {m.low:.3g} .. {m.high:.3g}"])
    texts = aligned(rows, "<<><")
    return [*drawn, BLANK, line(INDENT, Piece(texts[0], "dim")), *(line(INDENT, t) for t in texts[1:])]
