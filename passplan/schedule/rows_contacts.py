"""Rows of the contacts: one conversation at a time, and the seconds each side of the peak."""

import math
from collections.abc import Iterator, Sequence

from passplan.domain.problem import OfferedPass, Problem, Reach, Side
from passplan.domain.rules import Rule
from passplan.schedule.model import Model, Term
from passplan.schedule.variables import Variables

Interval = tuple[float, float, int]

RULES = frozenset(
    {Rule.ONE_CONVERSATION, Rule.STATION_FREE, Rule.HALF_DUPLEX, Rule.SESSION_ALONE, Rule.COMMAND_ELEVATION}
)


def contact_rows(problem: Problem, model: Model, names: Variables) -> None:
    """Add every row about contacts as such."""
    for options in names.x:
        model.row([(column, 1.0) for column in options], upper=1.0)
    _conversations(problem, model, names)
    _stations(problem, model, names)
    _peak_order(problem, model, names)
    for index in range(len(problem.passes)):
        _slices(problem, model, names, index)
        _side(problem, model, names, index, "left")
        _side(problem, model, names, index, "right")
        if index in names.leaning:
            model.row(
                [(names.leaning[index], -1.0), *_either(problem, names, index)],
                lower=0.0,
            )


def cliques(intervals: Sequence[Interval]) -> Iterator[list[int]]:
    """Yield the maximal sets of half-open intervals that share a moment.

    In an interval graph these are all the maximal cliques (Gilmore and Hoffman 1964), at
    most as many as intervals; one row for each makes the relaxation of "at most one at a
    time" exact.

    Args:
        intervals: (start, end, label).
    """
    events = sorted(
        [(end, 0, number) for number, (_, end, _) in enumerate(intervals)]
        + [(start, 1, number) for number, (start, _, _) in enumerate(intervals)]
    )
    active: set[int] = set()
    grown = False
    for _, begins, number in events:
        if begins:
            active.add(number)
            grown = True
            continue
        if grown and len(active) > 1:
            yield [intervals[member][2] for member in sorted(active)]
        active.remove(number)
        grown = False


def _conversations(problem: Problem, model: Model, names: Variables) -> None:
    """A satellite talks to one station at a time, and to none while its payload runs."""
    gap = problem.terms.hand_over_gap_s
    for craft in range(len(problem.crafts)):
        intervals: list[Interval] = [
            (option.start_s, option.end_s + gap, names.x[index][number])
            for index, offered in enumerate(problem.passes)
            if offered.satellite == craft
            for number, option in enumerate(offered.options)
        ]
        intervals += [
            (start, start + session.length_s, names.run[which][number])
            for which, session in enumerate(problem.sessions)
            if session.satellite == craft
            for number, start in enumerate(session.starts_s)
        ]
        for clique in cliques(intervals):
            model.row([(column, 1.0) for column in clique], upper=1.0)


def _stations(problem: Problem, model: Model, names: Variables) -> None:
    """A station has one contact at a time with its set-up between.

    Between two peaks of one visibility nothing is set up; with several satellites that
    is given up, as the pause would have to know whose contact comes next.
    """
    for station, site in enumerate(problem.sites):
        here = [index for index, offered in enumerate(problem.passes) if offered.station == station]
        intervals: list[Interval] = []
        for index in here:
            offered = problem.passes[index]
            more = 0.0 if len(problem.crafts) == 1 and _goes_on(problem, here, offered) else site.set_up_s
            for number, option in enumerate(offered.options):
                intervals.append((option.start_s, option.end_s + more, names.x[index][number]))
        for clique in cliques(intervals):
            model.row([(column, 1.0) for column in clique], upper=1.0)


def _goes_on(problem: Problem, here: Sequence[int], offered: OfferedPass) -> bool:
    """Return whether a later peak of the same visibility follows at the station."""
    return any(
        problem.passes[other].sight == offered.sight
        and problem.passes[other].peak_number > offered.peak_number
        for other in here
    )


def _peak_order(problem: Problem, model: Model, names: Variables) -> None:
    """Contacts of one satellite follow each other in the order of their peaks, which the ladders count by."""
    for craft in range(len(problem.crafts)):
        own = [index for index, offered in enumerate(problem.passes) if offered.satellite == craft]
        for place, first in enumerate(own):
            for second in own[place + 1 :]:
                if problem.passes[second].peak_s - problem.passes[first].options[-1].end_s > 86_400:
                    break
                _against_order(problem, model, names, first, second)


def _against_order(problem: Problem, model: Model, names: Variables, first: int, second: int) -> None:
    """Forbid options of the pass with the later peak that end before an option of the earlier one begins."""
    before, after = problem.passes[first].options, problem.passes[second].options
    latest = max(option.start_s for option in before)
    for number, option in enumerate(after):
        if option.end_s > latest:
            continue
        clash = [names.x[first][k] for k, other in enumerate(before) if other.start_s >= option.end_s]
        model.row([(names.x[second][number], 1.0), *((column, 1.0) for column in clash)], upper=1.0)


def _slices(problem: Problem, model: Model, names: Variables, index: int) -> None:
    """The satellite transmits in a slice only while a used option covers it, acquire and close aside.

    Bytes fit the seconds.
    """
    offered, terms = problem.passes[index], problem.terms
    for part, column in zip(offered.slices, names.t[index], strict=True):
        row = [(column, 1.0)]
        for option, chosen in zip(offered.options, names.x[index], strict=True):
            end = min(option.end_s - terms.close_s, part.end_s)
            covered = end - max(option.start_s + terms.acquire_s, part.start_s)
            if covered > 0:
                row.append((chosen, -float(covered)))
        model.row(row, upper=0.0)
    carried = [
        (column, -part.goodput_byte_s / 1000.0)
        for part, column in zip(offered.slices, names.t[index], strict=True)
    ]
    model.row([*((column, 1.0) for column in names.v[index].values()), *carried], upper=0.0)


def rooms_s(problem: Problem, offered: OfferedPass, side: Side, reach: Reach | None) -> list[float]:
    """Return for each option the seconds of one side, those of a command's reach where one is given."""
    rise, fall = (-math.inf, math.inf) if reach is None else (reach.rise_s, reach.fall_s)
    rooms = []
    for option in offered.options:
        begin, end = option.start_s + problem.terms.acquire_s, option.end_s - problem.terms.close_s
        if side == "left":
            rooms.append(max(0.0, min(end, offered.peak_s) - max(begin, rise)))
        else:
            rooms.append(max(0.0, min(end, fall) - max(begin, offered.peak_s)))
    return rooms


def _side(problem: Problem, model: Model, names: Variables, index: int, side: Side) -> None:
    """Commands and downlink of one side share its seconds.

    A command that wants the satellite high pushes the downlink inwards, but only where it
    is placed: its row is slack by as much as the rooms differ when it is not.
    """
    offered = problem.passes[index]
    columns = names.up_left if side == "left" else names.up_right
    placed = {command: column for (command, where), column in columns.items() if where == index}
    sent = [(c, 1.0) for part, c in zip(offered.slices, names.t[index], strict=True) if part.side == side]
    leaning = _leaning(problem, names, index, side)
    whole = rooms_s(problem, offered, side, None)
    seconds = {command: float(problem.commands[command].seconds) for command in placed}
    if sent or placed or leaning:
        sending = [(column, seconds[command]) for command, column in placed.items()]
        room = [(column, -r) for column, r in zip(names.x[index], whole, strict=True)]
        model.row([*sent, *sending, *leaning, *room], upper=0.0)
    rooms = {
        command: rooms_s(problem, offered, side, offered.reach(problem.commands[command].least_elevation_deg))
        for command in placed
    }
    for command, inside in rooms.items():
        slack = max(all_ - part for all_, part in zip(whole, inside, strict=True))
        if slack <= 0.0:
            continue
        nearer = [
            (placed[other], seconds[other])
            for other, room in rooms.items()
            if all(a <= b for a, b in zip(room, inside, strict=True))
        ]
        room = [(column, -(r + slack)) for column, r in zip(names.x[index], inside, strict=True)]
        model.row([*sent, *nearer, (placed[command], slack), *room], upper=0.0)


def _leaning(problem: Problem, names: Variables, index: int, side: Side) -> list[Term]:
    """Return the seconds, on one side, of the commands whose side the lay-out chooses."""
    if index not in names.leaning:
        return []
    if side == "left":
        return [(names.leaning[index], 1.0)]
    return [(names.leaning[index], -1.0), *_either(problem, names, index)]


def _either(problem: Problem, names: Variables, index: int) -> list[Term]:
    """Return the seconds of the commands that may stand on either side."""
    return [
        (column, float(problem.commands[command].seconds))
        for (command, where), column in names.up_either.items()
        if where == index
    ]
