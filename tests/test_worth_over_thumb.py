"""The optimiser against best elevation first on small generated weeks, both counted by the same code."""

from functools import cache

import pytest

from passplan.domain.satellite import DataKind
from passplan.schedule.outcome import Outcome, outcome
from passplan.schedule.solve import solve
from passplan.schedule.steps import worth_step
from passplan.schedule.whole_model import build
from tests.generated import WeekKind
from tests.planning_weeks import Week, joined_week
from tests.rule_of_thumb import Choice
from tests.thumb_week import brought_kb, plans_by_hand, thumb_choices, thumb_outcome, whole_option

WEEKS: list[tuple[WeekKind, int]] = [("easy", 2), ("easy", 4), ("hard", 4), ("weak-link", 2)]


@cache
def small_week(kind: WeekKind, seed: int) -> Week:
    """Return a week of two stations, no worth given away."""
    return joined_week(kind, seed, stations=2, give_fraction=0.0)


@cache
def optimised(kind: WeekKind, seed: int) -> Outcome:
    """Return the optimiser's plan."""
    given = small_week(kind, seed)
    solved = solve(given.problem, time_limit_s=120.0)
    return outcome(given.problem, solved.names, solved.values)


def own_count(given: Week, choices: list[Choice]) -> float:
    """Return the worth of a plan by hand from nothing but mission and choices."""
    mission = given.mission
    sat = mission.satellites[0]
    kinds: dict[str, DataKind] = {kind.name: kind for kind in sat.store.kinds}
    commands = {command.name: command for command in mission.commands}
    total = 0.0
    for choice in choices:
        station = mission.station(given.problem.passes[choice.index].sight.station)
        data = sum(
            mission.worth.of_kilobyte(kinds[part.kind].weight) * part.byte / 1000.0 for part in choice.carried
        )
        sent = sum(mission.worth.of_request(commands[slot.command].worth) for slot in choice.uplink)
        total += mission.success_fraction(station) * (data + sent)
    return total


@pytest.mark.parametrize(("kind", "seed"), WEEKS)
@pytest.mark.parametrize("by_peak", [False, True])
def test_worth_laid_out_is_what_the_thumb_counts_itself(kind: WeekKind, seed: int, *, by_peak: bool) -> None:
    """Two stores in different code; they part only where a second of downlink is rounded."""
    given = small_week(kind, seed)
    choices = thumb_choices(given, uplink_by_peak=by_peak)
    assert choices
    counted = thumb_outcome(given, choices)
    assert counted.worth() == pytest.approx(own_count(given, choices), rel=0.005)
    assert counted.worth() >= own_count(given, choices) - 1e-6


@pytest.mark.parametrize(("kind", "seed"), WEEKS)
def test_both_keep_the_floors_and_reach_the_charge_wanted_at_the_end(kind: WeekKind, seed: int) -> None:
    for made in (*plans_by_hand(small_week(kind, seed)), optimised(kind, seed)):
        assert made.contacts
        assert made.bears(0)


@pytest.mark.parametrize(("kind", "seed"), WEEKS)
def test_the_optimiser_is_never_worth_less_than_the_thumb(kind: WeekKind, seed: int) -> None:
    by_hand = [plan.worth() for plan in plans_by_hand(small_week(kind, seed))]
    assert optimised(kind, seed).worth() >= max(by_hand)


@pytest.mark.parametrize(("kind", "seed"), [*WEEKS, ("hard", 1), ("long-uplink", 1)])
def test_the_model_allows_what_the_thumb_chose(kind: WeekKind, seed: int) -> None:
    """Rules read twice: with passes and people as the thumb has them the model is solvable, and no worse."""
    given = small_week(kind, seed)
    choices = thumb_choices(given, uplink_by_peak=True)
    taken = {choice.index: choice for choice in choices}
    model, names = build(given.problem)
    for index, offered in enumerate(given.problem.passes):
        for option, column in zip(offered.options, names.x[index], strict=True):
            model.fix(column, float(index in taken and option == whole_option(offered)))
        for operator, column in names.y[index].items():
            handle = given.problem.operators[operator].handle
            model.fix(column, float(index in taken and taken[index].operator == handle))
    for column in names.short:
        model.fix(column, 0.0)
    step = worth_step(given.problem, names)
    answer = model.solve(step.objective, maximise=True, seconds=60.0)
    assert answer.found
    assert answer.value >= thumb_outcome(given, choices).worth() * 0.995  # stepped rates, whole seconds


def test_where_people_are_scarce_the_optimiser_brings_more_down() -> None:
    by_hand = [brought_kb(plan) for plan in plans_by_hand(small_week("easy", 4))]
    assert brought_kb(optimised("easy", 4)) > max(by_hand)
