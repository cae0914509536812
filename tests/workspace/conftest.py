"""A fresh copy of a workspace that never changes, and a way to spoil it.

`frozen_week/` was once the sample; the sample may be tuned without touching these tests.
"""

import shutil
from collections.abc import Callable
from pathlib import Path

import pytest

from passplan.domain.errors import InputError
from passplan.workspace.read import read_workspace

Spoil = Callable[[str, str, str], None]
Told = Callable[[], list[str]]


@pytest.fixture
def workspace(tmp_path: Path) -> Path:
    folder = tmp_path / "week"
    shutil.copytree(Path(__file__).parent / "frozen_week", folder)
    return folder


@pytest.fixture
def spoil(workspace: Path) -> Spoil:
    """Return a function that puts `new` for the one place where a file says `old`."""

    def put(file: str, old: str, new: str) -> None:
        text = (workspace / file).read_text(encoding="utf-8")
        assert text.count(old) == 1, f"{file} has {old!r} {text.count(old)} times"
        (workspace / file).write_text(text.replace(old, new), encoding="utf-8")

    return put


@pytest.fixture
def told(workspace: Path) -> Told:
    """Return a function that reads the workspace and gives the mistakes as people see them."""

    def read() -> list[str]:
        with pytest.raises(InputError) as caught:
            read_workspace(workspace)
        assert caught.value.exit_code == 2
        return [str(mistake) for mistake in caught.value.mistakes]

    return read
