"""A second way through a flight: forward in mass, one state at a time, by an adaptive Runge-Kutta.

The same engine, the same drag and the same schedules as the program's, put together anew: SciPy's
DOP853 instead of collocation sweeps, a forward march instead of one from the landing mass, the
path angle from a bracketed root, the acceleration factor from its closed form. Speeds and
altitudes come from the mission's own text; the log is asked only for the altitudes at which the
program has cut its climbs, where the right-hand side has a kink.

The acceleration factor at constant calibrated airspeed and at constant Mach number is that of
T. T. Young, Performance of the Jet Transport Airplane, ch. 14 (from memory), with the gas constant
and gravity kept.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from itertools import pairwise
from math import cos, inf, sqrt
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.integrate import solve_ivp
from scipy.interpolate import BarycentricInterpolator
from scipy.optimize import brentq

from engine.atmosphere import FlightCondition, flight_condition
from engine.interface import Engine, Outcome
from mission.aircraft import Aircraft
from mission.forces import drag
from mission.mission_file import MissionFile
from mission.results import Flight, SegmentLog, Steps

G, GAS, LAPSE = 9.80665, 287.05287, 0.0065
SEA_LEVEL_SOUND = sqrt(1.4 * GAS * 288.15)
ROLLING = 0.02
SPEED_LIMIT, LIMIT_LEVEL = 250.0 * 1852.0 / 3600.0, 10000.0 * 0.3048
INSIDE = 1e-6  # m inside a joint, so that each piece sees its own side of a kink
Array = NDArray[np.float64]
Rates = Callable[[float, float], tuple[float, float, float]]


@dataclass(frozen=True)
class State:
    """Mass [kg], time [s] and ground distance [m] from the start."""

    mass: float
    time: float = 0.0
    ground: float = 0.0


@dataclass
class Reference:
    """Aircraft and engine on a day, in a tailwind [m/s]; remembers the engine's last unknowns."""

    aircraft: Aircraft
    engine: Engine
    deviation: float
    tailwind: float
    tolerance: float = 1e-10
    calls: int = 0
    last: dict[str, Any] = field(default_factory=dict)

    def power(
        self, flight: FlightCondition, rating: str, thrust: float | None = None
    ) -> tuple[float, float]:
        """Thrust [N] and fuel flow [kg/s] of the aircraft at a rating or at a thrust."""
        count, key = self.aircraft.engine_count, f"{rating} {thrust is None}"
        wanted = None if thrust is None else thrust / count
        state = self.engine.at(flight, rating=rating, net_thrust=wanted, start=self.last.get(key))
        assert int(state.outcome) == Outcome.MET
        self.last[key] = state.unknowns
        self.calls += 1
        flow = float(state.fuel_flow) * count * self.aircraft.fuel_flow_factor
        return float(state.net_thrust) * count, flow

    def integrate(self, rates: Rates, start: float, end: float, state: State) -> State:
        """March (mass, time, ground) from one end of a variable to the other."""

        def slope(at: float, values: Array) -> Array:
            return np.array(rates(at, float(values[0])))

        solution = solve_ivp(
            slope,
            (start, end),
            [state.mass, state.time, state.ground],
            method="DOP853",
            rtol=self.tolerance,
            atol=[self.tolerance * state.mass, 1e-8, 1e-5],
        )
        assert solution.success
        return State(*(float(value) for value in solution.y[:, -1]))

    def air(self, altitude: float, mach: float) -> FlightCondition:
        """Flight condition."""
        return flight_condition(altitude, mach, self.deviation)

    def stand(self, state: State, elevation: float, seconds: float) -> State:
        """Engines at ground idle."""
        _, flow = self.power(self.air(elevation, 0.0), "ground_idle")
        return State(state.mass - flow * seconds, state.time + seconds, state.ground)

    def roll(self, state: State, elevation: float, multiple: float) -> tuple[State, float]:
        """From a standstill to a multiple of the stall speed; the state and Mach number then."""
        aircraft, air = self.aircraft, self.air(elevation, 0.0)
        sound, pressure = float(air.speed_of_sound), float(air.static_pressure)

        # The limit that governs may change along the way: no joint here, so closer steps.
        exact = 0.1 * self.tolerance

        def lift_off(mass: float) -> float:
            force = 0.7 * pressure * aircraft.wing_area * aircraft.take_off_lift_coefficient
            return multiple * sqrt(mass * G / force) * sound

        def rates(_: float, values: Array) -> Array:
            mass, speed = values
            thrust, flow = self.power(self.air(elevation, speed / sound), "take_off")
            return np.array([-flow, thrust / mass - ROLLING * G])

        def reached(_: float, values: Array) -> float:
            return float(values[1]) - lift_off(float(values[0]))

        reached.terminal = True  # type: ignore[attr-defined]
        solution = solve_ivp(
            rates,
            (0.0, 300.0),
            [state.mass, 0.0],
            method="DOP853",
            events=reached,
            rtol=exact,
            atol=exact * state.mass,
        )
        mass, speed = solution.y_events[0][0]
        seconds = float(solution.t_events[0][0])
        return State(float(mass), state.time + seconds, state.ground), float(speed) / sound

    def accelerate(
        self, state: State, altitude: float, machs: tuple[float, float], rating: str
    ) -> State:
        """Level change of speed."""
        sound = float(self.air(altitude, 0.0).speed_of_sound)

        def rates(mach: float, mass: float) -> tuple[float, float, float]:
            flight = self.air(altitude, mach)
            thrust, flow = self.power(flight, rating)
            pace = sound * mass / (thrust - float(drag(self.aircraft, flight, mass * G)))
            return -flow * pace, pace, pace * (mach * sound + self.tailwind)

        return self.integrate(rates, *machs, state)

    def level(
        self, state: State, altitude: float, mach: float, seconds: float, gains: bool
    ) -> State:
        """Thrust equal to drag for a time."""

        def rates(_: float, mass: float) -> tuple[float, float, float]:
            flight = self.air(altitude, mach)
            needed = float(drag(self.aircraft, flight, mass * G))
            _, flow = self.power(flight, "cruise", needed)
            covered = float(flight.true_airspeed) + self.tailwind
            return -flow, 1.0, covered if gains else 0.0

        return self.integrate(rates, 0.0, seconds, state)

    def cruise(self, state: State, altitude: float, mach: float, distance: float) -> State:
        """Over a ground distance; with speed constant that is a time."""
        pace = float(self.air(altitude, mach).true_airspeed) + self.tailwind
        return self.level(state, altitude, mach, distance / pace, gains=True)

    def slope(
        self, state: State, altitudes: list[float], airspeed: float, mach: float, rating: str
    ) -> State:
        """Climb or descend through altitudes in order, at the lower of two speeds."""
        for start, end in pairwise(altitudes):
            way = 1.0 if end > start else -1.0

            def rates(
                altitude: float,
                mass: float,
                low: float = min(start, end),
                high: float = max(start, end),
            ) -> tuple[float, float, float]:
                inside = min(max(altitude, low + INSIDE), high - INSIDE)
                still = self.air(inside, 0.0)
                by_airspeed = mach_of(airspeed, float(still.static_pressure))
                flight = still.with_mach(min(by_airspeed, mach))
                thrust, flow = self.power(flight, rating)
                return self._climbing(flight, thrust, flow, mass, by_airspeed < mach)

            state = self.integrate(rates, start + way * INSIDE, end - way * INSIDE, state)
        return state

    def _climbing(
        self,
        flight: FlightCondition,
        thrust: float,
        flow: float,
        mass: float,
        at_constant_airspeed: bool,
    ) -> tuple[float, float, float]:
        """Rates by pressure altitude."""
        weight, standard = mass * G, float(flight.static_temperature) - self.deviation
        warm = standard / float(flight.static_temperature)
        mach, speed = float(flight.mach), float(flight.true_airspeed)
        lapse = LAPSE if float(flight.pressure_altitude) < 11000.0 else 0.0
        factor = 1.0 - 0.7 * GAS * lapse / G * mach**2 * warm
        if at_constant_airspeed:
            squared = 1.0 + 0.2 * mach**2
            factor += (squared**3.5 - 1.0) / squared**2.5

        def unbalance(angle: float) -> float:
            force = float(drag(self.aircraft, flight, weight * cos(angle)))
            return thrust - force - weight * np.sin(angle) * factor

        angle = brentq(unbalance, -0.6, 0.6, xtol=1e-15, rtol=1e-14)
        pace = 1.0 / (speed * np.sin(angle) * warm)
        return -flow * pace, pace, pace * (speed * cos(angle) + self.tailwind)


def mach_of(calibrated_airspeed: float, pressure: float) -> float:
    """Mach number at a calibrated airspeed [m/s]; infinite airspeed is no bound."""
    if calibrated_airspeed == inf:
        return inf
    impact = (1.0 + 0.2 * (calibrated_airspeed / SEA_LEVEL_SOUND) ** 2) ** 3.5 - 1.0
    return sqrt(5.0 * ((impact * 101325.0 / pressure + 1.0) ** (2.0 / 7.0) - 1.0))


def cuts(steps: Steps, low: float, high: float) -> list[float]:
    """Pressure altitudes between two at which the program has cut a climb or descent, ascending."""
    altitude = steps.pressure_altitude
    twice = np.flatnonzero(np.abs(np.diff(altitude)) < 1e-3)
    found = sorted({round(float(altitude[i]), 4) for i in twice})
    return [low, *(mark for mark in found if low + 0.5 < mark < high - 0.5), high]


def again(reference: Reference, mission: MissionFile, flight: Flight) -> State:
    """A whole flight once more from its ramp mass: the rows of its log, without the reserves.

    Where a speed follows from mass by a search (bridges to and from a loiter, the loiter itself)
    the log's Mach numbers are flown.
    """
    written = iter(mission.segment)
    rows = [log for log in flight.segments if log.purpose == "mission"]
    state = State(rows[0].mass_start)
    for log in rows:
        steps = log.steps
        level, machs = (
            float(steps.pressure_altitude[0]),
            (float(steps.mach[0]), float(steps.mach[-1])),
        )
        if log.name.startswith("bridge to "):
            rating = "flight_idle" if machs[1] < machs[0] else log.rating
            state = reference.accelerate(state, level, machs, rating)
            continue
        segment: Any = next(written)
        if log.kind == "taxi":
            state = reference.stand(state, level, segment.time)
        elif log.kind == "take-off":
            state, _ = reference.roll(state, level, 1.2)
        elif log.kind == "cruise":
            state = reference.cruise(state, level, machs[0], log.ground_distance)
        elif log.kind in ("climb", "descent"):
            state = _schedule(reference, state, segment, log)
        else:
            state = _hold(reference, state, segment, log)
    return state


def _schedule(reference: Reference, state: State, segment: Any, log: SegmentLog) -> State:
    """A climb or descent with a speed limit of 250 kt below 10,000 ft, if it has one."""
    ends = (float(log.steps.pressure_altitude[0]), float(log.steps.pressure_altitude[-1]))
    low, high = min(ends), max(ends)
    slow = min(segment.calibrated_airspeed, SPEED_LIMIT)
    zones = [(low, high, segment.calibrated_airspeed)]
    if segment.limited_below_10000_ft and low < LIMIT_LEVEL < high:
        zones = [(low, LIMIT_LEVEL, slow), (LIMIT_LEVEL, high, segment.calibrated_airspeed)]
    way = -1 if log.kind == "descent" else 1
    rating = "flight_idle" if log.kind == "descent" else segment.rating
    last = None
    for bottom, top, airspeed in zones[::way]:
        if last is not None and last != airspeed:
            pressure = float(reference.air(LIMIT_LEVEL, 0.0).static_pressure)
            machs = (mach_of(last, pressure), mach_of(airspeed, pressure))
            state = reference.accelerate(state, LIMIT_LEVEL, machs, rating)
        altitudes = cuts(log.steps, bottom, top)[::way]
        state = reference.slope(state, altitudes, airspeed, segment.mach or inf, rating)
        last = airspeed
    return state


def _hold(reference: Reference, state: State, segment: Any, log: SegmentLog) -> State:
    """A loiter or an approach: the log's Mach numbers over its masses, as a polynomial."""
    level, steps = float(log.steps.pressure_altitude[0]), log.steps
    mach_at = BarycentricInterpolator(steps.mass, steps.mach)
    rating = "take_off" if log.kind == "approach" else segment.rating

    def rates(_: float, mass: float) -> tuple[float, float, float]:
        flight = reference.air(level, float(mach_at(mass)))
        needed = float(drag(reference.aircraft, flight, mass * G, segment.drag_factor))
        _, flow = reference.power(flight, rating, needed)
        return -flow, 1.0, 0.0

    return reference.integrate(rates, 0.0, segment.time, state)
