"""The store played in order: what is made, what a full partition loses, what each contact takes off."""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from passplan.domain.constants import DAY_S, WEEK_S
from passplan.domain.satellite import DataKind, Partition, Satellite

Class = tuple[str, int | None]
_ON_BOARD_DAY = -1
_MAKE, _TAKE, _SNAPSHOT, _NOTHING = range(4)  # the order of things that fall in one moment


@dataclass(frozen=True, kw_only=True, slots=True)
class Arrival:
    """Bytes by kind that exist from one moment on: a payload session's, at its end."""

    at_s: float
    byte: Mapping[str, float]


@dataclass(frozen=True, kw_only=True, slots=True)
class Taking:
    """What one contact takes of one class.

    Attributes:
        byte: comes down if the contact works; `chance` of it leaves the board.
        there_byte: what was on board when it was taken.
    """

    contact: str
    at_s: float
    kind: str
    made_day: int | None
    byte: float
    chance: float
    in_week: bool
    there_byte: float = math.nan


@dataclass(frozen=True, kw_only=True, slots=True)
class Sums:
    """What became of one kind over the week."""

    made_byte: float = 0.0
    down_byte: float = 0.0
    lost_byte: float = 0.0


@dataclass(frozen=True, kw_only=True, slots=True)
class StoreStory:
    """The takings with what was there at each, and the week's sums by kind."""

    takings: tuple[Taking, ...]
    week: Mapping[str, Sums]


def replay(
    satellite: Satellite, end_s: float, arrivals: Iterable[Arrival], takings: Iterable[Taking]
) -> StoreStory:
    """Play the store of one satellite from Monday 00:00 to `end_s`.

    Args:
        satellite: its partitions and kinds.
        end_s: end of the horizon.
        arrivals: bytes of payload sessions.
        takings: what the contacts take, at the end of their last downlink.
    """
    board = _Board(satellite)
    seen: list[Taking] = []
    week: dict[str, Sums] = {}
    now_s = 0.0
    for at_s, order, what in _moments(end_s, arrivals, takings):
        if at_s > now_s:
            board.flow(now_s, at_s)
            now_s = at_s
        if isinstance(what, Arrival):
            board.make(what.byte, int(at_s // DAY_S))
        elif isinstance(what, Taking):
            seen.append(board.take(what))
        elif order == _SNAPSHOT:
            week = board.sums()
    for taking in seen:
        if taking.in_week and taking.kind in week:
            sums = week[taking.kind]
            down_byte = sums.down_byte + min(taking.byte * taking.chance, taking.there_byte)
            week[taking.kind] = replace(sums, down_byte=down_byte)
    return StoreStory(takings=tuple(seen), week=week)


def _moments(
    end_s: float, arrivals: Iterable[Arrival], takings: Iterable[Taking]
) -> list[tuple[float, int, Arrival | Taking | None]]:
    """Return what happens when, in order; a midnight only begins a new class."""
    moments: list[tuple[float, int, Arrival | Taking | None]] = [
        (day * DAY_S, _NOTHING, None) for day in range(1, math.ceil(end_s / DAY_S))
    ]
    moments += [(WEEK_S, _SNAPSHOT, None), (end_s, _NOTHING, None)]
    moments += [(arrival.at_s, _MAKE, arrival) for arrival in arrivals]
    moments += [(taking.at_s, _TAKE, taking) for taking in takings]
    return sorted(moments, key=lambda moment: moment[:2])


class _Board:
    """What is on board, by class."""

    def __init__(self, satellite: Satellite) -> None:
        self.kinds = {kind.name: kind for kind in satellite.store.kinds}
        self.partitions = satellite.store.partitions
        self.made = dict.fromkeys(self.kinds, 0.0)
        self.lost = dict.fromkeys(self.kinds, 0.0)
        self.held: dict[Class, float] = {
            _class_of(kind, _ON_BOARD_DAY): kind.on_board_byte for kind in self.kinds.values()
        }

    def flow(self, begin_s: float, end_s: float) -> None:
        """Make what is made all the time; no midnight lies inside the stretch."""
        byte = {kind.name: kind.made_byte_s * (end_s - begin_s) for kind in self.kinds.values()}
        self.make(byte, int((begin_s + end_s) / 2.0 // DAY_S))

    def make(self, byte: Mapping[str, float], day: int) -> None:
        """Put new bytes on board, and lose what the partitions cannot hold."""
        for kind, amount in byte.items():
            if kind in self.made:
                self.made[kind] += amount
        for partition in self.partitions:
            mine = [kind for kind in self.kinds.values() if kind.partition == partition.name]
            new = {_class_of(kind, day): byte.get(kind.name, 0.0) for kind in mine}
            excess = sum(new.values()) + self._held_in(partition) - partition.size_byte
            for group, amount in new.items():
                self.held[group] = self.held.get(group, 0.0) + amount
            if excess > 0.0 and partition.when_full == "refuse":
                self._lose(new, excess)
            elif excess > 0.0:
                self._lose_oldest(partition, excess)

    def take(self, taking: Taking) -> Taking:
        """Take a contact's expected bytes off; return the taking with what was there."""
        group = (taking.kind, taking.made_day)
        there = self.held.get(group, 0.0)
        if group in self.held:
            self.held[group] = max(0.0, there - taking.byte * taking.chance)
        return replace(taking, there_byte=there)

    def sums(self) -> dict[str, Sums]:
        """Return what was made and lost so far, by kind."""
        return {kind: Sums(made_byte=self.made[kind], lost_byte=self.lost[kind]) for kind in self.kinds}

    def _held_in(self, partition: Partition) -> float:
        return sum(self._classes_in(partition).values())

    def _classes_in(self, partition: Partition) -> dict[Class, float]:
        kinds = {kind.name for kind in self.kinds.values() if kind.partition == partition.name}
        return {group: byte for group, byte in self.held.items() if group[0] in kinds}

    def _lose(self, among: Mapping[Class, float], excess: float) -> None:
        """Lose `excess` bytes among the classes, each by its share."""
        total = sum(among.values())
        for group, byte in among.items():
            gone = byte * min(1.0, excess / total) if total > 0.0 else 0.0
            self.held[group] -= gone
            self.lost[group[0]] += gone

    def _lose_oldest(self, partition: Partition, excess: float) -> None:
        """Lose `excess` bytes, the oldest classes first; what does not age counts as oldest."""
        classes = self._classes_in(partition)
        for age in sorted({_age(group) for group in classes}):
            same = {group: byte for group, byte in classes.items() if _age(group) == age}
            self._lose(same, excess)
            excess = max(0.0, excess - sum(same.values()))


def _class_of(kind: DataKind, day: int) -> Class:
    """Return the class that bytes of a kind made on a day belong to."""
    return kind.name, day if kind.halves_every_days is not None else None


def _age(group: Class) -> int:
    """Return the day a class counts as made on."""
    return _ON_BOARD_DAY if group[1] is None else group[1]
