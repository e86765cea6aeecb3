"""From an engine file to an engine behind the one interface."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from engine.atmosphere import flight_condition
from engine.cycle_engine import CycleEngine
from engine.cycles.situation import OffTakes
from engine.cycles.sizing import size
from engine.errors import InputRefused, OutOfRange
from engine.installation.pod import GivenPod
from engine.interface import RATINGS, Engine
from engine.options.assembly import arrange, fit_afterburner, ratings_of, refuse_propeller
from engine.options.constant_consumption import ConstantConsumptionEngine
from engine.options.input_model import (
    AnyCycleFile,
    BrochureFile,
    ConstantConsumptionFile,
    TabulatedFile,
    check_engine,
)
from engine.options.tables import ScaleTable
from engine.reading import defaults_used, read_toml
from engine.scaling import scaled, scaled_to


def load_engine(path: str | Path) -> Engine:
    """Read an engine file, size the engine, and give it behind the one interface.

    Raises
    ------
    InputRefused
        naming file, key, value and what is allowed.
    CycleCannotRun
        for a cycle without a physical design point.
    """
    where = Path(path)
    return engine_from_content(read_toml(where), str(where))


def engine_from_content(content: dict[str, Any], where: str) -> Engine:
    """The same from the content of a file, ``where`` naming it in a refusal."""
    written = check_engine(content, where)
    assumed = _assumed(written)
    if isinstance(written, ConstantConsumptionFile):
        return ConstantConsumptionEngine(
            name=written.name,
            specific_fuel_consumption=written.specific_fuel_consumption,
            static_thrust=dict.fromkeys(RATINGS, written.static_thrust),
            density_exponent=written.density_exponent,
            fuel=written.fuel.to_fuel(),
            assumed=assumed,
        )
    if isinstance(written, TabulatedFile):
        from engine.options.tabulated import load_table

        return load_table(written, Path(where).parent, assumed)
    if isinstance(written, BrochureFile):
        return _brochure_engine(written, content.get("fuel"), where, assumed)
    return _cycle_engine(written, where, assumed)


def _brochure_engine(
    brochure: BrochureFile, fuel: Any, where: str, assumed: tuple[str, ...]
) -> CycleEngine:
    """The cycle that the rule makes of four numbers; what it put in is told as assumed."""
    from engine.options.brochure import assumptions

    whole = check_engine(brochure_content(brochure, fuel, where), where)
    assert isinstance(whole, AnyCycleFile)
    return _cycle_engine(whole, where, (*assumed, *assumptions(whole)))


def brochure_content(brochure: BrochureFile, fuel: Any, where: str) -> dict[str, Any]:
    """Content of the engine file that the rule makes of four numbers, ``fuel`` as it is written."""
    from engine.options.brochure import cycle_content

    numbers = brochure.model_dump(exclude={"kind", "fuel"})
    try:
        return cycle_content(**numbers, fuel=fuel)
    except InputRefused as refusal:
        raise type(refusal)(refusal.what, where=where, key=refusal.key) from None


def _cycle_engine(written: AnyCycleFile, where: str, assumed: tuple[str, ...]) -> CycleEngine:
    """A cycle sized at its design point, with its ratings."""
    point = written.design_point
    try:
        arrangement = arrange(written)
        flight = flight_condition(point.pressure_altitude, point.mach, point.day)
        off_takes = written.off_takes
        sizing, path = size(
            arrangement,
            flight,
            airflow=point.airflow,
            net_thrust=point.net_thrust,
            taken=OffTakes.of(off_takes.customer_bleed_fraction, off_takes.shaft_power),
        )
        arrangement = fit_afterburner(arrangement, written, path)
        refuse_propeller(written, sizing)
    except OutOfRange as refusal:
        raise InputRefused(str(refusal), where=where, key="design_point") from None
    except InputRefused as refusal:
        key = refusal.key or "design_point"
        raise type(refusal)(refusal.what, where=where, key=key) from None
    given = written.pod.model_dump()
    engine = CycleEngine(
        name=written.name,
        arrangement=arrangement,
        sizing=sizing,
        bounds=ratings_of(written),
        greatest_mach=given.pop("greatest_mach"),
        given_pod=GivenPod(**given),
        fuel=arrangement.fuel,
        assumed=assumed,
    )
    return engine if written.scale is None else _scaled(engine, written.scale, where)


def _scaled(engine: CycleEngine, table: ScaleTable, where: str) -> CycleEngine:
    if table.factor is not None:
        return scaled(engine, table.factor)
    try:
        return scaled_to(engine, static_thrust=table.static_thrust, airflow=table.airflow)
    except InputRefused as refusal:
        raise InputRefused(refusal.what, where=where, key=refusal.key) from None


def _assumed(
    written: AnyCycleFile | BrochureFile | ConstantConsumptionFile | TabulatedFile,
) -> tuple[str, ...]:
    """Values left unsaid, but for those that say nothing here."""
    left_out = ["fuel."] if written.fuel.is_by_name else []
    for name in ("installation", "pod"):  # which matter to nothing that is flown, unless said
        if name not in written.model_fields_set:
            left_out.append(f"{name}.")
    lines = defaults_used(written)
    return tuple(line for line in lines if not line.startswith(tuple(left_out)))
