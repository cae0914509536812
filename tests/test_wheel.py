"""The wheel, alone in an environment and far from the checkout, does what README.md shows."""

import os
import shutil
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

from passplan.workspace.sample import sample_files
from tests.pages import README, ROOT, table, ticked

EXAMPLES = [ticked(row[2])[0] for row in table(README, "command")]

pytestmark = pytest.mark.slow


def typed(line: str, folder: Path, programs: Path) -> subprocess.CompletedProcess[str]:
    """Return what a line typed in a folder did, with the programs of one environment first."""
    plain = {
        name: text for name, text in os.environ.items() if not name.startswith(("PYTHON", "VIRTUAL_ENV"))
    }
    found = plain | {"PATH": f"{programs}{os.pathsep}{plain['PATH']}", "COLUMNS": "80"}
    return subprocess.run(
        ["bash", "-c", line], cwd=folder, env=found, capture_output=True, text=True, check=False, timeout=900
    )


@pytest.fixture(scope="module")
def wheel(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("wheel")
    line = f"{sys.executable} -m build --wheel --outdir {folder} {ROOT}"
    done = typed(line, folder, Path(sys.executable).parent)
    assert done.returncode == 0, done.stdout + done.stderr
    (built,) = folder.glob("passplan-*-py3-none-any.whl")
    return built


@pytest.fixture(scope="module")
def programs(wheel: Path, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """Return the programs of an environment that holds the wheel and what it asks for."""
    home = tmp_path_factory.mktemp("alone")
    line = f"{sys.executable} -m venv alone && alone/bin/python -m pip install --quiet {wheel}"
    done = typed(line, home, Path(sys.executable).parent)
    assert done.returncode == 0, done.stdout + done.stderr
    return home / "alone" / "bin"


def test_the_sample_travels_in_the_wheel(wheel: Path) -> None:
    with zipfile.ZipFile(wheel) as archive:
        names = archive.namelist()
        packed = {name: archive.read(name) for name in names if name.startswith("passplan/sample/")}
    homes = {"stations": "stations", "elements": "tle_samples"}
    for name, file in sample_files().items():
        folder, _, rest = name.partition("/")
        path = f"{homes[folder]}/{rest}" if folder in homes else name
        assert packed[f"passplan/sample/{path}"] == file.read_bytes(), name
    sets = {name for name in packed if name.startswith("passplan/sample/tle_samples/")}
    assert len(sets) == len(list((ROOT / "tle_samples").iterdir()))
    assert not [name for name in names if name.startswith(("tests/", "stations/", "tle_samples/"))]


def test_nothing_for_developers_is_installed(programs: Path, tmp_path: Path) -> None:
    done = typed("pip list --format freeze", tmp_path, programs)
    names = {line.partition("==")[0].casefold() for line in done.stdout.splitlines()}
    assert "passplan" in names
    assert not names & {
        "pytest",
        "hypothesis",
        "ruff",
        "mypy",
        "jsonschema",
        "recurring-ical-events",
        "vobject",
    }


def test_the_examples_of_the_readme_in_their_order(programs: Path, tmp_path: Path) -> None:
    """From help to calendars, in a folder that knows nothing of the checkout."""
    assert typed("passplan --help", tmp_path, programs).returncode == 0
    (tmp_path / "my-week").mkdir()
    shutil.copyfile(ROOT / "tle_samples" / "teasel-1_2026-12-08.tle", tmp_path / "my-week" / "newest.tle")
    shown = {}
    for line in EXAMPLES:
        folder = tmp_path if line.startswith("passplan new") else tmp_path / "my-week"
        done = typed(line, folder, programs)
        assert done.returncode == 0, f"{line}\n{done.stdout}{done.stderr}"
        shown[line.split()[1]] = done.stdout
    week = shown["plan"].splitlines()
    assert week[0].startswith("Week 2026-W50, edition 1, Teasel-1: ")
    assert "verified" in week[0]
    (stored,) = (tmp_path / "my-week" / "plans").glob("2026-W50-*.json")
    assert stored.stat().st_size > 10_000
    assert "Tue 8 Dec" in shown["show"]
    calendars = {path.name for path in (tmp_path / "my-week" / "shared").iterdir()}
    assert {"mission-teasel.ics", "station-qua.ics", "operator-qx3ab.ics"} <= calendars
