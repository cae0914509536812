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
    """Add one ladder: a rung a pass, and two where the side of the downlink is settled here.

    `gone` is a running sum: how much more often the first has gone up than the second.
    """
    gone = model.column(0.0, 0.0)
    for index in own:
        ours, theirs = names.up(second, index), names.up(first, index)
        if not ours and not theirs:
            continue
        if together:
            right_1, left_2 = names.up_right.get((first, index)), names.up_left.get((second, index))
            if right_1 is not None and left_2 is not None:
                # The second before the downlink, the first after it: only if the first went before.
                model.row([(left_2, 1.0), (gone, -1.0), *_less(theirs, right_1)], upper=0.0)
        elif ours:
            model.row([*((column, 1.0) for column in ours), (gone, -1.0)], upper=0.0)
        after = model.column(0.0, 1.0)
        model.row(
            [
                (after, 1.0),
                (gone, -1.0),
                *((column, -1.0) for column in theirs),
                *((column, 1.0) for column in ours),
            ],
            0.0,
            0.0,
        )
        gone = after


def _less(columns: Sequence[int], without: int) -> list[Term]:
    """Return minus the sum of columns but one."""
    return [(column, -1.0) for column in columns if column != without]
