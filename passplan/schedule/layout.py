"""From a solution to real slots in whole seconds: acquire, uplink, downlink, uplink, close."""

import math
from collections.abc import Container, Iterable, Sequence
from dataclasses import dataclass

from passplan.domain.moments import merged
from passplan.domain.plan import Slot
from passplan.domain.problem import Option, Problem, Side
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


def lay_out(
    problem: Problem, names: Variables, values: Values, *, pieces: Container[int] = frozenset()
) -> list[LaidOut]:
    """Return the used passes of a solution in order of time, laid out.

    Args:
        problem: the week.
        names: columns.
        values: a solution.
        pieces: satellites whose downlinks stand exactly where the solution has them, in
            pieces where it must be; others are put together around the peak.
    """
    found = []
    for index, offered in enumerate(problem.passes):
        used = [number for number, column in enumerate(names.x[index]) if values[column] > 0.5]
        if used:
            option = offered.options[used[0]]
            found.append(_contact(problem, names, values, index, option, pieces=offered.satellite in pieces))
    return sorted(found, key=lambda laid: (laid.option.start_s, laid.index))


def misfits(problem: Problem, names: Variables, values: Values) -> list[list[int]]:
    """Return sets of 0/1 columns that cannot all be 1: an option and commands that no split fits whole.

    The model lets a command that may stand on either side be cut in two by the peak; the
    lay-out does not.
    """
    found = []
    for index, offered in enumerate(problem.passes):
        free = _chosen(names.up_either, values, index)
        used = [number for number, column in enumerate(names.x[index]) if values[column] > 0.5]
        if free and used:
            option = offered.options[used[0]]
            fixed = _fixed(names, values, index)
            if _sides(problem, names, values, index, fixed, _inside(problem, option)) is None:
                chosen = [*fixed[0], *fixed[1], *free]
                columns = [c for command in chosen for c in names.up(command, index) if values[c] > 0.5]
                found.append([names.x[index][used[0]], *columns])
    return found


def started(problem: Problem, names: Variables, values: Values) -> dict[int, int]:
    """Return the start (s) of each session that runs, by its index."""
    return {
        which: start
        for which, session in enumerate(problem.sessions)
        for start, column in zip(session.starts_s, names.run[which], strict=True)
        if values[column] > 0.5
    }


def _contact(
    problem: Problem, names: Variables, values: Values, index: int, option: Option, *, pieces: bool
) -> LaidOut:
    """Lay one contact out: commands stand as near to the downlink as they can, the downlink to the peak."""
    offered = problem.passes[index]
    begin, end = _inside(problem, option)
    fixed = _fixed(names, values, index)
    before, after = _sides(problem, names, values, index, fixed, (begin, end)) or ([], [])
    left = _ordered(problem, fixed[0] + before, rising=True)
    right = _ordered(problem, fixed[1] + after, rising=False)
    middle = (
        _spread(problem, names, values, index, (begin, end), left, right) if pieces else None
    ) or _compact(problem, names, values, index, (begin, end), left, right)
    slots = [Slot(kind="acquire", start_s=option.start_s, end_s=begin), *middle]
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


def _compact(
    problem: Problem,
    names: Variables,
    values: Values,
    index: int,
    inside: tuple[int, int],
    left: Sequence[int],
    right: Sequence[int],
) -> list[Slot]:
    """Return the slots between acquire and close with the downlink in one piece around the peak."""
    peak = problem.passes[index].peak_s
    left_end, right_begin = min(inside[1], peak), max(inside[0], peak)
    rooms = _room_s(problem, index, inside, left, "left"), _room_s(problem, index, inside, right, "right")
    sent_left, sent_right = _downlink_s(problem, names, values, index, rooms)
    slots = _uplinks(problem, left, left_end - sent_left - _total_s(problem, left))
    slots += _downlinks([(left_end - sent_left, left_end), (right_begin, right_begin + sent_right)])
    return slots + _uplinks(problem, right, right_begin + sent_right)


def _room_s(
    problem: Problem, index: int, inside: tuple[int, int], commands: Sequence[int], side: Side
) -> int:
    """Return the downlink seconds that the commands of one side leave, those that want to be high inside."""
    offered = problem.passes[index]
    begin, end = inside

    def room(command: int | None) -> int:
        reach = None if command is None else offered.reach(problem.commands[command].least_elevation_deg)
        if side == "left":
            return min(end, offered.peak_s) - (begin if reach is None else max(begin, reach.rise_s))
        return (end if reach is None else min(end, reach.fall_s)) - max(begin, offered.peak_s)

    rooms = {command: room(command) for command in commands}
    left = [room(None) - _total_s(problem, commands)]
    for here in rooms.values():
        nearer = [other for other, there in rooms.items() if there <= here]
        left.append(here - _total_s(problem, nearer))
    return max(0, min(left))


def _spread(
    problem: Problem,
    names: Variables,
    values: Values,
    index: int,
    inside: tuple[int, int],
    left: Sequence[int],
    right: Sequence[int],
) -> list[Slot] | None:
    """Return slots with the downlink where the solution has it; None where commands do not fit between."""
    offered = problem.passes[index]
    taken: list[tuple[int, int]] = []
    for part, column in zip(offered.slices, names.t[index], strict=True):
        low, high = max(part.start_s, inside[0]), min(part.end_s, inside[1])
        sent = min(int(values[column] + 0.5), high - low)
        if sent > 0:
            taken.append((high - sent, high) if part.side == "left" else (low, low + sent))
    slots = _downlinks(taken)
    for commands, forward in ((left, False), (right, True)):
        cursor = offered.peak_s
        for command in commands if forward else reversed(commands):
            wanted = problem.commands[command]
            reach = offered.reach(wanted.least_elevation_deg)
            low, high = max(inside[0], reach.rise_s), min(inside[1], reach.fall_s)
            begin = _gap(
                taken,
                wanted.seconds,
                (max(low, cursor), high) if forward else (low, min(high, cursor)),
                forward=forward,
            )
            if begin is None:
                return None
            taken = sorted([*taken, (begin, begin + wanted.seconds)])
            slots.append(
                Slot(kind="uplink", start_s=begin, end_s=begin + wanted.seconds, command=wanted.name)
            )
            cursor = begin + wanted.seconds if forward else begin
    return sorted(slots, key=lambda slot: slot.start_s)


def _gap(
    taken: Sequence[tuple[int, int]], seconds: int, span: tuple[int, int], *, forward: bool
) -> int | None:
    """Return the start of the first (or last) gap of so many seconds in a span, None when there is none."""
    edges = [span[0], *(edge for low, high in sorted(taken) for edge in (low, high)), span[1]]
    gaps = [
        (max(low, span[0]), min(high, span[1])) for low, high in zip(edges[::2], edges[1::2], strict=True)
    ]
    wide = [(low, high) for low, high in gaps if high - low >= seconds]
    if not wide:
        return None
    return wide[0][0] if forward else wide[-1][1] - seconds


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
) -> tuple[list[int], list[int]] | None:
    """Return which of the commands that may stand on either side go before and after the downlink.

    None where no split fits.

    Every split is weighed: one that keeps chains in order, fits both rooms and comes nearest
    to the seconds that the solution leans to the left.
    """
    free = _chosen(names.up_either, values, index)
    if not free:
        return [], []
    room_left = _room_s(problem, index, inside, fixed[0], "left")
    room_right = _room_s(problem, index, inside, fixed[1], "right")
    leaning_s = float(values[names.leaning[index]])

    def unfit(mask: int) -> tuple[int, float, float, int]:
        before = {c for k, c in enumerate(free) if mask >> k & 1} | set(fixed[0])
        late = {c for c in (*free, *fixed[1]) if c not in before}
        wrong = sum(first in late for c in before for first, _ in problem.commands[c].after)
        left_s = sum(problem.commands[c].seconds for k, c in enumerate(free) if mask >> k & 1)
        right_s = _total_s(problem, free) - left_s
        return wrong, max(0, left_s - room_left) + max(0, right_s - room_right), abs(left_s - leaning_s), mask

    best = min(range(1 << len(free)), key=unfit)
    if any(unfit(best)[:2]):
        return None
    return [c for k, c in enumerate(free) if best >> k & 1], [
        c for k, c in enumerate(free) if not best >> k & 1
    ]


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


def _inside(problem: Problem, option: Option) -> tuple[int, int]:
    """Return the stretch of an option between acquire and close."""
    return option.start_s + problem.terms.acquire_s, option.end_s - problem.terms.close_s


def _fixed(names: Variables, values: Values, index: int) -> tuple[list[int], list[int]]:
    """Return the commands of one pass whose side the solution has settled, before and after the downlink."""
    return _chosen(names.up_left, values, index), _chosen(names.up_right, values, index)


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
        slots.append(Slot(kind="uplink", start_s=begin, end_s=begin + wanted.seconds, command=wanted.name))
        begin += wanted.seconds
    return slots


def _downlinks(parts: Iterable[tuple[int, int]]) -> list[Slot]:
    """Return downlink slots in order, touching ones as one, empty ones left out."""
    joined = merged(parts, -math.inf, math.inf)
    return [Slot(kind="downlink", start_s=int(low), end_s=int(high)) for low, high in joined]


def _operators(problem: Problem, names: Variables, values: Values, index: int) -> tuple[int, ...]:
    """Return who is on a contact, licensed ones first."""
    there = [operator for operator, column in names.y[index].items() if values[column] > 0.5]
    return tuple(sorted(there, key=lambda who: (not problem.operators[who].may_control, who)))
