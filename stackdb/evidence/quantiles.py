"""Quantiles of the normal and the Student distribution, in pure Python for a quick start."""

from __future__ import annotations

from math import exp, lgamma, log, log1p, pi, sqrt


def normal_quantile(probability: float) -> float:
    """The standard normal deviate [-] below which lies ``probability`` [-].

    Rational start of Hastings (1955, formula 26.2.23 of Abramowitz and Stegun 1964, recalled), then
    Newton steps on the complementary error function to machine accuracy.
    """
    from math import erfc

    if probability == 0.5:
        return 0.0
    if probability < 0.5:
        return -normal_quantile(1.0 - probability)
    tail = 1.0 - probability
    t = sqrt(-2.0 * log(tail))
    x = t - (2.515517 + t * (0.802853 + t * 0.010328)) / (1 + t * (1.432788 + t * (0.189269 + t * 0.001308)))
    for _ in range(4):
        x += (0.5 * erfc(x / sqrt(2.0)) - tail) * sqrt(2.0 * pi) * exp(0.5 * x * x)
    return x


def _beta_fraction(a: float, b: float, x: float) -> float:
    """Continued fraction of the incomplete beta function, by the modified Lentz method."""
    tiny = 1e-300
    c, d = 1.0, 1.0 - (a + b) * x / (a + 1.0)
    d = 1.0 / (d if abs(d) > tiny else tiny)
    h = d
    for m in range(1, 300):
        for numerator in (
            m * (b - m) * x / ((a + 2 * m - 1) * (a + 2 * m)),
            -(a + m) * (a + b + m) * x / ((a + 2 * m) * (a + 2 * m + 1)),
        ):
            d = 1.0 + numerator * d
            d = 1.0 / (d if abs(d) > tiny else tiny)
            c = 1.0 + numerator / c
            c = c if abs(c) > tiny else tiny
            step = d * c
            h *= step
        if abs(step - 1.0) < 1e-15:
            break
    return h


def _student_tail(t: float, df: float) -> float:
    """Probability above ``t`` >= 0: half the incomplete beta function I(df/(df + t^2); df/2, 1/2)."""
    x, a, b = df / (df + t * t), 0.5 * df, 0.5
    front = exp(lgamma(a + b) - lgamma(a) - lgamma(b) + a * log(x) + (b * log1p(-x) if x < 1.0 else 0.0))
    if x >= 1.0:
        return 0.5
    if x < (a + 1.0) / (a + b + 2.0):
        return 0.5 * front * _beta_fraction(a, b, x) / a
    return 0.5 * (1.0 - front * _beta_fraction(b, a, 1.0 - x) / b)


def student_quantile(probability: float, df: float) -> float:
    """The Student deviate [-] below which lies ``probability`` [-], for ``df`` degrees of freedom [-] (real, >= 1).

    Newton's method on the tail, which is convex there, from the normal deviate below the root.
    """
    if probability == 0.5:
        return 0.0
    if probability < 0.5:
        return -student_quantile(1.0 - probability, df)
    tail = 1.0 - probability
    t = normal_quantile(probability)
    scale = exp(lgamma(0.5 * (df + 1.0)) - lgamma(0.5 * df)) / sqrt(df * pi)
    for _ in range(100):
        density = scale * (1.0 + t * t / df) ** (-0.5 * (df + 1.0))
        step = (_student_tail(t, df) - tail) / density
        t += step
        if abs(step) < 1e-13 * t:
            break
    return t


def two_sided(level: float, df: float | None = None) -> float:
    """Half-width in standard deviations [-] of the interval holding ``level`` [-]; normal without ``df``."""
    probability = 0.5 + 0.5 * level
    return normal_quantile(probability) if df is None else student_quantile(probability, df)
