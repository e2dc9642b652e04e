"""The one table of quantities: key, symbol, label, kind and definition; YAML, JSON, CSV and page labels follow it.

`NOMENCLATURE` is the table of any system; `nomenclature(source, sink)` is that of one whose media have names.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType

from commission.quantities.kinds import Kind


@dataclass(frozen=True, slots=True)
class Quantity:
    """A quantity of the trade. `definition` says exactly what is meant, so that two people read the same thing.

    `asked_in` is the unit in which it is written down, with its digits, where that is not the usual one of its kind.
    """

    key: str
    symbol: str
    label: str
    kind: Kind
    definition: str
    asked_in: tuple[str, int] | None = None

    @property
    def words(self) -> str:
        """The label inside a sentence; an abbreviation or a person's name keeps its capitals."""
        own = self.label[1:2].isupper() or self.label.startswith("Carnot")
        return self.label if own else self.label[:1].lower() + self.label[1:]


@dataclass(frozen=True, slots=True)
class MediumName:
    """What people on site call a medium, such as `room air` or `chilled water`, and whether it is a liquid."""

    name: str
    liquid: bool = False

    @property
    def label(self) -> str:
        """The name at the start of a label."""
        return self.name[:1].upper() + self.name[1:]


T, D, P, W, Q, R, N = (
    Kind.TEMPERATURE,
    Kind.TEMPERATURE_DIFFERENCE,
    Kind.PRESSURE,
    Kind.POWER,
    Kind.HEAT_FLOW,
    Kind.RATIO,
    Kind.NUMBER,
)


def _medium(side: str, medium: MediumName, letter: str) -> list[Quantity]:
    key, label, name = f"heat_{side}", medium.label, medium.name
    return [
        Quantity(f"{key}_inlet_temperature", f"T_{letter},in", f"{label} inlet temperature", T,
                 f"dry-bulb or liquid temperature of the {name} where it enters the exchanger"),
        Quantity(f"{key}_outlet_temperature", f"T_{letter},out", f"{label} outlet temperature", T,
                 f"temperature of the {name} where it leaves the exchanger, mixed"),
        Quantity(f"{key}_wet_bulb", f"T_{letter},wb", f"{label} wet bulb", T,
                 f"wet-bulb temperature of the {name} where it enters the exchanger"),
        Quantity(f"{key}_relative_humidity", f"φ_{letter}", f"{label} relative humidity", R,
                 f"relative humidity of the {name} where it enters the exchanger"),
        Quantity(f"{key}_flow", f"V_{letter}", f"{label} flow", Kind.LIQUID_FLOW if medium.liquid else Kind.VOLUME_FLOW,
                 f"volume flow of the {name} at its inlet state"),
        Quantity(f"{key}_temperature_change", f"ΔT_{letter}", f"{label} temperature change", D,
                 f"difference between inlet and outlet temperature of the {name}, counted positive"),
    ]  # fmt: skip


def _all(source: MediumName, sink: MediumName) -> tuple[Quantity, ...]:
    return (
        *_medium("source", source, "so"),
        Quantity("heat_source_outlet_wet_bulb", "T_so,wb,out", f"{source.label} outlet wet bulb", T,
                 f"wet-bulb temperature of the {source.name} where it leaves the exchanger, mixed"),
        *_medium("sink", sink, "si"),
        Quantity("compressor_speed", "n", "Compressor speed", Kind.SPEED, "rotational speed of the compressor shaft"),
        Quantity("compressor_stage", "s", "Compressor stage", R,
                 "share of the displacement of all compressors that works; what stands still or is unloaded does not"),
        Quantity("evaporating_temperature", "T_e", "Evaporating temperature", T,
                 "dew point at the pressure of the evaporator outlet"),
        Quantity("condensing_temperature", "T_c", "Condensing temperature", T,
                 "dew point at the pressure of the condenser inlet"),
        Quantity("suction_pressure", "p_s", "Suction pressure", P, "pressure at the compressor suction port"),
        Quantity("discharge_pressure", "p_d", "Discharge pressure", P, "pressure at the compressor discharge port"),
        Quantity("suction_temperature", "T_s", "Suction temperature", T,
                 "temperature of the suction line within 0.3 m of the compressor"),
        Quantity("discharge_temperature", "T_d", "Discharge temperature", T,
                 "temperature of the discharge line within 0.3 m of the compressor"),
        Quantity("liquid_temperature", "T_l", "Liquid temperature", T,
                 "temperature of the liquid line before the expansion device"),
        Quantity("superheat", "ΔT_sh", "Superheat at the evaporator", D,
                 "temperature at the evaporator outlet minus dew point at the pressure there"),
        Quantity("compressor_superheat", "ΔT_sh,c", "Superheat at the compressor", D,
                 "suction temperature minus dew point at the suction pressure"),
        Quantity("subcooling", "ΔT_sc", "Subcooling at the valve", D,
                 "bubble point at the pressure before the expansion device minus liquid temperature"),
        Quantity("evaporator_temperature_difference", "TD_e", f"{source.label} inlet minus evaporating", D,
                 f"inlet temperature of the {source.name} minus evaporating temperature"),
        Quantity("condenser_temperature_difference", "TD_c", f"Condensing minus {sink.name} inlet", D,
                 f"condensing temperature minus inlet temperature of the {sink.name}"),
        Quantity("evaporator_approach", "ΔT_e,out", f"{source.label} outlet minus evaporating", D,
                 f"outlet temperature of the {source.name} minus evaporating temperature, where it is a liquid"),
        Quantity("condenser_approach", "ΔT_c,out", f"Condensing minus {sink.name} outlet", D,
                 f"condensing temperature minus outlet temperature of the {sink.name}, where it is a liquid"),
        Quantity("pressure_ratio", "π", "Pressure ratio", N, "discharge pressure over suction pressure, both absolute"),
        Quantity("refrigerant_flow", "ṁ", "Refrigerant flow", Kind.MASS_FLOW, "mass flow through the compressor"),
        Quantity("cooling_capacity", "Q_0", "Cooling capacity", Q,
                 f"heat taken from the {source.name} by the refrigerant, before the heat of the evaporator fan is "
                 "deducted"),
        Quantity("net_cooling_capacity", "Q_0,net", "Net cooling capacity", Q,
                 "cooling capacity less the power of the evaporator fan"),
        Quantity("heating_capacity", "Q_h", f"Heat to the {sink.name}", Q,
                 f"heat given to the {sink.name} by the refrigerant"),
        Quantity("compressor_power", "P_c", "Compressor power", W, "electric power drawn by the compressor"),
        Quantity("fan_power", "P_f", "Fan and pump power", W,
                 "electric power of the fans and pumps inside the boundary"),
        Quantity("power_input", "P", "Power input", W, "electric power drawn by all that the stated boundary includes"),
        Quantity("current", "I", "Current", Kind.CURRENT, "current in each supply phase of the unit"),
        Quantity("compressor_current", "I_c", "Current of each running compressor", Kind.CURRENT,
                 "current in each supply phase of a compressor that runs whole, where several work side by side"),
        Quantity("voltage", "U", "Voltage", Kind.VOLTAGE, "supply voltage, between phases where there are three"),
        Quantity("voltage_unbalance", "u_U", "Voltage unbalance", R, "largest deviation from the mean over the mean"),
        Quantity("current_unbalance", "u_I", "Current unbalance", R, "largest deviation from the mean over the mean"),
        Quantity("cooling_cop", "COP_c", "COP of cooling", N, "cooling capacity over power input"),
        Quantity("heating_cop", "COP_h", "COP of heating", N, f"heat to the {sink.name} over power input"),
        Quantity("heating_capacity_with_defrosts", "Q_h,d", f"Heat to the {sink.name} with defrosts", Q,
                 f"heat given to the {sink.name}, averaged over whole cycles of frost and defrost"),
        Quantity("heating_cop_with_defrosts", "COP_h,d", "COP of heating with defrosts", N,
                 f"heat to the {sink.name} over power input, both averaged over whole cycles of frost and defrost"),
        Quantity("carnot_cop", "COP_C", "Carnot COP between mean media", N,
                 "highest COP that any machine could reach between the entropic mean temperatures of the two media"),
        Quantity("sensible_heat_ratio", "SHR", "Sensible heat ratio", R,
                 "share of the cooling capacity that cools the air without drying it"),
        Quantity("mean_evaporating_temperature", "T_e,m", "Mean evaporating temperature", T,
                 "mean of the temperatures at which boiling starts and ends in the evaporator"),
        Quantity("gas_cooler_outlet_temperature", "T_gc", "Gas-cooler outlet temperature", T,
                 "temperature of the refrigerant where it leaves the gas cooler"),
        Quantity("gas_cooler_approach", "ΔT_gc", f"Gas-cooler outlet minus {sink.name} inlet", D,
                 f"gas-cooler outlet temperature minus inlet temperature of the {sink.name}"),
        Quantity("room_temperature", "T_r", "Room temperature", T, "air temperature of the room at its thermostat"),
        Quantity("store_top_temperature", "T_st,t", "Store top temperature", T,
                 "water temperature at the top of the store"),
        Quantity("store_middle_temperature", "T_st,m", "Store middle temperature", T,
                 "water temperature at half the height of the store"),
        Quantity("store_bottom_temperature", "T_st,b", "Store bottom temperature", T,
                 "water temperature at the bottom of the store"),
        Quantity("circulation_return_temperature", "T_cr", "Circulation return temperature", T,
                 "temperature of the water that comes back from the circulation loop"),
        Quantity("heat_up_time", "t_h", "Heat-up time", Kind.DURATION,
                 "time from the stated start temperature to the stop of the machine at the set point", ("h", 1)),
        Quantity("heat_up_energy", "E_h", "Heat-up energy", Kind.ENERGY,
                 "electric energy drawn during the heat-up time"),
        Quantity("defrost_time", "t_d", "Defrost time", Kind.DURATION, "time from start to end of one defrost"),
        Quantity("starts_per_hour", "n_h", "Starts per hour", N, "starts of the compressor in one hour"),
        Quantity("sound_level", "L_p", "Sound pressure level", Kind.SOUND_LEVEL,
                 "A-weighted sound pressure level at the stated place"),
        Quantity("running_share", "τ", "Running share", R, "compressor running time over elapsed time, whole cycles"),
        Quantity("barometric_pressure", "p_b", "Barometric pressure", P, "air pressure of the site"),
    )  # fmt: skip


@cache
def nomenclature(source: MediumName, sink: MediumName) -> Mapping[str, Quantity]:
    """The table for one system, whose labels and definitions call its media by their names.

    Keys and symbols are those of `NOMENCLATURE`; the flow of a liquid has a kind of its own.
    """
    return MappingProxyType({q.key: q for q in _all(source, sink)})


NOMENCLATURE: Mapping[str, Quantity] = nomenclature(MediumName("heat source"), MediumName("heat sink"))
