"""Part-load power of whole chillers against the curves of an energy code."""

from __future__ import annotations

from collections.abc import Callable

import pytest

from commission.description import LoadedPlant
from commission.prediction import fit
from tests.prediction.test_stages import CHILLER, STAGE

CURVES = {
    "reciprocating": (0.08144133, 0.41927141, 0.49939604),
    "scroll": (0.04411957, 0.64036703, 0.31955532),
    "screw": (0.33018833, 0.23554291, 0.46070828),
}
"""Power over full-load power against part-load ratio of water-cooled chillers at the same leaving chilled and entering
condenser water: National Energy Code of Canada for Buildings 2020, table 8.4.5.5.-B, as reproduced in public
repositories (V). They are averages over machines with several steps, so 10 % is what they can hold."""


@pytest.mark.parametrize("kind", sorted(CURVES))
def test_part_load_power_of_chillers(written: Callable[[str], LoadedPlant], kind: str) -> None:
    """At the same leaving chilled water and entering tower water the power at three stages lies within a tenth of the
    full-load power about the code's curve for that kind of compressor, and within what is expected of it."""
    compressors = "count: 4, stages: [25 %, 50 %, 75 %, 100 %]" if kind == "scroll" else "stages: [50 %, 75 %, 100 %]"
    text = CHILLER.replace("type: screw, COMPRESSORS", f"type: {kind}, {compressors}")
    model = fit(written(text), "it")
    at = {"heat_source_outlet_temperature": 280.15, "heat_sink_inlet_temperature": 303.15}
    full = model.predict(at).expected
    for stage in model.condition_axes[STAGE].steps:
        part = model.predict({**at, STAGE: stage}).expected
        load = part["cooling_capacity"].value / full["cooling_capacity"].value
        a, b, c = CURVES[kind]
        power = part["compressor_power"].value / full["compressor_power"].value
        assert power == pytest.approx(a + b * load + c * load * load, abs=0.1), (stage, load)
