"""Plants for the tests of the manual: visits to the example as somebody would write them, and hostile texts."""

from __future__ import annotations

import re
import shutil
from pathlib import Path

from commission.acceptance import make_sheet
from commission.description import LoadedPlant, load_plant
from commission.prediction import SystemModel
from commission.records import file_record, file_sheet

SCRIPT = "<script>window.broken = 1</script>"
LINK = "[press](javascript:window.broken=1)"
IMAGE = "<img src=x onerror=window.broken=1>"
BOLD = "**bold**"

VISIT = """\
title: {title}
system: {system}
stage: {stage}
mode: {mode}
started: {started}
since_start: 45 min
since_defrost: 95 min
people:
  operator: {{name: A fitter, firm: Invented Cooling}}
  witness: {{name: B warden}}
conditions:
  heat_source_inlet_temperature: {{value: {source:.1f} °C, where: air on the cooler}}
  heat_sink_inlet_temperature: {{value: {sink:.1f} °C, where: air on the condenser}}
readings:
  suction_pressure: {{value: {suction:.2f} bar g, where: service port}}
  discharge_pressure: {discharge:.2f} bar g
  suction_temperature: {suction_temperature:.1f} °C
  discharge_temperature: {discharge_temperature:.1f} °C
  liquid_temperature: {liquid:.1f} °C
  power_input: {power:.3f} kW
{more}"""


def _visit(
    loaded: LoadedPlant, model: SystemModel, source: float, sink: float, low_by: float = 0.0, **words: str
) -> str:
    """A record that reads as the model expects, the suction pressure lower by `low_by` bar."""
    expected = model.predict(
        {"heat_source_inlet_temperature": source + 273.15, "heat_sink_inlet_temperature": sink + 273.15}
    ).expected
    gauge = {
        k: (expected[k].value - loaded.barometric_pressure) / 1e5 for k in ("suction_pressure", "discharge_pressure")
    }
    return VISIT.format(
        source=source,
        sink=sink,
        suction=gauge["suction_pressure"] - low_by,
        discharge=gauge["discharge_pressure"],
        suction_temperature=expected["suction_temperature"].value - 273.15,
        discharge_temperature=expected["discharge_temperature"].value - 273.15,
        liquid=expected["liquid_temperature"].value - 273.15,
        power=expected["power_input"].value / 1e3,
        **words,
    )


REPORT = "electrician.md"
"""Evidence filed with the first visit."""


def file_visits(folder: Path) -> None:
    """Files a trim that raises an open item, an accepted test by a frozen sheet, and a later visit that deviates.

    The plant keeps its first system only, and its guarantee gets a tolerance that the instruments can prove.
    """
    from commission.prediction import fit  # late: the tests fit once for each description

    plant = folder / "plant.yaml"
    text = re.sub(r"^include: *\[[^\]]*\]\n", "", plant.read_text(encoding="utf-8"), flags=re.MULTILINE)
    wider, changed = re.subn(r"below: *[0-9.]+ *%", "below: 15 %", text)
    assert changed
    plant.write_text(wider, encoding="utf-8")
    loaded = load_plant(folder)
    system = next(iter(loaded.plant.systems))
    model = fit(loaded, system)
    ranges = {
        "heat_sink_inlet_temperature": [273.15 + t for t in (15.0, 25.0, 35.0)],
        "heat_source_inlet_temperature": [273.15 + t for t in (0.0, 4.0)],
    }
    sheet = file_sheet(loaded, make_sheet(loaded, model, ranges, title="Agreed test"), "agreed")
    item = 'open_items:\n  - {what: "insulate the suction line", who: contractor, due: 2026-05-10}\n'
    item += f"attachments: [{REPORT}]\n"
    item += "answers: {trim.superheat: {answer: 6.1 K, remark: valve closed by half a turn}}\n"
    accepted = "sheet: sheets/agreed.yaml\nreservations: [the door gasket is replaced within four weeks]\n"
    assert sheet.name == "agreed.yaml"
    visits = [
        _visit(loaded, model, 2.4, 16.0, title="Start-up", system=system, stage="trim", mode="trim",
               started="2026-04-21T10:20:00+01:00", more=item),
        _visit(loaded, model, 2.1, 24.0, title="Acceptance test", system=system, stage="performance", mode="test",
               started="2026-05-14T14:20:00+01:00", more=accepted),
        _visit(loaded, model, 2.0, 6.0, 0.5, title="Ten months", system=system, stage="ten-months", mode="trim",
               started="2027-03-02T09:30:00+00:00", more=""),
    ]  # fmt: skip
    handed_in = folder.parent / "handed-in"
    handed_in.mkdir()
    (handed_in / REPORT).write_text("# Report\n", encoding="utf-8")
    for n, visit in enumerate(visits):
        path = handed_in / f"visit-{n}.yaml"
        path.write_text(visit, encoding="utf-8")
        file_record(loaded, path, model=model)


def _quoted(text: str) -> str:
    return '"' + text.replace("\\", "\\\\").replace('"', '\\"') + '"'


HOSTILE = f"""\
plant:
  name: {_quoted(f"Works {SCRIPT} {LINK} {BOLD} & Co")}
  address: {_quoted(IMAGE)}
  altitude: 0 m
spaces:
  room: {{name: {_quoted(f"Room {IMAGE}")}, floor_area: 24 m2, height: 2.8 m, occupancy: authorised persons only}}
  yard: {{name: {_quoted(f"Yard {SCRIPT}")}, outdoors: yes}}
instruments:
  low gauge: {{measures: pressure, from: -1 bar g, to: 10 bar g, accuracy: {{of_span: 0.25 %}},
    serial: {_quoted(IMAGE)}, calibrated_until: 2027-03-31}}
systems:
  good:
    name: {_quoted(f"{LINK} {SCRIPT}")}
    duty: cold_storage
    refrigerant: R-290
    charge: 0.45 kg
    spaces: {{evaporator: room, condensing_unit: yard}}
    nameplate: {{maker_type: {_quoted(f"type {IMAGE} {BOLD}")}, allowable_pressure_low: 17 bar g,
      allowable_pressure_high: 28 bar g}}
    heat_source: {{medium: air, space: room, flow: 2100 m3/h, relative_humidity: 85 %}}
    heat_sink: {{medium: air, space: yard, flow: 2600 m3/h}}
    rated_points:
      - {{heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 3.4 kW,
         power_input: 1.6 kW, source: {_quoted(SCRIPT)}}}
    documents:
      - {{title: {_quoted(f"Drawing {SCRIPT}")}, file: drawing.txt}}
      - {{title: Missing, file: nowhere.pdf}}
  impossible:
    name: Impossible
    duty: cold_storage
    refrigerant: R-290
    heat_source: {{medium: air, space: room}}
    heat_sink: {{medium: air, space: yard}}
    rated_points:
      - {{heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 30 kW,
         power_input: 0.5 kW}}
documents:
  - {{title: {_quoted(LINK)}, file: drawing.txt}}
"""

TINY = """\
plant: {name: Tiny}
systems:
  impossible:
    duty: cold_storage
    refrigerant: R-290
    heat_source: {medium: air}
    heat_sink: {medium: air}
    rated_points:
      - {heat_source_inlet_temperature: 2 °C, heat_sink_inlet_temperature: 32 °C, cooling_capacity: 30 kW,
         power_input: 0.5 kW}
"""
"""A plant that is built quickly, since nothing of it can be calculated."""

OWNER_PAGE = f"""\
# Who {SCRIPT} to call

{SCRIPT}

{IMAGE}

{LINK} and [good](https://example.org/) and [mail](mailto:someone@example.org)

<a href="javascript:window.broken=1" onclick="window.broken=1" style="color: red">raw</a>

![far](https://example.org/spy.png) <iframe src="https://example.org/"></iframe>

| a | b |
| --- | ---: |
| 1 | 2 |
"""


def write_hostile_plant(folder: Path, example_folder: Path) -> None:
    """A plant whose texts try to be code; one system states what cannot be."""
    folder.mkdir(parents=True)
    (folder / "plant.yaml").write_text(HOSTILE, encoding="utf-8")
    for name in ("pages", "documents"):
        (folder / name).mkdir()
    (folder / "pages" / "call & ask.md").write_text(OWNER_PAGE, encoding="utf-8")
    (folder / "pages" / "run.js").write_text("window.broken = 1", encoding="utf-8")
    (folder / "documents" / "drawing.txt").write_text("a drawing", encoding="utf-8")
    (folder / "documents" / "trap.html").write_text(SCRIPT, encoding="utf-8")
    (folder / "documents" / "outside.txt").symlink_to(example_folder / "plant.yaml")


def write_tiny_plant(folder: Path) -> Path:
    """A plant for tests of building itself."""
    folder.mkdir(parents=True)
    (folder / "plant.yaml").write_text(TINY, encoding="utf-8")
    return folder


def copy_plant(source: Path, target: Path) -> Path:
    """A copy without its manual."""
    shutil.copytree(source, target, ignore=shutil.ignore_patterns("manual", ".manual-*"))
    return target
