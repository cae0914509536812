"""What the checks read: each contact with its sky and its link, each satellite with its ledger."""

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from skyfield.sgp4lib import EarthSatellite

from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission
from passplan.domain.moments import WEEKDAYS, Horizon, Span
from passplan.domain.passes import Floats
from passplan.domain.people import Operator
from passplan.domain.plan import Contact, Plan, SessionOutcome, Slot
from passplan.domain.requests import Command, Session, occurrences
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.verify.link_sum import down_margin_db, goodput_byte_s, up_margin_db
from passplan.verify.second_ledger import Loads, SecondLedger, ledger_begin_s, second_ledger
from passplan.verify.shadow_walk import shadow_spans
from passplan.verify.skyfield_view import View, orbit, view
from passplan.verify.slot_times import slot_time


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Case:
    """One contact with all that is found out about it.

    Attributes:
        in_week: False for a contact of the look-ahead.
        view: the sky from AOS to LOS and a little more.
        down_margin_db, up_margin_db: along the view; within half a second counts as on time.
        byte: what the link carries in the downlink slots.
    """

    contact: Contact
    satellite: Satellite
    station: Station
    in_week: bool
    view: View
    down_margin_db: Floats
    up_margin_db: Floats
    byte: float

    @property
    def id(self) -> str:
        """Short name of the contact."""
        return self.contact.id

    def slots(self, kind: str) -> tuple[Slot, ...]:
        """The slots of one kind, in the order of the plan."""
        return tuple(slot for slot in self.contact.slots if slot.kind == kind)


@dataclass(frozen=True, kw_only=True, slots=True)
class Placed:
    """A command in an uplink slot."""

    case: Case
    slot: Slot
    command: Command


@dataclass(frozen=True, kw_only=True, slots=True)
class Run:
    """A payload session that the plan runs."""

    outcome: SessionOutcome
    session: Session
    start_s: int
    end_s: int


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Evidence:
    """All that the checks read.

    Attributes:
        cases: contacts with a known satellite, station and element set, in order of start.
        commands: the commands of the horizon by satellite and name, daily ones one a day.
        placed: uplink slots whose command is known, in order of start.
        runs: sessions run, in order of start.
        ledgers: satellite name to its ledger, for every satellite with an element set.
    """

    mission: Mission
    elements: Mapping[str, ElementSet]
    plan: Plan
    cases: tuple[Case, ...]
    commands: Mapping[tuple[str, str], Command]
    placed: tuple[Placed, ...]
    runs: tuple[Run, ...]
    ledgers: Mapping[str, SecondLedger]

    @property
    def horizon(self) -> Horizon:
        """The week the plan is for."""
        return self.plan.horizon

    def clock(self, seconds: float) -> str:
        """Return a second of the week as people say it: "Tue 05:12:31 UTC"."""
        moment = self.horizon.utc(seconds)
        return f"{WEEKDAYS[moment.weekday()].capitalize()} {moment:%H:%M:%S} UTC"

    def operator(self, handle: str) -> Operator | None:
        """Return the operator of that handle, None when there is none."""
        return next((person for person in self.mission.operators if person.handle == handle), None)


def gather(mission: Mission, elements: Mapping[str, ElementSet], plan: Plan) -> Evidence:
    """Work out what the checks need, from mission and elements again."""
    horizon = plan.horizon
    bodies = {sat.name: orbit(elements[sat.name]) for sat in mission.satellites if sat.name in elements}
    stations = {station.code: station for station in mission.stations}
    cases = tuple(
        _case(mission, plan, contact, bodies[contact.satellite])
        for contact in sorted(plan.all_contacts, key=lambda contact: (contact.start_s, contact.id))
        if contact.satellite in bodies and contact.station in stations
    )
    commands = {
        (command.satellite, command.name): command for command in occurrences(mission.commands, horizon)
    }
    placed = [
        Placed(case=case, slot=slot, command=commands[case.satellite.name, slot.command])
        for case in cases
        for slot in case.slots("uplink")
        if (case.satellite.name, slot.command) in commands
    ]
    placed.sort(key=lambda one: (one.slot.start_s, one.slot.end_s))
    evidence = Evidence(
        mission=mission,
        elements=elements,
        plan=plan,
        cases=cases,
        commands=commands,
        placed=tuple(placed),
        runs=_runs(mission, plan),
        ledgers={},
    )
    return replace(evidence, ledgers={name: _ledger(evidence, name, body) for name, body in bodies.items()})


def _ledger(evidence: Evidence, name: str, body: EarthSatellite) -> SecondLedger:
    """Return one satellite's ledger under the plan."""
    satellite, horizon = evidence.mission.satellite(name), evidence.horizon
    shadows = shadow_spans(body, horizon, ledger_begin_s(satellite, horizon), horizon.end_s)
    loads = _loads(satellite, evidence.cases, evidence.placed, evidence.runs)
    return second_ledger(evidence.mission, satellite, horizon, shadows, loads)


def _case(mission: Mission, plan: Plan, contact: Contact, body: EarthSatellite) -> Case:
    """Look at one contact."""
    satellite, station = mission.satellite(contact.satellite), mission.station(contact.station)
    seen = view(body, station, plan.horizon, contact.start_s, contact.end_s)
    down = down_margin_db(satellite, station, seen.elevation_deg, seen.range_km)
    closes = within_half_second(down) >= 0.0
    curve = np.where(closes, goodput_byte_s(satellite, station, down), 0.0)
    downlinks = [slot for slot in contact.slots if slot.kind == "downlink" and slot.end_s > slot.start_s]
    return Case(
        contact=contact,
        satellite=satellite,
        station=station,
        in_week=contact in plan.contacts,
        view=seen,
        down_margin_db=down,
        up_margin_db=up_margin_db(satellite, station, seen.elevation_deg, seen.range_km),
        byte=float(sum(curve[seen.seconds(slot.start_s, slot.end_s)].sum() for slot in downlinks)),
    )


def within_half_second(margin: Floats) -> Floats:
    """Return the best margin within half a second of each second, by straight lines between seconds."""
    between = (margin[1:] + margin[:-1]) / 2.0
    best = margin.copy()
    best[1:] = np.fmax(best[1:], between)
    best[:-1] = np.fmax(best[:-1], between)
    return best


def _runs(mission: Mission, plan: Plan) -> tuple[Run, ...]:
    """Return the sessions the plan runs, of those the mission knows."""
    known = {(session.satellite, session.name): session for session in mission.sessions}
    runs = [
        Run(
            outcome=outcome,
            session=known[outcome.satellite, outcome.name],
            start_s=outcome.start_s,
            end_s=max(outcome.start_s, outcome.end_s),
        )
        for outcome in plan.sessions
        if outcome.start_s is not None
        and outcome.end_s is not None
        and (outcome.satellite, outcome.name) in known
    ]
    return tuple(sorted(runs, key=lambda run: (run.start_s, run.session.name)))


def _loads(
    satellite: Satellite, cases: tuple[Case, ...], placed: tuple[Placed, ...], runs: tuple[Run, ...]
) -> Loads:
    """Return what the plan asks of one satellite's battery: downlink slots, replies, sessions."""
    keyed = [
        slot_span(slot) for case in cases if case.satellite is satellite for slot in case.slots("downlink")
    ]
    for one in placed:
        if one.case.satellite is satellite:
            end_s = float(one.slot.end_s)
            keyed.append((end_s - slot_time(satellite, one.command).reply_s, end_s))
    sessions = [
        ((float(run.start_s), float(run.end_s)), run.session.draw_w)
        for run in runs
        if run.session.satellite == satellite.name
    ]
    return Loads(keyed=tuple(keyed), sessions=tuple(sessions))


def slot_span(slot: Slot) -> Span:
    """Return the span of a slot; one that runs backwards has no length."""
    return float(slot.start_s), float(max(slot.start_s, slot.end_s))
