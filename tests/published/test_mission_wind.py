"""There and back in a wind that stays: always longer, and always dearer, than in still air."""

from __future__ import annotations

from math import sqrt

import pytest
from hypothesis import given
from hypothesis import strategies as st
from mission_files import Content, mission_content
from mission_strategies import FEW, flown

from mission.results import Flight

OWN = (
    "Distance over ground speed: out against a wind w and back with it take 1 / (1 - (w/V)^2) of "
    "the time in still air; own arithmetic"
)
pytestmark = pytest.mark.source(OWN)

SPEED = 0.72 * sqrt(1.4 * 287.05287 * 216.65)  # m/s, isothermal layer of ISO 2533:1975
SCHEDULE: Content = {"calibrated_airspeed": "280 kt", "mach": 0.72}
WINDS = st.floats(5.0, 60.0)  # m/s
KILOMETRES = st.integers(500, 1800)
SIGNS = st.sampled_from([1.0, -1.0])


def there_and_back(segments: list[Content], kilometres: int, headwind: float) -> Flight:
    """Two legs of one distance, the wind from ahead on the first and from behind on the second."""
    legs = [
        {"name": name, "distance": f"{kilometres} km", "headwind": f"{wind!r} m/s"}
        for name, wind in (("out", headwind), ("back", -headwind))
    ]
    flight = flown(mission_content(segments, leg=legs))
    assert flight.failure is None
    return flight


@given(kilometres=KILOMETRES, wind=WINDS, sign=SIGNS)
@FEW
def test_level_cruise_out_and_back(kilometres: int, wind: float, sign: float) -> None:
    """Time by the closed form; and fuel is that of the air distance, whichever way comes first."""
    cruise: Content = {"kind": "cruise", "mach": 0.72, "distance": "rest"}
    cruises = [
        cruise | {"pressure_altitude": "12 km"},
        cruise | {"name": "back", "starts_leg": "back"},
    ]
    found = there_and_back(cruises, kilometres, sign * wind).totals
    longer = 1.0 / (1.0 - (wind / SPEED) ** 2)
    assert found.block_time == pytest.approx(2e3 * kilometres / SPEED * longer, rel=1e-9)
    assert found.ground_distance == pytest.approx(2e3 * kilometres, rel=1e-9)
    far = cruise | {"distance": f"{2e3 * kilometres * longer!r} m", "pressure_altitude": "12 km"}
    still = flown(mission_content([far])).totals
    assert found.block_fuel == pytest.approx(still.block_fuel, rel=1e-8)


@given(kilometres=KILOMETRES, wind=WINDS, sign=SIGNS)
@FEW
def test_whole_flights_out_and_back(kilometres: int, wind: float, sign: float) -> None:
    """With a climb and a descent each way, where the wind blows too."""

    def leg(name: str) -> list[Content]:
        return [
            {"kind": "climb", "to": "FL370", **SCHEDULE},
            {"kind": "cruise", "name": name, "distance": "rest"},
            {"kind": "descent", "to": "1500 ft", **SCHEDULE},
        ]

    out, back = leg("out"), leg("back")
    back[0] |= {"starts_leg": "back"}
    windy, still = (
        there_and_back(out + back, kilometres, each).totals for each in (sign * wind, 0.0)
    )
    assert windy.block_time > still.block_time
    assert windy.block_fuel > still.block_fuel
