"""The line walked once, top to bottom: mission and elements in, a verified plan out."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import replace
from datetime import datetime

from passplan.budgets.energy import carry_forward
from passplan.budgets.join import join
from passplan.domain.constants import DAY_S
from passplan.domain.elements import ElementSet
from passplan.domain.errors import NothingVerifiedError
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon
from passplan.domain.passes import Sky, Track
from passplan.domain.plan import ElementsUsed, Plan
from passplan.domain.problem import Problem
from passplan.domain.verdict import Finding
from passplan.schedule.outcome import Outcome, outcome
from passplan.schedule.reasons import reasons
from passplan.schedule.repair import tightened
from passplan.schedule.report import draw_up
from passplan.schedule.solve import Solved, solve
from passplan.sky import survey, tracks
from passplan.verify import check

Tell = Callable[[str], None]
_REPAIRS = 3
_REPAIR_SHARE = 0.1  # of the time limit, for each repair once the time is up
_HURRY_S = 10.0  # after Ctrl-C, for mending the plan that is there


class PlanInterrupted(KeyboardInterrupt):
    """Ctrl-C while planning; carries the best verified plan found so far."""

    def __init__(self, plan: Plan) -> None:
        super().__init__()
        self.plan = plan


def sky_of(mission: Mission, horizon: Horizon, elements: Mapping[str, ElementSet]) -> tuple[Sky, list[Track]]:
    """Return passes, shadows since the oldest telemetry, and a track for each pass."""
    read = [satellite.battery.telemetry for satellite in mission.satellites]
    since_s = min([0.0, *(horizon.seconds(told.at_utc) for told in read if told is not None)])
    sky = survey(elements, mission.stations, horizon, since_s)
    return sky, tracks(elements, mission.stations, sky.passes, horizon)


def plan_week(
    mission: Mission,
    horizon: Horizon,
    elements: Mapping[str, ElementSet],
    *,
    edition: int,
    made_from: tuple[tuple[str, str], ...],
    contact_ids: Callable[[Sequence[tuple[str, str, datetime]]], tuple[str, ...]],
    time_limit_s: float = 300.0,
    old_elements: bool = False,
    tell: Tell = lambda _: None,
) -> Plan:
    """Return the verified plan of one week.

    Args:
        mission: what people wrote.
        horizon: the week and its look-ahead.
        elements: satellite name to the element set to use.
        edition: number of the plan.
        made_from: (file, SHA-256) of the inputs, written into it.
        contact_ids: names contacts, see `PlanStore.contact_ids`.
        time_limit_s: for the solves.
        old_elements: sets beyond the age limit were allowed.
        tell: called with a line of progress.

    Raises:
        NothingVerifiedError: none was found in the time, or none came through the second reading.
        PlanInterrupted: Ctrl-C; carries the best plan, verified.
        KeyboardInterrupt: Ctrl-C before there was one.
    """
    tell("looking for passes")
    sky, ways = sky_of(mission, horizon, elements)
    tell(f"{len(sky.passes)} passes above the masks; weighing links, charge and people")
    problem = join(mission, horizon, sky, ways)
    findings: tuple[Finding, ...] = ()
    left_s, interrupted = time_limit_s, False
    for attempt in range(_REPAIRS + 2):
        solved = solve(problem, time_limit_s=left_s, tell=tell)
        interrupted |= solved.interrupted
        left_s = max(left_s - sum(solved.seconds.values()), _REPAIR_SHARE * time_limit_s)
        left_s = min(left_s, _HURRY_S) if interrupted else left_s
        if not _found(problem, solved):
            if interrupted:
                raise KeyboardInterrupt
            told = f"no plan was found in {time_limit_s:g} s, nothing is stored; allow more with --time-limit"
            raise NothingVerifiedError(told)
        made = outcome(problem, solved.names, solved.values)
        best = outcome(problem, solved.names, solved.best)
        tell("writing the plan down and reading it a second time")
        plan = draw_up(
            mission.name,
            solved,
            made,
            best,
            elements=_elements_used(mission, horizon, elements, made, old=old_elements),
            name_contacts=contact_ids,
            reasons=reasons(problem, _unplaced(problem, made)),
            notices=_notices(mission, horizon, problem, sky, solved),
            wanted=_wanted(mission, horizon, sky),
            edition=edition,
            made_from=made_from,
        )
        verdict = check(mission, elements, plan)
        if verdict.ok:
            plan = replace(plan, verdict=verdict, notices=plan.notices + _musts(plan))
            if interrupted:
                raise PlanInterrupted(replace(plan, proven=False))
            return plan
        findings = verdict.findings
        for finding in findings:
            tell(f"the second reading found: {finding.where}: {finding.sentence}")
        passes = {one.id: laid.index for one, laid in zip(plan.all_contacts, made.contacts, strict=True)}
        problem = tightened(problem, findings, passes, drop=attempt >= _REPAIRS - 1)
    told = "\n".join(
        f"  {finding.where}: {finding.rule.value} {finding.sentence}" for finding in findings[:8]
    )
    raise NothingVerifiedError(f"no plan came through the second reading; what it found last:\n{told}")


def _found(problem: Problem, solved: Solved) -> bool:
    """Return whether there is a plan to speak of: the worth step has one, or nothing is to be chosen."""
    choice = problem.passes or problem.sessions
    return not choice or any(step.name == "worth" for step in solved.steps)


def _unplaced(problem: Problem, made: Outcome) -> list[int]:
    """Return the commands that no contact sends."""
    sent = {command for laid in made.contacts for command in laid.commands}
    return [number for number in range(len(problem.commands)) if number not in sent]


def _wanted(mission: Mission, horizon: Horizon, sky: Sky) -> dict[str, tuple[float, float, bool]]:
    """Return floor, end fraction and whether the start was assumed, by satellite."""
    return {
        satellite.name: (
            satellite.battery.floor_fraction,
            mission.planning.end_fraction,
            carry_forward(satellite, sky.shadows[satellite.name], horizon, mission.planning)[1],
        )
        for satellite in mission.satellites
    }


def _elements_used(
    mission: Mission, horizon: Horizon, elements: Mapping[str, ElementSet], made: Outcome, *, old: bool
) -> tuple[ElementsUsed, ...]:
    """Return the sets with their age at the contact farthest from the epoch."""
    used = []
    for satellite in mission.satellites:
        chosen = elements[satellite.name]
        epoch_s = horizon.seconds(chosen.epoch)
        moments = [
            made.problem.passes[laid.index].peak_s
            for laid in made.contacts
            if made.problem.passes[laid.index].sight.satellite == satellite.name
        ]
        ages = [abs(moment - epoch_s) / DAY_S for moment in moments]
        farthest = max(ages, default=0.0)
        used.append(
            ElementsUsed(
                satellite=satellite.name,
                name=chosen.name,
                number=chosen.number,
                epoch_s=epoch_s,
                source=chosen.source,
                farthest_days=farthest,
                old=old and farthest > mission.planning.refuse_age_days,
            )
        )
    return tuple(used)


def _musts(plan: Plan) -> tuple[str, ...]:
    """Return a sentence for each must that is not placed."""
    return tuple(
        f"Must {command.name} is not placed: {command.reason}."
        for command in plan.commands
        if command.must and not command.placed
    )


def _notices(
    mission: Mission, horizon: Horizon, problem: Problem, sky: Sky, solved: Solved
) -> tuple[str, ...]:
    """Return what the lead must know before reading on."""
    told = []
    for satellite, craft in zip(mission.satellites, problem.crafts, strict=True):
        battery = satellite.battery
        floor_j = battery.floor_fraction * craft.capacity_j
        if craft.floor_j < floor_j:
            told.append(
                f"{satellite.name} falls under its floor of {battery.floor_fraction:.0%} with no contact, "
                f"to {craft.floor_j / craft.capacity_j:.0%}: generation does not carry the bus."
            )
        if battery.telemetry is None:
            told.append(
                f"No battery telemetry for {satellite.name}: the week is assumed to start at "
                f"{craft.start_j / craft.capacity_j:.0%}."
            )
        elif horizon.seconds(battery.telemetry.at_utc) > 0.0:
            told.append(
                f"The battery telemetry of {satellite.name} is from after Monday; it is taken as the start."
            )
        if satellite.name in sky.propagation_end_s:
            end = horizon.utc(sky.propagation_end_s[satellite.name])
            told.append(
                f"{satellite.name} has decayed by its elements: no passes after {end:%a %d %b %H:%M} UTC."
            )
    missing = next((step for step in solved.steps if step.name == "charge missing at the end"), None)
    if missing is not None and missing.kept > 1.0:
        told.append(
            f"The charge wanted at the end is missed by {missing.kept / 3.6:.1f} Wh: no plan reaches it."
        )
    return tuple(told)
