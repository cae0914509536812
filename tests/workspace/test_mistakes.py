"""What a person reads after a slip in a file, word for word."""

from pathlib import Path

import pytest

from passplan.domain.errors import InputError
from passplan.workspace.read import read_workspace
from tests.workspace.conftest import Spoil, Told

QUA = "stations/qua.toml"
SAT = "satellites/teasel-1.toml"
OPS = "operators.toml"
COM = "commands.toml"

# (file, what it says, what is put there, the one line people read)
SLIPS = {
    "unit in a number": (
        QUA,
        "latitude_deg = 53.31",
        'latitude_deg = "53.31°"',
        "stations/qua.toml: latitude_deg (line 4): '53.31°': expected a number in degrees from -90 to 90",
    ),
    "out of range": (
        QUA,
        "latitude_deg = 53.31",
        "latitude_deg = 153.31",
        "stations/qua.toml: latitude_deg (line 4): '153.31': expected a number in degrees from -90 to 90",
    ),
    "not finite": (
        QUA,
        "altitude_m = 96.0",
        "altitude_m = nan",
        "stations/qua.toml: altitude_m (line 6): 'nan': expected a number in metres from -500 to 9000",
    ),
    "a truth for a number": (
        QUA,
        "altitude_m = 96.0",
        "altitude_m = true",
        "stations/qua.toml: altitude_m (line 6): 'true': expected a number in metres from -500 to 9000",
    ),
    "unknown key": (
        QUA,
        "altitude_m = 96.0",
        "altitude = 96.0",
        'stations/qua.toml: altitude (line 6): unknown key; did you mean "altitude_m"?',
    ),
    "unknown key in a table": (
        SAT,
        "health_fraction = 0.92",
        "health = 0.92",
        'satellites/teasel-1.toml: battery.health (line 40): unknown key; did you mean "health_fraction"?',
    ),
    "missing key": (
        QUA,
        'time_zone = "Europe/Dublin"\n',
        "",
        "stations/qua.toml: time_zone: missing; expected a text in quotes",
    ),
    "missing key in a table": (
        SAT,
        "capacity_wh = 37.4\n",
        "",
        (
            "satellites/teasel-1.toml: battery.capacity_wh (line 38): missing; "
            "expected a number in watt-hours, more than 0 and at most 100000"
        ),
    ),
    "unknown zone": (
        QUA,
        "Europe/Dublin",
        "Europe/Quarry",
        (
            "stations/qua.toml: time_zone (line 7): 'Europe/Quarry': "
            'no such time zone; use an IANA name such as "Europe/Dublin"'
        ),
    ),
    "a zone that leads out of its folder": (
        QUA,
        "Europe/Dublin",
        "../../etc/passwd",
        (
            "stations/qua.toml: time_zone (line 7): '../../etc/passwd': "
            'no such time zone; use an IANA name such as "Europe/Dublin"'
        ),
    ),
    "small code": (
        QUA,
        'code = "QUA"',
        'code = "Q/A"',
        (
            "stations/qua.toml: code (line 3): 'Q/A': "
            "2 to 8 capital letters and digits, a letter first, such as QUA"
        ),
    ),
    "union": (
        COM,
        "worth = 40.0",
        'worth = "huge"',
        (
            "commands.toml: command[24].worth (line 199): 'huge': "
            'expected "low", "normal", "high" or a number from 0 to 1000000'
        ),
    ),
    "set words": (
        SAT,
        'modulation = "gmsk"',
        'modulation = "fm"',
        (
            "satellites/teasel-1.toml: radio.modulation (line 10): 'fm': "
            'expected "fsk-noncoherent", "fsk-coherent", "dpsk", "bpsk" or "gmsk"'
        ),
    ),
    "attitude": (
        SAT,
        'attitude = "sun-pointing"',
        "attitude = 1.5",
        (
            "satellites/teasel-1.toml: power.attitude (line 32): '1.5': "
            'expected "sun-pointing", "tumbling" or a number from 0 to 1'
        ),
    ),
    "text for a moment": (
        COM,
        "deadline_utc = 2026-12-08T12:00:00Z",
        'deadline_utc = "next Tuesday"',
        (
            "commands.toml: command[1].deadline_utc (line 21): 'next Tuesday': "
            "expected a moment in UTC such as 2026-12-07T05:12:00Z, no quotes"
        ),
    ),
    "moment without a zone": (
        COM,
        "deadline_utc = 2026-12-08T12:00:00Z",
        "deadline_utc = 2026-12-08T12:00:00",
        (
            "commands.toml: command[1].deadline_utc (line 21): '2026-12-08 12:00:00': "
            "needs a zone: write it in UTC with a Z, 2026-12-07T05:12:00Z"
        ),
    ),
    "moment long ago": (
        COM,
        "deadline_utc = 2026-12-08T12:00:00Z",
        "deadline_utc = 1026-12-08T12:00:00Z",
        "commands.toml: command[1].deadline_utc (line 21): '1026-12-08T12:00:00Z': a year from 1990 to 2200",
    ),
    "a date for a text": (
        COM,
        'name = "greeting"',
        "name = 2026-12-07",
        "commands.toml: command[24].name (line 196): '2026-12-07': expected a text in quotes",
    ),
    "local hours with a zone": (
        OPS,
        "begin = 17:30:00, end = 23:00:00",
        'begin = "17:30:00Z", end = 23:00:00',
        "operators.toml: operator[0].hours[0].begin (line 10): '17:30:00+00:00': a local time without a zone",
    ),
    "day as a moment": (
        OPS,
        "first_day = 2026-12-10,",
        "first_day = 2026-12-10T00:00:00Z,",
        (
            "operators.toml: operator[4].away[0].first_day (line 53): '2026-12-10T00:00:00Z': "
            "expected a day such as 2026-12-07, no quotes"
        ),
    ),
    "one text for a list": (
        OPS,
        'stations = ["SKE"]\nmay_control = true\ntime_zone = "Europe/Oslo"\nhours = [{',
        'stations = "SKE"\nmay_control = true\ntime_zone = "Europe/Oslo"\nhours = [{',
        (
            "operators.toml: operator[4].stations (line 49): 'SKE': "
            "expected a list in square brackets, each a text in quotes"
        ),
    ),
    "half a pair": (
        QUA,
        "[40, 17]",
        "[40]",
        "stations/qua.toml: mask[2][1] (line 8): missing; expected a number from -5 to 90",
    ),
    "mask out of order": (
        QUA,
        "[40, 17]",
        "[30, 17]",
        "stations/qua.toml: mask[2] (line 8): '30.0': azimuths must rise; the pair before has 35",
    ),
    "two antennas": (
        "stations/lat.toml",
        "[radio]",
        "[rotator]\nflip = true\n\n[radio]",
        "stations/lat.toml: rotator (line 15): give either a [rotator] or a [fixed_antenna], one of the two",
    ),
    "floors upside down": (
        SAT,
        "transmit_floor_fraction = 0.70",
        "transmit_floor_fraction = 0.50",
        (
            "satellites/teasel-1.toml: battery.transmit_floor_fraction (line 42): '0.5': "
            "must not be under floor_fraction"
        ),
    ),
    "a table written once": (
        OPS,
        '[[operator]]\nhandle = "QX3AB"',
        '[operator]\nhandle = "QX3AB"',
        "operators.toml: line 19, column 11: '[[operator]]': not TOML: cannot overwrite a value",
    ),
    "unknown table": (
        COM,
        '[[command]]\nname = "greeting"',
        '[[commands]]\nname = "greeting"',
        'commands.toml: commands (line 195): unknown table; did you mean "command"?',
    ),
    "not in this file": (
        "mission.toml",
        "[gives]",
        "[[stations]]\n[gives]",
        (
            "mission.toml: stations (line 22): "
            "not in this file; see satellites/, stations/, operators.toml and commands.toml"
        ),
    ),
    "missing quotes": (
        QUA,
        'name = "Quarry Hill"',
        "name = Quarry Hill",
        (
            "stations/qua.toml: line 2, column 8: 'name = Quarry Hill': "
            "not TOML: invalid value; a text needs quotes, a number a point and no unit"
        ),
    ),
    "said twice": (
        QUA,
        "altitude_m = 96.0",
        "altitude_m = 96.0\naltitude_m = 97.0",
        "stations/qua.toml: line 7, column 18: 'altitude_m = 97.0': not TOML: cannot overwrite a value",
    ),
    "end of the file": (
        "stations/tus.toml",
        "antenna_noise_k = 200.0\n",
        'antenna_noise_k = """',
        'stations/tus.toml: line 18: \'antenna_noise_k = """\': not TOML: unterminated string',
    ),
    "not a week": (
        "mission.toml",
        '"2026-W50"',
        '"2026-W54"',
        (
            "mission.toml: pinned_week (line 5): '2026-W54': "
            "expected an ISO week such as 2026-W50 (a year has 52 or 53)"
        ),
    ),
    "a week without end": (
        "mission.toml",
        '"2026-W50"',
        '"9999-W52"',
        "mission.toml: pinned_week (line 5): '9999-W52': a week from 1990-W01 to 2199-W52",
    ),
}


@pytest.mark.parametrize("slip", SLIPS)
def test_a_slip_is_told_in_one_plain_line(spoil: Spoil, told: Told, slip: str) -> None:
    file, old, new, line = SLIPS[slip]
    spoil(file, old, new)
    assert told() == [line]


NASTY = {
    "newline": "Quarry\\nHill",
    "terminal code": "\\u001b[31mQuarry",
    "bell": "Quarry\\u0007",
    "right to left": "Quarry \\u202Ellih",
    "line separator": "Quarry\\u2028Hill",
}


@pytest.mark.parametrize("name", NASTY)
@pytest.mark.parametrize("field", ["name", "reason", "partition"])
def test_a_text_that_would_upset_a_terminal_is_refused(
    spoil: Spoil, told: Told, name: str, field: str
) -> None:
    match field:
        case "name":
            spoil(QUA, '"Quarry Hill"', f'"{NASTY[name]}"')
        case "reason":
            spoil("stations/ske.toml", '"new coaxial cable"', f'"{NASTY[name]}"')
        case "partition":
            spoil(SAT, 'name = "log"', f'name = "{NASTY[name]}"')
    lines = told()
    assert any("one line of printable characters, no control characters" in line for line in lines)
    assert all(line.isprintable() for line in lines)


@pytest.mark.parametrize(
    "name", ["Quarry, Hill; North", 'Quarry \\"Q\\" Hill', "Quarry/Hill", "..\\\\Hill", "丘 Ö ñ", "*_[x](y)"]
)
def test_commas_quotes_slashes_and_other_scripts_are_fine_in_a_name(
    workspace: Path, spoil: Spoil, name: str
) -> None:
    spoil(QUA, '"Quarry Hill"', f'"{name}"')
    written = name.replace('\\"', '"').replace("\\\\", "\\")
    assert read_workspace(workspace).station("QUA").name == written


def test_a_nasty_key_is_told_and_cannot_reach_the_terminal(spoil: Spoil, told: Told) -> None:
    spoil(QUA, "altitude_m = 96.0", '"alt\\u001b[2Jitude" = 96.0')
    (line,) = told()
    assert line.isprintable()
    assert "the key itself: one line of printable characters" in line


def test_all_mistakes_of_all_files_come_at_once_in_order(spoil: Spoil, told: Told) -> None:
    """One run tells everything: ranges, hidden faults between fields, references."""
    spoil("mission.toml", "acquire_s = 45.0", 'acquire_s = "45"')
    spoil(SAT, "bus_load_w = 2.3", "bus_load_w = -2.3")
    spoil(QUA, "latitude_deg = 53.31", "latitude_deg = 99.0")
    spoil(QUA, "Europe/Dublin", "Europe/Quarry")
    spoil(QUA, "[40, 17]", "[30, 17]")
    spoil(OPS, 'stations = ["CAR"]', 'stations = ["CAT"]')
    spoil(OPS, "rest_h = 10.0", "rest_h = -1.0")
    spoil(COM, 'command = "load-114b"', 'command = "load-114x"')
    assert [line.partition(": ")[0] + ": " + line.split(": ")[1] for line in told()] == [
        "mission.toml: planning.acquire_s (line 10)",
        "satellites/teasel-1.toml: power.bus_load_w (line 34)",
        "stations/qua.toml: latitude_deg (line 4)",
        "stations/qua.toml: time_zone (line 7)",
        "stations/qua.toml: mask[2] (line 8)",
        "operators.toml: operator[9].stations[0] (line 94)",
        "operators.toml: operator[9].rest_h (line 100)",
        "commands.toml: command[4].after[0].command (line 45)",
    ]


def test_what_is_hidden_is_not_invented(spoil: Spoil, told: Told) -> None:
    """A mended value must not bring forth a fault that the person did not write."""
    spoil("stations/ske.toml", "begin_utc = 2026-12-08T06:00:00Z", "begin_utc = 6")
    spoil("stations/ske.toml", "[rotator]", "rotator = 3\n[unknown]")
    spoil(SAT, "floor_fraction = 0.60\ntransmit", "floor_fraction = 6.0\ntransmit")
    keys = [line.split(": ")[1].partition(" (")[0] for line in told()]
    assert keys == ["battery.floor_fraction", "rotator", "unknown", "outages[0].begin_utc"]


def test_the_reader_of_an_empty_file_tells_what_is_missing(workspace: Path, told: Told) -> None:
    (workspace / QUA).write_text("", encoding="utf-8")
    lines = told()
    missing = [line.split(": ")[1] for line in lines if "qua.toml" in line]
    assert missing == ["name", "code", "latitude_deg", "longitude_deg", "time_zone", "rotator"]


def test_the_message_of_the_error_is_all_of_its_lines(workspace: Path, spoil: Spoil) -> None:
    spoil(QUA, "latitude_deg = 53.31", "latitude_deg = 99.0")
    spoil(QUA, "altitude_m = 96.0", "altitude_m = 99000.0")
    with pytest.raises(InputError) as caught:
        read_workspace(workspace)
    assert str(caught.value).splitlines() == [str(mistake) for mistake in caught.value.mistakes]
