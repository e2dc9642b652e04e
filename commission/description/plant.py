"""One folder is one plant: read it, check it, and hand it on with the place of everything in it."""

from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import islice
from pathlib import Path
from typing import TYPE_CHECKING

from commission.description.assembling import PLANT_FILE, assemble
from commission.description.assumptions import Assumption, assumptions_for
from commission.description.checking import bounded, validate
from commission.description.looked import Looked
from commission.description.meaning import problems_of_meaning
from commission.description.model import Plant, System
from commission.description.naming import SIDES, medium_name
from commission.description.positions import DescriptionError, KeyPath, Position, Positions
from commission.errors import InputError, Problem, nearest
from commission.quantities import Display, Pressure, Quantity, nomenclature

if TYPE_CHECKING:
    from commission.properties.register import RegisterEntry


@dataclass(frozen=True)
class LoadedPlant:
    """A description that was read and checked.

    `digest` is the SHA-256 (hexadecimal) over the names and bytes of `files`: plant.yaml and what it reads, included
    files and tables. That is all that predictions and targets depend on, so that a record made by another digest was
    judged by another description. A plant's own checklists, the words of its emergency card and its upkeep change no
    expected value and are not part of it.
    """

    plant: Plant
    folder: Path
    digest: str
    files: tuple[str, ...]
    positions: Positions
    barometric_pressure: float
    """Air pressure of the site in Pa: as stated, or from the altitude by ISO 2533."""

    @cached_property
    def _by_text(self) -> Mapping[str, Position]:
        return self.positions.by_text()

    def system(self, identity: str) -> System:
        """The system with this id.

        Raises:
            InputError: there is no such system, with the nearest id.
        """
        systems = self.plant.systems
        if identity not in systems:
            raise InputError(
                Problem(
                    "no system has this id",
                    file=PLANT_FILE,
                    value=identity,
                    allowed=", ".join(systems),
                    nearest=nearest(identity, systems),
                )
            )
        return systems[identity]

    def where(self, path: str | KeyPath) -> Position:
        """The place of the value at a key path such as `systems.cold-room.charge`, or of what holds it."""
        if not isinstance(path, str):
            return self.positions.mark(path).value
        while path not in self._by_text and "." in path:
            path = path.rpartition(".")[0]
        return self._by_text.get(path, self.positions.mark(()).value)

    @cached_property
    def register(self) -> Mapping[str, RegisterEntry]:
        """The refrigerant register by designation, with the plant's own figures in place of the book's."""
        from commission.properties.register import register

        own = self.plant.refrigerants
        return register({n: {k: f.model_dump(exclude_none=True) for k, f in of.items()} for n, of in own.items()})

    def assumptions(self, identity: str) -> Mapping[str, Assumption]:
        """The assumption list of one system, own values with their place in the description; titles name its media."""
        found = assumptions_for(self.system(identity), self.positions, ("systems", identity))
        shown = self.display(identity)
        for side in SIDES:
            role, medium = side.replace("_", " "), shown.medium(side)
            medium = medium[:1].lower() + medium[1:]
            found = {k: replace(a, title=a.title.replace(role, medium)) for k, a in found.items()}
        return found

    def quantities(self, identity: str) -> Mapping[str, Quantity]:
        """The nomenclature of one system: labels and definitions call its media as people on site do."""
        plant, system = self.plant, self.system(identity)
        return nomenclature(medium_name(plant, system, "heat_source"), medium_name(plant, system, "heat_sink"))

    def display(self, identity: str | None = None, barometric_pressure: float | None = None) -> Display:
        """How quantities are shown to people of this plant: those of one system, where its id is given.

        `barometric_pressure` (Pa) is that of the site where none is given.
        """
        air = self.barometric_pressure if barometric_pressure is None else barometric_pressure
        if identity is None:
            return Display(self.plant.plant.units, air)
        return Display(self.plant.plant.units, air, self.quantities(identity))

    def absolute(self, pressure: Pressure) -> float:
        """A written pressure in Pa absolute at the barometric pressure of this site."""
        return pressure.absolute(self.barometric_pressure)


def load_plant(folder: Path | str) -> LoadedPlant:
    """Read and check the description in `folder`.

    Raises:
        DescriptionError: with all problems of the stage that failed: reading, then shape, then meaning.
    """
    folder = Path(folder)
    if folder.is_file():
        allowed = f"the folder that holds {PLANT_FILE}, such as {folder.parent}"
        raise DescriptionError(Problem("this is a file; the folder of a plant is wanted", str(folder), allowed=allowed))
    if not folder.is_dir():
        raise DescriptionError(
            Problem("there is no such folder", file=str(folder), allowed=f"a folder that holds {PLANT_FILE}")
        )
    if not (folder / PLANT_FILE).exists():
        near = nearest(PLANT_FILE, sorted(path.name for path in islice(folder.iterdir(), 1000)), cutoff=0.7)
        allowed = f"a folder that holds it; {folder} does not"
        raise DescriptionError(Problem("there is no such file", file=PLANT_FILE, allowed=allowed, nearest=near))
    whole = assemble(folder)
    plant = validate(Plant, whole.data, whole.positions, also=whole.problems)
    barometric_pressure = site_pressure(plant)
    found = problems_of_meaning(Looked(plant, whole.positions, barometric_pressure))
    if found:
        raise DescriptionError(*bounded(found))
    digest = digest_of(whole.contents)
    return LoadedPlant(plant, folder, digest, tuple(whole.contents), whole.positions, barometric_pressure)


def site_pressure(plant: Plant) -> float:
    """Barometric pressure of the site in Pa: as stated, or from its altitude."""
    stated = plant.plant.barometric_pressure
    if stated is not None:
        return stated.pascal
    from commission.properties import barometric_pressure

    return float(barometric_pressure(plant.plant.altitude))


def digest_of(contents: Mapping[str, bytes]) -> str:
    """SHA-256 over file names and contents, in the order of the names; a length before each keeps them apart."""
    total = hashlib.sha256()
    for name in sorted(contents):
        for part in (name.encode(), contents[name]):
            total.update(len(part).to_bytes(8, "big") + part)
    return total.hexdigest()
