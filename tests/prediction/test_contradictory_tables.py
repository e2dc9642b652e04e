"""Tables whose points contradict each other: the least squares are found, or the table is refused."""

from __future__ import annotations

import random
from collections.abc import Callable
from dataclasses import replace

import pytest

from commission.description import LoadedPlant
from commission.errors import NotCalculatedError
from commission.prediction import fit
from commission.prediction.facts import Used, facts_of
from commission.prediction.problem import prepare
from commission.prediction.table import Table

Written = Callable[[str], LoadedPlant]


def _table(scatter: float, seed: int) -> str:
    """Twelve points of a brine heat pump with so much noise (relative) in capacity and power."""
    rng, rows = random.Random(seed), []
    for brine in (-5, 0, 5, 10):
        for flow in (35, 45, 55):
            heat = 10 * (1 + 0.03 * brine) * (1 - 0.004 * (flow - 35))
            power = heat / (4.6 * (1 + 0.025 * brine) * (1 - 0.017 * (flow - 35)))
            heat, power = (v * (1 + rng.gauss(0, scatter)) for v in (heat, power))
            rows.append(
                f"  - {{heat_source_inlet_temperature: {brine} °C, heat_sink_outlet_temperature: {flow} °C, "
                f"heating_capacity: {heat:.3f} kW, power_input: {power:.3f} kW, includes: [compressor]}}"
            )
    head = (
        "duty: space_heating",
        "refrigerant: R-290",
        "heat_source: {medium: ethylene glycol, mass_fraction: 25 %}",
        "heat_sink: {medium: water}",
        "rated_points:",
    )
    return "\n".join((*head, *rows))


@pytest.mark.parametrize(("scatter", "seed"), [(0.0, 1), (0.03, 2), (0.1, 3), (0.1, 4)])
def test_the_minimum_does_not_hang_on_the_start(written: Written, scatter: float, seed: int) -> None:
    """From other starts the same least squares are found, within what the search leaves; none is left on the way."""
    facts = facts_of(written(_table(scatter, seed)), "it")
    values = Used(facts.nominal)
    problem, start = prepare(facts, values)
    problem = replace(
        problem, loose=("condensing_minus_sink_inlet", "source_minus_evaporating", "shell_heat_loss_share")
    )
    table = Table(problem, values.plain(), start)
    found = []
    for share in (1.0, 0.8, 1.3):
        other = replace(start, condenser=share * start.condenser, isentropic=start.isentropic * share**0.3)
        gaps = table.minimum(table.pack(other))[1]
        found.append(float(gaps @ gaps))
    assert max(found) < 1.005 * min(found)


def test_scatter_of_a_table_is_found(written: Written) -> None:
    """Noise of 10 % comes back as a scatter of 10 %, within what 24 figures tell (a sixth), and is doubted aloud."""
    found = [fit(written(_table(0.1, seed)), "it") for seed in (3, 4)]
    for model in found:
        assert model.fit.scatter == pytest.approx(0.1, rel=0.35)
        assert any("about the fit of one machine" in text for text in model.predict().warnings)


def test_nonsense_is_refused(written: Written) -> None:
    """Figures that differ by half from those of any machine are refused in a sentence."""
    with pytest.raises(NotCalculatedError) as caught:
        fit(written(_table(0.4, 5)), "it")
    assert len(str(caught.value)) > 30
