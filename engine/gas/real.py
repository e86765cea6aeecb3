"""Real air and the lean products of a C_nH_m fuel, from NASA's nine-coefficient polynomials.

With fuel-air ratio ``f`` every extensive property of the stream that came from one kilogram of
air is linear in ``f``: air, plus ``f`` times what a kilogram of fuel adds (carbon dioxide, unless
it is hydrogen, and water) less the oxygen it takes. Per kilogram of mixture it is divided by
``1 + f``. The entropy of mixing is left out: it is constant at one composition, and only
differences are used.

Validity: the polynomials are given from 200 K; used down to 180 K, over which the heat capacity
of air stays within 0.01 % of its value at 200 K. Dissociation is left out. At 30 bar it lowers
the temperature of lean products by 0.05 % at 1800 K, 0.16 % at 2000 K (0.29 % at 5 bar) and 1.1 %
at 2400 K; were nitric oxide in equilibrium too, by 0.4, 0.7 and 1.7 % (own evaluation with
Cantera and the GRI-Mech 3.0 data, fuel-air ratios 0.035, 0.04 and 0.055).

An afterburner has less pressure to hold it back. Kerosene burnt at 2.5 bar in its own products of
fuel-air ratio 0.02 and 1100 K, by the same evaluation (in brackets with nitric oxide in
equilibrium too, for which an afterburner mostly leaves no time)::

    temperature [K]     too hot by [%]    too strong by [%]
    1800                0.12 (0.42)       0.05 (0.21)
    2000                0.40 (0.78)       0.18 (0.37)
    2200                1.27 (1.65)       0.55 (0.75)
    passes 1 % at [K]   2158 (2071)       2307 (2271)

Temperature is that of complete combustion, too hot against equilibrium for the same fuel; too
strong is gross thrust of a nozzle from there to 1 bar, complete products against the equilibrium
composition, both frozen from the nozzle entry on. At 2 and 3 bar 1 % of temperature is passed at
2144 and 2169 K.

Source: McBride, Zehe and Gordon, NASA/TP-2002-211556.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike

from engine.fuels import Fuel
from engine.gas.interface import Array, Section
from engine.gas.species import (
    DRY_AIR,
    MOLAR_GAS_CONSTANT,
    RANGE_JOINT,
    SPECIES,
    basis,
    continuous_rows,
)

# K: a temperature by complete combustion above which dissociation, nitric oxide left out, would
# lower it by more than 1 % in an afterburner at 2.5 bar (the module's table, rounded down).
DISSOCIATION_FELT_ABOVE = 2150.0
_HEAT_CAPACITY, _ENTHALPY, _ENTROPY, _SLOPE = 0, 1, 2, 3
_BURNT = 4  # rows of the fuel's share stand after the air's
_Rows = dict[tuple[int, ...], tuple[Array, Array]]
_COLDEST_TRIAL, _HOTTEST_TRIAL = 50.0, 6000.0  # K: what an iterate may visit, never an answer
_MOST_ITERATIONS = 40
_LAST_STEP = 1e-6
_ALIKE = 1e-4  # of temperature: rows nearer than that
_LARGE = 256  # members from which a start that saves iterations is worth its own
# Columns of a product of matrices: larger ones leave the cache and wake the threads of the
# linear-algebra library, which on a shared machine wait for one another.
_BLOCK = 8192


def _moles_burnt(fuel: Fuel) -> dict[str, float]:
    """Change of the moles [mol] of each species when one kilogram of fuel burns."""
    carbon, hydrogen = fuel.carbon_atoms / fuel.molar_mass, fuel.hydrogen_atoms / fuel.molar_mass
    return {"CO2": carbon, "H2O": hydrogen / 2.0, "O2": -(carbon + hydrogen / 4.0)}


def _air_moles() -> dict[str, float]:
    """Moles [mol] of each species in one kilogram of dry air."""
    mass = sum(share * SPECIES[name].molar_mass for name, share in DRY_AIR.items())
    return {name: share / mass for name, share in DRY_AIR.items()}


def _mixture(moles: dict[str, float]) -> tuple[Array, Array]:
    """Rows of :func:`continuous_rows` for a mixture, in J and kg, both ranges."""
    rows = [np.array(continuous_rows(SPECIES[name])) * n for name, n in moles.items()]
    low, high = MOLAR_GAS_CONSTANT * np.sum(rows, axis=0)
    return low, high


def _picked(low: Array, high: Array) -> _Rows:
    """Coefficients of every set of properties asked for together, both ranges.

    Rows are air's heat capacity, enthalpy, entropy, slope of heat capacity (times temperature),
    then the fuel's share of each.
    """
    together: list[tuple[int, ...]] = [(_HEAT_CAPACITY,), (_ENTHALPY,), (_ENTROPY,)]
    together += [(_HEAT_CAPACITY, _ENTHALPY), (_HEAT_CAPACITY, _ENTROPY)]
    together += [(_HEAT_CAPACITY, _ENTHALPY, _SLOPE)]
    together += [(*rows, *(_BURNT + row for row in rows)) for rows in list(together)]
    return {rows: (low[list(rows)], high[list(rows)]) for rows in together}


@dataclass(frozen=True)
class RealGas:
    """Air and lean products of one fuel; see the module for method, range and source."""

    fuel: Fuel
    lowest_temperature: float = 180.0
    highest_temperature: float = 2500.0
    _air_constant: float = field(init=False, repr=False, compare=False)
    _fuel_constant: float = field(init=False, repr=False, compare=False)
    _rows: _Rows = field(init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        air, burnt = _air_moles(), _moles_burnt(self.fuel)
        low, high = zip(_mixture(air), _mixture(burnt), strict=True)
        set_field = object.__setattr__
        set_field(self, "_air_constant", MOLAR_GAS_CONSTANT * sum(air.values()))
        set_field(self, "_fuel_constant", MOLAR_GAS_CONSTANT * sum(burnt.values()))
        set_field(self, "_rows", _picked(np.concatenate(low), np.concatenate(high)))

    @property
    def stoichiometric_fuel_air_ratio(self) -> float:
        """Fuel-air ratio that leaves no oxygen."""
        return _air_moles()["O2"] / -_moles_burnt(self.fuel)["O2"]

    def gas_constant(self, fuel_air_ratio: ArrayLike, section: Section = "hot") -> Array:
        f = np.asarray(fuel_air_ratio, dtype=np.float64)
        return (self._air_constant + f * self._fuel_constant) / (1.0 + f)

    def heat_capacity(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section = "hot"
    ) -> Array:
        return self._properties(temperature, fuel_air_ratio, (_HEAT_CAPACITY,))[0]

    def enthalpy(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section = "hot"
    ) -> Array:
        return self._properties(temperature, fuel_air_ratio, (_ENTHALPY,))[0]

    def entropy(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section = "hot"
    ) -> Array:
        return self._properties(temperature, fuel_air_ratio, (_ENTROPY,))[0]

    def temperature_from_enthalpy(
        self,
        enthalpy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section = "hot",
        guess: ArrayLike | None = None,
    ) -> Array:
        target = np.asarray(enthalpy, dtype=np.float64)
        if guess is None:
            guess = 298.15 + target / (1010.0 + 9e-5 * np.clip(target, -1e5, 3e6))

        def step(temperature: Array, target: Array, ratio: Array) -> Array:
            cp, h = self._properties(temperature, ratio, (_HEAT_CAPACITY, _ENTHALPY))
            return (target - h) / (cp * temperature)

        return _settle(step, guess, target, fuel_air_ratio)

    def temperature_from_entropy(
        self,
        entropy: ArrayLike,
        fuel_air_ratio: ArrayLike,
        section: Section = "hot",
        guess: ArrayLike | None = None,
    ) -> Array:
        target = np.asarray(entropy, dtype=np.float64)
        if guess is None:
            guess = 298.15 * np.exp(np.clip((target - 6700.0) / 1120.0, -0.8, 2.4))

        def step(temperature: Array, target: Array, ratio: Array) -> Array:
            cp, s = self._properties(temperature, ratio, (_HEAT_CAPACITY, _ENTROPY))
            return np.expm1(np.minimum(np.maximum((target - s) / cp, -0.7), 0.7))

        return _settle(step, guess, target, fuel_air_ratio)

    def critical_temperature(
        self, total_temperature: ArrayLike, fuel_air_ratio: ArrayLike, section: Section = "hot"
    ) -> Array:
        """Solves ``h(T) + gamma R T / 2 = h(T_total)``, the speed of sound being the flow's."""
        total = np.asarray(total_temperature, dtype=np.float64)
        gas_constant = self.gas_constant(fuel_air_ratio)
        cp, target = self._properties(total, fuel_air_ratio, (_HEAT_CAPACITY, _ENTHALPY))
        guess = total * 2.0 / (cp / (cp - gas_constant) + 1.0)

        def step(temperature: Array, target: Array, ratio: Array) -> Array:
            gas_constant = self.gas_constant(ratio)
            cp, h, slope = self._properties(temperature, ratio, (_HEAT_CAPACITY, _ENTHALPY, _SLOPE))
            less = cp - gas_constant
            half_sound = 0.5 * gas_constant * cp / less  # half the speed of sound squared over T
            excess = h + half_sound * temperature - target
            # d(gamma)/d(ln T) = -R T (d cp / d T) / (cp - R)^2
            gain = cp + half_sound - 0.5 * gas_constant**2 * slope / less**2
            return -excess / (gain * temperature)

        return _settle(step, guess, target, fuel_air_ratio)

    def fuel_air_ratio_burnt(
        self,
        enthalpy_in: ArrayLike,
        temperature_out: ArrayLike,
        heat_release: ArrayLike,
        section: Section = "hot",
    ) -> Array:
        at = np.asarray(temperature_out, dtype=np.float64)
        air, burnt = self._sums(at, (_ENTHALPY, _BURNT + _ENTHALPY))
        needed = air - np.asarray(enthalpy_in, dtype=np.float64)
        ratio: Array = needed / (np.asarray(heat_release, dtype=np.float64) - burnt)
        return ratio

    def _properties(
        self, temperature: ArrayLike, fuel_air_ratio: ArrayLike, which: tuple[int, ...]
    ) -> list[Array]:
        """Properties of the mixture in the order of ``which``."""
        at = np.asarray(temperature, dtype=np.float64)
        f = np.asarray(fuel_air_ratio, dtype=np.float64)
        if f.ndim == 0 and f == 0.0:
            return list(self._sums(at, which))
        sums = self._sums(at, (*which, *(_BURNT + row for row in which)))
        whole = 1.0 + f
        count = len(which)
        return [(sums[row] + f * sums[count + row]) / whole for row in range(count)]

    def _sums(self, temperature: Array, rows: tuple[int, ...]) -> Array:
        """Air's properties, and what burning a kilogram of fuel adds, (len(rows),) + shape."""
        low, high = self._rows[rows]
        flat = temperature.ravel()
        values = np.empty((len(rows), flat.size))
        for begin in range(0, flat.size, _BLOCK):
            block = slice(begin, begin + _BLOCK)
            values[:, block] = _in_range(low, high, flat[block])
        return values.reshape(len(rows), *temperature.shape)


def _in_range(low: Array, high: Array, temperature: Array) -> Array:
    """Polynomials of the range that each temperature (N,) is in, (rows, N)."""
    powers = basis(temperature)
    if temperature.max() <= RANGE_JOINT:  # not so where one of them is no number
        return low @ powers
    if temperature.min() > RANGE_JOINT:
        return high @ powers
    return np.where(temperature > RANGE_JOINT, high @ powers, low @ powers)


_Step = Callable[[Array, Array, Array], Array]


def _settle(step: _Step, guess: ArrayLike, target: Array, fuel_air_ratio: ArrayLike) -> Array:
    """Newton's iteration on relative steps of temperature.

    It ends when every relative step has come below 1e-6: Newton squares an error, so that it then
    is round-off. A target without an answer ends at a bound, outside the range. Rows of a large
    stack that start alike, as the trials of a derivative do, are started where the first ended.
    """
    ratio = np.asarray(fuel_air_ratio, dtype=np.float64)
    shape = np.broadcast_shapes(np.shape(guess), target.shape)
    temperature = np.array(np.broadcast_to(guess, shape), dtype=np.float64)
    if len(shape) == 2 and shape[0] > 1 and shape[1] >= _LARGE:
        change = temperature / temperature[0]
        if not (np.abs(change - 1.0) > _ALIKE).any():
            first = _first_row(shape, target), _first_row(shape, ratio)
            temperature = change * _iterate(step, temperature[0], *first)
    return _iterate(step, temperature, target, ratio)


def _first_row(shape: tuple[int, ...], array: Array) -> Array:
    return array[0] if array.shape == shape else array


def _iterate(step: _Step, temperature: Array, target: Array, ratio: Array) -> Array:
    for _ in range(_MOST_ITERATIONS):
        relative = np.minimum(np.maximum(step(temperature, target, ratio), -0.5), 1.0)
        temperature = temperature + temperature * relative
        temperature = np.minimum(np.maximum(temperature, _COLDEST_TRIAL), _HOTTEST_TRIAL)
        if not (np.abs(relative) > _LAST_STEP).any():
            break
    return temperature
