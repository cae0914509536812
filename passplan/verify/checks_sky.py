"""Checks of the sky over each contact: height, guard time, the antenna, the age of the elements."""

import numpy as np

from passplan.domain.constants import DAY_S
from passplan.domain.passes import Floats
from passplan.domain.rules import Rule
from passplan.verify.evidence import Case, Evidence
from passplan.verify.rotator_chase import half_beam_deg, worst_lag
from passplan.verify.tally import HALF_SECOND, TWENTIETH_DEG, Reading, Tally


def check_in_view(evidence: Evidence) -> Reading:
    """The satellite stands above mask and least elevations; AOS, LOS and height are as the plan says."""
    tally = Tally(Rule.IN_VIEW, "deg")
    for case in evidence.cases:
        begin, end = case.contact.start_s, case.contact.end_s
        above = case.view.elevation_deg - case.view.horizon_deg
        _weigh_lowest(tally, evidence, case, (begin, end + 1), above)
        least = max(case.station.least_transmit_elevation_deg, case.station.least_receive_elevation_deg)
        for span in _sending(case):
            _weigh_lowest(tally, evidence, case, span, case.view.elevation_deg - least)
        _compare_pass(tally, evidence, case)
    return tally.reading


def _sending(case: Case) -> list[tuple[int, int]]:
    """Return the spans of whole seconds in which the station transmits for sure: request and commands."""
    requests = [(slot.end_s, slot.end_s + 1) for slot in case.slots("acquire")]
    return requests + [(slot.start_s, slot.end_s) for slot in case.slots("uplink")]


def _weigh_lowest(tally: Tally, evidence: Evidence, case: Case, span: tuple[int, int], above: Floats) -> None:
    """Weigh the lowest height over some line within a span of whole seconds."""
    part = above[case.view.seconds(*span)]
    lowest = int(np.argmin(part))
    told = f"at {evidence.clock(span[0] + lowest)} the satellite stands {-part[lowest]:.2f} deg too low"
    tally.weigh(case.id, float(part[lowest]), TWENTIETH_DEG, f"{told} for {case.station.code}")


def _compare_pass(tally: Tally, evidence: Evidence, case: Case) -> None:
    """Compare the plan's AOS, LOS and highest elevation with what is seen."""
    contact, view, end_s = case.contact, case.view, evidence.horizon.end_s
    # A pass that is open where the horizon begins or ends is cut there in the plan.
    aos_s, los_s = max(view.aos_s, 0.0), min(view.los_s, end_s)
    for name, claimed_s, found_s in (("AOS", contact.aos_s, aos_s), ("LOS", contact.los_s, los_s)):
        # On the line of the horizon is right as well: a shallow dip may end a pass for one reader only.
        on_line = abs(view.above_deg(claimed_s)) <= TWENTIETH_DEG
        if not on_line and not abs(claimed_s - found_s) <= HALF_SECOND:
            told = f"the plan puts {name} at {evidence.clock(claimed_s)}"
            tally.fail(case.id, f"{told}, it is at {evidence.clock(found_s)}")
    highest = view.highest_deg(aos_s, los_s)
    told = f"the plan promises {contact.max_elevation_deg:.1f} deg at the highest, it is {highest:.1f} deg"
    tally.compare(case.id, abs(contact.max_elevation_deg - highest), TWENTIETH_DEG, told)


def check_guard_time(evidence: Evidence) -> Reading:
    """Contacts keep off AOS and LOS by the guard time."""
    tally, guard_s = Tally(Rule.GUARD_TIME, "s"), evidence.mission.planning.guard_s
    for case in evidence.cases:
        for end, from_s in (
            ("AOS", case.contact.start_s - case.view.aos_s),
            ("LOS", case.view.los_s - case.contact.end_s),
        ):
            told = f"the contact keeps {from_s:.1f} s from {end}, the guard time is {guard_s:g} s"
            tally.weigh(case.id, from_s - guard_s, HALF_SECOND, told)
    return tally.reading


def check_antenna_follows(evidence: Evidence) -> Reading:
    """The rotator keeps the satellite in half its beam all through the contact."""
    tally = Tally(Rule.ANTENNA_FOLLOWS, "deg")
    for case in evidence.cases:
        if case.station.rotator is None:
            continue
        lag, second = worst_lag(case.station, case.view, case.contact.start_s, case.contact.end_s)
        allowed = half_beam_deg(case.station)
        told = f"at {evidence.clock(second)} the antenna of {case.station.code} is {lag:.1f} deg behind"
        tally.weigh(case.id, allowed - lag, TWENTIETH_DEG, f"{told}, half its beam is {allowed:.1f} deg")
    return tally.reading


def check_elements_age(evidence: Evidence) -> Reading:
    """The elements are those the plan names, and not too old at any contact."""
    tally, horizon = Tally(Rule.ELEMENTS_AGE, "days"), evidence.horizon
    refuse = evidence.mission.planning.refuse_age_days
    used = {part.satellite: part for part in evidence.plan.elements}
    epochs_s = {name: horizon.seconds(elements.epoch) for name, elements in evidence.elements.items()}
    for name in sorted({contact.satellite for contact in evidence.plan.all_contacts}):
        if name not in epochs_s:
            tally.fail(name, f"there is no element set of {name}")
        elif name in used and abs(epochs_s[name] - used[name].epoch_s) > HALF_SECOND:
            told = f"the plan stands on elements of {horizon.utc(used[name].epoch_s):%Y-%m-%d %H:%M}"
            tally.fail(name, f"{told}, these are of {horizon.utc(epochs_s[name]):%Y-%m-%d %H:%M}")
    for case in evidence.cases:
        name = case.satellite.name
        if name in used and used[name].old:
            continue  # old elements were asked for, and the plan says so
        ends = (case.contact.start_s, case.contact.end_s)
        age = max(abs(second - epochs_s[name]) for second in ends) / DAY_S
        told = f"the elements of {name} are {age:.1f} days off, more than {refuse:g} are refused"
        tally.weigh(case.id, refuse - age, HALF_SECOND / DAY_S, told)
    return tally.reading
