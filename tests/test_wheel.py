"""The wheel, installed where nothing else is, plans the sample week from another folder.

pip asks the package registry for what the wheel needs, as it does for a newcomer.
"""

import os
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from tests.pages import ROOT

pytestmark = pytest.mark.slow


def bare() -> dict[str, str]:
    """Return an environment that leads to no other Python, no other passplan and no virtual environment."""
    led = {"PYTHONPATH", "PYTHONHOME", "VIRTUAL_ENV"}
    return {name: value for name, value in os.environ.items() if name not in led} | {"COLUMNS": "80"}


def typed(home: Path, *words: str | Path) -> str:
    """Type a command in a folder and return its standard output; it has to end well."""
    done = subprocess.run(words, cwd=home, env=bare(), capture_output=True, check=False, text=True)
    assert done.returncode == 0, f"{words}: {done.returncode}\n{done.stdout}\n{done.stderr}"
    return done.stdout


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return the wheel of this checkout."""
    home = tmp_path_factory.mktemp("wheel")
    typed(home, sys.executable, "-m", "build", "--wheel", "--outdir", home, ROOT)
    (built,) = home.glob("*.whl")
    return built


@pytest.fixture(scope="module")
def scripts(wheel: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return the folder of programs of an environment that holds the wheel and what it asks for."""
    home = tmp_path_factory.mktemp("environment")
    typed(home, sys.executable, "-m", "venv", home / "venv")
    programs = home / "venv" / ("Scripts" if os.name == "nt" else "bin")
    typed(home, programs / "python", "-m", "pip", "install", "--quiet", wheel)
    return programs


def test_the_wheel_holds_the_package_the_sample_and_the_licence_only(wheel: Path) -> None:
    names = zipfile.ZipFile(wheel).namelist()
    meta = f"{wheel.name.rsplit('-', 3)[0]}.dist-info/"
    assert {name.partition("/")[0] + "/" for name in names} == {"passplan/", meta}
    assert f"{meta}licenses/LICENSE" in names
    here = {file.relative_to(ROOT).as_posix() for file in (ROOT / "passplan").rglob("*.py")}
    stations = {f"passplan/sample/stations/{file.name}" for file in (ROOT / "stations").iterdir()}
    assert here | stations <= set(names)


def test_no_tool_of_the_developers_comes_with_it(scripts: Path) -> None:
    listed = typed(scripts, scripts / "python", "-m", "pip", "list", "--format=freeze").lower()
    names = {line.partition("==")[0] for line in listed.splitlines()}
    assert {"passplan", "numpy", "ortools"} <= names
    assert not names & {"pytest", "mypy", "ruff", "hypothesis", "vobject", "build"}


def test_the_sample_week_is_planned_and_shared_from_another_folder(scripts: Path, tmp_path: Path) -> None:
    passplan = scripts / "passplan"
    assert "Usage: passplan" in typed(tmp_path, passplan, "--help")
    typed(tmp_path, passplan, "new", "my-week")
    week = tmp_path / "my-week"
    planned = typed(tmp_path, passplan, "plan", "--workspace", "my-week", "--time-limit", "60")
    assert planned.startswith("Week 2026-W50, edition 1, ")
    assert (week / "plans" / "2026-W50-1.json").is_file()
    typed(tmp_path, passplan, "calendar", "--workspace", "my-week")
    calendars = list((week / "calendars").glob("*.ics"))
    stations = len(list((week / "stations").glob("*.toml")))
    assert len(calendars) > 1 + stations
    assert all(file.read_bytes().endswith(b"END:VCALENDAR\r\n") for file in calendars)
