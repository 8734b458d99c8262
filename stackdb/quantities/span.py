"""An uncertain number, and the one constant that everything here shares."""

from __future__ import annotations

from typing import NamedTuple

EPS0 = 8.8541878188e-12  # electric constant [F/m], CODATA 2022


class Span(NamedTuple):
    """A value with the ends of its range."""

    value: float
    low: float
    high: float
