"""How figures, times and names are said."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta

import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.domain.rules import Rule
from passplan.render import words
from tests.render.sample_week import mission


@pytest.mark.parametrize(
    ("byte", "said"),
    [
        (0.0, "0 byte"),
        (64.0, "64 byte"),
        (640.0, "0.6 kB"),
        (949.0, "0.9 kB"),
        (951.0, "1 kB"),
        (310_400.0, "310 kB"),
        (999_499.0, "999 kB"),
        (999_501.0, "1.0 MB"),
        (6_249_000.0, "6.2 MB"),
        (9_951_000.0, "10 MB"),
        (62e6, "62 MB"),
        (6.2e9, "6.2 GB"),
        (1.2e15, "1200000 GB"),
    ],
)
def test_a_size_shows_no_more_digits_than_it_deserves(byte: float, said: str) -> None:
    assert words.size(byte) == said


@pytest.mark.parametrize(
    ("seconds", "said"),
    [
        (0.0, "0 s"),
        (119.4, "119 s"),
        (120.0, "2 min"),
        (3_569.0, "59 min"),
        (3_571.0, "1 h 00 min"),
        (70_800.0, "19 h 40 min"),
        (100_000.0, "27 h 47 min"),
    ],
)
def test_a_duration_never_says_sixty_minutes(seconds: float, said: str) -> None:
    assert words.duration(seconds) == said


def test_a_charge_is_rounded_down_so_that_a_missed_floor_does_not_look_held() -> None:
    assert words.charge(0.5999) == "59 %"
    assert words.charge(0.6) == "60 %"
    assert words.charge(1.0) == "100 %"
    assert words.percent(0.896) == "90 %"


@pytest.mark.parametrize(
    ("azimuth_deg", "point"),
    [
        (0.0, "N"),
        (11.2, "N"),
        (11.3, "NNE"),
        (90.0, "E"),
        (157.5, "SSE"),
        (348.8, "N"),
        (360.0, "N"),
        (337.5, "NNW"),
    ],
)
def test_compass_points_are_the_sixteen_of_the_card(azimuth_deg: float, point: str) -> None:
    """Sixteen points of 22.5 deg, clockwise from north (common practice)."""
    assert words.compass(azimuth_deg) == point


def test_every_point_of_the_compass_is_said_once_a_turn() -> None:
    assert len({words.compass(22.5 * step) for step in range(16)}) == 16


def test_local_time_names_the_day_only_where_it_differs() -> None:
    noon = datetime(2026, 12, 7, 11, 47, 10, tzinfo=UTC)
    assert words.there(noon, "Europe/Dublin") == "11:47 Dublin"
    assert words.there(noon, "Pacific/Auckland") == "00:47 Tue Auckland"
    assert words.there(noon, "Pacific/Auckland", seconds=True) == "00:47:10 Tue Auckland"
    night = datetime(2026, 12, 7, 2, 0, tzinfo=UTC)
    assert words.there(night, "America/Argentina/Buenos_Aires") == "23:00 Sun Buenos Aires"


def test_the_date_line_gives_two_days_at_one_moment() -> None:
    """Kiritimati is UTC+14 and Pago Pago UTC-11 (IANA time zone database): 25 hours apart."""
    moment = datetime(2026, 12, 7, 10, 30, tzinfo=UTC)
    assert words.there(moment, "Pacific/Kiritimati") == "00:30 Tue Kiritimati"
    assert words.there(moment, "Pacific/Pago_Pago") == "23:30 Sun Pago Pago"


def test_a_clock_change_moves_local_time_and_offset() -> None:
    """Summer time in Ireland began at 01:00 UTC on 29 March 2026 (last Sunday, EU directive 2000/84/EC)."""
    zone = "Europe/Dublin"
    before = datetime(2026, 3, 29, 0, 59, tzinfo=UTC)
    after = before + timedelta(minutes=1)
    assert (words.there(before, zone), words.offset(before, zone)) == ("00:59 Dublin", "UTC")
    assert (words.there(after, zone), words.offset(after, zone)) == ("02:00 Dublin", "UTC+1")


def test_an_offset_keeps_its_half_hours() -> None:
    moment = datetime(2026, 12, 7, tzinfo=UTC)
    assert words.offset(moment, "America/St_Johns") == "UTC-3:30"
    assert words.offset(moment, "Asia/Kathmandu") == "UTC+5:45"


def test_days_and_stamps_need_no_locale() -> None:
    moment = datetime(2026, 12, 5, 18, 20, 59, tzinfo=UTC)
    assert words.day(moment) == "Sat 5 Dec"
    assert words.stamp(moment) == "Sat 5 Dec 2026 18:20 UTC"
    assert words.day_clock(moment) == "Sat 18:20"


def test_counts_and_lists_read_as_words() -> None:
    assert words.count(1, "pass", "passes") == "1 pass"
    assert words.count(2, "pass", "passes") == "2 passes"
    assert words.listed(["a"]) == "a"
    assert words.listed(["a", "b", "c"]) == "a, b and c"
    assert words.listed([]) == "nobody"
    assert words.rule_name(Rule.BATTERY_FLOOR) == "battery floor"


def test_margins_keep_their_unit() -> None:
    assert words.amount(1200.0, "s") == "20 min"
    assert words.amount(1.42, "deg") == "1.4 deg"
    assert words.amount(7200.0, "J") == "2 Wh"
    assert words.amount(240_000.0, "byte") == "240 kB"
    assert words.amount(3.0, "duties") == "3 duties"
    assert words.amount(3.0, "") == "3"


def test_what_the_mission_no_longer_has_is_said_by_its_code() -> None:
    assert words.station_name(mission(), "OLD") == "OLD"
    assert words.zone_of(mission(), "OLD") == "UTC"
    assert words.station_name(replace(mission(), stations=()), "QUA") == "QUA"


@given(st.text())
def test_safe_text_is_one_printable_line_of_bounded_length(text: str) -> None:
    said = words.safe(text)
    assert said.isprintable()
    assert len(said) <= 200
    assert said == words.safe(said)


def test_escape_sequences_and_direction_marks_are_taken_out() -> None:
    assert words.safe("a\x1b[31mb\r\nc\u202ed\x9b2J") == "a [31mb c d 2J"
