"""From a solution to real slots in whole seconds: acquire, uplink, downlink, uplink, close."""

from collections.abc import Sequence
from dataclasses import dataclass

from passplan.domain.plan import Slot
from passplan.domain.problem import Option, Problem
from passplan.schedule.model import Values
from passplan.schedule.variables import DataClass, Variables


@dataclass(frozen=True, slots=True)
class LaidOut:
    """One used pass.

    Attributes:
        index: of the pass; option: the piece used.
        operators: indices, the licensed one who controls first.
        slots: in order.
        left, right: commands before and after the downlink, in order.
        asked_kb: kilobytes by class as the solution has them.
        link_byte: what the one-second curve carries in the downlink slots.
    """

    index: int
    option: Option
    operators: tuple[int, ...]
    slots: tuple[Slot, ...]
    left: tuple[int, ...]
    right: tuple[int, ...]
    asked_kb: dict[DataClass, float]
    link_byte: float

    @property
    def commands(self) -> tuple[int, ...]:
        """Commands that go up, in order."""
        return self.left + self.right


def lay_out(problem: Problem, names: Variables, values: Values) -> list[LaidOut]:
    """Return the used passes of a solution in order of time, laid out."""
    found = []
    for index, offered in enumerate(problem.passes):
        used = [number for number, column in enumerate(names.x[index]) if values[column] > 0.5]
        if used:
            found.append(_contact(problem, names, values, index, offered.options[used[0]]))
    return sorted(found, key=lambda laid: (laid.option.start_s, laid.index))


def started(problem: Problem, names: Variables, values: Values) -> dict[int, int]:
    """Return the start (s) of each session that runs, by its index."""
    return {
        which: start
        for which, session in enumerate(problem.sessions)
        for start, column in zip(session.starts_s, names.run[which], strict=True)
        if values[column] > 0.5
    }


def _contact(problem: Problem, names: Variables, values: Values, index: int, option: Option) -> LaidOut:
    """Lay one contact out: commands stand as near to the downlink as they can, the downlink to the peak."""
    offered = problem.passes[index]
    begin = option.start_s + problem.terms.acquire_s
    end = option.end_s - problem.terms.close_s
    left_end, right_begin = min(end, offered.peak_s), max(begin, offered.peak_s)
    left = _chosen(names.up_left, values, index)
    right = _chosen(names.up_right, values, index)
    before, after = _sides(problem, names, values, index, (left, right), (begin, end))
    left, right = _ordered(problem, left + before, rising=True), _ordered(problem, right + after, rising=False)
    rooms = (max(0, left_end - begin) - _total_s(problem, left), max(0, end - right_begin) - _total_s(problem, right))
    sent_left, sent_right = _downlink_s(problem, names, values, index, rooms)
    slots = [Slot(kind="acquire", start_s=option.start_s, end_s=begin)]
    slots += _uplinks(problem, left, left_end - sent_left - _total_s(problem, left))
    slots += _downlinks([(left_end - sent_left, left_end), (right_begin, right_begin + sent_right)])
    slots += _uplinks(problem, right, right_begin + sent_right)
    if end < option.end_s:
        slots.append(Slot(kind="close", start_s=end, end_s=option.end_s))
    return LaidOut(
        index=index,
        option=option,
        operators=_operators(problem, names, values, index),
        slots=tuple(slots),
        left=tuple(left),
        right=tuple(right),
        asked_kb={data: max(0.0, float(values[column])) for data, column in names.v[index].items()},
        link_byte=sum(offered.byte(slot.start_s, slot.end_s) for slot in slots if slot.kind == "downlink"),
    )


def _total_s(problem: Problem, commands: Sequence[int]) -> int:
    """Return the seconds that commands take together."""
    return sum(problem.commands[command].seconds for command in commands)


def _sides(
    problem: Problem,
    names: Variables,
    values: Values,
    index: int,
    fixed: tuple[list[int], list[int]],
    inside: tuple[int, int],
) -> tuple[list[int], list[int]]:
    """Return which of the commands that may stand on either side go before and after the downlink.

    Every split is weighed: one that fits both rooms and comes nearest to the seconds that
    the solution leans to the left.
    """
    offered = problem.passes[index]
    free = _chosen(names.up_either, values, index)
    if not free:
        return [], []
    reach = offered.reaches[0]
    begin, end = inside
    room_left = max(0, min(end, offered.peak_s) - max(begin, reach.rise_s)) - _total_s(problem, fixed[0])
    room_right = max(0, min(end, reach.fall_s) - max(begin, offered.peak_s)) - _total_s(problem, fixed[1])
    leaning_s = float(values[names.leaning[index]])

    def unfit(mask: int) -> tuple[float, float, int]:
        left_s = sum(problem.commands[c].seconds for k, c in enumerate(free) if mask >> k & 1)
        right_s = _total_s(problem, free) - left_s
        return max(0, left_s - room_left) + max(0, right_s - room_right), abs(left_s - leaning_s), mask

    best = min(range(1 << len(free)), key=unfit)
    return [c for k, c in enumerate(free) if best >> k & 1], [c for k, c in enumerate(free) if not best >> k & 1]


def _downlink_s(
    problem: Problem, names: Variables, values: Values, index: int, rooms: tuple[int, int]
) -> tuple[int, int]:
    """Return whole downlink seconds before and after the peak, as far as the rooms let them.

    What the choice of sides pushes out of one room goes to the other.
    """
    sent = {"left": 0.0, "right": 0.0}
    for part, column in zip(problem.passes[index].slices, names.t[index], strict=True):
        sent[part.side] += float(values[column])
    total = int(sum(sent.values()) + 0.5)
    left = max(0, min(int(sent["left"] + 0.5), rooms[0]))
    right = max(0, min(total - left, rooms[1]))
    return max(left, min(total - right, rooms[0])), right


def _chosen(side: dict[tuple[int, int], int], values: Values, index: int) -> list[int]:
    """Return the commands of one pass that a solution sends on one side."""
    return [command for (command, where), column in side.items() if where == index and values[column] > 0.5]


def _ordered(problem: Problem, chosen: list[int], *, rising: bool) -> list[int]:
    """Return commands of one side in order: low ones outside, chained ones one after the other."""
    rank = _ranks(problem, chosen)

    def place(command: int) -> tuple[float, int, float, int]:
        wish = problem.commands[command].least_elevation_deg
        height = -90.0 if wish is None else wish
        wanted = problem.commands[command]
        return (height if rising else -height, rank[command], wanted.deadline_s, command)

    return sorted(chosen, key=place)


def _ranks(problem: Problem, chosen: Sequence[int]) -> dict[int, int]:
    """Return how many of the chosen commands stand before each along its chains."""
    rank = dict.fromkeys(chosen, 0)
    for _ in chosen:
        for command in chosen:
            before = [rank[first] + 1 for first, _ in problem.commands[command].after if first in rank]
            rank[command] = max([rank[command], *before])
    return rank


def _uplinks(problem: Problem, commands: Sequence[int], begin: int) -> list[Slot]:
    """Return uplink slots one after the other from a moment on."""
    slots = []
    for command in commands:
        wanted = problem.commands[command]
        slots.append(
            Slot(kind="uplink", start_s=begin, end_s=begin + wanted.seconds, command=wanted.name)
        )
        begin += wanted.seconds
    return slots


def _downlinks(parts: Sequence[tuple[int, int]]) -> list[Slot]:
    """Return downlink slots, touching ones as one, empty ones left out."""
    (a, b), (c, d) = parts
    if b == c and a < b and c < d:
        return [Slot(kind="downlink", start_s=a, end_s=d)]
    return [Slot(kind="downlink", start_s=low, end_s=high) for low, high in parts if high > low]


def _operators(problem: Problem, names: Variables, values: Values, index: int) -> tuple[int, ...]:
    """Return who is on a contact, licensed ones first."""
    there = [operator for operator, column in names.y[index].items() if values[column] > 0.5]
    return tuple(sorted(there, key=lambda who: (not problem.operators[who].may_control, who)))

