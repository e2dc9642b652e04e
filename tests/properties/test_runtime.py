"""Threads, counting, determinism and a light start."""

from __future__ import annotations

import json
import os
import subprocess
import sys
from concurrent.futures import ThreadPoolExecutor

import numpy as np
import pytest

from commission.properties import Refrigerant, liquid, refrigerant
from commission.properties.coolprop import LIGHT_SWITCH


def work(r: Refrigerant, seed: int) -> list[float]:
    """Enthalpies of 150 seeded cycles."""
    rng = np.random.default_rng(seed)
    out = []
    for _ in range(150):
        low, high = r.dew(float(rng.uniform(240, 275))), r.dew(float(rng.uniform(290, 330)))
        suction = r.vapour(low.T + 8, low.p)
        out += [suction.h, r.isentropic_end(suction, high.p).h, r.liquid(280.0, high.p).h]
        out.append(liquid("propylene glycol", 0.3).density(float(rng.uniform(270, 300))))
    return out


@pytest.mark.parametrize("name", ["R-290", "R-454B"])
def test_threads_do_not_disturb_each_other(name: str) -> None:
    """Four threads on one refrigerant give what one gives, bit by bit, and each counts its own calls."""
    r = refrigerant(name)
    alone = [work(r, seed) for seed in range(4)]
    with ThreadPoolExecutor(4) as pool:
        together = list(pool.map(lambda seed: work(r, seed), range(4)))
        assert pool.submit(lambda: r.calls).result() <= 4 * 150 * 20
    assert together == alone


def test_the_same_question_has_the_same_answer() -> None:
    """No state is carried from one call to the next."""
    r = refrigerant("R-448A")
    first = r.vapour(300.0, 8e5)
    r.liquid(270.0, 20e5)
    r.throttled(4e5, 250e3)
    assert r.vapour(300.0, 8e5) == first


def test_calls_of_the_equation_are_counted_and_few() -> None:
    """Saturation costs none; vapour and liquid at most 4, isentropic end and vapour from enthalpy at most 6."""
    for name in ("R-290", "R-410A", "R-454B", "R-448A", "R-717"):
        r = refrigerant(name)
        low, high = r.dew(265.0), r.dew(313.0)
        suction = r.vapour(273.0, low.p)

        def cost(ask: object, r: Refrigerant = r) -> int:
            before = r.calls
            assert callable(ask)
            ask()
            return r.calls - before

        assert cost(lambda r=r, p=low.p: (r.dew(280.0), r.bubble(280.0), r.dew_temperature(p))) == 0
        assert cost(lambda r=r, p=low.p: r.throttled(p, 250e3)) == 0
        assert cost(lambda r=r, p=low.p: r.vapour(273.0, p)) <= 4
        assert cost(lambda r=r, p=high.p: r.liquid(305.0, p)) <= 4
        assert cost(lambda r=r, p=high.p, s=suction: r.isentropic_end(s, p)) <= 6
        assert cost(lambda r=r, p=high.p, h=high.h: r.vapour_from_enthalpy(p, h + 40e3)) <= 6


def python(code: str, **environment: str) -> subprocess.CompletedProcess[str]:
    """A fresh interpreter."""
    clean = {k: v for k, v in os.environ.items() if k != LIGHT_SWITCH}
    return subprocess.run(
        [sys.executable, "-c", code], capture_output=True, text=True, check=True, env={**clean, **environment}
    )


def test_importing_the_room_loads_nothing_heavy() -> None:
    """No equation of state, no arrays, no YAML, no models until a property is asked for."""
    done = python("import sys, json, commission.properties; print(json.dumps(sorted(sys.modules)))")
    loaded = {name.split(".")[0] for name in json.loads(done.stdout)}
    assert not loaded & {"CoolProp", "numpy", "scipy", "matplotlib", "pint", "yaml", "pydantic"}


def test_the_light_door_prints_nothing_and_agrees() -> None:
    """With the light import standard output stays clean, and values agree with the full import."""
    code = """
from commission.properties import coolprop, refrigerant
coolprop.load(light=True)
r = refrigerant("R-290")
print(repr(r.isentropic_end(r.vapour(275.0, r.dew(268.0).p), r.dew(313.0).p).h))
"""
    done = python(code)
    r = refrigerant("R-290")
    here = r.isentropic_end(r.vapour(275.0, r.dew(268.0).p), r.dew(313.0).p).h
    assert float(done.stdout) == pytest.approx(here, abs=1e-3)


def test_a_library_import_leaves_the_environment_alone() -> None:
    """Only the door with `light=True` sets the switch, and only before the first load."""
    code = """
import os
from commission.properties import coolprop, refrigerant
refrigerant("R-290").vapour(300.0, 1e5)
coolprop.load(light=True)
print(coolprop.LIGHT_SWITCH in os.environ)
"""
    assert python(code).stdout.strip() == "False"


def test_the_door_works_without_standard_output() -> None:
    """Under a service manager descriptor 1 may be closed."""
    code = """
import os
os.close(1)
from commission.properties import coolprop
coolprop.load(light=True)
os.write(2, b"fine")
"""
    assert "fine" in python(code).stderr
