"""A week planned and stored: `plan`."""

from dataclasses import dataclass, replace

from passplan.domain.errors import PassplanError
from passplan.domain.plan import Plan
from passplan.errands.desk import Answer, Desk
from passplan.errands.inputs import Inputs, read_inputs, refuse_age, warn_of_ages
from passplan.render.week_table import week_text
from passplan.render.words import count
from passplan.week import PlanInterrupted, plan_week
from passplan.workspace.doubts import warnings
from passplan.workspace.lock import hold
from passplan.workspace.made_from import made_from
from passplan.workspace.plan_json import to_json
from passplan.workspace.plans import PlanStore

_NOT_GOOD = 1


@dataclass(frozen=True, kw_only=True, slots=True)
class Asked:
    """How a week is to be planned.

    Attributes:
        week: ISO week, None for the mission's.
        time_limit_s: at which the best plan so far is taken.
        old_elements: plan with element sets older than the mission allows.
        as_json: print the stored file itself.
    """

    week: str | None
    time_limit_s: float
    old_elements: bool
    as_json: bool


def plan(desk: Desk, asked: Asked) -> Answer:
    """Plan a week, store it as a new edition unless the last one says the same, and show it.

    Raises:
        PassplanError: input nobody can plan with, another process writing here, nothing that
            could be verified, or a file that cannot be written.
    """
    if not 0.0 < asked.time_limit_s < 1e7:
        raise PassplanError(f"--time-limit {asked.time_limit_s:g}: name some seconds, such as 120")
    with hold(desk.folder):
        desk.tell("reading the workspace")
        inputs = read_inputs(desk, asked.week)
        _warn(desk, inputs, old_elements=asked.old_elements)
        store = PlanStore(folder=desk.folder)
        latest = store.latest(inputs.horizon.week)
        made = _planned(desk, inputs, asked, store, (latest or 0) + 1)
        edition, told = _stored(desk, store, made, latest)
        path = store.path(inputs.horizon.week, edition)
        stored = store.read(inputs.horizon.week, edition)  # what is shown now is what `show` shows later
    ages = {used.satellite: used.farthest_days for used in stored.elements}
    warn_of_ages(desk, inputs.mission, ages)
    shown = path.read_bytes() if asked.as_json else week_text(stored, inputs.mission, desk.width)
    return Answer(shown=shown, exit_code=0 if stored.good else _NOT_GOOD, afterwards=told)


def _planned(desk: Desk, inputs: Inputs, asked: Asked, store: PlanStore, edition: int) -> Plan:
    """Return the verified plan, the best so far where Ctrl-C ended the search.

    Raises:
        KeyboardInterrupt: Ctrl-C came before there was a contact to keep.
    """
    try:
        return plan_week(
            inputs.mission,
            inputs.horizon,
            inputs.elements,
            edition=edition,
            made_from=made_from(desk.folder, inputs.element_files(desk.folder)),
            contact_ids=store.contact_ids,
            time_limit_s=asked.time_limit_s,
            old_elements=asked.old_elements,
            tell=desk.tell,
        )
    except PlanInterrupted as interrupted:
        if not interrupted.plan.contacts:
            raise
        desk.warn("Interrupted. The best plan so far is verified and kept.")
        return interrupted.plan


def _stored(desk: Desk, store: PlanStore, made: Plan, latest: int | None) -> tuple[int, tuple[str, ...]]:
    """Store a plan unless the last edition says the same; return the edition in force and what to say."""
    week = made.horizon.week
    if latest is not None:
        same = to_json(replace(made, edition=latest)).encode()
        if store.path(week, latest).read_bytes() == same:
            return latest, (f"Edition {latest} of week {week} stands: nothing has changed.",)
    path = store.write(made, desk.clock())
    return made.edition, (f"Stored as {path}.", "Calendars for phones: passplan calendar")


def _warn(desk: Desk, inputs: Inputs, *, old_elements: bool) -> None:
    """Say what is odd about the input before time is spent on it.

    Raises:
        InputError: element sets are too old and nobody said to take them all the same.
    """
    doubts = warnings(inputs.mission, desk.folder, inputs.horizon.week)
    if doubts:
        desk.warn(f"{count(len(doubts), 'doubt')} about the workspace: see passplan check.")
    if not old_elements:
        refuse_age(inputs)
