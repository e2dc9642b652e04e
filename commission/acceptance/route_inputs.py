"""What a route to a capacity takes from the model: shell loss, warming of the suction line, fans. Live, or frozen."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from commission.acceptance.budget import Budget, Component, Measured, combine
from commission.acceptance.derived import line_loss
from commission.acceptance.expectation import model_budget
from commission.acceptance.routes import SHELL, shell_share

if TYPE_CHECKING:
    from commission.acceptance.sheet import TestSheet
    from commission.description import LoadedPlant
    from commission.prediction import Prediction, SystemModel

GAIN, FANS, EVAPORATOR_FAN = "warming in the suction line", "fan power", "evaporator fan power"


@dataclass(frozen=True, slots=True)
class RouteInputs:
    """Share of the power lost by the shell; warming of the suction line in K; fans that the power input counts, and the
    evaporator fan, in W. None where the model does not give it."""

    shell: Measured
    gain: Measured | None
    fans: Measured | None
    evaporator_fan: Measured | None

    def frozen(self) -> dict[str, tuple[float, float]]:
        """Value and standard uncertainty of each, for a sheet."""
        named = {SHELL: self.shell, GAIN: self.gain, FANS: self.fans, EVAPORATOR_FAN: self.evaporator_fan}
        return {k: (m.value, m.budget.standard) for k, m in named.items() if m is not None}


def live(loaded: LoadedPlant, model: SystemModel, prediction: Prediction | None) -> RouteInputs:
    """The inputs by the model as it stands, with their parts under the causes of the model."""
    found = model.assumptions.get(SHELL) or loaded.assumptions(model.system_id).get(SHELL)
    shell = shell_share(found.value, found.standard_uncertainty, found.source, found.mark) if found else shell_share()
    gain = fans = evaporator = None
    expected: Mapping[str, object] = prediction.expected if prediction is not None else {}
    if prediction is not None and {"suction_temperature", "evaporating_temperature", "superheat"} <= set(expected):
        signs = {"suction_temperature": 1.0, "evaporating_temperature": -1.0, "superheat": -1.0}
        gain = line_loss(model, prediction, signs, "suction_pressure", 0.0, 0.0).measured
    if prediction is not None and "fan_power" in expected:
        fans = _expected(model, prediction, FANS, "fan_power")
    if prediction is not None and {"cooling_capacity", "net_cooling_capacity"} <= set(expected):
        gross = _expected(model, prediction, "gross", "cooling_capacity")
        net = _expected(model, prediction, "net", "net_cooling_capacity")
        budget = combine(gross.budget, net.budget.scaled(-1.0))
        evaporator = Measured(EVAPORATOR_FAN, gross.value - net.value, budget)
    return RouteInputs(shell, gain, fans, evaporator)


def from_sheet(sheet: TestSheet, conditions: Mapping[str, Measured]) -> RouteInputs:
    """The inputs that were frozen, each with one component.

    Fans and the warming of the suction line change over the range of the day: their values are those of the frozen
    expectations at the measured condition where the sheet holds these, and those of the middle of the range where not.
    """
    expected, _ = sheet.expectations(conditions)
    at_day = {k: e.value for k, e in expected.items()}

    def one(name: str, plus: tuple[str, ...], minus: tuple[str, ...] = ()) -> Measured | None:
        if name not in sheet.route_inputs:
            return None
        value, standard = sheet.route_inputs[name]
        if set(plus + minus) <= set(at_day):
            value = sum(at_day[k] for k in plus) - sum(at_day[k] for k in minus)
        component = Component(name, standard, source="the frozen test sheet", cause=f"sheet: {name}")
        return Measured(name, value, Budget((component,) if standard else ()))

    value, standard = sheet.route_inputs.get(SHELL, (None, None))
    return RouteInputs(
        shell_share(value, standard, "the frozen test sheet", "frozen"),
        one(GAIN, ("suction_temperature",), ("evaporating_temperature", "superheat")),
        one(FANS, ("fan_power",)),
        one(EVAPORATOR_FAN, ("cooling_capacity",), ("net_cooling_capacity",)),
    )


def _expected(model: SystemModel, prediction: Prediction, name: str, key: str) -> Measured:
    return Measured(name, prediction.expected[key].value, model_budget(model, prediction, key))
