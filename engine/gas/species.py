"""Nine-coefficient polynomials of the species of air and of lean combustion products.

Source: B. J. McBride, M. J. Zehe and S. Gordon, "NASA Glenn Coefficients for Calculating
Thermodynamic Properties of Individual Species", NASA/TP-2002-211556, with its gas constant.
Heat capacity, enthalpy and entropy are each linear in the coefficients, so that a mixture is one
row of nine numbers over the powers of temperature listed in :data:`BASIS`.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
MOLAR_GAS_CONSTANT = 8.314510  # J/(mol K), the value of the report
RANGE_JOINT = 1000.0  # K, where the lower range ends and the upper begins
REFERENCE_TEMPERATURE = 298.15  # K
BASIS = ("T^-2", "T^-1", "1", "ln T", "T", "T^2", "T^3", "T^4", "T^5")


@dataclass(frozen=True)
class Species:
    """Molar mass [kg/mol] and the coefficients a1..a7, b1, b2 below and above 1000 K."""

    molar_mass: float
    low: tuple[float, ...]
    high: tuple[float, ...]


# fmt: off
SPECIES = {
    "N2": Species(28.0134e-3, (
        2.210371497e+04, -3.818461820e+02, 6.082738360e+00, -8.530914410e-03, 1.384646189e-05,
        -9.625793620e-09, 2.519705809e-12, 7.108460860e+02, -1.076003744e+01), (
        5.877124060e+05, -2.239249073e+03, 6.066949220e+00, -6.139685500e-04, 1.491806679e-07,
        -1.923105485e-11, 1.061954386e-15, 1.283210415e+04, -1.586640027e+01)),
    "O2": Species(31.9988e-3, (
        -3.425563420e+04, 4.847000970e+02, 1.119010961e+00, 4.293889240e-03, -6.836300520e-07,
        -2.023372700e-09, 1.039040018e-12, -3.391454870e+03, 1.849699470e+01), (
        -1.037939022e+06, 2.344830282e+03, 1.819732036e+00, 1.267847582e-03, -2.188067988e-07,
        2.053719572e-11, -8.193467050e-16, -1.689010929e+04, 1.738716506e+01)),
    "Ar": Species(39.948e-3, (
        0.0, 0.0, 2.5, 0.0, 0.0, 0.0, 0.0, -7.453750000e+02, 4.379674910e+00), (
        2.010538475e+01, -5.992661070e-02, 2.500069401e+00, -3.992141160e-08, 1.205272140e-11,
        -1.819015576e-15, 1.078576636e-19, -7.449939610e+02, 4.379180110e+00)),
    "CO2": Species(44.0095e-3, (
        4.943650540e+04, -6.264116010e+02, 5.301725240e+00, 2.503813816e-03, -2.127308728e-07,
        -7.689988780e-10, 2.849677801e-13, -4.528198460e+04, -7.048279440e+00), (
        1.176962419e+05, -1.788791477e+03, 8.291523190e+00, -9.223156780e-05, 4.863676880e-09,
        -1.891053312e-12, 6.330036590e-16, -3.908350590e+04, -2.652669281e+01)),
    "H2O": Species(18.01528e-3, (
        -3.947960830e+04, 5.755731020e+02, 9.317826530e-01, 7.222712860e-03, -7.342557370e-06,
        4.955043490e-09, -1.336933246e-12, -3.303974310e+04, 1.724205775e+01), (
        1.034972096e+06, -2.412698562e+03, 4.646110780e+00, 2.291998307e-03, -6.836830480e-07,
        9.426468930e-11, -4.822380530e-15, -1.384286509e+04, -7.978148510e+00)),
}
# fmt: on

# Dry air by mole fraction, as composed in the same report.
DRY_AIR = {"N2": 0.78084, "O2": 0.209476, "Ar": 0.009365, "CO2": 0.000319}


def heat_capacity_row(a: tuple[float, ...]) -> Array:
    """Molar heat capacity over the gas constant as a row over :data:`BASIS`."""
    return np.array([a[0], a[1], a[2], 0.0, a[3], a[4], a[5], a[6], 0.0])


def enthalpy_row(a: tuple[float, ...]) -> Array:
    """Molar enthalpy over the gas constant [K] as a row over :data:`BASIS`."""
    return np.array([0.0, -a[0], a[7], a[1], a[2], a[3] / 2, a[4] / 3, a[5] / 4, a[6] / 5])


def entropy_row(a: tuple[float, ...]) -> Array:
    """Molar entropy at 1 bar over the gas constant as a row over :data:`BASIS`."""
    return np.array([-a[0] / 2, -a[1], a[8], a[2], a[3], a[4] / 2, a[5] / 3, a[6] / 4, 0.0])


def slope_row(a: tuple[float, ...]) -> Array:
    """Temperature times the slope of :func:`heat_capacity_row` as a row over :data:`BASIS`."""
    return np.array([-2 * a[0], -a[1], 0.0, 0.0, a[3], 2 * a[4], 3 * a[5], 4 * a[6], 0.0])


def basis(temperature: Array) -> Array:
    """Powers of temperature of :data:`BASIS`, shape (9,) + shape of ``temperature``."""
    powers = np.empty((9, *temperature.shape))
    inverse = 1.0 / temperature
    square = temperature * temperature
    powers[0] = inverse * inverse
    powers[1] = inverse
    powers[2] = 1.0
    powers[3] = np.log(temperature)
    powers[4] = temperature
    powers[5] = square
    powers[6] = square * temperature
    powers[7] = square * square
    powers[8] = powers[7] * temperature
    return powers


def continuous_rows(species: Species) -> tuple[Array, Array]:
    """Rows (heat capacity, enthalpy, entropy, slope) of both ranges, shape (4, 9) each.

    Enthalpy is sensible, zero at 298.15 K. The upper range is shifted by constants so that
    enthalpy and entropy are continuous at 1000 K, where the report leaves steps of the order of
    1e-6, else an inverse near the joint could not settle.
    """
    rows = (heat_capacity_row, enthalpy_row, entropy_row, slope_row)
    low = np.array([row(species.low) for row in rows])
    high = np.array([row(species.high) for row in rows])
    low[1, 2] -= low[1] @ basis(np.array(REFERENCE_TEMPERATURE))
    joint = basis(np.array(RANGE_JOINT))
    high[1:3, 2] += (low[1:3] - high[1:3]) @ joint
    return low, high
