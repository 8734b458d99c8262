"""Monte Carlo of a series stack in bounded memory: drawn in chunks, kept as fine histograms.

JCGM 101:2008: one draw for each input, so layers of one material share their permittivity's draw.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from typing import TYPE_CHECKING, NamedTuple

import numpy as np

from stackdb.quantities import EPS0

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from stackdb.stack.resolve import ResolvedStack

    Array = NDArray[np.float64]

CHUNK = 1 << 15  # fits the second-level cache with a dozen arrays
BINS = 1 << 13
SHAPES = ("rectangular", "triangular", "normal", "lognormal")


class Input(NamedTuple):
    """An input as it is drawn: nominal, limits, standard uncertainty of its logarithm [-], and the distribution's shape."""

    nominal: float
    low: float
    high: float
    u: float
    shape: str


class Drawn(NamedTuple):
    """Mean and the range that holds the level asked, of one quantity."""

    mean: float
    low: float
    high: float


class MonteCarlo(NamedTuple):
    """Samples drawn (fewer than asked if interrupted), seed, the three quantities, share of samples inside the limits [-]."""

    samples: int
    seed: int
    gap_m: Drawn
    capacitance_per_area: Drawn
    effective_permittivity: Drawn
    within_limits: float | None
    interrupted: bool


def draw(generator: np.random.Generator, source: Input, count: int) -> Array:
    """``count`` draws of an input, by its shape: rectangular or triangular between its limits, else (log)normal."""
    if source.u == 0.0 or source.high <= source.low:
        return np.full(count, source.nominal)
    if source.shape == "rectangular":
        return _scaled(generator.random(count), source.high - source.low, source.low)
    if source.shape == "triangular":
        mode = min(max(source.nominal, source.low), source.high)
        return generator.triangular(source.low, mode, source.high, count)
    z = generator.standard_normal(count)
    if source.shape == "normal":
        return np.maximum(_scaled(z, source.nominal * source.u, source.nominal), 1e-9 * source.nominal)
    np.multiply(z, source.u, out=z)
    np.exp(z, out=z)
    return np.multiply(z, source.nominal, out=z)


def _scaled(x: Array, factor: float, offset: float) -> Array:
    np.multiply(x, factor, out=x)
    return np.add(x, offset, out=x)


class Histogram:
    """Counts of a quantity between two ends, ends included; memory does not grow with the samples."""

    def __init__(self, low: float, high: float) -> None:
        self.low = low
        self.step = (high - low) / BINS or 1e-300
        self.counts = np.zeros(BINS, dtype=np.int64)
        self.total = 0.0

    def add(self, x: Array) -> None:
        """Count an array of values."""
        self.total += float(x.sum())
        places = (x - self.low) * (1.0 / self.step)
        np.clip(places, 0, BINS - 1, out=places)
        self.counts += np.bincount(places.astype(np.int32), minlength=BINS)

    def quantile(self, probability: float) -> float:
        """The value below which lies ``probability`` [-], straight inside a bin."""
        cumulative = np.cumsum(self.counts)
        target = probability * cumulative[-1]
        i = int(np.searchsorted(cumulative, target))
        before = int(cumulative[i - 1]) if i else 0
        inside = (target - before) / max(1, int(self.counts[i]))
        return float(self.low + self.step * (i + inside))


def _inputs(
    stack: ResolvedStack, thickness_shape: str, permittivity_shape: str
) -> tuple[list[Input], dict[str, Input]]:
    thicknesses = [
        Input(x.thickness.value, x.thickness.low, x.thickness.high, x.thickness_u, thickness_shape)
        for x in stack.layers
    ]
    permittivities: dict[str, Input] = {}
    for x in stack.layers:
        e = x.permittivity
        permittivities.setdefault(x.error_name, Input(e.value, e.low, e.high, x.permittivity_u, permittivity_shape))
    return thicknesses, permittivities


def _reach(stack: ResolvedStack) -> tuple[tuple[float, float], tuple[float, float]]:
    """Ends of the histograms of gap [m] and effective permittivity [-]: corners at six standard uncertainties."""
    low = high = 0.0
    eps_low, eps_high = [], []
    for x in stack.layers:
        spread = float(np.exp(6.0 * x.permittivity_u))
        least, most = x.permittivity.value / spread, x.permittivity.value * spread
        t_spread = 6.0 * x.thickness_u
        low += max(0.0, min(x.thickness.low, x.thickness.value * (1.0 - t_spread))) / most
        high += max(x.thickness.high, x.thickness.value * (1.0 + t_spread)) / least
        eps_low.append(least)
        eps_high.append(most)
    return (low, high), (min(eps_low), max(eps_high))


def run(
    stack: ResolvedStack,
    *,
    samples: int,
    seed: int,
    level: float,
    thickness_shape: str = "rectangular",
    permittivity_shape: str = "lognormal",
    accept: Callable[[Array], NDArray[np.bool_]] | None = None,
    progress: Callable[[int], None] | None = None,
) -> MonteCarlo:
    """Draw a stack ``samples`` times; ``accept`` says which gaps [m] are inside the limits; Ctrl-C ends with what is done.

    JCGM 101:2008, 5 and 7. The complex part of a lossy permittivity changes the gap in second order only and is not drawn.
    """
    generator = np.random.default_rng(seed)
    thicknesses, permittivities = _inputs(stack, thickness_shape, permittivity_shape)
    names = [x.error_name for x in stack.layers]
    gap_reach, eps_reach = _reach(stack)
    gaps, effective = Histogram(*gap_reach), Histogram(*eps_reach)
    areal_total, inside, done, interrupted = 0.0, 0, 0, False
    try:
        while done < samples:
            count = min(CHUNK, samples - done)
            gap, total = _chunk(generator, thicknesses, permittivities, names, count)
            inverse = 1.0 / gap
            gaps.add(gap)
            effective.add(total * inverse)
            areal_total += float(inverse.sum())
            inside += int(accept(gap).sum()) if accept is not None else 0
            done += count
            if progress is not None:
                progress(count)
    except KeyboardInterrupt:
        interrupted = True
    if not done:
        raise KeyboardInterrupt
    tails = (0.5 * (1.0 - level), 0.5 * (1.0 + level))
    g = Drawn(gaps.total / done, *(gaps.quantile(p) for p in tails))
    return MonteCarlo(
        samples=done,
        seed=seed,
        gap_m=g,
        capacitance_per_area=Drawn(EPS0 * areal_total / done, EPS0 / g.high, EPS0 / g.low),
        effective_permittivity=Drawn(effective.total / done, *(effective.quantile(p) for p in tails)),
        within_limits=inside / done if accept is not None else None,
        interrupted=interrupted,
    )


def _chunk(
    generator: np.random.Generator,
    thicknesses: Sequence[Input],
    permittivities: dict[str, Input],
    names: Sequence[str],
    count: int,
) -> tuple[Array, Array]:
    """Gap and total thickness of ``count`` stacks."""
    drawn = {name: draw(generator, source, count) for name, source in permittivities.items()}
    gap, total = np.zeros(count), np.zeros(count)
    for source, name in zip(thicknesses, names, strict=True):
        t = draw(generator, source, count)
        total += t
        t /= drawn[name]
        gap += t
    return gap, total
