"""What a mission is told when it is well written and cannot be flown."""

from __future__ import annotations

from engine.errors import InputRefused


class CannotBeFlown(InputRefused):
    """No flight of the mission exists; raised where there is no log to show it in."""
