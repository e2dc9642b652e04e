"""Asks every room below what it knows of the plant, once; a system that cannot be calculated keeps its reason."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from commission.description import Assumption, LoadedPlant, System
from commission.errors import CommissionError, NotCalculatedError
from commission.manual.book import slugs
from commission.manual.grid import Grid, make_grid
from commission.manual.page_display import page_display
from commission.manual.remembering import remembering
from commission.quantities import Display

if TYPE_CHECKING:
    from commission.acceptance import TestSheet
    from commission.prediction import Prediction, SystemModel


@dataclass(frozen=True, slots=True)
class SystemData:
    """Everything the pages of one system show. `because` is the reason where the system cannot be calculated; `display`
    shows the quantities of this system, with its media under their names."""

    id: str
    slug: str
    system: System
    model: SystemModel | None
    because: str | None
    rated: Prediction | None
    assumptions: Mapping[str, Assumption]
    grid: Grid | None
    effects: Mapping[str, Mapping[str, float]]
    display: Display

    @property
    def name(self) -> str:
        """The name as people on site say it."""
        return self.system.name or self.id

    @property
    def group(self) -> str:
        """The group of its pages."""
        return f"system:{self.id}"

    @property
    def kicker(self) -> str:
        """The line above the titles of its pages."""
        return f"{self.name} · {self.system.refrigerant}"

    def page(self, name: str) -> str:
        """The id of one of its pages."""
        return f"systems/{self.slug}/{name}"


@dataclass(frozen=True, slots=True)
class PlantData:
    """Everything the pages show. `sheets` are the frozen test sheets by name, a text where one cannot be read."""

    loaded: LoadedPlant
    display: Display
    systems: tuple[SystemData, ...]
    sheets: Mapping[str, TestSheet | str] = field(default_factory=dict)

    @property
    def name(self) -> str:
        """The name of the plant."""
        return self.loaded.plant.plant.name


def gather(loaded: LoadedPlant, progress: Callable[[str], None]) -> PlantData:
    """Calculates every system once."""
    names = slugs(tuple(loaded.plant.systems))
    systems = tuple(_system(loaded, identity, slug, progress) for identity, slug in names.items())
    return PlantData(loaded, page_display(loaded), systems, _sheets(loaded))


def gather_one(loaded: LoadedPlant, model: SystemModel) -> PlantData:
    """The plant with one system only, whose model is fitted already.

    Raises:
        NotCalculatedError: it cannot be calculated at its rated condition.
    """
    identity = model.system_id
    slug = slugs(tuple(loaded.plant.systems))[identity]
    model = remembering(model)
    data = _calculated(loaded, identity, slug, model, model.predict())
    return PlantData(loaded, page_display(loaded), (data,))


def _system(loaded: LoadedPlant, identity: str, slug: str, progress: Callable[[str], None]) -> SystemData:
    from commission.prediction import fit

    progress(f"calculating {identity}")
    shown = page_display(loaded, identity)
    try:
        model = remembering(fit(loaded, identity))
        rated = model.predict()
    except CommissionError as error:
        assumed = loaded.assumptions(identity)
        return SystemData(identity, slug, loaded.system(identity), None, _reason(error), None, assumed, None, {}, shown)
    return _calculated(loaded, identity, slug, model, rated)


def _calculated(loaded: LoadedPlant, identity: str, slug: str, model: SystemModel, rated: Prediction) -> SystemData:
    system = loaded.system(identity)
    grid = make_grid(loaded, system, model)
    try:
        effects = model.assumption_effects(_far_condition(grid, rated))
    except NotCalculatedError:
        effects = {}
    return SystemData(
        identity,
        slug,
        system,
        model,
        None,
        rated,
        _in_use(system, model),
        grid,
        effects,
        page_display(loaded, identity),
    )


def _in_use(system: System, model: SystemModel) -> Mapping[str, Assumption]:
    """The assumptions of the fitted model, and those on which only the heat-up of a store rests."""
    if system.store is None:
        return model.assumptions
    from commission.prediction.heating_up import VOLUME

    return {**model.assumptions, VOLUME: model.facts.assumptions[VOLUME]}


def _sheets(loaded: LoadedPlant) -> dict[str, TestSheet | str]:
    from commission.acceptance import read_sheet

    found: dict[str, TestSheet | str] = {}
    for path in sorted((loaded.folder / "records" / "sheets").glob("*.yaml")):
        try:
            found[path.stem] = read_sheet(path)
        except CommissionError as error:
            found[path.stem] = error.problems[0].message
    return found


def _reason(error: CommissionError) -> str:
    return "; ".join(p.message for p in error.problems)


def far_point(grid: Grid | None, rated: Prediction) -> Prediction:
    """The prediction of the grid that lies furthest from the rated condition, where assumptions show most."""
    if grid is None:
        return rated
    at = rated.conditions.get(grid.key)
    found = [p.prediction for p in grid.points if p.prediction is not None]
    if at is None or not found:
        return rated
    return max(found, key=lambda p: abs(p.conditions[grid.key] - at))


def _far_condition(grid: Grid | None, rated: Prediction) -> Mapping[str, float] | None:
    far = far_point(grid, rated)
    return None if grid is None or far is rated else {grid.key: far.conditions[grid.key]}
