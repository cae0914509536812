"""The optimiser against best elevation first on small generated weeks, both counted by the same code."""

from functools import cache

import pytest

from passplan.domain.satellite import DataKind
from passplan.schedule.outcome import Outcome, outcome
from passplan.schedule.solve import solve
from tests.generated import WeekKind
from tests.planning_weeks import Week, joined_week
from tests.rule_of_thumb import Choice
from tests.thumb_week import best_by_hand, brought_kb, thumb_choices, thumb_outcome

WEEKS: list[tuple[WeekKind, int]] = [("easy", 2), ("easy", 4), ("hard", 3), ("weak-link", 2)]


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
    for made in (best_by_hand(small_week(kind, seed)), optimised(kind, seed)):
        assert made.contacts
        assert made.bears(0)


@pytest.mark.parametrize(("kind", "seed"), WEEKS)
def test_the_optimiser_is_never_worth_less_than_the_thumb(kind: WeekKind, seed: int) -> None:
    assert optimised(kind, seed).worth() >= best_by_hand(small_week(kind, seed)).worth()


def test_where_people_are_scarce_the_optimiser_brings_more_down() -> None:
    given = small_week("easy", 4)
    assert brought_kb(optimised("easy", 4)) > brought_kb(best_by_hand(given))
