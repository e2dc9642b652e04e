"""The form of a record to fill in: every reading that the instruments of the plant can take, and the stage's items."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from typing import TYPE_CHECKING

from commission.description import LoadedPlant
from commission.quantities import NOMENCLATURE, Display, pretty
from commission.records.answers import answered_by_reading
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


_READINGS = "readings:  # compared with what is expected; a reading answers its item of the checklist too"
_BY_PHASE: Mapping[str, str] = {"current": "[4.1 A, 4.0 A, 4.2 A]", "voltage": "[401 V, 398 V, 400 V]"}
"""Read in every phase of the supply, where it has three: their unbalance is looked at too."""
_USUAL_VOLTAGE = 230.0


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
    asked = _with_voltage(loaded, system, _asked(loaded, system, model))
    display = loaded.display(system)
    axes = [k for k in NOMENCLATURE if model is not None and k in model.condition_axes]
    axes = axes or ["heat_source_inlet_temperature", "heat_sink_inlet_temperature"]
    named = loaded.system(system).measured_with
    if _WET in named and _HUMIDITY not in named:
        axes = [_WET if k == _HUMIDITY else k for k in axes]
        asked[_WET] = named[_WET]
    three = loaded.system(system).nameplate.phases != "1"
    readings = [(k, i) for k, i in asked.items() if k in READING_KEYS and k not in axes]
    read = answered_by_reading(items, {*axes, *(k for k, _ in readings)})
    answered = {i.quantity: i for i in items if i.id in read}
    lines += ["conditions:", *_lines([(k, asked.get(k)) for k in axes], display, three, answered)]
    lines += [_READINGS if readings else "readings: {}", *_lines(readings, display, three, answered)]
    left = [item for item in items if item.id not in read]
    lines += ["answers:" if left else "answers: {}", *_answers(left)]
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
    chosen = {k: choose_instrument(k, v, loaded, system_read) for k, v in values.items()}
    return {k: chosen[k] for k in NOMENCLATURE if chosen.get(k) is not None}


def _with_voltage(loaded: LoadedPlant, system: str, asked: dict[str, str | None]) -> dict[str, str | None]:
    """The voltage wherever the current is asked: an unbalance of currents says little without that of the supply."""
    from commission.acceptance.choosing import choose_instrument

    if "current" not in asked or "voltage" in asked:
        return asked
    one = loaded.system(system)
    meter = choose_instrument("voltage", one.nameplate.voltage or _USUAL_VOLTAGE, loaded, one)
    found = {**asked, "voltage": meter}
    return {k: found[k] for k in NOMENCLATURE if k in found}


def _lines(
    asked: Sequence[tuple[str, str | None]], display: Display, three: bool, answered: Mapping[str | None, Item]
) -> Iterator[str]:
    for key, instrument in asked:
        quantity = display.quantities[key]
        unit = pretty(display.asking(key).unit_and_digits(quantity.kind)[0])
        named = f", instrument: {instrument}" if instrument else ""
        value, how = "value: ", ""
        if three and key in _BY_PHASE:
            value, how = "phases: []", f", one for each phase, such as {_BY_PHASE[key]}"
        item = f"; answers {answered[key].id}" if key in answered else ""
        yield f"  {key}: {{{value}{named}, where: }}  # {unit}{how}; {quantity.definition}{item}"


def _answers(items: Sequence[Item]) -> Iterator[str]:
    for item in items:
        wanted = {"yes/no": "yes, no or not applicable", "file": "name of a file that is attached", "text": "words"}
        asked = wanted.get(item.answer) or f"{item.unit or 'a number'}"
        yield f"  {item.id}: {{answer: , reason: }}  # {asked}; {' '.join(item.do.split())}"
