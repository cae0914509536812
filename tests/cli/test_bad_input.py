"""Bad input ends in a clear line and the right exit code, never in a traceback; earlier plans stay."""

import errno
import os
import re
from pathlib import Path

import pytest

from passplan.workspace.lock import hold
from tests.cli.conftest import Spoil, Type, Typed, in_shell

pytestmark = pytest.mark.usefixtures("week")

COMMANDS = (("check",), ("passes",), ("plan",), ("elements",))


def refused(ended: Typed, told: str, code: int = 2) -> None:
    """Hold the end of a command to: this code, this sentence, no traceback, nothing a terminal acts on."""
    said = ended.out + ended.err
    assert ended.code == code
    assert told in " ".join(said.split())
    assert "Traceback" not in said
    assert "fault in passplan" not in said
    assert not re.search(r"[^\n -~\u00a0-\U0010ffff]", said)


@pytest.mark.parametrize("command", COMMANDS)
@pytest.mark.parametrize(
    ("spoilt", "told"),
    [
        (("mission.toml", 'name = "Finch" ', "name = Finch "), "not TOML: invalid value"),
        (("satellites/finch-1.toml", "up_hz = 437.2e6", ""), "radio.up_hz"),
        (("stations/nor.toml", "latitude_deg = 60.1", "latitude_deg = 1e400"), "latitude_deg"),
        (("stations/nor.toml", "Europe/Oslo", "Europe/Olso"), "no such time zone"),
        (("operators.toml", '"NOR"', '"NRO"'), "NRO"),
        (("mission.toml", "2026-W50", "2026-W60"), "pinned_week"),
    ],
    ids=["toml", "missing", "number", "zone", "reference", "week"],
)
def test_a_mistake_in_a_file(
    typed: Type, spoil: Spoil, command: tuple[str, ...], spoilt: tuple[str, str, str], told: str
) -> None:
    spoil(*spoilt)
    ended = typed(*command)
    refused(ended, told)
    refused(ended, spoilt[0])


def test_all_mistakes_are_told_at_once(typed: Type, spoil: Spoil, week: Path) -> None:
    spoil("stations/nor.toml", "60.1", "160.1")
    spoil("operators.toml", '"Pacific/Auckland"', '"Moon/Tycho"')
    element_file = next((week / "elements").iterdir())
    element_file.write_text(element_file.read_text().replace("97.4280", "97x4280"))
    ended = typed("check")
    assert ended.out.startswith("3 mistakes.")
    for told in ("'160.1'", "Moon/Tycho", "line 4: '97x4280'", "\n            ^^^^^^^^\n"):
        assert told in ended.out


@pytest.mark.parametrize("command", [*COMMANDS, ("elements", "add", "x.tle"), ("show",), ("calendar",)])
def test_no_workspace_here(typed: Type, tmp_path: Path, command: tuple[str, ...]) -> None:
    (tmp_path / "empty").mkdir()
    refused(typed(*command, "--workspace", str(tmp_path / "empty")), "no mission.toml here")
    assert list((tmp_path / "empty").glob("*.toml")) == []


@pytest.mark.parametrize("folder", ["stations", "satellites"])
def test_an_empty_folder(typed: Type, week: Path, folder: str) -> None:
    for path in (week / folder).iterdir():
        path.unlink()
    refused(typed("plan"), f"{folder}/: empty; add at least one")


def test_no_element_set(typed: Type, week: Path) -> None:
    for path in (week / "elements").iterdir():
        path.unlink()
    refused(typed("plan"), "no element set in the folder; add one with: passplan elements add FILE")
    refused(typed("elements"), "No element sets yet.", code=0)
    (week / "elements").rmdir()
    refused(typed("passes"), "no element set in the folder")
    refused(typed("check"), "1 doubt", code=0)


def test_no_passes_at_all(typed: Type, spoil: Spoil, week: Path) -> None:
    for station in ("nor", "sud"):
        (week / "stations" / f"{station}.toml").write_text(
            (week / "stations" / f"{station}.toml")
            .read_text()
            .replace("[rotator]", "mask = [[0, 90], [180, 90]]\n[rotator]")
        )
    refused(typed("passes"), "Week 2026-W50, Finch-1: no passes", code=0)
    refused(typed("plan"), "No contact is planned", code=1)  # the clock is a must
    spoil("commands.toml", "must = true", "")
    refused(typed("plan"), "No contact is planned", code=0)
    assert typed("calendar").code == 0


def test_a_decayed_satellite(typed: Type, week: Path) -> None:
    path = next((week / "elements").iterdir())
    # A drag term some fifty times too large leads the orbit into the ground within the week;
    # columns 54 to 61 and the checksum of line 1 change.
    path.write_text(path.read_text().replace(" 29000-3 0   419", " 19000-0 0   415"))
    refused(typed("passes"), "leads into the atmosphere", code=0)
    ended = typed("plan")
    refused(ended, "decayed", code=ended.code)
    assert ended.code in (0, 1)


@pytest.mark.parametrize("name", ["mission.toml", "stations/nor.toml"])
def test_a_huge_file(typed: Type, week: Path, name: str) -> None:
    with (week / name).open("ab") as file:
        file.truncate(6_000_000)
    refused(typed("plan"), "is too large")


def test_a_huge_element_file(typed: Type, week: Path) -> None:
    with (week / "big.tle").open("wb") as file:
        file.truncate(65_000_000)
    refused(typed("elements", "add", "big.tle"), "is too large")


NASTY = 'Ann, "the\\"r/.. \u00d8stby; \U0001f6f0'


def test_names_with_commas_quotes_slashes_and_letters_of_all_kinds(
    typed: Type, spoil: Spoil, week: Path
) -> None:
    quoted = NASTY.replace("\\", "\\\\").replace('"', '\\"')
    spoil("operators.toml", '"QA1A"', f'"{quoted}"')
    spoil("stations/nor.toml", '"North Quay"', f'"{quoted}"')
    spoil("mission.toml", '"Finch"', f'"{quoted}"')
    refused(typed("plan"), "proven and verified", code=0)
    refused(typed("show", "nor-01"), NASTY, code=0)
    refused(typed("passes", "--json"), "NOR", code=0)
    refused(typed("calendar"), "operator-ann", code=0)
    assert all(path.parent == week / "calendars" for path in (week / "calendars").rglob("*"))


@pytest.mark.parametrize("escape", ["\\n", "\\u001b[2J", "\\u202e", "\\u0000"])
def test_names_that_would_act_on_a_terminal(typed: Type, spoil: Spoil, escape: str) -> None:
    spoil("operators.toml", '"QA1A"', f'"QA{escape}1A"')
    for command in COMMANDS:
        refused(typed(*command), "one line of printable characters")


def test_file_names_that_would_act_on_a_terminal(typed: Type, week: Path) -> None:
    (week / "stations" / "a\x1b[2Jb.toml").write_text("name = 3")
    refused(typed("plan"), "name")
    (week / "stations" / "a\x1b[2Jb.toml").unlink()
    (week / "elements" / "a\x1b[2J\nb.tle").write_text("nothing")
    for command in COMMANDS:
        refused(typed(*command), "no element set found")


def test_element_sets_in_a_file_of_a_strange_name(typed: Type, week: Path) -> None:
    path = next((week / "elements").iterdir())
    path.rename(path.with_name("a\x1b[2J, line 3.tle"))
    ended = typed("plan")
    refused(ended, "", code=ended.code)
    assert ended.code in (0, 2)


@pytest.mark.parametrize(
    ("arguments", "told"),
    [
        (("plan", "--week", "50"), "is not an ISO week; write it like 2026-W50"),
        (("plan", "--week", "2026-W60"), "is not an ISO week"),
        (("plan", "--time-limit", "0"), "--time-limit 0: name some seconds"),
        (("plan", "--time-limit", "nan"), "--time-limit nan: name some seconds"),
        (("plan", "--time-limit", "soon"), "Invalid value"),
        (("passes", "--station", "XYZ"), "no station 'XYZ'; there are NOR and SUD"),
        (("passes", "--satellite", "Moon\x1b[1m"), "no satellite 'Moon [1m'; there are Finch-1"),
        (("passes", "--day", "someday"), "'someday' is not a day of week 2026-W50"),
        (("passes", "--day", "2026-12-14"), "is not a day of week 2026-W50"),
        (("passes", "--least-elevation", "nan"), "name an angle from -90 to 90 deg"),
        (("passes", "--json", "--csv"), "choose one of --json and --csv"),
        (("show", "--week", "W50"), "no plan for this week"),
        (("show", "--edition", "0"), "there is no plan yet"),
        (("elements", "add"), "Missing argument"),
        (("elements", "add", "nowhere.tle"), "nowhere.tle: cannot be read"),
        (("elements", "add", "elements/../mission.toml"), "no element set found"),
        (("schema", "mission.toml"), "cannot be written"),
        (("new", "mission.toml"), "cannot be written"),
        (("nonsense",), "No such command"),
        (("plan", "--nonsense"), "No such option"),
    ],
    ids=lambda part: " ".join(part)[:30].replace("\x1b", "") if isinstance(part, tuple) else "",
)
def test_what_cannot_be_meant(typed: Type, arguments: tuple[str, ...], told: str) -> None:
    ended = typed(*arguments)
    refused(ended, told)
    assert ended.out == ""


def test_another_run_in_the_same_workspace(typed: Type, week: Path) -> None:
    typed("plan")
    before = {path.name: path.read_bytes() for path in (week / "plans").iterdir()}
    with hold(week):
        refused(typed("plan"), f"this workspace is held by process {os.getpid()}", code=4)
        refused(typed("calendar"), "this workspace is held by process", code=4)
        refused(typed("show"), "edition 1", code=0)  # reading waits for nobody
    after = {path.name: path.read_bytes() for path in (week / "plans").iterdir()}
    assert after == before


def test_a_full_disk(typed: Type, week: Path, spoil: Spoil, monkeypatch: pytest.MonkeyPatch) -> None:
    typed("plan")
    before = {path.name: path.read_bytes() for path in (week / "plans").iterdir()}
    spoil("operators.toml", 'days = ["wed"]', 'days = ["thu"]')

    def full(_: int) -> None:
        raise OSError(errno.ENOSPC, os.strerror(errno.ENOSPC))

    monkeypatch.setattr(os, "fsync", full)
    refused(typed("plan"), "plans/2026-W50-2.json: cannot be written: no space left on device")
    refused(typed("calendar"), "calendars cannot be written: no space left on device")
    source = week / "fresh.tle"
    text = next((week / "elements").iterdir()).read_text()
    source.write_text(text.replace("26339.80051111", "26340.80051111").replace("0   419", "0   411"))
    refused(typed("elements", "add", "fresh.tle"), "cannot store element sets here: no space left on device")
    after = {path.name: path.read_bytes() for path in (week / "plans").iterdir()}
    assert after == before
    assert list((week / "calendars").iterdir()) == []
    assert len(list((week / "elements").iterdir())) == 1


def test_a_file_the_kernel_cuts_short(typed: Type, week: Path, spoil: Spoil) -> None:
    typed("plan")
    before = {path.name: path.read_bytes() for path in (week / "plans").iterdir()}
    spoil("operators.toml", 'days = ["wed"]', 'days = ["thu"]')
    ended = in_shell("ulimit -f 2; passplan plan")  # 2 kB, and a plan has more
    refused(ended, "plans/2026-W50-2.json: cannot be written: file too large")
    assert {path.name: path.read_bytes() for path in (week / "plans").iterdir()} == before


def test_a_folder_that_cannot_be_written(typed: Type, monkeypatch: pytest.MonkeyPatch) -> None:
    real = os.open

    def guarded(path: str, flags: int, *rest: int, **more: int) -> int:
        if flags & (os.O_WRONLY | os.O_RDWR | os.O_CREAT) and not str(path).startswith(os.devnull):
            raise OSError(errno.EROFS, os.strerror(errno.EROFS), str(path))
        return real(path, flags, *rest, **more)

    monkeypatch.setattr(os, "open", guarded)
    refused(typed("plan"), "plans/.lock: cannot be written: read-only file system")
    refused(typed("calendar"), "cannot be written: read-only file system")
    refused(typed("passes"), "Week 2026-W50", code=0)


def test_plans_that_are_no_folder(typed: Type, week: Path) -> None:
    (week / "plans").write_text("")
    refused(typed("plan"), "cannot be written")
    refused(typed("show"), "there is no plan yet")


def test_a_stored_plan_that_was_spoiled(typed: Type, week: Path) -> None:
    typed("plan")
    path = week / "plans" / "2026-W50-1.json"
    path.write_text(path.read_text()[:2000])
    for command in (("show",), ("show", "--json"), ("calendar",), ("plan",), ("show", "nor-01")):
        refused(typed(*command), "plans/2026-W50-1.json")


def test_a_fault_of_our_own_is_one_honest_line(typed: Type, monkeypatch: pytest.MonkeyPatch) -> None:
    def wrong(*_: object) -> None:
        raise ZeroDivisionError("seven\nby zero")

    monkeypatch.setattr("passplan.errands.settling.check", wrong)
    code, out, err = typed("check")
    assert (code, out) == (70, "")
    assert err.startswith("This is a fault in passplan, not in your files (ZeroDivisionError: seven;")
    assert err.count("\n") == 1


def test_too_little_memory_is_told(typed: Type, monkeypatch: pytest.MonkeyPatch) -> None:
    def hungry(*_: object) -> None:
        raise MemoryError

    monkeypatch.setattr("passplan.errands.settling.check", hungry)
    refused(typed("check"), "There is not enough memory for this.")
