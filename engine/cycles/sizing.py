"""Sizing: the design point of an engine fixes its throats, and refuses what cannot run."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from engine.atmosphere import FlightCondition
from engine.cycles.flowpath import Arrangement, Flowpath
from engine.cycles.installed import run
from engine.cycles.situation import NOTHING_TAKEN, OffTakes, Situation, Sizing
from engine.errors import CycleCannotRun
from engine.parts.inlet import take_in
from engine.parts.mixer import at_static_pressure

_MOST_ROUNDS = 60
_SETTLED = 1e-10  # of thrust
_BYPASS_MACH = (0.05, 0.95)  # at mixer entry


def size(
    arrangement: Arrangement,
    flight: FlightCondition,
    *,
    airflow: float | None = None,
    net_thrust: float | None = None,
    taken: OffTakes = NOTHING_TAKEN,
) -> tuple[Sizing, Flowpath]:
    """Size an engine for an airflow [kg/s] or a net thrust [N] at its design flight condition.

    ``taken`` is what the aircraft takes off it there.

    Raises
    ------
    CycleCannotRun
        a turbine that cannot drive its compressor, a nozzle that cannot flow, streams that cannot
        meet in a mixer, no fuel needed, no positive thrust, or shaft power beside which no size is
        found; the message says which and by how much.
    """
    _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    unknowns = arrangement.design_unknowns(face)
    # What shaft power there is comes with the size: the first round, for 1 kg/s, is without it.
    path = _run(arrangement, flight, replace(taken, shaft_power=np.zeros(())), unknowns)
    specific = float(path.net_thrust(flight) / path.stations["2"].mass_flow)
    if not specific > 0.0:
        _refuse_impossible(arrangement, path, flight, taken)
        raise CycleCannotRun(
            f"the cycle gives no thrust at its design point ({specific:.4g} N for each kg/s of "
            f"air); {_remedy(path, NOTHING_TAKEN)}"
        )
    for _ in range(_MOST_ROUNDS):
        flow = float(path.stations["2"].mass_flow)
        if airflow is not None:
            factor = airflow / flow
        else:
            assert net_thrust is not None
            # Thrust goes with size, less what the shaft power costs, which hardly does.
            factor = 1.0 + (net_thrust - float(path.net_thrust(flight))) / (specific * flow)
        unknowns = unknowns.copy()
        unknowns[-1] += np.log(factor)
        path = _run(arrangement, flight, taken, unknowns)
        if not abs(factor - 1.0) > 1e-13:
            break
    _refuse_impossible(arrangement, path, flight, taken)
    if not abs(factor - 1.0) < _SETTLED:
        raise CycleCannotRun(
            f"no size is found that gives net_thrust = {net_thrust:.4g} N beside the shaft power "
            f"taken off, {float(taken.shaft_power) / 1e3:.0f} kW; lower off_takes.shaft_power"
        )
    return _sizing(flight, unknowns, path), path


def _run(
    arrangement: Arrangement, flight: FlightCondition, taken: OffTakes, unknowns: np.ndarray
) -> Flowpath:
    _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    with np.errstate(all="ignore"):
        return run(arrangement, unknowns, Situation(face, flight, taken, None))


def _sizing(flight: FlightCondition, unknowns: np.ndarray, path: Flowpath) -> Sizing:
    return Sizing(
        unknowns=unknowns,
        areas={name: float(area) for name, area in path.areas.items()},
        flows={name: float(flow) for name, flow in path.flows.items()},
        loadings={name: float(loading) for name, loading in path.loadings.items()},
        work_ratios={name: float(ratio) for name, ratio in path.work_ratios.items()},
        spool_rises={
            name: (float(rise), float(temperature))
            for name, (rise, temperature) in path.spool_rises.items()
        },
        reference_thrust=float(path.net_thrust(flight)),
        reference_pressure=float(path.stations["2"].total_pressure),
        design_airflow=float(path.stations["2"].mass_flow),
    )


def _refuse_impossible(
    arrangement: Arrangement, path: Flowpath, flight: FlightCondition, taken: OffTakes
) -> None:
    """Say what stops a design point from running, from the front of the engine backwards."""
    hot, delivery = path.stations["4"], path.stations["3"]
    if not float(hot.fuel_air_ratio) > 0.0:
        raise CycleCannotRun(
            f"turbine_entry_temperature = {float(hot.total_temperature):.0f} K is not above "
            f"compressor delivery, {float(delivery.total_temperature):.0f} K; raise it or lower "
            "the pressure ratios"
        )
    ambient = float(flight.static_pressure)
    if not float(path.stations["5"].total_pressure) > ambient:
        _refuse_nozzle(path, taken, "5", ambient)
    if "mixer_bypass" in path.areas:
        _refuse_mixer(arrangement, path, flight, taken)
    for name in ("7", "17"):
        if name in path.stations and not float(path.stations[name].total_pressure) > ambient:
            _refuse_nozzle(path, taken, name, ambient)


def _refuse_nozzle(path: Flowpath, taken: OffTakes, station: str, ambient: float) -> None:
    """Say that a nozzle has no pressure [Pa] to flow with, why, and what helps."""
    stand, remedy = "core nozzle", _remedy(path, taken)
    why = "the turbines cannot drive the compressors: little or no pressure is left"
    if station == "17":
        stand, remedy = "bypass nozzle", "raise fan_pressure_ratio"
        why = "the fan does not raise the pressure enough"
    pressure = np.nan_to_num(float(path.stations[station].total_pressure))
    raise CycleCannotRun(
        f"the {stand} cannot flow: total pressure ahead of it = {pressure / 1e3:.1f} kPa, "
        f"ambient {ambient / 1e3:.1f} kPa; {why}; {remedy}"
    )


def _remedy(path: Flowpath, taken: OffTakes) -> str:
    """What leaves more energy behind the turbines."""
    less = ["the pressure ratios"]
    if path.propeller is not None:
        less.insert(0, "power_turbine_share")
    elif "13" in path.stations:
        less = ["bypass_ratio", "fan_pressure_ratio"]
    if float(taken.shaft_power) > 0.0:
        less.append(f"off_takes.shaft_power, {float(taken.shaft_power) / 1e3:.0f} kW")
    return f"raise turbine_entry_temperature or lower {' or '.join(less)}"


def _refuse_mixer(
    arrangement: Arrangement, path: Flowpath, flight: FlightCondition, taken: OffTakes
) -> None:
    """Say when core and bypass streams cannot meet at one static pressure, and what helps.

    The bypass stream must flow forward and may not choke, and away from the design point it moves.
    """
    core, bypass = path.stations["6"], path.stations["16"]
    static_pressure = path.loadings["mixer_static_share"] * bypass.total_pressure
    mach = float(_bypass_mach(arrangement, path))
    slowest, fastest = _BYPASS_MACH
    if slowest < mach < fastest:
        return
    if mach < slowest:
        remedy = "raise fan_pressure_ratio or mixer.core_mach, or lower turbine_entry_temperature"
    else:
        remedy = "lower fan_pressure_ratio or mixer.core_mach, or raise turbine_entry_temperature"
    meets = _meeting_fan_pressure_ratio(arrangement, path, flight, taken)
    if np.isfinite(meets):
        remedy += f"; a fan_pressure_ratio of {meets:.2f} would do alone"
    raise CycleCannotRun(
        "the mixer's streams cannot meet at one static pressure: the core brings "
        f"{float(core.total_pressure) / 1e3:.1f} kPa of total pressure, "
        f"{float(static_pressure) / 1e3:.1f} kPa of static pressure, the bypass "
        f"{float(bypass.total_pressure) / 1e3:.1f} kPa of total pressure and would flow at Mach "
        f"{mach:.2f}, allowed {slowest:g} to {fastest:g}; {remedy}"
    )


def _bypass_mach(arrangement: Arrangement, path: Flowpath) -> np.ndarray:
    """Mach number at which the bypass stream would have to enter the mixer."""
    bypass = path.stations["16"]
    static_pressure = path.loadings["mixer_static_share"] * bypass.total_pressure
    with np.errstate(all="ignore"):
        return at_static_pressure(arrangement.gas, bypass, static_pressure).mach


def _meeting_fan_pressure_ratio(
    arrangement: Arrangement, path: Flowpath, flight: FlightCondition, taken: OffTakes
) -> float:
    """The fan pressure ratio nearest to the one given at which the streams meet; NaN for none."""
    _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    trials = np.geomspace(1.1, 8.0, 150)
    given = float(path.stations["13"].total_pressure / path.stations["2"].total_pressure)
    unknowns = np.repeat(arrangement.design_unknowns(face)[:, None], trials.size, axis=1)
    unknowns[arrangement.unknown_names.index("fan_pressure_ratio")] = np.log(trials)
    mach = _bypass_mach(arrangement, _run(arrangement, flight, taken, unknowns))
    slowest, fastest = _BYPASS_MACH
    meets = trials[(mach > 2.0 * slowest) & (mach < 0.8 * fastest)]
    return float(meets[np.argmin(np.abs(np.log(meets / given)))]) if meets.size else np.nan


def scaled(sizing: Sizing, factor: float) -> Sizing:
    """The same engine with all its flows and flow areas multiplied by a factor."""
    unknowns = sizing.unknowns.copy()
    unknowns[-1] += np.log(factor)
    return replace(
        sizing,
        unknowns=unknowns,
        areas={name: area * factor for name, area in sizing.areas.items()},
        flows={name: flow * factor for name, flow in sizing.flows.items()},
        reference_thrust=sizing.reference_thrust * factor,
        design_airflow=sizing.design_airflow * factor,
    )
