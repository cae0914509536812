"""More of anything wanted never makes a week worse, and two solvers agree on it."""

from dataclasses import replace

import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from passplan.domain.problem import OfferedPass, Problem
from passplan.schedule.solve import solve
from tests.drawn_weeks import drawn_week
from tests.small_weeks import SESSION

_SEEDS = st.integers(min_value=1000, max_value=2000)
_STEPS = (
    ("musts placed", 1.0),
    ("charge missing at the end", -1.0),
    ("urgent musts early", -1.0),
    ("worth", 1.0),
)
_GAP = 2e-4
law = settings(max_examples=12, deadline=None, derandomize=True)


def values(problem: Problem) -> dict[str, float]:
    """Return the value of each step up to worth, more is better; a step that is not there counts 0."""
    found = {step.name: step.value for step in solve(problem).steps}
    return {name: sign * found.get(name, 0.0) for name, sign in _STEPS}


def hold_not_worse(before: Problem, after: Problem, *, waiting: float = 0.0) -> None:
    """Check that no step of a problem is worse than another's, compared in order and within the gaps."""
    first, second = values(before), values(after)
    assume(first["musts placed"] == sum(command.must for command in before.commands))
    assume(first["charge missing at the end"] == 0.0)
    for name, _ in _STEPS:
        gap = _GAP * max(1.0, abs(first[name])) + (waiting if name == "worth" else 0.0)
        assert second[name] >= first[name] - gap, name
        if second[name] > first[name] + gap:
            return


@law
@given(_SEEDS, st.floats(min_value=1.0, max_value=3.0))
def test_a_larger_battery_is_never_worse(seed: int, times: float) -> None:
    # Start, floors and end stay as they are in joules, and so does the charge a command wants.
    problem = drawn_week(seed)
    craft = problem.crafts[0]
    commands = tuple(
        c
        if c.least_charge_fraction is None
        else replace(c, least_charge_fraction=c.least_charge_fraction / times)
        for c in problem.commands
    )
    larger = replace(craft, capacity_j=craft.capacity_j * times)
    hold_not_worse(problem, replace(problem, crafts=(larger,), commands=commands))


@law
@given(_SEEDS)
def test_wider_hours_are_never_worse(seed: int) -> None:
    problem = drawn_week(seed)

    def wide(offered: OfferedPass) -> OfferedPass:
        everywhere = tuple(range(len(offered.options)))
        return replace(offered, duties=tuple(replace(duty, options=everywhere) for duty in offered.duties))

    hold_not_worse(problem, replace(problem, passes=tuple(wide(offered) for offered in problem.passes)))


@law
@given(_SEEDS)
def test_one_more_station_is_never_worse(seed: int) -> None:
    # What is made until a pass begins counts from the earliest start of it and all later ones.
    problem = drawn_week(seed)
    fewer = replace(problem, passes=tuple(offered for offered in problem.passes if offered.station == 0))
    assume(0 < len(fewer.passes) < len(problem.passes))
    lengths = [offered.options[-1].end_s - offered.options[0].start_s for offered in problem.passes]
    made = sum(kind.made_byte_s * kind.weight for kind in problem.crafts[0].kinds)
    hold_not_worse(fewer, problem, waiting=made * sum(lengths) / 1000.0)


@law
@given(_SEEDS)
def test_one_more_command_is_never_worth_less(seed: int) -> None:
    problem = drawn_week(seed)
    assume(problem.commands)
    last = len(problem.commands) - 1
    commands = (*problem.commands[:-1], replace(problem.commands[-1], must=False, urgent=False))
    passes = tuple(
        replace(offered, placings=tuple(p for p in offered.placings if p.command != last))
        for offered in problem.passes
    )
    hold_not_worse(replace(problem, commands=commands, passes=passes), replace(problem, commands=commands))


@law
@given(_SEEDS, st.integers(min_value=0, max_value=40_000))
def test_one_more_session_is_never_worth_less(seed: int, start: int) -> None:
    problem = drawn_week(seed)
    more = replace(SESSION, name="one more", starts_s=(start, start + 900), draw_w=1.0, worth=20.0)
    hold_not_worse(problem, replace(problem, sessions=(*problem.sessions, more)))


@pytest.mark.parametrize("seed", [0, 2, 3, 5, 8, 11])
def test_two_solvers_agree_on_every_step(seed: int) -> None:
    problem = drawn_week(seed)
    first, second = solve(problem).steps, solve(problem, solver="scip").steps
    assert [step.name for step in first] == [step.name for step in second]
    for one, other in zip(first, second, strict=True):
        assert other.value == pytest.approx(one.value, rel=_GAP, abs=_GAP), one.name
        assert one.proven
        assert other.proven
