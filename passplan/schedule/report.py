"""An outcome written down as the `Plan` people get."""

import itertools
import math
from collections.abc import Callable, Mapping, Sequence
from datetime import datetime

from passplan.domain.plan import (
    BatteryReport,
    Carried,
    CommandOutcome,
    Contact,
    DataReport,
    ElementsUsed,
    Plan,
    SessionOutcome,
    Share,
    Silence,
    WorthReport,
)
from passplan.schedule.layout import LaidOut
from passplan.schedule.outcome import Outcome
from passplan.schedule.rows_people import sitting_before
from passplan.schedule.solve import Solved
from passplan.schedule.steps import offered_min

NameContacts = Callable[[Sequence[tuple[str, str, datetime]]], tuple[str, ...]]

_MOST_GAP_FRACTION = 0.005
_HAND_OVER_S = 120


def draw_up(
    mission: str,
    solved: Solved,
    plan: Outcome,
    best: Outcome,
    *,
    elements: tuple[ElementsUsed, ...],
    name_contacts: NameContacts,
    reasons: Mapping[int, str],
    notices: Sequence[str],
    wanted: Mapping[str, tuple[float, float, bool]],
    edition: int,
    made_from: tuple[tuple[str, str], ...],
) -> Plan:
    """Return the plan of a solved week, without its verdict.

    Args:
        mission: its name.
        solved: steps and bounds.
        plan: the outcome to publish.
        best: that of the worth step, nothing given.
        elements: sets used.
        name_contacts: gives ids to (satellite, station code, TCA).
        reasons: command index to the words of why it is not placed.
        notices: sentences to read first.
        wanted: satellite name to (floor fraction, end fraction, start assumed) as people wrote them.
        edition: number of the plan.
        made_from: (file, SHA-256) of the inputs.
    """
    problem = plan.problem
    contacts = _contacts(plan, name_contacts)
    commands = _commands(plan, contacts, reasons)
    worth = _worth(solved, plan, best)
    missed = any(command.must and not command.placed for command in commands)
    floors = [craft.floor_j < wanted[craft.name][0] * craft.capacity_j for craft in problem.crafts]
    return Plan(
        mission=mission,
        horizon=problem.horizon,
        edition=edition,
        made_from=made_from,
        elements=elements,
        proven=all(step.proven for step in solved.steps) and worth.gap_fraction <= _MOST_GAP_FRACTION,
        good=not missed and not any(floors),
        notices=tuple(notices),
        steps=solved.steps,
        worth=worth,
        silences=tuple(_silence(plan, number, contacts) for number in range(len(problem.crafts))),
        contacts=tuple(contact for contact in contacts if contact.start_s < problem.horizon.week_s),
        lookahead=tuple(contact for contact in contacts if contact.start_s >= problem.horizon.week_s),
        commands=commands,
        sessions=_sessions(plan),
        batteries=tuple(_battery(plan, number, wanted) for number in range(len(problem.crafts))),
        data=tuple(row for number in range(len(problem.crafts)) for row in _data(plan, number)),
        shares=_shares(plan),
        gives=_gives(solved),
    )


def _worth(solved: Solved, plan: Outcome, best: Outcome) -> WorthReport:
    """Return bound, best possible and the plan's worth."""
    # Ctrl-C may come before the worth step; with nothing to choose from there is none, and nothing to gain.
    unknown = math.inf if plan.problem.passes or plan.problem.sessions else 0.0
    bound = next((step.bound for step in solved.steps if step.name == "worth"), unknown)
    best_laid_out = max(best.worth(), plan.worth())
    return WorthReport(
        bound=bound,
        best_laid_out=best_laid_out,
        laid_out=plan.worth(),
        gap_fraction=max(0.0, 1.0 - best_laid_out / bound) if bound > 0.0 else 0.0,
        week_laid_out=plan.worth(week_only=True),
    )


def _gives(solved: Solved) -> dict[str, str]:
    """Return in words what the burden steps were allowed to give away."""
    return {
        step.name: f"up to {step.give:.4g} {step.unit} given to spare people"
        for step in solved.steps
        if step.give > 0.0
    }


def _contacts(plan: Outcome, name_contacts: NameContacts) -> tuple[Contact, ...]:
    """Return every contact, named, with its partners of a hand-over."""
    problem = plan.problem
    sights = [problem.passes[laid.index].sight for laid in plan.contacts]
    ids = name_contacts([(s.satellite, s.station, problem.horizon.utc(s.tca_s)) for s in sights])
    return tuple(_contact(plan, place, laid, ids) for place, laid in enumerate(plan.contacts))


def _contact(plan: Outcome, place: int, laid: LaidOut, ids: Sequence[str]) -> Contact:
    """Return one contact."""
    problem = plan.problem
    offered = problem.passes[laid.index]
    craft, charge = problem.crafts[offered.satellite], plan.charges[offered.satellite]
    start, end = laid.option.start_s, laid.option.end_s
    sight = offered.sight
    carried = plan.stocks[offered.satellite].carried[laid.index]
    before, after = _partner(plan, place, -1), _partner(plan, place, 1)
    return Contact(
        id=ids[place],
        satellite=sight.satellite,
        station=sight.station,
        operators=tuple(problem.operators[who].handle for who in laid.operators),
        aos_s=sight.aos_s,
        tca_s=sight.tca_s,
        los_s=sight.los_s,
        aos_azimuth_deg=sight.aos_azimuth_deg,
        tca_azimuth_deg=sight.tca_azimuth_deg,
        los_azimuth_deg=sight.los_azimuth_deg,
        max_elevation_deg=sight.max_elevation_deg,
        tca_range_km=sight.tca_range_km,
        start_s=start,
        end_s=end,
        slots=laid.slots,
        carried=tuple(
            Carried(kind=craft.kinds[data.kind].name, made_day=data.made_day, byte=byte)
            for data, byte in sorted(carried.items(), key=lambda item: (item[0].kind, item[0].made_day or 0))
        ),
        success_fraction=offered.success_fraction,
        charge_start_fraction=charge.at(start) / craft.capacity_j,
        charge_lowest_fraction=charge.lowest(start, end)[1] / craft.capacity_j,
        hand_over_from="" if before is None else ids[before],
        hand_over_to="" if after is None else ids[after],
    )


def _partner(plan: Outcome, place: int, step: int) -> int | None:
    """Return the contact of the same satellite that a hand-over joins to one, before (-1) or after (1)."""
    problem, here = plan.problem, plan.contacts[place]
    other = place + step
    while 0 <= other < len(plan.contacts):
        there = plan.contacts[other]
        if problem.passes[there.index].satellite == problem.passes[here.index].satellite:
            first, second = (there, here) if step < 0 else (here, there)
            near = second.option.start_s - first.option.end_s <= _HAND_OVER_S
            apart = problem.passes[there.index].station != problem.passes[here.index].station
            return other if near and apart else None
        other += step
    return None


def _commands(
    plan: Outcome, contacts: Sequence[Contact], reasons: Mapping[int, str]
) -> tuple[CommandOutcome, ...]:
    """Return what became of each command."""
    problem = plan.problem
    where = {command: place for place, laid in enumerate(plan.contacts) for command in laid.commands}
    found = []
    for number, wanted in enumerate(problem.commands):
        placed = number in where
        later = placed and contacts[where[number]].start_s >= problem.horizon.week_s
        found.append(
            CommandOutcome(
                name=wanted.name,
                satellite=problem.crafts[wanted.satellite].name,
                must=wanted.must,
                placed=placed,
                contact=contacts[where[number]].id if placed else "",
                left_for_next_week=later,
                reason="" if placed else reasons.get(number, ""),
            )
        )
    return tuple(found)


def _sessions(plan: Outcome) -> tuple[SessionOutcome, ...]:
    """Return what became of each session."""
    problem = plan.problem
    found = []
    for which, session in enumerate(problem.sessions):
        start = plan.starts.get(which)
        why = "" if start is not None else "charge, data or contacts in its windows were worth more"
        if not session.starts_s:
            why = "no window of it lies in this week and its look-ahead"
        found.append(
            SessionOutcome(
                name=session.name,
                satellite=problem.crafts[session.satellite].name,
                start_s=start,
                end_s=None if start is None else start + session.length_s,
                in_lookahead=start is not None and start >= problem.horizon.week_s,
                reason=why,
            )
        )
    return tuple(found)


def _battery(plan: Outcome, number: int, wanted: Mapping[str, tuple[float, float, bool]]) -> BatteryReport:
    """Return one battery's week."""
    problem = plan.problem
    craft, charge = problem.crafts[number], plan.charges[number]
    floor, end, assumed = wanted[craft.name]
    at, low = charge.lowest(0.0, problem.horizon.week_s)
    lowest_idle = min(floor * craft.capacity_j, craft.floor_j)
    return BatteryReport(
        satellite=craft.name,
        floor_fraction=floor,
        floor_in_force_fraction=lowest_idle / craft.capacity_j,
        lowest_fraction=low / craft.capacity_j,
        lowest_s=at,
        start_fraction=craft.start_j / craft.capacity_j,
        end_fraction=charge.at(problem.horizon.end_s) / craft.capacity_j,
        end_wanted_fraction=min(end, craft.start_j / craft.capacity_j),
        start_assumed=assumed,
        shadow_s=tuple((span.start_s, span.end_s) for span in craft.idle if not span.sunlit),
        trace=tuple(
            (float(moment), float(energy / craft.capacity_j))
            for moment, energy in zip(charge.times_s, charge.energy_j, strict=True)
        ),
    )


def _data(plan: Outcome, number: int) -> list[DataReport]:
    """Return the week of each kind of one satellite."""
    problem = plan.problem
    craft, stock = problem.crafts[number], plan.stocks[number]
    down = [0.0] * len(craft.kinds)
    for laid in plan.contacts:
        offered = problem.passes[laid.index]
        if offered.satellite == number and laid.option.start_s < problem.horizon.week_s:
            for data, byte in stock.carried[laid.index].items():
                down[data.kind] += byte * offered.success_fraction
    rows = []
    for place, kind in enumerate(craft.kinds):
        left = kind.on_board_byte + stock.made[place] - down[place] - stock.lost[place]
        rows.append(
            DataReport(
                satellite=craft.name,
                kind=kind.name,
                on_board_start_byte=kind.on_board_byte,
                made_byte=stock.made[place],
                down_byte=down[place],
                lost_byte=stock.lost[place],
                on_board_end_byte=max(0.0, left),
                backlog_weeks=max(0.0, left) / down[place] if down[place] > 0.0 else None,
            )
        )
    return rows


def _shares(plan: Outcome) -> tuple[Share, ...]:
    """Return each operator's part of the week."""
    problem = plan.problem
    week = [laid for laid in plan.contacts if laid.option.start_s < problem.horizon.week_s]
    used = {laid.index: laid for laid in plan.contacts}
    offered = offered_min(problem, until_s=problem.horizon.week_s)
    shares = []
    for who, person in enumerate(problem.operators):
        mine = [laid for laid in week if who in laid.operators]
        duties = [duty for laid in mine for duty in problem.passes[laid.index].duties if duty.operator == who]
        sittings = sum(
            not any(
                who in used[before].operators
                for before in sitting_before(problem, laid.index)
                if before in used
            )
            for laid in mine
        )
        shares.append(
            Share(
                operator=person.handle,
                contacts=len(mine),
                sittings=sittings,
                duty_min=sum(duty.load_min for duty in duties),
                night_min=sum(duty.night_min for duty in duties),
                offered_min=offered[who],
            )
        )
    return tuple(shares)


def _silence(plan: Outcome, number: int, contacts: Sequence[Contact]) -> Silence:
    """Return the longest time without a contact that begins in the week."""
    problem = plan.problem
    name = problem.crafts[number].name
    edges = [(0.0, 0.0)]
    edges += [(float(c.start_s), float(c.end_s)) for c in contacts if c.satellite == name]
    edges.append((problem.horizon.end_s, problem.horizon.end_s))
    gaps = [
        (after[0] - before[1], before[1], after[0])
        for before, after in itertools.pairwise(edges)
        if before[1] < problem.horizon.week_s
    ]
    length, begin, end = max(gaps, key=lambda gap: (gap[0], -gap[1]))
    return Silence(satellite=name, from_s=begin, to_s=begin + max(0.0, length) if length > 0 else end)
