"""Rows of the contacts: one conversation at a time, and the seconds each side of the peak."""

import math
from collections.abc import Iterator, Mapping, Sequence

from passplan.domain.problem import OfferedPass, Problem, Side
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
    for index, offered in enumerate(problem.passes):
        _slices(model, names, index, offered)
        _left(problem, model, names, index)
        _right(problem, model, names, index)


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
        problem.passes[other].sight == offered.sight and problem.passes[other].peak_number > offered.peak_number
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


def _slices(model: Model, names: Variables, index: int, offered: OfferedPass) -> None:
    """The satellite transmits in a slice only while a used option covers it; bytes fit the seconds."""
    for part, column in zip(offered.slices, names.t[index], strict=True):
        terms = [(column, 1.0)]
        for option, chosen in zip(offered.options, names.x[index], strict=True):
            covered = min(option.end_s, part.end_s) - max(option.start_s, part.start_s)
            if covered > 0:
                terms.append((chosen, -float(covered)))
        model.row(terms, upper=0.0)
    carried = [
        (column, -part.goodput_byte_s / 1000.0)
        for part, column in zip(offered.slices, names.t[index], strict=True)
    ]
    model.row([*((column, 1.0) for column in names.v[index].values()), *carried], upper=0.0)


def _left(problem: Problem, model: Model, names: Variables, index: int) -> None:
    """Commands before the downlink and the downlink before the peak share the seconds left of the peak."""
    offered, terms = problem.passes[index], problem.terms
    placed = {command: column for (command, where), column in names.up_left.items() if where == index}
    leaning = [(names.leaning[index], 1.0)] if index in names.leaning else []
    rises = {command: offered.reach(problem.commands[command].least_elevation_deg).rise_s for command in placed}
    for rise_s in sorted({-math.inf, offered.reaches[0].rise_s, *rises.values()}):
        rooms = [
            min(option.end_s - terms.close_s, offered.peak_s) - max(option.start_s + terms.acquire_s, rise_s)
            for option in offered.options
        ]
        inside = [command for command in placed if rises[command] >= rise_s]
        more = leaning if rise_s <= offered.reaches[0].rise_s else []
        _side(problem, model, names, index, "left", rooms, {c: placed[c] for c in inside}, more)


def _right(problem: Problem, model: Model, names: Variables, index: int) -> None:
    """The downlink after the peak and commands after it share the seconds right of the peak."""
    offered, terms = problem.passes[index], problem.terms
    placed = {command: column for (command, where), column in names.up_right.items() if where == index}
    either = {command: column for (command, where), column in names.up_either.items() if where == index}
    leaning = [(names.leaning[index], -1.0)] if index in names.leaning else []
    leaning += [(column, float(problem.commands[command].seconds)) for command, column in either.items()]
    falls = {command: offered.reach(problem.commands[command].least_elevation_deg).fall_s for command in placed}
    for fall_s in sorted({math.inf, offered.reaches[0].fall_s, *falls.values()}):
        rooms = [
            min(option.end_s - terms.close_s, fall_s) - max(option.start_s + terms.acquire_s, offered.peak_s)
            for option in offered.options
        ]
        inside = [command for command in placed if falls[command] <= fall_s]
        more = leaning if fall_s >= offered.reaches[0].fall_s else []
        _side(problem, model, names, index, "right", rooms, {c: placed[c] for c in inside}, more)
    if index in names.leaning:
        seconds = [(column, -float(problem.commands[command].seconds)) for command, column in either.items()]
        model.row([(names.leaning[index], 1.0), *seconds], upper=0.0)


def _side(
    problem: Problem,
    model: Model,
    names: Variables,
    index: int,
    side: Side,
    rooms: Sequence[float],
    placed: Mapping[int, int],
    leaning: Sequence[Term],
) -> None:
    """Add one row of one side: commands and downlink fit the room that the used option leaves."""
    offered = problem.passes[index]
    sent = [
        (column, 1.0)
        for part, column in zip(offered.slices, names.t[index], strict=True)
        if part.side == side
    ]
    sending = [(column, float(problem.commands[command].seconds)) for command, column in placed.items()]
    room = [(column, -max(0.0, float(r))) for column, r in zip(names.x[index], rooms, strict=True)]
    if sent or sending or leaning:
        model.row([*sent, *sending, *leaning, *room], upper=0.0)
