"""Drift: a change since the baseline that neither instruments nor the model explain, and what it looks like."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from commission.description import LoadedPlant
from commission.quantities import Display
from commission.records.history import NOT_INDEPENDENT, Point, Series, history, series

CONFIDENCE = 0.95
_DAYS_A_YEAR = 365.25
_LEAST_MATCHES = 2


@dataclass(frozen=True, slots=True)
class Drift:
    """One quantity that has moved. Values in its SI unit; `expanded` is the 95 % uncertainty of `change`.

    `repeated`: the visit before showed a significant change in the same direction too. `per_year` is the change over
    the time between, for orientation: two visits do not make a rate. `moved` and `since` (which
    baseline) are words for a person.
    """

    system: str
    quantity: str
    unit: str
    baseline: str
    latest: str
    change: float
    expanded: float
    days: int
    repeated: bool
    moved: str
    since: str

    @property
    def sentence(self) -> str:
        """What has moved, by how much and since when, for a person."""
        return f"{self.moved} against what is expected, since {self.since}"

    @property
    def per_year(self) -> float | None:
        """Change per year, None for visits less than a month apart."""
        return self.change * _DAYS_A_YEAR / self.days if self.days >= 30 else None


@dataclass(frozen=True, slots=True)
class Family:
    """A likely kind of cause. `agree` and `against` are the quantities that speak for it and against it."""

    name: str
    look_at: str
    agree: tuple[str, ...]
    against: tuple[str, ...]


def drifts(loaded: LoadedPlant, system: str | None = None) -> tuple[Drift, ...]:
    """What has drifted at the latest visit of each system, or of one, by the frozen deviations."""
    records = history(loaded)
    systems = [system] if system is not None else list(loaded.plant.systems)
    return tuple(d for s in systems for d in find_drifts(series(records, s), loaded.display(s)))


def find_drifts(found: Iterable[Series], display: Display) -> tuple[Drift, ...]:
    """The drifts among the series of one system at its latest visit.

    With a dozen quantities looked at, one in two healthy plants would show some change beyond 95 % by chance. So a
    single visit makes a finding only where the change is beyond what 95 % means for all quantities of the visit
    together (Bonferroni's inequality); two visits in a row that each show a significant change one way make one too.
    """
    rows = [s for s in found if s.quantity not in NOT_INDEPENDENT]
    latest = max((s.points[-1].started for s in rows if s.points), default=None)
    at_latest = [(s, s.points[-1]) for s in rows if s.points[-1].started == latest and s.points[-1].change is not None]
    wider = _wider(len(at_latest))
    return tuple(
        _drift(s, p, _repeated(s), display)
        for s, p in at_latest
        if p.change is not None
        and p.change_expanded is not None
        and (abs(p.change) > wider * p.change_expanded or (p.change_significant and _repeated(s)))
    )


def families(found: Sequence[Series], *, valve: bool, receiver: bool) -> tuple[Family, ...]:
    """Kinds of cause that fit the significant changes of the latest visit, the best first; none where none fits.

    `valve`: the expansion device holds the superheat. `receiver`: there is one, so that subcooling says nothing of a
    lost charge. A family is named where at least two quantities speak for it and none against it.
    """
    signs = _signs(found)
    kept = []
    for entry in _library():
        pattern = dict(entry.get("valve" if valve else "fixed", {}))
        if receiver and entry["family"].startswith("less refrigerant"):
            pattern.pop("subcooling", None)
        known = {k: s for k, s in pattern.items() if k in signs}
        agree = tuple(k for k, s in known.items() if s != "0" and signs[k] == s)
        against = tuple(k for k, s in known.items() if signs[k] != "0" and signs[k] != s)
        if len(agree) >= _LEAST_MATCHES and not against:
            kept.append((len(agree) / len(pattern), Family(entry["family"], entry["look_at"], agree, against)))
    return tuple(f for _, f in sorted(kept, key=lambda pair: (-pair[0], pair[1].name)))


def _signs(found: Iterable[Series]) -> dict[str, str]:
    """For each quantity whether it moved up, down or not significantly, at the latest visit."""
    rows = [s for s in found if s.points]
    latest = max((s.points[-1].started for s in rows), default=None)
    signs = {}
    for one in rows:
        point = one.points[-1]
        if point.started == latest and point.change is not None:
            signs[one.quantity] = ("+" if point.change > 0 else "-") if point.change_significant else "0"
    return signs


def _wider(count: int) -> float:
    """How much wider than 95 % for one the limits are that give 95 % for `count` quantities together."""
    from commission.acceptance.distributions import normal_quantile

    if count < 2:
        return 1.0
    alone = normal_quantile(0.5 + CONFIDENCE / 2)
    return normal_quantile(1.0 - (1.0 - CONFIDENCE) / (2 * count)) / alone


def _repeated(one: Series) -> bool:
    """Whether the last two visits show a significant change in the same direction."""
    if len(one.points) < 2:
        return False
    before, last = one.points[-2], one.points[-1]
    if not (before.change_significant and last.change_significant):
        return False
    return before.change is not None and last.change is not None and (before.change > 0) == (last.change > 0)


def _drift(one: Series, point: Point, repeated: bool, display: Display) -> Drift:
    assert point.change is not None
    assert point.change_expanded is not None
    quantity = display.quantities[one.quantity]
    base = next(p for p in one.points if p.record == one.baseline)
    days = (point.started - base.started).days
    size = display.spread(abs(point.change), quantity.kind)
    spread = f"{display.spread(point.change_expanded, quantity.kind)} {display.spread_unit(quantity.kind)}".strip()
    way = "risen" if point.change > 0 else "fallen"
    again = ", as the visit before showed already" if repeated else ""
    moved = f"{quantity.label} has {way} by {size} ± {spread}{again}"
    since = f"the {one.baseline_is} on {base.started.date().isoformat()}"
    return Drift(
        one.system, one.quantity, one.unit, one.baseline, point.record, point.change, point.change_expanded,
        days, repeated, moved, since,
    )  # fmt: skip


@cache
def _library() -> tuple[Mapping[str, Any], ...]:
    import yaml

    text = (files("commission.records") / "families.yaml").read_text(encoding="utf-8")
    return tuple(yaml.safe_load(text))
