"""Water, salt water, ice, moist air, and how thick they lie: published models as pure functions."""

from __future__ import annotations

from math import exp, pi, radians, sin, sqrt

from stackdb.dielectrics.relaxation import Term, cole_cole

KELVIN = 273.15
CRITICAL_K = 647.096
CRITICAL_KG_M3 = 322.0

# IAPWS R8-97, Release on the Static Dielectric Constant of Ordinary Water Substance, table 1.
_N = (
    0.978224486826,
    -0.957771379375,
    0.237511794148,
    0.714692244396,
    -0.298217036956,
    -0.108863472196,
    0.0949327488264,
    -0.00980469816509,
    0.000016516763497,
    0.0000937359795772,
    -0.00000000012317921872,
)
_N12 = 0.00196096504426
_I = (1, 1, 1, 2, 3, 3, 4, 5, 6, 7, 10)
_J = (0.25, 1.0, 2.5, 1.5, 1.5, 2.5, 2.0, 2.0, 5.0, 0.5, 10.0)
_BOLTZMANN, _AVOGADRO = 1.380658e-23, 6.0221367e23
_POLARISABILITY, _DIPOLE, _MOLAR_KG = 1.636e-40, 6.138e-30, 0.018015268
_EPS0_RELEASE = 1.0 / (4e-7 * pi * 299792458.0**2)


def water_density(temperature_c: float) -> float:
    """Density [kg/m3] of air-free water at 101.325 kPa and a temperature [degC] of 0 to 100.

    G. S. Kell, J. Chem. Eng. Data 20 (1975) 97, equation 16 (coefficients recalled; within 0.02 kg/m3 of IAPWS-95).
    """
    t = temperature_c
    above = 999.83952 + t * (
        16.945176 + t * (-7.9870401e-3 + t * (-46.170461e-6 + t * (105.56302e-9 - t * 280.54253e-12)))
    )
    return above / (1.0 + 16.879850e-3 * t)


def water_permittivity(temperature_c: float, density_kg_m3: float | None = None) -> float:
    """Static relative permittivity [-] of pure water at a temperature [degC] and density [kg/m3], by default at 101.325 kPa.

    IAPWS R8-97. Its relaxation lies near 17 GHz, so this holds below 10 MHz to a part in a million.

    >>> round(water_permittivity(25.0), 2)
    78.41
    """
    rho = water_density(temperature_c) if density_kg_m3 is None else density_kg_m3
    kelvin = temperature_c + KELVIN
    delta, tau = rho / CRITICAL_KG_M3, CRITICAL_K / kelvin
    g = 1.0 + sum(n * delta**i * tau**j for n, i, j in zip(_N, _I, _J, strict=True))
    g += _N12 * delta * (kelvin / 228.0 - 1.0) ** -1.2
    per_m3 = _AVOGADRO * rho / _MOLAR_KG
    a = per_m3 * _DIPOLE**2 * g / (_EPS0_RELEASE * _BOLTZMANN * kelvin)
    b = per_m3 * _POLARISABILITY / (3.0 * _EPS0_RELEASE)
    root = sqrt(9.0 + 2.0 * a + 18.0 * b + a * a + 10.0 * a * b + 9.0 * b * b)
    return float((1.0 + a + 5.0 * b + root) / (4.0 - 4.0 * b))


# Practical salinity scale 1978: UNESCO Tech. Pap. Mar. Sci. 44 (1983), algorithms 1 and 2 (coefficients recalled).
_PSS_A = (0.0080, -0.1692, 25.3851, 14.0941, -7.0261, 2.7081)
_PSS_B = (0.0005, -0.0056, -0.0066, -0.0375, 0.0636, -0.0144)
SEA_WATER_35_15 = 4.2914  # S/m, conductivity of standard sea water, S = 35 at 15 degC (IPTS-68)


def _salinity(root_ratio: float, t68: float) -> float:
    powers = [root_ratio**n for n in range(6)]
    drift = (t68 - 15.0) / (1.0 + 0.0162 * (t68 - 15.0))
    return sum((a + drift * b) * p for a, b, p in zip(_PSS_A, _PSS_B, powers, strict=True))


def sea_water_conductivity(*, temperature_c: float, salinity: float = 35.0) -> float:
    """Conductivity [S/m] of sea water of a practical salinity [-] at a temperature [degC, ITS-90] and no pressure.

    PSS-78, turned round by bisection; valid for salinity 2 to 42 and -2 to 35 degC.
    """
    t68 = 1.00024 * temperature_c
    low, high = 0.0, 2.0
    for _ in range(60):
        middle = 0.5 * (low + high)
        low, high = (middle, high) if _salinity(middle, t68) < salinity else (low, middle)
    of_t = 0.6766097 + t68 * (2.00564e-2 + t68 * (1.104259e-4 + t68 * (-6.9698e-7 + t68 * 1.0031e-9)))
    return SEA_WATER_35_15 * of_t * low * low


def sea_water_permittivity(*, temperature_c: float, salinity: float = 35.0) -> float:
    """Static relative permittivity [-] of sea water of a practical salinity [-] at a temperature [degC].

    T. Meissner and F. J. Wentz, IEEE Trans. Geosci. Remote Sens. 42 (2004) 1836, with the 2012 salt term.
    """
    t, s = temperature_c, salinity
    return (37088.6 - 82.168 * t) / (421.854 + t) * exp(-0.0033330 * s + 4.74868e-6 * s * s)


def salt_water_conductivity(*, temperature_c: float, molality: float) -> float:
    """Conductivity [S/m] of a sodium chloride solution of a molality [mol/kg] at a temperature [degC] of 5 to 90.

    R. B. McCleskey, J. Chem. Eng. Data 56 (2011) 317, doi 10.1021/je101012n: molar conductivity
    c1 t^2 + c2 t + c3 - (d1 t^2 + d2 t + d3) sqrt(m)/(1 + 1.3 sqrt(m)), up to about 1 mol/kg.
    """
    t, root = temperature_c, sqrt(molality)
    limit = 0.008967 * t * t + 2.196 * t + 67.03
    fall = 0.00726 * t * t + 1.762 * t + 44.55
    return 0.1 * molality * (limit - fall * root / (1.0 + 1.3 * root))


def ice_permittivity(*, frequency_hz: float, temperature_c: float) -> complex:
    """Complex relative permittivity [-] of ice Ih at a frequency [Hz] and temperature [degC] of -73 to -2.

    G. P. Johari and S. J. Jones, J. Glaciol. 21 (1978) 259, table III: one Debye relaxation,
    eps_s = 3.2 + 23400/(T - 15), tau = (9.3e-13/T) exp(51100/(R T)).
    """
    kelvin = temperature_c + KELVIN
    tau = 9.3e-13 / kelvin * exp(51100.0 / (8.314 * kelvin))
    return cole_cole(frequency_hz=frequency_hz, eps_inf=3.2, terms=[Term(23400.0 / (kelvin - 15.0), tau)])


def air_permittivity(*, temperature_c: float, humidity_pct: float, pressure_hpa: float = 1013.25) -> float:
    """Relative permittivity [-] of moist air at a temperature [degC], relative humidity [%] and pressure [hPa].

    ITU-R P.453-13, equation 2: N = 77.6 Pd/T + 72 e/T + 3.75e5 e/T^2, eps = (1 + N 1e-6)^2; vapour pressure by A. L. Buck's
    formula (1996 form, recalled).
    """
    t, kelvin = temperature_c, temperature_c + KELVIN
    vapour = 0.01 * humidity_pct * 6.1121 * exp((18.678 - t / 234.5) * t / (257.14 + t))
    refractivity = 77.6 * (pressure_hpa - vapour) / kelvin + 72.0 * vapour / kelvin + 3.75e5 * vapour / kelvin**2
    return (1.0 + 1e-6 * refractivity) ** 2


def surface_tension(temperature_c: float) -> float:
    """Surface tension [N/m] of water at a temperature [degC]. IAPWS R1-76(2014) (coefficients recalled)."""
    tau = 1.0 - (temperature_c + KELVIN) / CRITICAL_K
    return float(0.2358 * tau**1.256 * (1.0 - 0.625 * tau))


def puddle_height(*, contact_angle_deg: float, temperature_c: float = 20.0) -> float:
    """Height [m] of a wide puddle on a level plate from the contact angle [deg] at a temperature [degC].

    2 L sin(theta/2) with the capillary length L = sqrt(gamma/(rho g)): P.-G. de Gennes, F. Brochard-Wyart and D. Quere,
    Capillarity and Wetting Phenomena (2004), recalled.
    """
    length = sqrt(surface_tension(temperature_c) / (water_density(temperature_c) * 9.80665))
    return 2.0 * length * sin(0.5 * radians(contact_angle_deg))
