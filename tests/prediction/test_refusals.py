"""A condition at which the machine does not run is refused in words, with the nearest at which it does."""

from __future__ import annotations

import random
import re

import pytest

from commission.description import LoadedPlant
from commission.errors import CommissionError, InputError, NotCalculatedError
from commission.prediction import SystemModel, fit

KELVIN = 273.15
SOURCE, SINK, OUTLET = "heat_source_inlet_temperature", "heat_sink_inlet_temperature", "heat_sink_outlet_temperature"
PROGRAM = ("equation of state", "not vapour alone", "no balance", "residual", "outside -", "saturation at", "nan")


@pytest.fixture(scope="module")
def models(example: LoadedPlant) -> dict[str, SystemModel]:
    """All systems of the example, fitted."""
    return {name: fit(example, name) for name in example.plant.systems}


@pytest.mark.parametrize(
    ("system", "condition", "why"),
    [
        ("shower-water", {SOURCE: KELVIN + 60}, "the source is so warm that evaporation would come to the critical"),
        ("cold-room", {"heat_sink_flow": 1e-4}, "the sink takes up so little heat that condensing would come to"),
        ("freezer-room", {SINK: KELVIN + 65}, "the compressed gas would be hotter than 146.2 °C"),
        ("cold-room", {"heat_source_flow": -0.1}, "room air flow of −360 m³/h cannot be"),
        ("cold-room", {"heat_source_relative_humidity": 1.2}, "room air relative humidity of 120 % cannot be"),
        ("floor-heating", {OUTLET: KELVIN - 3}, "heating water outlet temperature of −3.0 °C cannot be: liquid water"),
        ("shower-water", {SINK: KELVIN + 40, OUTLET: KELVIN + 35}, "heat goes into the sink"),
    ],
)
def test_the_reason_is_named(
    models: dict[str, SystemModel], system: str, condition: dict[str, float], why: str
) -> None:
    """What comes to its end, or cannot be, stands at the head of the sentence."""
    with pytest.raises(NotCalculatedError) as caught:
        models[system].predict(condition)
    assert str(caught.value).startswith(why)


def test_the_nearest_condition_runs(models: dict[str, SystemModel]) -> None:
    """The condition that a refusal names is one at which the machine runs, and half a kelvin beyond it does not."""
    model = models["freezer-room"]
    with pytest.raises(NotCalculatedError) as caught:
        model.predict({SINK: KELVIN + 70})
    named = re.search(r"still runs at outdoor air inlet temperature ([\d.]+) °C", str(caught.value))
    assert named is not None
    edge = KELVIN + float(named.group(1))
    (inside, beyond) = model.nominal([{SINK: edge - 0.1}, {SINK: edge + 0.5}])
    assert not isinstance(inside, NotCalculatedError)
    assert isinstance(beyond, NotCalculatedError)


def test_a_long_way_is_walked(models: dict[str, SystemModel]) -> None:
    """Far from the rated condition the balance is found by walking there: the same as started from a neighbour."""
    model = models["dining-hall"]
    alone = model.predict({SINK: KELVIN + 1}).expected["evaporating_temperature"].value
    walked = model.grid(SINK, [KELVIN + t for t in (30, 20, 10, 4, 1)])[-1]
    assert not isinstance(walked, NotCalculatedError)
    assert alone == pytest.approx(walked.expected["evaporating_temperature"].value, abs=1e-4)


def test_a_wet_bulb_needs_its_dry_bulb(models: dict[str, SystemModel]) -> None:
    """A wet bulb with the outlet of the air beside it, and above the dry bulb, are refused in words."""
    with pytest.raises(CommissionError) as above:
        models["dining-hall"].predict({"heat_source_wet_bulb": KELVIN + 30})
    assert "above the dry bulb" in str(above.value)
    with pytest.raises(CommissionError) as outlet:
        models["dining-hall"].predict({"heat_source_wet_bulb": KELVIN + 15, "heat_source_outlet_temperature": 285.0})
    assert "needs the temperature of the air that enters" in str(outlet.value)
    with pytest.raises(NotCalculatedError) as alone:
        models["dining-hall"].predict({"heat_source_outlet_temperature": 285.0})
    assert str(alone.value).startswith("a condition of air is its inlet temperature")


def test_no_program_language_anywhere(models: dict[str, SystemModel]) -> None:
    """Random conditions, far beyond what is described: an answer or a sentence of words, never another exception."""
    rng, refused = random.Random("wide boxes"), list[str]()
    for model in models.values():
        for _ in range(12):
            asked = {}
            for key, axis in model.condition_axes.items():
                if rng.random() < 0.6:
                    width = rng.choice((0.0, 0.5, 2.0)) * (axis.high - axis.low)
                    asked[key] = rng.uniform(axis.low - width, axis.high + width)
            try:
                model.predict(asked)
            except NotCalculatedError as error:
                refused.append(str(error))
    assert len(refused) > 5
    for text in refused:
        assert not any(word in text for word in PROGRAM), text
        assert not re.search(r"(^|\s)-\d", text), "a true minus sign"


def test_unknown_conditions_are_input_errors(models: dict[str, SystemModel]) -> None:
    """A key that is no condition is a slip of the person, not of the machine."""
    with pytest.raises(InputError):
        models["cold-room"].predict({"compressor_speed": 50.0})


def test_many_conditions_at_once_reach_as_far_as_one(models: dict[str, SystemModel]) -> None:
    """Where `predict` finds a balance far from the rated condition `nominal` finds the same, wherever it comes from."""
    model = models["dining-hall"]
    far = [{SOURCE: KELVIN + room, SINK: KELVIN + out} for out in (-14, -6, 40) for room in (32, 27, 21)]
    for at, one in zip(far, model.nominal(far), strict=True):
        assert not isinstance(one, NotCalculatedError), at
        expected = model.predict(at).expected["cooling_capacity"].value
        assert one.values["cooling_capacity"] == pytest.approx(expected, rel=1e-5)
