"""A stored plan, shown again: `show`."""

import json

from rich.text import Text

from passplan.domain.errors import InputError, PassplanError
from passplan.domain.mission import Mission
from passplan.domain.moments import week_of
from passplan.domain.plan import Contact, Plan
from passplan.errands.days import named_day
from passplan.errands.desk import Answer, Desk
from passplan.render.contact_text import contact_text, day_text
from passplan.render.week_table import week_text
from passplan.workspace.documents import read_bytes
from passplan.workspace.plans import PlanStore
from passplan.workspace.read import read_workspace


def show(desk: Desk, what: str | None, week: str | None, edition: int | None, *, as_json: bool) -> Answer:
    """Show a stored plan: the week, one day of it, or one contact.

    Args:
        desk: for the workspace.
        what: a day, a contact, or None for the whole week.
        week: ISO week; None takes that of the contact, else the one `stored_week` names.
        edition: its number; None takes the last.
        as_json: the stored text, or the part of it that is asked for.

    Raises:
        PassplanError: there is no such plan, day or contact.
    """
    store = PlanStore(folder=desk.folder)
    mission = _mission(desk)
    pinned = mission.pinned_week if mission else None
    plan = store.read(week or _week_of_contact(store, what) or stored_week(store, pinned), edition)
    page, contacts = _shown(plan, mission or _unread(plan), what, desk.width)
    if not as_json:
        return Answer(shown=page)
    stored = read_bytes(store.path(plan.horizon.week, plan.edition), "plans/")
    return Answer(shown=stored if contacts is None else _part(stored, contacts))


def stored_week(store: PlanStore, pinned: str | None) -> str:
    """Return the pinned week where it has a plan, else the last week that has one.

    Raises:
        PassplanError: there is no plan at all.
    """
    weeks = store.weeks()
    if not weeks:
        raise PassplanError(f"{store.home}: there is no plan yet; make one with: passplan plan")
    return pinned if pinned in weeks else weeks[-1]


def _mission(desk: Desk) -> Mission | None:
    """Return the mission; None, and a warning, while its files have mistakes, as a plan can still be read."""
    try:
        return read_workspace(desk.folder)
    except InputError as error:
        if not (desk.folder / "mission.toml").exists():
            raise
        desk.warn(f"The workspace has mistakes ({len(error.mistakes)}); passplan check tells them.")
        desk.warn("The plan is shown without the names and local times of stations.")
        return None


def _unread(plan: Plan) -> Mission:
    """Return as much of a mission as a plan tells by itself."""
    return Mission(name=plan.mission, satellites=(), stations=())


def _week_of_contact(store: PlanStore, what: str | None) -> str | None:
    """Return the week of a contact, as names are given once; None when `what` is the name of none."""
    word = (what or "").strip().upper()
    moments = (one.tca_utc for one in store.contact_numbers() if one.id == word)
    return next((week_of(moment) for moment in moments), None) if word else None


def _shown(
    plan: Plan, mission: Mission, what: str | None, width: int
) -> tuple[Text, tuple[Contact, ...] | None]:
    """Return the page asked for and the contacts on it; None for a whole week."""
    if what is None:
        return week_text(plan, mission, width), None
    day = named_day(what, plan.horizon)
    if day is None:
        page = contact_text(plan, mission, what, width)
        return page, tuple(one for one in plan.contacts if one.id == what.strip().upper())
    page = day_text(plan, mission, day, width)
    return page, tuple(one for one in plan.contacts if plan.horizon.utc(one.start_s).date() == day)


def _part(stored: bytes, contacts: tuple[Contact, ...]) -> bytes:
    """Return some contacts of a stored plan as JSON, in the words of the whole."""
    told = json.loads(stored)
    names = {one.id for one in contacts}
    part = {key: told[key] for key in ("form", "mission", "week", "edition")}
    part["contacts"] = [row for row in told["contacts"] if row["id"] in names]
    return (json.dumps(part, indent=2) + "\n").encode()
