"""From the mission file to spans: segments laid one after another, jumps bridged or refused."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from typing import Literal

from engine.errors import InputRefused
from mission.aircraft import Aircraft
from mission.march.span import Span, SpeedRule
from mission.march.sweep import Parts
from mission.mission_file import AlternateTable, Mission, MissionFile
from mission.segments import AnySegment
from mission.segments.acceleration import speed_span
from mission.segments.approach import approach_speed
from mission.segments.climb import Climb
from mission.segments.cruise import Cruise
from mission.segments.descent import APPROACH_HEIGHT, Descent
from mission.segments.here import Here
from mission.segments.loiter import Loiter
from mission.segments.schedule import is_same_speed

HOLD_HEIGHT = APPROACH_HEIGHT  # 1,500 ft: ICAO Annex 6 Part I, 4.3.6.3 (from memory)
_AIRBORNE = ("climb", "acceleration", "cruise", "loiter", "descent", "approach")


@dataclass(frozen=True)
class Row:
    """One row of the log: a segment of the file, or a bridge between two."""

    name: str
    kind: str
    purpose: Literal["mission", "reserve"]


@dataclass(frozen=True)
class FlightPlan:
    """Rows of the log and the spans that fly them."""

    rows: tuple[Row, ...]
    parts: Parts


@dataclass
class _Laid:
    """What has been laid so far."""

    here: Here
    rows: list[Row] = field(default_factory=list)
    spans: list[Span] = field(default_factory=list)

    def lay(self, segment: AnySegment, purpose: Literal["mission", "reserve"]) -> None:
        """One segment, with a bridge before it where the speed jumps."""
        if self.here.on_ground and segment.kind in _AIRBORNE:
            raise InputRefused("the aircraft stands on the ground; put a take-off before it")
        self.bridge(segment, purpose)
        self.here = replace(self.here, row=len(self.rows))
        spans, self.here = segment.lay(self.here)
        self.spans += spans
        self.rows.append(Row(segment.name, segment.kind, purpose))

    def bridge(self, segment: AnySegment, purpose: Literal["mission", "reserve"]) -> None:
        """A level change of speed of its own where two segments do not meet in speed."""
        before, after = self.here.speed, segment.first_speed(self.here)
        altitude = self.here.pressure_altitude
        if before is None or after is None or altitude is None or self.here.on_ground:
            return
        if _same_speed(before, after, altitude):
            return
        self.here = replace(self.here, row=len(self.rows))
        rating = "maximum_continuous" if segment.kind == "cruise" else "climb"
        if isinstance(segment, Climb):
            rating = segment.rating
        self.spans.append(speed_span(self.here, altitude, before, after, rating))
        self.rows.append(Row(f"bridge to {segment.name}", "acceleration", purpose))
        self.here = replace(self.here, speed=after)


def _same_speed(before: SpeedRule, after: SpeedRule, altitude: float) -> bool:
    """Whether two rules give one Mach number at an altitude; not known where mass decides."""
    if before.depends_on_mass or after.depends_on_mass:
        return before == after and before.kind == "lift_coefficient"
    return is_same_speed(before, after, altitude)


def lay_out(
    mission: Mission, aircraft: Aircraft, cruise_climb_ends: Mapping[int, float]
) -> FlightPlan:
    """All rows and spans of a mission and its reserve flight.

    ``cruise_climb_ends`` gives, by row, the pressure altitude [m] at which a cruise-climb was
    found to end, so that what follows begins there. Raises :class:`InputRefused` naming the
    segment.
    """
    written = mission.written
    laid = _Laid(
        Here(
            aircraft=aircraft,
            pressure_altitude=None,
            speed=None,
            on_ground=False,
            departure_elevation=written.departure.elevation,
            destination_elevation=written.destination.elevation,
            distance=written.distance,
        )
    )
    for number, segment in enumerate(written.segment, 1):
        try:
            laid.lay(segment, "mission")
        except InputRefused as refusal:
            key = f'segment {number} "{segment.name}"'
            raise InputRefused(refusal.what, where=mission.where, key=key) from None
        if laid.here.pressure_altitude is None and segment.kind == "cruise":
            end = cruise_climb_ends.get(len(laid.rows) - 1)
            laid.here = replace(laid.here, pressure_altitude=end or laid.spans[-1].start_altitude)
    mission_spans = list(laid.spans)
    _refuse_rest(mission, mission_spans)
    laid.spans = []
    try:
        alternate_distance = _lay_reserves(written, laid)
    except InputRefused as refusal:
        raise InputRefused(refusal.what, where=mission.where, key="reserves.alternate") from None
    return FlightPlan(
        tuple(laid.rows),
        Parts(
            tuple(mission_spans),
            tuple(replace(span, is_reserve=True) for span in laid.spans),
            written.distance,
            alternate_distance,
        ),
    )


def _refuse_rest(mission: Mission, spans: list[Span]) -> None:
    """The mission's distance and exactly one cruise for the rest of it go together."""
    rests = [s for s in spans if s.march == "distance" and s.extent is None]
    if len(rests) > 1:
        raise InputRefused(
            'two cruises have distance = "rest"; give all but one a distance',
            where=mission.where,
            key="segment",
        )
    if mission.written.distance is not None and not rests:
        raise InputRefused(
            f"= {mission.written.distance / 1852.0:,.0f} nmi is given, but no cruise has "
            'distance = "rest" to meet it',
            where=mission.where,
            key="distance",
        )


def _lay_reserves(written: MissionFile, laid: _Laid) -> float | None:
    """The reserve flight: alternate from a go-around, then the final hold; its distance, if any."""
    reserves = written.reserves
    elevation = written.destination.elevation
    start = replace(
        laid.here,
        pressure_altitude=None,
        speed=None,
        on_ground=False,
        is_reserve=True,
        departure_elevation=elevation,
    )
    distance: float | None = None
    if reserves.alternate is not None:
        alternate = reserves.alternate
        distance = alternate.distance
        elevation = elevation if alternate.elevation is None else alternate.elevation
        laid.here = replace(
            start,
            pressure_altitude=start.departure_elevation,
            speed=approach_speed(start),
            distance=distance,
            destination_elevation=elevation,
        )
        for segment in _alternate_segments(alternate, elevation):
            laid.lay(segment, "reserve")
    if reserves.final_reserve_time > 0.0:
        if reserves.alternate is None:
            laid.here = start
        hold = Loiter.model_construct(
            kind="loiter",
            name="final reserve hold",
            time=reserves.final_reserve_time,
            pressure_altitude=elevation + HOLD_HEIGHT,
        )
        laid.lay(hold, "reserve")
    return distance


def _alternate_segments(alternate: AlternateTable, elevation: float) -> list[AnySegment]:
    """Climb, cruise and descent to the alternate."""
    return [
        Climb.model_construct(
            kind="climb",
            name="alternate climb",
            to=alternate.pressure_altitude,
            calibrated_airspeed=alternate.calibrated_airspeed,
            mach=alternate.mach,
            limited_below_10000_ft=alternate.limited_below_10000_ft,
        ),
        Cruise.model_construct(
            kind="cruise", name="alternate cruise", distance="rest", mach=alternate.mach
        ),
        Descent.model_construct(
            kind="descent",
            name="alternate descent",
            to=elevation + HOLD_HEIGHT,
            calibrated_airspeed=alternate.calibrated_airspeed,
            mach=alternate.mach,
            limited_below_10000_ft=alternate.limited_below_10000_ft,
        ),
    ]
