"""Afterburner, mixer and power turbine: what they conserve, and where they end.

Balances of real gas are added up with ``plain_gas``, which shares no code with the engine.
"""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from plain_gas import PlainGas

from engine.fuels import KEROSENE
from engine.gas import Gas, RealGas, Section, SectionalGas
from engine.parts.afterburner import Afterburner, reheat
from engine.parts.efficiency import Efficiency
from engine.parts.mixer import Passage, at_mach, at_static_pressure, mix
from engine.parts.stream import Array, Stream
from engine.parts.turbine import expand_by_power, expand_by_pressure

REAL = RealGas(KEROSENE)
SECTIONAL = SectionalGas(
    {"cold": 1004.0, "hot": 1152.0, "mixed": 1099.0, "reheated": 1241.0},
    {"cold": 1.4, "hot": 1.33, "mixed": 1.352, "reheated": 1.3},
)
GASES = pytest.mark.parametrize("gas", [REAL, SECTIONAL], ids=["real", "sectional"])
EXACT = 1e-12
# The gas model settles a temperature to round-off of enthalpy; plain sums agree with it to this.
PLAIN = 1e-10


def stream(
    gas: Gas, temperature: float, pressure: float, flow: float, f: float, section: Section
) -> Stream:
    total, ratio = np.array([temperature]), np.array([f])
    enthalpy = gas.enthalpy(total, ratio, section)
    return Stream(total, np.array([pressure]), np.array([flow]), ratio, enthalpy, section)


hot_streams = {
    "temperature": st.floats(600.0, 1300.0),
    "pressure": st.floats(3e4, 6e5),
    "flow": st.floats(1.0, 300.0),
    "f": st.floats(0.005, 0.035),
}
AFTERBURNER = Afterburner(0.92, KEROSENE.lower_heating_value, 0.02, 0.07, 1.9)


@given(**hot_streams, rise=st.floats(1.05, 1.8))
def test_afterburner_conserves_energy_and_dry_air(
    temperature: float, pressure: float, flow: float, f: float, rise: float
) -> None:
    entry = stream(REAL, temperature, pressure, flow, f, "hot")

    out = reheat(REAL, AFTERBURNER, entry, rise * entry.total_temperature)

    ratio, dry_air = float(out.fuel_air_ratio[0]), flow / (1.0 + f)
    assert float(out.mass_flow[0]) == pytest.approx(dry_air * (1.0 + ratio), rel=EXACT)
    added = 0.92 * KEROSENE.lower_heating_value * dry_air * (ratio - f)
    before = flow * PlainGas(f).enthalpy(temperature)
    after = dry_air * (1.0 + ratio) * PlainGas(ratio).enthalpy(rise * temperature)
    assert after - before == pytest.approx(added, rel=PLAIN)
    assert float(out.enthalpy[0]) == pytest.approx(
        PlainGas(ratio).enthalpy(rise * temperature), rel=PLAIN
    )


@given(**hot_streams)
def test_reheat_begins_where_dry_running_ends(
    temperature: float, pressure: float, flow: float, f: float
) -> None:
    dry = stream(REAL, temperature, pressure, flow, f, "hot")

    out = reheat(REAL, AFTERBURNER, dry, dry.total_temperature)

    assert out.total_pressure == dry.total_pressure
    assert out.mass_flow == pytest.approx(flow, rel=1e-15)
    assert out.fuel_air_ratio == pytest.approx(f, rel=1e-13)
    assert out.enthalpy == pytest.approx(dry.enthalpy, rel=1e-13)


@given(**hot_streams)
def test_a_little_heat_costs_little(
    temperature: float, pressure: float, flow: float, f: float
) -> None:
    """Fuel and pressure lost are proportional to a small rise of temperature."""
    dry = stream(REAL, temperature, pressure, flow, f, "hot")

    once, twice = (reheat(REAL, AFTERBURNER, dry, dry.total_temperature + k) for k in (1e-3, 2e-3))

    heat = PlainGas(f).heat_capacity(temperature) * flow * 1e-3
    burnt = once.fuel_flow - dry.fuel_flow
    # Fuel brings heat but takes some along; the share is its own at the exit temperature.
    assert 1.0 < float(burnt[0]) * 0.92 * KEROSENE.lower_heating_value / heat < 1.15
    assert twice.fuel_flow - dry.fuel_flow == pytest.approx(2.0 * burnt, rel=1e-5)
    lost = dry.total_pressure - once.total_pressure
    assert dry.total_pressure - twice.total_pressure == pytest.approx(2.0 * lost, rel=1e-6)
    assert lost > 0.0


@GASES
@given(**hot_streams)
def test_stated_loss_at_the_reference_ratio(
    gas: Gas, temperature: float, pressure: float, flow: float, f: float
) -> None:
    entry = stream(gas, temperature, pressure, flow, f, "hot")
    dry = entry.with_pressure_loss(0.02)

    out = reheat(gas, AFTERBURNER, dry, 1.9 * entry.total_temperature)

    assert out.total_pressure == pytest.approx(0.93 * pressure, rel=EXACT)


machs = st.floats(0.02, 0.95)


@GASES
@given(**hot_streams, mach=machs)
def test_pressure_and_mach_number_are_inverses(
    gas: Gas, temperature: float, pressure: float, flow: float, f: float, mach: float
) -> None:
    entry = stream(gas, temperature, pressure, flow, f, "hot")

    known = at_mach(gas, entry, np.array([mach]))
    found = at_static_pressure(gas, entry, known.static_pressure)

    # At Mach 0.02 the drop of enthalpy is 3e-4 of enthalpy: digits of it are lost so far.
    assert known.mach == pytest.approx(mach, rel=1e-10)
    assert found.static_pressure == pytest.approx(known.static_pressure, rel=EXACT)
    assert found.area == pytest.approx(known.area, rel=1e-9)
    assert found.velocity == pytest.approx(known.velocity, rel=1e-9)


@given(**hot_streams, mach=machs)
def test_static_state_belongs_to_its_total_state(
    temperature: float, pressure: float, flow: float, f: float, mach: float
) -> None:
    there = at_mach(REAL, stream(REAL, temperature, pressure, flow, f, "hot"), np.array([mach]))

    plain = PlainGas(f)
    static, velocity = float(there.static_temperature[0]), float(there.velocity[0])
    stagnation = plain.enthalpy(static) + 0.5 * velocity**2
    assert stagnation == pytest.approx(plain.enthalpy(temperature), rel=PLAIN)
    rise = plain.entropy(temperature) - plain.entropy(static)
    fall = plain.gas_constant * np.log(pressure / float(there.static_pressure[0]))
    assert rise == pytest.approx(fall, abs=1e-8)
    sound = plain.gamma(static) * plain.gas_constant * static
    assert velocity**2 == pytest.approx(mach**2 * sound, rel=1e-9)


@GASES
def test_a_choked_stream_says_what_area_it_needs(gas: Gas) -> None:
    entry = stream(gas, 900.0, 2e5, 10.0, 0.02, "hot")
    throat = at_mach(gas, entry, np.array([1.0]))

    found = at_static_pressure(gas, entry, 0.5 * throat.static_pressure)

    assert found.area == pytest.approx(throat.area, rel=1e-9)
    assert found.mach == pytest.approx(1.0, rel=1e-6)
    assert found.static_pressure == pytest.approx(throat.static_pressure, rel=1e-9)


@GASES
def test_flow_squared_goes_smoothly_through_zero(gas: Gas) -> None:
    """What matching compares is linear in static pressure about the total pressure."""
    entry = stream(gas, 900.0, 2e5, 10.0, 0.02, "hot")
    share = np.array([1.0 - 2e-5, 1.0 - 1e-5, 1.0 + 1e-5, 1.0 + 2e-5])

    area = at_static_pressure(gas, entry, share * entry.total_pressure).area

    flow = 1.0 / (area * np.abs(area))
    assert flow / flow[1] == pytest.approx([2.0, 1.0, -1.0, -2.0], rel=1e-4)


mixers = {
    "core_temperature": st.floats(600.0, 1300.0),
    "bypass_temperature": st.floats(260.0, 600.0),
    "bypass_ratio": st.floats(0.1, 10.0),
    "f": st.floats(0.005, 0.035),
    "core_mach": st.floats(0.1, 0.6),
    "pressure_ratio": st.floats(0.97, 1.15),
}


def meeting(
    gas: Gas,
    core_temperature: float,
    bypass_temperature: float,
    bypass_ratio: float,
    f: float,
    core_mach: float,
    pressure_ratio: float,
) -> tuple[Passage, Passage]:
    """Both streams where they meet, at one static pressure."""
    core = stream(gas, core_temperature, 1.2e5, 30.0, f, "hot")
    entering = at_mach(gas, core, np.array([core_mach]))
    static = float(entering.static_pressure[0])
    total = static * max(pressure_ratio * 1.2e5 / static, 1.01)
    bypass = stream(gas, bypass_temperature, total, 30.0 * bypass_ratio, 0.0, "cold")
    return entering, at_static_pressure(gas, bypass, entering.static_pressure)


@GASES
@given(**mixers)
def test_mixing_conserves_mass_energy_and_momentum(gas: Gas, **case: float) -> None:
    both = meeting(gas, **case)

    mixed = mix(gas, *both)

    out = mixed.stream
    mass = sum(one.stream.mass_flow for one in both)
    energy = sum(one.stream.mass_flow * one.stream.enthalpy for one in both)
    scale = sum(one.stream.mass_flow * np.abs(one.stream.enthalpy) for one in both)
    fuel = sum(one.stream.fuel_flow for one in both)
    area = sum(one.area for one in both)
    momentum = sum(
        one.stream.mass_flow * one.velocity + one.static_pressure * one.area for one in both
    )
    assert mixed.mach < 1.0
    assert out.mass_flow == pytest.approx(mass, rel=EXACT)
    assert out.mass_flow * out.enthalpy == pytest.approx(energy, abs=EXACT * float(scale[0]))
    assert out.fuel_flow == pytest.approx(fuel, rel=EXACT)
    assert mixed.area == pytest.approx(area, rel=EXACT)
    found = out.mass_flow * mixed.velocity + mixed.static_pressure * mixed.area
    assert found == pytest.approx(momentum, rel=EXACT)
    # The static state is the total state's at that velocity, and passes the flow in that area.
    again = at_static_pressure(gas, out, mixed.static_pressure)
    assert again.velocity == pytest.approx(mixed.velocity, rel=1e-10)
    assert again.area == pytest.approx(mixed.area, rel=1e-10)


@given(**mixers)
def test_mixing_makes_entropy(**case: float) -> None:
    both = meeting(REAL, **case)

    out = mix(REAL, *both).stream

    def made(one: Stream, pressure: Array) -> Array:
        """Entropy flow of a stream at ``out``'s temperature and its own composition."""
        gas_constant = REAL.gas_constant(one.fuel_air_ratio)
        rise = REAL.entropy(out.total_temperature, one.fuel_air_ratio) - REAL.entropy(
            one.total_temperature, one.fuel_air_ratio
        )
        fall = gas_constant * np.log(pressure / one.total_pressure)
        return one.mass_flow * (rise - fall)

    assert sum(made(one.stream, out.total_pressure) for one in both) > 0.0


@GASES
@given(**hot_streams, mach=st.floats(0.05, 0.9), share=st.floats(0.05, 0.95))
def test_mixing_of_identical_streams_changes_nothing(
    gas: Gas, temperature: float, pressure: float, flow: float, f: float, mach: float, share: float
) -> None:
    whole = stream(gas, temperature, pressure, flow, f, "mixed")
    parts = (
        whole.with_flow(share * whole.mass_flow),
        whole.with_flow((1 - share) * whole.mass_flow),
    )

    mixed = mix(gas, *(at_mach(gas, part, np.array([mach])) for part in parts))

    assert mixed.stream.total_temperature == pytest.approx(whole.total_temperature, rel=EXACT)
    assert mixed.stream.total_pressure == pytest.approx(whole.total_pressure, rel=EXACT)
    assert mixed.stream.fuel_air_ratio == pytest.approx(f, rel=EXACT)
    assert mixed.mach == pytest.approx(mach, rel=1e-9)


def test_a_little_of_another_stream_changes_little() -> None:
    core, bypass = meeting(REAL, 1100.0, 400.0, 1e-6, 0.02, 0.4, 1.0)

    mixed = mix(REAL, core, bypass)

    assert mixed.stream.total_pressure == pytest.approx(1.2e5, rel=1e-6)
    assert mixed.stream.total_temperature == pytest.approx(1100.0, rel=1e-6)


def test_real_and_sectional_gas_agree_where_heat_capacity_hardly_moves() -> None:
    """At one composition and within 1 K the real gas is one of constant heat capacity."""
    f = 0.02
    cp = float(REAL.heat_capacity(800.0, f))
    gamma = cp / (cp - float(REAL.gas_constant(f)))
    names = ("hot", "mixed", "reheated")
    constant = SectionalGas(dict.fromkeys(names, cp), dict.fromkeys(names, gamma))
    found = []
    for gas in (REAL, constant):
        warm = at_mach(gas, stream(gas, 800.3, 1.2e5, 20.0, f, "hot"), np.array([0.05]))
        cool = stream(gas, 799.7, 1.199e5, 10.0, f, "hot")
        mixed = mix(gas, warm, at_static_pressure(gas, cool, warm.static_pressure))
        out = mixed.stream
        found.append((out.total_temperature / 800.0, out.total_pressure / 1.2e5, mixed.mach))

    real, sectional = np.array(found)
    assert real == pytest.approx(sectional, rel=2e-5)


@GASES
def test_trials_of_a_derivative_come_out_as_alone(gas: Gas) -> None:
    """Shapes (k, N): every member as if it were asked alone."""
    core_flow = 30.0 * np.array([[1.0, 1.0, 1.0], [1.0 + 1e-6] * 3])
    core_temperature, f = np.array([900.0, 1000.0, 1100.0]), np.array([0.01, 0.02, 0.03])
    enthalpy = gas.enthalpy(core_temperature, f, "hot")
    core = Stream(core_temperature, np.array(1.2e5), core_flow, f, enthalpy, "hot")
    bypass = stream(gas, 420.0, 1.22e5, 40.0, 0.0, "cold")
    static = np.array([1.05e5, 1.1e5, 1.15e5])

    def both(one: Stream, pressure: Array) -> Stream:
        entering = at_static_pressure(gas, one, pressure)
        met = mix(gas, entering, at_static_pressure(gas, bypass, pressure)).stream
        return reheat(gas, AFTERBURNER, met, np.array([1900.0]))

    out = both(core, static)

    for row in range(2):
        for member in range(3):
            alone = Stream(
                core_temperature[[member]],
                np.array([1.2e5]),
                core_flow[row, [member]],
                f[[member]],
                enthalpy[[member]],
                "hot",
            )
            there = both(alone, static[[member]])
            for name in ("total_pressure", "mass_flow", "fuel_air_ratio", "enthalpy"):
                value = np.broadcast_to(getattr(out, name), (2, 3))[row, member]
                assert value == pytest.approx(getattr(there, name)[0], rel=EXACT)


@GASES
def test_unphysical_iterates_do_not_raise(gas: Gas) -> None:
    """Pressures and flows far from any answer, as the first steps of matching may visit."""
    pressure = np.array([1.0, 5e4, 1.1e5, 1.2e5, 3e5, 1e9])
    core = stream(gas, 900.0, 1.2e5, 30.0, 0.02, "hot")
    bypass = stream(gas, 420.0, 1.1e5, 40.0, 0.0, "cold")
    with np.errstate(all="ignore"):
        first, second = (at_static_pressure(gas, one, pressure) for one in (core, bypass))
        mixed = mix(gas, first, second)
        reheat(gas, AFTERBURNER, mixed.stream, np.array(1e5))

    assert np.all(np.isfinite(1.0 / first.area))
    assert np.all(np.isfinite(1.0 / second.area))


@GASES
@pytest.mark.parametrize("kind", ["polytropic", "isentropic"])
@given(**hot_streams, ratio=st.floats(0.1, 0.999))
def test_turbine_by_pressure_undoes_turbine_by_power(
    kind: str, gas: Gas, temperature: float, pressure: float, flow: float, f: float, ratio: float
) -> None:
    entry = stream(gas, temperature, pressure, flow, f, "hot")
    efficiency = Efficiency(0.88, kind)  # type: ignore[arg-type]

    out = expand_by_pressure(gas, entry, np.array([ratio]), efficiency)
    power = entry.mass_flow * (entry.enthalpy - out.enthalpy)
    again = expand_by_power(gas, entry, power, efficiency)

    assert again.total_pressure == pytest.approx(ratio * pressure, rel=1e-11)
    assert again.total_temperature == pytest.approx(out.total_temperature, rel=EXACT)
    assert out.total_pressure == pytest.approx(ratio * pressure, rel=1e-15)
