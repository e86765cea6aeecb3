"""Thermodynamic properties of air and combustion products."""

from engine.gas.interface import SECTIONS, Gas, Section
from engine.gas.real import DISSOCIATION_FELT_ABOVE, RealGas
from engine.gas.sectional import SectionalGas

__all__ = ["DISSOCIATION_FELT_ABOVE", "SECTIONS", "Gas", "RealGas", "Section", "SectionalGas"]
