"""A refrigerant: saturation lines, single-phase and wet states, and how sure its pressures are.

Saturation comes from shipped series (`lines`), everything else from Newton iterations on the equation of state at
(density, temperature). No flash of the property library is called, so nothing here fails in the scattered places where
those fail on blends. Outside the ranges a `PropertyRangeError` says what the limit is.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from functools import cache, cached_property
from typing import TYPE_CHECKING

from commission.properties.errors import PropertyRangeError, bar, celsius
from commission.properties.saturation import EDGE, EDGE_PRESSURE, GAS_CONSTANT, Saturation
from commission.properties.states import SaturationState, Slopes, State

if TYPE_CHECKING:
    from commission.properties.beyond import Beyond
    from commission.properties.equation import Equation
    from commission.properties.lines import FluidData, Line
    from commission.properties.register import RegisterEntry
    from commission.properties.two_phase import WetIsobar


LIKE = 0.1  # of its pressure: a state as near as that is a good start for another
FAR = 0.05  # of its density: what is farther off is not told by first derivatives


class Refrigerant(Saturation):
    """One refrigerant of the register. Make it with `refrigerant(name)`.

    Temperatures in K, pressures in Pa absolute, J/kg, kg/m3. Enthalpy 200 kJ/kg and entropy 1 kJ/(kg K) in the liquid
    at its bubble point at 0 °C (IIR reference). `T_low`..`T_high` is where the saturation lines are known; `T_triple`
    the triple point, or for a blend the temperature below which the equation of a main component ends; `T_max` where
    the equation of state ends. A Refrigerant may be used from several threads; each thread has its own
    equation-of-state object and its own count of `calls`.

    Errors: `PropertyRangeError` outside the limits. Warnings stand in the states that are returned.
    """

    def __init__(self, data: FluidData) -> None:
        from commission.properties.equation import Equation
        from commission.properties.two_phase import WetIsobar

        super().__init__(data)
        self.property_source = data.property_source
        self._equation: Equation = Equation(data)
        self._isobar = WetIsobar  # imported late, and not anew for each state

    @cached_property
    def _beyond(self) -> Beyond:
        from commission.properties.beyond import Beyond

        return Beyond(self, self._equation)

    @property
    def calls(self) -> int:
        """Calls of the equation of state made for this refrigerant by the present thread."""
        return self._equation.calls

    @cached_property
    def register(self) -> RegisterEntry:
        """The register's entry: composition, safety, limits, warming potential, each figure with source and mark."""
        from commission.properties.register import register

        return register()[self.name]

    @cached_property
    def pressure_relative_uncertainty(self) -> float:
        """Relative standard uncertainty of a saturation pressure; see `uncertainty.pressure_relative_uncertainty`."""
        from commission.properties.uncertainty import pressure_relative_uncertainty

        return pressure_relative_uncertainty(self, self.register)

    @cached_property
    def warnings(self) -> tuple[str, ...]:
        """Sentences that belong to every result of this refrigerant; see `uncertainty.source_warnings`."""
        from commission.properties.uncertainty import source_warnings

        return source_warnings(self, self.register)

    def with_register(self, entry: RegisterEntry) -> Refrigerant:
        """The same refrigerant with another register entry, as a plant states it; see `register.register`."""
        other = object.__new__(Refrigerant)
        other.__dict__.update(self.__dict__)
        for derived in ("pressure_relative_uncertainty", "warnings"):
            other.__dict__.pop(derived, None)
        other.__dict__["register"] = entry
        return other

    def __reduce__(self) -> tuple[Callable[..., Refrigerant], tuple[str, RegisterEntry]]:
        """Copied or pickled by name: an equation-of-state object cannot be."""
        return _again, (self.name, self.register)

    # Single phase

    def vapour(self, T: float, p: float) -> State:
        """Superheated vapour, or gas above the critical pressure of a pure fluid, at `T` (K) and `p` (Pa).

        Raises:
            PropertyRangeError: below the dew line, colder than `T_low`, hotter than `T_max`, or a blend above the end
                of its dew line.
        """
        self._need_gas_temperature(T)
        if p > self.p_dew_high:
            self._beyond.need(p)
            self._beyond.need_vapour(T, p)
            return self._beyond.at(T, p)
        if not p > 0:
            raise PropertyRangeError(self.name, f"a pressure of {bar(p)} cannot be")
        line = self.dew(min(T, self.T_high))
        if self.T_high >= T and p > line.p * (1 + EDGE_PRESSURE):
            raise self._not_vapour(T, p)
        return self._equation.density(T, p, self._gas_density(T, p, line))

    def superheated(self, dew: SaturationState, superheat: float, near: State | None = None) -> State:
        """Vapour at the pressure of a dew point of this refrigerant, warmer by `superheat` (K).

        `near` is vapour at a neighbouring place: it saves calls and moves the result by rounding only.

        Raises:
            PropertyRangeError: colder than the dew point, or hotter than `T_max`.
        """
        T = dew.T + superheat
        if not superheat >= -EDGE * dew.T:
            raise self._not_vapour(T, dew.p)
        self._need_gas_temperature(T)
        start = _density_near(near, T, dew.p) or self._gas_density(T, dew.p, dew)
        return self._equation.density(T, dew.p, start)

    def subcooled(self, bubble: SaturationState, subcooling: float, near: State | None = None) -> State:
        """Liquid at the pressure of a bubble point of this refrigerant, colder by `subcooling` (K).

        `near` is liquid at a neighbouring place: it saves calls and moves the result by rounding only.

        Raises:
            PropertyRangeError: warmer than the bubble point, or colder than `T_low`.
        """
        T = bubble.T - subcooling
        self._need_temperature(T)
        if not subcooling >= -EDGE * bubble.T:
            raise self._not_liquid(T, bubble.p)
        start = _density_near(near, T, bubble.p) or math.exp(self._bubble.row(T)[3])
        return self._equation.density(T, bubble.p, start)

    def liquid(self, T: float, p: float) -> State:
        """Subcooled liquid at `T` (K) and `p` (Pa).

        Raises:
            PropertyRangeError: pressure below the bubble point (vapour would form), or `T` outside the range.
        """
        if p > self.p_dew_high and not self.is_blend and self.T_high < T:
            self._need_gas_temperature(T)
            self._beyond.need_liquid(T, p)
            return self._beyond.at(T, p)
        self._need_temperature(T)
        ln_p, _, _, ln_rho = self._bubble.row(T)
        if not p >= math.exp(ln_p) * (1 - EDGE):
            raise self._not_liquid(T, p)
        if not p <= self.p_max:
            raise PropertyRangeError(self.name, f"{bar(p)} is above {bar(self.p_max)}, where the equation ends")
        return self._equation.density(T, p, math.exp(ln_rho))

    def supercritical(self, T: float, p: float) -> State:
        """The single phase at `T` (K) and a pressure above the critical pressure (Pa); pure fluids only.

        Raises:
            PropertyRangeError: a blend, or `T` or `p` outside the range.
        """
        if not p >= self.p_critical:
            raise PropertyRangeError(self.name, f"{bar(p)} is not above the critical pressure {bar(self.p_critical)}")
        self._beyond.need(p)
        self._need_gas_temperature(T)
        return self._beyond.at(T, p)

    def slopes(self, state: State) -> Slopes:
        """First derivatives of a single-phase `state` at constant pressure and at constant temperature."""
        point = self._equation.at(state.rho, state.T)
        alpha = point.p_t / point.p_rho  # -drho/dT at constant pressure
        return Slopes(
            cp=point.cp,
            dh_dp=point.h_rho / point.p_rho,
            ds_dt=point.cp / point.T,
            ds_dp=point.s_rho / point.p_rho,
            drho_dt=-alpha,
            drho_dp=1 / point.p_rho,
        )

    def _gas_density(self, T: float, p: float, dew: SaturationState) -> float:
        """A density (kg/m3) to start from at (T, p): non-ideality in proportion to pressure, as by a second virial
        coefficient, from a dew point that is no warmer."""
        gap = 1 - dew.p * self.molar_mass / (GAS_CONSTANT * dew.T * dew.rho)
        ideal = p * self.molar_mass / (GAS_CONSTANT * T)
        return ideal / (1 - gap * min(1.0, p / dew.p) * (dew.T / T) ** 3)

    def _not_vapour(self, T: float, p: float) -> PropertyRangeError:
        dew = celsius(self._dew.temperature(p))
        return PropertyRangeError(self.name, f"{celsius(T)} is below the dew point {dew} at {bar(p)}: not vapour alone")

    def _not_liquid(self, T: float, p: float) -> PropertyRangeError:
        bubble = bar(math.exp(self._bubble.ln_p(T)))
        return PropertyRangeError(
            self.name, f"{bar(p)} is below the bubble point {bubble} at {celsius(T)}: vapour forms"
        )

    def _need_gas_temperature(self, T: float) -> None:
        if not self.T_low <= T <= self.T_max:
            raise PropertyRangeError(
                self.name,
                f"{celsius(T)} is outside {celsius(self.T_low)} to {celsius(self.T_max)}, "
                "where the equation of state holds",
            )

    def _need_finite(self, h: float) -> None:
        if not math.isfinite(h):
            raise PropertyRangeError(self.name, f"an enthalpy of {h} cannot be")

    # From pressure with enthalpy or entropy

    def isentropic_end(self, state: State | SaturationState, p: float, near: State | None = None) -> State:
        """The state at `p` (Pa) with the entropy of `state`: vapour, gas above critical, or wet with a warning.

        `near` is the end of a neighbouring compression: it saves calls and moves the result by rounding only.

        Raises:
            PropertyRangeError: the end lies outside the range, or in the liquid.
        """
        if p > self.p_dew_high:
            if isinstance(state, State) and state.quality is not None:  # first dry it along the isentrope
                state = self._vapour_or_wet(0.7 * self.p_dew_high, "s", state.s, wet=None)
            return self._held(self._beyond.isentropic_end(state, p))
        return self._vapour_or_wet(p, "s", state.s, wet="compression ends in the wet region", near=near)

    def vapour_from_enthalpy(self, p: float, h: float, near: State | None = None) -> State:
        """Vapour, or gas above critical, at `p` (Pa) with enthalpy `h` (J/kg).

        `near` is vapour at a neighbouring place: it saves calls and moves the result by rounding only.

        Raises:
            PropertyRangeError: `h` below the dew line, or the state outside the range.
        """
        self._need_finite(h)
        if p > self.p_dew_high:
            return self._from_enthalpy_beyond(p, h)
        return self._vapour_or_wet(p, "h", h, wet=None, near=near)

    def throttled(self, p: float, h: float) -> State:
        """The state at `p` (Pa) after an expansion that keeps enthalpy `h` (J/kg): wet, or liquid, or vapour.

        Raises:
            PropertyRangeError: outside the range.
        """
        self._need_finite(h)
        if p > self.p_dew_high:
            return self._from_enthalpy_beyond(p, h)
        isobar = self._wet(p)
        x = isobar.fraction(h)
        if x > 1:
            return self._vapour_or_wet(p, "h", h, wet=None)
        if x < 0:
            return self._liquid_from_enthalpy(isobar.bubble, h)
        return isobar.state(x)

    def isobar_temperatures(self, start: State, enthalpies: Sequence[float]) -> list[float]:
        """Temperatures (K) at the pressure of `start` and rising `enthalpies` (J/kg), from `start` (single phase) up.

        Raises:
            PropertyRangeError: a state outside the range.
        """
        from commission.properties.isobar import isobar_temperatures

        return isobar_temperatures(self, self._equation, start, enthalpies)

    def mean_evaporating_temperature(self, p: float, h_in: float) -> float:
        """Temperature (K) of evaporation at `p` (Pa), averaged over the heat taken up from `h_in` to the dew point.

        This is the average over enthalpy, so that heat = conductance x difference holds to first order; the mean of
        inlet and dew temperature differs from it by up to 1 K for a blend of large glide.

        Raises:
            PropertyRangeError: `p` outside the wet range, or `h_in` not below the dew line.
        """
        self._need_finite(h_in)
        isobar = self._wet(p)
        x = isobar.fraction(h_in)
        if not x < 1:
            raise PropertyRangeError(self.name, f"enters above its dew point at {bar(p)}: nothing evaporates")
        return isobar.mean_temperature(max(x, 0.0))

    def _wet(self, p: float) -> WetIsobar:
        self._need_pressure(p, self.p_bubble_low, self.p_dew_high)
        T_dew = self._dew.temperature(p)
        T_bubble = self._bubble.temperature(p) if self.is_blend else T_dew
        return self._isobar(
            _at_pressure(self._bubble, T_bubble, p), _at_pressure(self._dew, T_dew, p), self._data.two_phase
        )

    def _vapour_or_wet(self, p: float, name: str, value: float, wet: str | None, near: State | None = None) -> State:
        """At `p` below the end of the dew line: vapour where `value` lies above the dew line, else wet if allowed."""
        if not p >= self.p_dew_low:
            raise PropertyRangeError(self.name, f"{bar(p)} is below {bar(self.p_dew_low)}, where the dew line begins")
        if near is not None and near.quality is None and abs(p / near.p - 1) < LIKE:
            like = self._vapour_like(near, p, name, value)
            if like is not None:
                return like
        T_dew = self._dew.temperature(p)
        _, h, s, ln_rho = self._dew.row(T_dew)
        at_dew = s if name == "s" else h
        if value < at_dew:
            if wet is None:
                unit = "kJ/kg" if name == "h" else "kJ/(kg K)"
                raise PropertyRangeError(
                    self.name, f"{value / 1e3:.3f} {unit} is below the dew line ({at_dew / 1e3:.3f} {unit}) at {bar(p)}"
                )
            return self._wet_at_entropy(p, value, wet)
        rho = math.exp(ln_rho)
        cp = self._equation.at(rho, T_dew).cp
        T = T_dew * math.exp((value - s) / cp) if name == "s" else T_dew + (value - h) / cp
        T = min(T, 1.2 * self.T_max)
        gap = 1 - p * self.molar_mass / (GAS_CONSTANT * T_dew * rho)
        start = p * self.molar_mass / (GAS_CONSTANT * T * (1 - gap * (T_dew / T) ** 3))
        return self._held(self._equation.solve(p, name, value, self._equation.at(start, T)))

    def _vapour_like(self, near: State, p: float, name: str, value: float) -> State | None:
        """Vapour with this value, from a neighbour; None where there is none, or none that would not condense."""
        try:
            point = self._equation.solve(p, name, value, near)
        except PropertyRangeError:
            return None
        if self.T_high >= point.T and p > self.dew_pressure(point.T) * (1 + EDGE_PRESSURE):
            return None
        return self._held(point)

    def _wet_at_entropy(self, p: float, s: float, wet: str) -> State:
        isobar = self._wet(p)
        if s < isobar.bubble.s:
            raise PropertyRangeError(self.name, f"entropy below the bubble line at {bar(p)}: liquid, not vapour")
        state = isobar.state(isobar.fraction_at_entropy(s))
        assert state.quality is not None
        note = f"{wet} ({100 * (1 - state.quality):.1f} % liquid by mass at {bar(p)}): liquid in a compressor does harm"
        return State(state.T, state.p, state.h, state.s, state.rho, state.quality, (note,))

    def _liquid_from_enthalpy(self, bubble: SaturationState, h: float) -> State:
        from commission.properties.isobar import liquid_at_enthalpy

        try:
            point = self._equation.solve(bubble.p, "h", h, self._equation.at(bubble.rho, bubble.T))
        except PropertyRangeError:
            return liquid_at_enthalpy(self, bubble.p, h, bubble.T)
        if not self.T_low <= point.T:
            raise PropertyRangeError(self.name, f"liquid colder than {celsius(self.T_low)}, where the equation ends")
        return point

    def _from_enthalpy_beyond(self, p: float, h: float) -> State:
        state = self._beyond.from_enthalpy(p, h)
        self._need_gas_temperature(state.T)
        return state

    def _agrees(self) -> bool:
        """Whether the lines belong to the equation of state at hand: another edition of it would move a dew point."""
        dew = self.dew(0.8 * self.T_critical)
        point = self._equation.at(dew.rho, dew.T)
        return abs(point.p / dew.p - 1) < 1e-6 and abs(point.h - dew.h) < 1.0 and abs(point.s - dew.s) < 0.01

    def _held(self, point: State) -> State:
        """The state, if its temperature is inside the range of the equation."""
        self._need_gas_temperature(point.T)
        return point


def _at_pressure(line: Line, T: float, p: float) -> SaturationState:
    _, h, s, ln_rho = line.row(T)
    return SaturationState(T, p, h, s, math.exp(ln_rho))


def _density_near(near: State | None, T: float, p: float) -> float | None:
    """A density to start from at (T, p), from a neighbour; None where there is none, or it is too far off."""
    if near is None or near.quality is not None:
        return None
    density = near.density_near(T, p)
    return density if abs(density / near.rho - 1) < FAR else None


@cache
def refrigerant(name: str) -> Refrigerant:
    """The refrigerant of that name: `R-454B`, `R454B`, `r 454b`, `propane`, `ammonia`, `CO2`. One object per name.

    Raises:
        InputError: unknown name; the problem carries the nearest known one.
        NotCalculatedError: in the register, but without an equation of state.
    """
    from commission.properties.models import designation

    known = designation(name)
    return refrigerant(known) if known != name else _make(known)


def _again(name: str, entry: RegisterEntry) -> Refrigerant:
    made = refrigerant(name)
    return made if made.register == entry else made.with_register(entry)


def _make(known: str) -> Refrigerant:
    """From the shipped data, or from data made anew where they do not belong to the equations of state at hand."""
    from commission.properties import lines

    data = lines.read(known)
    if data is not None:
        made = Refrigerant(data)
        if made._agrees():
            return made
    from commission.properties.generate_lines import build
    from commission.properties.models import model_of

    return Refrigerant(build(known, *model_of(known)))
