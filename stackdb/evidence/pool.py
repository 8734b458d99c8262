"""Pooling figures within a source and sources with each other: random effects, shrunk and robust.

Method: the between-source variance of Paule and Mandel, J. Res. Natl. Bur. Stand. 87 (1982) 377, shrunk
toward the class's spread, with Student-type robust weights; see ``explain evidence``.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import sqrt
from typing import NamedTuple

from stackdb.evidence.quantiles import two_sided
from stackdb.evidence.settings import PRIOR_SOURCES, ROBUST_ROUNDS

FREEDOM = 4.0  # of the robust weights


class Figure(NamedTuple):
    """ln(permittivity) [-] and its standard uncertainty [-]."""

    y: float
    u: float


class Pooled(NamedTuple):
    """Mean of ln(permittivity), half-width of the next lot's range, robust weight of each source."""

    mean: float
    half_width: float
    weights: tuple[float, ...]
    spread: float


def within_source(figures: Sequence[Figure]) -> Figure:
    """One figure for a source: weighted mean; its uncertainty is the smallest one plus the scatter of the mean."""
    total = sum(1.0 / f.u**2 for f in figures)
    mean = sum(f.y / f.u**2 for f in figures) / total
    n = len(figures)
    scatter = sum((f.y - mean) ** 2 for f in figures) / (n - 1) / n if n > 1 else 0.0
    # Far-moved figures scatter because they were moved: what they weigh decides what they add.
    weighted = sum((f.y - mean) ** 2 / f.u**2 for f in figures) / total / n
    return Figure(mean, sqrt(min(f.u for f in figures) ** 2 + min(scatter, weighted)))


def _mean(figures: Sequence[Figure], weights: Sequence[float], tau2: float) -> float:
    shares = [r / (f.u**2 + tau2) for f, r in zip(figures, weights, strict=True)]
    return sum(s * f.y for s, f in zip(shares, figures, strict=True)) / sum(shares)


def paule_mandel(figures: Sequence[Figure], weights: Sequence[float]) -> float:
    """Between-source variance [-] at which the weighted residuals have their expected sum; 0 if already below.

    Solves sum r_i (y_i - m)^2/(u_i^2 + tau^2) = sum r_i - 1. The left side falls and is convex in tau^2, so Newton's
    method from 0 climbs to the root without passing it (DerSimonian and Kacker, Contemp. Clin. Trials 28 (2007) 105,
    recalled).
    """
    expected = sum(weights) - 1.0
    tau2 = 0.0
    for _ in range(50):
        mean = _mean(figures, weights, tau2)
        excess, slope = -expected, 0.0
        for f, r in zip(figures, weights, strict=True):
            variance = f.u**2 + tau2
            term = r * (f.y - mean) ** 2 / variance
            excess += term
            slope += term / variance
        if excess <= 1e-12 or slope == 0.0:
            break
        tau2 += excess / slope
        if excess < 1e-10 * (1.0 + expected):
            break
    return tau2


def _shrunk(tau2_seen: float, effective: float, class_spread: float) -> float:
    prior = PRIOR_SOURCES * class_spread**2
    return (prior + (effective - 1.0) * tau2_seen) / (PRIOR_SOURCES + effective - 1.0)


def _median(values: Sequence[float]) -> float:
    ordered = sorted(values)
    n = len(ordered)
    return 0.5 * (ordered[(n - 1) // 2] + ordered[n // 2])


def between_sources(figures: Sequence[Figure], class_spread: float, level: float) -> Pooled:
    """Pool one figure a source into the range [ln] that holds the next lot or supplier at ``level`` [-].

    With three sources or more the robust weights r = 5/(4 + z^2), at most 1, keep one absurd source from deciding;
    with two that disagree nothing can choose, and the range says so.
    """
    robust = len(figures) >= 3
    weights = [1.0] * len(figures)
    mean = _median([f.y for f in figures])
    tau2 = _shrunk(paule_mandel(figures, weights), float(len(figures)), class_spread)
    if robust:
        tau2 = class_spread**2
        for _ in range(ROBUST_ROUNDS):
            z2 = [(f.y - mean) ** 2 / (f.u**2 + tau2) for f in figures]
            weights = [min(1.0, (FREEDOM + 1.0) / (FREEDOM + z)) for z in z2]
            tau2 = _shrunk(paule_mandel(figures, weights), sum(weights), class_spread)
            before, mean = mean, _mean(figures, weights, tau2)
            if abs(mean - before) < 1e-10:
                break
    else:
        mean = _mean(figures, weights, tau2)
    of_mean = 1.0 / sum(r / (f.u**2 + tau2) for f, r in zip(figures, weights, strict=True))
    freedom = PRIOR_SOURCES + max(sum(weights), 1.0) - 1.0
    half_width = two_sided(level, freedom) * sqrt(tau2 + of_mean)
    return Pooled(mean, half_width, tuple(weights), sqrt(tau2))
