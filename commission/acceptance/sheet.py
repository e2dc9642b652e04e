"""The test sheet: targets over the range of the day, frozen into a text that both sides sign before the test.

Whatever changes later, in the description, an assumption, the tool or the property library, a test with a sheet is
judged by the numbers of the sheet. Its first line holds the SHA-256 digest of all that follows, so that a change shows.
"""

from __future__ import annotations

import hashlib
import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

from commission.acceptance.budget import Budget, Component, Measured, combine
from commission.acceptance.conditions import STAGE, another_stage
from commission.acceptance.expectation import Expectation
from commission.acceptance.grid import Axis, interpolate
from commission.acceptance.guarantee import Carried, Terms
from commission.errors import InputError, NotCalculatedError
from commission.quantities import NOMENCLATURE, Explained, Input, Quantity, bounds

Purpose = Literal["guarantee", "expectation"]
_ROOT_3 = math.sqrt(3.0)


class SheetError(InputError):
    """A test sheet that cannot be read, or whose digest does not fit its text."""


@dataclass(frozen=True, slots=True)
class Target:
    """One line of the sheet: the values at all points of the grid, in row order (the last axis runs fastest), in SI.

    `uncertainties` are standard uncertainties of the values themselves (model parts, or what carrying a guarantee
    adds), where nobody reads the conditions that the sheet holds at one value; `when_read` is by such a condition what
    the variances gain where it is read. `between` is the largest error of reading between the points, found at the
    middles of the cells; `reading_uncertainty` is the standard uncertainty of a reading with the `instruments` at the
    middle of the range, None where no instrument was named. `terms` belong to a guarantee. `slopes` are the changes per
    unit of the conditions that the sheet holds at one value, for a day on which they are a little different.
    """

    key: str
    purpose: Purpose
    method: str
    values: tuple[float, ...]
    uncertainties: tuple[float, ...]
    between: float
    instruments: tuple[str, ...] = ()
    reading_uncertainty: float | None = None
    terms: Terms | None = None
    slopes: Mapping[str, float] = field(default_factory=dict)
    when_read: Mapping[str, tuple[float, ...]] = field(default_factory=dict)


@dataclass(frozen=True, slots=True)
class TestSheet:
    """A frozen sheet. `conditions` are those held at one value over the sheet; `versions` name tool and data.

    `instruments` holds each instrument in the words of the description; `assumptions` the values in use, in SI;
    `route_inputs` value and standard uncertainty of what a route takes from the model (SI), so that a later change of
    the model does not move a measured capacity either.
    """

    __test__ = False  # not a class of tests, whatever its name

    system: str
    title: str
    prepared_for: str
    description_digest: str
    versions: Mapping[str, str]
    barometric_pressure: float
    axes: tuple[Axis, ...]
    conditions: Mapping[str, float]
    targets: tuple[Target, ...]
    instruments: Mapping[str, Mapping[str, str]]
    assumptions: Mapping[str, float]
    steadiness: str
    route_inputs: Mapping[str, tuple[float, float]] = field(default_factory=dict)

    def to_text(self) -> str:
        """The sheet as YAML with sorted keys; the first line is the digest of the rest. Same sheet, same bytes."""
        from commission.acceptance.sheet_text import body_of

        body = body_of(self)
        return f"digest: {digest_of(body)}\n{body}"

    @property
    def digest(self) -> str:
        """SHA-256 of the body, in hexadecimal, as printed on the signed page."""
        return self.to_text().split("\n", 1)[0].removeprefix("digest: ")

    def targets_for(self, purpose: Purpose) -> tuple[Target, ...]:
        """The lines of one purpose."""
        return tuple(t for t in self.targets if t.purpose == purpose)

    def value_at(
        self, target: Target, conditions: Mapping[str, Measured], names: Mapping[str, Quantity] = NOMENCLATURE
    ) -> tuple[float, Budget]:
        """A target at the measured condition, read between the points, with its budget.

        A condition that the sheet holds at one value and that was read moves it along the frozen slope, and is then
        known: only its reading is uncertain. `names` is the nomenclature of the system.

        Raises:
            NotCalculatedError: the day lies outside the range that was agreed, or a condition was not read.
        """
        at = {k: m.value for k, m in conditions.items()}
        held = self.conditions.get(STAGE)
        if held is not None and another_stage(conditions, held):
            raise NotCalculatedError(
                f"the sheet was frozen for a compressor stage of {100 * held:.0f} %, and the day ran at "
                f"{100 * at[STAGE]:.0f} %"
            )
        value, slopes = interpolate(self.axes, target.values, at, names)
        own = self._own(target, at)
        parts = [
            Component("frozen target", own, source="the frozen test sheet", of=target.key,
                      remedy="test nearer to the condition of the guarantee" if target.terms else ""),
            Component("reading between the points of the sheet", target.between / _ROOT_3, "rectangular",
                      source="the frozen test sheet", of=target.key),
        ]  # fmt: skip
        for key, slope in target.slopes.items():
            if key in conditions and key in self.conditions:
                value += slope * (conditions[key].value - self.conditions[key])
                slopes[key] = slope
        through = [conditions[k].budget.scaled(s) for k, s in slopes.items() if s]
        return value, combine(Budget(tuple(p for p in parts if p.value)), *through)

    def _own(self, target: Target, at: Mapping[str, float]) -> float:
        """Standard uncertainty of the target itself, with the conditions that were read."""
        own, _ = interpolate(self.axes, target.uncertainties, at)
        gained = sum(interpolate(self.axes, gains, at)[0] for key, gains in target.when_read.items() if key in at)
        return math.sqrt(max(0.0, own**2 + gained))

    def carried(
        self, target: Target, conditions: Mapping[str, Measured], names: Mapping[str, Quantity] = NOMENCLATURE
    ) -> Carried:
        """The guaranteed value of a target on the day.

        Raises:
            NotCalculatedError: as `value_at`.
        """
        value, budget = self.value_at(target, conditions, names)
        return Carried(value, budget, self._explained(target, value, budget, "guarantee_by_sheet", conditions))

    def expectations(
        self, conditions: Mapping[str, Measured], names: Mapping[str, Quantity] = NOMENCLATURE
    ) -> tuple[Mapping[str, Expectation], Mapping[str, str]]:
        """All frozen expectations at the measured condition, and why others have none."""
        found, reasons = {}, {}
        for target in self.targets_for("expectation"):
            try:
                value, budget = self.value_at(target, conditions, names)
            except NotCalculatedError as error:
                reasons[target.key] = str(error)
                continue
            explained = self._explained(target, value, budget, "expected_by_sheet", conditions)
            found[target.key] = Expectation(target.key, value, budget, explained)
        return found, reasons

    def _explained(
        self, target: Target, value: float, budget: Budget, method: str, conditions: Mapping[str, Measured]
    ) -> Explained:
        inputs = tuple(
            Input(a.key, conditions[a.key].value, NOMENCLATURE[a.key].kind, "reading")
            for a in self.axes
            if a.key in conditions
        )
        at = {**self.conditions, **{k: m.value for k, m in conditions.items()}}
        return Explained(target.key, value, budget.standard, method, inputs, bounds=bounds(target.key, at))


def digest_of(body: str) -> str:
    """SHA-256 (hexadecimal) of a sheet's body; line ends of another system do not count."""
    return hashlib.sha256(body.replace("\r\n", "\n").encode()).hexdigest()
