"""The form of a record to fill in: every reading that the instruments of the plant can take, and the stage's items."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

from commission.description import LoadedPlant
from commission.quantities import NOMENCLATURE, Display, pretty
from commission.records.read import READING_KEYS, known_stages

if TYPE_CHECKING:
    from commission.checklists import Item
    from commission.prediction import SystemModel

_HEAD = """\
# Record of one visit to {name}. Fill in, and take out the lines of what was not read or done.
# See what it says:  commission compare PLANT THIS_FILE      File it for good:  commission record PLANT THIS_FILE
system: {system}
stage: {stage}
mode: trim  # trim: deviations only, as often as you like; test: witnessed, one verdict, kept
started:  # date, time and zone, such as 2026-05-14T10:20+01:00
since_start:  # running time since the last start, such as 45 min
since_defrost:  # time since the last defrost ended, such as 180 min
people:
  operator: {{name: , firm: , certificate: }}
  witness: {{name: , firm: }}
"""


_WET, _HUMIDITY = "heat_source_wet_bulb", "heat_source_relative_humidity"


_READINGS = "readings:  # compared with what is expected; the answers below tick off the checklist"


def record_form(loaded: LoadedPlant, system: str, stage: str, model: SystemModel | None = None) -> str:
    """A record of this system and stage as YAML with everything left open, comments saying what belongs where.

    With the fitted model the conditions and readings are those that it knows, and each names the instrument of the
    plant that reads it best, or none where the plant names no instruments at all; without it, those that
    `measured_with` names.

    Raises:
        InputError: no such system or stage.
    """
    name = loaded.system(system).name or system
    items = known_stages(loaded, system, stage)
    lines = _HEAD.format(name=" ".join(name.split()), system=system, stage=stage).splitlines()
    asked = _asked(loaded, system, model)
    display = Display(loaded.plant.plant.units, loaded.barometric_pressure)
    axes = [k for k in NOMENCLATURE if model is not None and k in model.condition_axes]
    axes = axes or ["heat_source_inlet_temperature", "heat_sink_inlet_temperature"]
    named = loaded.system(system).measured_with
    if _WET in named and _HUMIDITY not in named:
        axes = [_WET if k == _HUMIDITY else k for k in axes]
        asked[_WET] = named[_WET]
    lines += ["conditions:", *_lines([(k, asked.get(k)) for k in axes], display)]
    readings = [(k, i) for k, i in asked.items() if k in READING_KEYS and k not in axes]
    lines += [_READINGS if readings else "readings: {}", *_lines(readings, display)]
    lines += ["answers:" if items else "answers: {}", *_answers(items)]
    return "\n".join(lines) + "\n"


def _asked(loaded: LoadedPlant, system: str, model: SystemModel | None) -> dict[str, str | None]:
    """Quantities in the order of the nomenclature with the instrument for each."""
    system_read = loaded.system(system)
    measured_with = system_read.measured_with
    if model is None:
        return {k: measured_with[k] for k in NOMENCLATURE if k in measured_with}
    from commission.acceptance.capability import NEVER_READ
    from commission.acceptance.choosing import DIRECT, cannot_be_read, choose_instrument

    prediction = model.predict()
    values = {**prediction.conditions, **{k: e.value for k, e in prediction.expected.items() if k not in NEVER_READ}}
    if not loaded.plant.instruments:
        return {k: None for k in NOMENCLATURE if k in values and k in DIRECT and not cannot_be_read(k, system_read)}
    chosen = {
        k: choose_instrument(k, v, loaded.plant.instruments, measured_with, loaded.barometric_pressure)
        for k, v in values.items()
        if cannot_be_read(k, system_read) is None
    }
    return {k: chosen[k] for k in NOMENCLATURE if chosen.get(k) is not None}


def _lines(asked: Sequence[tuple[str, str | None]], display: Display) -> Iterator[str]:
    for key, instrument in asked:
        quantity = NOMENCLATURE[key]
        unit = pretty(display.unit_and_digits(quantity.kind)[0])
        named = f", instrument: {instrument}" if instrument else ""
        yield f"  {key}: {{value: {named}, where: }}  # {unit}; {quantity.definition}"


def _answers(items: Sequence[Item]) -> Iterator[str]:
    for item in items:
        wanted = {"yes/no": "yes, no or not applicable", "file": "name of a file that is attached", "text": "words"}
        asked = wanted.get(item.answer) or f"{item.unit or 'a number'}"
        yield f"  {item.id}: {{answer: , reason: }}  # {asked}; {' '.join(item.do.split())}"
