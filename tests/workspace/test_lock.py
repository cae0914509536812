"""One writer at a time, over real processes."""

import os
import re
import subprocess
import sys
from pathlib import Path

import pytest

from passplan.domain.errors import HeldError, InputError
from passplan.workspace.lock import hold

HOLDER = """
import sys
from pathlib import Path
from passplan.workspace.lock import hold
with hold(Path(sys.argv[1])):
    print("held", flush=True)
    sys.stdin.readline()
"""


def holder(folder: Path) -> subprocess.Popen[str]:
    """Start a process that holds a folder until it is written to or ended."""
    process = subprocess.Popen(
        [sys.executable, "-c", HOLDER, str(folder)],
        stdin=subprocess.PIPE,
        stdout=subprocess.PIPE,
        text=True,
        env=os.environ | {"PYTHONPATH": os.getcwd()},  # noqa: PTH109
    )
    assert process.stdout is not None
    assert process.stdout.readline() == "held\n"
    return process


def test_another_process_holds_it_until_it_is_done(tmp_path: Path) -> None:
    with holder(tmp_path) as other:
        with pytest.raises(HeldError) as caught, hold(tmp_path):
            pytest.fail("two hold it")
        since = r"20\d\d-\d\d-\d\dT[\d:]{8}Z"
        told = rf"this workspace is held by process (\d+) since {since}; wait until it is done, or stop it"
        match = re.fullmatch(told, str(caught.value))
        assert match is not None
        assert int(match[1]) == other.pid
        assert caught.value.exit_code == 4
        other.communicate("\n", timeout=10)
    with hold(tmp_path):
        pass


def test_a_killed_process_holds_nothing(tmp_path: Path) -> None:
    """The file stays behind, the lock does not."""
    with holder(tmp_path) as other:
        other.kill()
        other.wait(timeout=10)
        assert (tmp_path / "plans" / ".lock").exists()
    with hold(tmp_path):
        assert (tmp_path / "plans" / ".lock").read_text(encoding="ascii") == f"{os.getpid()}\n"


def test_within_one_process_too_and_nothing_stays_behind(tmp_path: Path) -> None:
    with hold(tmp_path), pytest.raises(HeldError, match=f"process {os.getpid()} since"), hold(tmp_path):
        pytest.fail("held twice")
    assert list((tmp_path / "plans").iterdir()) == []


@pytest.mark.parametrize("error", [KeyboardInterrupt, RuntimeError])
def test_it_falls_however_the_block_ends(tmp_path: Path, error: type[BaseException]) -> None:
    with pytest.raises(error), hold(tmp_path):
        raise error
    assert list((tmp_path / "plans").iterdir()) == []
    with hold(tmp_path):
        pass


def test_a_folder_that_cannot_be_written(tmp_path: Path) -> None:
    (tmp_path / "plans").write_text("", encoding="utf-8")
    with pytest.raises(InputError) as caught, hold(tmp_path):
        pytest.fail("held a file")
    assert str(caught.value) == "plans/.lock: cannot be written: file exists"
    assert caught.value.exit_code == 2


def test_a_folder_that_is_not_there(tmp_path: Path) -> None:
    with (
        pytest.raises(InputError, match="cannot be written: no such file or directory"),
        hold(tmp_path / "no"),
    ):
        pytest.fail("held nothing")


def test_an_error_of_the_block_is_not_taken_for_ours(tmp_path: Path) -> None:
    with pytest.raises(OSError, match="theirs"), hold(tmp_path):
        raise OSError("theirs")


def test_a_name_taken_away_meanwhile_is_taken_anew(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Between open and lock the holder before may have ended and unlinked the file."""
    opened = os.open
    path = tmp_path / "plans" / ".lock"
    removed: list[Path] = []

    def open_then_unlink(*args: object, **kwargs: object) -> int:
        handle = opened(*args, **kwargs)  # type: ignore[arg-type]
        if not removed:
            removed.append(path)
            path.unlink()
        return handle

    monkeypatch.setattr(os, "open", open_then_unlink)
    with hold(tmp_path):
        monkeypatch.undo()
        assert path.exists()
        with pytest.raises(HeldError), hold(tmp_path):
            pytest.fail("held twice")
