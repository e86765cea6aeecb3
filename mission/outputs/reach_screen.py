"""How far with what payload, or how long on station: the answer, the curve, the table."""

from __future__ import annotations

import numpy as np
from rich.console import Group, RenderableType
from rich.text import Text

from mission.outputs.failure import failure_headline
from mission.outputs.page import Column, bullets, caution, note, pairs, ruled_table, section, words
from mission.outputs.terminal_plot import Axis, Label, plot
from mission.outputs.units import ABSENT, METRIC, Scale, Units, number
from mission.outputs.wording import hours_and_minutes
from mission.questions.reach import Point, Reach

_ROWS = 12  # of the table, corners among them
_HIGH = 12  # lines of the picture
_MARGIN = 26  # characters beside the picture, for numbers and the title of the axis across
_SMALL_ERROR = 10.0  # m or s; what is less is said to be less


def reach_screen(found: Reach, *, units: Units = METRIC, width: int = 100) -> Group:
    """Everything that a person reads about a boundary."""
    shown = _Shown(found, units)
    answer = shown.answer()
    parts: list[RenderableType] = [
        Text(found.mission, "bold"),
        Text(f"{found.aircraft}, {found.engine}, with all the fuel that can be loaded"),
        Text(),
        pairs(answer, strong=True),
        pairs([(f"{'doubt':<{max(len(label) for label, _ in answer)}}", shown.doubt())]),
    ]
    if len(found.flown) > 1:
        parts.append(section(shown.title, *(Text(line) for line in shown.picture(width))))
    parts.append(section("Points of the boundary", shown.table(), note(shown.legend())))
    failed = shown.failures()
    if failed:
        parts.append(section("What cannot be flown", bullets(failed)))
    return Group(*parts, caution())


class _Shown:
    """A boundary with the scales that all of its screen shares."""

    def __init__(self, found: Reach, units: Units) -> None:
        self.found, self.units = found, units
        flown = [point for point in found.points if point.totals is not None]
        totals = [point.totals for point in flown if point.totals is not None]
        self.distance = Scale.of(units.distance, [p.reach for p in found.points])
        self.payload = Scale.of(units.mass, [p.payload for p in found.points])
        self.fuel = Scale.of(units.mass, [total.loaded_fuel for total in totals])
        ramp = max((total.ramp_mass for total in totals), default=1.0)
        self.mass = Scale.of(units.gross_mass(ramp), [ramp], 5)
        self.by_time = bool(found.station)

    @property
    def title(self) -> str:
        """Title of the picture."""
        far = "radius" if self.found.is_radius else "range"
        if self.by_time:
            return f'Time at "{self.found.station}" against radius'
        return f"Payload against {far}"

    def answer(self) -> list[tuple[str, str]]:
        """The corners, a line each."""
        rows = []
        for point in self.found.corners:
            far = self.distance.full(point.reach)
            held = f"at the limit of {' and '.join(point.governs)}" if point.governs else ""
            what = self.payload.full(point.payload)
            if self.by_time:
                what = f"{number(point.station_time / 60.0, 1)} min "
                what += f"({hours_and_minutes(point.station_time)})"
            said = f"{what} at {far}" if self.by_time else f"{far} with {what}"
            if point.failure is not None:
                said += ", but it cannot be flown"
            rows.append((point.corner, f"{said}, {held}".rstrip(", ")))
        return rows

    def doubt(self) -> str:
        """How sure the reach is, and what the points share."""
        found = self.found
        unit = "s" if self.by_time else self.units.distance.name
        size = 1.0 if self.by_time else self.units.distance.size
        error = max(found.error, _SMALL_ERROR)
        less = "less than " if found.error < _SMALL_ERROR else ""
        said = f"steps halved move it by {less}{error / size:.2g} {unit} at most"
        if found.plans > 1:
            said += "; levels, paths and steps are chosen for masses 3 % apart and shared between"
        if found.unclosed:
            said += f"; {found.unclosed} points have fuel left that the search did not spend"
        return said

    def picture(self, width: int) -> list[str]:
        """The curve with its corners named."""
        flown = self.found.flown
        across = np.array([point.reach for point in flown]) / self.distance.unit.size
        up = np.array([self._up(point) for point in flown])
        labels = [
            Label(
                point.reach / self.distance.unit.size,
                self._up(point),
                point.corner,
                is_right=point is not flown[-1],
            )
            for point in flown
            if point.corner
        ]
        if not self.by_time:  # with less fuel the same payload goes less far
            across, up = np.append(0.0, across), np.append(up[0], up)
        unit = self.distance.unit.name
        far = Axis(unit, float(across.max()), _ticks(float(across.max())))
        named = "min" if self.by_time else f"payload, {self.payload.unit.name}"
        high = Axis(named, float(up.max()), _ticks(float(up.max())))
        return plot(across, up, (far, high), labels, (width - _MARGIN, _HIGH))

    def _up(self, point: Point) -> float:
        return point.station_time / 60.0 if self.by_time else point.payload / self.payload.unit.size

    def table(self) -> RenderableType:
        """About a dozen points, the corners among them."""
        units, fuel = self.units, self.fuel
        far = "radius" if self.found.is_radius else "range"
        table = ruled_table(
            [
                words("corner"),
                Column("on station\nmin" if self.by_time else f"payload\n{self.payload.unit.name}"),
                Column(f"{far}\n{self.distance.unit.name}"),
                Column(f"block fuel\n{fuel.unit.name}"),
                Column(f"loaded\n{fuel.unit.name}"),
                Column(f"reserves\n{fuel.unit.name}"),
                Column(f"take-off\n{self.mass.unit.name}"),
                Column(f"time\n{units.time.name}"),
                words("held by"),
            ],
            gap=1,
        )
        for point in _chosen(self.found.points):
            table.add_row(*self._row(point))
        return table

    def _row(self, point: Point) -> list[str]:
        first = (
            number(point.station_time / 60.0, 1)
            if self.by_time
            else self.payload.bare(point.payload)
        )
        held = "cannot be flown" if point.failure is not None else ", ".join(point.governs)
        total = point.totals
        if total is None:
            return [point.corner, first, *[ABSENT] * 6, held]
        return [
            point.corner,
            first,
            self.distance.bare(point.reach),
            self.fuel.bare(total.block_fuel),
            self.fuel.bare(total.loaded_fuel),
            self.fuel.bare(total.reserve_fuel),
            self.mass.bare(total.takeoff_mass),
            number(total.block_time / self.units.time.size, 1),
            held,
        ]

    def legend(self) -> str:
        """What holds the edges, and that reserves are aboard."""
        said = "Held by: what lets no more fuel be loaded. Reserves are aboard at every point."
        if self.found.top:
            said = f"The greatest payload is that of {self.found.top}. {said}"
        return said

    def failures(self) -> list[str]:
        """Why points cannot be flown, alike ones told once."""
        told: dict[str, int] = {}
        for point in self.found.points:
            if point.failure is None:
                continue
            text = point.failure
            reason = text if isinstance(text, str) else failure_headline(text, self.units)
            told[reason.split(":")[0]] = told.get(reason.split(":")[0], 0) + 1
        return [f"{reason}: {count} points" for reason, count in told.items()]


def _chosen(points: tuple[Point, ...]) -> list[Point]:
    """Every so many points, and the corners."""
    stride = max(1, round(len(points) / _ROWS))
    return [p for i, p in enumerate(points) if p.corner or i % stride == 0]


def _ticks(end: float) -> tuple[tuple[float, str], ...]:
    """Round numbers from zero to an end, four or five of them."""
    rough = end / 4.0
    power = 10.0 ** np.floor(np.log10(rough)) if rough > 0.0 else 1.0
    step = float(power * min((1.0, 2.0, 2.5, 5.0, 10.0), key=lambda m: abs(m * power - rough)))
    values = np.arange(0.0, end * (1.0 + 1e-9), step)
    decimals = 0 if step >= 1.0 else 1
    return tuple((float(value), number(float(value), decimals)) for value in values)
