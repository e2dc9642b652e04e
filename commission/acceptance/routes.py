"""Ways to measure capacity and COP on site, each with its budget and its refusals.

Compressor heat balance: Nordtest NT VVS 115 and NT VVS 116; P. Fahlén, field testing of refrigeration and heat pump
equipment (the internal method). Liquid side: flow times density times heat capacity times temperature change, the
definition that EN 14511-3 and ISO 916 use. The air side is in `air_route`.
"""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import TYPE_CHECKING, Any, Literal

from commission.acceptance.budget import Budget, Component, Measured, combine, propagate
from commission.acceptance.derived import Derived, explained
from commission.acceptance.expectation import model_cause
from commission.errors import NotCalculatedError
from commission.quantities import NOMENCLATURE, Input, Kind, Quantity

if TYPE_CHECKING:
    from commission.description.model import Medium
    from commission.properties import Refrigerant

Route = Literal["compressor heat balance", "liquid side", "air side", "electric meter"]
Side = Literal["source", "sink"]
SHELL = "shell_heat_loss_share"
UPSETS: Mapping[str, str] = {
    "liquid injection": "liquid is injected into the compression: a second flow enters the balance",
    "vapour injection": "vapour is injected into the compression: a second flow enters the balance",
    "hot gas bypass": "hot gas is bypassed: part of the compressor's flow never sees the evaporator",
    "oil cooling": "oil takes heat out of the compressor: its power does not all go into the gas",
    "defrost in the means": "the readings are means with defrosts in them: they are no states of one moment",
    "water-cooled compressor": "a water jacket takes heat out: the power does not all go into the gas",
}
"""What makes the compressor heat balance wrong, and why."""


@dataclass(frozen=True, slots=True)
class RouteResult:
    """A capacity measured by one route."""

    route: Route
    derived: Derived

    @property
    def measured(self) -> Measured:
        """Value and budget."""
        return self.derived.measured


@dataclass(frozen=True, slots=True)
class Refusal:
    """A route that cannot be used here, and why."""

    route: Route
    key: str
    reason: str


@cache
def library() -> Mapping[str, Any]:
    """The data of `routes.yaml`."""
    import yaml

    text = (files("commission.acceptance") / "routes.yaml").read_text(encoding="utf-8")
    data: Mapping[str, Any] = yaml.safe_load(text)
    return data


def relative(route: str, part: str, name: str) -> Measured:
    """A factor of one with the relative uncertainty of the library."""
    entry = library()[route][part]
    component = Component(
        name, float(entry["standard"]), source=entry["source"], mark=entry["mark"], cause=f"{route}: {name}", of=name,
        remedy=entry["remedy"],
    )  # fmt: skip
    return Measured(name, 1.0, Budget((component,) if component.value else ()))


def shell_share(
    value: float | None = None, standard: float | None = None, source: str = "", mark: str = ""
) -> Measured:
    """Share of the electric power that leaves through the shell, from the model's assumption or from the library.

    It goes under the cause of the model's assumption, so that a deviation from the model keeps what both share.
    """
    entry = library()["compressor heat balance"]["shell"]
    if value is None or standard is None:
        value, standard = float(entry["value"]), float(entry["standard"])
        source, mark = entry["source"], entry["mark"]
    component = Component(
        "heat lost by the compressor shell", standard, "rectangular", source=source, mark=mark,
        cause=model_cause(SHELL), of="shell heat loss share", remedy=entry["remedy"],
    )  # fmt: skip
    return Measured("shell heat loss share", value, Budget((component,) if standard else ()))


def need(have: Mapping[str, Measured], names: Mapping[str, Quantity], *keys: str) -> None:
    """Refuse where a reading is missing; `names` is the nomenclature of the system.

    Raises:
        NotCalculatedError: one of `keys` is not in `have`.
    """
    lacking = [names[k].words for k in keys if k not in have]
    if lacking:
        raise NotCalculatedError(f"it needs a reading of {', '.join(lacking)}")


def compressor_heat_balance(
    refrigerant: Refrigerant,
    readings: Mapping[str, Measured],
    *,
    key: str = "cooling_capacity",
    shell: Measured | None = None,
    line_gain: Measured | None = None,
    compressor: str | None = None,
    upsets: Collection[str] = (),
    names: Mapping[str, Quantity] = NOMENCLATURE,
) -> RouteResult:
    """Cooling or heating capacity from refrigerant states and the power of the compressor.

    Flow = P (1 - f) / (h2 - h1); cooling capacity = flow (h_e - h4); heating capacity = flow (h2 - h4), with h1 at the
    suction port, h2 at the discharge port, h4 of the liquid at the discharge pressure (saturated where it is not
    subcooled there), h_e at the evaporator outlet: the suction temperature less the warming `line_gain` of the suction
    line in K (none where not given), at the pressure of the evaporating temperature where that is among the readings.
    P is the electric power of a motor cooled by the suction gas, f the share lost through the shell (Nordtest NT VVS
    115, 116).

    Raises:
        NotCalculatedError: a reading is missing, or the balance does not hold here (the reason is said).
    """
    for upset in upsets:
        if upset in UPSETS:
            raise NotCalculatedError(UPSETS[upset])
    if compressor == "screw":
        raise NotCalculatedError(
            "a screw compressor's oil takes heat out of it: its power does not all go into the gas"
        )
    need(
        readings, names, "suction_pressure", "suction_temperature", "discharge_pressure", "discharge_temperature",
        "liquid_temperature", "compressor_power",
    )  # fmt: skip
    _refuse_wet_suction(readings)
    _refuse_flash_gas(readings)
    inputs = {
        "ps": readings["suction_pressure"],
        "ts": readings["suction_temperature"],
        "pd": readings["discharge_pressure"],
        "td": readings["discharge_temperature"],
        "tl": readings["liquid_temperature"],
        "power": readings["compressor_power"],
        "share": shell or shell_share(),
        "gain": line_gain or Measured("line gain", 0.0),
        "te": readings.get("evaporating_temperature", Measured("not read", math.nan)),
        "method": relative("compressor heat balance", "method", "limits of the compressor heat balance"),
    }
    heating = key == "heating_capacity"

    def capacity(
        ps: float,
        ts: float,
        pd: float,
        td: float,
        tl: float,
        power: float,
        share: float,
        gain: float,
        te: float,
        method: float,
    ) -> float:
        h1, h2 = refrigerant.vapour(ts, ps).h, refrigerant.vapour(td, pd).h
        if h2 <= h1:
            raise NotCalculatedError("the discharge gas holds no more heat than the suction gas: a reading is wrong")
        flow = power * (1.0 - share) / (h2 - h1)
        pe = ps if math.isnan(te) else refrigerant.dew(te).p
        hot = h2 if heating else refrigerant.vapour(ts - gain, pe).h
        return method * flow * (hot - _liquid_enthalpy(refrigerant, tl, pd))

    method = "compressor_heat_balance_heating" if heating else "compressor_heat_balance_cooling"
    more = {
        "share": Input("shell heat loss share", inputs["share"].value, Kind.RATIO, f"assumption {SHELL}"),
        "gain": Input("warming in the suction line", inputs["gain"].value, Kind.TEMPERATURE_DIFFERENCE, "calculated"),
    }
    return RouteResult("compressor heat balance", explained(propagate(key, capacity, inputs), method, inputs, **more))


def _liquid_enthalpy(refrigerant: Refrigerant, temperature: float, pressure: float) -> float:
    """Enthalpy of the liquid at its pressure, which counts for carbon dioxide; on the bubble line where it is there."""
    if temperature < refrigerant.T_critical - 1.0 and pressure <= refrigerant.bubble(temperature).p:
        return float(refrigerant.bubble(temperature).h)
    return float(refrigerant.liquid(temperature, pressure).h)


def _refuse_wet_suction(readings: Mapping[str, Measured]) -> None:
    superheat = readings.get("compressor_superheat")
    if superheat is not None and superheat.value <= superheat.budget.expanded():
        raise NotCalculatedError(
            "the suction gas may be wet: its superheat is not larger than its uncertainty, and a wet state has no "
            "enthalpy that temperature and pressure could tell"
        )


def _refuse_flash_gas(readings: Mapping[str, Measured]) -> None:
    subcooling = readings.get("subcooling")
    if subcooling is not None and subcooling.value < -subcooling.budget.expanded():
        raise NotCalculatedError("the liquid line is above its bubble point: flash gas, whose enthalpy is not known")


def liquid_side(
    medium: Medium, side: Side, readings: Mapping[str, Measured], names: Mapping[str, Quantity] = NOMENCLATURE
) -> RouteResult:
    """Heat taken from a liquid source or given to a liquid sink, from its flow and temperatures.

    Q = V rho(T_in) cp(T_mean) |T_in - T_out|; the flow is a volume flow at the inlet state (see the nomenclature). For
    glycol the mass fraction adds its part; a matched pair of probes shares its error, which cancels here.

    Raises:
        NotCalculatedError: the medium is no liquid, its mass fraction is not stated, or a reading is missing.
    """
    from commission.properties import liquid

    if medium.medium == "air":
        raise NotCalculatedError(f"the heat {side} is air")
    inlet, outlet, flow = (f"heat_{side}_{x}" for x in ("inlet_temperature", "outlet_temperature", "flow"))
    need(readings, names, inlet, outlet, flow)
    fraction = Measured("mass fraction", medium.mass_fraction or 0.0)
    if medium.medium != "water":
        if medium.mass_fraction is None:
            raise NotCalculatedError(f"the mass fraction of {medium.medium} is not stated")
        entry = library()["liquid side"]["mass_fraction"]
        component = Component(
            f"mass fraction of {medium.medium}", float(entry["standard"]), source=entry["source"], mark=entry["mark"],
            cause=f"{side}: mass fraction", of="mass fraction", remedy=entry["remedy"],
        )  # fmt: skip
        fraction = Measured("mass fraction", medium.mass_fraction, Budget((component,)))
    inputs = {"t_in": readings[inlet], "t_out": readings[outlet], "flow": readings[flow], "fraction": fraction}
    sign = 1.0 if side == "source" else -1.0

    def heat(t_in: float, t_out: float, flow: float, fraction: float) -> float:
        fluid = liquid(medium.medium, fraction)
        mass_flow = flow * fluid.density(t_in)
        return sign * mass_flow * fluid.specific_heat(0.5 * (t_in + t_out)) * (t_in - t_out)

    key = "cooling_capacity" if side == "source" else "heating_capacity"
    more = {"fraction": Input("mass fraction", fraction.value, Kind.RATIO, "plant.yaml")}
    return RouteResult("liquid side", explained(propagate(key, heat, inputs), "liquid_side_capacity", inputs, **more))


def heat_meter(measured: Measured) -> RouteResult:
    """A capacity as a heat meter in the liquid shows it; its stated accuracy holds flow, pair and calculator."""
    return RouteResult("liquid side", explained(measured, "heat_meter_reading", {}))


def closure(cooling: Measured, heating: Measured, power: Measured, shell: Measured) -> Measured:
    """First law between two routes: heat to the sink less heat from the source less the power that stays in the gas.

    Zero within its expanded uncertainty, or one of the routes is wrong.
    """
    inputs = {"cooling": cooling, "heating": heating, "power": power, "share": shell}
    return propagate(
        "heating_capacity", lambda cooling, heating, power, share: heating - cooling - power * (1.0 - share), inputs
    )


def compressor_power(readings: Mapping[str, Measured], fan_power: Measured | None) -> Measured | None:
    """The power of the compressor: as read, or the power input less the power of fans and pumps inside its boundary."""
    if "compressor_power" in readings:
        return readings["compressor_power"]
    whole, fans = readings.get("power_input"), readings.get("fan_power", fan_power)
    if whole is None or fans is None:
        return None
    return Measured("compressor_power", whole.value - fans.value, combine(whole.budget, fans.budget.scaled(-1.0)))
