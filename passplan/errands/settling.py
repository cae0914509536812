"""A workspace made, looked over, and explained to editors: `new`, `check`, `schema`."""

import shlex
from pathlib import Path

from passplan.domain.errors import InputError, Mistake
from passplan.domain.mission import Mission
from passplan.errands.desk import Answer, Desk
from passplan.errands.inputs import chosen, element_sets, horizon_of
from passplan.render.check_text import check_text
from passplan.render.typeset import STRONG, Page
from passplan.render.words import count
from passplan.workspace.assumed import assumed
from passplan.workspace.doubts import warnings
from passplan.workspace.read import read_workspace
from passplan.workspace.sample import make_workspace
from passplan.workspace.schema import write_schemas

SCHEMAS = ".schemas"
_MISTAKEN = 2


def new(desk: Desk) -> Answer:
    """Make a workspace from the sample and say what to type next."""
    made = make_workspace(desk.folder)
    page = Page(desk.width)
    page.sentences(f"A workspace with an invented sample mission is in {desk.folder}.", style=STRONG)
    page.sentences(f"{count(len(made), 'file')}, all plain text: change them into yours.", "Next:")
    page.line()
    page.line(f"  cd {_typed(desk.folder)}")
    page.line("  passplan check         looks for mistakes and tells what is assumed")
    page.line("  passplan passes        lists who sees the satellite and when")
    page.line("  passplan plan          plans the week")
    page.line("  passplan calendar      writes the plan as calendars for phones")
    return Answer(shown=page.text())


def check(desk: Desk, week: str | None) -> Answer:
    """Tell every mistake in the workspace, or what is doubtful and what is assumed where there is none."""
    mission, mistakes = _read(desk)
    doubts: list[str] = []
    try:
        sets = element_sets(desk.folder)
    except InputError as error:
        sets, mistakes = [], [*mistakes, *error.mistakes]
    if mission is not None and not mistakes:
        horizon = horizon_of(mission, week, desk.clock())
        doubts += warnings(mission, desk.folder, horizon.week)
        doubts += [str(error) for error in chosen(sets, mission, horizon)[1]]
    told = [] if mistakes else [(one.file, one.key, one.value) for one in assumed(desk.folder)]
    page = check_text(mistakes, doubts, told, desk.width)
    return Answer(shown=page, exit_code=_MISTAKEN if mistakes else 0)


def _read(desk: Desk) -> tuple[Mission | None, list[Mistake]]:
    """Return the mission, or None and every mistake that keeps it from being read."""
    try:
        return read_workspace(desk.folder), []
    except InputError as error:
        return None, list(error.mistakes)


def schema(desk: Desk, folder: Path | None) -> Answer:
    """Write the JSON Schemas of the workspace's files and say where."""
    home = folder or desk.folder / SCHEMAS
    made = write_schemas(home)
    page = Page(desk.width)
    page.sentences(f"{count(len(made), 'JSON Schema')} in {home}:", style=STRONG)
    for path in made:
        page.line(f"  {path.name}")
    page.sentences("Point your editor's TOML support at them, and it checks and explains while you type.")
    return Answer(shown=page.text())


def _typed(folder: Path) -> str:
    """Return a path as one types it in a shell."""
    return shlex.quote(str(folder))
