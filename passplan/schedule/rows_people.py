"""Rows of the people: licensed, free, rested, in one place, not too often."""

from collections import defaultdict
from collections.abc import Iterator

from passplan.domain.constants import HOUR_S
from passplan.domain.moments import week_of
from passplan.domain.problem import OfferedPass, Person, Problem
from passplan.domain.rules import Rule
from passplan.schedule.model import Model
from passplan.schedule.variables import Variables

RULES = frozenset(
    {
        Rule.LICENSED_OPERATOR,
        Rule.OPERATOR_HOURS,
        Rule.ONE_PLACE,
        Rule.REST,
        Rule.DUTIES_DAY,
        Rule.DUTIES_WEEK,
        Rule.TWO_PEOPLE,
    }
)


def people_rows(problem: Problem, model: Model, names: Variables) -> None:
    """Add every row about people."""
    for index in range(len(problem.passes)):
        _staff(problem, model, names, index)
    for operator, person in enumerate(problem.operators):
        mine = [index for index in range(len(problem.passes)) if operator in names.y[index]]
        _sittings(problem, model, names, operator, mine)
        _caps(problem, model, names, operator, mine)
        for first, second in _near(problem, person, mine):
            _apart(problem, model, names, operator, first, second)


def sitting_before(problem: Problem, index: int) -> list[int]:
    """Return the passes after which a duty in this one goes on with the same sitting.

    Same station, begun less than the sitting gap before; of two peaks of one visibility
    the first.
    """
    offered = problem.passes[index]
    found = []
    for other, before in enumerate(problem.passes):
        if before.station != offered.station or other == index:
            continue
        earlier = (before.sight.aos_s, other) < (offered.sight.aos_s, index)
        if earlier and offered.sight.aos_s - before.sight.aos_s < problem.terms.sitting_gap_s:
            found.append(other)
    return found


def _staff(problem: Problem, model: Model, names: Variables, index: int) -> None:
    """A used pass has a licensed operator in whose hours the option lies, and a second person where asked."""
    offered, people = problem.passes[index], names.y[index]
    used = [(column, -1.0) for column in names.x[index]]
    licensed = [
        (column, 1.0) for operator, column in people.items() if problem.operators[operator].may_control
    ]
    second = names.second.get(index)
    if second is None:
        model.row([*licensed, *used], 0.0, 0.0)
    else:
        model.row([*licensed, *used], lower=0.0)
        model.row([*((column, 1.0) for column in people.values()), *used, (second, -1.0)], 0.0, 0.0)
        for placing in offered.placings:
            if problem.commands[placing.command].two_people:
                for column in names.up(placing.command, index):
                    model.row([(column, 1.0), (second, -1.0)], upper=0.0)
    for duty in offered.duties:
        mine = people.get(duty.operator)
        if mine is not None and (second is not None or len(duty.options) < len(offered.options)):
            fitting = [(names.x[index][number], -1.0) for number in duty.options]
            model.row([(mine, 1.0), *fitting], upper=0.0)


def _sittings(problem: Problem, model: Model, names: Variables, operator: int, mine: list[int]) -> None:
    """A sitting begins with a duty that none of the last two hours at the station goes before.

    The count may be continuous: it comes out whole once the duties are.
    """
    for index in mine:
        begins = model.column(0.0, 1.0)
        names.sitting[index, operator] = begins
        before = [
            names.y[other][operator] for other in sitting_before(problem, index) if operator in names.y[other]
        ]
        model.row(
            [(begins, 1.0), (names.y[index][operator], -1.0), *((column, 1.0) for column in before)],
            lower=0.0,
        )


def _caps(problem: Problem, model: Model, names: Variables, operator: int, mine: list[int]) -> None:
    """No more duties a day and a week than agreed; a duty that may fall in two days counts in both."""
    person = problem.operators[operator]
    by_day: dict[int, list[int]] = defaultdict(list)
    by_week: dict[str, list[int]] = defaultdict(list)
    for index in mine:
        offered = problem.passes[index]
        duty = next(duty for duty in offered.duties if duty.operator == operator)
        for day in duty.days:
            by_day[day].append(names.y[index][operator])
        for week in {week_of(problem.horizon.utc(option.start_s)) for option in offered.options}:
            by_week[week].append(names.y[index][operator])
    for columns in (by_day[day] for day in sorted(by_day)):
        if len(columns) > person.most_duties_day:
            model.row([(column, 1.0) for column in columns], upper=float(person.most_duties_day))
    for columns in (by_week[week] for week in sorted(by_week)):
        if len(columns) > person.most_duties_week:
            model.row([(column, 1.0) for column in columns], upper=float(person.most_duties_week))


def _near(problem: Problem, person: Person, mine: list[int]) -> Iterator[tuple[int, int]]:
    """Yield pairs of one person's passes, the earlier first, near enough to be in each other's way."""
    reach_s = max(person.rest_s, person.travel_s) + person.preparation_s + HOUR_S
    ordered = sorted(mine, key=lambda index: (problem.passes[index].sight.aos_s, index))
    for place, first in enumerate(ordered):
        for second in ordered[place + 1 :]:
            if problem.passes[second].sight.aos_s - problem.passes[first].sight.los_s > reach_s:
                break
            yield first, second


def _apart(problem: Problem, model: Model, names: Variables, operator: int, first: int, second: int) -> None:
    """Keep two duties apart: travel between stations, rest between sittings.

    People are there for the whole pass, so both count from pass to pass, preparation included.
    """
    person = problem.operators[operator]
    one, two = problem.passes[first], problem.passes[second]
    free_s = two.sight.aos_s - person.preparation_s - one.sight.los_s
    columns = names.y[first][operator], names.y[second][operator]
    if one.station != two.station and free_s < person.travel_s:
        model.row([(column, 1.0) for column in columns], upper=1.0)
    elif free_s < person.rest_s and not _same_sitting(problem, one, two):
        # A duty that begins a sitting must not follow another too soon.
        model.row([(columns[0], 1.0), (names.sitting[second, operator], 1.0)], upper=1.0)


def _same_sitting(problem: Problem, one: OfferedPass, two: OfferedPass) -> bool:
    """Return whether the second of two passes goes on with the first one's sitting."""
    return one.station == two.station and two.sight.aos_s - one.sight.aos_s < problem.terms.sitting_gap_s
