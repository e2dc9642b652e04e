"""What the oil of a compressor asks for: how dry the circuit must be, and how hot its discharge may become."""

from __future__ import annotations

import re
from dataclasses import dataclass

from commission.safety.facts import load


@dataclass(frozen=True, slots=True)
class Oil:
    """A family of oils; `discharge` is the highest discharge temperature of common practice in words, if any."""

    family: str
    draws_water: bool
    says: str
    discharge: str | None


def oil_named(text: str | None) -> Oil | None:
    """The family that a description's words name, such as `POE 32`; None where it names none that is known here."""
    if text is None:
        return None
    for family, entry in load("oils.yaml").items():
        if any(re.search(rf"\b{re.escape(word)}\b", text.lower()) for word in entry["words"]):
            return Oil(family, bool(entry["draws_water"]), str(entry["says"]), entry.get("discharge"))
    return None
