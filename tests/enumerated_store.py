"""What is on board and what comes down, contact by contact, for many plans at once."""

from collections.abc import Sequence
from itertools import permutations

import numpy as np

from passplan.domain.constants import DAY_S
from passplan.domain.passes import Floats
from passplan.domain.problem import Craft, Problem

Class = tuple[int, int | None]
_MOST_ORDERS = 3


class Board:
    """The store of one satellite; amounts in bytes are arrays of shape (classes, plans)."""

    def __init__(self, problem: Problem, starts: Sequence[int | None]) -> None:
        self.problem = problem
        self.craft: Craft = problem.crafts[0]
        self.classes = _classes(problem)
        self.place = {data: number for number, data in enumerate(self.classes)}
        names = {kind.name: number for number, kind in enumerate(self.craft.kinds)}
        self.arrivals = [
            (start + session.length_s, names[kind], byte)
            for session, start in zip(problem.sessions, starts, strict=True)
            if start is not None
            for kind, byte in session.makes
        ]

    def start(self) -> Floats:
        """Return what is on board at the start, one plan."""
        held = np.zeros((len(self.classes), 1))
        for number, kind in enumerate(self.craft.kinds):
            held[self.place[number, None if kind.halves_every_days is None else -1]] = kind.on_board_byte
        return held

    def flow(self, held: Floats, begin_s: float, end_s: float) -> Floats:
        """Return what is on board later, made and lost in the order in which it happens."""
        held = held.copy()
        midnights = np.arange(np.floor(begin_s / DAY_S) + 1.0, np.floor(end_s / DAY_S) + 1.0) * DAY_S
        ends = [at for at, _, _ in self.arrivals if begin_s < at <= end_s]
        for edge in sorted({*midnights.tolist(), *ends, end_s} - {begin_s}):
            kinds = enumerate(self.craft.kinds)
            self._take_in(held, begin_s, {k: told.made_byte_s * (edge - begin_s) for k, told in kinds})
            begin_s = edge
            for at, kind, byte in self.arrivals:
                if at == edge:
                    self._take_in(held, edge, {kind: byte})
        return held

    def _take_in(self, held: Floats, moment_s: float, made: dict[int, float]) -> None:
        """Put bytes on board; what has no room is lost as the partition has it."""
        for part, partition in enumerate(self.craft.partitions):
            rows = [n for n, (kind, _) in enumerate(self.classes) if self.craft.kinds[kind].partition == part]
            coming = {
                self._row(kind, moment_s): byte
                for kind, byte in made.items()
                if byte and self._row(kind, moment_s) in rows
            }
            if not coming:
                continue
            total = sum(coming.values())
            room = np.maximum(0.0, partition.size_byte - held[rows].sum(axis=0))
            kept = np.ones_like(room) if partition.overwrites else np.minimum(1.0, room / total)
            for row, byte in coming.items():
                held[row] += byte * kept
            excess = np.maximum(0.0, held[rows].sum(axis=0) - partition.size_byte)
            for row in sorted(rows, key=lambda n: (self.classes[n][1] is not None, self.classes[n][1] or 0)):
                lost = np.minimum(held[row], excess)
                held[row] -= lost
                excess = excess - lost

    def _row(self, kind: int, moment_s: float) -> int:
        """Return the class that data of a kind made at a moment go to."""
        ages = self.craft.kinds[kind].halves_every_days is not None
        return self.place[kind, int(moment_s // DAY_S) if ages else None]

    def weights(self, index: int) -> Floats:
        """Return the worth of a kilobyte of each class at a pass."""
        moment_s = self.problem.passes[index].peak_s
        found = []
        for kind, day in self.classes:
            told = self.craft.kinds[kind]
            weight = told.weight
            if told.halves_every_days is not None and day is not None:
                made_s = 0.0 if day < 0 else DAY_S * day + DAY_S / 2.0
                weight /= 2.0 ** (max(0.0, moment_s - made_s) / DAY_S / told.halves_every_days)
            found.append(weight)
        return np.array(found)

    def orders(self, index: int) -> list[list[int]]:
        """Return in which orders a contact may take the classes: by kind, within a kind the dearest first."""
        weights = self.weights(index)
        kinds = sorted({kind for kind, _ in self.classes}, key=lambda kind: -self.craft.kinds[kind].weight)
        best = sorted(range(len(self.classes)), key=lambda n: -weights[n])
        others = list(permutations(kinds))[1:_MOST_ORDERS]
        return [best, *(sorted(best, key=lambda n: order.index(self.classes[n][0])) for order in others)]

    def take(
        self, held: Floats, room_byte: Floats, index: int, order: Sequence[int]
    ) -> tuple[Floats, Floats]:
        """Return (what stays on board, worth) of a contact that carries up to `room_byte`."""
        held, room = held.copy(), room_byte.copy()
        success = self.problem.passes[index].success_fraction
        weights, worth = self.weights(index), np.zeros_like(room)
        for row in order:
            down = np.minimum(held[row], room)
            room = room - down
            held[row] -= success * down
            worth += success * weights[row] * down / 1000.0
        return held, worth


def _classes(problem: Problem) -> list[Class]:
    """Return a class for each kind, and for each day made where it ages."""
    days = range(-1, int(problem.horizon.end_s // DAY_S) + 1)
    found: list[Class] = []
    for number, kind in enumerate(problem.crafts[0].kinds):
        found += [(number, None)] if kind.halves_every_days is None else [(number, day) for day in days]
    return found
