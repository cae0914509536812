"""The best plan of a tiny week by trying every one, in plain arithmetic.

It judges the optimisation model and shares no row with it: it chooses among the same
offered contacts at the same stepped rates, lays each choice out with downlink seconds on a
grid of 10 s, plays charge second by second and the store contact by contact, and compares
the steps in their order. One satellite only.
"""

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.domain.passes import Floats
from passplan.domain.problem import Problem
from tests.enumerated_choices import Choice, Choices
from tests.enumerated_contacts import Ether, Ways
from tests.enumerated_people import Burden
from tests.enumerated_store import Board
from tests.second_ledger import Stretch, stretch

_SAME_KJ = 1e-6

Flags = NDArray[np.bool_]


@dataclass(frozen=True, slots=True)
class Best:
    """The values of the steps, in their order."""

    musts: int
    rank: int
    short_kj: float
    urgent_h: float
    worth: float
    choice: Choice


@dataclass(frozen=True, slots=True, eq=False)
class Plans:
    """Many plans of one choice, arrays (plans,) and (classes, plans)."""

    energy_j: Floats
    held: Floats
    worth: Floats

    def part(self, which: Flags | NDArray[np.intp]) -> "Plans":
        """Return some of the plans."""
        return Plans(self.energy_j[which], self.held[:, which], self.worth[which])


class Enumerator:
    """Every plan of one problem.

    Attributes:
        slack_j: added to every demand on the battery: positive for plans that surely keep
            the rules, negative for all that may be said to keep them. The floor is never
            raised above what the bus alone keeps.
    """

    def __init__(self, problem: Problem) -> None:
        self.problem = problem
        self.slack_j = 0.0
        self.ether = Ether(problem)
        self.craft = problem.crafts[0]
        self._walk = Choices(problem, most_byte(problem))
        self.choices = list(self._walk.all())
        self._ways: dict[tuple[object, str], Ways] = {}
        self._idle: dict[tuple[float, float, tuple[int | None, ...]], Stretch] = {}
        alone = stretch(self.ether.ledger.under(0.0), self.craft.capacity_j)
        self._spare_j = min(self.craft.start_j + float(alone.dip_j), float(alone.low_j)) - self.craft.floor_j

    def best(self) -> Best | None:
        """Return the best values of all steps up to worth, None where nothing keeps the rules."""
        group = self._most_musts()
        if not group:
            return None
        short_kj = min(self.shortfall_kj(choice) for choice in group)
        group = [choice for choice in group if self.shortfall_kj(choice) <= short_kj + _SAME_KJ]
        urgent_h = min(choice.urgent_h for choice in group)
        group = [choice for choice in group if choice.urgent_h <= urgent_h + 1e-9]
        best, best_choice = -math.inf, group[0]
        for choice in sorted(group, key=lambda one: -one.most):
            if choice.most <= best:
                break
            worth = self.worth(choice, short_kj)
            if worth > best:
                best, best_choice = worth, choice
        return Best(best_choice.musts, best_choice.rank, short_kj, urgent_h, best, best_choice)

    def _most_musts(self) -> list[Choice]:
        """Return the choices with most musts, and with the first ones first, that the battery bears."""
        ranks = sorted({(choice.musts, choice.rank) for choice in self.choices}, reverse=True)
        for rank in ranks:
            group = [one for one in self.choices if (one.musts, one.rank) == rank]
            borne = [choice for choice in group if math.isfinite(self.shortfall_kj(choice))]
            if borne:
                return borne
        return []

    def least_burden(self, best: Best, worth: float, give_sittings: float) -> Burden | None:
        """Return fewest sittings, and with no more but the give fewest night minutes, at a worth."""
        able = [
            (burden, choice)
            for choice in self.choices
            if (choice.musts, choice.rank) == (best.musts, best.rank)
            and choice.urgent_h <= best.urgent_h + 1e-9
            and choice.most >= worth
            for burden in self._walk.burdens(choice)
        ]
        sittings = self._first(sorted(able, key=lambda one: one[0].sittings), best, worth)
        if sittings is None:
            return None
        few = [one for one in able if one[0].sittings <= sittings.sittings + give_sittings]
        nights = self._first(sorted(few, key=lambda one: one[0].night_quarters), best, worth)
        return None if nights is None else Burden(sittings.sittings, nights.night_quarters)

    def _first(self, able: Iterable[tuple[Burden, Choice]], best: Best, worth: float) -> Burden | None:
        """Return the first burden whose choice reaches a worth."""
        poor: set[Choice] = set()
        for burden, choice in able:
            if choice not in poor:
                if self.worth(choice, best.short_kj) >= worth:
                    return burden
                poor.add(choice)
        return None

    def shortfall_kj(self, choice: Choice) -> float:
        """Return the least charge missing at the end, infinite where the battery does not bear a choice."""
        plans = self._play(choice, "none")
        if not len(plans.energy_j):
            return math.inf
        return max(0.0, self.craft.end_j + self.slack_j - float(plans.energy_j.max())) / 1000.0

    def worth(self, choice: Choice, short_kj: float) -> float:
        """Return the most that a choice can be worth with no more charge missing at the end."""
        best = -math.inf
        for seconds in ("all", "grid"):
            plans = self._play(choice, seconds)
            kept = plans.energy_j + 1000.0 * (short_kj + _SAME_KJ) >= self.craft.end_j + self.slack_j
            if kept.any():
                best = max(best, choice.asked + float(plans.worth[kept].max()))
            if seconds == "all" and kept.any():
                return best
        return best

    def _play(self, choice: Choice, seconds: str) -> Plans:
        """Return the plans of a choice that the battery bears, charge and store at the end of the horizon."""
        ways = []
        for laid in choice.rooms:
            key = (laid, seconds)
            if key not in self._ways:
                self._ways[key] = self.ether.ways(laid, seconds)
            ways.append(self._ways[key])
        return self.play(choice, ways)

    def play(self, choice: Choice, ways: Sequence[Ways]) -> Plans:
        """Return the plans of a choice with these ways to lay its contacts out."""
        problem, board = self.problem, Board(self.problem, choice.starts)
        plans = Plans(np.array([min(self.craft.start_j, self.craft.capacity_j)]), board.start(), np.zeros(1))
        now = 0
        store_s = 0.0
        for laid, way in zip(choice.rooms, ways, strict=True):
            option = problem.passes[laid.index].options[laid.number]
            plans = self._wait(plans, now, option.start_s, choice)
            plans = plans.part(plans.energy_j >= self._asked_j(laid.left + laid.right) - 1e-6)
            held = board.flow(plans.held, store_s, option.start_s)
            plans = self._contact(Plans(plans.energy_j, held, plans.worth), way, board, laid.index)
            now, store_s = option.end_s, float(option.start_s)
        return self._wait(plans, now, self.ether.ledger.seconds, choice)

    def _asked_j(self, commands: Sequence[int]) -> float:
        """Return the charge wanted where a contact begins."""
        told = [self.problem.commands[command].least_charge_fraction or 0.0 for command in commands]
        return max([self.craft.transmit_floor_j, *(f * self.craft.capacity_j for f in told)]) + self.slack_j

    def _contact(self, plans: Plans, way: Ways, board: Board, index: int) -> Plans:
        """Return every plan with every way of one contact, of those not plainly worse."""
        count = len(way.byte)
        wide = Plans(
            np.repeat(plans.energy_j, count),
            np.repeat(plans.held, count, axis=1),
            np.repeat(plans.worth, count),
        )
        room = np.tile(way.byte, len(plans.energy_j))
        times = len(plans.energy_j)
        charge = way.charge
        tiled = Stretch(
            *(np.tile(f, times) for f in (charge.gain_j, charge.top_j, charge.dip_j, charge.low_j))
        )
        kept = self._borne(wide.energy_j, tiled)
        energy = np.minimum(wide.energy_j + tiled.gain_j, tiled.top_j)
        found = []
        for order in board.orders(index):
            held, more = board.take(wide.held, room, index, order)
            found.append(Plans(energy, held, wide.worth + more).part(kept))
        return _best_of(_joined(found))

    def _wait(self, plans: Plans, begin_s: int, end_s: int, choice: Choice) -> Plans:
        """Return the plans after an idle stretch, sessions running in it."""
        key = (begin_s, end_s, choice.starts)
        if key not in self._idle:
            changes = self.ether.ledger.under(0.0)[begin_s:end_s].copy()
            for session, start in zip(self.problem.sessions, choice.starts, strict=True):
                if start is not None and begin_s <= start < end_s:
                    last = min(end_s, start + session.length_s)
                    changes[start - begin_s : last - begin_s] = self.ether.ledger.under(session.draw_w)[
                        start:last
                    ]
            self._idle[key] = stretch(changes, self.craft.capacity_j)
        idle = self._idle[key]
        plans = plans.part(self._borne(plans.energy_j, idle))
        return Plans(np.minimum(plans.energy_j + idle.gain_j, idle.top_j), plans.held, plans.worth)

    def _borne(self, energy_j: Floats, what: Stretch) -> Flags:
        """Return which charges stay over the floor all through a stretch."""
        lowest: Floats = np.minimum(energy_j + what.dip_j, what.low_j)
        return lowest >= self.craft.floor_j + min(self.slack_j, self._spare_j) - 1e-6


def most_byte(problem: Problem) -> float:
    """Return the most bytes that can ever be on board."""
    craft = problem.crafts[0]
    total = sum(kind.on_board_byte + kind.made_byte_s * problem.horizon.end_s for kind in craft.kinds)
    return total + sum(byte for session in problem.sessions for _, byte in session.makes)


def _joined(plans: Sequence[Plans]) -> Plans:
    """Return several lots of plans as one."""
    return Plans(
        np.concatenate([lot.energy_j for lot in plans]),
        np.concatenate([lot.held for lot in plans], axis=1),
        np.concatenate([lot.worth for lot in plans]),
    )


def _best_of(plans: Plans) -> Plans:
    """Return the plans that no other one beats in both charge and worth so far.

    More brought down now leaves less for later, but never less in all: what a later
    contact could have brought down in its place is still on board.
    """
    if len(plans.energy_j) <= 1:
        return plans
    order: NDArray[np.intp] = np.lexsort((-plans.energy_j, -plans.worth))
    energy = plans.energy_j[order]
    before = np.concatenate(([-np.inf], np.maximum.accumulate(energy)[:-1]))
    return plans.part(order[energy > before])
