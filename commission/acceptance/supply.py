"""The electric supply: what no model predicts, held to the band that a supply keeps and to the rules of the trade."""

from __future__ import annotations

from typing import TYPE_CHECKING

from commission.acceptance.tolerances import tolerances

if TYPE_CHECKING:
    from commission.description.model import System

BAND = 0.10
"""Share of the nominal voltage on both sides: IEC 60038; EN 50160 for 95 % of the ten-minute means of a week."""
_RULES = {"voltage_unbalance": "voltage-unbalance", "current_unbalance": "current-unbalance"}


def supply(key: str, value: float, system: System) -> str | None:
    """What a reading of the supply is held to, in words, and whether it keeps it; None for any other quantity.

    `value` is in SI. A voltage is held to the nameplate's, an unbalance to the rule of thumb of the library; neither
    decides a guarantee.
    """
    nominal = system.nameplate.voltage
    if key == "voltage" and nominal is not None:
        low, high = nominal * (1.0 - BAND), nominal * (1.0 + BAND)
        band = f"{low:.0f} to {high:.0f} V, {nominal:.0f} V ± {BAND:.0%} (IEC 60038, EN 50160)".replace("%", " %")
        kept = low <= value <= high
        return f"held to {band}: {'within' if kept else 'outside; put the supply right before anything is judged'}"
    if key in _RULES:
        rule = tolerances()[_RULES[key]]
        assert rule.value is not None
        word = "within" if value <= rule.value else "above"
        return f"held to at most {rule.value * 100:.0f} % ({rule.source}): {word}"
    return None
