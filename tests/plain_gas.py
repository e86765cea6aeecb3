"""Properties of air and lean products in plain Python, for checks that share no code with engine.

Nine-coefficient polynomials of N2, O2, Ar, CO2, H2O and composition of dry air from B. J. McBride,
M. J. Zehe and S. Gordon, NASA/TP-2002-211556 (read), with that report's gas constant.
"""

from __future__ import annotations

from collections.abc import Callable
from math import log

_Polynomial = Callable[[list[float], float], float]

NASA_GAS_CONSTANT = 8.314510  # J/(mol K)
JOINT = 1000.0  # K
# Species: molar mass [g/mol], then a1..a7, b1, b2 from 200 to 1000 K and from 1000 to 6000 K.
# fmt: off
SPECIES = {
    "N2": (28.0134,
        [2.210371497e+04, -3.818461820e+02, 6.082738360e+00, -8.530914410e-03, 1.384646189e-05,
         -9.625793620e-09, 2.519705809e-12, 7.108460860e+02, -1.076003744e+01],
        [5.877124060e+05, -2.239249073e+03, 6.066949220e+00, -6.139685500e-04, 1.491806679e-07,
         -1.923105485e-11, 1.061954386e-15, 1.283210415e+04, -1.586640027e+01]),
    "O2": (31.9988,
        [-3.425563420e+04, 4.847000970e+02, 1.119010961e+00, 4.293889240e-03, -6.836300520e-07,
         -2.023372700e-09, 1.039040018e-12, -3.391454870e+03, 1.849699470e+01],
        [-1.037939022e+06, 2.344830282e+03, 1.819732036e+00, 1.267847582e-03, -2.188067988e-07,
         2.053719572e-11, -8.193467050e-16, -1.689010929e+04, 1.738716506e+01]),
    "Ar": (39.948,
        [0.0, 0.0, 2.5, 0.0, 0.0, 0.0, 0.0, -7.453750000e+02, 4.379674910e+00],
        [2.010538475e+01, -5.992661070e-02, 2.500069401e+00, -3.992141160e-08, 1.205272140e-11,
         -1.819015576e-15, 1.078576636e-19, -7.449939610e+02, 4.379180110e+00]),
    "CO2": (44.0095,
        [4.943650540e+04, -6.264116010e+02, 5.301725240e+00, 2.503813816e-03, -2.127308728e-07,
         -7.689988780e-10, 2.849677801e-13, -4.528198460e+04, -7.048279440e+00],
        [1.176962419e+05, -1.788791477e+03, 8.291523190e+00, -9.223156780e-05, 4.863676880e-09,
         -1.891053312e-12, 6.330036590e-16, -3.908350590e+04, -2.652669281e+01]),
    "H2O": (18.01528,
        [-3.947960830e+04, 5.755731020e+02, 9.317826530e-01, 7.222712860e-03, -7.342557370e-06,
         4.955043490e-09, -1.336933246e-12, -3.303974310e+04, 1.724205775e+01],
        [1.034972096e+06, -2.412698562e+03, 4.646110780e+00, 2.291998307e-03, -6.836830480e-07,
         9.426468930e-11, -4.822380530e-15, -1.384286509e+04, -7.978148510e+00]),
}
# fmt: on
AIR = {"N2": 0.78084, "O2": 0.209476, "Ar": 0.009365, "CO2": 0.000319}


def moles(fuel_air_ratio: float, hydrogen_carbon_ratio: float) -> dict[str, float]:
    """Moles of each species in one kilogram of lean products of CH_r, burnt completely."""
    air_mass = sum(share * SPECIES[name][0] for name, share in AIR.items()) / 1e3
    amounts = {name: share / air_mass for name, share in AIR.items()} | {"H2O": 0.0}
    # CH_r + (1 + r/4) O2 -> CO2 + r/2 H2O; its molar mass is what the products weigh less the O2.
    r = hydrogen_carbon_ratio
    oxygen = 1.0 + r / 4.0
    weight = (SPECIES["CO2"][0] + r / 2.0 * SPECIES["H2O"][0] - oxygen * SPECIES["O2"][0]) / 1e3
    fuel = fuel_air_ratio / weight
    amounts["CO2"] += fuel
    amounts["H2O"] += fuel * r / 2.0
    amounts["O2"] -= fuel * oxygen
    return {name: amount / (1.0 + fuel_air_ratio) for name, amount in amounts.items()}


def _cp(a: list[float], t: float) -> float:
    return a[0] / t**2 + a[1] / t + a[2] + a[3] * t + a[4] * t**2 + a[5] * t**3 + a[6] * t**4


def _h(a: list[float], t: float) -> float:
    return (
        -a[0] / t + a[1] * log(t) + a[2] * t + a[3] * t**2 / 2.0 + a[4] * t**3 / 3.0
        + a[5] * t**4 / 4.0 + a[6] * t**5 / 5.0 + a[7]
    )  # fmt: skip


def _s(a: list[float], t: float) -> float:
    return (
        -a[0] / t**2 / 2.0 - a[1] / t + a[2] * log(t) + a[3] * t + a[4] * t**2 / 2.0
        + a[5] * t**3 / 3.0 + a[6] * t**4 / 4.0 + a[8]
    )  # fmt: skip


class PlainGas:
    """One mixture: gas constant [J/(kg K)], heat capacity, enthalpy and entropy per kilogram."""

    def __init__(self, fuel_air_ratio: float, hydrogen_carbon_ratio: float = 23.0 / 12.0) -> None:
        self.moles = moles(fuel_air_ratio, hydrogen_carbon_ratio)
        self.gas_constant = NASA_GAS_CONSTANT * sum(self.moles.values())

    def heat_capacity(self, temperature: float) -> float:
        """[J/(kg K)]."""
        branch = 1 if temperature <= JOINT else 2
        total = sum(n * _cp(SPECIES[k][branch], temperature) for k, n in self.moles.items())
        return NASA_GAS_CONSTANT * total

    def enthalpy(self, temperature: float) -> float:
        """Above 298.15 K [J/kg]; the step that the report leaves at 1000 K is taken out."""
        return NASA_GAS_CONSTANT * sum(
            n * (self._joined(_h, k, temperature) - _h(SPECIES[k][1], 298.15))
            for k, n in self.moles.items()
        )

    def entropy(self, temperature: float) -> float:
        """At one pressure, without mixing [J/(kg K)]; the step at 1000 K is taken out."""
        return NASA_GAS_CONSTANT * sum(
            n * self._joined(_s, k, temperature) for k, n in self.moles.items()
        )

    def gamma(self, temperature: float) -> float:
        """Ratio of heat capacities."""
        cp = self.heat_capacity(temperature)
        return cp / (cp - self.gas_constant)

    @staticmethod
    def _joined(function: _Polynomial, name: str, temperature: float) -> float:
        _, low, high = SPECIES[name]
        if temperature <= JOINT:
            return function(low, temperature)
        return function(high, temperature) + function(low, JOINT) - function(high, JOINT)


def bisect(function: Callable[[float], float], low: float, high: float) -> float:
    """Root of an increasing function."""
    for _ in range(200):
        middle = 0.5 * (low + high)
        if function(middle) > 0.0:
            high = middle
        else:
            low = middle
    return 0.5 * (low + high)
