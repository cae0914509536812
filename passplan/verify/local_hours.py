"""Whether a stretch of time lies in somebody's local hours, asked of zoneinfo day by day."""

from collections.abc import Iterable, Iterator
from datetime import UTC, date, datetime, time, timedelta
from zoneinfo import ZoneInfo

from passplan.domain.moments import WEEKDAYS, DaysAway, WeeklyHours

_DAY = timedelta(days=1)


def first_uncovered(
    hours: Iterable[WeeklyHours], zone: str, begin: datetime, end: datetime
) -> datetime | None:
    """Return the first UTC moment of [begin, end) outside weekly hours; None if all of it is inside."""
    open_times = list(_open_times(tuple(hours), ZoneInfo(zone), begin, end))
    here = begin
    while here < end:
        reached = max((shut for opened, shut in open_times if opened <= here < shut), default=None)
        if reached is None:
            return here
        here = reached
    return None


def day_away(away: Iterable[DaysAway], zone: str, begin: datetime, end: datetime) -> date | None:
    """Return the first local day away that [begin, end) touches, None if there is none."""
    place = ZoneInfo(zone)
    first = begin.astimezone(place).date()
    last = max(first, (end - timedelta(microseconds=1)).astimezone(place).date())
    touched = [
        max(first, days.first_day) for days in away if days.first_day <= last and first <= days.last_day
    ]
    return min(touched, default=None)


def _open_times(
    hours: tuple[WeeklyHours, ...], place: ZoneInfo, begin: datetime, end: datetime
) -> Iterator[tuple[datetime, datetime]]:
    """Yield the UTC (begin, end) of every occurrence of the hours near a stretch of time."""
    day = begin.astimezone(place).date() - 2 * _DAY
    last = end.astimezone(place).date() + _DAY
    while day <= last:
        for rule in hours:
            if WEEKDAYS[day.weekday()] in rule.days:
                shut_day = day if rule.begin < rule.end else day + _DAY
                yield _utc(day, rule.begin, place), _utc(shut_day, rule.end, place)
        day += _DAY


def _utc(day: date, at: time, place: ZoneInfo) -> datetime:
    """Return the UTC moment at which the clocks of a place first show a time."""
    return datetime.combine(day, at, tzinfo=place).astimezone(UTC)
