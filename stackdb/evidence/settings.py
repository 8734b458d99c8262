"""Settings of the estimator, fixed before its calibration is counted; a change names its reason.

The size of each source of error is a judgement, tried on published figures: leave-one-source-out
coverage and interval score are printed by ``stackdb verify --calibration``.
"""

from __future__ import annotations

from typing import NamedTuple

# Standard uncertainty of ln(permittivity) that a figure owes to the kind of text it stands in.
KIND_U = {
    "standard": 0.010,
    "handbook": 0.020,
    "paper": 0.020,
    "dataset": 0.020,
    "patent": 0.025,
    "supplier-sheet": 0.025,
    "web": 0.035,
    "practice": 0.035,
}
# What a figure owes to how it was seen.
CHECKED_U = {"read": 0.0, "quoted": 0.010, "recalled": 0.020}
ANONYMOUS_U = 0.050
NO_FREQUENCY_U = 0.020
UNKNOWN_DIRECTION_U = 0.020  # only where the material is known to differ by direction

# Spread between lots and suppliers, ln, by how well the name fixes the substance.
SPREAD = {"defined": 0.02, "graded": 0.045, "compounded": 0.13, "porous": 0.30}
PRIOR_SOURCES = 6.0  # how many sources the class's spread weighs as
ROBUST_ROUNDS = 30
DISAGREES_BELOW = 0.4  # a source whose robust weight falls below this is listed

# Loss tangent supposed where a class's record has none, for its move along frequency only.
CLASS_LOSS = {"defined": 0.001, "graded": 0.01, "compounded": 0.03, "porous": 0.04}
# Standard uncertainty per kelvin and per percent relative humidity where no slope was measured.
CLASS_PER_KELVIN = {"defined": 0.0002, "graded": 0.0008, "compounded": 0.003, "porous": 0.003}
CLASS_PER_PCT = {"defined": 0.0, "graded": 0.0002, "compounded": 0.0005, "porous": 0.003}

BAND_HZ = (50.0, 20e6)  # records outside are shown, used only where there is nothing else
NO_FREQUENCY_SPAN_HZ = (50.0, 1e6)
ROOM_C = 22.5  # a record without temperature: 20 to 25 degC
DEFAULT_HUMIDITY_PCT = 50.0
STATE_HUMIDITY_PCT = {"dry": 0.0, "conditioned": 50.0, "wet": 100.0}

INDEX_SHARE = {"sodium": 0.96, "long-wave": 0.98}


class GradeRule(NamedTuple):
    """The least that a grade asks for; the first rule met gives the grade."""

    grade: str
    read_sources: int  # read in the source's own text, with a frequency inside the band
    half_width: float  # greatest half-width of the range, relative
    note: str


GRADES = (
    GradeRule("strong", 3, 0.10, "three read sources with a frequency, range within 10 %"),
    GradeRule("fair", 2, 0.18, "two read sources with a frequency, range within 18 %"),
    GradeRule("weak", 1, 0.45, "one read source with a frequency, range within 45 %"),
    GradeRule("guess", 0, float("inf"), "memory, no frequency, out of band, or a wider range"),
)
