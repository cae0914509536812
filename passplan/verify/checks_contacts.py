"""Checks of when contacts stand: opening hours, one at a time, the slots inside."""

from datetime import datetime, timedelta
from itertools import pairwise

from passplan.domain.constants import DAY_S
from passplan.domain.moments import Outage
from passplan.domain.rules import Rule
from passplan.verify.evidence import Case, Evidence
from passplan.verify.local_hours import first_uncovered
from passplan.verify.tally import HALF_SECOND, Reading, Tally

_SLACK = timedelta(seconds=HALF_SECOND)


def check_station_open(evidence: Evidence) -> Reading:
    """The station exists, is in its hours and in no outage."""
    tally = Tally(Rule.STATION_OPEN, "s")
    known = {station.code for station in evidence.mission.stations}
    for contact in evidence.plan.all_contacts:
        if contact.station not in known:
            tally.fail(contact.id, f"the mission has no station {contact.station}")
    for case in evidence.cases:
        begin, end = _moments(evidence, case)
        hours, zone = case.station.hours, case.station.time_zone
        hole = first_uncovered(hours, zone, begin + _SLACK, end - _SLACK) if hours else None
        if hole is not None:
            told = f"{case.station.code} is shut at {evidence.clock(evidence.horizon.seconds(hole))}"
            tally.weigh(case.id, -(end - hole).total_seconds(), 0.0, told)
        for outage in case.station.outages:
            told = f"{case.station.code} is out of use: {outage.reason or 'outage'}"
            tally.weigh(case.id, _apart_s(outage, begin, end), HALF_SECOND, told)
    return tally.reading


def check_satellite_open(evidence: Evidence) -> Reading:
    """The satellite exists and is not closed to contacts."""
    tally = Tally(Rule.SATELLITE_OPEN, "s")
    known = {satellite.name for satellite in evidence.mission.satellites}
    for contact in evidence.plan.all_contacts:
        if contact.satellite not in known:
            tally.fail(contact.id, f"the mission has no satellite {contact.satellite}")
    for case in evidence.cases:
        for closed in case.satellite.closed:
            told = f"{case.satellite.name} takes no contacts: {closed.reason or 'closed'}"
            tally.weigh(case.id, _apart_s(closed, *_moments(evidence, case)), HALF_SECOND, told)
    return tally.reading


def _moments(evidence: Evidence, case: Case) -> tuple[datetime, datetime]:
    """Return a contact's start and end in UTC."""
    return evidence.horizon.utc(case.contact.start_s), evidence.horizon.utc(case.contact.end_s)


def _apart_s(outage: Outage, begin: datetime, end: datetime) -> float:
    """Return the seconds between an outage and a span of time, negative where they overlap."""
    return (max(begin, outage.begin_utc) - min(end, outage.end_utc)).total_seconds()


def check_least_contact(evidence: Evidence) -> Reading:
    """A contact lasts at least what the mission wants."""
    tally, least = Tally(Rule.LEAST_CONTACT, "s"), evidence.mission.planning.least_contact_s
    for case in evidence.cases:
        length = case.contact.end_s - case.contact.start_s
        told = f"the contact lasts {length} s, the least is {least:g} s"
        tally.weigh(case.id, length - least, HALF_SECOND, told)
    return tally.reading


def check_one_conversation(evidence: Evidence) -> Reading:
    """A satellite talks to one station at a time, with the gap when it changes over."""
    tally, gap_s = Tally(Rule.ONE_CONVERSATION, "s"), evidence.mission.planning.hand_over_gap_s
    for before, after in _pairs(evidence.cases):
        if before.satellite is after.satellite:
            apart = after.contact.start_s - before.contact.end_s
            wanted = 0.0 if before.station is after.station else gap_s
            told = f"it begins {apart} s after the end of {before.id}, {wanted:g} s are wanted"
            tally.weigh(after.id, apart - wanted, HALF_SECOND, told)
    return tally.reading


def check_station_free(evidence: Evidence) -> Reading:
    """A station has one contact at a time, with its set-up time; one visibility needs no second set-up."""
    tally = Tally(Rule.STATION_FREE, "s")
    for before, after in _pairs(evidence.cases):
        if before.station is after.station:
            same = before.satellite is after.satellite and after.contact.start_s <= before.view.los_s
            wanted = 0.0 if same else before.station.set_up_s
            apart = after.contact.start_s - before.contact.end_s
            told = f"{before.station.code} has {apart} s after {before.id}, {wanted:g} s are wanted"
            tally.weigh(after.id, apart - wanted, HALF_SECOND, told)
    return tally.reading


def _pairs(cases: tuple[Case, ...]) -> list[tuple[Case, Case]]:
    """Return the pairs of contacts, in order of start, that stand within a day of each other."""
    return [
        (before, after)
        for index, before in enumerate(cases)
        for after in cases[index + 1 :]
        if after.contact.start_s - before.contact.end_s < DAY_S
    ]


def check_half_duplex(evidence: Evidence) -> Reading:
    """Acquire first, close last, commands and data between, nothing over another."""
    tally = Tally(Rule.HALF_DUPLEX, "s")
    for case in evidence.cases:
        contact, slots = case.contact, case.contact.slots
        _weigh_ends(tally, evidence, case)
        if any(slot.kind in {"acquire", "close"} for slot in slots[1:-1]):
            tally.fail(case.id, "between acquire and close stand only uplink and downlink")
        if any(bool(slot.command) != (slot.kind == "uplink") for slot in slots):
            tally.fail(case.id, "every uplink slot is for one command, no other slot is for any")
        if any(slot.start_s < contact.start_s or slot.end_s > contact.end_s for slot in slots):
            tally.fail(case.id, "a slot reaches out of the contact")
        _weigh_order(tally, evidence, case)
    return tally.reading


def _weigh_ends(tally: Tally, evidence: Evidence, case: Case) -> None:
    """Weigh acquire at the very start and close at the very end; what takes no time needs no slot."""
    planning, contact = evidence.mission.planning, case.contact
    first = [slot for slot in contact.slots[:1] if slot.kind == "acquire" and slot.start_s == contact.start_s]
    last = [slot for slot in contact.slots[-1:] if slot.kind == "close" and slot.end_s == contact.end_s]
    for kind, found, least in (("acquire", first, planning.acquire_s), ("close", last, planning.close_s)):
        length = sum(slot.end_s - slot.start_s for slot in found)
        where = "begins" if kind == "acquire" else "ends"
        told = f"it {where} with {length} s of {kind}, {least:g} s are wanted"
        tally.weigh(case.id, length - least, HALF_SECOND, told)


def _weigh_order(tally: Tally, evidence: Evidence, case: Case) -> None:
    """Weigh slots against their own end and against the next."""
    for slot in case.contact.slots:
        if slot.end_s < slot.start_s:
            tally.fail(case.id, f"{slot.kind} at {evidence.clock(slot.start_s)} ends before it begins")
    for before, after in pairwise(case.contact.slots):
        over = before.end_s - after.start_s
        if over > 0:
            told = f"{before.kind} runs {over} s into {after.kind} at {evidence.clock(after.start_s)}"
            tally.weigh(case.id, -float(over), 0.0, told)
