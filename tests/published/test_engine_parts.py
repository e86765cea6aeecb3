"""Single parts against small worked examples and standards."""

from __future__ import annotations

from math import sqrt

import numpy as np
import pytest

from engine.gas import SectionalGas
from engine.parts.compressor import compress
from engine.parts.efficiency import Efficiency
from engine.parts.inlet import standard_ram_recovery
from engine.parts.nozzle import Nozzle, discharge
from engine.parts.stream import Stream


def gas(gamma: float, heat_capacity: float) -> SectionalGas:
    sections = ("cold", "hot", "reheated")
    return SectionalGas(dict.fromkeys(sections, heat_capacity), dict.fromkeys(sections, gamma))


def stream(model: SectionalGas, temperature: float, pressure: float, flow: float) -> Stream:
    total = np.array(temperature)
    return Stream(
        total, np.array(pressure), np.array(flow), np.array(0.0), model.enthalpy(total, 0.0, "cold")
    )


@pytest.mark.source("S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.2; grade read")
def test_compressor_of_pressure_ratio_35() -> None:
    model = gas(1.4, 1004.0)
    entry = stream(model, 288.0, 101325.0, 50.0)

    out = compress(model, entry, np.array(35.0), Efficiency(0.9, "polytropic"))

    # Half of the last printed digit.
    assert float(out.total_temperature) == pytest.approx(890.4, abs=0.05)
    power = float(out.mass_flow * (out.enthalpy - entry.enthalpy)) / 1e6
    assert power == pytest.approx(30.2, abs=0.05)
    ideal = compress(model, entry, np.array(35.0), Efficiency(1.0, "isentropic"))
    isentropic = (ideal.enthalpy - entry.enthalpy) / (out.enthalpy - entry.enthalpy)
    assert float(isentropic) == pytest.approx(0.84, abs=0.005)
    again = compress(model, entry, np.array(35.0), Efficiency(float(isentropic), "isentropic"))
    assert float(again.total_temperature) == pytest.approx(float(out.total_temperature), rel=1e-12)


@pytest.mark.source("S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 4.7; grade read")
def test_nozzle_with_losses_reaches_its_mach_number() -> None:
    gamma = 1.33
    model = gas(gamma, 1156.0)
    nozzle = Nozzle("convergent-divergent", isentropic_efficiency=0.94)

    jet = discharge(model, nozzle, stream(model, 900.0, 10.0e5, 1.0), np.array(1.0e5))

    constant = 1156.0 * (gamma - 1.0) / gamma
    mach = float(jet.exit_velocity) / sqrt(gamma * constant * float(jet.exit_static_temperature))
    assert mach == pytest.approx(2.048, abs=5e-4)


@pytest.mark.source("S. Farokhi, Aircraft Propulsion, 1st ed., Wiley, Example 5.6; grade read")
def test_divergence_gains_gross_thrust() -> None:
    model = gas(1.3, 1244.0)
    entry, ambient = stream(model, 900.0, 8.0e5, 1.0), np.array(1.0e5)

    full = discharge(model, Nozzle("convergent-divergent"), entry, ambient)
    convergent = discharge(model, Nozzle("convergent"), entry, ambient)

    gain = 100.0 * (full.gross_thrust / convergent.gross_thrust - 1.0)  # [%]
    assert float(gain) == pytest.approx(7.304, abs=5e-4)
    assert float(full.throat_area) == pytest.approx(float(convergent.throat_area), rel=1e-12)


@pytest.mark.source(
    "MIL-E-5008B, ram recovery, as in Mattingly, Heiser and Pratt, Aircraft Engine Design, 2nd "
    "ed., AIAA; grade read"
)
@pytest.mark.parametrize(
    ("mach", "recovery"),
    [
        (0.0, 1.0),
        (1.0, 1.0),
        (2.0, 0.925),
        (3.0, 0.8088),
        (np.nextafter(5.0, 0.0), 0.5126),
        (5.0, 0.5128),
    ],
)
def test_standard_ram_recovery(mach: float, recovery: float) -> None:
    assert float(standard_ram_recovery(np.array(mach))) == pytest.approx(recovery, abs=5e-5)
