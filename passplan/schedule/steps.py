"""The objectives in their order, each a solve of its own, and what each may give away."""

import math
from collections.abc import Callable
from dataclasses import dataclass

from passplan.domain.constants import HOUR_S
from passplan.domain.problem import Problem
from passplan.schedule.model import Model, Term
from passplan.schedule.rows_requests import placed
from passplan.schedule.variables import Variables, weight_of

Objective = dict[int, float]

# Night duty is counted in quarter hours begun: a count proves in a fraction of the time
# that minutes take, and nobody sleeps differently for it.
QUARTER_MIN = 15.0
PROVEN_GAP = 1e-4
FAIREST = "largest share of what was offered"


def nothing(_: float) -> float:
    """Give nothing away."""
    return 0.0


@dataclass(frozen=True, slots=True, eq=False)
class Step:
    """One objective.

    Attributes:
        name, unit: for people.
        objective: coefficients by column; what it leaves out counts as 0.
        maximise: direction.
        give: how much of a value the later steps may give away.
        whole: the objective is a count, so a bound proves a whole number.
        gap: relative gap at which the solve may stop.
        ideal: value no plan can better, known beforehand; None when there is none.
    """

    name: str
    unit: str
    objective: Objective
    maximise: bool
    give: Callable[[float], float] = nothing
    whole: bool = False
    gap: float = 0.9 * PROVEN_GAP
    ideal: float | None = None

    def value(self, columns: object) -> float:
        """Return the objective of a solution (array of column values)."""
        return float(sum(weight * columns[column] for column, weight in self.objective.items()))  # type: ignore[index]

    def hold(self, model: Model, value: float, slack: float = 1e-6) -> None:
        """Add the row that keeps this step's value, less its give, in the later ones.

        Args:
            model: to add to.
            value: best found.
            slack: absolute, for the solver's own tolerance.
        """
        terms = sorted(self.objective.items())
        if self.maximise:
            model.long_row(terms, lower=value - self.give(value) - slack)
        else:
            model.long_row(terms, upper=value + self.give(value) + slack)


def must_steps(problem: Problem, names: Variables) -> list[Step]:
    """Return the steps before worth: musts placed, end charge."""
    musts = [number for number, command in enumerate(problem.commands) if command.must]
    columns = [column for command in musts for column in placed(problem, names, command)]
    return [
        Step(
            "musts placed",
            "commands",
            dict.fromkeys(columns, 1.0),
            maximise=True,
            whole=True,
            ideal=float(len(musts)),
        ),
        Step("charge missing at the end", "kJ", dict.fromkeys(names.short, 1.0), maximise=False, ideal=0.0),
    ]


def first_must(problem: Problem, names: Variables) -> Step:
    """Return the tie-break among musts that do not all fit: earliest deadline, then order in the file."""
    musts = [number for number, command in enumerate(problem.commands) if command.must]
    ranked = sorted(musts, key=lambda number: (problem.commands[number].deadline_s, number))
    objective = {
        column: float(len(ranked) - rank)
        for rank, command in enumerate(ranked)
        for column in placed(problem, names, command)
    }
    return Step("which musts go first", "rank", objective, maximise=True, whole=True)


def urgent_step(problem: Problem, names: Variables) -> Step | None:
    """Return the step that sends urgent musts early, or None where there is none."""
    objective: Objective = {}
    for number, command in enumerate(problem.commands):
        if command.urgent:
            for index, offered in enumerate(problem.passes):
                for column in names.up(number, index):
                    objective[column] = offered.peak_s / HOUR_S
    return Step("urgent musts early", "h", objective, maximise=False) if objective else None


def worth(problem: Problem, names: Variables) -> Objective:
    """Return the worth of every column: expected kilobytes by weight and age, commands, sessions."""
    objective: Objective = {}
    for index, offered in enumerate(problem.passes):
        craft, chance = problem.crafts[offered.satellite], offered.success_fraction
        for data, column in names.v[index].items():
            objective[column] = weight_of(craft, data, offered.peak_s) * chance
        for placing in offered.placings:
            for column in names.up(placing.command, index):
                objective[column] = problem.commands[placing.command].worth * chance
    for which, session in enumerate(problem.sessions):
        objective |= dict.fromkeys(names.run[which], session.worth)
    return {column: value for column, value in objective.items() if value}


def worth_step(problem: Problem, names: Variables) -> Step:
    """Return the step that makes the most of the week."""
    fraction = problem.terms.give_worth_fraction
    return Step("worth", "kB", worth(problem, names), maximise=True, give=lambda value: fraction * abs(value))


def burden_steps(problem: Problem, names: Variables) -> list[Step]:
    """Return the steps that spare people: sittings, then night duty."""
    terms = problem.terms
    nights = {
        names.y[index][duty.operator]: float(math.ceil(duty.night_min / QUARTER_MIN))
        for index, offered in enumerate(problem.passes)
        for duty in offered.duties
        if duty.operator in names.y[index] and duty.night_min
    }
    return [
        Step(
            "sittings",
            "sittings",
            dict.fromkeys(names.sitting.values(), 1.0),
            maximise=False,
            whole=True,
            give=lambda _: terms.give_sittings,
        ),
        Step(
            "night duty",
            "quarter hours",
            nights,
            maximise=False,
            whole=True,
            give=lambda _: math.floor(terms.give_night_min / QUARTER_MIN),
        ),
    ]


def contacts_step(names: Variables) -> Step:
    """Return the tie-break on contacts: the fewest, then the earliest in the list of options.

    The small weights tell equal plans apart, so that two solvers choose the same.
    """
    columns = [column for options in names.x for column in options]
    scale = 1.0 / (10.0 * len(columns) + 1.0)
    objective = {column: 1.0 + place * scale for place, column in enumerate(columns)}
    return Step("fewest contacts", "contacts", objective, maximise=False, gap=0.005)


def offered_min(problem: Problem, until_s: float = math.inf) -> list[float]:
    """Return for each operator the duty minutes of all passes offered in their hours before a moment."""
    total = [0.0] * len(problem.operators)
    for offered in problem.passes:
        if offered.sight.aos_s >= until_s:
            continue
        for duty in offered.duties:
            total[duty.operator] += duty.load_min
    return total


def duty_loads(problem: Problem, names: Variables) -> list[list[Term]]:
    """Return for each operator the duties they could take, with the minutes of each."""
    loads: list[list[Term]] = [[] for _ in problem.operators]
    for index, offered in enumerate(problem.passes):
        for duty in offered.duties:
            if duty.operator in names.y[index]:
                loads[duty.operator].append((names.y[index][duty.operator], duty.load_min))
    return loads


def fairness_rows(problem: Problem, model: Model, names: Variables, fixed: dict[int, float]) -> Step:
    """Add the rows of the fairest sharing and return its step.

    Args:
        problem: whose operators.
        model: to add the column F and a row an operator to: load <= F * offered.
        names: columns.
        fixed: operators whose share is settled already, with its bound.
    """
    share = model.column(0.0, 1.0)
    total = offered_min(problem)
    for operator, terms in enumerate(duty_loads(problem, names)):
        if operator in fixed:
            model.row(terms, upper=fixed[operator] * total[operator] + 1e-6)
        elif terms:
            model.row([*terms, (share, -total[operator])], upper=0.0)
    return Step(FAIREST, "fraction", {share: 1.0}, maximise=False)


def people_step(problem: Problem, names: Variables) -> Step:
    """Return the tie-break on people: first come in the list of operators, rotated by pass."""
    crowd = len(problem.operators)
    objective = {
        column: 1.0 + ((operator + index) % crowd) / crowd + operator / crowd**2 / 10.0
        for index, people in enumerate(names.y)
        for operator, column in people.items()
    }
    return Step("who, among equals", "rank", objective, maximise=False)
