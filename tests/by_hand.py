"""What a problem worked out by hand is solved to, after checks of bound, trials and lay-out."""

import pytest

from passplan.domain.problem import Problem
from passplan.schedule.layout import LaidOut, started
from passplan.schedule.outcome import outcome
from passplan.schedule.solve import Solved, solve
from tests.enumerator import Enumerator
from tests.judged_plan import judge


def worth(problem: Problem, *, in_pieces: bool = False) -> float:
    """Return the worth of the worth step after checking that bound, trials and lay-out agree on it.

    Args:
        problem: the week.
        in_pieces: the best downlink is not in one piece, which the trials do not try.
    """
    solved = solve(problem)
    value, bound = step(solved, "worth")
    trier = Enumerator(problem)
    found = trier.best()
    assert found is not None
    assert found.worth <= value + 0.5
    assert in_pieces or found.worth == pytest.approx(value, abs=0.5)
    assert bound == pytest.approx(value, rel=2e-4, abs=1e-3)
    for values in (solved.best, solved.values):
        plan = judge(
            trier,
            list(outcome(problem, solved.names, values).contacts),
            started(problem, solved.names, values),
        )
        assert not plan.faults
        assert plan.worth == pytest.approx(value, abs=0.5)
    return value


def step(solved: Solved, name: str) -> tuple[float, float]:
    """Return value and bound of a step."""
    return next((one.value, one.bound) for one in solved.steps if one.name == name)


def contacts(problem: Problem) -> list[LaidOut]:
    """Return the laid-out contacts of the plan."""
    solved = solve(problem)
    return list(outcome(problem, solved.names, solved.values).contacts)


def sent(problem: Problem) -> dict[int, int]:
    """Return in which pass each command goes up in the plan."""
    return {command: laid.index for laid in contacts(problem) for command in laid.commands}
