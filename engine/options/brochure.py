"""An engine from four numbers: static thrust and fuel consumption, bypass and pressure ratio.

One stated rule gives everything else. The design point is take-off thrust at rest, at sea level on
a standard day, on the bench: no off-takes, no inlet loss. With ``OPR`` the overall pressure ratio:

- Expected turbine entry temperature ``1600 K (OPR / 40)^0.25``, behind the first vanes and their
  cooling air, so that no cooling air is told apart. The Energy Efficient Engine's, of OPR 32.4 and
  brought to the standard day, is 1557 K (NASA CR-168219, Table XII), here 1518 K; of two turbofans
  of the 1960s, of OPR 13 and 16 (from memory), 1144 and 1211 K (Mattingly, Heiser and Pratt,
  Aircraft Engine Design, 2nd ed., Table C.4), here 1208 and 1272 K.
- One polytropic efficiency for compressors and turbines, cooling included: expected
  ``0.90 + 0.03 ln(OPR / 40)``. Levels and rise are those of an engineer's tables by generation
  (Mattingly, Elements of Propulsion, component technology levels; from memory).
- An engine that burns more than the expected one is hotter and less efficient: for every hundredth
  of temperature above the expectation, efficiency is 0.002 below its own.
- Fan pressure ratio such that the bypass jet has 0.8 of the core jet's velocity (common practice,
  no source). The high-pressure compressor has ``OPR^0.8`` (that of the Energy Efficient
  Engine ``OPR^0.87``), a booster what then is left.
- Mechanical efficiency 0.99 of each shaft, combustion 0.999, combustor pressure loss 5 %, ducts
  1 % (core) and 1.5 % (bypass), gross thrust coefficient 0.99 (common practice, no source).
- Without a bypass, OPR up to 8 is one spool, more is two of equal pressure ratio.

Temperature and fan pressure ratio are found so that the fuel consumption is met, by evaluations of
the design point alone. The constants were set by hand with a view of the databank rows of
``tests/published/test_databank.py``, in round numbers, and hold for all of them.

Ratings: take-off at the temperature that gives the static thrust on ISA+15, flat on colder days;
climb and cruise at 0.926 and 0.907 of take-off temperature, with corrected fan speed at most 1.085
and 1.055: the Energy Efficient Engine's (NASA CR-168219, Table XII: turbine temperatures, and
speeds estimated as everywhere here from the fan's work). Maximum continuous at 0.98, as fast
as climb, flat to ISA+10; idle, 3 to 7 % of thrust on the ground, by speeds, fuel-air ratios and
delivery pressure (common practice, no source).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cache
from itertools import pairwise
from math import exp, isfinite, log, nan
from typing import Any

import numpy as np
from pydantic import BaseModel
from scipy.optimize import brentq

from engine.atmosphere import FlightCondition, flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.flowpath import Flowpath
from engine.cycles.situation import NOTHING_TAKEN, Situation
from engine.cycles.sizing import size
from engine.cycles.turbofan import Turbofan
from engine.cycles.turbojet import Turbojet
from engine.errors import InputRefused
from engine.interface import RATINGS, Outcome
from engine.options.assembly import arrange, ratings_of
from engine.options.input_model import AnyCycleFile, check_engine
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import take_in
from engine.parts.stream import Stream

VELOCITY_RATIO = 0.8
# Logarithm of turbine entry temperature over the expected one: where an answer is looked for.
_SURPLUS = (-0.25, -0.1, 0.0, 0.1, 0.25, 0.5)
_HOTTEST = 2300.0  # [K], beyond which nothing is looked for
_WARM = 15.0  # [K] warmer than standard, up to which take-off thrust is flat
_GIVEN = ("name", "note", "kind", "fuel", "design_point.net_thrust", "design_point.bypass_ratio")


def cycle_content(
    *,
    name: str,
    static_thrust: float,
    static_specific_fuel_consumption: float,
    bypass_ratio: float,
    overall_pressure_ratio: float,
    note: str = "",
    fuel: str | dict[str, Any] | None = None,
) -> dict[str, Any]:
    """Content of an engine file with a cycle: turbofan, turbojet or two-spool turbojet.

    Thrust [N] and fuel consumption [kg/(N s)] are at rest at sea level on a standard day; ``fuel``
    is as in an engine file.

    Raises
    ------
    InputRefused
        for a fuel consumption that no engine of the rule has, with the least and the greatest.
    """
    told: dict[str, Any] = {"name": name, "note": note} | ({} if fuel is None else {"fuel": fuel})

    def content(surplus: float) -> dict[str, Any]:
        return _content(told, static_thrust, bypass_ratio, overall_pressure_ratio, surplus)

    bench = _Bench.of(content(0.0), overall_pressure_ratio)
    wanted = static_specific_fuel_consumption
    surplus = _surplus(bench, wanted)
    if not bench.has_fan:
        return _rated(content(surplus), static_thrust)
    fan_ratio = round(bench.fan_pressure_ratio(surplus), 5)
    high, booster = _split(overall_pressure_ratio, fan_ratio)
    whole = content(surplus)
    whole["design_point"] |= {
        "fan_pressure_ratio": fan_ratio,
        "booster_pressure_ratio": round(booster, 5),
        "high_pressure_compressor_pressure_ratio": round(high, 5),
    }
    return _rated(whole, static_thrust)


def _rated(content: dict[str, Any], static_thrust: float) -> dict[str, Any]:
    """The content with ratings from the temperature that gives the static thrust on a warm day."""
    hot = content["design_point"]["turbine_entry_temperature"]
    open_throttle = {name: {"turbine_entry_temperature": "2500 K"} for name in RATINGS}
    written = check_engine(content | {"ratings": open_throttle}, "")
    assert isinstance(written, AnyCycleFile)
    arrangement = arrange(written)
    sizing, _ = size(arrangement, flight_condition(0.0, 0.0), net_thrust=static_thrust)
    engine = CycleEngine("bench", arrangement, sizing, ratings_of(written))
    state = engine.at_thrust(flight_condition(0.0, 0.0, _WARM), static_thrust, rating=RATINGS[0])
    if int(state.outcome) != Outcome.MET:
        raise InputRefused(
            f"leaves an engine, at {hot}, that cannot give its static thrust on ISA+{_WARM:.0f}; "
            "lower bypass_ratio or raise overall_pressure_ratio",
            key="static_specific_fuel_consumption",
        )
    return content | {"ratings": _ratings(float(state.turbine_entry_temperature), content["kind"])}


def assumptions(model: BaseModel, prefix: str = "") -> list[str]:
    """What the rule put into an engine file, as ``key = value``, but what is told anyway."""
    lines: list[str] = []
    for name in model.model_fields_set:
        key, value = f"{prefix}{name}", getattr(model, name)
        if isinstance(value, BaseModel):
            lines += assumptions(value, f"{key}.") if key not in _GIVEN else []
        elif key not in _GIVEN:
            lines.append(f"{key} = {value:.5g}" if isinstance(value, float) else f"{key} = {value}")
    return sorted(lines)


@dataclass(frozen=True)
class _Bench:
    """An engine of the rule at its design point, whatever its surplus of temperature."""

    engine: Any  # one of three arrangements
    overall: float
    flight: FlightCondition
    face: Stream

    @classmethod
    def of(cls, content: dict[str, Any], overall: float) -> _Bench:
        written = check_engine(content, "")
        assert isinstance(written, AnyCycleFile)
        engine, flight = arrange(written), flight_condition(0.0, 0.0)
        return cls(engine, overall, flight, take_in(engine.gas, engine.inlet, flight)[1])

    @property
    def has_fan(self) -> bool:
        return isinstance(self.engine, Turbofan)

    def consumption(self, surplus: float) -> float:
        """Specific fuel consumption [kg/(N s)]; NaN where the engine does not run."""
        engine = self._hot(surplus)
        if self.has_fan:
            fan_ratio = self.fan_pressure_ratio(surplus)
            if not isfinite(fan_ratio):
                return fan_ratio
            engine = _with_fan(engine, fan_ratio, self.overall)
        path = self._run(engine)
        fuel_flow, thrust = float(path.fuel_flow), float(path.net_thrust(self.flight))
        return fuel_flow / thrust if fuel_flow > 0.0 < thrust else nan

    def fan_pressure_ratio(self, surplus: float) -> float:
        """Where the bypass jet has its share of the core jet's velocity; NaN where nowhere."""
        engine = self._hot(surplus)

        def excess(log_rise: float) -> float:
            """Of the bypass jet's velocity [m/s]; a core without a jet has lost it to the fan."""
            path = self._run(_with_fan(engine, 1.0 + exp(log_rise), self.overall))
            core, bypass = (
                float(jet.gross_thrust / stream.mass_flow) for stream, jet in path.jets.values()
            )
            return bypass - VELOCITY_RATIO * core if isfinite(core) else bypass

        ends = log(0.02), log(0.9 * self.overall - 1.0)
        if not excess(ends[0]) < 0.0 < excess(ends[1]):
            return nan
        return 1.0 + exp(float(brentq(excess, *ends, xtol=1e-8)))

    def _hot(self, surplus: float) -> Any:
        """The engine with the temperature and the efficiency of a surplus."""
        engine = self.engine
        quality = Efficiency(_quality(self.overall, surplus))
        changed: dict[str, Any] = {
            "turbine_entry_temperature": _temperature(self.overall, surplus),
            "core": replace(engine.core, compressor_efficiency=quality, turbine_efficiency=quality),
        }
        if not isinstance(engine, Turbojet):
            changed["low_spool"] = replace(
                engine.low_spool,
                fan_efficiency=quality,
                booster_efficiency=quality,
                turbine_efficiency=quality,
            )
        return replace(engine, **changed)

    def _run(self, engine: Any) -> Flowpath:
        """The design point, for a core airflow of 1 kg/s."""
        situation = Situation(self.face, self.flight, NOTHING_TAKEN, None)
        with np.errstate(all="ignore"):
            path: Flowpath = engine.evaluate(engine.design_unknowns(self.face), situation)
        return path


def _surplus(bench: _Bench, wanted: float) -> float:
    """Where the engine burns what is wanted, looked for from the expected temperature outwards."""
    burnt = cache(bench.consumption)
    coldest, *cold, hottest = _SURPLUS
    hottest = min(hottest, log(_HOTTEST / _temperature(bench.overall, 0.0)))
    inside = [coldest, *(s for s in cold if s < hottest), hottest]
    middle = inside.index(0.0)
    is_thirstier = not burnt(0.0) > wanted  # also where the expected engine does not run
    steps = inside[middle:] if is_thirstier else inside[middle::-1]
    for near, far in pairwise(steps):
        low, high = sorted((near, far))
        if burnt(low) <= wanted <= burnt(high):
            return float(brentq(lambda s: burnt(s) / wanted - 1.0, low, high, xtol=1e-8))
    raise _refusal(wanted, [b for b in map(burnt, inside) if isfinite(b)], has_bypass=bench.has_fan)


def _refusal(wanted: float, possible: list[float], *, has_bypass: bool) -> InputRefused:
    """Say how far a fuel consumption lies outside, and in which direction an answer lies."""
    ratios = "bypass_ratio or overall_pressure_ratio" if has_bypass else "overall_pressure_ratio"
    if not possible:
        return InputRefused(
            f"no turbine entry temperature up to {_HOTTEST:.0f} K runs this cycle; lower {ratios}",
            key="bypass_ratio" if has_bypass else "overall_pressure_ratio",
        )
    remedy = (
        f"raise it, or raise {ratios}" if wanted < min(possible) else f"lower it, or lower {ratios}"
    )
    return InputRefused(
        f"= {wanted * 1e6:.4g} mg/N/s; with this bypass ratio and overall pressure ratio an engine "
        f"burns {min(possible) * 1e6:.4g} to {max(possible) * 1e6:.4g} mg/N/s at rest: {remedy}",
        key="static_specific_fuel_consumption",
    )


def _temperature(overall: float, surplus: float) -> float:
    """Turbine entry temperature [K]."""
    return 1600.0 * exp(0.25 * log(overall / 40.0) + surplus)


def _quality(overall: float, surplus: float) -> float:
    """Polytropic efficiency."""
    return 0.90 + 0.03 * log(overall / 40.0) - 0.2 * surplus


def _split(overall: float, fan_ratio: float) -> tuple[float, float]:
    """Pressure ratios of the high-pressure compressor and of the booster, 1 for none."""
    high = min(overall**0.8, overall / fan_ratio)
    return high, max(overall / (fan_ratio * high), 1.0)


def _with_fan(engine: Turbofan, fan_ratio: float, overall: float) -> Turbofan:
    high, booster = _split(overall, fan_ratio)
    return replace(
        engine,
        fan_pressure_ratio=fan_ratio,
        high_pressure_compressor_pressure_ratio=high,
        low_spool=replace(engine.low_spool, booster_pressure_ratio=booster),
    )


def _content(
    told: dict[str, Any], thrust: float, bypass_ratio: float, overall: float, surplus: float
) -> dict[str, Any]:
    """The rule at a logarithm of temperature over the expected one; a turbofan's fan is to come."""
    temperature = _temperature(overall, surplus)
    quality = {"polytropic": round(_quality(overall, surplus), 5)}
    point = {
        "pressure_altitude": "0 m",
        "mach": 0.0,
        "net_thrust": f"{thrust!r} N",
        "turbine_entry_temperature": f"{temperature:.2f} K",
    }
    core_nozzle = {"pressure_loss_fraction": 0.01, "gross_thrust_coefficient": 0.99}
    common = told | {
        "combustor": {"efficiency": 0.999, "pressure_loss_fraction": 0.05},
        "ratings": _ratings(temperature, _kind(bypass_ratio, overall)),  # until the engine is known
        "idle": _idle(overall, has_bypass=bypass_ratio > 0.0),
    }
    if bypass_ratio:
        fans = ("fan", "booster", "high_pressure_compressor")
        return common | {
            "kind": "turbofan",
            "design_point": point
            | {
                "bypass_ratio": bypass_ratio,
                "fan_pressure_ratio": 1.5,
                "high_pressure_compressor_pressure_ratio": overall / 1.5,
            },
            "efficiencies": _efficiencies((*fans, *_TURBINES), quality),
            "core_nozzle": core_nozzle,
            "bypass_nozzle": core_nozzle | {"pressure_loss_fraction": 0.015},
        }
    if _kind(bypass_ratio, overall) == "turbojet":
        return common | {
            "kind": "turbojet",
            "design_point": point | {"compressor_pressure_ratio": overall},
            "efficiencies": _efficiencies(("compressor", "turbine"), quality),
            "nozzle": core_nozzle,
        }
    parts = ("low_pressure_compressor", "high_pressure_compressor")
    return common | {
        "kind": "two-spool turbojet",
        "design_point": point
        | {f"{part}_pressure_ratio": round(overall**0.5, 5) for part in parts},
        "efficiencies": _efficiencies((*parts, *_TURBINES), quality),
        "nozzle": core_nozzle,
    }


_TURBINES = ("high_pressure_turbine", "low_pressure_turbine")


def _efficiencies(parts: tuple[str, ...], quality: dict[str, float]) -> dict[str, Any]:
    return dict.fromkeys(parts, quality) | {"mechanical": 0.99}


def _kind(bypass_ratio: float, overall: float) -> str:
    """The arrangement that the rule takes."""
    return "turbofan" if bypass_ratio else "turbojet" if overall <= 8.0 else "two-spool turbojet"


def _ratings(warm: float, kind: str) -> dict[str, Any]:
    """Ceilings of temperature, from that of take-off [K], and of corrected speed of what is first.

    That is the fan or low-pressure compressor, or, of one spool, its compressor.
    """
    spool = "high" if kind == "turbojet" else "low"

    def rating(share: float, speed: float, **more: str) -> dict[str, Any]:
        ceiling = {"turbine_entry_temperature": f"{share * warm:.2f} K"}
        return ceiling | {f"corrected_{spool}_pressure_speed": speed} | more

    return {
        "take_off": rating(1.0, 1.085, flat_to="ISA+15"),
        "maximum_continuous": rating(0.98, 1.085, flat_to="ISA+10"),
        "climb": rating(0.926, 1.085),
        "cruise": rating(0.907, 1.055),
    }


def _idle(overall: float, *, has_bypass: bool) -> dict[str, Any]:
    """Floors: speed near the ground, flame in a fast descent, cabin air up high."""
    pressure = 1.0 + 0.03 * overall if has_bypass else 1.0
    speed = round(0.56 + 0.13 * log(overall / 13.0), 4)
    return {
        "flight": {
            "corrected_high_pressure_speed": round(speed + 0.02, 4),
            "fuel_air_ratio": 0.005,
            "compressor_delivery_pressure": f"{pressure:.3f} bar",
        },
        "ground": {"corrected_high_pressure_speed": speed, "fuel_air_ratio": 0.004},
    }
