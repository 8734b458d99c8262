#!/usr/bin/env python3
"""Rewrite the made parts of README.md and DEVELOPERS.md: real outputs and tables, kept true by a test.

    python scripts/make_screens.py           rewrite
    python scripts/make_screens.py --check   say what is no longer true, and exit with 1

A made part stands between ``<!-- made: NAME -->`` and ``<!-- end -->``.
"""

from __future__ import annotations

import contextlib
import io
import os
import re
import sys
from pathlib import Path

ROOT = Path(__file__).resolve().parent.parent
sys.path.insert(0, str(ROOT))
os.environ["COLUMNS"] = "80"
PART = re.compile(r"(<!-- made: ([a-z-]+) -->\n)(.*?)(<!-- end -->)", re.DOTALL)
COMMANDS = {
    "compose": ("compose", "soda-lime-glass 1.8mm tol=0.1mm / acrylic-oca 150um / pet-film 125um", "--freq", "250kHz"),
    "touch": ("touch", "soda-lime-glass 1.8mm / acrylic-oca 150um", "--min-ratio", "20%"),
}
# What front stacks are made of; conductors are recognised, not valued.
STACK_MATERIALS = [
    "soda-lime-glass",
    "strengthened-soda-lime-glass",
    "alkali-aluminosilicate-glass",
    "lithium-aluminosilicate-glass-ceramic",
    "alkali-free-display-glass",
    "borosilicate-glass",
    "fused-silica",
    "sapphire",
    "pmma-cast",
    "pmma-extruded",
    "polycarbonate",
    "pet-film",
    "pen-film",
    "cop-film",
    "coc-film",
    "tac-film",
    "polyimide-film",
    "polyimide-film-clear",
    "pvc-rigid",
    "pvc-plasticised",
    "tpu-film",
    "abs",
    "polypropylene",
    "polyethylene",
    "ptfe",
    "pa66",
    "fr4-laminate",
    "acrylic-oca",
    "acrylic-oca-low",
    "acrylic-oca-high",
    "silicone-oca",
    "acrylic-loca",
    "silicone-loca",
    "pvb-interlayer",
    "eva-interlayer",
    "acrylic-foam-tape",
    "epoxy",
    "polyurethane-coating",
    "black-ink",
    "white-ink",
    "hard-coat",
    "nitrile-rubber",
    "natural-rubber",
    "neoprene",
    "leather",
    "cotton",
    "wool",
    "polyester-textile",
    "water",
    "air",
]
# Where published figures disagree: material, frequency in Hz.
DISAGREEMENTS = (
    ("soda-lime-glass", 1e5, "6.8 to 7.75 by composition and frequency"),
    ("pmma", 1e6, "falls with frequency; a 60 Hz figure is no 1 MHz figure"),
    ("pa66", 1e6, "dry and conditioned; asked at 50 % humidity"),
    ("sapphire", 1e6, "9.4 and 11.5 by axis, and a sheet that swaps the axes"),
    ("pet-film", 1e5, "makers' tables and their copies"),
    ("polyimide-film", 1e5, "3.4 typical against a specification maximum of 3.9"),
    ("silicone-rubber", 1e5, "unfilled and filled compounds"),
    ("neoprene", 1e5, "4 to 9 by compound"),
    ("rutile-film", 1e5, "deposition decides"),
    ("polyimide-film-clear", 1e5, "a paper that prints a refractive index as a permittivity"),
)


def command(*arguments: str) -> str:
    """A command line and what it prints at 80 columns, as a block."""
    from stackdb.cli import run

    out = io.StringIO()
    with contextlib.redirect_stdout(out):
        run(list(arguments))
    shown = " ".join(f'"{a}"' if " " in a else a for a in arguments)
    return f"```\n$ stackdb {shown}\n\n{out.getvalue().rstrip()}\n```\n"


def materials() -> str:
    """The stack's materials with value, range, grade, sources and how many records were read."""
    from stackdb.catalogue import open_catalogue
    from stackdb.evidence.judge import Conditions
    from stackdb.evidence.material import evidence_for
    from stackdb.output.numbers import value_and_range

    rows = ["| material | permittivity | range | grade | sources | read |", "|---|--:|--:|---|--:|--:|"]
    with open_catalogue() as catalogue:
        for key in STACK_MATERIALS:
            material = catalogue.material(key)
            found = evidence_for(catalogue, material, Conditions())
            value, limits = value_and_range(found.permittivity)
            used = [j for j in found.recommended.judged if j.used] if found.recommended else []
            sources = len(found.recommended.weighed) if found.recommended else 1
            read = f"{100 * sum(j.record.checked == 'read' for j in used) / len(used):.0f} %" if used else "model"
            rows.append(f"| {key} | {value} | {limits} | {found.confidence} | {sources} | {read} |")
    return "\n".join(rows) + "\n"


def disagreements() -> str:
    """What the program says where published sources disagree."""
    from stackdb.catalogue import open_catalogue
    from stackdb.evidence.judge import Conditions
    from stackdb.evidence.material import evidence_for
    from stackdb.output.numbers import value_and_range
    from stackdb.quantities import format_frequency

    rows = ["| material | at | printed | the program says | grade | why they differ |", "|---|---|--:|--:|---|---|"]
    with open_catalogue() as catalogue:
        for key, hertz, why in DISAGREEMENTS:
            found = evidence_for(catalogue, catalogue.material(key), Conditions(frequency_hz=hertz))
            printed = [j.record.value for j in found.recommended.judged if j.record.value]
            value, limits = value_and_range(found.permittivity)
            span = f"{min(printed):.3g} .. {max(printed):.3g}"
            at = format_frequency(hertz)
            rows.append(f"| {key} | {at} | {span} | {value} ({limits}) | {found.confidence} | {why} |")
    return "\n".join(rows) + "\n"


def edge_factors() -> str:
    """Edge factors of four everyday stacks under two pads, finger as large as the pad."""
    from stackdb.studies.compose import resolved
    from stackdb.touch.contact import Below, Sizes, solve_field

    stacks = {
        "0.7 mm strengthened glass, 0.15 mm bond": "strengthened-soda-lime-glass 0.7mm / acrylic-oca 150um",
        "1.8 mm glass, 0.15 mm bond": "soda-lime-glass 1.8mm / acrylic-oca 150um",
        "3 mm acrylic, 0.175 mm bond": "pmma-extruded 3mm / acrylic-oca 175um",
        "4 mm glass-ceramic, 0.13 mm bond": "lithium-aluminosilicate-glass-ceramic 4mm / acrylic-oca 130um",
    }
    rows = ["| stack | pad | alone | driven neighbours | grounded neighbours |", "|---|--:|--:|--:|--:|"]
    for name, text in stacks.items():
        stack = resolved(text).stack
        for pad in (5e-3, 12e-3):
            factors = []
            for around in ("alone", "driven", "grounded"):
                field = solve_field(stack, Sizes(pad, pad, around=around), Below())
                factors.append(f"{field.first.edge_factor:.2f}")
            rows.append(f"| {name} | {1e3 * pad:g} mm | {' | '.join(factors)} |")
    return "\n".join(rows) + "\n"


def calibration() -> str:
    """Coverage of the ranges, counted by source."""
    from stackdb.catalogue import open_catalogue
    from stackdb.evidence.verify import verify

    rows = [
        "| left out, counted by source | figures | inside | 95 % interval | median half-width | score |",
        "|---|--:|--:|--:|--:|--:|",
    ]
    with open_catalogue() as catalogue:
        for g in verify(catalogue, calibration=True).groups:
            between = f"{100 * g.coverage_low:.0f} .. {100 * g.coverage_high:.0f} %"
            rows.append(
                f"| {g.name} | {g.figures} | {100 * g.coverage:.0f} % | {between} | {100 * g.median_half_width:.1f} % |"
                f" {g.interval_score:.2f} |"
            )
    return "\n".join(rows) + "\n"


MADE = {
    "materials": materials,
    "disagreements": disagreements,
    "edge-factors": edge_factors,
    "calibration": calibration,
    **{name: (lambda arguments=arguments: command(*arguments)) for name, arguments in COMMANDS.items()},
}


def made(text: str) -> str:
    """A page with its made parts made again."""
    return PART.sub(lambda m: m.group(1) + MADE[m.group(2)]() + m.group(4), text)


def main() -> None:
    """Rewrite the pages, or check them."""
    stale = []
    for name in ("README.md", "DEVELOPERS.md"):
        path = ROOT / name
        before = path.read_text(encoding="utf-8")
        after = made(before)
        if before != after:
            stale.append(name)
            if "--check" not in sys.argv:
                path.write_text(after, encoding="utf-8")
    if "--check" in sys.argv and stale:
        sys.exit(f"no longer true: {', '.join(stale)}; run python scripts/make_screens.py")


if __name__ == "__main__":
    main()
