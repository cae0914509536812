"""Checks of commands and payload sessions."""

from collections import Counter
from collections.abc import Iterator
from itertools import combinations

from passplan.domain.constants import WEEK_S
from passplan.domain.plan import CommandOutcome
from passplan.domain.requests import After, Session
from passplan.domain.rules import Rule
from passplan.verify.evidence import Evidence, Placed, Run
from passplan.verify.slot_times import slot_time
from passplan.verify.tally import HALF_PERCENT, HALF_SECOND, TWENTIETH_DEG, Reading, Tally

_WHOLE_SECONDS_S = 0.999  # a plan keeps whole seconds, a session may not


def check_command_once(evidence: Evidence) -> Reading:
    """Every uplink slot is for a command that is wanted, each at most once; the outcomes told agree."""
    tally = Tally(Rule.COMMAND_ONCE)
    for case in evidence.cases:
        for slot in case.slots("uplink"):
            if (case.satellite.name, slot.command) not in evidence.commands:
                tally.fail(case.id, f"nobody wants a command {slot.command!r} for {case.satellite.name}")
    slots: dict[tuple[str, str], list[Placed]] = {}
    for one in evidence.placed:
        slots.setdefault((one.command.satellite, one.command.name), []).append(one)
    for (_, name), ones in slots.items():
        if len(ones) > 1:
            tally.fail(name, f"it goes up {len(ones)} times: {', '.join(one.case.id for one in ones)}")
    for outcome in evidence.plan.commands:
        _compare_outcome(tally, outcome, slots.get((outcome.satellite, outcome.name), []))
    _compare_list(tally, evidence, set(slots))
    return tally.reading


def _compare_list(tally: Tally, evidence: Evidence, with_slot: set[tuple[str, str]]) -> None:
    """Fail outcomes told twice, and those not told of a command that goes up or has to."""
    outcomes = Counter((outcome.satellite, outcome.name) for outcome in evidence.plan.commands)
    for (_, name), times in outcomes.items():
        if times > 1:
            tally.fail(name, f"the plan tells {times} outcomes of it")
    for key, command in evidence.commands.items():
        if key not in outcomes and (command.must or key in with_slot):
            tally.fail(command.name, "the plan does not say what became of it")


def _compare_outcome(tally: Tally, outcome: CommandOutcome, slots: list[Placed]) -> None:
    """Fail an outcome that the slots do not bear out."""
    in_week = any(one.case.in_week for one in slots)
    contacts = {one.case.id for one in slots}
    if outcome.contact and outcome.contact not in contacts:
        tally.fail(outcome.name, f"the plan says it goes up in {outcome.contact}, where it has no slot")
    elif outcome.placed and not slots:
        tally.fail(outcome.name, "the plan says it is placed, and no contact has a slot for it")
    elif outcome.placed and not outcome.contact:
        tally.fail(outcome.name, "the plan says it is placed and not in which contact")
    elif slots and not (outcome.placed or outcome.left_for_next_week):
        tally.fail(outcome.name, "it has a slot, and the plan says it is not placed")
    if outcome.left_for_next_week and in_week:
        tally.fail(outcome.name, "it goes up this week, and the plan says it is left for the next")


def check_command_window(evidence: Evidence) -> Reading:
    """The whole exchange lies between earliest and deadline."""
    tally, horizon = Tally(Rule.COMMAND_WINDOW, "s"), evidence.horizon
    for one in evidence.placed:
        command, slot = one.command, one.slot
        begin = horizon.seconds(command.earliest_utc) if command.earliest_utc else 0.0
        end = horizon.seconds(command.deadline_utc) if command.deadline_utc else horizon.end_s
        told = f"it goes up at {evidence.clock(slot.start_s)}, before {evidence.clock(begin)}"
        tally.weigh(command.name, slot.start_s - begin, HALF_SECOND, told)
        told = f"it is done at {evidence.clock(slot.end_s)}, after its deadline {evidence.clock(end)}"
        tally.weigh(command.name, end - slot.end_s, HALF_SECOND, told)
    return tally.reading


def check_command_length(evidence: Evidence) -> Reading:
    """Each slot is as long as the exchange takes."""
    tally = Tally(Rule.COMMAND_LENGTH, "s")
    for one in evidence.placed:
        length, takes = one.slot.end_s - one.slot.start_s, slot_time(one.case.satellite, one.command).seconds
        told = f"it has {length} s in {one.case.id}, its exchange takes {takes} s"
        tally.weigh(one.command.name, float(length - takes), HALF_SECOND, told)
    return tally.reading


def check_command_station(evidence: Evidence) -> Reading:
    """The station may transmit, and is one of those the command names."""
    tally = Tally(Rule.COMMAND_STATION)
    for one in evidence.placed:
        station, allowed = one.case.station, one.command.stations
        if not station.radio.transmits:
            tally.fail(one.command.name, f"{station.code} only listens")
        elif allowed and station.code not in allowed:
            tally.fail(one.command.name, f"it goes up from {station.code}, allowed are {', '.join(allowed)}")
    return tally.reading


def check_command_order(evidence: Evidence) -> Reading:
    """What it depends on is up before it; how long before, the kind of order says."""
    tally = Tally(Rule.COMMAND_ORDER, "s")
    for one in evidence.placed:
        for link in one.command.after:
            earlier = [
                other
                for other in evidence.placed
                if other.command.name == link.command and other.command.satellite == one.command.satellite
            ]
            if not earlier:
                tally.fail(one.command.name, f"{link.command} has to be up before it, and is not in the plan")
                continue
            apart = max(_apart_s(one, other, link) for other in earlier)
            what = "the contact of " if link.order == "after_contact" else ""
            told = f"{what}{link.command} has to be over before it, and ends {-apart:.0f} s after that"
            tally.weigh(one.command.name, apart, 0.0, told)
    return tally.reading


def _apart_s(one: Placed, other: Placed, link: After) -> float:
    """Return the seconds between what has to be over and what comes after it."""
    if link.order == "after_contact":
        return float(one.case.contact.start_s - other.case.contact.end_s)
    return float(one.slot.start_s - other.slot.end_s)


def check_command_elevation(evidence: Evidence) -> Reading:
    """The satellite is as high as the command wants all through its slot."""
    tally = Tally(Rule.COMMAND_ELEVATION, "deg")
    for one in evidence.placed:
        if (least := one.command.least_elevation_deg) is None:
            continue
        view = one.case.view
        lowest = float(view.elevation_deg[view.seconds(one.slot.start_s, one.slot.end_s)].min())
        told = f"the satellite is as low as {lowest:.1f} deg in its slot, it wants {least:g} deg"
        tally.weigh(one.command.name, lowest - least, TWENTIETH_DEG, told)
    return tally.reading


def check_command_charge(evidence: Evidence) -> Reading:
    """The battery is as full as the command wants where its contact begins."""
    tally = Tally(Rule.COMMAND_CHARGE, "J")
    for one in evidence.placed:
        if (least := one.command.least_charge_fraction) is None:
            continue
        ledger = evidence.ledgers[one.case.satellite.name]
        found_j = ledger.at(one.case.contact.start_s)
        told = f"{one.case.id} begins with {found_j / ledger.capacity_j:.1%} charge, it wants {least:.1%}"
        slack_j = found_j - least * ledger.capacity_j
        tally.weigh(one.command.name, slack_j, HALF_PERCENT * ledger.capacity_j, told)
    return tally.reading


def check_session_window(evidence: Evidence) -> Reading:
    """A session is one of the mission's, runs once, whole, inside one of its windows and the horizon."""
    tally = Tally(Rule.SESSION_WINDOW, "s")
    known = {(session.satellite, session.name) for session in evidence.mission.sessions}
    for outcome in evidence.plan.sessions:
        if (outcome.start_s is None) != (outcome.end_s is None):
            tally.fail(outcome.name, "the plan gives only one of its start and its end")
        elif outcome.start_s is not None and (outcome.satellite, outcome.name) not in known:
            tally.fail(outcome.name, f"nobody wants a session of that name on {outcome.satellite}")
    for (_, name), times in Counter(
        (run.session.satellite, run.session.name) for run in evidence.runs
    ).items():
        if times > 1:
            tally.fail(name, f"it runs {times} times")
    for run in evidence.runs:
        _weigh_run(tally, evidence, run)
    return tally.reading


def _weigh_run(tally: Tally, evidence: Evidence, run: Run) -> None:
    """Weigh one session's length and place."""
    name, length = run.session.name, run.end_s - run.start_s
    told = f"it runs {length} s, it takes {run.session.length_s:g} s"
    tally.compare(name, abs(length - run.session.length_s), _WHOLE_SECONDS_S, told)
    inside = max(_room_s(run, begin, end) for begin, end in _windows(evidence, run.session))
    told = f"it reaches {-inside:.0f} s out of its window"
    tally.weigh(name, inside, HALF_SECOND, told)
    if run.outcome.in_lookahead != (run.start_s >= WEEK_S):
        tally.fail(name, "the plan is wrong about its running in the week or in the look-ahead")


def _windows(evidence: Evidence, session: Session) -> Iterator[tuple[float, float]]:
    """Yield a session's windows in seconds of the week, cut to the horizon."""
    for window in session.windows:
        begin = evidence.horizon.seconds(window.begin_utc)
        yield max(0.0, begin), min(evidence.horizon.end_s, evidence.horizon.seconds(window.end_utc))


def _room_s(run: Run, begin: float, end: float) -> float:
    """Return how far inside a window a session lies, negative by how far it reaches out."""
    return min(run.start_s - begin, end - run.end_s)


def check_session_alone(evidence: Evidence) -> Reading:
    """Sessions of one satellite overlap neither each other nor its contacts."""
    tally = Tally(Rule.SESSION_ALONE, "s")
    for run, other in combinations(evidence.runs, 2):
        if run.session.satellite == other.session.satellite:
            apart = max(other.start_s - run.end_s, run.start_s - other.end_s)
            told = f"it overlaps {other.session.name} by {-apart} s"
            tally.weigh(run.session.name, float(apart), HALF_SECOND, told)
    for run in evidence.runs:
        for case in evidence.cases:
            if case.satellite.name == run.session.satellite:
                apart = max(case.contact.start_s - run.end_s, run.start_s - case.contact.end_s)
                told = f"it overlaps the contact {case.id} by {-apart} s"
                tally.weigh(run.session.name, float(apart), HALF_SECOND, told)
    return tally.reading
