"""Holds a solved problem, its bound and its lay-out to every plan of it, step by step."""

import math
from dataclasses import dataclass

from passplan.domain.plan import StepReport
from passplan.domain.problem import Problem
from passplan.schedule.layout import started
from passplan.schedule.outcome import outcome
from passplan.schedule.solve import Solved, solve
from tests.enumerated_contacts import STEP_S
from tests.enumerator import Best, Enumerator
from tests.judged_plan import Judged, judge

GRID_S = 60.0


@dataclass(frozen=True, slots=True, eq=False)
class Trial:
    """One problem solved and tried out.

    Attributes:
        surely: best of the plans that keep every demand on the battery with the model's
            rounding to spare; perhaps: of those that fail it by no more.
        best, plan: laid-out plans of the worth step and of the whole chain.
    """

    problem: Problem
    solved: Solved
    trier: Enumerator
    surely: Best
    perhaps: Best
    best: Judged
    plan: Judged

    def step(self, name: str) -> StepReport:
        """Return one step's report."""
        return next(step for step in self.solved.steps if step.name == name)


def rounding_j(problem: Problem) -> float:
    """Return how far the model's whole minutes can be from the seconds.

    A contact's transmit floor is asked at the minute it begins in, an edge of sun and
    shadow counts for the worse side of its minute, charge that a full battery refuses is
    counted by the minute, and replies count where the pass begins.
    """
    craft = problem.crafts[0]
    idle = [abs(craft.stored_w(span.net_w)) for span in craft.idle]
    extra = [craft.stored_w(s.net_w) - craft.stored_w(s.net_w - craft.draw_w) for s in craft.idle]
    replies = sum(command.reply_s for command in problem.commands)
    return GRID_S * (max(idle) + max(extra) - min(extra)) + replies * max(extra)


def worth_of_waiting(problem: Problem) -> float:
    """Return the worth of what is made while the model still counts a pass as beginning."""
    craft = problem.crafts[0]
    made = sum(kind.made_byte_s * kind.weight for kind in craft.kinds)
    waits = [max(o.start_s for o in p.options) - min(o.start_s for o in p.options) for p in problem.passes]
    return made * sum(waits) / 1000.0


def worth_of_a_step(problem: Problem, contacts: int) -> float:
    """Return the worth of one grid step a contact."""
    rates = [part.goodput_byte_s for offered in problem.passes for part in offered.slices]
    weights = [kind.weight for kind in problem.crafts[0].kinds]
    return STEP_S * max(rates, default=0.0) * max(weights, default=0.0) / 1000.0 * max(1, contacts)


def tried(problem: Problem, solved: Solved | None = None) -> Trial:
    """Solve a problem and try every plan of it."""
    solved = solve(problem) if solved is None else solved
    trier, slack_j = Enumerator(problem), rounding_j(problem)
    trier.slack_j = slack_j
    surely = trier.best()
    trier.slack_j = -slack_j
    perhaps = trier.best()
    assert surely is not None
    assert perhaps is not None
    laid = [
        judge(
            trier,
            list(outcome(problem, solved.names, values).contacts),
            started(problem, solved.names, values),
        )
        for values in (solved.best, solved.values)
    ]
    return Trial(problem, solved, trier, surely, perhaps, laid[0], laid[1])


def hold_to_all_plans(trial: Trial) -> str:
    """Check a solved problem step by step; return the last step whose value is beyond doubt."""
    surely, perhaps, best = trial.surely, trial.perhaps, trial.best
    assert not best.faults
    assert not trial.plan.faults
    musts = trial.step("musts placed")
    assert surely.musts <= musts.value + 1e-6
    assert musts.value <= perhaps.musts + 1e-6
    assert best.musts == trial.plan.musts == round(musts.value)
    if (surely.musts, surely.rank) != (perhaps.musts, perhaps.rank):
        return "musts"
    missing = trial.step("charge missing at the end")
    assert perhaps.short_kj - 2e-3 <= missing.value <= surely.short_kj + 2e-3
    if surely.short_kj > 0.0:
        return "charge"
    urgent = next((step for step in trial.solved.steps if step.name == "urgent musts early"), None)
    if urgent is not None:
        assert perhaps.urgent_h - 1e-4 <= urgent.value <= surely.urgent_h + 1e-4
        assert best.urgent_h <= urgent.value + 1e-4
    if not math.isclose(surely.urgent_h, perhaps.urgent_h):
        return "urgent"
    hold_worth(trial)
    hold_burden(trial)
    return "all"


def hold_worth(trial: Trial) -> None:
    """Check: bound >= best of all plans >= laid-out plan, the last two within a grid step a contact."""
    problem, best = trial.problem, trial.best
    worth = trial.step("worth")
    step = worth_of_a_step(problem, len(trial.surely.choice.rooms))
    waiting = worth_of_waiting(problem)
    tolerance = 1e-4 * max(1.0, abs(worth.value))
    assert trial.surely.worth <= worth.bound + waiting + tolerance
    assert best.worth <= trial.perhaps.worth + step + tolerance
    assert best.worth >= trial.surely.worth - step - waiting - tolerance
    assert trial.plan.worth >= best.worth - worth.give - step - waiting - tolerance


def hold_burden(trial: Trial) -> None:
    """Check the fewest sittings and night quarter hours of the plans that keep the worth within its give."""
    problem, worth = trial.problem, trial.step("worth")
    step = worth_of_a_step(problem, len(problem.passes)) + worth_of_waiting(problem)
    sittings, nights = trial.step("sittings"), trial.step("night duty")
    least = worth.value - worth.give
    trial.trier.slack_j = rounding_j(problem)
    surely = trial.trier.least_burden(trial.surely, least, problem.terms.give_sittings)
    trial.trier.slack_j = -rounding_j(problem)
    perhaps = trial.trier.least_burden(trial.perhaps, least - step, problem.terms.give_sittings)
    assert perhaps is not None
    assert sittings.value >= perhaps.sittings - 1e-6
    assert trial.plan.burden.sittings <= sittings.value + sittings.give + 1e-6
    assert trial.plan.burden.night_quarters <= nights.value + nights.give + 1e-4
    if surely is not None:
        assert sittings.value <= surely.sittings + 1e-6
        if surely.sittings == perhaps.sittings:
            assert perhaps.night_quarters - 1e-4 <= nights.value <= surely.night_quarters + 1e-4
