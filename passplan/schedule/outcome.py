"""A solution turned into facts: slots, bytes, charge and worth of a laid-out week."""

from collections.abc import Sequence
from dataclasses import dataclass

from passplan.domain.problem import Problem
from passplan.schedule.layout import LaidOut, lay_out, started
from passplan.schedule.ledger import Charge, Load, play
from passplan.schedule.model import Values
from passplan.schedule.stock import Stock, carry
from passplan.schedule.variables import Variables, weight_of

# Slots are whole seconds, the solution's are not: a second of transmitting either way.
_ROUNDING_J = 20.0


@dataclass(frozen=True, slots=True, eq=False)
class Outcome:
    """One laid-out week.

    Attributes:
        contacts: in order of time.
        starts: session index to start (s).
        stocks, charges: by satellite.
    """

    problem: Problem
    contacts: tuple[LaidOut, ...]
    starts: dict[int, int]
    stocks: tuple[Stock, ...]
    charges: tuple[Charge, ...]

    def worth(self, *, week_only: bool = False) -> float:
        """Return the worth of all contacts and sessions, or of those that begin in the week."""
        problem = self.problem
        until = problem.horizon.week_s if week_only else problem.horizon.end_s
        total = sum(self._contact_worth(laid) for laid in self.contacts if laid.option.start_s < until)
        return total + sum(problem.sessions[which].worth for which, at in self.starts.items() if at < until)

    def bears(self, number: int) -> bool:
        """Return whether one satellite's battery keeps its floors and ends with the charge wanted."""
        problem, craft, charge = self.problem, self.problem.crafts[number], self.charges[number]
        if charge.lowest(0.0, problem.horizon.end_s)[1] < craft.floor_j - _ROUNDING_J:
            return False
        for laid in self.contacts:
            if problem.passes[laid.index].satellite == number:
                least = [problem.commands[command].least_charge_fraction or 0.0 for command in laid.commands]
                wanted_j = max([craft.transmit_floor_j, *(f * craft.capacity_j for f in least)])
                if charge.at(laid.option.start_s) < wanted_j - _ROUNDING_J:
                    return False
        return charge.at(problem.horizon.end_s) >= craft.end_j - _ROUNDING_J

    def _contact_worth(self, laid: LaidOut) -> float:
        """Return the expected worth of what goes up and comes down in one contact."""
        offered = self.problem.passes[laid.index]
        craft = self.problem.crafts[offered.satellite]
        carried = self.stocks[offered.satellite].carried[laid.index]
        data = sum(byte / 1000.0 * weight_of(craft, key, offered.peak_s) for key, byte in carried.items())
        commands = sum(self.problem.commands[command].worth for command in laid.commands)
        return offered.success_fraction * (data + commands)


def outcome(problem: Problem, names: Variables, values: Values) -> Outcome:
    """Lay a solution out and play its store and battery.

    Downlinks are put together around the peaks; for a satellite whose battery does not
    bear that, they stand as the solution has them.
    """
    made = _played(problem, names, values, frozenset())
    broken = frozenset(number for number in range(len(problem.crafts)) if not made.bears(number))
    return _played(problem, names, values, broken) if broken else made


def _played(problem: Problem, names: Variables, values: Values, pieces: frozenset[int]) -> Outcome:
    """Lay a solution out in one way and play it."""
    contacts = lay_out(problem, names, values, pieces=pieces)
    starts = started(problem, names, values)
    own = [
        [laid for laid in contacts if problem.passes[laid.index].satellite == number]
        for number in range(len(problem.crafts))
    ]
    return Outcome(
        problem=problem,
        contacts=tuple(contacts),
        starts=starts,
        stocks=tuple(carry(problem, number, mine, starts) for number, mine in enumerate(own)),
        charges=tuple(
            play(craft, loads(problem, number, own[number], starts))
            for number, craft in enumerate(problem.crafts)
        ),
    )


def loads(problem: Problem, number: int, contacts: Sequence[LaidOut], starts: dict[int, int]) -> list[Load]:
    """Return what a satellite draws on top of its idle load: downlinks, replies, sessions."""
    craft = problem.crafts[number]
    reply_s = {command.name: command.reply_s for command in problem.commands}
    drawn: list[Load] = [
        (float(slot.start_s), float(slot.end_s), craft.draw_w)
        if slot.kind == "downlink"
        else (slot.end_s - reply_s[slot.command], float(slot.end_s), craft.draw_w)
        for laid in contacts
        for slot in laid.slots
        if slot.kind == "downlink" or slot.command
    ]
    for which, start in starts.items():
        session = problem.sessions[which]
        if session.satellite == number:
            drawn.append((float(start), float(start + session.length_s), session.draw_w))
    return drawn
