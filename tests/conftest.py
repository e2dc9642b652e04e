"""What all tests share: the example plant, the command line as a process, and a repeatable hypothesis in CI."""

from __future__ import annotations

import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path

import pytest
from hypothesis import HealthCheck, settings

ROOT = Path(__file__).resolve().parent.parent

settings.register_profile("ci", derandomize=True, deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.register_profile("desk", deadline=None, suppress_health_check=[HealthCheck.too_slow])
settings.load_profile("ci" if os.environ.get("CI") else "desk")

Run = Callable[..., "subprocess.CompletedProcess[str]"]


@pytest.fixture(scope="session")
def example_folder() -> Path:
    """The example plant as it stands in the repository: never written to by a test."""
    return ROOT / "example_plant"


@pytest.fixture
def example_copy(tmp_path: Path, example_folder: Path) -> Path:
    """A copy of the example plant that a test may change."""
    target = tmp_path / "plant"
    shutil.copytree(example_folder, target, ignore=shutil.ignore_patterns("manual", ".manual-*"))
    return target


@pytest.fixture(scope="session")
def commission() -> Run:
    """Runs the command line in a process of its own and returns exit code, output and messages."""

    def run(*arguments: str | Path, timeout: float = 120.0) -> subprocess.CompletedProcess[str]:
        return subprocess.run(
            [sys.executable, "-m", "commission", *map(str, arguments)],
            capture_output=True,
            encoding="utf-8",
            timeout=timeout,
            check=False,
        )

    return run
