"""Why a command is not placed, found by forcing it and asking which rules are in the way."""

import math

from passplan.domain.problem import Problem
from passplan.schedule.model import Model
from passplan.schedule.rows_charge import charge_rows
from passplan.schedule.rows_contacts import contact_rows
from passplan.schedule.rows_people import people_rows
from passplan.schedule.rows_requests import placed, request_rows
from passplan.schedule.steps import worth
from passplan.schedule.variables import Variables
from passplan.schedule.whole_model import Rows, build

# Each group with the words for when it alone stands in the way.
_GROUPS: tuple[tuple[Rows, str], ...] = (
    (charge_rows, "the battery could not pay for it and keep its floors"),
    (people_rows, "those who could send it have no duty, rest or hour left for it"),
    (request_rows, "a command it has to wait for is not placed in time, or its window is too narrow"),
    (contact_rows, "no contact in its window leaves it the seconds it needs"),
)
_SECONDS = 20.0


def reasons(problem: Problem, unplaced: list[int]) -> dict[int, str]:
    """Return, for each command not placed, the reason in words.

    Args:
        problem: the week.
        unplaced: indices of commands.
    """
    if not unplaced:
        return {}
    best = _relaxed_worth(problem, *build(problem))
    return {command: _reason(problem, command, best) for command in unplaced}


def _reason(problem: Problem, command: int, best: float) -> str:
    """Return why one command is not placed; `best` is the relaxed worth of the week as it is."""
    wanted = problem.commands[command]
    if not any(placing.command == command for offered in problem.passes for placing in offered.placings):
        return _no_pass(problem, command)
    if not wanted.must:
        forced = _forced(problem, command, None)
        price = best - _relaxed_worth(problem, *forced) if forced else math.nan
        if price >= 0.0:
            return f"sending it would push out other things worth about {price:.0f} kB more than it is"
    for rows, told in _GROUPS:
        forced = _forced(problem, command, rows)
        if forced and forced[0].solve({}, maximise=False, seconds=_SECONDS).found:
            return told
    return "no contact offered in its window has room for it"


def _no_pass(problem: Problem, command: int) -> str:
    """Return why no pass is offered to a command at all."""
    wanted = problem.commands[command]
    day = problem.horizon.utc(wanted.deadline_s)
    without_people = [
        gap
        for gap in problem.unstaffed
        if gap.satellite == wanted.satellite and gap.end_s <= wanted.deadline_s
    ]
    if without_people:
        return f"no licensed operator is free before its deadline, {day:%a %d %b %H:%M} UTC"
    return f"no usable pass of a station that may send it ends before its deadline, {day:%a %d %b %H:%M} UTC"


def _forced(problem: Problem, command: int, left_out: Rows | None) -> tuple[Model, Variables] | None:
    """Return the model with a command forced in; None if it has no column."""
    model, names = build(problem, left_out=left_out)
    columns = placed(problem, names, command)
    if not columns:
        return None
    model.row([(column, 1.0) for column in columns], lower=1.0)
    return model, names


def _relaxed_worth(problem: Problem, model: Model, names: Variables) -> float:
    """Return the most worth with fractions allowed, minus infinity when there is no solution."""
    answer = model.solve(worth(problem, names), maximise=True, seconds=_SECONDS, relaxed=True)
    return answer.value if answer.found else -math.inf
