"""What the safety rules need to know of a refrigerant, gathered from the register with its marks."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

AIR_MOLAR_MASS = 0.02896
"""kg/mol of dry air: a heavier gas lies on the floor."""
Flammability = Literal["1", "2L", "2", "3"]


@dataclass(frozen=True, slots=True)
class Known:
    """A figure of the register: value in SI, source and mark."""

    value: float
    source: str
    mark: str


@dataclass(frozen=True, slots=True)
class Substance:
    """A refrigerant as the safety rules see it; concentrations in kg/m³, molar mass in kg/mol."""

    name: str
    safety_class: str
    molar_mass: float
    critical_temperature: float
    components: tuple[str, ...]
    lfl: Known | None
    practical_limit: Known | None
    atel_odl: Known | None
    rcl: Known | None
    gwp: Known | None
    liquid_only: bool
    fractions: Mapping[str, float] = field(default_factory=dict, hash=False)
    """Mass share of each component."""
    listed: bool = False
    """Holds a gas of annex I or II of EU 2024/573."""

    @property
    def toxicity(self) -> str:
        """A or B (ISO 817)."""
        return self.safety_class[:1]

    @property
    def flammability(self) -> Flammability:
        """1, 2L, 2 or 3 (ISO 817)."""
        match = re.fullmatch(r"[AB](1|2L|2|3)", self.safety_class)
        if match is None:
            raise ValueError(f"{self.name}: unknown safety class {self.safety_class!r}")
        return match.group(1)  # type: ignore[return-value]  # the pattern allows exactly these words

    @property
    def flammable(self) -> bool:
        """It can burn: class 2L, 2 or 3."""
        return self.flammability != "1"

    @property
    def heavy(self) -> bool:
        """Heavier than air."""
        return self.molar_mass > AIR_MOLAR_MASS

    @property
    def fluorinated(self) -> bool:
        """Made of fluorocarbons, wholly or in part: its smoke in a flame is poisonous."""
        return not set(self.components) <= {"R-290", "R-600a", "R-1270", "R-170", "R-717", "R-744", "R-718"}
