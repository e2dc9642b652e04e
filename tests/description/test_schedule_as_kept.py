"""Schedules as contractors keep them: capitals, notes below, words for duties, decimal commas, old encodings."""

from pathlib import Path

import pytest

from commission.description import DescriptionError, from_schedule, load_plant
from commission.description.model import Plant
from commission.description.schedule_cells import Numbers, dry_and_wet, unit_as_known
from commission.description.schedule_duties import duty_described, meant_key
from commission.quantities import QuantityError

SCHEDULES = Path(__file__).parent / "schedules"
HEAD = "Tag,Description,Refrigerant,Ambient [°F],Room temp [°F],Capacity [MBH],Power input [kW]\n"
ROW = "CU-1,Walk-in cooler,R-448A,95,35,14.2,1.9\n"


def made(folder: Path, content: str | bytes) -> tuple[Plant, str]:
    """The plant that a schedule becomes, and its text."""
    schedule = folder / "s.csv"
    schedule.write_bytes(content.encode() if isinstance(content, str) else content)
    from_schedule(schedule, folder / "plant")
    return load_plant(folder / "plant").plant, (folder / "plant/plant.yaml").read_text(encoding="utf-8")


def refused(folder: Path, content: str) -> DescriptionError:
    """What is said of a schedule that cannot be used."""
    with pytest.raises(DescriptionError) as caught:
        made(folder, content)
    return caught.value


def test_a_contractors_us_schedule(tmp_path: Path) -> None:
    """One page with title, capitals, MBH beside tons, SST, dry and wet bulb in a cell, V/PH/HZ and notes below."""
    plant, text = made(tmp_path, (SCHEDULES / "us_contractor.csv").read_bytes())
    cooler, freezer, rooftop, split, heater = plant.systems.values()
    assert [s.duty for s in plant.systems.values()] == [
        "cold_storage", "cold_storage", "comfort_cooling", "comfort_cooling", "water_heating",
    ]  # fmt: skip
    assert cooler.charge == pytest.approx(9.5 * 0.45359237)
    assert cooler.rated_points[0].heat_source_inlet_temperature == pytest.approx(274.8167, abs=1e-3)
    assert cooler.rated_points[0].evaporating_temperature == pytest.approx(269.2611, abs=1e-3)
    assert cooler.rated_points[0].power_input == pytest.approx(1900)
    assert (cooler.nameplate.voltage, cooler.nameplate.phases) == (208.0, "3")
    assert freezer.heat_source.flow == pytest.approx(2600 * 0.3048**3 / 60)
    assert rooftop.charge == pytest.approx(8.25 * 0.45359237)
    assert rooftop.rated_points[0].cooling_capacity == pytest.approx(5 * 3516.8528, abs=0.1)
    assert rooftop.nameplate.voltage is None
    assert split.rated_points[0].heat_source_wet_bulb == pytest.approx(292.5944, abs=1e-3)
    assert split.rated_points[0].cooling_capacity == pytest.approx(24e3 * 0.29307107, abs=0.1)
    assert heater.rated_points[0].heating_capacity == pytest.approx(7.8e3 * 0.29307107, abs=0.1)
    assert heater.rated_points[0].cooling_capacity is None
    assert heater.rated_points[0].heat_source_inlet_temperature == pytest.approx(293.15)
    assert heater.rated_points[0].heat_sink_outlet_temperature == pytest.approx(322.0389, abs=1e-3)
    assert heater.heat_sink.flow == pytest.approx(0.25 * 231 * 0.0254**3 / 60)
    assert plant.plant.units == "us_customary"
    for kept in (
        "# NOTES:\n",
        "# 1. All equipment",
        "# TONS: 2.0",
        "# V/PH/HZ: 208-230/3/60",
        "duty: read from 'Split",
    ):
        assert kept in text


def test_a_european_export(tmp_path: Path) -> None:
    """Semicolons, decimal commas, thousands with a full stop, Windows-1252, water on the side that has it, a sum."""
    plant, text = made(tmp_path, (SCHEDULES / "european_export.csv").read_bytes())
    room, freezer, heat_pump, chiller = plant.systems.values()
    assert room.name == "Kühlraum Molkerei"
    assert room.heat_source.flow == pytest.approx(0.5)
    assert freezer.heat_source.flow == pytest.approx(3200 / 3600)
    assert room.rated_points[0].heat_source_inlet_temperature == pytest.approx(275.15)
    assert room.controls.high_pressure_limit is not None
    assert room.controls.high_pressure_limit.pascal == pytest.approx(24.5e5)
    assert heat_pump.rated_points[0].heat_source_inlet_temperature == pytest.approx(280.15)
    assert heat_pump.rated_points[0].heat_sink_outlet_temperature == pytest.approx(308.15)
    assert heat_pump.heat_sink.flow == pytest.approx(2.06 / 3600)
    assert chiller.rated_points[0].heat_source_outlet_temperature == pytest.approx(280.15)
    assert chiller.rated_points[0].heat_sink_inlet_temperature == pytest.approx(308.15)
    assert chiller.heat_source.flow == pytest.approx(11.2 / 3600)
    assert "# Total 26,25\n" in text
    assert "Windows-1252" in text


def test_a_missing_temperature_names_headings_and_what_was_not_understood(tmp_path: Path) -> None:
    """A person is told which heading to write and which of the own columns said nothing."""
    error = refused(tmp_path, HEAD.replace("Room temp", "Case") + ROW)
    assert error.problems[0].path == "systems.CU-1"
    assert error.problems[0].allowed == (
        "a column headed source inlet or source outlet; columns that were not understood: Case [°F]"
    )
    error = refused(tmp_path, HEAD + "W-1,Water heater,R-134a,68,,7.8,0.6\n")
    assert "water in or water out" in (error.problems[0].allowed or "")


def test_a_row_with_a_lone_tag_is_not_lost(tmp_path: Path) -> None:
    """Sums and sentences below the table are remarks; a tag with nothing beside it is a system with gaps."""
    plant, text = made(tmp_path, HEAD + ROW + "TOTAL,,,,,14.2\n1. Power by others\nx\n")
    assert list(plant.systems) == ["CU-1"]
    assert "# 1. Power by others\n# x\n" in text
    assert any("missing in CU-2" in p.message for p in refused(tmp_path, HEAD + ROW + "CU-2\n").problems)


def test_two_capacities_in_one_row_must_agree(tmp_path: Path) -> None:
    """24 MBH and 2 tons are one capacity; 24 MBH and 3 tons are a slip."""
    head = HEAD.replace("Power input [kW]", "TONS")
    assert made(tmp_path, head + "A-1,Split AC,R-32,95,80,24,2\n")[0].systems["A-1"]
    error = refused(tmp_path, head + "A-1,Split AC,R-32,95,80,24,3\n")
    assert [p.path for p in error.problems if "says the same" in p.message] == ["column TONS"]


def test_a_column_headed_kw_alone(tmp_path: Path) -> None:
    """Beside a capacity it is the power input; alone it can be either, and is refused."""
    plant, _ = made(tmp_path, HEAD.replace("Power input [kW]", "KW") + ROW)
    assert plant.systems["CU-1"].rated_points[0].power_input == pytest.approx(1900)
    error = refused(tmp_path, HEAD.replace("Capacity [MBH],Power input [kW]", "Remarks,KW") + ROW)
    assert "capacity or the power input" in error.problems[0].message


def test_a_room_is_a_place_or_a_temperature(tmp_path: Path) -> None:
    """Below the heading Room a name is a place and 35 °F is its air."""
    plant, _ = made(tmp_path, HEAD.replace("Room temp [°F]", "Room") + ROW.replace("35", "35 °F"))
    assert plant.systems["CU-1"].rated_points[0].heat_source_inlet_temperature == pytest.approx(274.8167, abs=1e-3)
    assert not plant.spaces


@pytest.mark.parametrize(
    ("numbers", "written", "read"),
    [
        (Numbers(comma=True), "1.800", "1800"),
        (Numbers(comma=True), "1.234.567 W", "1234567 W"),
        (Numbers(comma=True), "1.234,5 kW", "1234.5 kW"),
        (Numbers(stop=True), "1,800 cfm", "1800 cfm"),
        (Numbers(stop=True), "1.800", "1.800"),
        (Numbers(), "1,800", "1,800"),
        (Numbers(comma=True, stop=True), "1,800", "1,800"),
        (Numbers(stop=True), "12,34", "12,34"),
        (Numbers(comma=True), "0.450", "0.450"),
    ],
)
def test_grouped_digits(numbers: Numbers, written: str, read: str) -> None:
    """Grouping is taken away where the rest of the file shows its decimal mark, and only there."""
    assert numbers.plain(written) == read


def test_a_full_stop_that_can_mean_two_things_is_refused(tmp_path: Path) -> None:
    """With semicolons and nothing else to tell by, 1.800 is neither taken for 1800 nor for 1.8."""
    with pytest.raises(QuantityError) as caught:
        Numbers(semicolons=True).plain("1.800")
    assert "thousands or decimals" in caught.value.problems[0].message
    text = "Tag;Duty;Refrigerant;Source inlet [°C];Sink inlet [°C];Capacity [W]\nA;chiller;R-32;12;35;1.800\n"
    error = refused(tmp_path, text)
    assert [(p.line, p.column) for p in error.problems if "thousands" in p.message] == [(2, 22)]


def test_units_in_capitals() -> None:
    """A heading in capitals has the unit of its small letters, unless capitals decide."""
    assert [unit_as_known(u) for u in ("LB", "LBS", "CFM", "KW", "PSIG", "MW", "Mw", "M3/H", "parsec", "")] == [
        "lb", "lbs", "cfm", "kW", "psig", "MW", "MW", "m3/h", "parsec", "",
    ]  # fmt: skip


def test_dry_and_wet_bulb_in_a_cell() -> None:
    """80/67 is dry and wet bulb where the unit is one of temperature and the second is not above the first."""
    assert dry_and_wet("80/67", "°F") == ("80 °F", "67 °F")
    assert dry_and_wet("27 / 19 °C", "") == ("27 °C", "19 °C")
    assert dry_and_wet("67/80", "°F") is None
    assert dry_and_wet("80/67", "cfm") is None
    assert dry_and_wet("80", "°F") is None


def test_duties_in_words() -> None:
    """The longest name counts; a description that names two duties, or none, decides nothing."""
    assert duty_described("Heat pump water heater, basement") == "water_heating"
    assert duty_described("WALK-IN FREEZER #2") == "cold_storage"
    assert duty_described("Chilled water pump") is None
    assert duty_described("Rooftop unit, heat pump") is None
    assert duty_described("Exhaust fan") is None


def test_a_side_that_is_not_there_is_not_made_up() -> None:
    """Water belongs to the side that has it; outdoor air is the sink of a cooler and the source of a heat pump."""
    assert meant_key("point.outdoor_air", "cold_storage", ("air", "air")) == "point.heat_sink_inlet_temperature"
    assert meant_key("point.outdoor_air", "space_heating", ("air", "water")) == "point.heat_source_inlet_temperature"
    assert meant_key("point.outdoor_air", "liquid_cooling", ("water", "water")) is None
    assert meant_key("point.water_in", "comfort_cooling", ("air", "air")) is None
    assert meant_key("point.water_out", "space_heating", ("ethylene glycol", "water")) == (
        "point.heat_sink_outlet_temperature"
    )
    assert meant_key("point.room_air", "space_heating", ("air", "water")) is None


def test_files_that_are_no_schedule(tmp_path: Path) -> None:
    """A workbook and a page of prose are each answered by one sentence."""
    error = refused(
        tmp_path, "Dear reader,\nthis is prose; it has, as prose has, commas,\nand, no, headings, at, all\n"
    )
    assert [p.message for p in error.problems] == ["no row of headings was found in the first 20 lines"]
    schedule = tmp_path / "w.csv"
    schedule.write_bytes(b"PK\x03\x04\xff\xfe\x00")
    with pytest.raises(DescriptionError) as caught:
        from_schedule(schedule, tmp_path / "w")
    assert "workbook" in caught.value.problems[0].message


def test_units_and_duties_elsewhere(tmp_path: Path) -> None:
    """A unit may end a known heading, and the type or the service of a system may say its duty."""
    text = (
        "Unit Tag,Service,Refrigerant,EAT DB/WB (°F),OAT (°F),Total Clg MBH,Unit KW,Supply CFM\n"
        'AHU-1,"Rooftop unit, packaged",R-454B,80/67,95,60,4.9,2000\n'
    )
    system = made(tmp_path, text)[0].systems["AHU-1"]
    assert system.duty == "comfort_cooling"
    assert system.rated_points[0].power_input == pytest.approx(4900)
    assert system.rated_points[0].cooling_capacity == pytest.approx(60e3 * 0.29307107, abs=1)
    assert system.rated_points[0].heat_source_wet_bulb == pytest.approx(292.5944, abs=1e-3)
    assert system.heat_source.flow == pytest.approx(2000 * 0.3048**3 / 60)
    (tmp_path / "more").mkdir()
    text = (
        "TAG,TYPE,REFRIGERANT,EWT (°F),LWT (°F),AMBIENT (°F),CAPACITY (TONS),GPM\n"
        "C,Air-cooled chiller,R-32,54,44,95,20,48\n"
    )
    system = made(tmp_path / "more", text)[0].systems["C"]
    assert system.duty == "liquid_cooling"
    assert system.rated_points[0].heat_source_outlet_temperature == pytest.approx(279.8167, abs=1e-3)
    assert system.heat_source.flow == pytest.approx(48 * 231 * 0.0254**3 / 60)
