"""Propeller: thrust from shaft power by momentum theory, times a constant profile factor.

The disc puts the power ``T (V + v)`` into the air that passes it, with ``T = 2 rho A v (V + v)``;
of shaft power P that is a constant share, what blade drag leaves, fixed by the efficiency known at
one flight condition. Thrust so stays finite at rest. A real propeller's share is lower there, for
its blades work far from where they are made for, so that static thrust comes out high. At high
Mach number the share falls as efficiency does after Mattingly, Heiser and Pratt.

Sources: Rankine's and Froude's momentum theory, as in H. Glauert, "Airplane Propellers", in W. F.
Durand (ed.), Aerodynamic Theory, vol. IV, 1935; J. D. Mattingly, W. H. Heiser and D. T. Pratt,
Aircraft Engine Design, 2nd ed., AIAA, section on turboprops; D. P. Raymer, Aircraft Design: A
Conceptual Approach, propulsion, feathered propeller (all from memory).

Symbols: P shaft power, T thrust, V true airspeed, v induced velocity at the disc, A its area, rho
density; w = V + v.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from engine.parts.stream import Array

HIGHEST_MACH = 0.85  # to which the fall of efficiency is given
_FALL_BEGINS = 0.7
_MOST_STEPS = 40
_LAST_STEP = 1e-9  # Newton squares an error, so that it then is round-off


@dataclass(frozen=True)
class Propeller:
    """What a propeller is.

    Attributes
    ----------
    diameter : [m]
    profile_factor : share of shaft power that reaches the air, below Mach 0.7
    solidity : area of all blades over that of the disc
    """

    diameter: float
    profile_factor: float | Array
    solidity: float

    @property
    def disc_area(self) -> float:
        """[m2]."""
        return float(0.25 * np.pi * self.diameter**2)


@dataclass(frozen=True)
class PropellerThrust:
    """Thrust [N] and what the propeller loses of its shaft power [W]: P = T V + both losses."""

    thrust: Array
    induced_loss: Array
    profile_loss: Array


def efficiency_fall(mach: Array) -> Array:
    """Efficiency over that below Mach 0.7; given up to Mach 0.85, the line is kept on beyond."""
    return 1.0 - np.maximum(np.asarray(mach) - _FALL_BEGINS, 0.0) / 3.0


def profile_factor(
    disc_area: float,
    efficiency: float,
    shaft_power: Array,
    true_airspeed: Array,
    density: Array,
    mach: Array,
) -> Array:
    """Profile factor of a propeller of known efficiency ``T V / P`` at one flight condition.

    Above 1 the efficiency is more than the disc could have without blade drag.
    """
    thrust = efficiency * shaft_power / true_airspeed
    loading = 2.0 * thrust / (density * disc_area)
    past_disc = 0.5 * (true_airspeed + np.sqrt(true_airspeed**2 + loading))
    return efficiency * past_disc / (true_airspeed * efficiency_fall(mach))


def drive(
    propeller: Propeller, shaft_power: Array, true_airspeed: Array, density: Array, mach: Array
) -> PropellerThrust:
    """The propeller at a shaft power [W].

    Negative power, which only an iteration visits, gives the negative thrust of its amount.
    """
    share = propeller.profile_factor * efficiency_fall(mach)
    useful = share * shaft_power
    cubed = np.abs(useful) / (2.0 * density * propeller.disc_area)
    past_disc = _velocity_past_disc(true_airspeed, cubed)
    thrust = np.where(past_disc > 0.0, useful / np.where(past_disc > 0.0, past_disc, 1.0), 0.0)
    return PropellerThrust(
        thrust,
        useful - thrust * true_airspeed,
        (1.0 - share) * shaft_power,
    )


def feathered_drag(propeller: Propeller, true_airspeed: Array, density: Array) -> Array:
    """Drag [N] of the propeller of an engine that is out, blades feathered (Raymer)."""
    pressure = 0.5 * density * true_airspeed**2
    return 0.1 * propeller.solidity * propeller.disc_area * pressure


def _velocity_past_disc(speed: Array, cubed: Array) -> Array:
    """Root w [m/s] of ``w^2 (w - V) = c``, c >= 0, by Newton from above, which it never leaves."""
    velocity = np.asarray(speed + np.cbrt(cubed))
    for _ in range(_MOST_STEPS):
        excess = velocity**2 * (velocity - speed) - cubed
        slope = velocity * (3.0 * velocity - 2.0 * speed)
        step = excess / np.where(slope > 0.0, slope, np.inf)
        velocity = velocity - step
        if not (step > _LAST_STEP * velocity).any():
            break
    return velocity
