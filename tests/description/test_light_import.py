"""Importing the room, and reading a plant, stays light."""

import subprocess
import sys
from pathlib import Path

HEAVY = ("CoolProp", "numpy", "scipy", "matplotlib", "pint", "mkdocs", "jsonschema")


def loaded_after(code: str) -> set[str]:
    """The heavy libraries that a fresh process has loaded after `code`."""
    report = f"import sys; print(*[m for m in {HEAVY} if m in sys.modules])"
    run = subprocess.run([sys.executable, "-c", f"{code}; {report}"], capture_output=True, encoding="utf-8", check=True)
    return set(run.stdout.split())


def test_importing_the_room_loads_nothing_heavy() -> None:
    """Neither the equations of state nor numerical or plotting libraries are needed to read a file."""
    assert loaded_after("import commission.description, commission.quantities, commission.errors") == set()


def test_reading_a_plant_loads_nothing_heavy(example_folder: Path) -> None:
    """A description is read and checked without them too."""
    assert loaded_after(f"from commission.description import load_plant; load_plant({str(example_folder)!r})") == set()
