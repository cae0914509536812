"""Legal and surely unintended: told, and no reason to stop."""

from pathlib import Path

import pytest

from passplan.workspace.doubts import warnings
from passplan.workspace.read import read_workspace
from tests.workspace.conftest import Spoil

SAT = "satellites/teasel-1.toml"
OPS = "operators.toml"
COM = "commands.toml"

# (file, what it says, what is put there, the sentences people read)
DOUBTS = {
    "contact shorter than its ends": (
        "mission.toml",
        "least_contact_s = 120.0",
        "least_contact_s = 50.0",
        [
            (
                "least_contact_s (50 s) is shorter than acquire_s and close_s together (55 s): "
                "the shortest contacts would carry nothing"
            )
        ],
    ),
    "refused before warned": (
        "mission.toml",
        "[gives]",
        "refuse_age_days = 3.0\n[gives]",
        ["refuse_age_days is under warn_age_days, so nobody is warned before elements are refused"],
    ),
    "starving": (
        SAT,
        "array_w = 4.3",
        "array_w = 2.5",
        [
            (
                "Teasel-1: 2.2 W in full sunlight do not carry the 2.4 W that always run, "
                "so the battery only falls"
            )
        ],
    ),
    "dark transmitter": (
        SAT,
        "discharge_limit_w = 14.0",
        "discharge_limit_w = 9.0",
        ["Teasel-1: no contact in shadow, as transmitting takes more than discharge_limit_w"],
    ),
    "opposite hands": (
        "stations/car.toml",
        '"right-circular"',
        '"left-circular"',
        ["CAR: opposite polarisation to Teasel-1, which costs 20 dB"],
    ),
    "no hours": (
        OPS,
        (
            "hours = [{ begin = 16:30:00, end = 22:30:00 }, "
            '{ days = ["sat", "sun"], begin = 07:00:00, end = 12:00:00 }]\n'
        ),
        "",
        [
            "LAT: those who may control it have no hours, so it gets no contact",
            "QL5EF: no hours given, so they take no duty",
        ],
    ),
    "away": (
        OPS,
        "first_day = 2026-12-10, last_day = 2026-12-11",
        "first_day = 2026-12-01, last_day = 2026-12-31",
        ["QY4UM: away all through 2026-W50"],
    ),
    "closed": (
        "stations/car.toml",
        "begin_utc = 2026-12-12T12:00:00Z\nend_utc = 2026-12-13T03:00:00Z",
        "begin_utc = 2026-12-01T12:00:00Z\nend_utc = 2026-12-31T03:00:00Z",
        ["CAR: closed all through 2026-W50"],
    ),
    "one person for two": (
        COM,
        'stations = ["QUA", "SKE", "JUN"]',
        'stations = ["CAR"]',
        ["load-114-start: wants two people, and no station it may go from has two operators, one licensed"],
    ),
    "deadline before what it waits for": (
        COM,
        "earliest_utc = 2026-12-09T14:30:00Z\ndeadline_utc = 2026-12-12T00:00:00Z",
        "deadline_utc = 2026-12-07T05:00:00Z",
        ["spin-trim-2: its deadline comes before spin-trim-1, which it waits for, may go up"],
    ),
    "last week's command": (
        COM,
        "deadline_utc = 2026-12-08T12:00:00Z",
        "deadline_utc = 2026-12-02T12:00:00Z",
        ["heater-limits: its deadline is before 2026-W50; take it out once it is done"],
    ),
    "next month's command": (
        COM,
        "earliest_utc = 2026-12-12T06:00:00Z\ndeadline_utc = 2026-12-12T18:00:00Z",
        "earliest_utc = 2027-12-12T06:00:00Z",
        ["greeting: its earliest moment is after 2026-W50"],
    ),
    "a short window": (
        COM,
        "begin_utc = 2026-12-07T04:00:00Z, end_utc = 2026-12-07T10:00:00Z",
        "begin_utc = 2026-12-07T04:00:00Z, end_utc = 2026-12-07T04:10:00Z",
        ["dust-1: windows[0] is shorter than length_s, so it is never used"],
    ),
    "another week's session": (
        COM,
        "begin_utc = 2026-12-11T00:00:00Z, end_utc = 2026-12-12T00:00:00Z",
        "begin_utc = 2026-11-11T00:00:00Z, end_utc = 2026-11-12T00:00:00Z",
        ["moonrise: none of its windows lies in 2026-W50"],
    ),
    "too much for the store": (
        COM,
        'makes = { images = 310_000 }\nworth = "low"',
        'makes = { images = 9_000_000 }\nworth = "low"',
        ["moonrise: makes more images (9e+06 byte) than its partition holds"],
    ),
    "old telemetry": (
        SAT,
        "at_utc = 2026-12-06T19:42:00Z",
        "at_utc = 2026-11-06T19:42:00Z",
        ["Teasel-1: the last telemetry is 30 days older than 2026-W50"],
    ),
}


@pytest.mark.parametrize("doubt", DOUBTS)
def test_a_doubt_is_told_and_the_workspace_still_reads(workspace: Path, spoil: Spoil, doubt: str) -> None:
    file, old, new, sentences = DOUBTS[doubt]
    spoil(file, old, new)
    assert warnings(read_workspace(workspace)) == sentences


def test_a_sound_workspace_raises_no_doubt(workspace: Path) -> None:
    assert warnings(read_workspace(workspace), workspace) == []


def test_without_a_week_nothing_is_said_about_dates(workspace: Path, spoil: Spoil) -> None:
    spoil("mission.toml", 'pinned_week = "2026-W50"', "")
    spoil(COM, "deadline_utc = 2026-12-08T12:00:00Z", "deadline_utc = 2026-12-02T12:00:00Z")
    mission = read_workspace(workspace)
    assert warnings(mission) == []
    assert warnings(mission, week="2026-W50") == [
        "heater-limits: its deadline is before 2026-W50; take it out once it is done"
    ]


def test_files_that_nobody_reads_are_named(workspace: Path) -> None:
    (workspace / "operator.toml").write_text("", encoding="utf-8")
    (workspace / "stations/qua.toml.txt").write_text("", encoding="utf-8")
    (workspace / COM).unlink()
    assert warnings(read_workspace(workspace), workspace) == [
        "operator.toml: not read; the files here are mission.toml, operators.toml, commands.toml",
        "stations/qua.toml.txt: not read; its name must end in .toml and not begin with a dot",
        "commands.toml: not there, so nothing is sent up",
    ]
