"""What the physics needs of one system: stated facts with their place, assumptions where nothing is stated."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field

from commission.description import Assumption, LoadedPlant, System
from commission.errors import NotCalculatedError
from commission.properties import Liquid, Refrigerant, liquid, refrigerant
from commission.quantities import Display, Input, Kind

COMPRESSOR, CONDENSER_FAN, EVAPORATOR_FAN = "compressor", "condenser fan", "evaporator fan"


class Used(Mapping[str, float]):
    """Values of the assumption list that remembers which of them were asked for."""

    def __init__(self, values: Mapping[str, float]) -> None:
        self._values = dict(values)
        self.keys_used: set[str] = set()

    def __getitem__(self, key: str) -> float:
        value = self._values[key]
        self.keys_used.add(key)
        return value

    def plain(self) -> dict[str, float]:
        """All values, without counting any as used."""
        return dict(self._values)

    def __iter__(self) -> Iterator[str]:
        return iter(self._values)

    def __len__(self) -> int:
        return len(self._values)


@dataclass(frozen=True)
class Facts:
    """One system of a plant, its refrigerant, its media and its assumption list."""

    loaded: LoadedPlant
    identity: str
    system: System
    fluid: Refrigerant
    assumptions: Mapping[str, Assumption]
    source_liquid: Liquid | None
    sink_liquid: Liquid | None
    stated: dict[str, Input] = field(default_factory=dict)

    @property
    def pressure(self) -> float:
        """Barometric pressure of the site in Pa."""
        return self.loaded.barometric_pressure

    @property
    def shown(self) -> Display:
        """How people of this plant name and read the quantities of this system, in a sentence."""
        return self.loaded.display(self.identity)

    @property
    def transcritical(self) -> bool:
        """Whether the high side has a gas cooler: carbon dioxide on one stage."""
        return self.fluid.name == "R-744"

    @property
    def heats_from_air(self) -> bool:
        """Whether heat is made from air, so that frost on the coil takes its share of it."""
        return self.system.duty in ("space_heating", "water_heating") and self.source_liquid is None

    @property
    def nominal(self) -> dict[str, float]:
        """The assumption list as plain values."""
        return {key: a.value for key, a in self.assumptions.items()}

    def glide(self, temperature: float) -> float:
        """Dew point minus bubble point in K at the dew pressure of `temperature` (K); 0 for a pure fluid."""
        if not self.fluid.is_blend:
            return 0.0
        held = min(temperature, 0.9 * self.fluid.T_critical)
        return held - self.fluid.bubble_temperature(self.fluid.dew_pressure(held))

    def origin(self, path: str) -> str:
        """Place in the description, such as `plant.yaml:64`, of a key path below the system."""
        place = self.loaded.where(f"systems.{self.identity}.{path}")
        return f"{place.file}:{place.line}"

    def input(self, name: str, value: float, kind: Kind, path: str) -> Input:
        """A stated value as an input of a calculation."""
        return Input(name, value, kind, self.origin(path))


def facts_of(loaded: LoadedPlant, identity: str) -> Facts:
    """The facts of one system; its refrigerant carries the figures that the plant states in the register's place.

    Raises:
        InputError: no such system, or a refrigerant that is not known.
    """
    system = loaded.system(identity)
    media = []
    for side in (system.heat_source, system.heat_sink):
        media.append(None if side.medium == "air" else liquid(side.medium, side.mass_fraction or 0.0))
    fluid = refrigerant(system.refrigerant)
    entry = loaded.register[fluid.name]
    if entry != fluid.register:
        fluid = fluid.with_register(entry)
    return Facts(loaded, identity, system, fluid, loaded.assumptions(identity), media[0], media[1])


def left_out(facts: Facts) -> tuple[str, ...]:
    """What is stated but not carried by the model, so that a reader knows; nothing is left out silently.

    Raises:
        NotCalculatedError: a part that changes the circuit so much that a prediction without it would be wrong.
    """
    system = facts.system
    if system.condenser.type == "evaporative":
        raise NotCalculatedError(
            "an evaporative condenser rejects heat by wet bulb, which this model does not carry yet"
        )
    notes = []
    if system.suction_exchanger is not None and system.suction_exchanger.effectiveness is None:
        notes.append(
            "the exchanger between suction gas and liquid is not in the model, since its effectiveness is not stated: "
            "its effect is in the fitted levels"
        )
    if system.controls.evaporator_pressure_regulator is not None:
        notes.append("the evaporator pressure regulator is not in the model: the values hold while it is wide open")
    if system.compressor.drive == "variable speed" and system.compressor.nominal_speed is None:
        rated = any(point.compressor_speed is not None for point in system.rated_points)
        if not rated:
            notes.append("the speed of the compressor is not stated: the values hold at the speed of the rated point")
    return tuple(notes)
