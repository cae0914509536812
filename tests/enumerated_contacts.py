"""Every way to lay one contact out: which command where, and downlink seconds on a grid of 10 s."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import permutations

import numpy as np

from passplan.domain.passes import Floats
from passplan.domain.plan import Slot
from passplan.domain.problem import Option, Problem
from tests.second_ledger import SecondLedger, Stretch, stretch

STEP_S = 10
Group = tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Room:
    """One contact with its commands in order and the most downlink seconds beside them.

    Attributes:
        index, number: pass and option.
        left, right: commands before and after the downlink.
        left_s, right_s: most downlink seconds before and after the peak.
    """

    index: int
    number: int
    left: Group
    right: Group
    left_s: int
    right_s: int


@dataclass(frozen=True, slots=True, eq=False)
class Ways:
    """Ways to choose the downlink seconds of one contact, arrays of one shape (ways,)."""

    charge: Stretch
    byte: Floats


def bounds(problem: Problem, option: Option, peak_s: int) -> tuple[int, int, int, int]:
    """Return (begin, left end, right begin, end): where commands and downlink may stand on each side."""
    begin, end = option.start_s + problem.terms.acquire_s, option.end_s - problem.terms.close_s
    return begin, min(end, peak_s), max(begin, peak_s), end


def room(problem: Problem, index: int, number: int, left: Sequence[int], right: Sequence[int]) -> Room | None:
    """Return the order of commands on each side that leaves most for the downlink, None where none fits."""
    before = _longest(problem, index, number, left, rising=True)
    after = _longest(problem, index, number, right, rising=False)
    if before is None or after is None:
        return None
    return Room(index, number, before[1], after[1], before[0], after[0])


def _longest(
    problem: Problem, index: int, number: int, commands: Sequence[int], *, rising: bool
) -> tuple[int, Group] | None:
    """Return (downlink seconds, order of commands) of one side, trying every order of the commands."""
    offered = problem.passes[index]
    begin, left_end, right_begin, end = bounds(problem, offered.options[number], offered.peak_s)
    found = []
    for order in permutations(sorted(commands)):
        if not _chain_kept(problem, order):
            continue
        most = left_end - begin if rising else end - right_begin
        # Outwards from the downlink: what stands farther out pushes it less.
        outwards = list(reversed(order)) if rising else list(order)
        taken = 0
        for command in outwards:
            wanted = problem.commands[command]
            reach = offered.reach(wanted.least_elevation_deg)
            taken += wanted.seconds
            limit = left_end - max(begin, reach.rise_s) if rising else min(end, reach.fall_s) - right_begin
            most = min(most, limit - taken)
        if commands and most < 0:
            continue
        found.append((max(0, most), order))
    return max(found, key=lambda one: one[0], default=None)


def _chain_kept(problem: Problem, order: Group) -> bool:
    """Return whether commands in one window follow those they wait for."""
    return all(
        first not in order[place:]
        for place, second in enumerate(order)
        for first, _ in problem.commands[second].after
    )


def slots(problem: Problem, laid: Room, left_s: int, right_s: int) -> list[Slot]:
    """Return the slots of a contact that transmits some seconds each side of the peak."""
    offered = problem.passes[laid.index]
    option = offered.options[laid.number]
    begin, left_end, right_begin, end = bounds(problem, option, offered.peak_s)
    found = [Slot(kind="acquire", start_s=option.start_s, end_s=begin)]
    ready = left_end - left_s - sum(problem.commands[c].seconds for c in laid.left)
    found += _uplinks(problem, laid.left, ready)
    if left_s:
        found.append(Slot(kind="downlink", start_s=left_end - left_s, end_s=left_end))
    if right_s:
        found.append(Slot(kind="downlink", start_s=right_begin, end_s=right_begin + right_s))
    found += _uplinks(problem, laid.right, right_begin + right_s)
    return [*found, Slot(kind="close", start_s=end, end_s=option.end_s)]


def _uplinks(problem: Problem, commands: Group, begin: int) -> Iterator[Slot]:
    """Yield one slot a command from a moment on."""
    for command in commands:
        wanted = problem.commands[command]
        yield Slot(kind="uplink", start_s=begin, end_s=begin + wanted.seconds, command=wanted.name)
        begin += wanted.seconds


class Ether:
    """Bytes and charge of contacts, second by second; rates are the stepped ones of the slices."""

    def __init__(self, problem: Problem) -> None:
        self.problem = problem
        self.ledger = SecondLedger(problem.crafts[0], problem.horizon.end_s)
        self._replies = {command.name: command.reply_s for command in problem.commands}
        self._rates: dict[int, tuple[int, Floats]] = {}

    def stepped(self, index: int, start_s: int, end_s: int) -> float:
        """Return the bytes of a downlink at the mean rates of the slices it touches."""
        parts = self.problem.passes[index].slices
        return sum(
            part.goodput_byte_s * max(0, min(end_s, part.end_s) - max(start_s, part.start_s))
            for part in parts
        )

    def of_slots(self, index: int, option: Option, each: Sequence[Sequence[Slot]]) -> Ways:
        """Return what lists of slots of one contact carry and draw."""
        craft = self.ledger.craft
        idle = self.ledger.under(0.0)[option.start_s : option.end_s]
        loaded = self.ledger.under(craft.draw_w)[option.start_s : option.end_s]
        changes = np.repeat(idle[None, :], len(each), axis=0)
        byte = np.zeros(len(each))
        for way, told in enumerate(each):
            for slot in told:
                if slot.kind == "downlink":
                    low, high = slot.start_s - option.start_s, slot.end_s - option.start_s
                    changes[way, low:high] = loaded[low:high]
                    byte[way] += self.stepped(index, slot.start_s, slot.end_s)
                elif slot.kind == "uplink":
                    reply_s = self._replies[slot.command]
                    draw = (slot.end_s - reply_s, float(slot.end_s), craft.draw_w)
                    self.ledger.add(changes[way], option.start_s, draw)
        return Ways(stretch(changes, craft.capacity_j), byte)

    def ways(self, laid: Room, seconds: str) -> Ways:
        """Return the ways to choose the downlink seconds: "none", "all", or on the "grid"."""
        offered = self.problem.passes[laid.index]
        pairs = {
            "none": [(0, 0)],
            "all": [(laid.left_s, laid.right_s)],
            "grid": self._grid(laid),
        }[seconds]
        option = offered.options[laid.number]
        return self.of_slots(laid.index, option, [slots(self.problem, laid, a, b) for a, b in pairs])

    def _grid(self, laid: Room) -> list[tuple[int, int]]:
        """Return (left, right) seconds, of those with the same sum the two that carry most.

        The sum settles the energy but for the light, which the second one may differ in.
        """
        offered = self.problem.passes[laid.index]
        _, left_end, right_begin, _ = bounds(self.problem, offered.options[laid.number], offered.peak_s)
        lefts = sorted({*range(0, laid.left_s + 1, STEP_S), laid.left_s})
        rights = sorted({*range(0, laid.right_s + 1, STEP_S), laid.right_s})
        before = {a: self.stepped(laid.index, left_end - a, left_end) for a in lefts}
        after = {b: self.stepped(laid.index, right_begin, right_begin + b) for b in rights}
        by_sum: dict[int, list[tuple[float, int, int]]] = {}
        for a in lefts:
            for b in rights:
                by_sum.setdefault(a + b, []).append((before[a] + after[b], a, b))
        return [(a, b) for total in sorted(by_sum) for _, a, b in sorted(by_sum[total])[-2:]]
