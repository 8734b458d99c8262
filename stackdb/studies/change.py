"""The change note: an old and a new stack, what differs, what it does, what was rejected and why, what to test again."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Any, NamedTuple, Unpack

from stackdb.catalogue.folding import fold
from stackdb.quantities import format_frequency
from stackdb.results import Result
from stackdb.studies.asked import Request
from stackdb.studies.compare import CompareResult, compare
from stackdb.studies.tolerance import Corners, corners_of

if TYPE_CHECKING:
    from collections.abc import Sequence
    from os import PathLike

    from stackdb.stack.layers import Stack
    from stackdb.stack.resolve import ResolvedLayer

FAR_DECADES = 1.0
MISLEADS = 0.10  # a figure this far off as printed is worth a line
MOST_REJECTED = 3
RETEST = (
    "touch with each glove and wet case of the requirement, on the assembled panel with its bezel",
    "signal and noise against the old stack with the same test bar, and re-tune thresholds",
    "hot, cold and damp operation, after conditioning the new material",
    "the rules that fixed the cover (impact, insulation, cleaning agents): their owners decide",
)


class Rejected(NamedTuple):
    """A figure that was at hand and not used as it stood, and why."""

    layer: int
    value: float
    text: str


@dataclass(frozen=True, slots=True)
class ChangeResult(Result):
    """Old against new."""

    compared: CompareResult
    corners: tuple[Corners, Corners]
    rejected: tuple[Rejected, ...]
    retest: tuple[str, ...]

    @property
    def met(self) -> bool:
        """Whether every limit is met."""
        return self.compared.met

    def to_dict(self) -> dict[str, Any]:
        """The note as JSON: the comparison, the corners of both gaps, what was rejected, what to test again."""
        body = self.compared.to_dict()
        old, new = self.corners
        return {
            **body,
            "gap_corners_m": {"from": old._asdict(), "to": new._asdict()},
            "rejected": [r._asdict() for r in self.rejected],
            "test_again": list(self.retest),
        }


def _changed(compared: CompareResult) -> list[ResolvedLayer]:
    numbers = {d.layer for d in compared.differences}
    return [x for x in compared.stacks[1].stack.layers if x.number in numbers]


def _far_records(layer: ResolvedLayer, frequency_hz: float) -> list[Rejected]:
    """Used figures recorded more than a decade away that would mislead as printed: the worst first, few at the most."""
    from math import log10

    found = layer.evidence.recommended if layer.evidence else None
    rows = []
    for j in found.judged if found else ():
        f, value, moved = j.record.frequency_hz, j.record.value, j.moved_value
        if not j.used or f is None or value is None or moved is None or abs(log10(f / frequency_hz)) <= FAR_DECADES:
            continue
        error = value / moved - 1.0
        if abs(error) >= MISLEADS:
            text = (
                f"{value:g} from {j.record.source} is a {format_frequency(f)} figure: at {format_frequency(frequency_hz)} it"
                f" becomes {moved:.3g}; as printed the layer's share of signal would be {100 * error:+.0f} % off"
            )
            rows.append((abs(error), Rejected(layer.number, value, text)))
    rows.sort(key=lambda row: -row[0])
    return [rejected for _, rejected in rows[:MOST_REJECTED]]


def _offered(layer: ResolvedLayer, offered: float, frequency_hz: float) -> Rejected:
    """A figure from a sheet in hand, held against the records of the material."""
    found = layer.evidence.recommended if layer.evidence else None
    matches = [
        j
        for j in (found.judged if found else ())
        if j.record.value is not None and j.record.frequency_hz and abs(j.record.value / offered - 1.0) < 0.015
    ]
    eps = layer.permittivity
    effect = 100.0 * (offered / eps.value - 1.0)
    if matches:
        lowest = min(matches, key=lambda j: j.record.frequency_hz or 0.0)
        text = (
            f"{offered:g} is what {lowest.record.source} prints at {format_frequency(lowest.record.frequency_hz or 0.0)},"
            f" not at {format_frequency(frequency_hz)}: refused; here {eps.value:.3g} ({eps.low:.3g} .. {eps.high:.3g})."
            f" With {offered:g} the share of this layer would be forecast {effect:+.0f} % off in signal"
        )
    else:
        inside = eps.low <= offered <= eps.high
        text = f"{offered:g} is {'inside' if inside else 'outside'} the range {eps.low:.3g} .. {eps.high:.3g} of the records"
    return Rejected(layer.number, offered, text)


def change_note(
    old: str | PathLike[str] | Stack,
    new: str | PathLike[str] | Stack,
    *,
    offered: Sequence[tuple[str, float]] = (),
    **request: Unpack[Request],
) -> ChangeResult:
    """Write the change note of a swap: ``old`` and ``new`` as in ``compose``.

    ``offered`` are (material, permittivity [-]) pairs from a data sheet in hand, judged against the records.
    """
    compared = compare([old, new], **request)
    drive = compared.conditions.frequency_hz
    rejected = [r for layer in _changed(compared) for r in _far_records(layer, drive)]
    for name, value in offered:
        layers = [x for x in compared.stacks[1].stack.layers if fold(name) in (fold(x.name), str(x.number))]
        rejected = [_offered(x, value, drive) for x in layers] + rejected
    corners = (corners_of(compared.stacks[0].stack)[0], corners_of(compared.stacks[1].stack)[0])
    return ChangeResult(compared, corners, tuple(rejected), RETEST)
