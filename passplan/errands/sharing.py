"""The editions as calendars for phones: `calendar`."""

from collections.abc import Mapping
from datetime import timedelta
from pathlib import Path

from passplan.domain.errors import PassplanError
from passplan.domain.moments import week_of, week_start
from passplan.domain.plan import IssuedPlan
from passplan.errands.desk import Answer, Desk
from passplan.errands.showing import stored_week
from passplan.render.calendar import calendars
from passplan.render.change_list import changes_text
from passplan.render.typeset import Page
from passplan.render.words import count
from passplan.workspace.lock import hold
from passplan.workspace.plans import PlanStore
from passplan.workspace.read import read_workspace
from passplan.workspace.whole_file import replace_with

CALENDARS = "calendars"
ALARM_MIN = 30


def calendar(desk: Desk, week: str | None, out: Path | None, *, alarms: bool) -> Answer:
    """Write the calendars of the mission, each station and each operator; say who must be told.

    Args:
        desk: for the workspace.
        week: the first week they hold, with the one before it; every later one is in them too.
        out: the folder; None takes the workspace's own.
        alarms: whether operators' phones ring.

    Raises:
        PassplanError: there is no plan, another process writes, or a file cannot be written.
    """
    home = out or desk.folder / CALENDARS
    with hold(desk.folder):
        mission = read_workspace(desk.folder)
        store = PlanStore(folder=desk.folder)
        editions = _editions(store, week or stored_week(store, mission.pinned_week))
        files = calendars(editions, mission, alarm_min=ALARM_MIN if alarms else None)
        written = _write(home, files)
    page = Page(desk.width)
    page.line()
    same = len(files) - len(written)
    said = (
        f"{count(len(written), 'calendar')} written to {home}" if written else f"Nothing to write in {home}"
    )
    page.sentences(f"{said}." if not same else f"{said}, {same} unchanged.")
    for name in written:
        page.line(f"  {name}")
    page.sentences("Put them where phones can subscribe to them, and give each person their own address.")
    page.sentences("An imported copy does not follow changes: subscribe rather than import.")
    shown = changes_text(editions, mission, desk.width)
    return Answer(shown=shown.append("\n").append_text(page.text()))


def _editions(store: PlanStore, week: str) -> list[IssuedPlan]:
    """Return the editions of a week, of the one before and of all after, in the order they were made.

    Raises:
        PassplanError: the week has no plan, or one of the files cannot be read.
    """
    before = week_of(week_start(week) - timedelta(days=7))
    if week not in store.weeks():
        raise PassplanError(f"there is no plan for {week}; make one with: passplan plan --week {week}")
    weeks = [each for each in store.weeks() if each >= before]
    issued = [edition for each in weeks for edition in store.issued(each)]
    return sorted(issued, key=lambda one: one.made_utc)


def _write(home: Path, files: Mapping[str, bytes]) -> list[str]:
    """Write files whole or not at all, leave identical ones untouched, and return the names written.

    Raises:
        PassplanError: one cannot be written; those before it are.
    """
    written = []
    try:
        home.mkdir(parents=True, exist_ok=True)
        for name, content in files.items():
            path = home / name
            if not (path.is_file() and path.read_bytes() == content):
                replace_with(path, content)
                written.append(name)
    except OSError as error:
        told = (error.strerror or str(error)).lower()
        raise PassplanError(f"{home}: calendars cannot be written: {told}") from None
    return written
