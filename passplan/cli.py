"""The door: arguments, the clock, exit codes. A room is imported by the command that needs it.

Exit codes: 0 good; 1 planned, but a must or the floor is not met; 2 input, usage, or a file
that cannot be read or written; 3 nothing verified; 4 workspace held by another; 5 an address
or a server failed; 70 a fault of passplan itself (EX_SOFTWARE of sysexits.h); 130 interrupted.
"""

import os
import signal
import sys
import traceback
from collections.abc import Callable, Iterator, Sequence
from contextlib import contextmanager
from datetime import UTC, datetime
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from passplan.domain.errors import PassplanError
from passplan.streams import open_streams, take_stdout

if TYPE_CHECKING:
    from passplan.errands.desk import Answer, Desk

UNREADABLE, FAULT, INTERRUPTED = 2, 70, 130
TIME_LIMIT_S = 120.0

app = typer.Typer(
    no_args_is_help=True,
    add_completion=False,
    rich_markup_mode=None,
    pretty_exceptions_enable=False,
)
element_app = typer.Typer(rich_markup_mode=None, add_completion=False)

Workspace = Annotated[
    Path,
    typer.Option("--workspace", metavar="DIR", help="The folder with mission.toml.", show_default="here"),
]
Week = Annotated[
    str | None,
    typer.Option("--week", metavar="WEEK", help="Such as 2026-W50; else the pinned or the next one."),
]
StoredWeek = Annotated[
    str | None,
    typer.Option("--week", metavar="WEEK", help="Such as 2026-W50; else the pinned or the last one."),
]
AsJson = Annotated[bool, typer.Option("--json", help="JSON for programs instead of text.")]
HERE = Path()


def now() -> datetime:
    """Return the moment it is; the calendar of the machine is read here and nowhere else."""
    return datetime.now(UTC)


def main() -> None:
    """Run passplan with the arguments of the process and end it."""
    open_streams()
    take_stdout()
    code = run(sys.argv[1:])
    if code == INTERRUPTED:  # a solver that is still at work in its thread would crash an orderly end
        os._exit(code)
    sys.exit(code)


def run(arguments: Sequence[str]) -> int:
    """Run passplan, say in a sentence what went wrong if anything did, and return the exit code."""
    with _interrupts() as pressed:
        code, told = _ended(arguments)
    if told:
        from passplan.voice import Voice

        Voice().warn(told)
    return INTERRUPTED if pressed else code


@app.callback()
def _about() -> None:
    """Plan a week of passes and commands for a small satellite flown by volunteers."""


@app.command(epilog="Example: passplan new my-week")
def new(folder: Annotated[Path, typer.Argument(metavar="DIR", help="A folder to make.")]) -> None:
    """Make a workspace from the sample."""
    from passplan.errands import settling

    _run(folder, settling.new)


@app.command(epilog="Example: passplan check --workspace my-week")
def check(week: Week = None, workspace: Workspace = HERE) -> None:
    """Tell all mistakes, and what is assumed."""
    from passplan.errands import settling

    _run(workspace, lambda desk: settling.check(desk, week))


@app.command(epilog="Example: passplan schema")
def schema(
    folder: Annotated[
        Path | None,
        typer.Argument(metavar="DIR", help="Where to.", show_default=".schemas in the workspace"),
    ] = None,
    workspace: Workspace = HERE,
) -> None:
    """Write JSON Schemas for your editor."""
    from passplan.errands import settling

    _run(workspace, lambda desk: settling.schema(desk, folder))


@element_app.callback(invoke_without_command=True, epilog="Example: passplan elements --week 2026-W50")
def elements(context: typer.Context, week: Week = None, workspace: Workspace = HERE) -> None:
    """List element sets, or add some."""
    from passplan.errands import element_sets

    context.obj = workspace
    if context.invoked_subcommand is None:
        _run(workspace, lambda desk: element_sets.elements(desk, week))


@element_app.command("add", epilog="Example: passplan elements add newest.tle")
def elements_add(
    context: typer.Context,
    sources: Annotated[
        list[str], typer.Argument(metavar="FILE...", help="Files or folders; - is standard input.")
    ],
    workspace: Annotated[
        Path | None, typer.Option("--workspace", metavar="DIR", help="The folder with mission.toml.")
    ] = None,
) -> None:
    """Add TLE or OMM; nothing is overwritten."""
    from passplan.errands import element_sets

    _run(workspace or context.obj, lambda desk: element_sets.add(desk, sources, sys.stdin.buffer.read))


app.add_typer(element_app, name="elements")


@app.command(epilog="Example: passplan passes --day mon --station QUA --useful")
def passes(
    week: Week = None,
    satellite: Annotated[str | None, typer.Option(metavar="NAME", help="Only of this satellite.")] = None,
    station: Annotated[
        list[str] | None, typer.Option(metavar="CODE", help="Only over this station; may be repeated.")
    ] = None,
    day: Annotated[
        str | None, typer.Option(metavar="DAY", help="Only of this UTC day: mon, or 2026-12-07.")
    ] = None,
    least_elevation: Annotated[
        float, typer.Option(metavar="DEG", help="Only those that rise at least so high.", show_default=False)
    ] = -90.0,
    useful: Annotated[bool, typer.Option("--useful", help="Only those in which data could flow.")] = False,
    as_json: AsJson = False,
    as_csv: Annotated[bool, typer.Option("--csv", help="CSV for spreadsheets instead of text.")] = False,
    workspace: Workspace = HERE,
) -> None:
    """List the passes of a week."""
    from passplan.errands import passing

    if as_json and as_csv:
        raise typer.BadParameter("choose one of --json and --csv")
    wanted = passing.Wanted(
        week=week,
        satellite=satellite,
        stations=tuple(station or ()),
        day=day,
        least_elevation_deg=least_elevation,
        useful=useful,
        form="json" if as_json else "csv" if as_csv else "text",
    )
    _run(workspace, lambda desk: passing.passes(desk, wanted))


@app.command(epilog="Example: passplan plan --week 2026-W50 --time-limit 60")
def plan(
    week: Week = None,
    time_limit: Annotated[
        float, typer.Option(metavar="S", help="Take the best plan found after so many seconds.")
    ] = TIME_LIMIT_S,
    old_elements: Annotated[
        bool, typer.Option("--old-elements", help="Plan with element sets the mission calls too old.")
    ] = False,
    as_json: AsJson = False,
    progress: Annotated[bool, typer.Option("--progress", help="Tell each step in a line.")] = False,
    workspace: Workspace = HERE,
) -> None:
    """Plan a week, have it verified, store it."""
    from passplan.errands import planning

    asked = planning.Asked(week=week, time_limit_s=time_limit, old_elements=old_elements, as_json=as_json)
    _run(workspace, lambda desk: planning.plan(desk, asked), every_step=progress)


@app.command(epilog="Example: passplan show tue")
def show(
    what: Annotated[
        str | None, typer.Argument(metavar="WHAT", help="A day (tue, 2026-12-08) or a contact (QUA-03).")
    ] = None,
    week: StoredWeek = None,
    edition: Annotated[int | None, typer.Option(metavar="N", help="Its number; else the last one.")] = None,
    as_json: AsJson = False,
    workspace: Workspace = HERE,
) -> None:
    """Show a stored plan, a day or a contact."""
    from passplan.errands import showing

    _run(workspace, lambda desk: showing.show(desk, what, week, edition, as_json=as_json))


@app.command(epilog="Example: passplan calendar --out /srv/www/calendars")
def calendar(
    week: StoredWeek = None,
    out: Annotated[
        Path | None, typer.Option(metavar="DIR", help="Where to.", show_default="calendars in the workspace")
    ] = None,
    no_alarms: Annotated[bool, typer.Option("--no-alarms", help="Let no phone ring.")] = False,
    workspace: Workspace = HERE,
) -> None:
    """Write calendars, and tell whom to call."""
    from passplan.errands import sharing

    _run(workspace, lambda desk: sharing.calendar(desk, week, out, alarms=not no_alarms))


def _run(folder: Path, errand: Callable[["Desk"], "Answer"], *, every_step: bool = False) -> None:
    """Run one errand, show what it brings, and leave with its exit code."""
    from passplan.errands.desk import Desk
    from passplan.voice import Voice

    voice = Voice(every_step=every_step)
    desk = Desk(folder=folder, width=voice.width, clock=now, warn=voice.warn, tell=voice.tell)
    try:
        answer = errand(desk)
    finally:
        voice.hush()
    try:
        voice.answer(answer.shown)
    finally:
        for sentence in answer.afterwards:
            voice.warn(sentence)
    raise typer.Exit(answer.exit_code)


def _ended(arguments: Sequence[str]) -> tuple[int, str]:
    """Run the command and return its exit code and what is left to say."""
    code, told = 0, ""
    try:
        app(list(arguments), prog_name="passplan")
    except SystemExit as end:
        code = end.code if isinstance(end.code, int) else 0
    except KeyboardInterrupt:
        code = INTERRUPTED
    except PassplanError as error:
        code, told = error.exit_code, str(error)
    except OSError as error:
        where = error.filename or "standard output"
        code, told = UNREADABLE, f"{where}: {(error.strerror or str(error)).lower()}"
    except MemoryError:
        code, told = UNREADABLE, "There is not enough memory for this."
    except Exception as error:  # noqa: BLE001 - the last door before a traceback
        code, told = FAULT, _fault(error)
    return code, told if code != INTERRUPTED else "Interrupted. Earlier plans are untouched."


def _fault(error: Exception) -> str:
    """Return what to say of an error that is passplan's own."""
    frame = traceback.extract_tb(error.__traceback__)[-1]
    place = f"{Path(frame.filename).name}, line {frame.lineno}"
    what = f"{type(error).__name__}: {error}".splitlines()[0]
    return f"This is a fault in passplan, not in your files ({what}; {place}). Please report this line."


@contextmanager
def _interrupts() -> Iterator[list[bool]]:
    """Yield a list that holds something once Ctrl-C was pressed, also where the work went on."""
    pressed: list[bool] = []

    def press(number: int, frame: object) -> None:
        del number, frame
        pressed.append(True)
        raise KeyboardInterrupt

    before = signal.getsignal(signal.SIGINT)
    if before is signal.default_int_handler:  # else whoever started us wants it ignored
        signal.signal(signal.SIGINT, press)
    try:
        yield pressed
    finally:
        signal.signal(signal.SIGINT, before)
