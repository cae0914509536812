"""Rows of commands and sessions: once, in their windows, in order."""

from collections.abc import Sequence

from passplan.domain.problem import Problem
from passplan.domain.rules import Rule
from passplan.schedule.model import Model, Term
from passplan.schedule.variables import Variables

RULES = frozenset({Rule.COMMAND_ONCE, Rule.COMMAND_WINDOW, Rule.COMMAND_ORDER, Rule.SESSION_WINDOW})


def request_rows(problem: Problem, model: Model, names: Variables) -> None:
    """Add every row about commands and sessions."""
    for command in range(len(problem.commands)):
        columns = placed(problem, names, command)
        if columns:
            model.row([(column, 1.0) for column in columns], upper=1.0)
    _windows(problem, model, names)
    _order(problem, model, names)
    for starts in names.run:
        if starts:
            model.row([(column, 1.0) for column in starts], upper=1.0)


def placed(problem: Problem, names: Variables, command: int) -> list[int]:
    """Return every column that sends a command up."""
    return [column for index in range(len(problem.passes)) for column in names.up(command, index)]


def _windows(problem: Problem, model: Model, names: Variables) -> None:
    """A command goes up only in options that lie in its window."""
    for index, offered in enumerate(problem.passes):
        for placing in offered.placings:
            columns = names.up(placing.command, index)
            if columns and len(placing.options) < len(offered.options):
                fitting = [(names.x[index][number], -1.0) for number in placing.options]
                model.row([*((column, 1.0) for column in columns), *fitting], upper=0.0)


def _order(problem: Problem, model: Model, names: Variables) -> None:
    """Along a satellite's passes the running count of a command never passes that of the one before it."""
    for second, wanted in enumerate(problem.commands):
        own = [index for index, offered in enumerate(problem.passes) if offered.satellite == wanted.satellite]
        for first, order in wanted.after:
            _ladder(model, names, own, first, second, together=order != "after_contact")


def _ladder(
    model: Model, names: Variables, own: Sequence[int], first: int, second: int, *, together: bool
) -> None:
    """Add one ladder: two rungs a pass, before and after the downlink.

    `gone` is a running sum: how much more often the first has gone up than the second.
    """
    gone = model.column(0.0, 0.0)
    for index in own:
        if together:
            for side in (names.up_left, names.up_right):
                gone = _rung(model, gone, side.get((first, index)), side.get((second, index)))
            continue
        ours, theirs = names.up(second, index), names.up(first, index)
        if not ours and not theirs:
            continue
        taken: list[Term] = [(column, 1.0) for column in ours]
        if taken:
            model.row([*taken, (gone, -1.0)], upper=0.0)
        added: list[Term] = [(column, -1.0) for column in theirs]
        after = model.column(0.0, 1.0)
        model.row([(after, 1.0), (gone, -1.0), *added, *taken], 0.0, 0.0)
        gone = after


def _rung(model: Model, gone: int, first: int | None, second: int | None) -> int:
    """Add one rung of a ladder whose two commands may share a window; return the new running sum."""
    if first is None and second is None:
        return gone
    after = model.column(0.0, 1.0)
    terms: list[Term] = [(after, 1.0), (gone, -1.0)]
    if first is not None:
        terms.append((first, -1.0))
    if second is not None:
        terms.append((second, 1.0))
    model.row(terms, 0.0, 0.0)
    return after
