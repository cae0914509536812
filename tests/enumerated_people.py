"""Every way to staff a choice of contacts, with the rules of people checked one by one."""

import math
from collections import Counter
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import product

from passplan.domain.moments import week_of
from passplan.domain.problem import Duty, Problem

Used = tuple[tuple[int, int], ...]
Staff = Mapping[int, tuple[int, ...]]


@dataclass(frozen=True, slots=True)
class Burden:
    """What one way to staff costs people."""

    sittings: int
    night_quarters: float


def burdens(problem: Problem, used: Used, pairs: frozenset[int]) -> list[Burden]:
    """Return the cost of every way to staff contacts by the rules.

    Args:
        problem: whose passes and people.
        used: (pass, option) of each contact, in order of pass.
        pairs: passes that need two people.
    """
    teams = [list(_teams(problem, index, number, 2 if index in pairs else 1)) for index, number in used]
    found = []
    for chosen in product(*teams):
        staff = {index: team for (index, _), team in zip(used, chosen, strict=True)}
        if not staffing_faults(problem, used, staff, pairs):
            found.append(burden(problem, used, staff))
    return found


def _teams(problem: Problem, index: int, number: int, size: int) -> Iterator[tuple[int, ...]]:
    """Yield the operators who could take an option, alone or in twos."""
    free = [duty.operator for duty in problem.passes[index].duties if number in duty.options]
    for one in free:
        if size == 1 and problem.operators[one].may_control:
            yield (one,)
        for two in free:
            if size == 2 and one < two and any(problem.operators[who].may_control for who in (one, two)):
                yield (one, two)


def burden(problem: Problem, used: Used, staff: Staff) -> Burden:
    """Return the sittings and night quarter hours of one way to staff."""
    nights = [
        math.ceil(duty_of(problem, index, who).night_min / 15.0) for index, _ in used for who in staff[index]
    ]
    begun = sum(begins_sitting(problem, staff, index, who) for index, _ in used for who in staff[index])
    return Burden(begun, sum(nights))


def duty_of(problem: Problem, index: int, who: int) -> Duty:
    """Return an operator's duty in a pass."""
    return next(duty for duty in problem.passes[index].duties if duty.operator == who)


def begins_sitting(problem: Problem, staff: Staff, index: int, who: int) -> bool:
    """Return whether a duty follows none of the same operator at the same station within the gap."""
    own = problem.passes[index]
    for other, team in staff.items():
        before = problem.passes[other]
        earlier = (before.sight.aos_s, other) < (own.sight.aos_s, index)
        near = own.sight.aos_s - before.sight.aos_s < problem.terms.sitting_gap_s
        if who in team and before.station == own.station and earlier and near:
            return False
    return True


def staffing_faults(problem: Problem, used: Used, staff: Staff, pairs: frozenset[int]) -> list[str]:
    """Return every rule of people that a way to staff breaks."""
    faults = []
    for index, number in used:
        team = staff[index]
        offered = {duty.operator: duty for duty in problem.passes[index].duties}
        if not any(problem.operators[who].may_control for who in team):
            faults.append(f"pass {index}: nobody licensed")
        if len(set(team)) < (2 if index in pairs else 1):
            faults.append(f"pass {index}: too few people")
        faults += [
            f"pass {index}: operator {who} not free"
            for who in team
            if who not in offered or number not in offered[who].options
        ]
    if faults:
        return faults
    for who in range(len(problem.operators)):
        mine = sorted(
            (i for i, _ in used if who in staff[i]), key=lambda i: (problem.passes[i].sight.aos_s, i)
        )
        faults += _too_many(problem, used, who, mine) + _too_close(problem, staff, who, mine)
    return faults


def _too_many(problem: Problem, used: Used, who: int, mine: list[int]) -> list[str]:
    """Return where one operator has more duties a day or a week than agreed.

    A pass whose options begin on two days counts on both, as the local day is not told.
    """
    person, options = problem.operators[who], dict(used)
    days = Counter(day for index in mine for day in duty_of(problem, index, who).days)
    weeks = Counter(week_of(problem.horizon.utc(problem.passes[i].options[options[i]].start_s)) for i in mine)
    faults = [f"operator {who}: day {day}" for day, n in days.items() if n > person.most_duties_day]
    return faults + [f"operator {who}: {w}" for w, n in weeks.items() if n > person.most_duties_week]


def _too_close(problem: Problem, staff: Staff, who: int, mine: list[int]) -> list[str]:
    """Return where one operator lacks rest or time to travel, from pass to pass, preparation included."""
    person, faults = problem.operators[who], []
    for place, first in enumerate(mine):
        for second in mine[place + 1 :]:
            one, two = problem.passes[first], problem.passes[second]
            free_s = two.sight.aos_s - person.preparation_s - one.sight.los_s
            if one.station != two.station and free_s < person.travel_s:
                faults.append(f"operator {who}: travel from pass {first} to {second}")
            if begins_sitting(problem, staff, second, who) and free_s < person.rest_s:
                faults.append(f"operator {who}: rest from pass {first} to {second}")
    return faults
