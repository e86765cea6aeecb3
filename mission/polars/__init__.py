"""Drag polars by kind: a parabola, a parabola that changes with Mach number, a table."""
