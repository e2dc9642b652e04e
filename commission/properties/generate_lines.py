"""Makes the data files under `lines/`: saturation lines, limits and two-phase tables of every modelled refrigerant.

Run `python -m commission.properties.generate_lines` after an update of CoolProp; it writes one file per refrigerant.
The same functions make the data in memory where the CoolProp at hand does not agree with the files.
"""

from __future__ import annotations

import json
import math
import sys
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np
from numpy.polynomial import chebyshev

from commission.errors import NotCalculatedError
from commission.properties import flash, lines
from commission.properties.coolprop import load, version
from commission.properties.isofugacity import Array, Equilibrium, Phases

TERMS = 33
PRESSURE_NODES, FRACTION_NODES, FLASH_NODES = 14, 12, 16
ATMOSPHERE = 101325.0
EASY_REDUCED = 0.7
MINOR_FRACTION = 0.1  # mole
LOWEST_REDUCED = 0.5  # of the critical temperature: below any refrigerating duty of the fluid
PURE_TOP, BLEND_MARGIN = 0.9995, 2.0  # share of Tc, and K below Tc: nearer, the two phases merge in the last digits
IIR_TEMPERATURE, IIR_ENTHALPY, IIR_ENTROPY = 273.15, 200e3, 1000.0


def build(
    refrigerant: str, fluids: tuple[str, ...], mass_fractions: tuple[float, ...], critical: tuple[float, float]
) -> lines.FluidData:
    """All data of one refrigerant from the equation of state: about 50 ms for a pure fluid, up to 2 s for a blend.

    `fluids` are CoolProp's names, `critical` is (K, Pa).

    Raises:
        NotCalculatedError: no phase equilibrium found somewhere between the limits.
    """
    cp = load()
    states = [cp.AbstractState("HEOS", name) for name in fluids]
    fractions = _mole_fractions(states, mass_fractions)
    phases = Phases(fluids, fractions)
    Tc, pc = critical
    # A blend ends where the equation of a main component does. A minor one (carbon dioxide in R-455A) does not set the
    # limit: its equation enters at the reduced temperature of the blend, and by ideal solubility it stays dissolved.
    T_triple = max(s.Tmin() for s, x in zip(states, fractions, strict=True) if x >= MINOR_FRACTION)
    T_low = max(T_triple, LOWEST_REDUCED * Tc)
    T_high = PURE_TOP * Tc if len(fluids) == 1 else Tc - BLEND_MARGIN
    dew, bubble = _lines(phases, Tc, T_low, T_high)
    _check(refrigerant, dew, bubble)
    datum = bubble.row(IIR_TEMPERATURE)
    offsets = (IIR_ENTHALPY - datum[1], IIR_ENTROPY - datum[2])
    for line in (dew, bubble):
        line.coefficients[1:3, 0] += offsets
    state = phases.vapour
    boiling = [
        line.temperature(ATMOSPHERE) if math.exp(line.ln_p_range[0]) < ATMOSPHERE else None for line in (bubble, dew)
    ]
    return lines.FluidData(
        refrigerant=refrigerant,
        property_source=f"CoolProp {version()}",
        fluids=fluids,
        mole_fractions=fractions,
        molar_mass=state.molar_mass(),
        T_critical=Tc,
        p_critical=pc,
        T_triple=T_triple,
        T_max=state.Tmax(),
        p_max=state.pmax(),
        T_low=T_low,
        T_high=T_high,
        h_offset=offsets[0],
        s_offset=offsets[1],
        boiling_bubble=boiling[0],
        boiling_dew=boiling[1],
        dew=dew,
        bubble=bubble,
        two_phase=_two_phase(phases, pc, dew, bubble) if len(fluids) > 1 else None,
    )


def critical_point(fluids: tuple[str, ...], mass_fractions: tuple[float, ...]) -> tuple[float, float]:
    """Critical temperature (K) and pressure (Pa) for `models.yaml`: up to ten seconds for a blend.

    Of several points that the library finds for a blend, the stable one of highest temperature at positive pressure.

    Raises:
        NotCalculatedError: the library finds none.
    """
    cp = load()
    state = cp.AbstractState("HEOS", "&".join(fluids))
    if len(fluids) == 1:
        return state.T_critical(), state.p_critical()
    state.set_mole_fractions(list(_mole_fractions([cp.AbstractState("HEOS", f) for f in fluids], mass_fractions)))
    points = [(point.T, point.p) for point in state.all_critical_points() if point.stable and point.p > 0]
    if not points:
        raise NotCalculatedError(f"no stable critical point of {'/'.join(fluids)} found")
    return max(points)


def _mole_fractions(states: list[Any], mass_fractions: tuple[float, ...]) -> tuple[float, ...]:
    moles = np.array(mass_fractions) / np.array([s.molar_mass() for s in states])
    return tuple((moles / moles.sum()).tolist())


def _lines(phases: Phases, Tc: float, T_low: float, T_high: float) -> tuple[lines.Line, lines.Line]:
    """Dew and bubble line; those of a pure fluid come from one solution, so that they share every pressure."""
    low, high = math.sqrt(1 - T_high / Tc), math.sqrt(1 - T_low / Tc)
    theta = (high - low) / 2 * lines.nodes(TERMS) + (high + low) / 2
    temperatures = Tc * (1 - theta**2)
    dew = _trace(phases, "liquid", temperatures)
    bubble = dew if phases.n == 1 else _trace(phases, "vapour", temperatures)
    pair = [
        lines.Line(Tc, T_low, T_high, lines.series_at_nodes(np.array([_row(phases, q, phase) for q in points]).T))
        for points, phase in ((dew, "vapour"), (bubble, "liquid"))
    ]
    return pair[0], pair[1]


def _row(phases: Phases, point: Equilibrium, phase: str) -> tuple[float, float, float, float]:
    _, h, s, rho = phases.properties(point.T, getattr(point, f"rho_{phase}"), phase)
    return math.log(point.p), h, s, math.log(rho)


def _check(refrigerant: str, dew: lines.Line, bubble: lines.Line) -> None:
    """Refuse lines that break a law: dew above bubble pressure, pressure falling with temperature, no latent heat.

    Raises:
        NotCalculatedError: a false solution of the equal-fugacity equations was found.
    """
    T = np.linspace(dew.T_low, dew.T_high, 200)
    d, b = dew.rows(T), bubble.rows(T)
    wrong = (d[0] > b[0] + 1e-7) | (d[1] <= b[1]) | (d[2] <= b[2]) | (d[3] >= b[3])
    if wrong.any() or (np.diff(d[0]) <= 0).any() or (np.diff(b[0]) <= 0).any():
        raise NotCalculatedError(f"{refrigerant}: the saturation lines found break a law near {T[wrong][:1]} K")


def _trace(phases: Phases, incipient: str, temperatures: Array) -> list[Equilibrium]:
    """Equilibria at the `temperatures`, each started from the two before, outwards from a middle one.

    Near 0.7 of critical the first guess is good and has one solution; cold, it can lead to a second liquid.
    """
    order = np.argsort(np.abs(temperatures - EASY_REDUCED * temperatures.max()))
    first = int(order[0])
    found: dict[int, Equilibrium] = {}
    begin: list[tuple[float, Array]] = []
    for run in (range(first, len(temperatures)), range(first - 1, -1, -1)):
        history = list(begin)
        for k in run:
            T = float(temperatures[k])
            found[k], u = _reach(phases, incipient, T, history)
            history.append((T, u))
            begin = begin or [(T, u)]
    return [found[k] for k in range(len(temperatures))]


def _reach(
    phases: Phases, incipient: str, T: float, history: list[tuple[float, Array]], depth: int = 0
) -> tuple[Equilibrium, Array]:
    start = None
    if len(history) > 1:
        (Ta, a), (Tb, b) = history[-2:]
        start = b + (b - a) * (T - Tb) / (Tb - Ta)
    elif history:
        start = history[-1][1]
    try:
        return phases.solve(T, incipient, start)
    except (NotCalculatedError, np.linalg.LinAlgError):
        if depth == 6 or not history:
            raise
        middle = (history[-1][0] + T) / 2
        history.append((middle, _reach(phases, incipient, middle, history, depth + 1)[1]))
        return _reach(phases, incipient, T, history, depth + 1)


def _two_phase(phases: Phases, pc: float, dew: lines.Line, bubble: lines.Line) -> lines.TwoPhase:
    """Tables over pressure and enthalpy fraction; see `lines.TwoPhase`."""
    p_low, p_high = math.exp(bubble.ln_p_range[0]), math.exp(dew.ln_p_range[1])
    low, high = math.sqrt(math.log(pc / p_high)), math.sqrt(math.log(pc / p_low))
    w = (high - low) / 2 * lines.nodes(PRESSURE_NODES) + (high + low) / 2
    tables = np.array([_isobar(phases, p, bubble) for p in pc * np.exp(-(w**2))])  # pressure, table, fraction
    in_fraction = lines.series_at_nodes(tables)
    both = np.moveaxis(lines.series_at_nodes(np.moveaxis(in_fraction, 0, -1)), -1, 0)
    return lines.TwoPhase(pc, low, high, both)


def _isobar(phases: Phases, p: float, bubble: lines.Line) -> Array:
    """Deviations from a straight line, in the order of `lines.TABLES`, at the enthalpy fractions of the table."""
    start, u = phases.solve(bubble.temperature(p), "vapour")
    u = flash.start_at_bubble(start)
    fractions = np.concatenate([[0.0], (1 - lines.nodes(FLASH_NODES)) / 2, [1.0]])
    rows = []
    for fraction in fractions:
        point, u = flash.solve(phases, p, float(fraction), u)
        h, s, v, q = flash.bulk(phases, point)
        rows.append((h, point.T, q, v, s))
    h, T, q, v, s = np.array(rows).T
    x, share_v, share_s = ((a - a[0]) / (a[-1] - a[0]) for a in (h, v, s))
    straight = np.array([T - (T[0] + x * (T[-1] - T[0])), q - x, share_v - x, share_s - x])
    # values at the wanted enthalpy fractions: a polynomial through the flashes, in the molar fraction found by Newton
    c = 2 * fractions - 1
    to_x = chebyshev.chebfit(c, x, len(c) - 1)
    to_table = chebyshev.chebfit(c, straight.T, len(c) - 1)
    wanted = (lines.nodes(FRACTION_NODES) + 1) / 2
    at = 2 * wanted - 1
    for _ in range(30):
        at = np.clip(
            at - (chebyshev.chebval(at, to_x) - wanted) / chebyshev.chebval(at, chebyshev.chebder(to_x)), -1, 1
        )
    return np.asarray(chebyshev.chebval(at, to_table))


def main(folder: Path | None = None, only: tuple[str, ...] = ()) -> None:
    """Write one file per modelled refrigerant, with its provenance."""
    from commission.properties.models import model_of, modelled

    target = folder or Path(__file__).parent / "lines"
    target.mkdir(exist_ok=True)
    for name in only or modelled():
        data = build(name, *model_of(name))
        _write(target / lines.file_name(name), data.to_json())
        print(f"{name}: {data.T_low - 273.15:.1f} to {data.T_high - 273.15:.1f} °C", file=sys.stderr)


def _write(path: Path, plain: Mapping[str, Any]) -> None:
    about = (
        "Generated by python -m commission.properties.generate_lines from the equations of state of CoolProp, with the "
        "phase equilibrium of commission.properties.isofugacity. SI units; h and s: 200 kJ/kg and 1 kJ/(kg K) in the "
        "liquid at its bubble point at 0 °C (IIR reference). Do not edit."
    )
    rows = (f"{json.dumps(key)}: {json.dumps(value)}" for key, value in {"about": about, **plain}.items())
    path.write_text("{\n" + ",\n".join(rows) + "\n}\n", encoding="utf-8")


if __name__ == "__main__":
    main(only=tuple(sys.argv[1:]))
