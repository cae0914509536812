"""The published verification run of SGP4, flown from element sets as this room reads them.

Files and tolerance of the sgp4 package 2.27 (its tests.py), after AIAA 2006-6753:
SGP4-VER.TLE holds the element sets, tcppver.out the states in km and km/s, TEME, WGS 72.
"""

import math
from importlib import resources

import pytest
from sgp4.api import WGS72, Satrec

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError
from passplan.domain.moments import julian
from passplan.workspace.element_files import read_elements, scan_elements
from tests.workspace_elements.forms import summed

TOLERANCE = 2e-7
DAY_ZERO_JULIAN = 2433281.5  # 1949-12-31, what sgp4init counts days from
FILE = "SGP4-VER.TLE"


def verification_text() -> str:
    return resources.files("sgp4").joinpath("SGP4-VER.TLE").read_text()


def mended(text: str) -> str:
    """Return the text with every checksum right; three of its sets have wrong ones on purpose."""
    return "\n".join(summed(line) if line.startswith(("1 ", "2 ")) else line for line in text.splitlines())


def satellite(one: ElementSet) -> Satrec:
    """Return the set as the sgp4 package takes it (radians, minutes, days since 1949)."""
    rev_day = 2.0 * math.pi / 1440.0
    record = Satrec()
    record.sgp4init(
        WGS72,
        "i",
        one.number,
        sum(julian(one.epoch))
        - DAY_ZERO_JULIAN,  # rounded to 40 microseconds, as the published program rounds it
        one.bstar_per_earth_radius,
        one.mean_motion_dot_rev_day2 * rev_day / 1440.0,
        one.mean_motion_ddot_rev_day3 * rev_day / 1440.0**2,
        one.eccentricity,
        math.radians(one.argument_of_perigee_deg),
        math.radians(one.inclination_deg),
        math.radians(one.mean_anomaly_deg),
        one.mean_motion_rev_day * rev_day,
        math.radians(one.node_deg),
    )
    return record


def published_states() -> list[tuple[int, list[list[float]]]]:
    """Return object and rows (minutes, three km, three km/s) of each block, in order."""
    blocks: list[tuple[int, list[list[float]]]] = []
    for line in resources.files("sgp4").joinpath("tcppver.out").read_text().splitlines():
        if line.endswith("xx"):
            blocks.append((int(line.split()[0]), []))
        else:
            blocks[-1][1].append([float(word) for word in line.split()[:7]])
    return blocks


def test_every_published_state() -> None:
    sets = read_elements(mended(verification_text()), FILE)
    blocks = published_states()
    assert len(sets) == len(blocks) == 33
    flown = 0
    for one, (number, rows) in zip(sets, blocks, strict=True):
        assert one.number == number
        if number == 33334:  # cannot be flown; the published row is the last state of the object before it
            assert satellite(one).error == 3
            continue
        record = satellite(one)
        for minutes, *state in rows:
            _, position, velocity = record.sgp4_tsince(minutes)
            assert [*position, *velocity] == pytest.approx(state, abs=TOLERANCE), (number, minutes)
            flown += 1
    assert flown == 700 - 33 - 1  # lines of the file, less the headings, less the row of 33334


def test_the_wrong_checksums_are_found_and_all_else_is_read() -> None:
    reading = scan_elements(verification_text(), FILE)
    assert len(reading.sets) == 30
    assert [slip.key for slip in reading.mistakes] == [
        "line 100",
        "line 101",
        "line 103",
        "line 106",
        "line 107",
    ]
    with pytest.raises(InputError):
        read_elements(verification_text(), FILE)


def test_a_set_with_blank_fields() -> None:
    """11801 has no designator and no ephemeris type."""
    one = next(one for one in scan_elements(verification_text(), FILE).sets if one.number == 11801)
    assert (one.designator, one.element_number, one.revolution) == ("", 1, 1)
    assert one.bstar_per_earth_radius == 0.014311


def test_values_agree_with_the_package_reading_the_same_lines() -> None:
    lines = [line for line in mended(verification_text()).splitlines() if line.startswith(("1 ", "2 "))]
    sets = read_elements("\n".join(lines), FILE)
    for one, first, second in zip(sets, lines[::2], lines[1::2], strict=True):
        ours, theirs = satellite(one), Satrec.twoline2rv(first, second[:69])
        for name in ("satnum", "ecco", "inclo", "nodeo", "argpo", "mo", "bstar", "no_kozai", "ndot", "nddot"):
            assert getattr(ours, name) == pytest.approx(getattr(theirs, name), rel=1e-15), (one.number, name)
