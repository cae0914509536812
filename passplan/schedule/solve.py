"""The chain of solves: each step keeps the earlier ones within their gives."""

import math
import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from passplan.domain.plan import StepReport
from passplan.domain.problem import Problem
from passplan.schedule.layout import misfits
from passplan.schedule.model import Answer, Model, Solver, Values
from passplan.schedule.outcome import outcome
from passplan.schedule.rows_charge import charge_rows
from passplan.schedule.rows_people import people_rows
from passplan.schedule.steps import (
    FAIREST,
    PROVEN_GAP,
    Step,
    burden_steps,
    contacts_step,
    duty_loads,
    fairness_rows,
    first_must,
    must_steps,
    nothing,
    offered_min,
    people_step,
    urgent_step,
    worth_step,
)
from passplan.schedule.variables import Variables, variables
from passplan.schedule.whole_model import build

Tell = Callable[[str], None]


@dataclass(frozen=True, slots=True, eq=False)
class Solved:
    """The end of the chain.

    Attributes:
        names: columns of the model.
        values: the plan's, 0/1 whole.
        best: values of the worth step, nothing given.
        steps: reports in order, `kept` filled in.
        seconds: solver time by step name.
        interrupted: Ctrl-C ended the chain early.
    """

    names: Variables
    values: Values
    best: Values
    steps: tuple[StepReport, ...]
    seconds: dict[str, float]
    interrupted: bool


@dataclass(slots=True, eq=False)
class Chain:
    """A model that grows a row with each step held.

    Attributes:
        plain: the model before any step was held.
        ends: moment (s, performance counter) at which the time is up.
        values: of the last solution, which fits every row so far; best: of the worth step.
        done: (step, value, bound, proven) of the steps reported.
    """

    problem: Problem
    model: Model
    names: Variables
    ends: float
    solver: Solver
    tell: Tell
    plain: Model
    values: Values | None = None
    best: Values | None = None
    done: list[tuple[Step, float, float, bool]] = field(default_factory=list)
    seconds: dict[str, float] = field(default_factory=dict)

    @property
    def held(self) -> Values:
        """The last solution; only asked once there is one."""
        if self.values is None:
            told = "no solution yet"
            raise LookupError(told)
        return self.values

    def take(self, step: Step, *, report: bool = True, share: float = 1.0, loose: Sequence[int] = ()) -> bool:
        """Solve one step, keep its value for the later ones, and return whether there is a solution.

        Args:
            step: what to optimise.
            report: list it among the plan's steps.
            share: of the time left, the most this step may use.
            loose: 0/1 columns that may first be fractions; see `_loosely`.
        """
        seconds = max(0.0, self.ends - time.perf_counter()) * share
        answer = self._packed(step, seconds, loose)
        self.tell(
            f"{step.name}: {answer.value:.6g} {step.unit}, bound {answer.bound:.6g}, {answer.seconds:.1f} s"
        )
        if answer.found:
            self.values = answer.values
        elif self.values is None or max(step.objective, default=0) >= len(self.values):
            return False
        value = step.value(self.values)
        bound = _bound(step, answer, value)
        if report:
            self.done.append((step, value, bound, abs(bound - value) <= PROVEN_GAP * max(1.0, abs(value))))
        step.hold(self.model, value, slack=max(1e-4 if step.whole else 1e-6, 1e-7 * abs(value)))
        return True

    def _packed(self, step: Step, seconds: float, loose: Sequence[int]) -> Answer:
        """Solve one step until every contact can be laid out; what does not fit is forbidden for good."""
        ends = time.perf_counter() + seconds
        while True:
            left = max(0.0, ends - time.perf_counter())
            answer = self._loosely(step, left, loose) if loose else None
            if answer is None:
                answer = self._solve(self.model, step, max(0.0, ends - time.perf_counter()))
            cuts = misfits(self.problem, self.names, answer.values) if answer.found else []
            if not cuts:
                return answer
            for columns in cuts:
                self.model.row([(column, 1.0) for column in columns], upper=len(columns) - 1.0)

    def _solve(self, model: Model, step: Step, seconds: float) -> Answer:
        """Solve one step on a model, from the last solution on."""
        answer = model.solve(
            step.objective,
            maximise=step.maximise,
            seconds=seconds,
            solver=self.solver,
            gap=step.gap,
            whole=step.whole,
            hint=self.values,
        )
        self.seconds[step.name] = self.seconds.get(step.name, 0.0) + answer.seconds
        return answer

    def _loosely(self, step: Step, seconds: float, loose: Sequence[int]) -> Answer | None:
        """Solve a step with some 0/1 columns as fractions, then make those whole with the rest held.

        Fewer 0/1 columns prove the bound in a fraction of the time, and that bound holds for
        the whole model too. Where the fractions can be made whole without touching the
        objective, as commands mostly can, the answer is the whole model's; else None.
        """
        light = self.model.copy()
        for column in loose:
            light.integer[column] = False
        answer = self._solve(light, step, seconds)
        if not answer.found:
            return None
        held = self.model.copy()
        open_ = set(loose)
        for column in self.names.integers():
            if column not in open_:
                held.fix(column, round(float(answer.values[column])))
        whole = self._solve(held, worth_step(self.problem, self.names), seconds)
        if not whole.found or abs(step.value(whole.values) - answer.value) > 1e-6 * max(
            1.0, abs(answer.value)
        ):
            return None
        return replace(answer, values=whole.values)


def _bound(step: Step, answer: Answer, value: float) -> float:
    """Return the bound a solve proved; of a count, the whole number that it proves."""
    bound = answer.bound if math.isfinite(answer.bound) else (math.inf if step.maximise else 0.0)
    if step.whole:
        bound = math.floor(bound + 1e-4) if step.maximise else math.ceil(bound - 1e-4)
    return max(bound, value) if step.maximise else min(bound, value)


def solve(
    problem: Problem, *, time_limit_s: float = 300.0, solver: Solver = "highs", tell: Tell = lambda _: None
) -> Solved:
    """Return the best plan of a problem, step by step.

    Where the relaxation does not feel the batteries, the chain is walked without their rows
    first: a plan whose ledger keeps every floor is then the best with them too, as leaving
    rows out can only raise a bound.

    Args:
        problem: what to solve.
        time_limit_s: for the whole chain; the best plan so far is kept when it strikes.
        solver: which.
        tell: called with a line after each solve.
    """
    ends = time.perf_counter() + time_limit_s
    if (problem.passes or problem.sessions) and not _feels_charge(problem):
        solved = _chain(problem, ends, solver, tell, charge=False)
        kept = [outcome(problem, solved.names, values) for values in (solved.values, solved.best)]
        if all(made.bears(number) for made in kept for number in range(len(problem.crafts))):
            return solved
        tell("the battery matters after all; once more with its rows")
    return _chain(problem, ends, solver, tell, charge=True)


def _feels_charge(problem: Problem) -> bool:
    """Return whether the rows of the batteries lower the most worth with fractions allowed."""
    most = []
    for left_out in (None, charge_rows):
        model, names = build(problem, left_out=left_out)
        objective = dict(worth_step(problem, names).objective)
        if left_out is None:
            objective |= dict.fromkeys(names.short, -1.0)
        most.append(model.solve(objective, maximise=True, seconds=30.0, relaxed=True).value)
    return not most[0] >= most[1] - 1e-6 * abs(most[1])


def _chain(problem: Problem, ends: float, solver: Solver, tell: Tell, *, charge: bool) -> Solved:
    """Walk the chain on one model."""
    model, names = build(problem, left_out=None if charge else charge_rows)
    chain = Chain(problem, model, names, ends, solver, tell, plain=model.copy())
    interrupted = False
    if problem.passes or problem.sessions:
        try:
            _walk(chain)
        except KeyboardInterrupt:
            interrupted = True
    if chain.values is None:
        chain.values = np.zeros(len(model.lower))
    values = _polish(chain, chain.values)
    best = values if chain.best is None else _polish(chain, chain.best)
    reports = tuple(
        StepReport(
            name=step.name,
            unit=step.unit,
            value=value,
            bound=bound,
            give=step.give(value),
            # The fairest share has a column of its own, in a model of people alone.
            kept=value if step.name == FAIREST else step.value(values),
            proven=proven and not interrupted,
        )
        for step, value, bound, proven in chain.done
    )
    return Solved(names, values, best, reports, chain.seconds, interrupted)


def _walk(chain: Chain) -> None:
    """Take every step of the chain."""
    problem, names = chain.problem, chain.names
    _before_worth(chain)
    chain.take(worth_step(problem, names), share=0.6)
    chain.best = chain.values
    if chain.values is None:  # the time was up before there was a solution
        return
    uplinks = names.uplinks()
    requests = uplinks + [column for starts in names.run for column in starts]
    for step in burden_steps(problem, names):
        chain.take(step, share=0.7, loose=requests)
    chain.take(replace(worth_step(problem, names), name="worth again", give=nothing), share=0.7)
    for column in requests:
        chain.model.fix(column, round(float(chain.held[column])))
    chain.take(contacts_step(names), report=False, share=0.7)
    _share_out(chain)


def _before_worth(chain: Chain) -> None:
    """Settle musts, end charge and urgent musts.

    Mostly all of them can be had in full, so that is tried first: a solution with every
    must and no charge missing proves both steps at once.
    """
    problem, names = chain.problem, chain.names
    steps = must_steps(problem, names)
    urgent = urgent_step(problem, names)
    lean = chain.model.copy()
    for column in _idle_columns(problem, names):
        lean.fix(column, 0.0)
    for step in steps:
        step.hold(lean, step.ideal or 0.0)
    trial = Chain(problem, lean, names, chain.ends, chain.solver, chain.tell, chain.plain)
    if trial.take(
        urgent or Step("everything wanted first", "", {}, maximise=False), report=urgent is not None
    ):
        chain.values, chain.seconds = trial.values, chain.seconds | trial.seconds
        chain.done = [(step, step.ideal or 0.0, step.ideal or 0.0, True) for step in steps] + trial.done
        for step, value, _, _ in chain.done:
            step.hold(chain.model, value)
        return
    for step in steps:
        chain.take(step)
        if step.whole and chain.values is not None and step.value(chain.values) < (step.ideal or 0.0) - 0.5:
            chain.take(first_must(problem, names), report=False)
    if urgent:
        chain.take(urgent)


def _idle_columns(problem: Problem, names: Variables) -> list[int]:
    """Return the columns that only take from what musts and end charge need: they may stand at nothing.

    Bytes, downlink seconds, sessions, and commands that no must waits for.
    """
    needed = {number for number, command in enumerate(problem.commands) if command.must}
    for _ in problem.commands:
        needed |= {first for number in needed for first, _ in problem.commands[number].after}
    columns = [column for parts in names.t for column in parts]
    columns += [column for parts in names.v for column in parts.values()]
    columns += [column for starts in names.run for column in starts]
    for side in (names.up_left, names.up_right, names.up_either):
        columns += [column for (command, _), column in side.items() if command not in needed]
    return columns


def _share_out(chain: Chain) -> None:
    """With the contacts fixed, share the duties fairly, twice, then settle who among equals.

    Only people are left to decide, so a model of their rows alone is enough.
    """
    problem, names, values = chain.problem, chain.names, chain.held
    small = Model()
    people = variables(problem, small)
    shared = len(small.lower)
    people_rows(problem, small, people)
    for column in set(names.integers()) - {c for row in names.y for c in row.values()}:
        small.fix(column, round(float(values[column])))
    found = {step.name: value for step, value, _, _ in chain.done}
    for step in burden_steps(problem, people):
        if step.name in found:
            step.hold(small, found[step.name], slack=1e-4)
    sharing = replace(chain, model=small, names=people, done=[], values=values[:shared])
    if sharing.take(fairness_rows(problem, small, people, {})):
        chain.done.append(sharing.done[-1])
        fixed = _at_most(sharing, sharing.done[-1][1])
        sharing.take(fairness_rows(problem, small, people, fixed), report=False)
    sharing.take(people_step(problem, people), report=False)
    settled = values.copy()
    for row in names.y:
        for column in row.values():
            settled[column] = sharing.held[column]
    chain.values = settled


def _at_most(chain: Chain, largest: float) -> dict[int, float]:
    """Return the operators whose share is the largest, with it."""
    total = offered_min(chain.problem)
    return {
        operator: largest
        for operator, terms in enumerate(duty_loads(chain.problem, chain.names))
        if total[operator]
        and sum(minutes * float(chain.held[column]) for column, minutes in terms)
        >= (largest - 1e-6) * total[operator]
    }


def _polish(chain: Chain, values: Values) -> Values:
    """With every 0/1 fixed and whole, take most worth, then the downlink nearest to the peaks."""
    problem, names = chain.problem, chain.names
    model = chain.plain.copy()
    for column in names.integers():
        model.fix(column, round(float(values[column])))
    for step in must_steps(problem, names)[1:]:
        step.hold(model, step.value(values))
    worth = worth_step(problem, names)
    answer = model.solve(worth.objective, maximise=True, seconds=30.0, relaxed=True, solver=chain.solver)
    if not answer.found:
        return values
    Step("worth", "kB", worth.objective, maximise=True).hold(
        model, answer.value, slack=1e-6 * abs(answer.value) + 1e-6
    )
    far = {
        column: 1.0 + abs((part.start_s + part.end_s) / 2.0 - offered.peak_s) / 100.0
        for index, offered in enumerate(problem.passes)
        for part, column in zip(offered.slices, names.t[index], strict=True)
    }
    compact = model.solve(far, maximise=False, seconds=30.0, relaxed=True, solver=chain.solver)
    return compact.values if compact.found else answer.values
