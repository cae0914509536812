"""A laid-out plan of a tiny week held to the rules, and its values by the enumerator's own arithmetic."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from passplan.domain.plan import Slot
from passplan.domain.problem import Option, Problem
from passplan.schedule.layout import LaidOut
from tests.enumerated_choices import Choice, apart, in_order, sessions_alone
from tests.enumerated_contacts import Room, bounds
from tests.enumerated_people import Burden, burden, staffing_faults
from tests.enumerator import Enumerator


@dataclass(frozen=True, slots=True)
class Judged:
    """What a plan is worth, and every rule it breaks.

    Attributes:
        stepped_byte, curve_byte: brought down at the slices' mean rates and at the one-second curve.
    """

    faults: tuple[str, ...]
    musts: int
    urgent_h: float
    short_kj: float
    worth: float
    burden: Burden
    stepped_byte: float
    curve_byte: float


def judge(trier: Enumerator, contacts: Sequence[LaidOut], starts: Mapping[int, int]) -> Judged:
    """Return what a laid-out plan is worth; the enumerator's slack applies to the battery."""
    problem = trier.problem
    contacts = sorted(contacts, key=lambda laid: laid.index)
    choice = _choice(problem, contacts, starts)
    faults = _faults(problem, contacts, choice)
    if faults:
        return Judged(tuple(faults), choice.musts, choice.urgent_h, 0.0, 0.0, Burden(0, 0.0), 0.0, 0.0)
    ways = [trier.ether.of_slots(laid.index, laid.option, [laid.slots]) for laid in contacts]
    plans = trier.play(choice, ways)
    if not len(plans.energy_j):
        faults.append("the battery does not bear it")
    staff = {laid.index: laid.operators for laid in contacts}
    downs = [(laid.index, slot) for laid in contacts for slot in laid.slots if slot.kind == "downlink"]
    best = float(plans.worth.max()) if len(plans.worth) else 0.0
    energy = float(plans.energy_j.max()) if len(plans.energy_j) else 0.0
    return Judged(
        faults=tuple(faults),
        musts=choice.musts,
        urgent_h=choice.urgent_h,
        short_kj=max(0.0, trier.craft.end_j + trier.slack_j - energy) / 1000.0,
        worth=choice.asked + best,
        burden=burden(problem, choice.used, staff),
        stepped_byte=sum(trier.ether.stepped(index, slot.start_s, slot.end_s) for index, slot in downs),
        curve_byte=sum(
            float(
                np.sum(
                    _curve(problem, index)[slot.start_s - _begin(problem, index) :][
                        : slot.end_s - slot.start_s
                    ]
                )
            )
            for index, slot in downs
        ),
    )


def _curve(problem: Problem, index: int) -> np.ndarray:
    return problem.passes[index].goodput_byte_s


def _begin(problem: Problem, index: int) -> int:
    return problem.passes[index].curve_start_s


def _choice(problem: Problem, contacts: Sequence[LaidOut], starts: Mapping[int, int]) -> Choice:
    """Return the whole-numbered part of a plan."""
    number = {command.name: place for place, command in enumerate(problem.commands)}
    rooms: list[Room] = []
    gone: dict[int, int] = {}
    for laid in contacts:
        offered = problem.passes[laid.index]
        up = [slot for slot in laid.slots if slot.kind == "uplink"]
        left = tuple(number[slot.command] for slot in up if not _late(laid, slot, offered.peak_s))
        right = tuple(number[slot.command] for slot in up if _late(laid, slot, offered.peak_s))
        gone |= dict.fromkeys((*left, *right), laid.index)
        rooms.append(Room(laid.index, offered.options.index(laid.option), left, right, 0, 0))
    asked = sum(problem.commands[c].worth * problem.passes[i].success_fraction for c, i in gone.items())
    return Choice(
        rooms=tuple(rooms),
        starts=tuple(starts.get(which) for which in range(len(problem.sessions))),
        musts=sum(problem.commands[command].must for command in gone),
        rank=0,
        urgent_h=sum(
            problem.passes[i].peak_s / 3600.0 for c, i in gone.items() if problem.commands[c].urgent
        ),
        asked=asked + sum(problem.sessions[which].worth for which in starts),
        most=0.0,
        pairs=frozenset(i for c, i in gone.items() if problem.commands[c].two_people),
    )


def _late(laid: LaidOut, slot: Slot, peak_s: int) -> bool:
    """Return whether an uplink slot stands after the downlink, or after the peak where there is none."""
    downs = [one.start_s for one in laid.slots if one.kind == "downlink"]
    return slot.start_s > min(downs) if downs else slot.start_s >= peak_s


def _faults(problem: Problem, contacts: Sequence[LaidOut], choice: Choice) -> list[str]:
    """Return every rule that needs no ledger and that a plan breaks."""
    used = choice.used
    faults = [
        f"passes {one[0]} and {two[0]} too close"
        for place, one in enumerate(used)
        for two in used[place + 1 :]
        if not apart(problem, one, two)
    ]
    if not sessions_alone(problem, used, choice.starts):
        faults.append("a session beside something else")
    staff = {laid.index: laid.operators for laid in contacts}
    faults += staffing_faults(problem, used, staff, choice.pairs)
    names = [slot.command for laid in contacts for slot in laid.slots if slot.kind == "uplink"]
    faults += [f"{name} sent twice" for name in set(names) if names.count(name) > 1]
    places = [
        next(((r.index, c in r.right) for r in choice.rooms if c in r.left + r.right), None)
        for c in range(len(problem.commands))
    ]
    faults += [f"command {c} out of order" for c in range(len(places)) if not in_order(problem, places, c)]
    for laid in contacts:
        faults += [f"pass {laid.index}: {told}" for told in _slot_faults(problem, laid)]
    return faults


def _slot_faults(problem: Problem, laid: LaidOut) -> list[str]:
    """Return what is wrong with the slots of one contact."""
    offered, option = problem.passes[laid.index], laid.option
    begin, _, _, end = bounds(problem, option, offered.peak_s)
    told: list[str] = []
    busy = [slot for slot in laid.slots if slot.kind in {"uplink", "downlink"}]
    ordered = sorted(busy, key=lambda slot: slot.start_s)
    told += [f"{slot} outside" for slot in busy if not begin <= slot.start_s < slot.end_s <= end]
    told += [f"{b} overlaps" for a, b in pairwise(ordered) if b.start_s < a.end_s]
    told += _command_faults(problem, laid, option, [slot for slot in ordered if slot.kind == "uplink"])
    return told


def _command_faults(problem: Problem, laid: LaidOut, option: Option, ups: Sequence[Slot]) -> list[str]:
    """Return what is wrong with the commands of one contact: window, length, reach, order."""
    offered, told, sent = problem.passes[laid.index], [], []
    fitting = {placing.command: placing.options for placing in offered.placings}
    number = {command.name: place for place, command in enumerate(problem.commands)}
    here = {number[slot.command] for slot in ups}
    for slot in ups:
        command = number[slot.command]
        wanted = problem.commands[command]
        reach = offered.reach(wanted.least_elevation_deg)
        if offered.options.index(option) not in fitting.get(command, ()):
            told.append(f"{slot.command} not in its window")
        if slot.end_s - slot.start_s != wanted.seconds:
            told.append(f"{slot.command} has the wrong length")
        if slot.start_s < reach.rise_s or slot.end_s > reach.fall_s:
            told.append(f"{slot.command} too low")
        if any(first in here and first not in sent for first, _ in wanted.after):
            told.append(f"{slot.command} before the one it waits for")
        sent.append(command)
    return told
