"""The one table of quantities: key, symbol, label, kind and definition; YAML, JSON, CSV and page labels follow it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from commission.quantities.kinds import Kind


@dataclass(frozen=True, slots=True)
class Quantity:
    """A quantity of the trade. `definition` says exactly what is meant, so that two people read the same thing."""

    key: str
    symbol: str
    label: str
    kind: Kind
    definition: str


T, D, P, W, Q, R, N = (
    Kind.TEMPERATURE,
    Kind.TEMPERATURE_DIFFERENCE,
    Kind.PRESSURE,
    Kind.POWER,
    Kind.HEAT_FLOW,
    Kind.RATIO,
    Kind.NUMBER,
)


def _medium(side: str, label: str, letter: str, where: str) -> list[Quantity]:
    key = f"heat_{side}"
    return [
        Quantity(f"{key}_inlet_temperature", f"T_{letter},in", f"{label} inlet temperature", T,
                 f"dry-bulb or liquid temperature of the {where} where it enters the exchanger"),
        Quantity(f"{key}_outlet_temperature", f"T_{letter},out", f"{label} outlet temperature", T,
                 f"temperature of the {where} where it leaves the exchanger, mixed"),
        Quantity(f"{key}_wet_bulb", f"T_{letter},wb", f"{label} wet bulb", T,
                 f"wet-bulb temperature of the {where} where it enters the exchanger"),
        Quantity(f"{key}_relative_humidity", f"φ_{letter}", f"{label} relative humidity", R,
                 f"relative humidity of the {where} where it enters the exchanger"),
        Quantity(f"{key}_flow", f"V_{letter}", f"{label} flow", Kind.VOLUME_FLOW,
                 f"volume flow of the {where} at its inlet state"),
        Quantity(f"{key}_temperature_change", f"ΔT_{letter}", f"{label} temperature change", D,
                 f"difference between inlet and outlet temperature of the {where}, counted positive"),
    ]  # fmt: skip


_ALL: tuple[Quantity, ...] = (
    *_medium("source", "Heat source", "so", "medium that heat is taken from"),
    Quantity("heat_source_outlet_wet_bulb", "T_so,wb,out", "Heat source outlet wet bulb", T,
             "wet-bulb temperature of the air that heat is taken from where it leaves the exchanger, mixed"),
    *_medium("sink", "Heat sink", "si", "medium that heat is given to"),
    Quantity("compressor_speed", "n", "Compressor speed", Kind.SPEED, "rotational speed of the compressor shaft"),
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
    Quantity("evaporator_temperature_difference", "TD_e", "Source inlet minus evaporating", D,
             "inlet temperature of the heat source minus evaporating temperature"),
    Quantity("condenser_temperature_difference", "TD_c", "Condensing minus sink inlet", D,
             "condensing temperature minus inlet temperature of the heat sink"),
    Quantity("evaporator_approach", "ΔT_e,out", "Source outlet minus evaporating", D,
             "outlet temperature of a liquid heat source minus evaporating temperature"),
    Quantity("condenser_approach", "ΔT_c,out", "Condensing minus sink outlet", D,
             "condensing temperature minus outlet temperature of a liquid heat sink"),
    Quantity("pressure_ratio", "π", "Pressure ratio", N, "discharge pressure over suction pressure, both absolute"),
    Quantity("refrigerant_flow", "ṁ", "Refrigerant flow", Kind.MASS_FLOW, "mass flow through the compressor"),
    Quantity("cooling_capacity", "Q_0", "Cooling capacity", Q,
             "heat taken from the heat source by the refrigerant, before the heat of the evaporator fan is deducted"),
    Quantity("net_cooling_capacity", "Q_0,net", "Net cooling capacity", Q,
             "cooling capacity less the power of the evaporator fan"),
    Quantity("heating_capacity", "Q_h", "Heat to the sink", Q, "heat given to the heat sink by the refrigerant"),
    Quantity("compressor_power", "P_c", "Compressor power", W, "electric power drawn by the compressor"),
    Quantity("fan_power", "P_f", "Fan and pump power", W, "electric power of the fans and pumps inside the boundary"),
    Quantity("power_input", "P", "Power input", W, "electric power drawn by all that the stated boundary includes"),
    Quantity("current", "I", "Current", Kind.CURRENT, "current in each supply phase of the unit"),
    Quantity("voltage", "U", "Voltage", Kind.VOLTAGE, "supply voltage, between phases where there are three"),
    Quantity("voltage_unbalance", "u_U", "Voltage unbalance", R, "largest deviation from the mean over the mean"),
    Quantity("current_unbalance", "u_I", "Current unbalance", R, "largest deviation from the mean over the mean"),
    Quantity("cooling_cop", "COP_c", "COP of cooling", N, "cooling capacity over power input"),
    Quantity("heating_cop", "COP_h", "COP of heating", N, "heat to the sink over power input"),
    Quantity("heating_capacity_with_defrosts", "Q_h,d", "Heat to the sink with defrosts", Q,
             "heat given to the heat sink, averaged over whole cycles of frost and defrost"),
    Quantity("heating_cop_with_defrosts", "COP_h,d", "COP of heating with defrosts", N,
             "heat to the sink over power input, both averaged over whole cycles of frost and defrost"),
    Quantity("carnot_cop", "COP_C", "Carnot COP", N,
             "highest COP that any machine could reach between the entropic mean temperatures of the two media"),
    Quantity("sensible_heat_ratio", "SHR", "Sensible heat ratio", R,
             "share of the cooling capacity that cools the air without drying it"),
    Quantity("mean_evaporating_temperature", "T_e,m", "Mean evaporating temperature", T,
             "mean of the temperatures at which boiling starts and ends in the evaporator"),
    Quantity("gas_cooler_outlet_temperature", "T_gc", "Gas-cooler outlet temperature", T,
             "temperature of the refrigerant where it leaves the gas cooler"),
    Quantity("gas_cooler_approach", "ΔT_gc", "Gas cooler over entering water", D,
             "gas-cooler outlet temperature minus inlet temperature of the heat sink"),
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
             "time from the stated start temperature to the stop of the machine at the set point"),
    Quantity("heat_up_energy", "E_h", "Heat-up energy", Kind.ENERGY, "electric energy drawn during the heat-up time"),
    Quantity("defrost_time", "t_d", "Defrost time", Kind.DURATION, "time from start to end of one defrost"),
    Quantity("starts_per_hour", "n_h", "Starts per hour", N, "starts of the compressor in one hour"),
    Quantity("sound_level", "L_p", "Sound pressure level", Kind.SOUND_LEVEL,
             "A-weighted sound pressure level at the stated place"),
    Quantity("running_share", "τ", "Running share", R, "compressor running time over elapsed time, whole cycles"),
    Quantity("barometric_pressure", "p_b", "Barometric pressure", P, "air pressure of the site"),
)  # fmt: skip

NOMENCLATURE: Mapping[str, Quantity] = MappingProxyType({q.key: q for q in _ALL})
