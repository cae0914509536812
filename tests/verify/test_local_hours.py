"""Local hours over midnight and over changes of the clock; the changes are those of the tz database."""

from datetime import UTC, date, datetime, time

import pytest

from passplan.domain.moments import DaysAway, WeeklyHours
from passplan.verify.local_hours import day_away, first_uncovered

NIGHT = (WeeklyHours(days=("fri",), begin=time(22), end=time(6)),)
WHOLE = (WeeklyHours(begin=time(0), end=time(0)),)


def utc(day: int, hour: int, minute: int = 0, month: int = 12) -> datetime:
    return datetime(2026, month, day, hour, minute, tzinfo=UTC)


@pytest.mark.parametrize(
    ("begin", "end", "hole"),
    [
        (utc(11, 22), utc(12, 6), None),
        (utc(12, 5), utc(12, 7), utc(12, 6)),
        (utc(11, 21, 59), utc(11, 23), utc(11, 21, 59)),
        (utc(12, 23), utc(12, 23, 30), utc(12, 23)),
    ],
)
def test_a_night_belongs_to_the_day_it_begins(begin: datetime, end: datetime, hole: datetime | None) -> None:
    assert first_uncovered(NIGHT, "Europe/Dublin", begin, end) == hole


def test_days_that_touch_are_one() -> None:
    assert first_uncovered(WHOLE, "Asia/Kathmandu", utc(7, 0), utc(14, 0)) is None


def test_two_spans_that_leave_a_minute_do_not_cover_it() -> None:
    hours = (WeeklyHours(begin=time(8), end=time(12)), WeeklyHours(begin=time(12, 1), end=time(16)))
    assert first_uncovered(hours, "UTC", utc(7, 11), utc(7, 13)) == utc(7, 12)


def test_hours_are_local_on_both_sides_of_a_change_of_the_clock() -> None:
    """Ireland goes back to UTC+0 on 2026 October 25 at 01:00 UTC: 09:00 is 08:00 UTC before, 09:00 after."""
    hours = (WeeklyHours(begin=time(9), end=time(10)),)
    assert first_uncovered(hours, "Europe/Dublin", utc(24, 8, month=10), utc(24, 9, month=10)) is None
    assert first_uncovered(hours, "Europe/Dublin", utc(25, 9, month=10), utc(25, 10, month=10)) is None
    early = utc(25, 8, month=10)
    assert first_uncovered(hours, "Europe/Dublin", early, utc(25, 9, month=10)) == early


def test_a_night_with_the_hour_twice_is_an_hour_longer() -> None:
    hours = (WeeklyHours(begin=time(0), end=time(5)),)
    assert first_uncovered(hours, "Europe/Dublin", utc(24, 23, month=10), utc(25, 5, month=10)) is None


def test_nobody_has_hours_without_any() -> None:
    assert first_uncovered((), "UTC", utc(7, 0), utc(7, 1)) == utc(7, 0)


def test_days_away_are_local_days() -> None:
    """In Auckland (UTC+13 in December) the 10th begins on the 9th at 11:00 UTC."""
    away = (
        DaysAway(first_day=date(2026, 12, 20), last_day=date(2026, 12, 21)),
        DaysAway(first_day=date(2026, 12, 10), last_day=date(2026, 12, 11)),
    )
    zone = "Pacific/Auckland"
    assert day_away(away, zone, utc(9, 10), utc(9, 11)) is None
    assert day_away(away, zone, utc(9, 10), utc(9, 11, 1)) == date(2026, 12, 10)
    assert day_away(away, zone, utc(11, 10, 59), utc(11, 12)) == date(2026, 12, 11)
    assert day_away(away, zone, utc(11, 11), utc(11, 12)) is None
