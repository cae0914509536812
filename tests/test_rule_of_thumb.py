"""The planner by hand: what it chooses in small cases, and that it never breaks a rule."""

from dataclasses import replace
from datetime import UTC, date, datetime, time, timedelta
from functools import cache

import numpy as np
import pytest

from passplan.domain.mission import Mission
from passplan.domain.moments import DaysAway, Horizon, WeeklyHours
from passplan.domain.plan import Carried
from passplan.domain.requests import After, Command
from passplan.domain.satellite import DataKind, Partition, Satellite, Store
from tests.generated import START_FRACTION, WEEK, WeekKind, generated_week, goodput_rule
from tests.rough_sky import UsablePass, positions_teme, shadow_spans, usable_passes
from tests.rule_of_thumb import Choice, best_elevation_first, exchange
from tests.thumb_checks import Case, faults
from tests.tiny import tiny_mission

MONDAY = datetime(2026, 12, 7, tzinfo=UTC)
NOON = 43200
BACKLOG = Store(
    partitions=(Partition(name="main", size_byte=2e9),), kinds=(DataKind(name="images", on_board_byte=1e9),)
)
WEEKS: list[tuple[WeekKind | None, int, int]] = [
    ("easy", 2, 1),
    ("hard", 3, 1),
    ("hard", 4, 2),
    ("long-uplink", 2, 1),
    (None, 3, 1),
    (None, 5, 1),
]


@cache
def case(kind: WeekKind | None, seed: int, satellites: int = 1) -> Case:
    """Return a generated week, or a tiny mission when there is no kind."""
    mission, elements = generated_week(kind, seed, satellites) if kind else tiny_mission(seed)
    horizon = Horizon(week=WEEK, lookahead_h=mission.planning.lookahead_h)
    seconds = np.arange(0.0, horizon.end_s + 1.0)
    places = {name: (seconds, positions_teme(one, horizon, seconds)) for name, one in elements.items()}
    passes = usable_passes(mission.stations, horizon, places, mission.planning.least_contact_s)
    rule = goodput_rule(kind or "easy")
    return Case(
        mission=mission,
        horizon=horizon,
        passes=tuple(replace(one, rate_byte_s=rule(one.elevation_deg)) for one in passes),
        shadows={name: shadow_spans(horizon, *where) for name, where in places.items()},
        start_fraction=START_FRACTION,
    )


def planned(given: Case, *, by_peak: bool = False) -> list[Choice]:
    """Return the plan by hand."""
    starts = {sat.name: given.start_fraction for sat in given.mission.satellites}
    return best_elevation_first(
        given.mission, given.horizon, given.passes, given.shadows, starts, uplink_by_peak=by_peak
    )


@pytest.mark.parametrize(("kind", "seed", "satellites"), WEEKS)
def test_no_rule_is_broken(kind: WeekKind | None, seed: int, satellites: int) -> None:
    given = case(kind, seed, satellites)
    plan = planned(given)
    assert plan
    assert faults(given, plan) == []


def test_the_checks_see_what_looser_rules_would_do() -> None:
    """A plan made with one rule relaxed breaks that rule of the real mission."""
    given = case("hard", 3)
    real = given.mission
    few = replace(_one_battery(real, capacity_wh=4000.0), operators=real.operators[::3])
    always = (WeeklyHours(begin=time(0), end=time(0)),)
    loose: dict[str, tuple[Mission, Mission]] = {
        "no rest": (_everybody(few, rest_h=14.0), few),
        "cannot be at": (_spread(few, travel_min=600.0), _spread(few, travel_min=0.0)),
        "a day": (_everybody(few, most_duties_day=1), few),
        "a week": (_everybody(few, most_duties_week=4), few),
        "off duty": (few, _everybody(few, hours=always)),
        "may not run": (_everybody(few, may_control=False), few),
        "falls to": (_one_battery(real, floor_fraction=0.95, transmit_floor_fraction=0.95), real),
        "begins": (_one_battery(real, transmit_floor_fraction=0.95), real),
        "ends at": (_one_battery(real, charge_efficiency=0.9), real),
        "speaks with": (replace(few, planning=replace(few.planning, hand_over_gap_s=9000.0)), few),
        "window": (real, _all_commands(real, earliest_utc=None, deadline_utc=None)),
        "does not wait": (real, _all_commands(real, after=())),
        "too low": (_all_commands(real, least_elevation_deg=60.0), real),
    }
    for told, (strict, mission) in loose.items():
        plan = planned(replace(given, mission=mission))
        assert any(told in fault for fault in faults(replace(given, mission=strict), plan)), told


def _everybody(mission: Mission, **fields: object) -> Mission:
    return replace(mission, operators=tuple(replace(one, **fields) for one in mission.operators))  # type: ignore[arg-type]


def _one_battery(mission: Mission, **fields: object) -> Mission:
    sat = mission.satellites[0]
    return replace(mission, satellites=(replace(sat, battery=replace(sat.battery, **fields)),))  # type: ignore[arg-type]


def _all_commands(mission: Mission, **fields: object) -> Mission:
    return replace(mission, commands=tuple(replace(one, **fields) for one in mission.commands))  # type: ignore[arg-type]


def _spread(mission: Mission, travel_min: float) -> Mission:
    """Return the mission with its first operator alone, at every station."""
    codes = tuple(station.code for station in mission.stations)
    alone = replace(
        mission.operators[0], stations=codes, rest_h=0.0, travel_min=travel_min, most_duties_day=20
    )
    return replace(mission, operators=(alone,))


def sight(start_s: int, high_deg: float, station: str = "Q01", length_s: int = 400) -> UsablePass:
    """Return a pass that climbs from 10 deg in a straight line and falls again, at 500 byte/s."""
    rise = np.interp(np.arange(length_s + 1), [0, length_s / 2, length_s], [10.0, high_deg, 10.0])
    return UsablePass(
        satellite="Quill 1",
        station=station,
        start_s=start_s,
        peak_s=start_s + length_s // 2,
        end_s=start_s + length_s,
        elevation_deg=rise,
        rate_byte_s=np.full(length_s + 1, 500.0),
    )


def small(*passes: UsablePass, **fields: object) -> Case:
    """Return a case without shadow, of two stations with operators at any hour, no commands."""
    mission, _ = generated_week("hard", 1, stations=2, features=())
    free = replace(_everybody(mission, hours=(WeeklyHours(begin=time(0), end=time(0)),)), commands=())
    return Case(
        mission=replace(free, **fields),  # type: ignore[arg-type]
        horizon=Horizon(week=WEEK, lookahead_h=0.0),
        passes=passes,
        shadows={},
        start_fraction=START_FRACTION,
    )


def order(name: str, hours: tuple[float, float], **fields: object) -> Command:
    """Return a command of 50 s with a window in hours of the week."""
    plain = Command(
        name=name,
        satellite="Quill 1",
        exchange_s=50.0,
        earliest_utc=MONDAY + timedelta(hours=hours[0]),
        deadline_utc=MONDAY + timedelta(hours=hours[1]),
    )
    return replace(plain, **fields)  # type: ignore[arg-type]


def with_backlog(given: Case) -> Case:
    """Return the case with data without end on board."""
    sat: Satellite = replace(given.mission.satellites[0], store=BACKLOG)
    return replace(given, mission=replace(given.mission, satellites=(sat,)))


def test_of_two_overlapping_passes_the_higher_is_taken_whole() -> None:
    plan = planned(with_backlog(small(sight(NOON, 30.0), sight(NOON + 100, 31.0, "Q02"))))
    assert [(one.index, one.operator) for one in plan] == [(1, "Q02A")]
    down = plan[0].downlink
    assert down is not None
    assert (down.start_s, down.end_s) == (NOON + 130, NOON + 500)
    assert plan[0].carried == (Carried(kind="images", made_day=None, byte=370 * 500.0),)


def test_the_least_loaded_operator_serves() -> None:
    """Q01A takes the highest, so Q01B the next; then both rest 8 h and it is Q01C's turn."""
    passes = (sight(NOON, 80.0), sight(NOON + 10800, 70.0), sight(NOON + 21600, 60.0))
    assert [one.operator for one in planned(with_backlog(small(*passes)))] == ["Q01A", "Q01B", "Q01C"]


def test_nobody_serves_on_days_away() -> None:
    given = with_backlog(small(sight(NOON, 80.0), sight(NOON + 86400, 70.0)))
    away = (DaysAway(first_day=date(2026, 12, 7), last_day=date(2026, 12, 7)),)
    plan = planned(replace(given, mission=_everybody(given.mission, away=away)))
    assert [one.index for one in plan] == [1]


def test_an_empty_store_ends_the_downlink() -> None:
    """By hand: 30 byte/s made for 5430 s, then 5400 s between downlinks, at 500 byte/s: 325.8 and 324 s."""
    plan = planned(small(*(sight((n + 1) * 5400, 80.0 - n) for n in range(4))))
    assert [one.downlink.end_s - one.downlink.start_s for one in plan if one.downlink] == [326, 324, 324, 324]


def test_nobody_is_called_where_nothing_goes_up_or_comes_down() -> None:
    given = small(sight(NOON, 80.0))
    sat = replace(given.mission.satellites[0], store=Store(partitions=BACKLOG.partitions, kinds=()))
    assert planned(replace(given, mission=replace(given.mission, satellites=(sat,)))) == []


def test_commands_go_by_deadline_into_the_earliest_window_that_holds_them() -> None:
    """The second by deadline finds 350 - 7 * 50 s used up and goes to the next pass."""
    passes = (sight(NOON, 80.0), sight(NOON + 6000, 70.0))
    crowd = tuple(order(f"order {n}", (0.0, 30.0 - n)) for n in range(9))
    plan = planned(small(*passes, commands=crowd))
    assert [slot.command for slot in plan[0].uplink] == [f"order {n}" for n in (8, 7, 6, 5, 4, 3, 2)]
    assert [slot.command for slot in plan[1].uplink] == ["order 1", "order 0"]
    assert plan[0].uplink[0].start_s == NOON + 30


def test_uplink_by_the_peak_leaves_the_rest_of_the_pass_to_data() -> None:
    crowd = tuple(order(f"order {n}", (0.0, 30.0 - n)) for n in range(5))
    (contact,) = planned(small(sight(NOON, 80.0), commands=crowd), by_peak=True)
    assert [slot.end_s - NOON for slot in contact.uplink] == [80, 130, 180]


def test_commands_wait_for_others_for_height_and_for_charge() -> None:
    passes = (sight(NOON, 50.0), sight(NOON + 6000, 40.0))
    wants = (
        order("second", (0.0, 20.0), after=(After(command="first", order="after_contact"),)),
        order("first", (0.0, 24.0)),
        order("high", (0.0, 24.0), least_elevation_deg=30.0),
        order("full", (0.0, 24.0), least_charge_fraction=1.0),
        order("pair", (0.0, 24.0), two_people=True),
        order("orphan", (0.0, 24.0), after=(After(command="pair", order="after"),)),
    )
    plan = planned(small(*passes, commands=wants))
    first, then = ([slot.command for slot in one.uplink] for one in plan)
    assert first == ["first", "high", "full"]
    assert then == ["second"]
    # 10 deg rising to 50 deg in 200 s: 30 deg at 100 s
    assert plan[0].uplink[1].start_s == NOON + 100


def test_a_told_exchange_is_rounded_up_and_an_untold_one_counted() -> None:
    """By hand: up 0.3 s + 683 bits, reply 0.3 s + 2243 bits, both at 9600 bit/s, two turn-rounds of 0.3 s."""
    sat = small().mission.satellites[0]
    assert exchange(order("told", (0.0, 1.0), exchange_s=20.5), sat)[0] == 21
    length_s, reply_s = exchange(order("counted", (0.0, 1.0), exchange_s=None), sat)
    assert reply_s == pytest.approx(0.3 + 2243.35 / 9600.0, abs=1e-4)
    assert length_s == 2  # 0.371 + 0.534 + 0.6 = 1.505
