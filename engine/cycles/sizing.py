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
SLOWEST_BYPASS = 0.0


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
        a turbine that cannot drive its compressor, a nozzle that cannot flow, no fuel needed, or
        no positive thrust; the message says which and by how much.
    """
    _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    unknowns = arrangement.design_unknowns(face)
    # The first round's 1 kg/s could not give the shaft power, which comes with the size.
    path = _run(arrangement, flight, replace(taken, shaft_power=np.zeros(())), unknowns)
    for _ in range(_MOST_ROUNDS):
        if airflow is not None:
            factor = airflow / float(path.stations["2"].mass_flow)
        else:
            assert net_thrust is not None
            thrust = float(path.net_thrust(flight))
            if not thrust > 0.0:
                _refuse_impossible(arrangement, path, flight, taken)
                raise CycleCannotRun(
                    f"the cycle gives no thrust at its design point ({thrust:.4g} N for "
                    f"{float(path.stations['2'].mass_flow):.3g} kg/s of air); "
                    f"{_remedy(path, taken)}"
                )
            factor = net_thrust / thrust
        unknowns = unknowns.copy()
        unknowns[-1] += np.log(factor)
        path = _run(arrangement, flight, taken, unknowns)
        if abs(factor - 1.0) < 1e-13:
            break
    _refuse_impossible(arrangement, path, flight, taken)
    return _sizing(arrangement, flight, unknowns, path), path


def _run(
    arrangement: Arrangement, flight: FlightCondition, taken: OffTakes, unknowns: np.ndarray
) -> Flowpath:
    _, face = take_in(arrangement.gas, arrangement.inlet, flight)
    with np.errstate(all="ignore"):
        return run(arrangement, unknowns, Situation(face, flight, taken, None))


def _sizing(
    arrangement: Arrangement, flight: FlightCondition, unknowns: np.ndarray, path: Flowpath
) -> Sizing:
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
    if "mixer_bypass" in path.areas:
        _refuse_mixer(arrangement, path)
    ambient = float(flight.static_pressure)
    for exit_station, (stream, jet) in path.jets.items():
        pressure = float(stream.total_pressure)
        if np.isfinite(float(jet.gross_thrust)) and pressure > ambient:
            continue
        stand, why = "bypass nozzle", "the fan does not raise the pressure enough"
        remedy = "raise fan_pressure_ratio"
        if exit_station == "9":
            stand, remedy = "core nozzle", _remedy(path, taken)
            why = "the turbines cannot drive the compressors: little or no pressure is left"
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
        less.append(f"off_takes.shaft_power, {float(taken.shaft_power) / 1e3:.4g} kW")
    return f"raise turbine_entry_temperature or lower {' or '.join(less)}"


def _refuse_mixer(arrangement: Arrangement, path: Flowpath) -> None:
    """Say when core and bypass streams cannot meet at one static pressure, and what helps.

    The bypass stream must flow forward, and it must not be faster than sound.
    """
    core, bypass = path.stations["6"], path.stations["16"]
    static_pressure = path.loadings["mixer_static_share"] * bypass.total_pressure
    with np.errstate(all="ignore"):
        mach = float(at_static_pressure(arrangement.gas, bypass, static_pressure).mach)
    if SLOWEST_BYPASS < mach < 1.0 and np.isfinite(float(path.stations["64"].total_pressure)):
        return
    if mach < 0.5:
        why = f"the bypass stream would enter the mixer at Mach {mach:.2f}, {SLOWEST_BYPASS} is least"
        remedy = "raise fan_pressure_ratio or mixer.core_mach, or lower turbine_entry_temperature"
    else:
        why = "the bypass stream would enter the mixer faster than sound"
        remedy = "lower fan_pressure_ratio or mixer.core_mach, or raise turbine_entry_temperature"
    raise CycleCannotRun(
        "the mixer's streams cannot meet at one static pressure: the core brings "
        f"{float(core.total_pressure) / 1e3:.1f} kPa of total pressure, "
        f"{float(static_pressure) / 1e3:.1f} kPa of static pressure, the bypass "
        f"{float(bypass.total_pressure) / 1e3:.1f} kPa of total pressure; {why}; {remedy}"
    )


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
