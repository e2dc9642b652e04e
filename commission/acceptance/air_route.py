"""Capacity by the air side: dry where nothing condenses, by enthalpy where the coil is wet.

Dry: flow times density times heat capacity times temperature change. Wet: the steady-flow balance of moist air that is
cooled and dehumidified, ASHRAE Handbook Fundamentals 2017 (SI), chapter 1, section of that name; the air-enthalpy
method of ANSI/ASHRAE 37 and ISO 5151 rests on it.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

from commission.acceptance.budget import Budget, Component, Measured, propagate
from commission.acceptance.derived import explained
from commission.acceptance.routes import RouteResult, Side, library, need, relative
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Input, Kind, Quantity

if TYPE_CHECKING:
    from commission.description.model import Medium

FREEZING = 273.15
WATER = 4186.0
"""Heat capacity of liquid water in J/(kg K), as in the enthalpy of moist air of the same chapter (equation 33)."""
OFF_COIL = "heat_source_outlet_wet_bulb"
WET_COIL = "the coil is wet (the dew point of the air lies above the evaporating temperature)"


def air_side(
    medium: Medium,
    side: Side,
    barometric: float,
    readings: Mapping[str, Measured],
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> RouteResult:
    """Heat taken from or given to air, in W, from its flow, temperatures and, where water condenses, wet bulb.

    Air that neither loses nor gains water: Q = V rho_dry(T_in) cp |T_in - T_out|, cp per kg of dry air. With the wet
    bulb off the coil among the readings, and not a coil that must be dry: Q = V rho_dry(T_in) ((h_in - h_out) -
    (W_in - W_out) c_w t_out), the condensate leaving as cold as the air. `barometric` in Pa.

    Raises:
        NotCalculatedError: the medium is no air, a reading is missing, the coil may be wet and nothing tells how much
            water it takes, or it freezes.
    """
    if medium.medium != "air":
        raise NotCalculatedError(f"the heat {side} is {medium.medium}")
    inlet, outlet, flow = (f"heat_{side}_{x}" for x in ("inlet_temperature", "outlet_temperature", "flow"))
    need(readings, names, inlet, outlet, flow)
    humidity = readings.get(f"heat_{side}_relative_humidity")
    if side == "source":
        why_wet = _may_be_wet(readings, humidity, barometric)
        if why_wet is not None and (humidity is None or OFF_COIL not in readings):
            raise NotCalculatedError(f"{why_wet}, and the humidity of the air that leaves it is not read")
        if why_wet is not None and humidity is not None:
            return _wet(readings, humidity, barometric)
    inputs = {
        "t_in": readings[inlet],
        "t_out": readings[outlet],
        "flow": readings[flow],
        "humidity": humidity or _humidity_not_read(medium, side),
        "method": _uneven(),
    }
    sign = 1.0 if side == "source" else -1.0

    def heat(t_in: float, t_out: float, flow: float, humidity: float, method: float) -> float:
        from commission.properties import moist_air

        air = moist_air(t_in, barometric, relative_humidity=_possible(humidity))
        return sign * method * flow * air.density * air.cp * (t_in - t_out)

    key = "cooling_capacity" if side == "source" else "heating_capacity"
    more = {}
    if humidity is None:
        origin = "assumed: not read" if medium.relative_humidity is None else "plant.yaml"
        more["humidity"] = Input(f"heat_{side}_relative_humidity", inputs["humidity"].value, Kind.RATIO, origin)
    return RouteResult("air side", explained(propagate(key, heat, inputs), "air_side_capacity", inputs, **more))


def _wet(readings: Mapping[str, Measured], humidity: Measured, barometric: float) -> RouteResult:
    """The balance of air whose water condenses.

    Raises:
        NotCalculatedError: the air leaves at freezing or below, or no air can have the two bulbs off the coil.
    """
    from commission.properties import moist_air

    inputs = {
        "t_in": readings["heat_source_inlet_temperature"],
        "t_out": readings["heat_source_outlet_temperature"],
        "wet_out": readings[OFF_COIL],
        "flow": readings["heat_source_flow"],
        "humidity": humidity,
        "method": _uneven(),
    }
    if inputs["wet_out"].value <= FREEZING:
        raise NotCalculatedError("the air leaves at freezing or below: the coil gathers frost and nothing is steady")

    def heat(t_in: float, t_out: float, wet_out: float, flow: float, humidity: float, method: float) -> float:
        on = moist_air(t_in, barometric, relative_humidity=_possible(humidity))
        # Two probes in saturated air may read the wet one a little above the dry one: the wet bulb then tells both.
        off = moist_air(max(t_out, wet_out), barometric, wet_bulb=wet_out)
        condensate = (on.W - off.W) * WATER * (t_out - FREEZING)
        return method * flow * on.density * (on.h - off.h - condensate)

    made = propagate("cooling_capacity", heat, inputs)
    return RouteResult("air side", explained(made, "air_side_enthalpy", inputs))


def _possible(humidity: float) -> float:
    """A humidity of 98 % with its doubt goes beyond saturation in the difference that gives the sensitivity."""
    return min(max(humidity, 0.0), 1.0)


def _uneven() -> Measured:
    return relative("air side", "method", "uneven air over the coil")


def _humidity_not_read(medium: Medium, side: Side) -> Measured:
    """Humidity as the description states it, or anything: it moves the heat by about a hundredth."""
    key = f"heat_{side}_relative_humidity"
    stated = medium.relative_humidity
    entry = library()["air side"]["humidity_not_read" if stated is None else "humidity_stated"]
    component = Component(
        "humidity not read", float(entry["standard"]), "rectangular", source=entry["source"], mark=entry["mark"],
        cause=f"{key}: not read", of=key, remedy=entry["remedy"],
    )  # fmt: skip
    return Measured("relative humidity", float(entry["value"]) if stated is None else stated, Budget((component,)))


def _may_be_wet(readings: Mapping[str, Measured], humidity: Measured | None, barometric: float) -> str | None:
    """Why water may condense on the coil; None where it must be dry."""
    from commission.properties import moist_air

    evaporating = readings.get("evaporating_temperature")
    if humidity is None or evaporating is None:
        return "the coil may be wet"
    air = moist_air(readings["heat_source_inlet_temperature"].value, barometric, relative_humidity=humidity.value)
    return WET_COIL if air.dew_point > evaporating.value else None
