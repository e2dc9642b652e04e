"""Start-up stays light: the room can be imported without the heavy libraries."""

from __future__ import annotations

import subprocess
import sys


def test_import_is_light() -> None:
    """Importing acceptance brings in neither property library nor plotting nor scientific libraries."""
    heavy = ("CoolProp", "matplotlib", "scipy", "pint", "numpy")
    code = f"import sys, commission.acceptance; print([m for m in {heavy!r} if m in sys.modules])"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, encoding="utf-8", check=True, timeout=60)
    assert done.stdout.strip() == "[]"
