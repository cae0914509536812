"""Both streams as a shell may hand them over, and what goes to which."""

import os
import pty
import select
import subprocess
import sys
from pathlib import Path

import pytest

from tests.cli.conftest import Spoil, environment, in_shell

pytestmark = pytest.mark.usefixtures("week")


def test_a_reader_that_goes_away_is_no_error() -> None:
    code, out, err = in_shell("set -o pipefail; passplan passes --csv | head -1")
    assert code == 0
    assert out.startswith("satellite,station,aos_utc")
    assert "Traceback" not in err
    assert "Broken" not in err


def test_a_reader_that_never_reads_keeps_no_plan_from_being_stored(week: Path) -> None:
    code, _, err = in_shell("set -o pipefail; passplan plan | true")
    assert code == 0
    assert "Stored as plans/2026-W50-1.json." in err
    assert (week / "plans" / "2026-W50-1.json").is_file()


@pytest.mark.skipif(not Path("/dev/full").exists(), reason="no /dev/full here")
def test_a_full_disk_behind_standard_output(week: Path) -> None:
    code, _, err = in_shell("passplan plan > /dev/full")
    assert code == 2
    assert "standard output: no space left on device" in err
    assert "Traceback" not in err
    assert (week / "plans" / "2026-W50-1.json").is_file()


def test_closed_streams() -> None:
    assert in_shell("passplan passes >&-").code == 0
    assert in_shell("passplan passes 2>&-").out.startswith("Week 2026-W50")
    assert in_shell("passplan passes >&- 2>&- <&-").code == 0


def test_letters_a_terminal_has_not(spoil: Spoil) -> None:
    spoil("stations/nor.toml", '"North Quay"', '"\u00d8st"')
    assert in_shell("passplan plan >/dev/null").code == 0
    code, out, _ = in_shell("passplan show nor-01", PYTHONIOENCODING="ascii")
    assert code == 0
    assert "QA1A sends, ?st to Finch-1" in out
    code, out, _ = in_shell("passplan show nor-01", PYTHONIOENCODING="utf-8")
    assert "QA1A sends, \u00d8st to Finch-1" in out


def test_json_is_utf_8_whatever_the_terminal_is(spoil: Spoil) -> None:
    spoil("satellites/finch-1.toml", '"Finch-1"', '"F\u00efnch-1"')
    commands = Path("commands.toml")
    commands.write_text(commands.read_text().replace("Finch-1", "F\u00efnch-1"))
    code, out, _ = in_shell("passplan passes --json", PYTHONIOENCODING="ascii")
    assert code == 0
    assert '"satellite": "F\u00efnch-1"' in out


def test_the_answer_alone_goes_to_standard_output() -> None:
    code, out, _ = in_shell("passplan plan --json --progress 2>/dev/null")
    assert code == 0
    assert out == Path("plans/2026-W50-1.json").read_text()


def on_a_terminal(*arguments: str, **changes: str) -> str:
    """Return what a command writes when standard output and error are a terminal."""
    ours, theirs = pty.openpty()
    process = subprocess.Popen(
        [sys.executable, "-m", "passplan", *arguments],
        stdin=theirs,
        stdout=theirs,
        stderr=theirs,
        env=environment(**{"TERM": "xterm"} | changes),
    )
    os.close(theirs)
    written = b""
    while select.select([ours], [], [], 60.0)[0]:
        try:
            part = os.read(ours, 65536)
        except OSError:  # Linux says so when the other end is closed
            break
        if not part:
            break
        written += part
    os.close(ours)
    process.wait(timeout=60)
    return written.decode()


def test_colour_only_on_a_terminal_that_wants_it() -> None:
    assert "\x1b[1m" in on_a_terminal("check")
    plain = on_a_terminal("check", NO_COLOR="1")
    assert "Nothing is wrong" in plain
    assert "\x1b[3" not in plain  # no colour; bold is none
    assert "\x1b" not in in_shell("passplan check").out
    assert "\x1b" not in on_a_terminal("check", TERM="dumb")


def test_a_terminal_sees_what_is_being_done() -> None:
    written = on_a_terminal("plan")
    assert "\x1b[?25l" in written  # the cursor is hidden beside the moving line
    assert "passes above the masks" in written
    assert "proven and verified" in written


def test_the_width_is_the_screens() -> None:
    for columns in ("80", "140", "1", "99999999", "wide", ""):
        code, out, _ = in_shell("passplan check", COLUMNS=columns)
        assert code == 0
        widest = max(map(len, out.splitlines()))
        assert widest <= (int(columns) if columns in ("80", "140") else 400)
