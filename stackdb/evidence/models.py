"""Published models recorded in the catalogue, evaluated inside their recorded range."""

from __future__ import annotations

from typing import TYPE_CHECKING, NamedTuple

from stackdb.dielectrics import water
from stackdb.dielectrics.relaxation import Term, cole_cole

if TYPE_CHECKING:
    from stackdb.catalogue import DispersionRecord
    from stackdb.evidence.judge import Conditions

# Standard uncertainty of ln(permittivity) of a model's prediction for a real specimen, a judgement: pure substances by
# standards 0.002, salt water 0.01, tissue 0.15 (the compilers warn of the low-frequency part).
SPREADS = {"water-static": 0.002, "moist-air": 0.0001, "ice": 0.03, "sea-water": 0.01, "salt-water": 0.01}
DEFAULT_SPREAD = 0.15


class Modelled(NamedTuple):
    """Complex permittivity without conduction [-], conductivity [S/m] where ions carry it, and one line of reason."""

    permittivity: complex
    conductivity_s_per_m: float | None
    why: str


def spread_of(model: str) -> float:
    """Standard uncertainty [-] of ln(permittivity) that a model's prediction owes."""
    return SPREADS.get(model, DEFAULT_SPREAD)


def _inside(value: float, low: float | None, high: float | None) -> bool:
    return (low is None or value >= low) and (high is None or value <= high)


def within(row: DispersionRecord, conditions: Conditions) -> bool:
    """Whether frequency and temperature lie in the recorded range of a model."""
    return _inside(conditions.frequency_hz, row.frequency_low_hz, row.frequency_high_hz) and _inside(
        conditions.temperature_c, row.temperature_low_c, row.temperature_high_c
    )


def _tissue(row: DispersionRecord, frequency_hz: float) -> complex:
    import json

    parameters = json.loads(row.parameters)
    terms = [Term(*numbers) for numbers in parameters.get("terms", ())]
    sigma = parameters.get("sigma", 0.0)
    return cole_cole(frequency_hz=frequency_hz, eps_inf=parameters["eps_inf"], terms=terms, conductivity_s_per_m=sigma)


def _number(row: DispersionRecord, name: str, otherwise: float) -> float:
    import json

    return float(json.loads(row.parameters or "{}").get(name, otherwise))


def evaluate(row: DispersionRecord, conditions: Conditions) -> Modelled | None:
    """A model's permittivity at the conditions asked, or None outside its range."""
    if not within(row, conditions):
        return None
    t, f = conditions.temperature_c, conditions.frequency_hz
    why = f"published model ({row.model}) inside its range"
    if row.model == "water-static":
        return Modelled(complex(water.water_permittivity(t)), None, why)
    if row.model == "moist-air":
        eps = water.air_permittivity(temperature_c=t, humidity_pct=conditions.humidity_pct)
        return Modelled(complex(eps), None, why)
    if row.model == "ice":
        return Modelled(water.ice_permittivity(frequency_hz=f, temperature_c=t), None, why)
    if row.model == "sea-water":
        s = _number(row, "salinity", 35.0)
        eps = water.sea_water_permittivity(temperature_c=t, salinity=s)
        return Modelled(complex(eps), water.sea_water_conductivity(temperature_c=t, salinity=s), why)
    if row.model == "salt-water":
        sigma = water.salt_water_conductivity(temperature_c=t, molality=_number(row, "molality", 0.154))
        return Modelled(complex(water.water_permittivity(t)), sigma, why)
    return Modelled(_tissue(row, f), None, why)
