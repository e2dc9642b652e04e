"""A safety figure: a calculated number with its document, edition and mark, or the reason why there is none."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType

from commission.quantities import Explained, Input, Kind
from commission.safety.facts import MARKS, Fact


@dataclass(frozen=True, slots=True)
class Figure:
    """One number of the safety pages.

    `explained.quantity` is `key`; the value is in SI, pressures absolute. `document`, `edition` and `mark` name the
    source of the rule, `note` is what a reader must know beside it.
    """

    key: str
    title: str
    kind: Kind
    explained: Explained
    document: str
    edition: str
    mark: str
    note: str = ""

    @property
    def value(self) -> float:
        """The value in SI."""
        return self.explained.value

    @property
    def source(self) -> str:
        """Document and edition on one line."""
        return f"{self.document}, {self.edition}" if self.edition else self.document

    @property
    def sureness(self) -> str:
        """What the mark means, in words."""
        return MARKS[self.mark]


TITLES: Mapping[str, tuple[str, Kind]] = MappingProxyType(
    {
        "allowable_pressure_lowest": ("lowest allowable pressure on a nameplate", Kind.PRESSURE),
        "pre_test_pressure": ("pre-test pressure", Kind.PRESSURE),
        "strength_test_pressure": ("strength test pressure, whole circuit joined", Kind.PRESSURE),
        "strength_test_pressure_high_side": ("strength test pressure, high side alone", Kind.PRESSURE),
        "strength_test_hold": ("hold of the strength test", Kind.DURATION),
        "tightness_test_pressure": ("tightness test pressure, whole circuit joined", Kind.PRESSURE),
        "tightness_test_pressure_high_side": ("tightness test pressure, high side alone", Kind.PRESSURE),
        "tightness_test_hold": ("hold of the tightness test", Kind.DURATION),
        "nitrogen_change_per_kelvin": ("change of the test pressure for each kelvin", Kind.PRESSURE_DIFFERENCE),
        "standstill_pressure": ("standstill pressure at the hottest ambient", Kind.PRESSURE),
        "standstill_least_volume": ("least volume of a circuit without liquid at the hottest ambient", Kind.VOLUME),
        "design_pressure_high_side": ("least allowable pressure, high side, by ambient class", Kind.PRESSURE),
        "design_pressure_low_side": ("least allowable pressure, low side, by ambient class", Kind.PRESSURE),
        "high_pressure_limit_highest": ("highest setting of the high-pressure limit", Kind.PRESSURE),
        "relief_highest": ("highest setting of the relief valve", Kind.PRESSURE),
        "hottest_discharge_pressure": ("expected discharge pressure on the hottest day", Kind.PRESSURE),
        "high_pressure_margin": ("high-pressure limit above the expected hottest day", Kind.PRESSURE_DIFFERENCE),
        "high_pressure_limit_temperature": ("condensing temperature at the high-pressure limit", Kind.TEMPERATURE),
        "low_pressure_cut_out_temperature": ("evaporating temperature at the low-pressure cut-out", Kind.TEMPERATURE),
        "low_pressure_cut_in_temperature": ("saturation temperature at the low-pressure cut-in", Kind.TEMPERATURE),
        "low_pressure_trip_lowest": ("lowest pressure at which the low-pressure cut-out may act", Kind.PRESSURE),
        "evacuation_limit": ("evacuation: highest pressure the rule allows", Kind.PRESSURE),
        "evacuation_target": ("evacuation: pressure to reach", Kind.PRESSURE),
        "evacuation_hold": ("evacuation: time under vacuum", Kind.DURATION),
        "rise_test_hold": ("rise test: time with the pump shut off", Kind.DURATION),
        "rise_test_limit": ("rise test: highest pressure at the end", Kind.PRESSURE),
        "room_charge_limit": ("lowest charge limit of the spaces", Kind.MASS),
        "leak_concentration": ("concentration if the whole charge leaks into the smallest space", Kind.DENSITY),
        "leak_share_of_lfl": ("the same, share of the lower flammability limit", Kind.RATIO),
        "flammable_alarm_level": ("ceiling of the standard for the alarm of a gas detector", Kind.DENSITY),
        "emergency_ventilation": ("emergency ventilation of the machinery room, EN 378-3", Kind.VOLUME_FLOW),
        "emergency_ventilation_ashrae15": ("emergency ventilation of the machinery room, ASHRAE 15", Kind.VOLUME_FLOW),
        "co2_equivalent": ("CO₂ equivalent of the charge", Kind.MASS),
        "annex_ii_mass": ("gases of annex II, section 1, in the charge", Kind.MASS),
        "leak_check_months": ("months between leak checks", Kind.NUMBER),
    }
)
"""Every figure this room can calculate: title and kind by key."""


QUANTITY_TITLES: Mapping[str, tuple[str, Kind]] = MappingProxyType(
    {
        **TITLES,
        "allowable_pressure": ("pressure as stated", Kind.PRESSURE),
        "charge": ("refrigerant charge", Kind.MASS),
        "displacement": ("displacement of the compressor", Kind.VOLUME_FLOW),
        "receiver_volume": ("volume of the receiver", Kind.VOLUME),
        "warm_volume_below_element": ("volume that stays warm below the element", Kind.VOLUME),
    }
)
"""Title and kind of every quantity that an `Explained` of this room can name, those outside `Figures` included."""


@dataclass(frozen=True, slots=True)
class Figures:
    """All safety figures of one system: those found, and for the others the reason."""

    found: Mapping[str, Figure]
    not_calculated: Mapping[str, str]

    def get(self, key: str) -> Figure | None:
        """The figure, or None where it is not calculated."""
        return self.found.get(key)


@dataclass(slots=True)
class Collector:
    """Gathers figures while they are calculated; used inside this room only."""

    found: dict[str, Figure] = field(default_factory=dict)
    missing: dict[str, str] = field(default_factory=dict)

    def add(
        self,
        key: str,
        value: float,
        method: str,
        inputs: tuple[Input, ...],
        rule: Fact,
        *,
        mark: str | None = None,
        note: str = "",
        assumptions: tuple[str, ...] = (),
        uncertainty: float | None = None,
    ) -> None:
        """Add one figure under the rule it follows."""
        title, kind = TITLES[key]
        explained = Explained(key, value, uncertainty, method, inputs, assumptions)
        self.found[key] = Figure(
            key, title, kind, explained, rule.document, rule.edition, mark or rule.mark, note or rule.says
        )

    def refuse(self, reason: str, *keys: str) -> None:
        """Say why figures are not calculated."""
        for key in keys:
            self.missing[key] = reason

    def finish(self) -> Figures:
        """The result; keys that nobody mentioned are a fault of the package."""
        return Figures(MappingProxyType(dict(self.found)), MappingProxyType(dict(self.missing)))


def fact_input(rule: Fact, barometric_pressure: float | None = None) -> Input:
    """A figure of a document as an input; a gauge pressure needs the barometric pressure (Pa) of the site."""
    value = rule.value if barometric_pressure is None else rule.gauge_at(barometric_pressure)
    return Input(rule.says, value, rule.kind, f"{rule.source} ({MARKS[rule.mark]})")
