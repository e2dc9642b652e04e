"""The compressor as a system states it: by displacement, by polynomials, by a table of its own."""

from __future__ import annotations

from collections.abc import Mapping

from commission.errors import NotCalculatedError
from commission.machine import Compressor, EfficiencyShape, PolynomialCompressor, ten_coefficients
from commission.prediction.facts import Facts
from commission.quantities import Kind, find_unit

KELVIN = 273.15


def shape_of(a: Mapping[str, float]) -> EfficiencyShape:
    """The run of the efficiencies over pressure ratio for the type of compressor."""
    return EfficiencyShape(
        clearance=a["compressor_clearance"],
        expansion_exponent=1.1,
        leakage=a["compressor_leakage"],
        loss_suction=a["compressor_suction_loss"],
        loss_discharge=a["compressor_discharge_loss"],
        built_in_volume_ratio=a["compressor_volume_ratio"] or None,
    )


def displacement_of(facts: Facts) -> float | None:
    """Swept volume flow in m3/s of all compressors at nominal speed, None where it is not stated."""
    one = facts.system.compressor.displacement
    return one * facts.system.compressor.count if one is not None else None


def compressor_of(
    facts: Facts, a: Mapping[str, float], swept_flow: float, isentropic: float, speed: float | None = None
) -> Compressor | PolynomialCompressor:
    """The compressor at fitted levels: swept flow (or flow factor of the polynomials) and isentropic level.

    They belong to `speed` (1/s), that of the reference point; the displacement is stated at the nominal speed.
    """
    displacement = displacement_of(facts)
    if displacement is not None and speed and facts.system.compressor.nominal_speed:
        displacement *= speed / facts.system.compressor.nominal_speed
    speed_loss = a["compressor_speed_loss"] if facts.system.compressor.drive == "variable speed" else 0.0
    if facts.system.compressor.polynomial is not None:
        return _polynomial(facts, a, swept_flow, isentropic, speed_loss)
    return Compressor(
        displacement=displacement or swept_flow,
        volumetric_level=swept_flow / displacement if displacement else 1.0,
        isentropic_level=isentropic,
        shape=shape_of(a),
        shell_loss=a["shell_heat_loss_share"],
        speed_loss=speed_loss,
    )


def _polynomial(
    facts: Facts, a: Mapping[str, float], flow_level: float, isentropic: float, speed_loss: float
) -> PolynomialCompressor:
    stated = facts.system.compressor.polynomial
    assert stated is not None
    count = facts.system.compressor.count

    def scaled(c: tuple[float, ...] | None, unit: str, kind: Kind) -> tuple[float, ...] | None:
        found = find_unit(unit, kind)
        if found is None:
            raise ValueError(f"{unit} is not a unit of {kind}")
        return None if c is None else tuple(count * found.factor * x for x in c)

    superheat = stated.suction_superheat
    if superheat is None and stated.suction_temperature is None:
        superheat = a["rating_superheat"]
    subcooling = stated.liquid_subcooling
    power = scaled(stated.power, stated.power_unit, Kind.POWER)
    assert power is not None
    flow = scaled(stated.mass_flow, stated.mass_flow_unit, Kind.MASS_FLOW)
    return PolynomialCompressor(
        flow=flow,
        capacity=scaled(stated.cooling_capacity, stated.capacity_unit, Kind.HEAT_FLOW),
        power=power,
        superheat=superheat,
        suction_temperature=stated.suction_temperature if superheat is None else None,
        subcooling=subcooling if subcooling is not None else (a["rating_subcooling"] if flow is None else 0.0),
        fahrenheit=stated.temperature_unit == "°F",
        flow_level=flow_level,
        isentropic_level=isentropic,
        shell_loss=a["shell_heat_loss_share"],
        displacement=displacement_of(facts),
        speed_loss=speed_loss,
    )


def estimate(facts: Facts, a: Mapping[str, float], evaporating: float, condensing: float) -> tuple[float, float]:
    """Rough cooling capacity and power in W between two dew points (K), from what is stated of the compressor alone.

    It sizes flows and fans that nobody states and starts the fit; the fit itself does not rest on it.

    Raises:
        NotCalculatedError: nothing is stated of the compressor.
    """
    if facts.system.compressor.polynomial is not None:
        machine = _polynomial(facts, a, 1.0, 1.0, 0.0)
        S, D = (t * 1.8 - 459.67 if machine.fahrenheit else t - KELVIN for t in (evaporating, condensing))
        power = ten_coefficients(machine.power, S, D)
        if machine.capacity is not None:
            return ten_coefficients(machine.capacity, S, D), power
        assert machine.flow is not None
        effect = facts.fluid.dew(evaporating).h - facts.fluid.bubble(condensing).h
        return ten_coefficients(machine.flow, S, D) * effect, power
    table = facts.system.compressor.table
    if table is None:
        raise NotCalculatedError("nothing is stated of the compressor")
    nearest = min(
        table.points,
        key=lambda p: abs(p.evaporating_temperature - evaporating) + abs(p.condensing_temperature - condensing),
    )
    count = facts.system.compressor.count
    effect = facts.fluid.dew(evaporating).h - facts.fluid.bubble(condensing).h
    capacity = nearest.cooling_capacity or (nearest.refrigerant_flow or 0.0) * effect
    return count * capacity, count * nearest.compressor_power
