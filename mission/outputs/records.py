"""What programs read: plain dictionaries, each bare number with its unit as a suffix."""

from __future__ import annotations

from itertools import groupby
from typing import Any

import numpy as np
from numpy.typing import NDArray

from engine.fuels import Fuel
from engine.installation.pod import Pod
from engine.interface import Engine, EngineState, Outcome
from mission.comparison import Comparison, mean_cruise_consumption
from mission.outputs.field_record import field_record
from mission.outputs.margins import least_margin
from mission.outputs.partial import flown_segments
from mission.outputs.wording import day_in_words
from mission.reserves.items import Item
from mission.results import Failure, Flight, Margin, SegmentLog

VERSION = 1
BINDS = 1e-6  # share of a limit: nearer to its bound than that, it holds the engine
Record = dict[str, Any]


def flight_record(flight: Flight) -> Record:
    """A flight as ``longlegs-flight``; what could not be flown ends at the step that failed."""
    return {
        "format": "longlegs-flight",
        "version": VERSION,
        "mission": flight.mission,
        "aircraft": flight.aircraft,
        "engine": flight.engine,
        "fuel": _fuel(flight.fuel),
        "day": day_in_words(flight.day),
        "flown": flight.flown,
        "totals": _totals(flight),
        "solved": _solution(flight),
        "segments": [_segment(log) for log in flown_segments(flight)],
        "reserves": [
            {"item": r.item, "fuel_kg": r.fuel, "carriage_cost_kg": r.carriage_cost}
            for r in flight.reserves
        ],
        "reserve_rule": _reserve_rule(flight),
        "cross_check": [
            {
                "segment": check.segment,
                "integrated_fuel_kg": float(check.integrated_fuel),
                "breguet_fuel_kg": float(check.breguet_fuel),
                "difference_percent": float(check.difference_percent),
                "causes": {_kilograms(name): float(v) for name, v in check.causes.items()},
            }
            for check in flight.cross_check
        ],
        "margins": [margin_record(margin) for margin in flight.margins],
        "field": field_record(flight.field),
        "assumed": list(flight.assumed),
        "warnings": list(flight.warnings),
        "failure": failure_record(flight.failure),
    }


def _kilograms(name: str) -> str:
    """A cause of the cross-check as a key: ``climb_and_acceleration_kg``."""
    return "_".join(name.replace(",", "").split()) + "_kg"


def _fuel(fuel: Fuel) -> Record:
    return {
        "name": fuel.name,
        "lower_heating_value_j_per_kg": fuel.lower_heating_value,
        "density_kg_per_m3": fuel.density,
        "carbon_dioxide_kg_per_kg": fuel.carbon_dioxide_index,
        "water_kg_per_kg": fuel.water_index,
    }


_ITEM_UNITS = {"time": "s", "least_hold_time": "s", "height": "m", "distance": "m"}


def _reserve_rule(flight: Flight) -> Record:
    """The rule that the reserves are of, its items as they stand for this mission."""
    rule = flight.reserve_rule
    return {
        "rule": rule.name,
        "title": rule.title,
        "citation": rule.citation,
        "items": [_rule_item(item) for item in rule.items],
        "fuel_flow_margin_kg": flight.fuel_flow_margin,
    }


def _rule_item(item: Item) -> Record:
    """One item of a rule; what does not apply to it is left out."""
    named = {
        f"{name}_{_ITEM_UNITS[name]}" if name in _ITEM_UNITS else name: value
        for name, value in vars(item).items()
        if value is not None and value is not False
    }
    return {"kind": item.kind, **named}


def _totals(flight: Flight) -> Record:
    total = flight.totals
    return {
        "block_fuel_kg": total.block_fuel,
        "carbon_dioxide_kg": flight.carbon_dioxide,
        "trip_fuel_kg": total.trip_fuel,
        "reserve_fuel_kg": total.reserve_fuel,
        "loaded_fuel_kg": total.loaded_fuel,
        "fuel_left_kg": total.fuel_left,
        "fuel_margin_kg": total.fuel_margin,
        "block_time_s": total.block_time,
        "trip_time_s": total.trip_time,
        "ground_distance_m": total.ground_distance,
        "air_distance_m": total.air_distance,
        "ramp_mass_kg": total.ramp_mass,
        "takeoff_mass_kg": total.takeoff_mass,
        "landing_mass_kg": total.landing_mass,
        "integration_error": total.integration_error,
    }


def _solution(flight: Flight) -> Record:
    """What was free, and what was found for it; empty where nothing was."""
    solution = flight.solution
    if solution is None:
        return {}
    return {
        "free": solution.name,
        f"value_{solution.unit}": solution.value,
        "flights": solution.flights,
        "has_answer": solution.has_answer,
    }


def _segment(log: SegmentLog) -> Record:
    steps = log.steps
    return {
        "name": log.name,
        "kind": log.kind,
        "purpose": log.purpose,
        "leg": log.leg,
        "fuel_kg": log.fuel,
        "time_s": log.time,
        "ground_distance_m": log.ground_distance,
        "mass_start_kg": log.mass_start,
        "mass_end_kg": log.mass_end,
        "mass_released_kg": log.mass_released,
        "mass_received_kg": log.mass_received,
        "held_by": [name for name, _ in groupby(steps.held_by.tolist()) if name],
        "steps": {
            "elapsed_time_s": steps.elapsed_time.tolist(),
            "pressure_altitude_m": steps.pressure_altitude.tolist(),
            "mach": steps.mach.tolist(),
            "mass_kg": steps.mass.tolist(),
            "lift_n": steps.lift.tolist(),
            "weight_n": steps.weight.tolist(),
            "drag_n": steps.drag.tolist(),
            "thrust_n": steps.thrust.tolist(),
            "fuel_flow_kg_per_s": steps.fuel_flow.tolist(),
            "flight_path_angle_rad": steps.flight_path_angle.tolist(),
        },
    }


def margin_record(margin: Margin) -> Record:
    """One limit with its value and bound in the unit named."""
    return {
        "name": margin.name,
        "value": float(margin.value),
        "bound": float(margin.bound),
        "unit": margin.unit,
        "where": margin.where,
        "is_met": bool(margin.is_met),
    }


def failure_record(failure: Failure | None) -> Record | None:
    """Why a mission cannot be flown; None where it can."""
    if failure is None:
        return None
    return {
        "segment": failure.segment,
        "step": failure.step,
        "what": failure.what,
        "value": failure.value,
        "bound": failure.bound,
        "unit": failure.unit,
        "advice": failure.advice,
    }


def comparison_record(comparison: Comparison) -> Record:
    """Engine options in the order of rank as ``longlegs-comparison``; those not flown last."""
    best = comparison.best
    least = comparison.flights[best].totals.block_fuel if best is not None else 0.0
    return {
        "format": "longlegs-comparison",
        "version": VERSION,
        "mission": comparison.mission,
        "aircraft": comparison.aircraft,
        "best": best or "",
        "options": [_option(name, flight, least) for name, flight in comparison.flights.items()],
    }


def _option(name: str, flight: Flight, least: float) -> Record:
    """One option; an option that was not flown has no fuel to tell, only its failure."""
    head: Record = {"option": name, "engine": flight.engine, "flown": flight.flown}
    if not flight.flown:
        return {**head, "failure": failure_record(flight.failure)}
    total, margin = flight.totals, least_margin(flight.margins)
    consumption = mean_cruise_consumption(flight)
    return {
        **head,
        "block_fuel_kg": total.block_fuel,
        "difference_to_best_kg": total.block_fuel - least,
        "block_time_s": total.block_time,
        "mean_cruise_specific_fuel_consumption_kg_per_n_s": consumption or None,
        "takeoff_mass_kg": total.takeoff_mass,
        "fuel_left_kg": total.fuel_left,
        "fuel_margin_kg": total.fuel_margin,
        "integration_error_kg": total.integration_error,
        "binding_margin": {} if margin is None else margin_record(margin),
        "failure": None,
    }


def stations_record(state: EngineState, engine: Engine, *, rating: str) -> Record:
    """One engine at one flight condition as ``longlegs-stations``."""
    flight = state.flight
    consumption = float(state.specific_fuel_consumption)
    account = state.energy
    return {
        "format": "longlegs-stations",
        "version": VERSION,
        "engine": engine.name,
        "rating": rating,
        "pressure_altitude_m": float(flight.pressure_altitude),
        "mach": float(flight.mach),
        "day": day_in_words(float(flight.temperature_deviation)),
        "outcome": Outcome(int(state.outcome)).name.lower(),
        "thrust_n": float(state.net_thrust),
        "fuel_flow_kg_per_s": float(state.fuel_flow),
        "specific_fuel_consumption_kg_per_n_s": consumption if np.isfinite(consumption) else None,
        "bypass_ratio": float(state.bypass_ratio),
        "overall_pressure_ratio": float(state.overall_pressure_ratio),
        "turbine_entry_temperature_k": float(state.turbine_entry_temperature),
        "binding_limit": _binding_limit(state),
        "limit_shares": limit_shares(state),
        "stations": {name: _station(station) for name, station in state.stations.items()},
        "energy": {} if account is None else energy_terms(account),
        "efficiencies": {}
        if account is None
        else {
            "thermal": float(account.thermal_efficiency),
            "propulsive": float(account.propulsive_efficiency),
            "overall": float(account.overall_efficiency),
        },
        "pod": {} if engine.pod is None else _pod(engine.pod),
    }


_POD_UNITS = {"mass": "kg", "area": "m2"}


def _pod(pod: Pod) -> Record:
    """Lengths in m, masses in kg, areas in m2, and where each came from."""
    record: Record = {
        f"{name}_{_POD_UNITS.get(name.rpartition('_')[2], 'm')}": float(getattr(pod, name))
        for name in pod.origins
    }
    return {**record, "origins": dict(pod.origins), "doubts": list(pod.doubts)}


def _binding_limit(state: EngineState) -> str:
    """The limit that holds the thrust, "none" where a thrust was met below its rating."""
    name = str(state.binding_limit_names)
    share = limit_shares(state).get(name)
    is_idle = int(state.outcome) == Outcome.AT_IDLE
    return name if is_idle or (share is not None and abs(share - 1.0) < BINDS) else "none"


def limit_shares(state: EngineState) -> dict[str, float]:
    """Value over bound of each limit that the rating or idle has."""
    shares = np.asarray(state.limit_shares, dtype=float).reshape(len(state.limit_names), -1)[:, 0]
    return {
        name: float(share)
        for name, share in zip(state.limit_names, shares, strict=True)
        if np.isfinite(share) and share > 0.0
    }


def _station(station: Any) -> Record:
    names = (
        ("total_temperature", "k"),
        ("total_pressure", "pa"),
        ("static_temperature", "k"),
        ("static_pressure", "pa"),
        ("mass_flow", "kg_per_s"),
        ("velocity", "m_per_s"),
    )
    record: Record = {}
    for name, unit in names:
        value: NDArray[np.float64] | None = getattr(station, name)
        if value is not None:
            record[f"{name}_{unit}"] = float(value)
    return {**record, "fuel_air_ratio": float(station.fuel_air_ratio)}


def energy_terms(account: Any) -> dict[str, float]:
    """Powers of the account in W, ``fuel_w`` being the sum of all the others."""
    terms = {"fuel_w": float(account.fuel), "thrust_w": float(account.thrust)}
    for name, power in account.jet_kinetic.items():
        terms[f"jet_kinetic_{name}_w"] = float(power)
    for name, power in account.jet_heat.items():
        terms[f"jet_heat_{name}_w"] = float(power)
    others = ("intake_heat", "bleed", "shaft", "mechanical_loss", "unburnt_fuel")
    for name in (*others, "propeller_loss", "installation"):
        terms[f"{name}_w"] = float(getattr(account, name))
    return terms
