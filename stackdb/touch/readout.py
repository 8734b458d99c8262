"""Readout by charge transfer: a model of the principle, not of any chip.

The unknown capacitance is charged to the supply, then shares its charge with an integrating capacitor, once or many times.
Principle: US 5,730,165 and US 6,466,036; the equations follow from conservation of charge.
"""

from __future__ import annotations

from math import ceil, log


def shared_voltage(*, supply_v: float, unknown_farad: float, integrator_farad: float, before_v: float = 0.0) -> float:
    """Voltage [V] after one transfer from ``unknown_farad`` [F] at the supply [V] to an integrator [F] at ``before_v`` [V]."""
    return (unknown_farad * supply_v + integrator_farad * before_v) / (unknown_farad + integrator_farad)


def voltage_after(*, supply_v: float, unknown_farad: float, integrator_farad: float, transfers: int) -> float:
    """Voltage [V] after so many transfers [-] without reset: V (1 - (Ci/(Ci + Cx))^n)."""
    keep = integrator_farad / (integrator_farad + unknown_farad)
    return float(supply_v * (1.0 - keep**transfers))


def transfers_to(*, threshold_share: float, unknown_farad: float, integrator_farad: float) -> float:
    """Transfers [-], as a real number, to a threshold given as a share of the supply [-]: ln(1 - s)/ln(Ci/(Ci + Cx))."""
    return log(1.0 - threshold_share) / log(integrator_farad / (integrator_farad + unknown_farad))


def count_to(*, threshold_share: float, unknown_farad: float, integrator_farad: float) -> int:
    """Whole transfers [-] to a threshold, rounded up.

    >>> count_to(threshold_share=0.5, unknown_farad=10e-12, integrator_farad=10e-9)
    694
    """
    n = transfers_to(threshold_share=threshold_share, unknown_farad=unknown_farad, integrator_farad=integrator_farad)
    return ceil(n)


def count_change(
    *, threshold_share: float, unknown_farad: float, change_farad: float, integrator_farad: float
) -> float:
    """Change [-] of the real-valued count by a touch: negative, since a larger capacitance fills the integrator sooner."""
    touched = transfers_to(
        threshold_share=threshold_share,
        unknown_farad=unknown_farad + change_farad,
        integrator_farad=integrator_farad,
    )
    return touched - transfers_to(
        threshold_share=threshold_share, unknown_farad=unknown_farad, integrator_farad=integrator_farad
    )


def signal_to_noise(*, counts: float, noise: float) -> float:
    """Signal over noise [-], both in counts [-] measured alike; whether noise is rms or peak is the user's to state."""
    return counts / noise
