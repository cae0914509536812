"""What each command may import: a listing does not pay for the solver."""

import subprocess
import sys
from pathlib import Path

import pytest

from tests.cli.conftest import environment

HEAVY = {"icalendar", "numpy", "ortools", "pydantic", "recurring_ical_events", "rich", "sgp4", "skyfield"}
MAY = {
    "--help": set(),
    "plan --help": {"numpy", "ortools", "pydantic", "rich", "sgp4", "skyfield"},
    "check": {"pydantic", "rich"},
    "schema": {"pydantic", "rich"},
    "new other": {"pydantic", "rich"},
    "elements": {"pydantic", "rich"},
    "elements add elements": {"pydantic", "rich"},
    "passes": {"numpy", "pydantic", "rich", "sgp4"},
    "show": {"pydantic", "rich"},
    "calendar": {"icalendar", "numpy", "pydantic", "rich"},
    "plan": {"numpy", "ortools", "pydantic", "rich", "sgp4", "skyfield"},
}
LISTING = """
import sys
from passplan import cli
code = cli.run(sys.argv[1:])
sys.stdout = sys.__stdout__
print("imported:", *sorted({name.partition(".")[0] for name in sys.modules}))
sys.exit(code)
"""


@pytest.mark.parametrize("command", MAY)
def test_a_command_imports_no_more_than_it_needs(week: Path, command: str) -> None:
    del week
    done = subprocess.run(
        [sys.executable, "-c", LISTING, *command.split()],
        env=environment(),
        capture_output=True,
        text=True,
        check=False,
        timeout=120,
    )
    _, _, names = done.stdout.rpartition("imported: ")
    assert HEAVY & set(names.split()) <= MAY[command]


def test_every_command_shows_an_example_of_itself() -> None:
    for command in (
        "new",
        "check",
        "schema",
        "elements",
        "elements add",
        "passes",
        "plan",
        "show",
        "calendar",
    ):
        done = subprocess.run(
            [sys.executable, "-m", "passplan", *command.split(), "--help"],
            env=environment(),
            capture_output=True,
            text=True,
            check=True,
            timeout=60,
        )
        assert f"Example: passplan {command}" in done.stdout
