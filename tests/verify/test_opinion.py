"""The verdict as a whole, and plans nobody would make."""

from dataclasses import replace
from datetime import timedelta

import pytest

from passplan.domain.plan import SessionOutcome, Slot
from passplan.domain.rules import Rule
from passplan.verify import check
from passplan.verify.tally import Tally
from tests.verify.changes import at, command, draining, field, operator, planning, radio, slots, station
from tests.verify.good_week import ELEMENTS, HORIZON, MISSION, Week, contact, good_week, pass_after, told


def read(week: Week) -> set[Rule]:
    return {finding.rule for finding in check(week.mission, week.elements, week.plan).findings}


def test_the_verdict_holds_its_own_figures() -> None:
    week = good_week()
    verdict = check(week.mission, week.elements, week.plan)
    assert verdict.lowest_fraction["TEASEL-1"] == pytest.approx(week.plan.batteries[0].lowest_fraction)
    assert verdict.lowest_s["TEASEL-1"] == week.plan.batteries[0].lowest_s
    assert set(verdict.downlink_byte) == {each.id for each in week.plan.all_contacts}
    planned = {each.id: sum(each.downlink_byte.values()) for each in week.plan.all_contacts}
    assert verdict.downlink_byte["QUA-01"] * 0.9 == pytest.approx(planned["QUA-01"])


def test_margins_are_never_negative_and_one_a_rule() -> None:
    verdict = check(good_week().mission, good_week().elements, good_week().plan)
    rules = [margin.rule for margin in verdict.margins]
    assert len(rules) == len(set(rules))
    assert {Rule.BATTERY_FLOOR, Rule.IN_VIEW, Rule.BYTES_FIT, Rule.REST} <= set(rules)
    assert all(margin.value >= 0.0 for margin in verdict.margins)


def test_the_same_plan_is_read_the_same_twice() -> None:
    week = good_week()
    assert check(week.mission, week.elements, week.plan) == check(week.mission, week.elements, week.plan)


def test_shortfalls_carry_figure_and_unit() -> None:
    week = planning(guard_s=15.0)(good_week())
    worst = max(check(week.mission, week.elements, week.plan).findings, key=lambda finding: finding.shortfall)
    assert worst.unit == "s"
    assert worst.shortfall == pytest.approx(3.0, abs=1.0)
    assert "guard time is 15 s" in worst.sentence


@pytest.mark.parametrize("off", [0.4, -0.4])
def test_half_a_second_is_forgiven(off: float) -> None:
    begin = HORIZON.utc(at("QUA-01").slots[1].start_s + off)
    assert read(command("set clock", earliest_utc=begin)(good_week())) == set()
    assert read(command("set clock", deadline_utc=begin + timedelta(seconds=4.0))(good_week())) == set()


def test_an_empty_plan_of_nobody_is_fine() -> None:
    bare = replace(MISSION, commands=(), sessions=(), operators=())
    empty = replace(
        good_week().plan, contacts=(), lookahead=(), commands=(), sessions=(), batteries=(), data=()
    )
    verdict = check(bare, {"TEASEL-1": ELEMENTS}, empty)
    assert verdict.ok
    assert verdict.downlink_byte == {}


def test_a_must_that_is_not_placed_is_no_finding() -> None:
    bare = replace(MISSION, sessions=())
    outcomes = tuple(
        replace(each, placed=False, contact="", left_for_next_week=False, reason="no pass")
        for each in good_week().plan.commands
    )
    empty = replace(good_week().plan, contacts=(), lookahead=(), commands=outcomes, sessions=(), data=())
    week = told(bare, empty)
    assert read(week) == set()


def test_without_elements_nothing_can_be_said() -> None:
    week = good_week()
    verdict = check(replace(week.mission, commands=()), {}, replace(week.plan, commands=()))
    assert {finding.rule for finding in verdict.findings} == {Rule.ELEMENTS_AGE}
    assert verdict.lowest_fraction == {}


def test_old_elements_that_were_asked_for_are_let_pass() -> None:
    week = planning(refuse_age_days=4.0)(good_week())
    used = replace(week.plan.elements[0], old=True)
    assert read(replace(week, plan=replace(week.plan, elements=(used,)))) == set()


def test_a_satellite_nobody_knows() -> None:
    assert Rule.SATELLITE_OPEN in read(field("QUA-02", satellite="TEASEL-9")(good_week()))


def test_a_satellite_that_has_come_down() -> None:
    """With drag this large SGP4 gives up before the first contact: nothing is in view, nothing carried."""
    week = replace(good_week(), elements={"TEASEL-1": replace(ELEMENTS, bstar_per_earth_radius=10.0)})
    found = read(week)
    assert {Rule.IN_VIEW, Rule.ANTENNA_FOLLOWS, Rule.LINK_CLOSES, Rule.BYTES_FIT} <= found


def test_a_listening_station_cannot_ask() -> None:
    week = good_week()
    deaf = replace(week.mission.station("QUA").radio, transmits=False)
    assert read(station("QUA", radio=deaf)(week)) == {Rule.LINK_CLOSES, Rule.COMMAND_STATION}


def test_a_listening_station_needs_no_licence() -> None:
    week = operator("Q1AB", may_control=False)(good_week())
    deaf = replace(week.mission.station("QUA").radio, transmits=False)
    assert Rule.LICENSED_OPERATOR not in read(station("QUA", radio=deaf)(week))


def test_one_sitting_needs_no_rest_and_one_visibility_no_set_up() -> None:
    """Two contacts of one pass and one of the next revolution, all one sitting of one operator."""
    first = pass_after("QUA", 30_000.0, 20.0)
    whole = contact("QUA-01", first, ("Q1AB",), ())
    middle = (whole.start_s + whole.end_s) // 2
    early = replace(
        whole,
        end_s=middle,
        slots=(
            whole.slots[0],
            replace(whole.slots[1], end_s=middle - 10),
            Slot(kind="close", start_s=middle - 10, end_s=middle),
        ),
    )
    late = replace(
        whole,
        id="QUA-02",
        start_s=middle + 5,
        slots=(
            Slot(kind="acquire", start_s=middle + 5, end_s=middle + 50),
            replace(whole.slots[1], start_s=middle + 50),
            whole.slots[2],
        ),
    )
    next_one = pass_after("QUA", first.los_s, 10.0)
    after = contact("QUA-03", next_one, ("Q1AB",), ())
    bare = replace(
        MISSION, commands=(), sessions=(), planning=replace(MISSION.planning, least_contact_s=60.0)
    )
    laid = replace(good_week().plan, contacts=(early, late, after), lookahead=(), commands=(), sessions=())
    week = told(replace(bare, planning=replace(bare.planning, sitting_gap_h=3.5)), laid)
    assert read(week) == set()
    week = told(replace(bare, planning=replace(bare.planning, sitting_gap_h=0.0)), laid)
    assert read(week) == {Rule.REST}


def test_a_contact_without_downlink_takes_its_bytes_at_its_end() -> None:
    """The bytes do not fit, as nothing was keyed for them; the store has them all the same."""
    week = slots("QUA-02", lambda s: (s[0], s[-1]))(good_week())
    assert read(told(week.mission, week.plan)) == {Rule.BYTES_FIT}


def test_contacts_and_sessions_outside_the_horizon_break_rules_and_nothing_else() -> None:
    late = replace(at("QUA-02"), start_s=900_000, end_s=900_300)
    gone = SessionOutcome(name="camera", satellite="TEASEL-1", start_s=900_000, end_s=900_600)
    week = good_week()
    broken = replace(week.plan, contacts=(late,), lookahead=(), sessions=(gone,))
    found = read(replace(week, plan=broken))
    assert {Rule.IN_VIEW, Rule.SESSION_WINDOW, Rule.SESSION_ALONE} <= found


def test_a_report_of_a_satellite_without_elements_is_left_alone() -> None:
    week = good_week()
    other = replace(week.plan.batteries[0], satellite="TEASEL-9")
    sums = replace(week.plan.data[0], satellite="TEASEL-9")
    plan = replace(week.plan, batteries=(*week.plan.batteries, other), data=(*week.plan.data, sums))
    assert read(replace(week, plan=plan)) == set()


def test_without_a_discharge_limit_none_is_asked() -> None:
    week = good_week()
    satellite = replace(
        MISSION.satellites[0], battery=replace(MISSION.satellites[0].battery, discharge_limit_w=None)
    )
    rules = [
        m.rule for m in check(replace(MISSION, satellites=(satellite,)), week.elements, week.plan).margins
    ]
    assert Rule.DISCHARGE_LIMIT not in rules


def test_a_weak_downlink_closes_nowhere() -> None:
    week = told(MISSION, good_week().plan)
    weak = radio(transmit_power_w=0.001)(week)
    assert {Rule.LINK_CLOSES, Rule.BYTES_FIT} == read(weak)


def test_a_slack_that_is_no_number_is_broken() -> None:
    tally = Tally(Rule.IN_VIEW, "deg")
    tally.weigh("here", float("nan"), 0.05, "nowhere to be seen")
    tally.compare("there", float("nan"), 0.05, "not comparable")
    assert [finding.where for finding in tally.reading.findings] == ["here", "there"]
    assert [finding.shortfall for finding in tally.reading.findings] == [0.0, 0.0]
    assert tally.reading.margin is None


def two_satellites(overlap_s: int) -> Week:
    """Fly a second satellite with the first; both are heard in the west on one day, or at once."""
    week = good_week()
    second = replace(MISSION.satellites[0], name="TEASEL-2")
    keys = replace(MISSION.commands[3], satellite="TEASEL-2")
    radar = replace(MISSION.sessions[0], name="radar", satellite="TEASEL-2")
    mission = replace(
        MISSION,
        satellites=(*MISSION.satellites, second),
        commands=(*MISSION.commands, keys),
        sessions=(*MISSION.sessions, radar),
    )
    ran = week.plan.sessions[0]
    fly = pass_after(
        "QUA", at("QUB-02").end_s + 100_000.0 if overlap_s == 0 else at("QUA-02").start_s - 100.0
    )
    other = replace(contact("QUA-05", fly, ("Q1AB",), (("new keys", 40),)), satellite="TEASEL-2")
    told_keys = replace(
        week.plan.commands[3], satellite="TEASEL-2", placed=True, contact="QUA-05", left_for_next_week=False
    )
    plan = replace(
        week.plan,
        contacts=(*week.plan.contacts, other),
        commands=(*week.plan.commands, told_keys),
        sessions=(ran, replace(ran, name="radar", satellite="TEASEL-2")),
    )
    return Week(mission=mission, elements={"TEASEL-1": ELEMENTS, "TEASEL-2": ELEMENTS}, plan=plan)


def test_two_satellites_share_stations_and_people_and_nothing_else() -> None:
    assert read(two_satellites(0)) == set()
    verdict = check(*(getattr(two_satellites(0), name) for name in ("mission", "elements", "plan")))
    assert set(verdict.lowest_fraction) == {"TEASEL-1", "TEASEL-2"}


def test_one_station_cannot_hear_two_satellites_at_once() -> None:
    assert {Rule.STATION_FREE, Rule.ONE_PLACE} <= read(two_satellites(100))
    assert Rule.ONE_CONVERSATION not in read(two_satellites(100))


def test_an_end_that_is_told_to_be_short_is_honest() -> None:
    late = draining(12.0, HORIZON.utc(HORIZON.end_s - 3600.0), 3600)(good_week())
    assert late.plan.batteries[0].end_fraction < late.plan.batteries[0].end_wanted_fraction
    verdict = check(late.mission, late.elements, late.plan)
    assert verdict.ok
    assert Rule.END_CHARGE not in {margin.rule for margin in verdict.margins}


def test_what_takes_no_time_needs_no_slot() -> None:
    week = planning(close_s=0.0)(good_week())
    assert read(slots("QUA-02", lambda s: s[:-1])(week)) == set()
    week = told(planning(acquire_s=0.0)(week).mission, slots("QUA-02", lambda s: s[1:])(week).plan)
    assert read(week) == set()
