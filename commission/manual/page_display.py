"""How the manual shows numbers: as everywhere, and flows of thousands with three figures."""

from __future__ import annotations

import math

from commission.description import LoadedPlant
from commission.quantities import FLOWS, Display, Kind


def three_figures(shown: float) -> float:
    """A number from 1000 on with three significant figures; a smaller one as it is."""
    if abs(shown) < 1000.0:
        return shown
    step = 10.0 ** (math.floor(math.log10(abs(shown))) - 2)
    return round(shown / step) * step


class PageDisplay(Display):
    """A `Display` that gives an air flow no more figures than anybody can measure: 2600 m³/h, not 2601."""

    __slots__ = ()

    def number(self, value: float, kind: Kind, digits: int | None = None) -> str:
        """As `Display.number`; a volume flow from 1000 on has three significant figures."""
        if digits is None and kind in FLOWS:
            shown = self.convert(value, kind)
            if abs(shown) >= 1000.0:
                return f"{three_figures(shown):.0f}".replace("-", "−")
        return super().number(value, kind, digits)


def page_display(
    loaded: LoadedPlant, identity: str | None = None, barometric_pressure: float | None = None
) -> PageDisplay:
    """How the manual shows quantities of a plant, or of one of its systems: see `LoadedPlant.display`."""
    plain = loaded.display(identity, barometric_pressure)
    return PageDisplay(plain.system, plain.barometric_pressure, plain.quantities)
