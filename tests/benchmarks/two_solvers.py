"""Whether HiGHS and SCIP agree on every step of a chain."""

from collections.abc import Callable, Iterator
from contextlib import contextmanager
from typing import Any
from unittest.mock import patch

from passplan.domain.problem import Problem
from passplan.schedule.model import Answer, Model
from passplan.schedule.solve import solve
from tests.benchmarks.aloud import say


@contextmanager
def both_solvers(limit_s: float, told: Callable[[Answer, Answer], None]) -> Iterator[None]:
    """Let SCIP solve every model that HiGHS has just solved, the rows of earlier steps in it."""
    once = Model.solve

    def twice(model: Model, objective: Any, **named: Any) -> Answer:
        named["seconds"] = min(named["seconds"], limit_s)
        first = once(model, objective, **named)
        if objective and not named.get("relaxed", False):
            told(
                first, once(model, objective, **named | {"seconds": limit_s, "solver": "scip", "hint": None})
            )
        return first

    with patch.object(Model, "solve", twice):
        yield


def agreement(problem: Problem, limit_s: float) -> None:
    """Print every step of the chain by both solvers, on the same model each time."""
    say(f"(f) HiGHS and SCIP on every solve of the sample, earlier values held, limit {limit_s:g} s each")
    waiting: list[tuple[Answer, Answer]] = []
    verdicts: list[str] = []

    def step_done(line: str) -> None:
        for number, (first, second) in enumerate(waiting):
            verdicts.append(
                _compare_answers(f"{line.partition(':')[0]} ({number + 1}/{len(waiting)})", first, second)
            )
        waiting.clear()

    with both_solvers(limit_s, lambda first, second: waiting.append((first, second))):
        solve(problem, time_limit_s=3600.0, tell=step_done)
    told = [f"{verdicts.count(word)} {word}" for word in ("agree", "DISAGREE", "no answer in the time")]
    say(f"  of {len(verdicts)} solves: {', '.join(told)}")


def _compare_answers(name: str, first: Answer, second: Answer) -> str:
    """Print two answers to one question and return in words whether they agree."""
    if not (first.found and second.found):
        told = "agree" if first.status == second.status else "DISAGREE"
        told = "no answer in the time" if "unknown" in {first.status, second.status} else told
        say(f"  {name:48} HiGHS {first.status}, SCIP {second.status}  {told}")
        return told
    off = abs(first.value - second.value)
    gap = max(abs(answer.bound - answer.value) for answer in (first, second))
    told = "agree" if off <= gap + 1e-6 * max(1.0, abs(first.value)) else "DISAGREE"
    say(
        f"  {name:48} {first.value:13.6f} {second.value:13.6f}  off {off:.2e}, gaps {gap:.2e}  "
        f"{first.seconds:6.1f} s {second.seconds:6.1f} s  {told}"
    )
    return told
