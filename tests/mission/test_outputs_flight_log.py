"""The terminal log as text, on a flight made up by hand whose numbers can be worked out."""

from __future__ import annotations

from dataclasses import replace

import pytest
from small_flight import SETTING, failed_flight, overloaded_flight, segment, small_flight, steps

from mission.outputs.flight_log import flight_log
from mission.outputs.page import as_text
from mission.outputs.segment_rows import bar, thrust_share_text
from mission.outputs.units import METRIC, TRADE
from mission.outputs.wording import CAUTION, plain_characters
from mission.results import Flight

WIDTHS = (80, 100)


def log(flight: Flight, width: int = 100, **options: object) -> str:
    """The log as text."""
    return as_text(flight_log(flight, SETTING, width=width, **options), width)  # type: ignore[arg-type]


HEAD = """\
short hop
paper plane, 2 × paper engine, payload 1,500 kg, ISA+10, still air

block fuel  560.0 kg, give or take 0.25 kg of integration
block time  26.7 min (27 min)
fuel        enough, fuel margin 0.0 kg: 1,200.0 kg loaded as needed, 640.0 kg left, 640.0 kg of it
            reserves
doubt       Breguet equation -0.20 % on long cruise, -1.00 % on the whole trip (most of it climb)

Segments
"""  # noqa: RUF001


def test_answer_and_doubt_stand_first() -> None:
    assert log(small_flight()).startswith(HEAD)


# Taxi: 60 of 560 kg in 10 min, 0.1 kg/s for 4 kN. Cruise: 500 of 560 kg, 1,000 s, 200 km, 20 of
# 30 kN, 0.5 kg/s / 20 kN = 25 mg/(N s), 200 m/s / 0.5 kg/s = 0.4 km/kg. Hold: 360 kg after them,
# 10 of 40 kN, 0.2 kg/s / 10 kN = 20 mg/(N s), 0.5 km/kg. Left: mass less 8,800 kg.
SEGMENTS = """\
Segments
  segment          fuel              share of time dist.  FL  Mach
                     kg               block %  min    km
  ----------------------------------------------------------------
  taxi             60.0 ##               10.7 10.0   0.0 000 0.000
  long cruise     500.0 ##############'  89.3 16.7 200.0 350 0.700
  ----------------------------------------------------------------
  block total     560.0                 100.0 26.7 200.0
  ----------------------------------------------------------------
  reserve flight:
  final hold      360.0 ##########'      64.3 30.0   0.0 015 0.300

  segment          mass thrust   sfc  L/D    SAR    left
                      t      %   mg/       km/kg      kg
                               (N s)
  ------------------------------------------------------
  taxi            9.940   idle 25.00    -      - 1,140.0
  long cruise     9.440     67 25.00 16.0 0.4000   640.0
  ------------------------------------------------------
  block total                                      640.0
  ------------------------------------------------------
  reserve flight:
  final hold      9.080     25 20.00 15.0 0.5000   280.0
  FL flight level, sfc specific fuel consumption, L/D lift-to-drag ratio, SAR specific air range: at
  the end of the segment. Thrust is a share of the segment's rating.
"""


def test_a_row_shows_fuel_first_then_the_state_at_its_end() -> None:
    assert SEGMENTS in plain_characters(log(small_flight()), "ascii")


def test_trade_units_reach_every_column() -> None:
    text = log(small_flight(), units=TRADE)
    cruise = [line.split() for line in text.splitlines() if line.strip().startswith("long cruise")]
    # 500 kg = 1,102 lb; 200 km = 108.0 nmi; 9,440 kg = 20,812 lb; 25 mg/(N s) = 0.883 lb/(lbf h);
    # 0.4 km/kg = 0.0980 nmi/lb; 640 kg = 1,411 lb.
    cells = cruise[0][2:] + (cruise[1][2:] if "67" not in cruise[0] else [])
    for cell in ("1,102", "108.0", "35,000", "20,812", "0.883", "0.0980", "1,411"):
        assert cell in cells
    assert "kg" not in text.split("Assumed")[0].replace("kg of integration", "")


@pytest.mark.parametrize("width", WIDTHS)
@pytest.mark.parametrize("units", [METRIC, TRADE])
@pytest.mark.parametrize("flight", [small_flight(), failed_flight(), overloaded_flight()])
def test_nothing_is_wider_than_the_screen_nor_cut_off(
    flight: Flight, units: object, width: int
) -> None:
    text = log(flight, width, units=units, with_steps=True)
    assert max(len(line) for line in text.splitlines()) <= width
    assert "…" not in text
    assert "\x1b" not in text


@pytest.mark.parametrize("width", WIDTHS)
def test_every_part_is_there_in_order(width: int) -> None:
    text = log(small_flight(), width)
    titles = ["Segments", "Reserves", "Totals", "Cross-check by the Breguet equation", "Margins",
              "Assumed, as no file states it", "Warnings"]  # fmt: skip
    places = [text.splitlines().index(title) for title in titles]
    assert places == sorted(places)
    assert " ".join(text.split()).endswith(CAUTION)


def test_styles_are_bold_and_dim_only() -> None:
    screen = flight_log(small_flight(), SETTING)
    text = as_text(screen, 100, with_styles=True)
    codes = {part.split("m")[0] for part in text.split("\x1b[")[1:]}
    assert codes == {"0", "1", "2"}


def test_reserves_say_what_carrying_them_costs() -> None:
    lines = log(small_flight()).splitlines()
    line = next(line for line in lines if line.startswith("  final reserve"))
    assert line.split() == ["final", "reserve", "360.0", "5.0", "30", "min", "hold,", "flown"]
    assert next(line for line in lines if "all reserves" in line).split()[-1] == "640.0"


def test_least_margin_is_marked() -> None:
    """60 of 9,500 kg is less room than half of the thrust."""
    lines = log(small_flight()).split("Margins")[1].splitlines()
    line = next(line for line in lines if "landing mass" in line)
    assert line.split()[2:6] == ["9,440", "9,500", "kg", "0.6"]
    assert line.endswith("(least of all)")


def test_causes_stand_in_the_order_of_their_weight() -> None:
    text = " ".join(log(small_flight()).split())
    assert "-1.00 climb +12, descent -7.00, loiter 0" in text


def test_steps_are_numbered_from_the_start_of_each_segment() -> None:
    text = log(small_flight(), with_steps=True)
    body = text.split("Steps of long cruise")[1].split("Steps of")[0].splitlines()
    numbered = [line.split() for line in body if line.strip()[:1].isdigit()]
    assert [cells[0] for cells in numbered] == ["0", "1", "2"]
    assert [cells[1] for cells in numbered] == ["10.00", "18.33", "26.67"]
    assert "Steps of" not in log(small_flight())


def test_a_failure_ends_the_log_at_its_step() -> None:
    text = log(failed_flight())
    row = next(line for line in text.splitlines() if "long cruise, to step 1" in line).split()
    # Half of the cruise: 250 of 310 kg burnt, 500 s, 100 km, 890 kg left.
    assert row[5] == "250.0"
    assert row[7:10] == ["80.6", "8.3", "100.0"]
    assert row[-1] == "890.0"
    assert "final hold" not in text
    assert "Totals" not in text


def test_a_failure_is_stated_with_numbers_units_and_advice() -> None:
    text = " ".join(log(failed_flight()).split())
    assert (
        "Cannot be flown: thrust at cruise rating against drag: 20.00 kN is below 25.00 kN, by "
        '5.00 kN (20.0 %); in "long cruise" at step 1'
    ) in text
    assert '"long cruise", step 1 of 2: FL350, Mach 0.700, 9.690 t, 18.3 min from the' in text
    assert "what to try fly lower" in text


def test_a_mass_that_fails_before_the_start_leaves_the_whole_log() -> None:
    text = log(overloaded_flight())
    assert "Segments, as they would be without the limit that fails" in text
    assert "long cruise" in text
    assert "Totals" in text
    assert "ramp mass: 10,000 kg is above 9,800 kg, by 200 kg (2.0 %)" in text


def test_given_fuel_tells_how_much_is_beyond_the_reserves() -> None:
    total = replace(small_flight().totals, fuel_left=700.0, fuel_margin=60.0)
    flight = replace(small_flight(), totals=total)
    setting = replace(SETTING, is_fuel_as_needed=False, headwind=-10.0)
    text = " ".join(as_text(flight_log(flight, setting), 100).split())
    assert "fuel margin 60.0 kg: 1,200.0 kg loaded as given, 700.0 kg left, 640.0 kg of it" in text
    assert "tailwind 10 m/s" in text


def test_names_in_files_are_shown_as_they_are() -> None:
    """Brackets are not markup."""
    flight = replace(small_flight(), mission="[bold]hop[/bold]")
    assert log(flight).startswith("[bold]hop[/bold]\n")


@pytest.mark.parametrize(
    ("share", "expected"),
    [(0.0, ""), (1e-6, "▏"), (0.5, "████"), (1.0, "████████"), (1.2, "████████"), (0.51, "████")],
)
def test_bar_is_as_long_as_its_share(share: float, expected: str) -> None:
    assert bar(share, 8).rstrip("▏") == expected.rstrip("▏")
    assert (bar(share, 8) == "") == (share == 0.0)


def test_a_slower_end_of_a_change_of_speed_is_idle() -> None:
    """A level change of speed downwards is flown at idle, whatever rating it names."""
    common = {"altitude": 3000.0, "mach": 0.4, "mass": [9000.0, 8990.0], "lift_to_drag": 15.0}
    flown = steps(elapsed=[0.0, 60.0], speed=150.0, thrust=900.0, fuel_flow=0.1,
                  rating_thrust=900.0, **common)  # type: ignore[arg-type]  # fmt: skip
    slower = replace(flown, true_airspeed=flown.true_airspeed * [1.0, 0.9])
    faster = replace(flown, true_airspeed=flown.true_airspeed * [1.0, 1.1])
    row = segment("bridge", "acceleration", "climb", slower, distance=9e3)
    assert thrust_share_text(row) == "idle"
    assert thrust_share_text(replace(row, steps=faster)) == "100"
