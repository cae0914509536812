"""Every whole-numbered choice of a tiny week: options, sessions, and commands in their windows."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import product

from passplan.domain.problem import Option, Problem
from tests.enumerated_contacts import Room, room
from tests.enumerated_people import Burden, Used, burdens

Up = tuple[int, bool]


@dataclass(frozen=True, slots=True)
class Choice:
    """All that is whole-numbered in a plan but people.

    Attributes:
        rooms: one a contact, in order of pass.
        starts: of each session, None where it does not run.
        musts, rank, urgent_h: values of the steps that need no ledger.
        asked: worth of commands and sessions.
        most: no plan of this choice is worth more.
        pairs: passes that need two people.
    """

    rooms: tuple[Room, ...]
    starts: tuple[int | None, ...]
    musts: int
    rank: int
    urgent_h: float
    asked: float
    most: float
    pairs: frozenset[int]

    @property
    def used(self) -> Used:
        """(Pass, option) of each contact."""
        return tuple((laid.index, laid.number) for laid in self.rooms)


class Choices:
    """Walks through every choice that keeps the rules which need no ledger."""

    def __init__(self, problem: Problem, most_byte: float) -> None:
        self.problem = problem
        self.most_byte = most_byte
        self._rooms: dict[tuple[object, ...], Room | None] = {}
        self._burdens: dict[tuple[Used, frozenset[int]], list[Burden]] = {}

    def burdens(self, choice: Choice) -> list[Burden]:
        """Return the cost of every way to staff a choice."""
        return self._staffing(choice.used, choice.pairs)

    def _staffing(self, used: Used, pairs: frozenset[int]) -> list[Burden]:
        if (used, pairs) not in self._burdens:
            self._burdens[used, pairs] = burdens(self.problem, used, pairs)
        return self._burdens[used, pairs]

    def all(self) -> Iterator[Choice]:
        """Yield every choice."""
        for used in contact_sets(self.problem):
            if not self._staffing(used, frozenset()):
                continue
            for starts in product(*([None, *session.starts_s] for session in self.problem.sessions)):
                if sessions_alone(self.problem, used, starts):
                    yield from self._with_commands(used, starts)

    def _with_commands(self, used: Used, starts: tuple[int | None, ...]) -> Iterator[Choice]:
        """Yield a choice of contacts and sessions with every placing of commands."""
        problem = self.problem
        places: list[list[Up | None]] = [[None] for _ in problem.commands]
        for index, number in used:
            for placing in problem.passes[index].placings:
                if number in placing.options:
                    places[placing.command] += [(index, False), (index, True)]
        for up in product(*places):
            if all(in_order(problem, up, command) for command in range(len(up))):
                choice = self._choice(used, starts, up)
                if choice is not None:
                    yield choice

    def _choice(self, used: Used, starts: tuple[int | None, ...], up: Sequence[Up | None]) -> Choice | None:
        """Return one choice, None where a window is too small or two people are not there."""
        problem = self.problem
        rooms = []
        for index, number in used:
            sides = [
                tuple(c for c, place in enumerate(up) if place == (index, late)) for late in (False, True)
            ]
            laid = self._room(index, number, sides[0], sides[1])
            if laid is None:
                return None
            rooms.append(laid)
        gone = {command: place[0] for command, place in enumerate(up) if place is not None}
        pairs = frozenset(index for command, index in gone.items() if problem.commands[command].two_people)
        if not self._staffing(used, pairs):
            return None
        asked = sum(
            problem.commands[command].worth * problem.passes[index].success_fraction
            for command, index in gone.items()
        )
        asked += sum(s.worth for s, start in zip(problem.sessions, starts, strict=True) if start is not None)
        musts = sorted(
            (number for number, command in enumerate(problem.commands) if command.must),
            key=lambda number: (problem.commands[number].deadline_s, number),
        )
        return Choice(
            rooms=tuple(rooms),
            starts=starts,
            musts=sum(command in gone for command in musts),
            rank=sum(len(musts) - place for place, command in enumerate(musts) if command in gone),
            urgent_h=sum(
                problem.passes[index].peak_s / 3600.0
                for c, index in gone.items()
                if problem.commands[c].urgent
            ),
            asked=asked,
            most=asked + self._data_worth(rooms),
            pairs=pairs,
        )

    def _room(self, index: int, number: int, left: tuple[int, ...], right: tuple[int, ...]) -> Room | None:
        key = (index, number, left, right)
        if key not in self._rooms:
            self._rooms[key] = room(self.problem, index, number, left, right)
        return self._rooms[key]

    def _data_worth(self, rooms: Sequence[Room]) -> float:
        """Return what the data of some contacts can be worth at the very most."""
        weight = max((kind.weight for kind in self.problem.crafts[0].kinds), default=0.0)
        total = 0.0
        for laid in rooms:
            offered = self.problem.passes[laid.index]
            seconds = laid.left_s + laid.right_s
            rate = max(part.goodput_byte_s for part in offered.slices)
            total += offered.success_fraction * min(self.most_byte, seconds * rate)
        return weight * total / 1000.0


def contact_sets(problem: Problem) -> Iterator[Used]:
    """Yield every set of contacts that one satellite and its stations can hold."""
    each = [[None, *range(len(offered.options))] for offered in problem.passes]
    for numbers in product(*each):
        used = tuple((index, number) for index, number in enumerate(numbers) if number is not None)
        if all(apart(problem, one, two) for place, one in enumerate(used) for two in used[place + 1 :]):
            yield used


def apart(problem: Problem, one: tuple[int, int], two: tuple[int, int]) -> bool:
    """Return whether two contacts, in order of peak, follow each other as they must."""
    before, after = problem.passes[one[0]], problem.passes[two[0]]
    first, second = before.options[one[1]], after.options[two[1]]
    pause = float(problem.terms.hand_over_gap_s)
    if before.station == after.station and before.sight != after.sight:
        pause = max(pause, problem.sites[before.station].set_up_s)
    return second.start_s >= first.end_s + pause


def sessions_alone(problem: Problem, used: Used, starts: Sequence[int | None]) -> bool:
    """Return whether sessions overlap neither each other nor a contact and its pause."""
    spans = [
        (start, start + session.length_s)
        for session, start in zip(problem.sessions, starts, strict=True)
        if start is not None
    ]
    options: list[Option] = [problem.passes[index].options[number] for index, number in used]
    busy = [(option.start_s, option.end_s + problem.terms.hand_over_gap_s) for option in options]
    return all(
        high <= low_2 or high_2 <= low
        for place, (low, high) in enumerate(spans)
        for low_2, high_2 in [*spans[place + 1 :], *busy]
    )


def in_order(problem: Problem, up: Sequence[Up | None], command: int) -> bool:
    """Return whether a placed command follows those it waits for; order inside one window is for `room`."""
    own = up[command]
    if own is None:
        return True
    for first, order in problem.commands[command].after:
        other = up[first]
        if other is None or other[0] > own[0]:
            return False
        if other[0] == own[0] and (order == "after_contact" or other[1] > own[1]):
            return False
    return True
