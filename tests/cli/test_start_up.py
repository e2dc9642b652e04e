"""The command line starts light, explains itself, and turns every mistake into a message."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

from tests.conftest import Run

HEAVY = {
    "CoolProp", "matplotlib", "numpy", "scipy", "pydantic", "mkdocs", "yaml", "jinja2", "nh3", "pint", "platformdirs",
}  # fmt: skip
VERBS = ("new", "review", "predict", "compare", "record", "build")


RUN = """\
import sys
sys.argv[1:] = {arguments}
from commission.__main__ import main
try:
    main()
except SystemExit:
    pass
print(chr(10).join(sorted(sys.modules)), file=sys.stderr)
"""


def loaded_by(*arguments: str) -> set[str]:
    """The top-level modules that a run with these arguments loads."""
    code = RUN.format(arguments=list(arguments))
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, encoding="utf-8", check=True)
    return {name.partition(".")[0] for name in done.stderr.splitlines()}


def test_the_general_help_imports_nothing_but_this_package() -> None:
    """`--help` is asked for often and at once: of this package it loads the entry, and no library at all."""
    assert not loaded_by("--help") & (HEAVY | {"click"})


def test_what_is_not_the_general_help_may_load_click_and_nothing_heavy() -> None:
    """The version comes by way of click, but by none of the libraries that calculate, draw or read."""
    loaded = loaded_by("--version")
    assert "click" in loaded
    assert not loaded & HEAVY


def test_the_printed_help_is_what_the_options_say(commission: Run) -> None:
    """`help.txt` holds what click words from verbs and options on 80 columns; a changed verb changes both."""
    from click.testing import CliRunner

    from commission.cli import cli

    worded = CliRunner().invoke(cli, ["--help"], prog_name="commission", terminal_width=78)
    for asked in ("--help", "-h"):
        assert commission(asked).stdout == worded.output


def test_importing_the_package_imports_nothing_heavy() -> None:
    """`import commission` is free: rooms are imported when they are needed."""
    code = "import sys, commission; print('\\n'.join(sys.modules))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, encoding="utf-8", check=True)
    assert not {name.partition(".")[0] for name in done.stdout.splitlines()} & (HEAVY | {"click"})


@pytest.mark.parametrize("verb", VERBS)
def test_every_verb_explains_itself(commission: Run, verb: str) -> None:
    """Each verb has a help text that names what it works on, and asking for help succeeds."""
    done = commission(verb, "--help")
    assert done.returncode == 0
    assert done.stdout.startswith(f"Usage: commission {verb}")


def test_a_misspelt_verb_is_answered_with_the_nearest(commission: Run) -> None:
    """Wrong use leaves with 2 and says which verb was probably meant."""
    done = commission("predct", "somewhere")
    assert done.returncode == 2
    assert "Did you mean predict?" in done.stderr
    assert "Traceback" not in done.stderr


@pytest.mark.parametrize("verb", ["review", "predict", "build"])
def test_a_missing_plant_is_an_error_with_its_path(commission: Run, tmp_path: Path, verb: str) -> None:
    """A folder that is not there is named, with exit code 2."""
    done = commission(verb, tmp_path / "nowhere")
    assert done.returncode == 2
    assert "nowhere" in done.stderr
    assert "Traceback" not in done.stderr
