"""The single door through which CoolProp is loaded, late.

A library import of this package loads no equation of state and changes no environment. The command line may ask for
the light import, which leaves out CoolProp's own saturation series (not needed: the lines of this package replace
them) and is ten times quicker. That choice is one per process and holds from the first load on.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from contextlib import contextmanager
from functools import cache
from typing import Any

LIGHT_SWITCH = "COOLPROP_DISABLE_SUPERANCILLARIES_ENTIRELY"


@contextmanager
def _quiet_standard_output() -> Iterator[None]:
    """Send file descriptor 1 to the null device: CoolProp's C++ side prints a line there, below Python's reach."""
    sys.stdout.flush()
    try:
        kept = os.dup(1)
    except OSError:  # no standard output at all, as under a service manager: nothing can be spoilt
        yield
        return
    null = os.open(os.devnull, os.O_WRONLY)
    try:
        os.dup2(null, 1)
        yield
    finally:
        os.dup2(kept, 1)
        os.close(kept)
        os.close(null)


@cache
def _module() -> Any:
    from CoolProp import CoolProp

    return CoolProp


def load(light: bool = False) -> Any:
    """The module `CoolProp.CoolProp`, loaded on the first call.

    `light=True` sets the switch for the light import in this process' environment and keeps CoolProp's one line of
    output away from standard output; it is for the command line only, before anything else has loaded CoolProp, and
    is without effect afterwards. Values differ by less than 1e-7 between the two ways.
    """
    if light and "CoolProp" not in sys.modules:
        os.environ[LIGHT_SWITCH] = "1"
    if LIGHT_SWITCH in os.environ and "CoolProp" not in sys.modules:
        with _quiet_standard_output():
            module = _module()
            module.AbstractState("HEOS", "Water")  # the line is printed when the first state is made
        return module
    return _module()


def version() -> str:
    """Version of the CoolProp in use, such as `8.0.0`; does not load its library."""
    from importlib.metadata import version as installed

    return installed("CoolProp")
