"""A good plan is broken in one way after the other; each time just that rule must be found broken."""

from dataclasses import replace
from datetime import date, time

import pytest

from passplan.domain.moments import DaysAway, WeeklyHours
from passplan.domain.plan import Carried
from passplan.domain.requests import After, Window
from passplan.domain.rules import Rule
from passplan.verify import check
from passplan.verify.opinion import CHECKS
from tests.verify.changes import (
    FREE_HOUR,
    Change,
    around,
    at,
    battery,
    between_stations,
    both,
    claims_low_end,
    closed,
    command,
    data,
    draining,
    during_a_contact,
    field,
    later_run,
    mission,
    notch,
    operator,
    other_epoch,
    outcome,
    over_another,
    own_order,
    placed_without_slot,
    plan,
    planning,
    radio,
    report,
    run,
    session,
    slots,
    station,
    swapped_order,
    twice_up,
    utc,
)
from tests.verify.good_week import good_week

BREAKAGES: list[tuple[str, Rule, Change]] = [
    ("a notch in the mask", Rule.IN_VIEW, notch("QUA-01")),
    ("too low to transmit", Rule.IN_VIEW, station("QUA", least_transmit_elevation_deg=25.0)),
    ("promised too high", Rule.IN_VIEW, field("QUA-01", max_elevation_deg=40.0)),
    ("AOS told wrong", Rule.IN_VIEW, field("QUA-01", aos_s=at("QUA-01").aos_s - 3.0)),
    ("more guard time", Rule.GUARD_TIME, planning(guard_s=15.0)),
    (
        "a slow rotator",
        Rule.ANTENNA_FOLLOWS,
        station(
            "QUA",
            rotator=replace(good_week().mission.station("QUA").rotator, azimuth_rate_deg_s=0.3),  # type: ignore[type-var]
        ),
    ),
    ("a deaf satellite", Rule.LINK_CLOSES, radio(receive_sensitivity_dbm=-95.0)),
    ("an outage", Rule.STATION_OPEN, station("QUA", outages=around("QUA-02"))),
    (
        "shut at night",
        Rule.STATION_OPEN,
        station("QUA", hours=(WeeklyHours(begin=time(8), end=time(20)),)),
    ),
    ("a station gone", Rule.STATION_OPEN, both(field("QUA-03", station="QUX"))),
    ("closed to contacts", Rule.SATELLITE_OPEN, closed(closed=around("QUA-02"))),
    ("longer contacts wanted", Rule.LEAST_CONTACT, planning(least_contact_s=165.0)),
    ("a longer gap", Rule.ONE_CONVERSATION, planning(hand_over_gap_s=12.0)),
    ("a long set-up", Rule.STATION_FREE, station("QUA", set_up_s=40_000.0)),
    ("a longer acquire", Rule.HALF_DUPLEX, planning(acquire_s=46.0)),
    ("a longer close", Rule.HALF_DUPLEX, planning(close_s=11.0)),
    ("no close", Rule.HALF_DUPLEX, slots("QUA-02", lambda s: s[:-1])),
    ("two closes", Rule.HALF_DUPLEX, slots("QUA-02", lambda s: (*s[:-1], s[-1], s[-1]))),
    (
        "a command in a downlink slot",
        Rule.HALF_DUPLEX,
        slots("QUA-02", lambda s: (s[0], replace(s[1], command="new keys"), s[2])),
    ),
    (
        "a slot that begins late",
        Rule.HALF_DUPLEX,
        slots("QUA-02", lambda s: (replace(s[0], start_s=s[0].start_s + 1, end_s=s[0].end_s + 1), *s[1:])),
    ),
    (
        "a slot out of the contact",
        Rule.HALF_DUPLEX,
        slots("QUA-02", lambda s: (*s[:-1], replace(s[-1], end_s=s[-1].end_s + 1))),
    ),
    (
        "a slot over the next",
        Rule.HALF_DUPLEX,
        slots("QUA-02", lambda s: (*s[:-1], replace(s[-1], start_s=s[-1].start_s - 2))),
    ),
    (
        "a slot that runs backwards",
        Rule.HALF_DUPLEX,
        slots(
            "QUA-02", lambda s: (*s[:-1], replace(s[-1], start_s=s[-1].end_s, end_s=s[-1].end_s - 9), s[-1])
        ),
    ),
    (
        "more bytes than the link carries",
        Rule.BYTES_FIT,
        both(field("QUA-02", carried=(Carried(kind="housekeeping", made_day=None, byte=500_000.0),))),
    ),
    (
        "bytes from the next day",
        Rule.STORE,
        both(field("QUA-02", carried=(Carried(kind="picture", made_day=3, byte=100_000.0),))),
    ),
    (
        "bytes before the session",
        Rule.STORE,
        both(field("QUA-02", carried=(Carried(kind="picture", made_day=1, byte=100_000.0),))),
    ),
    ("another chance", Rule.STORE, planning(success_fraction=0.8)),
    ("losses told wrong", Rule.STORE, data(lost_byte=50_000.0)),
    ("sums told wrong", Rule.STORE, data(on_board_end_byte=0.0)),
    ("a kind nobody keeps", Rule.STORE, data(kind="music")),
    ("cells run low", Rule.BATTERY_FLOOR, draining(22.0, FREE_HOUR, 7200)),
    ("low point told wrong", Rule.BATTERY_FLOOR, report(lowest_fraction=0.99)),
    ("start told wrong", Rule.BATTERY_FLOOR, report(start_fraction=0.9)),
    ("floor in force told wrong", Rule.BATTERY_FLOOR, report(floor_in_force_fraction=0.5)),
    ("a contact's low point told wrong", Rule.BATTERY_FLOOR, field("QUA-02", charge_lowest_fraction=0.99)),
    ("a higher transmit floor", Rule.TRANSMIT_FLOOR, battery(transmit_floor_fraction=0.98)),
    ("a contact's first charge told wrong", Rule.TRANSMIT_FLOOR, field("QUA-02", charge_start_fraction=0.99)),
    ("tired cells", Rule.DISCHARGE_LIMIT, battery(discharge_limit_w=7.0)),
    ("end told wrong", Rule.END_CHARGE, report(end_fraction=0.9)),
    ("a low end claimed to be enough", Rule.END_CHARGE, claims_low_end),
    ("outcome without a slot", Rule.COMMAND_ONCE, outcome("set clock", contact="QUB-02")),
    ("placed nowhere", Rule.COMMAND_ONCE, outcome("set clock", contact="")),
    ("placed without any slot", Rule.COMMAND_ONCE, placed_without_slot),
    ("slot without an outcome", Rule.COMMAND_ONCE, outcome("set clock", placed=False, contact="")),
    ("left for next week in this one", Rule.COMMAND_ONCE, outcome("set clock", left_for_next_week=True)),
    (
        "two outcomes",
        Rule.COMMAND_ONCE,
        lambda week: plan(week, commands=(*week.plan.commands, week.plan.commands[0])),
    ),
    ("no outcomes", Rule.COMMAND_ONCE, lambda week: plan(week, commands=())),
    ("up twice", Rule.COMMAND_ONCE, twice_up),
    (
        "a command nobody wants",
        Rule.COMMAND_ONCE,
        lambda week: both()(mission(week, commands=week.mission.commands[:-1])),
    ),
    (
        "past the deadline",
        Rule.COMMAND_WINDOW,
        command("set clock", deadline_utc=utc(at("QUA-01").start_s + 46)),
    ),
    ("too early", Rule.COMMAND_WINDOW, command("set clock", earliest_utc=utc(at("QUA-01").start_s + 46))),
    ("a longer exchange", Rule.COMMAND_LENGTH, command("take picture", exchange_s=20.5)),
    ("another station", Rule.COMMAND_STATION, command("new keys", stations=("QUB",))),
    ("in the wrong order", Rule.COMMAND_ORDER, swapped_order),
    ("in the same contact", Rule.COMMAND_ORDER, own_order("after_contact")),
    ("after one that never goes", Rule.COMMAND_ORDER, command("new keys", after=(After(command="ghost"),))),
    ("too low for the command", Rule.COMMAND_ELEVATION, command("take picture", least_elevation_deg=80.0)),
    ("too empty for the command", Rule.COMMAND_CHARGE, command("take picture", least_charge_fraction=0.99)),
    (
        "out of its window",
        Rule.SESSION_WINDOW,
        session(windows=(Window(begin_utc=utc(0.0), end_utc=utc(86_400.0)),)),
    ),
    ("too short", Rule.SESSION_WINDOW, session(length_s=700.0)),
    (
        "run twice",
        Rule.SESSION_WINDOW,
        lambda week: both()(plan(week, sessions=(*week.plan.sessions, later_run(week)))),
    ),
    ("a session nobody wants", Rule.SESSION_WINDOW, lambda week: both()(mission(week, sessions=()))),
    ("in the look-ahead, it says", Rule.SESSION_WINDOW, run(137_000, 137_600, in_lookahead=True)),
    ("a session without end", Rule.SESSION_WINDOW, both(run(137_000, None))),
    ("during a contact", Rule.SESSION_ALONE, during_a_contact),
    ("over another session", Rule.SESSION_ALONE, over_another),
    ("no licence", Rule.LICENSED_OPERATOR, operator("Q2CD", may_control=False)),
    ("the wrong one first", Rule.LICENSED_OPERATOR, field("QUB-02", operators=("Q3EF", "Q2CD"))),
    ("nobody there", Rule.LICENSED_OPERATOR, field("QUA-02", operators=())),
    ("a stranger", Rule.OPERATOR_STATION, field("QUB-02", operators=("Q2CD", "Q9ZZ"))),
    ("not their station", Rule.OPERATOR_STATION, operator("Q3EF", stations=("QUA",))),
    ("named twice", Rule.OPERATOR_STATION, field("QUB-01", operators=("Q2CD", "Q2CD"))),
    (
        "in the evening",
        Rule.OPERATOR_HOURS,
        operator("Q1AB", hours=(WeeklyHours(begin=time(7), end=time(20)),)),
    ),
    (
        "away",
        Rule.OPERATOR_HOURS,
        operator("Q2CD", away=(DaysAway(first_day=date(2026, 12, 10), last_day=date(2026, 12, 10)),)),
    ),
    ("two stations far apart", Rule.ONE_PLACE, between_stations),
    ("more rest", Rule.REST, operator("Q1AB", rest_h=12.0)),
    ("one a day", Rule.DUTIES_DAY, operator("Q1AB", most_duties_day=1)),
    ("two a week", Rule.DUTIES_WEEK, operator("Q1AB", most_duties_week=2)),
    ("a second person wanted", Rule.TWO_PEOPLE, command("new keys", two_people=True)),
    ("older than allowed", Rule.ELEMENTS_AGE, planning(refuse_age_days=4.0)),
    ("another element set", Rule.ELEMENTS_AGE, other_epoch),
]


@pytest.mark.parametrize(("rule", "change"), [pytest.param(r, c, id=n) for n, r, c in BREAKAGES])
def test_just_the_broken_rule_is_found(rule: Rule, change: Change) -> None:
    broken = change(good_week())
    found = check(broken.mission, broken.elements, broken.plan).findings
    assert {finding.rule for finding in found} == {rule}, [f"{f.rule}: {f.sentence}" for f in found]


def test_the_good_week_is_good() -> None:
    verdict = check(good_week().mission, good_week().elements, good_week().plan)
    assert verdict.ok, verdict.findings
    assert verdict.checked == tuple(Rule)


def test_every_rule_has_one_check_and_one_breakage() -> None:
    assert tuple(CHECKS) == tuple(Rule)
    assert {rule for _, rule, _ in BREAKAGES} == set(Rule)
