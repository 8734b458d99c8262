"""Is the catalogue whole, and do its ranges hold: the checks behind ``verify``."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from stackdb.catalogue.opening import Check
from stackdb.evidence.judge import index_floor, why_unused
from stackdb.results import Result

if TYPE_CHECKING:
    from stackdb.catalogue import Catalogue
    from stackdb.evidence.calibration import Group, LeftOut

LEVEL = 0.9
LEAST_FIGURES = 100


@dataclass(frozen=True, slots=True)
class VerifyResult(Result):
    """Checks, and where asked the calibration."""

    checks: tuple[Check, ...]
    groups: tuple[Group, ...]
    misses: tuple[LeftOut, ...]

    @property
    def met(self) -> bool:
        """Whether every check passed."""
        return all(c.ok for c in self.checks)

    def to_dict(self) -> dict[str, Any]:
        """The JSON object of the contract."""
        body: dict[str, Any] = {"format": 1, "checks": [c._asdict() for c in self.checks]}
        if self.groups:
            body["calibration"] = [g._asdict() for g in self.groups]
            body["worst_misses"] = [m._asdict() for m in self.misses]
        return body


def _orphans(catalogue: Catalogue) -> Check:
    loose = [s.key for s in catalogue.sources() if not catalogue.uses_of_source(s.key)]
    return Check(
        "sources", not loose, f"{len(loose)} sources that nothing rests on{': ' + ', '.join(loose) if loose else ''}"
    )


def _values(catalogue: Catalogue) -> Check:
    """Every material that does not conduct has a figure or a model; some hold warnings alone, and are named."""
    empty, warnings = [], []
    for m in catalogue.materials():
        records = catalogue.permittivities(m.key)
        if m.conducts != "no" or catalogue.dispersions(m.key):
            continue
        if not records:
            empty.append(m.key)
        elif all(why_unused(m, r, any_in_band=False) for r in records):
            warnings.append(m.key)
    named = f": {', '.join(empty)}" if empty else f"; {len(warnings)} hold warnings alone"
    return Check("values", not empty, f"{len(empty)} dielectrics without any figure{named}")


def _floor(catalogue: Catalogue) -> Check:
    """Figures below the index floor are kept and left out; say how many."""
    below = 0
    for m in catalogue.materials():
        floor = index_floor(m)
        own = [r for r in catalogue.permittivities(m.key) if r.material == m.key and r.value is not None]
        below += sum("index floor" in why_unused(m, r, any_in_band=False) for r in own)
        if floor < 1.0:
            return Check("index floor", False, f"{m.key} has a floor of {floor:.2f}")
    return Check("index floor", True, f"{below} figures below the index floor of their material, kept and left out")


def _digest(catalogue: Catalogue) -> Check:
    edition = catalogue.edition()
    whole = len(edition.digest) == 64 and set(edition.digest) <= set("0123456789abcdef")
    return Check("edition", whole, f"edition {edition.edition}, digest {edition.digest[:16]}, schema {edition.schema}")


def verify(catalogue: Catalogue, *, calibration: bool = False) -> VerifyResult:
    """Check a catalogue: pages, references, sources, values, floor, digest, and with ``calibration`` the ranges."""
    checks = [
        *catalogue.check_integrity(),
        _orphans(catalogue),
        _values(catalogue),
        _floor(catalogue),
        _digest(catalogue),
    ]
    if not calibration:
        return VerifyResult(tuple(checks), (), ())
    from stackdb.evidence.calibration import calibrate, groups, worst_misses

    rows = calibrate(catalogue, level=LEVEL)
    found = groups(rows, LEVEL)
    every = found[0]
    holds = every.coverage_low <= LEVEL <= every.coverage_high and every.figures >= LEAST_FIGURES
    text = (
        f"{every.hits} of {every.figures} left-out figures inside, {100 * every.coverage:.0f} %"
        f" ({100 * every.coverage_low:.0f} .. {100 * every.coverage_high:.0f} % binomial), asked {100 * LEVEL:.0f} %"
    )
    checks.append(Check("calibration", holds, text))
    return VerifyResult(tuple(checks), found, worst_misses(rows))
