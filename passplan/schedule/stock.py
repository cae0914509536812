"""The store of a laid-out week: what each contact brings down, what is made and what is lost."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

from passplan.domain.constants import DAY_S
from passplan.domain.problem import Craft, Problem
from passplan.schedule.layout import LaidOut
from passplan.schedule.rows_store import made_byte
from passplan.schedule.variables import DataClass, weight_of

_NOTHING_BYTE = 0.5


@dataclass(frozen=True, slots=True)
class Stock:
    """One satellite's week.

    Attributes:
        carried: [index of the laid-out contact] bytes by class if it works.
        made, lost: bytes by kind, up to the end of the week.
    """

    carried: dict[int, dict[DataClass, float]]
    made: list[float]
    lost: list[float]


def carry(problem: Problem, number: int, contacts: Sequence[LaidOut], starts: Mapping[int, int]) -> Stock:
    """Return what one satellite's contacts bring down, played in order of time.

    A contact takes what the solution asked for as far as its laid-out downlink carries it;
    what the downlink carries more goes to the most valuable bytes that no later contact
    counts on.

    Args:
        problem: the week.
        number: of the satellite.
        contacts: its laid-out contacts in order.
        starts: session index to start (s).
    """
    craft = problem.crafts[number]
    board = _Board(problem, craft, number, starts)
    result = Stock({}, [0.0] * len(craft.kinds), [0.0] * len(craft.kinds))
    promised = _promised(problem, contacts)
    for laid in contacts:
        offered = problem.passes[laid.index]
        board.until(max(slot.end_s for slot in laid.slots if slot.kind != "close"))
        for data, kilobyte in laid.asked_kb.items():
            promised[data] = promised.get(data, 0.0) - kilobyte * 1000.0 * offered.success_fraction
        taken = _share(craft, board.held, promised, laid, offered.peak_s)
        for data, byte in taken.items():
            board.held[data] -= byte * offered.success_fraction
        result.carried[laid.index] = taken
    board.until(problem.horizon.end_s)
    result.made[:], result.lost[:] = board.week_made, board.week_lost
    return result


def _promised(problem: Problem, contacts: Sequence[LaidOut]) -> dict[DataClass, float]:
    """Return the expected bytes by class that all contacts together ask for."""
    total: dict[DataClass, float] = {}
    for laid in contacts:
        chance = problem.passes[laid.index].success_fraction
        for data, kilobyte in laid.asked_kb.items():
            total[data] = total.get(data, 0.0) + kilobyte * 1000.0 * chance
    return total


def _share(
    craft: Craft,
    held: Mapping[DataClass, float],
    promised: Mapping[DataClass, float],
    laid: LaidOut,
    moment_s: float,
) -> dict[DataClass, float]:
    """Return the bytes by class one contact takes: asked for first, then the most valuable left."""
    room, taken = laid.link_byte, {}
    classes = sorted(
        laid.asked_kb, key=lambda data: (-weight_of(craft, data, moment_s), data.kind, data.made_day or 0)
    )
    for data in classes:
        byte = min(laid.asked_kb[data] * 1000.0, max(0.0, held.get(data, 0.0)), room)
        taken[data] = byte
        room -= byte
    for data in classes:
        spare = held.get(data, 0.0) - taken[data] - promised.get(data, 0.0)
        more = min(room, max(0.0, spare))
        taken[data] += more
        room -= more
    return {data: byte for data, byte in taken.items() if byte > _NOTHING_BYTE}


class _Board:
    """What is on board, by class, moved forward in time."""

    def __init__(self, problem: Problem, craft: Craft, number: int, starts: Mapping[int, int]) -> None:
        self.craft = craft
        self.now_s = 0.0
        self.week_s = problem.horizon.week_s
        self.week_made = [0.0] * len(craft.kinds)
        self.week_lost = [0.0] * len(craft.kinds)
        self.held: dict[DataClass, float] = {}
        names = {kind.name: place for place, kind in enumerate(craft.kinds)}
        self.arrivals = sorted(
            (starts[which] + session.length_s, names[kind], byte)
            for which, session in enumerate(problem.sessions)
            if session.satellite == number and which in starts
            for kind, byte in session.makes
            if kind in names
        )
        for place, kind in enumerate(craft.kinds):
            self.held[self._class(place, -1)] = kind.on_board_byte

    def until(self, moment_s: float) -> None:
        """Let time pass, in stretches that no midnight and no session's end divides."""
        days = [day * DAY_S for day in range(int(self.now_s // DAY_S) + 1, int(moment_s // DAY_S) + 1)]
        ends = [at for at, _, _ in self.arrivals if self.now_s < at <= moment_s]
        for edge in sorted({*days, *ends, moment_s}):
            if edge <= self.now_s:
                continue
            day = int(self.now_s // DAY_S)
            self._make(
                {
                    place: made_byte(self.craft, DataClass(place, None), self.now_s, edge)
                    for place in range(len(self.craft.kinds))
                },
                day,
                edge,
            )
            self.now_s = edge
            for at, place, byte in self.arrivals:
                if at == edge:
                    self._make({place: byte}, int(edge // DAY_S), edge)

    def _class(self, place: int, day: int) -> DataClass:
        return DataClass(place, None if self.craft.kinds[place].halves_every_days is None else day)

    def _make(self, byte: Mapping[int, float], day: int, moment_s: float) -> None:
        """Put bytes on board and lose what does not fit."""
        for place, amount in byte.items():
            data = self._class(place, day)
            self.held[data] = self.held.get(data, 0.0) + amount
            if moment_s <= self.week_s:
                self.week_made[place] += amount
        for part, partition in enumerate(self.craft.partitions):
            classes = [data for data in self.held if self.craft.kinds[data.kind].partition == part]
            excess = sum(self.held[data] for data in classes) - partition.size_byte
            if excess <= 0.0:
                continue
            if partition.overwrites:
                ages = sorted({_age(data) for data in classes})
                groups = [[data for data in classes if _age(data) == age] for age in ages]
                amounts = dict(self.held)
            else:
                amounts = {self._class(place, day): amount for place, amount in byte.items()}
                groups = [[data for data in amounts if data in classes]]
            for group in groups:
                excess -= self._lose(group, amounts, excess, moment_s)

    def _lose(
        self, group: Sequence[DataClass], amounts: Mapping[DataClass, float], excess: float, moment_s: float
    ) -> float:
        """Lose up to `excess` bytes of a group, each by its share; return what was lost."""
        total = sum(amounts[data] for data in group)
        if excess <= 0.0 or total <= 0.0:
            return 0.0
        gone = min(excess, total)
        for data in group:
            part = gone * amounts[data] / total
            self.held[data] -= part
            if moment_s <= self.week_s:
                self.week_lost[data.kind] += part
        return gone


def _age(data: DataClass) -> int:
    """Return the day a class counts as made on; what does not age counts as oldest."""
    return -1 if data.made_day is None else data.made_day
