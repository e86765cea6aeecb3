"""Steady flight at one point of the envelope, for many members at once: level, climb, turn."""
