"""Checks of the people: licence, hours, places, rest and how often they serve."""

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import date, timedelta
from itertools import combinations, pairwise
from zoneinfo import ZoneInfo

from passplan.domain.constants import HOUR_S, MINUTE_S
from passplan.domain.people import Operator
from passplan.domain.rules import Rule
from passplan.verify.evidence import Case, Evidence
from passplan.verify.local_hours import day_away, first_uncovered
from passplan.verify.tally import HALF_SECOND, Reading, Tally


@dataclass(frozen=True, kw_only=True, slots=True)
class Service:
    """One operator at one contact, from preparation to its end."""

    operator: Operator
    case: Case
    begin_s: float
    end_s: float


def services(evidence: Evidence) -> dict[str, list[Service]]:
    """Return the duties of each operator known to the mission, in order of start."""
    found: dict[str, list[Service]] = {}
    for case in evidence.cases:
        for handle in dict.fromkeys(case.contact.operators):
            if (person := evidence.operator(handle)) is not None:
                begin_s = case.contact.start_s - person.preparation_min * MINUTE_S
                duty = Service(operator=person, case=case, begin_s=begin_s, end_s=float(case.contact.end_s))
                found.setdefault(handle, []).append(duty)
    return dict(sorted(found.items()))


def check_licensed_operator(evidence: Evidence) -> Reading:
    """Somebody runs every contact; where the station transmits, the first named may control."""
    tally = Tally(Rule.LICENSED_OPERATOR)
    for case in evidence.cases:
        handles = case.contact.operators
        person = evidence.operator(handles[0]) if handles else None
        if not handles:
            tally.fail(case.id, "nobody runs it")
        elif case.station.radio.transmits and (person is None or not person.may_control):
            tally.fail(case.id, f"{handles[0]} is named first and may not control the satellite")
    return tally.reading


def check_operator_station(evidence: Evidence) -> Reading:
    """Everybody named exists, once, and serves that station."""
    tally = Tally(Rule.OPERATOR_STATION)
    for case in evidence.cases:
        for handle, times in Counter(case.contact.operators).items():
            person = evidence.operator(handle)
            if person is None:
                tally.fail(case.id, f"the mission has no operator {handle}")
            elif case.station.code not in person.stations:
                tally.fail(case.id, f"{handle} does not serve {case.station.code}")
            if times > 1:
                tally.fail(case.id, f"{handle} is named {times} times")
    return tally.reading


def check_operator_hours(evidence: Evidence) -> Reading:
    """Every duty, preparation included, lies in the operator's local hours and on no day away."""
    tally, horizon = Tally(Rule.OPERATOR_HOURS, "s"), evidence.horizon
    slack = timedelta(seconds=HALF_SECOND)
    for handle, duties in services(evidence).items():
        for duty in duties:
            person, where = duty.operator, duty.case.id
            begin, end = horizon.utc(duty.begin_s) + slack, horizon.utc(duty.end_s) - slack
            hole = first_uncovered(person.hours, person.time_zone, begin, end)
            if hole is not None:
                shown = hole.astimezone(ZoneInfo(person.time_zone))
                told = f"{handle} does not serve on {shown:%Y-%m-%d} at {shown:%H:%M} {person.time_zone} time"
                tally.weigh(where, -(end - hole).total_seconds() - HALF_SECOND, 0.0, told)
            if (day := day_away(person.away, person.time_zone, begin, end)) is not None:
                tally.fail(where, f"{handle} is away on {day}")
    return tally.reading


def check_one_place(evidence: Evidence) -> Reading:
    """Nobody is at two contacts at once, or leaves for another station later than they must."""
    tally = Tally(Rule.ONE_PLACE, "s")
    for handle, duties in services(evidence).items():
        for before, after in combinations(duties, 2):
            if before.case.station is after.case.station:
                apart, wanted = after.case.contact.start_s - before.end_s, 0.0
            else:
                apart, wanted = after.begin_s - before.end_s, before.operator.travel_min * MINUTE_S
            told = f"{apart / MINUTE_S:.1f} min from {before.case.id} to {after.case.id}"
            told = f"{handle} has {told}, {wanted / MINUTE_S:g} min are needed"
            tally.weigh(handle, apart - wanted, HALF_SECOND, told)
    return tally.reading


def check_rest(evidence: Evidence) -> Reading:
    """Between two sittings lies the rest the operator asked for."""
    tally, gap_s = Tally(Rule.REST, "s"), evidence.mission.planning.sitting_gap_h * HOUR_S
    for handle, duties in services(evidence).items():
        for before, after in pairwise(duties):
            together = before.case.station is after.case.station
            if together and after.case.view.aos_s - before.case.view.aos_s < gap_s:
                continue
            free_s, rest_h = after.begin_s - before.end_s, before.operator.rest_h
            told = f"{free_s / HOUR_S:.2f} h between {before.case.id} and {after.case.id}"
            told = f"{handle} has {told}, {rest_h:g} h are agreed"
            tally.weigh(handle, free_s - rest_h * HOUR_S, HALF_SECOND, told)
    return tally.reading


def check_duties_day(evidence: Evidence) -> Reading:
    """Nobody begins more duties on a day of their own calendar than agreed."""
    tally = Tally(Rule.DUTIES_DAY, "duties")
    for handle, duties in services(evidence).items():
        person = duties[0].operator
        place = ZoneInfo(person.time_zone)
        days = [evidence.horizon.utc(duty.case.contact.start_s).astimezone(place).date() for duty in duties]
        _weigh_counts(tally, handle, days, person.most_duties_day)
    return tally.reading


def check_duties_week(evidence: Evidence) -> Reading:
    """Nobody begins more duties in an ISO week (UTC) than agreed."""
    tally = Tally(Rule.DUTIES_WEEK, "duties")
    for handle, duties in services(evidence).items():
        moments = [evidence.horizon.utc(duty.case.contact.start_s).isocalendar() for duty in duties]
        weeks = [f"week {moment.week} of {moment.year}" for moment in moments]
        _weigh_counts(tally, handle, weeks, duties[0].operator.most_duties_week)
    return tally.reading


def _weigh_counts(tally: Tally, handle: str, when: Iterable[date | str], most: int) -> None:
    """Weigh how often each day or week comes up."""
    for name, times in Counter(when).items():
        told = f"{handle} has {times} duties in {name}, {most} are agreed"
        tally.weigh(handle, float(most - times), 0.0, told)


def check_two_people(evidence: Evidence) -> Reading:
    """Where a command asks for two people, two different ones are named."""
    tally = Tally(Rule.TWO_PEOPLE, "people")
    for one in evidence.placed:
        if one.command.two_people:
            there = len(set(one.case.contact.operators))
            told = f"{there} at {one.case.id}, {one.command.name} wants two"
            tally.weigh(one.case.id, float(there - 2), 0.0, told)
    return tally.reading
