"""The screen of ``change``: the note a review can file."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.output.compare import difference_lines, notes, table
from stackdb.output.lines import BLANK, INDENT, Line, Piece, line, paragraph
from stackdb.quantities import format_frequency, format_length

if TYPE_CHECKING:
    from stackdb.studies.change import ChangeResult


def draw_change(result: ChangeResult, columns: int) -> list[Line]:
    """The whole note."""
    compared = result.compared
    c = compared.conditions
    old, new = result.corners
    edition = compared.edition
    drawn = [
        line(INDENT, Piece(f"Change note: {compared.stacks[0].name} to {compared.stacks[1].name}", "bold")),
        line(
            INDENT,
            f"{format_frequency(c.frequency_hz)}, {c.temperature_c:g} °C; catalogue {edition.edition} {edition.digest[:12]}",
        ),
        BLANK,
        *difference_lines(compared.differences, columns),
        BLANK,
        *table(compared.stacks),
        BLANK,
    ]
    corners = (
        f"{format_length(old.low)} .. {format_length(old.high)} before,"
        f" {format_length(new.low)} .. {format_length(new.high)} after"
    )
    drawn += paragraph("Corners", f"gap {corners}", columns - 1)
    drawn += notes(compared, columns)
    for r in result.rejected:
        drawn += paragraph("Not as printed", f"layer {r.layer}: {r.text}", columns - 1)
    for text in result.retest:
        drawn += paragraph("Test again", text, columns - 1)
    return drawn
