"""How fast and how good plans are, a table for each bar; every figure is measured in this run.

    python -m tests.benchmarks.solve [--quick] [--sample] [--weeks] [--greedy] [--agree]
                                     [--kinds easy,hard] [--seeds 1-5] [--limit 120]

Without a choice of tables all are printed; `--quick` takes one seed of each kind. One week
after the other, seconds by the clock of the wall: leave the machine alone meanwhile.
"""

import argparse
import math
import os
import statistics
import subprocess
import sys
import tempfile
import time
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import dataclass, field
from datetime import UTC, datetime
from pathlib import Path
from typing import Any, get_args
from unittest.mock import patch

from passplan import week as whole_line
from passplan.budgets.join import join
from passplan.domain.errors import PassplanError
from passplan.domain.plan import Plan
from passplan.errands.desk import Desk
from passplan.errands.inputs import Inputs, read_inputs
from passplan.schedule.solve import Solved, solve
from passplan.verify import check
from passplan.verify.evidence import gather
from passplan.workspace.plans import PlanStore
from tests.benchmarks.aloud import say
from tests.benchmarks.two_solvers import agreement
from tests.benchmarks.worth_over_thumb import against_thumb
from tests.generated import WeekKind
from tests.planning_weeks import Week, joined_week, rates_of

KINDS: tuple[WeekKind, ...] = get_args(WeekKind)


@dataclass(slots=True)
class Watch:
    """What `plan_week` was seen to do: every solve, and the seconds of each second reading."""

    solves: list[Solved] = field(default_factory=list)
    readings_s: list[float] = field(default_factory=list)

    def step_s(self) -> dict[str, float]:
        """Return the solver's seconds by step, of all solves together."""
        total: dict[str, float] = {}
        for solved in self.solves:
            for name, seconds in solved.seconds.items():
                total[name] = total.get(name, 0.0) + seconds
        return total


@dataclass(frozen=True, kw_only=True, slots=True)
class Planned:
    """One generated week, planned and verified."""

    kind: str
    seed: int
    week: Week
    plan: Plan
    watch: Watch
    seconds: float

    @property
    def label(self) -> str:
        """Kind and seed."""
        return f"{self.kind} {self.seed}"


@contextmanager
def watched() -> Iterator[Watch]:
    """Watch `plan_week` at work."""
    watch = Watch()

    def solving(*args: Any, **named: Any) -> Solved:
        watch.solves.append(solve(*args, **named))
        return watch.solves[-1]

    def reading(*args: Any) -> Any:
        begin = time.perf_counter()
        verdict = check(*args)
        watch.readings_s.append(time.perf_counter() - begin)
        return verdict

    with patch.object(whole_line, "solve", solving), patch.object(whole_line, "check", reading):
        yield watch


# ---- the sample ----


def passplan(*arguments: str) -> tuple[int, float, float]:
    """Run passplan in a process of its own; return (exit code, seconds, MB at the peak)."""
    with tempfile.TemporaryFile() as said:
        begin = time.perf_counter()
        process = subprocess.Popen(
            [sys.executable, "-m", "passplan", *arguments], stdout=subprocess.DEVNULL, stderr=said
        )
        _, status, used = os.wait4(process.pid, 0)
        seconds = time.perf_counter() - begin
        process.returncode = os.waitstatus_to_exitcode(status)
        if process.returncode not in {0, 1}:
            said.seek(0)
            say(said.read().decode())
    return process.returncode, seconds, used.ru_maxrss / 1024.0


def inputs_of(folder: Path) -> Inputs:
    """Return what the week of a workspace is planned from."""
    desk = Desk(
        folder=folder, width=100, clock=lambda: datetime.now(UTC), warn=lambda _: None, tell=lambda _: None
    )
    return read_inputs(desk, None)


def sample_week(folder: Path) -> None:
    """Print time and memory of the whole process on the sample week, and what it proved."""
    say("(a) sample week, `passplan plan` in a fresh workspace; bars 15 s, 500 MB, verification 5 s")
    code, seconds, megabyte = passplan("plan", "--workspace", str(folder))
    say(f"  whole process {seconds:.1f} s, peak {megabyte:.0f} MB, exit code {code}")
    inputs = inputs_of(folder)
    store = PlanStore(folder=folder)
    edition = store.latest(inputs.horizon.week)
    if edition is None:
        say("  nothing was stored")
        return
    plan = store.read(inputs.horizon.week, edition)
    begin = time.perf_counter()
    verdict = check(inputs.mission, inputs.elements, plan)
    read_s = time.perf_counter() - begin
    say(f"  verification alone, in this process {read_s:.1f} s, {len(verdict.findings)} findings")
    say(f"  {_proof(plan)}; {len(plan.contacts)} contacts in the week, {len(plan.commands)} commands")
    for step in plan.steps:
        say(
            f"  {step.name:34} {step.value:12.6g} {step.unit:14} "
            f"bound {step.bound:12.6g} kept {step.kept:12.6g}"
        )


def _proof(plan: Plan) -> str:
    """Return whether every step is proven, or which are not and by how much."""
    wide = [
        f"{step.name} {abs(step.bound - step.value) / max(1.0, abs(step.value)):.2%}"
        for step in plan.steps
        if not step.proven
    ]
    return f"open: {', '.join(wide)}" if wide else "all steps proven"


# ---- generated weeks ----


def plan_generated(kind: WeekKind, seed: int, limit_s: float) -> Planned | None:
    """Plan one generated week as `passplan plan` would and print how long each step took."""
    ready = joined_week(kind, seed)
    begin = time.perf_counter()
    try:
        with rates_of(kind), watched() as watch:
            plan = whole_line.plan_week(
                ready.mission,
                ready.horizon,
                ready.elements,
                edition=1,
                made_from=(),
                contact_ids=lambda found: tuple(f"C-{number + 1:02d}" for number in range(len(found))),
                time_limit_s=limit_s,
                tell=_repaired,
            )
    except PassplanError as error:
        say(f"  {kind} {seed}: no plan in {time.perf_counter() - begin:.1f} s: {error}")
        return None
    seconds = time.perf_counter() - begin
    each = watch.step_s()
    told = ", ".join(f"{name} {spent:.1f}" for name, spent in each.items())
    again = f", solved {len(watch.solves)} times" if len(watch.solves) > 1 else ""
    say(
        f"  {kind:11} {seed:2}  steps {sum(each.values()):6.1f} s  in all {seconds:6.1f} s  "
        f"verification {sum(watch.readings_s):4.1f} s  {_proof(plan)}{again}"
    )
    say(f"                 {told}")
    return Planned(kind=kind, seed=seed, week=ready, plan=plan, watch=watch, seconds=seconds)


def generated_weeks(pairs: list[tuple[WeekKind, int]], limit_s: float) -> None:
    """Print speed, gap and charge of generated weeks, each planned once."""
    say(f"(b) generated 1 x 8 weeks, limit {limit_s:g} s; bars in the median: easy 10 s, hard 40 s")
    found = [made for kind, seed in pairs if (made := plan_generated(kind, seed, limit_s))]
    for kind in dict.fromkeys(made.kind for made in found):
        mine = [made for made in found if made.kind == kind]
        proven = sum(all(step.proven for step in made.plan.steps) for made in mine)
        median = statistics.median(made.seconds for made in mine)
        say(f"  {kind}: median {median:.1f} s in all, {proven} of {len(mine)} proven on every step")
    say("(c) laid out, on the one-second curve, against the model; bar 0.995 for both ratios")
    for made in found:
        worth = made.plan.worth
        give = next((step.give for step in made.plan.steps if step.name == "worth"), 0.0)
        say(
            f"  {made.label:15} bound {worth.bound:9.1f}  "
            f"best/bound {_ratio(worth.best_laid_out, worth.bound):.5f}  "
            f"plan/(best - give) {_ratio(worth.laid_out, worth.best_laid_out - give):.5f}"
        )
    say("(d) lowest charge, second reading less planned, % of capacity; bar 0.5 in the week")
    say("    rates of the plan never exceed the physical link by over 0.2 %, so all kinds are verified")
    for made in found:
        _charges(made)


def _ratio(one: float, other: float) -> float:
    """Return a ratio, not a number where there is nothing to compare with."""
    return one / other if other else math.nan


def _repaired(line: str) -> None:
    """Print what a second reading found fault with."""
    if line.startswith("the second reading found"):
        say(f"    {line}")


def _charges(made: Planned) -> None:
    """Print the lowest charge of the week by both readings, and where they part most in a contact."""
    ledgers = gather(made.week.mission, made.week.elements, made.plan).ledgers
    for battery in made.plan.batteries:
        ledger = ledgers[battery.satellite]
        seen = ledger.lowest(0, int(made.plan.horizon.week_s))[1] / ledger.capacity_j
        parted = [
            ledger.lowest(contact.start_s, contact.end_s)[1] / ledger.capacity_j
            - contact.charge_lowest_fraction
            for contact in made.plan.all_contacts
            if contact.satellite == battery.satellite
        ]
        say(
            f"  {made.label:15} planned {battery.lowest_fraction:.2%}  verified {seen:.2%}  "
            f"{100.0 * (seen - battery.lowest_fraction):+.3f}; "
            f"in contacts {100.0 * min(parted, default=0.0):+.3f} to {100.0 * max(parted, default=0.0):+.3f}"
        )


# ---- what to run ----


def numbers(told: str) -> list[int]:
    """Return the seeds that a text such as 1-5 or 1,3,9 names."""
    found: list[int] = []
    for part in told.split(","):
        first, _, last = part.partition("-")
        found += range(int(first), int(last or first) + 1)
    return found


def kinds(told: str) -> list[WeekKind]:
    """Return the kinds a text names."""
    return [kind for name in told.split(",") for kind in KINDS if kind == name]


def arguments() -> argparse.Namespace:
    """Return what was asked for."""
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--kinds", type=kinds, help=f"of {', '.join(KINDS)}")
    parser.add_argument("--seeds", type=numbers, help="such as 1-5 or 1,3")
    parser.add_argument("--limit", type=float, default=120.0, metavar="S", help="of each chain of solves")
    parser.add_argument("--quick", action="store_true", help="one seed of each kind")
    for name, told in (
        ("sample", "(a)"), ("weeks", "(b) to (d)"), ("greedy", "(e)"), ("agree", "(f)")
    ):  # fmt: skip
        parser.add_argument(f"--{name}", action="store_true", help=f"table {told}")
    return parser.parse_args()


def main() -> None:
    """Print the tables asked for."""
    asked = arguments()
    everything = not (asked.sample or asked.weeks or asked.greedy or asked.agree)
    seeds = asked.seeds or numbers("1-5")
    many = asked.seeds or numbers("1-20")
    if asked.quick:
        seeds, many = seeds[:1], many[:1]
    chosen: list[WeekKind] = asked.kinds or ["easy", "hard"]
    pairs = [(kind, seed) for kind in chosen for seed in seeds]
    if not asked.kinds:
        pairs += [("weak-link", seeds[0]), ("long-uplink", seeds[0])]
    with tempfile.TemporaryDirectory() as home:
        folder = Path(home) / "sample"
        if everything or asked.sample or asked.agree:
            passplan("new", str(folder))
        if everything or asked.sample:
            sample_week(folder)
        if everything or asked.weeks:
            generated_weeks(pairs, asked.limit)
        if everything or asked.greedy:
            by_hand: list[WeekKind] = asked.kinds or ["easy"]
            against_thumb([(kind, seed) for kind in by_hand for seed in many], asked.limit)
        if everything or asked.agree:
            inputs = inputs_of(folder)
            sky, ways = whole_line.sky_of(inputs.mission, inputs.horizon, inputs.elements)
            agreement(join(inputs.mission, inputs.horizon, sky, ways), asked.limit)


if __name__ == "__main__":
    main()
