"""Formulas of safety standards as plain functions in SI; each names its document. No plant, no data files."""

from __future__ import annotations

import math

GAS_CONSTANT = 8.314462618  # J/(mol K), exact by the 2019 SI
NITROGEN_C = 1450e-12  # third virial coefficient of nitrogen near room temperature, m⁶/mol²


def nitrogen_pressure(pressure: float, temperature: float, later_temperature: float) -> float:
    """The pressure that dry nitrogen, shut in at `pressure` and `temperature`, shows at another temperature.

    Constant volume; virial equation p = ρRT(1 + Bρ + Cρ²) of nitrogen with B in cm³/mol = −4 − 56x − 12x²,
    x = 298.15/T − 1 (CRC Handbook, virial coefficients of selected gases; from memory), C 1450 cm⁶/mol² (from memory).
    Against the equation of state of Span et al. 2000, −10 to 40 °C: within 0.03 % of the pressure up to 60 bar and
    0.3 % up to 145 bar. The ideal gas, p·T2/T1, is 0.8 % off at 32 bar over 30 K.

    Args: pressure in Pa absolute, temperatures in K. Returns: Pa absolute.

    Raises:
        ValueError: a pressure that is not between 0 and 15 MPa, or a temperature not between 200 and 400 K.
    """
    if not (0 < pressure <= 15e6 and 200 < temperature < 400 and 200 < later_temperature < 400):
        raise ValueError(f"no nitrogen hold at {pressure} Pa and {temperature} to {later_temperature} K")
    b = _nitrogen_b(temperature)
    target = pressure / (GAS_CONSTANT * temperature)
    density = target
    for _ in range(50):
        value = density * (1 + b * density + NITROGEN_C * density**2) - target
        slope = 1 + 2 * b * density + 3 * NITROGEN_C * density**2
        density -= value / slope
        if abs(value) < 1e-12 * target:
            break
    b = _nitrogen_b(later_temperature)
    return GAS_CONSTANT * later_temperature * density * (1 + b * density + NITROGEN_C * density**2)


def _nitrogen_b(temperature: float) -> float:
    """Second virial coefficient of nitrogen in m³/mol."""
    x = 298.15 / temperature - 1
    return (-4 - 56 * x - 12 * x * x) * 1e-6


def pressure_steps(pre_test: float, test: float, first_share: float = 0.5, step: float = 0.1) -> tuple[float, ...]:
    """Gauge pressures of a site pressure test in Pa: pre-test, first share of the test pressure, then equal steps.

    RSIF IF-09 1.3.1: pre-test at 1.5 bar, then 50 %, then steps of about 10 %. A step below the one before is left out.
    """
    count = round((1 - first_share) / step)
    shares = [first_share + (1 - first_share) * i / count for i in range(count + 1)]
    steps = [pre_test]
    for share in shares:
        if share * test > steps[-1]:
            steps.append(share * test)
    return tuple(steps)


def dispersal_charge(limit: float, volume: float) -> float:
    """Charge in kg that a room of `volume` m³ may receive at a concentration limit in kg/m³ (EN 378-1 annex C)."""
    return limit * volume


def flammable_cap(lfl: float, volume: float, factor: float = 1.0) -> float:
    """m1, m2 or m3 in kg: `volume` 4, 26 or 130 m³ times LFL in kg/m³, times 1.5 for class 2L (EN 378-1 annex C)."""
    return volume * lfl * factor


def comfort_charge(lfl: float, height: float, area: float) -> float:
    """Largest charge in kg for human comfort: 2.5·LFL^(5/4)·h0·√A (EN 378-1 C.2.1), LFL kg/m³, h0 m, A m²."""
    return float(2.5 * lfl**1.25 * height * math.sqrt(area))


def comfort_area(charge: float, lfl: float, height: float) -> float:
    """Smallest floor area in m² for a charge in kg: (m / (2.5·LFL^(5/4)·h0))² (EN 378-1 C.2.1)."""
    return float((charge / (2.5 * lfl**1.25 * height)) ** 2)


def emergency_ventilation_en378(charge: float) -> float:
    """Emergency ventilation of a machinery room in m³/s: 0.014·m^(2/3), m in kg (EN 378-3:2016, 5.13)."""
    return float(0.014 * charge ** (2 / 3))


def emergency_ventilation_ashrae15(charge: float) -> float:
    """Emergency ventilation of a machinery room in m³/s: 0.070·√G, G in kg (ASHRAE 15, 8.11; not A2L or B2L)."""
    return 0.070 * math.sqrt(charge)


def tonnes(kilograms: float) -> str:
    """A mass in tonnes as a number for people, with two figures where it is small: below 0.001, 0.0019, 1.24."""
    tonne = kilograms / 1000.0
    if 0.0 < tonne < 0.001:
        return "below 0.001"
    return f"{tonne:.2g}" if 0.0 < tonne < 0.1 else f"{tonne:.2f}"


def co2_equivalent(charge: float, gwp: float) -> float:
    """CO₂ equivalent of a charge in kg."""
    return charge * gwp


def annualised_leak_rate(added: float, full_charge: float, days_since_last_addition: float) -> float:
    """Leak rate as a share of the full charge in a year: added/full·365/min(365, days) (40 CFR 82.152, annualizing).

    Raises:
        ValueError: no full charge, or not a positive number of days.
    """
    if not (full_charge > 0 and days_since_last_addition > 0):
        raise ValueError(f"no leak rate for a full charge of {full_charge} kg over {days_since_last_addition} days")
    return added / full_charge * 365 / min(365.0, days_since_last_addition)


def concentration(ppm: float, molar_mass: float) -> float:
    """Mass concentration in kg/m³ at 25 °C and 101.325 kPa of a volume share in ppm; molar mass in kg/mol."""
    return ppm * 1e-6 * molar_mass * 101325 / (GAS_CONSTANT * 298.15)
