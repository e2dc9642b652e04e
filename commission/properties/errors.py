"""What the property room refuses, and why."""

from __future__ import annotations

from commission.errors import NotCalculatedError


class PropertyRangeError(NotCalculatedError):
    """A state lies outside what the property source is known to hold for; nothing is extrapolated in silence.

    The message names the substance, the quantity, the value asked for and the limit, in the units of a gauge.
    """

    def __init__(self, substance: str, message: str) -> None:
        self.substance = substance
        super().__init__(f"{substance}: {message}")


def celsius(T: float) -> str:
    """A temperature in K as text in degrees Celsius, for messages."""
    return f"{T - 273.15:.1f} °C"


def bar(p: float) -> str:
    """An absolute pressure in Pa as text in bar, for messages."""
    return f"{p / 1e5:.2f} bar absolute"
