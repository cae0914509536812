"""Mistakes that only show between files, word for word."""

from pathlib import Path

import pytest

from passplan.workspace.read import read_workspace
from tests.workspace.conftest import Spoil, Told

QUA = "stations/qua.toml"
OPS = "operators.toml"
COM = "commands.toml"
NOBODY = (
    "it transmits and nobody may control it; give one of its operators may_control = true, "
    "or write transmits = false under [radio]"
)


def test_an_unknown_station_of_an_operator(spoil: Spoil, told: Told) -> None:
    spoil(OPS, 'stations = ["QUA", "OWL"]', 'stations = ["QUA", "OWK"]')
    line = "operators.toml: operator[2].stations[1] (line 29): 'OWK': no such station; did you mean \"OWL\"?"
    assert told() == [line]


def test_an_unknown_station_of_a_command(spoil: Spoil, told: Told) -> None:
    spoil(COM, '["QUA", "SKE", "JUN"]', '["QUA", "SKE", "ZZZZ"]')
    assert told() == [
        (
            "commands.toml: command[5].stations[2] (line 56): 'ZZZZ': "
            "no such station; there are: CAR, JUN, LAT, OWL, PLM, QUA, SKE, TUS"
        )
    ]


def test_a_command_cannot_go_from_a_station_that_only_listens(spoil: Spoil, told: Told) -> None:
    spoil(COM, '["QUA", "SKE", "JUN"]', '["QUA", "OWL"]')
    assert told() == [
        "commands.toml: command[5].stations[1] (line 56): 'OWL': only listens; name stations that transmit"
    ]


@pytest.mark.parametrize(("table", "key"), [("command", "command[24]"), ("session", "session[9]")])
def test_an_unknown_satellite(spoil: Spoil, told: Told, table: str, key: str) -> None:
    name = {"command": "greeting", "session": "moonrise"}[table]
    spoil(COM, f'name = "{name}"\nsatellite = "Teasel-1"', f'name = "{name}"\nsatellite = "Teasel-2"')
    (line,) = told()
    assert line.startswith(f"commands.toml: {key}.satellite (line ")
    assert line.endswith("'Teasel-2': no such satellite; did you mean \"Teasel-1\"?")


def test_an_unknown_kind_of_data(spoil: Spoil, told: Told) -> None:
    spoil(COM, 'makes = { images = 310_000 }\nworth = "low"', 'makes = { image = 310_000 }\nworth = "low"')
    (line,) = told()
    assert line.endswith("'image': no such kind of data; did you mean \"images\"?")


def test_an_unknown_command_in_an_order(spoil: Spoil, told: Told) -> None:
    spoil(COM, 'command = "load-114b"', 'command = "load-114c"')
    (line,) = told()
    assert line.startswith(
        "commands.toml: command[4].after[0].command (line 45): 'load-114c': no such command"
    )


def test_an_order_in_a_circle(spoil: Spoil, told: Told) -> None:
    spoil(
        COM, 'length_byte = 4200\nworth = "high"', 'length_byte = 4200\nafter = [{ command = "dust-zero" }]'
    )
    assert told() == [
        (
            "commands.toml: command[11].after (line 99): goes round in a circle: "
            '"dust-table" after "dust-zero" after "dust-gain" after "dust-table"; take one link out'
        )
    ]


def test_a_command_after_itself(spoil: Spoil, told: Told) -> None:
    spoil(COM, 'command = "sun-sensor"', 'command = "magnetometer"')
    (line,) = told()
    assert line.endswith('goes round in a circle: "magnetometer" after "magnetometer"; take one link out')


def test_a_long_way_is_no_circle_and_two_circles_are_two_mistakes(workspace: Path, told: Told) -> None:
    rows = [f'[[command]]\nname = "c{n}"\nsatellite = "Teasel-1"\n' for n in range(600)]
    chain = [row + (f'after = [{{ command = "c{n - 1}" }}]\n' if n else "") for n, row in enumerate(rows)]
    (workspace / COM).write_text("".join(chain), encoding="utf-8")
    assert len(read_workspace(workspace).commands) == 600
    pairs = [row + f'after = [{{ command = "c{n ^ 1}" }}]\n' for n, row in enumerate(rows[:4])]
    (workspace / COM).write_text("".join(pairs), encoding="utf-8")
    assert [line.rpartition("circle: ")[2] for line in told()] == [
        '"c0" after "c1" after "c0"; take one link out',
        '"c2" after "c3" after "c2"; take one link out',
    ]


def test_nobody_may_control_a_transmitting_station(spoil: Spoil, told: Told) -> None:
    spoil(OPS, 'stations = ["LAT"]\nmay_control = true', 'stations = ["LAT"]\nmay_control = false')
    assert told() == [f"stations/lat.toml: code (line 3): 'LAT': {NOBODY}"]


def test_a_listening_station_needs_nobody(workspace: Path, spoil: Spoil) -> None:
    spoil(OPS, 'stations = ["LAT"]\nmay_control = true', 'stations = ["LAT"]\nmay_control = false')
    spoil("stations/lat.toml", "[radio]", "[radio]\ntransmits = false")
    spoil(COM, '["TUS", "CAR", "LAT"]', '["TUS", "CAR"]')
    assert not read_workspace(workspace).station("LAT").radio.transmits


def test_without_operators_every_transmitting_station_is_named(workspace: Path, told: Told) -> None:
    (workspace / OPS).unlink()
    assert [line.split("'")[1] for line in told()] == ["CAR", "JUN", "LAT", "PLM", "QUA", "SKE", "TUS"]


def test_an_operators_file_that_cannot_be_read_accuses_no_station(spoil: Spoil, told: Told) -> None:
    spoil(OPS, 'handle = "QT5Z"', "handle = QT5Z")
    (line,) = told()
    assert line.startswith("operators.toml: line 103, column 10: 'handle = QT5Z': not TOML: invalid value")


@pytest.mark.parametrize(
    ("mask", "told_of_it"),
    [
        ("[[0, 5]]", "one pair says nothing of the other directions; give more, or none for a flat horizon"),
        ("[[10, 5], [100, 5]]", "nothing between 100 and 10 deg; leave no gap of more than 180 deg"),
        ("[[0, 5], [200, 5]]", "nothing between 0 and 200 deg; leave no gap of more than 180 deg"),
        (
            "[[0, 5], [180, 9], [360, 6]]",
            "0 and 360 are the same direction with two elevations; leave one out",
        ),
    ],
)
def test_a_mask_with_a_gap(workspace: Path, told: Told, mask: str, told_of_it: str) -> None:
    text = (workspace / "stations/jun.toml").read_text(encoding="utf-8").splitlines()
    spoilt = [f"mask = {mask}" if row.startswith("mask = ") else row for row in text]
    (workspace / "stations/jun.toml").write_text("\n".join(spoilt), encoding="utf-8")
    (line,) = told()
    assert line.startswith("stations/jun.toml: mask")
    assert line.endswith(": " + told_of_it)


@pytest.mark.parametrize(
    "mask", ["[]", "[[0, 5], [180, 6]]", "[[90, -3], [270, -3]]", "[[0, 5], [180, 9], [360, 5]]"]
)
def test_a_mask_without_a_gap(workspace: Path, mask: str) -> None:
    text = (workspace / "stations/jun.toml").read_text(encoding="utf-8").splitlines()
    sound = [f"mask = {mask}" if row.startswith("mask = ") else row for row in text]
    (workspace / "stations/jun.toml").write_text("\n".join(sound), encoding="utf-8")
    assert read_workspace(workspace).station("JUN").mask is not None


def test_names_that_are_taken(spoil: Spoil, workspace: Path, told: Told) -> None:
    """Stations, satellites and operators name files: a difference in case or signs is none."""
    (workspace / "stations/zzz.toml").write_bytes((workspace / QUA).read_bytes())
    sat = (workspace / "satellites/teasel-1.toml").read_text(encoding="utf-8")
    (workspace / "satellites/z.toml").write_text(sat.replace('"Teasel-1"', '"TEASEL 1"'), encoding="utf-8")
    spoil(OPS, 'handle = "QX9LO"', 'handle = "qx3ab"')
    spoil(COM, 'name = "beacon-slow"', 'name = "beacon-text"')
    spoil(COM, 'name = "dust-2"', 'name = "dust-1"')
    spoil(COM, 'name = "camera-list"', 'name = "clock 2026-12-07"')
    spoil(COM, 'command = "camera-list"', 'command = "clock"')
    lines = told()
    assert [line.split(": ", 2)[1:] for line in lines] == [
        [
            "name (line 3)",
            "'TEASEL 1': taken as \"Teasel-1\", too much alike; first in satellites/teasel-1.toml, line 3",
        ],
        ["number (line 4)", "'305217': taken; first in satellites/teasel-1.toml, line 4"],
        ["code (line 3)", "'QUA': taken; first in stations/qua.toml, line 3"],
        [
            "operator[2].handle (line 28)",
            "'qx3ab': taken as \"QX3AB\", too much alike; first in operators.toml, line 6",
        ],
        ["command[10].name (line 89)", "'beacon-text': taken; first in commands.toml, line 83"],
        ["command[16].name (line 134)", "'clock 2026-12-07': taken by \"clock\" of that day"],
        ["session[1].name (line 218)", "'dust-1': taken; first in commands.toml, line 206"],
    ]


def test_commands_that_differ_in_a_sign_are_two(workspace: Path, spoil: Spoil) -> None:
    spoil(COM, 'name = "beacon-slow"', 'name = "beacon+text"')
    assert len(read_workspace(workspace).commands) == 25


def test_a_session_longer_than_its_windows(spoil: Spoil, told: Told) -> None:
    spoil(
        COM,
        'length_s = 1500.0\ndraw_w = 2.6\nmakes = { dust = 420_000 }\nworth = "low"',
        'length_s = 50000.0\ndraw_w = 2.6\nmakes = { dust = 420_000 }\nworth = "low"',
    )
    (line,) = told()
    assert line.endswith("'50000.0': no window is as long as length_s; the longest has 43200 s")


def test_a_command_longer_than_its_window(spoil: Spoil, told: Told) -> None:
    spoil(COM, "deadline_utc = 2026-12-09T06:00:00Z", "deadline_utc = 2026-12-07T06:00:15Z")
    (line,) = told()
    assert line.endswith("'20.0': longer than the 15 s between earliest_utc and deadline_utc")


def test_a_deadline_before_the_earliest_moment(spoil: Spoil, told: Told) -> None:
    spoil(COM, "deadline_utc = 2026-12-09T06:00:00Z", "deadline_utc = 2026-12-06T06:00:15Z")
    (line,) = told()
    assert line.endswith("must be after earliest_utc")


def test_pinned_elements(workspace: Path, spoil: Spoil, told: Told) -> None:
    old = '# pinned_elements = { "Teasel-1" = "teasel-1_2026-12-05.tle" }'
    pinned = 'pinned_elements = { "Teasel-1" = "{}", "Teasel-9" = "../secrets.tle" }'
    spoil("mission.toml", old, pinned.replace("{}", "lost.tle"))
    assert [line.split(": ", 2)[2] for line in told()] == [
        "'lost.tle': no such file in elements/",
        "'Teasel-9': no such satellite; did you mean \"Teasel-1\"?",
        "'../secrets.tle': the bare name of a file in elements/",
    ]
    spoil("mission.toml", pinned.replace("{}", "lost.tle"), old.removeprefix("# "))
    assert read_workspace(workspace).pinned_elements == {"Teasel-1": "teasel-1_2026-12-05.tle"}
