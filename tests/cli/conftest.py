"""A week small enough to be planned in a second, and two ways to type a command."""

import os
import shutil
import subprocess
import sys
from collections.abc import Callable
from datetime import UTC, datetime
from pathlib import Path
from typing import NamedTuple

import pytest

import passplan
from passplan import cli

NOW = datetime(2026, 12, 6, 21, 30, tzinfo=UTC)
SMALL_WEEK = Path(__file__).parent / "small_week"


class Typed(NamedTuple):
    """What a command left behind."""

    code: int
    out: str
    err: str


Type = Callable[..., Typed]
Spoil = Callable[[str, str, str], None]


@pytest.fixture
def week(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> Path:
    """Return a fresh workspace, which is also the current folder."""
    folder = tmp_path / "week"
    shutil.copytree(SMALL_WEEK, folder)
    monkeypatch.chdir(folder)
    return folder


@pytest.fixture
def spoil(week: Path) -> Spoil:
    """Return a function that puts `new` for the one place where a file says `old`."""

    def put(file: str, old: str, new: str) -> None:
        text = (week / file).read_text(encoding="utf-8")
        assert text.count(old) == 1, f"{file} has {old!r} {text.count(old)} times"
        (week / file).write_text(text.replace(old, new), encoding="utf-8")

    return put


@pytest.fixture
def typed(capsys: pytest.CaptureFixture[str], monkeypatch: pytest.MonkeyPatch) -> Type:
    """Return a function that types a command here, on the evening before the week, at 80 columns."""
    monkeypatch.setattr(cli, "now", lambda: NOW)
    monkeypatch.setenv("COLUMNS", "80")

    def run(*arguments: str) -> Typed:
        code = cli.run(arguments)
        return Typed(code, *capsys.readouterr())

    return run


def environment(**changes: str) -> dict[str, str]:
    """Return the environment of a process that finds this passplan, installed or not."""
    return os.environ | {"PYTHONPATH": str(Path(passplan.__file__).parents[1]), "COLUMNS": "80"} | changes


def in_shell(command: str, **changes: str) -> Typed:
    """Type a line into a shell, `passplan` being this one."""
    line = command.replace("passplan", f"{sys.executable} -m passplan")
    done = subprocess.run(
        ["bash", "-c", line], env=environment(**changes), capture_output=True, check=False, timeout=120
    )
    return Typed(done.returncode, done.stdout.decode(errors="replace"), done.stderr.decode())
