"""The map of edge factors: in the terminal by shade and number, as a picture by matplotlib."""

from __future__ import annotations

from typing import TYPE_CHECKING

from stackdb.errors import FileError, InputError
from stackdb.output.lines import BLANK, INDENT, Line, Piece, aligned, line, wrapped
from stackdb.quantities import format_length, printable

if TYPE_CHECKING:
    from stackdb.studies.edges import EdgesResult

SHADES = ((0.9, " "), (0.65, "░"), (0.4, "▒"), (0.0, "▓"))
ENDINGS = (".svg", ".png")


def _shade(factor: float) -> str:
    off = min(factor, 1.0 / factor)
    return next(mark for least, mark in SHADES if off >= least)


def _around(result: EdgesResult) -> str:
    return "alone" if result.around == "alone" else f"among {result.around} neighbours"


def draw_edges(result: EdgesResult, columns: int) -> list[Line]:
    """Rows by cover thickness, columns by finger diameter; darker is farther from the parallel plate."""
    title = f"True change over the parallel-plate number: pad {format_length(result.pad_m)} {_around(result)}."
    head = [f"{result.name}", *(f"finger {format_length(f)}" for f in result.fingers_m)]
    rows = [head]
    for thickness, factors in zip(result.thicknesses_m, result.factors, strict=True):
        rows.append([format_length(thickness), *(f"{_shade(f)}{f:.2f}" for f in factors)])
    texts = aligned(rows, "<" + ">" * len(result.fingers_m), 1)
    if max(len(t) for t in texts) > columns - 2:
        rows[0] = [result.name, *(format_length(f) for f in result.fingers_m)]
        texts = aligned(rows, "<" + ">" * len(result.fingers_m))
    legend = "blank: within 10 %; ░ ratios at like thickness; ▒ ▓ ranking only. Columns by finger diameter."
    drawn = [line(INDENT, m) for m in wrapped(title, columns - 2)]
    drawn += [BLANK, line(INDENT, Piece(texts[0], "dim")), *(line(INDENT, t) for t in texts[1:]), BLANK]
    return [*drawn, *(line(INDENT, Piece(m, "dim")) for m in wrapped(legend, columns - 2))]


def save_picture(result: EdgesResult, path: str) -> None:
    """Write the map as .svg or .png. InputError for another ending, FileError where it cannot be written."""
    if not path.endswith(ENDINGS):
        raise InputError("picture-ending", f'"{printable(path[:60])}" should end in .svg or .png')
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(6.4, 4.4), layout="constrained")
    FigureCanvasAgg(figure)
    axes = figure.add_subplot()
    fingers = [1e3 * f for f in result.fingers_m]
    for thickness, factors in zip(result.thicknesses_m, result.factors, strict=True):
        axes.plot(fingers, factors, marker="o", label=format_length(thickness))
    axes.axhspan(0.9, 1.1, color="0.9", zorder=0)
    axes.set_xlabel("finger diameter [mm]")
    axes.set_ylabel("edge factor: true change / parallel plate")
    axes.set_title(f"pad {format_length(result.pad_m)} {_around(result)}", fontsize=10)
    axes.legend(title=result.name, fontsize=8, title_fontsize=8)
    axes.grid(visible=True, linewidth=0.4)
    try:
        figure.savefig(path, metadata={"Date": None} if path.endswith(".svg") else None)
    except OSError as error:
        raise FileError("file-unwritable", f"{printable(path)}: {error.strerror}") from None
