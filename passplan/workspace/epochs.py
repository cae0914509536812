"""Moments as CCSDS writes them, in calendar days or in days of the year as a TLE has them."""

import re
from datetime import UTC, datetime, timedelta

_EPOCH = re.compile(
    r"([0-9]{4})-(?:([0-9]{2})-([0-9]{2})|([0-9]{3}))T([0-9]{2}):([0-9]{2}):([0-9]{2})(?:\.([0-9]{1,30}))?Z?"
)
_TOLD = "must be a moment in UTC such as 2026-12-05T10:11:12.5 or 2026-339T10:11:12.5, with or without a Z"


def read_epoch(text: str) -> datetime:
    """Return the UTC moment of a CCSDS time code (502.0-B-3, section 7.5.10), to a microsecond.

    A leap second, :60, is the moment after it, as `datetime` knows none.

    Raises:
        ValueError: it is not one, with what would be.
    """
    match = _EPOCH.fullmatch(text)
    if match is None:
        raise ValueError(_TOLD)
    year, hour, minute, second = (int(match[part]) for part in (1, 5, 6, 7))
    leap = second == 60 and (hour, minute) == (23, 59)
    try:
        day = (
            day_of_year(year, int(match[4]))
            if match[4]
            else datetime(year, int(match[2]), int(match[3]), tzinfo=UTC)
        )
        moment = day.replace(hour=hour, minute=minute, second=59 if leap else second)
        return moment + timedelta(seconds=leap, microseconds=_microseconds(match[8] or "0"))
    except (ValueError, OverflowError):
        raise ValueError(f"is no day or hour of the calendar; it {_TOLD}") from None


def day_of_year(year: int, day: int) -> datetime:
    """Return midnight UTC of a day counted from 1 on the first of January.

    Raises:
        ValueError: the year has no such day.
    """
    january = datetime(year, 1, 1, tzinfo=UTC)
    midnight = january + timedelta(days=day - 1)
    if midnight.year != january.year:
        raise ValueError(f"{year} has no day {day}")
    return midnight


def _microseconds(fraction: str) -> int:
    """Return digits behind the point of a second in microseconds, rounded half to even."""
    scale = int("1" + "0" * len(fraction))
    whole, rest = divmod(int(fraction) * 1_000_000, scale)
    half = 2 * rest - scale
    return whole + int(half > 0 or (half == 0 and whole % 2 == 1))
