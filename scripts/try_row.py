#!/usr/bin/env python3
"""Show what a new permittivity row would do before it is committed.

    python scripts/try_row.py soda-lime-glass 7.2 --freq 1MHz --kind supplier-sheet --checked read

Prints the material's value, range and grade without and with the row, and its leave-one-out calibration both ways.
"""

from __future__ import annotations

import argparse
import sys
from pathlib import Path

sys.path.insert(0, str(Path(__file__).resolve().parent.parent))
NEW = "row-on-trial"


def arguments() -> argparse.Namespace:
    """What the row says."""
    parser = argparse.ArgumentParser(description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter)
    parser.add_argument("material")
    parser.add_argument("value", type=float)
    parser.add_argument("--freq", help="frequency of the figure, as 1MHz")
    parser.add_argument("--temp", help="temperature, as 23C")
    parser.add_argument("--kind", default="supplier-sheet")
    parser.add_argument("--checked", default="read", choices=["read", "quoted", "recalled"])
    parser.add_argument("--loss", type=float)
    parser.add_argument("--at", default="100kHz", help="where the value is asked")
    return parser.parse_args()


def main() -> None:
    """Compare without and with."""
    from stackdb.catalogue import PermittivityRecord, Source, open_catalogue
    from stackdb.evidence.calibration import leave_one_out, summarise
    from stackdb.evidence.judge import Conditions
    from stackdb.evidence.naming import material_named
    from stackdb.evidence.recommend import recommend_from
    from stackdb.quantities import parse_frequency, parse_temperature

    asked = arguments()
    with open_catalogue() as catalogue:
        material = material_named(catalogue, asked.material)
        records = catalogue.permittivities(material.key)
        sources = {s.key: s for s in catalogue.sources({r.source for r in records})}
        trial = PermittivityRecord(
            material.key, asked.value, None, None, asked.loss,
            parse_frequency(asked.freq) if asked.freq else None,
            parse_temperature(asked.temp) if asked.temp else None,
            None, None, "isotropic", None, NEW, "on trial", asked.checked, None, None, None,
        )  # fmt: skip
        on_trial = Source(NEW, asked.kind, None, None, None, None, None, 0, None)
        conditions = Conditions(frequency_hz=parse_frequency(asked.at))

        class WithTrial:
            """The catalogue's sources and the trial's."""

            def sources(self, keys):
                return (*catalogue.sources([k for k in keys if k != NEW]), on_trial)

        for name, rows, known, where in (
            ("without", records, sources, catalogue),
            ("with", (*records, trial), {**sources, NEW: on_trial}, WithTrial()),
        ):
            found = recommend_from(material, rows, known, conditions)
            if found is None:
                print(f"{name:<8} no usable record")
                continue
            eps = found.permittivity
            print(f"{name:<8} {eps.value:.4g}   {eps.low:.4g} .. {eps.high:.4g}   {found.confidence}: {found.why}")
            for judged in found.judged:
                if judged.record.source == NEW:
                    used = f"used, moved to {judged.moved_value:.4g}" if judged.used else f"not used: {judged.why_not}"
                    print(f"{'':<8} the row is {used}")
            group = summarise(name, leave_one_out(where, material, rows), 0.9)
            if group is not None:
                print(
                    f"{'':<8} left out {group.figures}, inside {group.hits}, median half-width"
                    f" {100 * group.median_half_width:.1f} %, score {group.interval_score:.2f}"
                )


if __name__ == "__main__":
    main()
