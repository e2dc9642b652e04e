"""Makes the file of vectors that the Python and the JavaScript decision must both answer.

`python -m commission.acceptance.vectors FOLDER` writes `tests/acceptance/decision_vectors.json` and
`site_templates/scripts/decision_vectors.js` below FOLDER. The answers come from the Python side; they are held to
published examples and to simulation by the tests beside the file.
"""

from __future__ import annotations

import json
import sys
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from commission.acceptance.decision import Rule, decide, fixed, significant

ArgumentsOfDecide = tuple[float, float, float | None, float | None, Rule, float, float | None]

DECIDE: tuple[tuple[str, ArgumentsOfDecide], ...] = (
    ("simple, inside", (3400.0, 90.0, 3135.0, None, "simple", 0.95, None)),
    ("simple, on the limit", (3135.0, 90.0, 3135.0, None, "simple", 0.95, None)),
    ("simple, on the limit but for arithmetic", (0.1 + 0.2, 0.01, None, 0.3, "simple", 0.95, None)),
    ("simple, outside", (3100.0, 90.0, 3135.0, None, "simple", 0.95, None)),
    ("simple, capable test", (3140.0, 80.0, 3135.0, None, "simple", 0.95, 165.0)),
    ("simple, test not capable, near the limit", (3200.0, 140.0, 3135.0, None, "simple", 0.95, 165.0)),
    ("simple, test not capable, far inside", (3400.0, 140.0, 3135.0, None, "simple", 0.95, 165.0)),
    ("simple, test not capable, far outside", (2850.0, 140.0, 3135.0, None, "simple", 0.95, 165.0)),
    ("simple, test not capable, on the limit", (3135.0, 140.0, 3135.0, None, "simple", 0.95, 165.0)),
    ("guarded, accepted", (3300.0, 90.0, 3135.0, None, "guarded", 0.95, None)),
    ("guarded, on the acceptance limit", (3.0 + 1.6448536269514722 * 0.1, 0.1, 3.0, None, "guarded", 0.95, None)),
    ("guarded, inside the guard band", (3200.0, 90.0, 3135.0, None, "guarded", 0.95, None)),
    ("guarded, outside but not surely", (3050.0, 90.0, 3135.0, None, "guarded", 0.95, None)),
    ("guarded, rejected", (2980.0, 90.0, 3135.0, None, "guarded", 0.95, None)),
    ("guarded, on the limit", (3135.0, 90.0, 3135.0, None, "guarded", 0.95, None)),
    ("upper limit, simple, inside", (1540.0, 20.0, None, 1550.0, "simple", 0.95, None)),
    ("upper limit, guarded, undecided", (1540.0, 20.0, None, 1550.0, "guarded", 0.95, None)),
    ("two limits, inside", (13.6, 1.8, 12.5, 16.3, "simple", 0.95, None)),
    ("two limits, guard bands overlap", (13.6, 1.8, 12.5, 16.3, "guarded", 0.95, None)),
    ("no uncertainty, inside", (5.0, 0.0, 4.0, 6.0, "guarded", 0.95, None)),
    ("no uncertainty, outside", (6.5, 0.0, 4.0, 6.0, "guarded", 0.95, None)),
    ("negative values, upper limit", (-5.47, 0.05, None, -5.40, "guarded", 0.9, None)),
    ("far tail", (100.0, 1.0, None, 130.0, "guarded", 0.999, None)),
)
SIGNIFICANT: tuple[tuple[str, tuple[float, float, float]], ...] = (
    ("deviation of nothing", (0.0, 0.5, 0.95)),
    ("below the band", (0.9, 0.5, 0.95)),
    ("above the band", (-1.0, 0.5, 0.95)),
    ("on the band", (0.5 * 1.959963984540054, 0.5, 0.95)),
    ("no uncertainty", (0.1, 0.0, 0.95)),
    ("99 %", (-1.2, 0.5, 0.99)),
)
FIXED: tuple[tuple[float, int], ...] = (
    (0.5, 0), (1.5, 0), (2.5, 0), (-2.5, 0), (0.125, 2), (-0.125, 2), (1.005, 2), (2.675, 2), (-0.04, 1), (0.0, 1),
    (-0.0, 0), (99.95, 1), (1e-9, 3), (123456.785, 2), (3135.0, 0),
)  # fmt: skip
PAGE_CHECKS = ("simple, on the limit", "simple, test not capable, near the limit", "guarded, on the acceptance limit",
               "guarded, inside the guard band", "two limits, inside", "far tail")  # fmt: skip


def vectors() -> dict[str, Any]:
    """All vectors with their answers, as plain data."""
    return {
        "decide": [{"name": n, "arguments": list(a), "answer": answer_of(a)} for n, a in DECIDE],
        "significant": [{"name": n, "arguments": list(a), "answer": significant(*a)} for n, a in SIGNIFICANT],
        "fixed": [
            {"name": f"fixed {value!r} {digits}", "arguments": [value, digits], "answer": fixed(value, digits)}
            for value, digits in FIXED
        ],
    }


def page_vectors() -> dict[str, Any]:
    """The few that a page checks itself with at start."""
    every = vectors()
    chosen = [v for v in every["decide"] if v["name"] in PAGE_CHECKS]
    return {"decide": chosen, "significant": every["significant"][1:3], "fixed": every["fixed"][2:6]}


def files() -> Mapping[str, str]:
    """Path below the project folder and text of each generated file."""
    page = json.dumps(page_vectors(), indent=1)
    return {
        "tests/acceptance/decision_vectors.json": json.dumps(vectors(), indent=1) + "\n",
        "site_templates/scripts/decision_vectors.js": "/* Made by python -m commission.acceptance.vectors: change "
        f"nothing here by hand. */\nvar commissionDecisionVectors = {page};\n",
    }


def answer_of(arguments: ArgumentsOfDecide) -> dict[str, Any]:
    """The answer of the Python side, in the words of the script."""
    d = decide(*arguments)
    return {
        "outcome": d.outcome,
        "probability": d.probability_of_conformity,
        "capable": d.capable,
        "acceptanceLow": d.acceptance_low,
        "acceptanceHigh": d.acceptance_high,
        "uncertaintyNeeded": d.uncertainty_needed,
    }


def main(folder: str) -> None:
    """Write the generated files below `folder`."""
    for path, text in files().items():
        (Path(folder) / path).write_text(text, encoding="utf-8")


if __name__ == "__main__":
    main(sys.argv[1])
