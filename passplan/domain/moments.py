"""The one place that converts time: UTC to seconds of the week and back, weeks, local hours."""

import re
from collections.abc import Iterable
from dataclasses import dataclass
from datetime import UTC, date, datetime, time, timedelta
from typing import Literal
from zoneinfo import ZoneInfo

from passplan.domain.checked import Checked, Hours
from passplan.domain.constants import DAY_S, HOUR_S, WEEK_S
from passplan.domain.errors import PassplanError

Span = tuple[float, float]
Weekday = Literal["mon", "tue", "wed", "thu", "fri", "sat", "sun"]
WEEKDAYS: tuple[Weekday, ...] = ("mon", "tue", "wed", "thu", "fri", "sat", "sun")

_WEEK = re.compile(r"(\d{4})-W(\d{2})")
_J2000_UTC = datetime(2000, 1, 1, 12, tzinfo=UTC)
_J2000_DAY = 2451545


@dataclass(frozen=True, kw_only=True, slots=True)
class Horizon(Checked):
    """The ISO week to plan, Monday 00:00 UTC, and the hours looked ahead beyond it.

    Attributes:
        week: ISO 8601 week, "2026-W50".
        lookahead_h: hours planned beyond the week's end and not published.
    """

    week: str
    lookahead_h: Hours = 24.0

    def _faults(self) -> list[tuple[str, object, str]]:
        try:
            week_start(self.week)
        except PassplanError as error:
            return [("week", self.week, str(error))]
        return []

    @property
    def start(self) -> datetime:
        """Monday 00:00 UTC of the week."""
        return week_start(self.week)

    @property
    def week_s(self) -> float:
        """Seconds in the week."""
        return WEEK_S

    @property
    def end_s(self) -> float:
        """Seconds from the start to the end of the look-ahead."""
        return WEEK_S + self.lookahead_h * HOUR_S

    def seconds(self, moment: datetime) -> float:
        """Return seconds from the start of the week to an aware `moment`; negative before it."""
        return (moment - self.start).total_seconds()

    def utc(self, seconds: float) -> datetime:
        """Return the UTC moment `seconds` after the start of the week, to a microsecond."""
        return self.start + timedelta(microseconds=round(seconds * 1e6))

    def julian(self, seconds: float) -> tuple[float, float]:
        """Return the UTC Julian date as (whole-and-half day, fraction), see `julian`."""
        whole, fraction = julian(self.start)
        return whole, fraction + seconds / DAY_S


def julian(moment: datetime) -> tuple[float, float]:
    """Return the Julian date of an aware `moment` as (day ending in .5, fraction of a day).

    Two floats, as one resolves only 40 microseconds.
    """
    days, rest = divmod(moment - _J2000_UTC + timedelta(hours=12), timedelta(days=1))
    return _J2000_DAY - 0.5 + days, rest / timedelta(days=1)


def week_start(week: str) -> datetime:
    """Return Monday 00:00 UTC of an ISO week such as "2026-W50".

    Raises:
        PassplanError: not a week, with an example of one.
    """
    match = _WEEK.fullmatch(week)
    try:
        monday = date.fromisocalendar(int(match[1]), int(match[2]), 1) if match else None
    except ValueError:
        monday = None
    if monday is None:
        raise PassplanError(f"{week!r} is not an ISO week; write it like 2026-W50 (a year has 52 or 53)")
    return datetime.combine(monday, time(), tzinfo=UTC)


def week_of(moment: datetime) -> str:
    """Return the ISO week that holds an aware `moment`, in UTC."""
    year, week, _ = moment.astimezone(UTC).isocalendar()
    return f"{year:04d}-W{week:02d}"


def week_after(moment: datetime) -> str:
    """Return the ISO week after the one that holds `moment`."""
    return week_of(moment + timedelta(days=7))


def iso(moment: datetime) -> str:
    """Return "2026-12-07T05:12:00Z", with microseconds only where there are any."""
    text = moment.astimezone(UTC).replace(tzinfo=None)
    return text.isoformat(timespec="microseconds" if text.microsecond else "seconds") + "Z"


@dataclass(frozen=True, kw_only=True, slots=True)
class WeeklyHours(Checked):
    """Hours that return each week, in the local time of whoever they belong to.

    `end` at or before `begin` means the next day, so 22:00 to 06:00 is a night and
    00:00 to 00:00 a whole day.
    """

    days: tuple[Weekday, ...] = WEEKDAYS
    begin: time
    end: time

    def _faults(self) -> list[tuple[str, object, str]]:
        if not self.days:
            return [("days", self.days, 'name at least one of "mon" to "sun"')]
        zoned = [name for name in ("begin", "end") if getattr(self, name).tzinfo is not None]
        return [(name, str(getattr(self, name)), "a local time without a zone") for name in zoned]


@dataclass(frozen=True, kw_only=True, slots=True)
class DaysAway(Checked):
    """Whole local days, the first and the last included."""

    first_day: date
    last_day: date

    def _faults(self) -> list[tuple[str, object, str]]:
        if self.last_day < self.first_day:
            return [("last_day", self.last_day, "must not be before first_day")]
        return []


@dataclass(frozen=True, kw_only=True, slots=True)
class Outage(Checked):
    """A dated time in which something cannot be used, with the reason people read."""

    begin_utc: datetime
    end_utc: datetime
    reason: str = ""

    def _faults(self) -> list[tuple[str, object, str]]:
        return aware_faults(self, "begin_utc", "end_utc")


def aware_faults(noun: object, begin: str, end: str) -> list[tuple[str, object, str]]:
    """Return faults of two optional moments that must carry a zone and stand in order."""
    first, last = getattr(noun, begin), getattr(noun, end)
    naive: list[tuple[str, object, str]] = [
        (name, str(value), "needs a zone: write it in UTC with a Z, 2026-12-07T05:12:00Z")
        for name, value in ((begin, first), (end, last))
        if value is not None and value.tzinfo is None
    ]
    if not naive and first is not None and last is not None and last <= first:
        return [(end, str(last), f"must be after {begin}")]
    return naive


def weekly_spans(hours: Iterable[WeeklyHours], zone: str, horizon: Horizon) -> list[Span]:
    """Return the spans of `horizon` (s, merged, in order) that fall in weekly `hours` of `zone`.

    Walks local days one by one and lets zoneinfo place each, so a week with a clock
    change is right: an hour that does not exist is moved as Python's fold 0 moves it.
    """
    place = ZoneInfo(zone)
    rules = tuple(hours)
    day = (horizon.start.astimezone(place) - timedelta(days=2)).date()
    last = (horizon.utc(horizon.end_s).astimezone(place) + timedelta(days=1)).date()
    spans: list[Span] = []
    while day <= last:
        for rule in rules:
            if WEEKDAYS[day.weekday()] in rule.days:
                end_day = day if rule.end > rule.begin else day + timedelta(days=1)
                begin = datetime.combine(day, rule.begin, tzinfo=place)
                end = datetime.combine(end_day, rule.end, tzinfo=place)
                spans.append((horizon.seconds(begin), horizon.seconds(end)))
        day += timedelta(days=1)
    return merged(spans, 0.0, horizon.end_s)


def away_spans(away: Iterable[DaysAway], zone: str, horizon: Horizon) -> list[Span]:
    """Return the spans of `horizon` (s, merged, in order) of whole local days away."""
    place = ZoneInfo(zone)
    spans = []
    for days in away:
        begin = datetime.combine(days.first_day, time(), tzinfo=place)
        end = datetime.combine(days.last_day + timedelta(days=1), time(), tzinfo=place)
        spans.append((horizon.seconds(begin), horizon.seconds(end)))
    return merged(spans, 0.0, horizon.end_s)


def outage_spans(outages: Iterable[Outage], horizon: Horizon) -> list[Span]:
    """Return the spans of `horizon` (s, merged, in order) that fall in dated outages."""
    spans = [(horizon.seconds(out.begin_utc), horizon.seconds(out.end_utc)) for out in outages]
    return merged(spans, 0.0, horizon.end_s)


def merged(spans: Iterable[Span], low: float, high: float) -> list[Span]:
    """Return `spans` cut to [low, high], in order, touching ones joined, empty ones dropped."""
    result: list[Span] = []
    for begin, end in sorted((max(a, low), min(b, high)) for a, b in spans):
        if end <= begin:
            continue
        if result and begin <= result[-1][1]:
            result[-1] = (result[-1][0], max(end, result[-1][1]))
        else:
            result.append((begin, end))
    return result


def without(spans: Iterable[Span], holes: Iterable[Span]) -> list[Span]:
    """Return `spans` less `holes`, both merged and in order."""
    result = list(spans)
    for low, high in holes:
        result = [
            part
            for begin, end in result
            for part in ((begin, min(end, low)), (max(begin, high), end))
            if part[1] > part[0]
        ]
    return result


def local(moment: datetime, zone: str) -> datetime:
    """Return an aware `moment` in the named zone."""
    return moment.astimezone(ZoneInfo(zone))


def place_name(zone: str) -> str:
    """Return the city part of a zone name: "Europe/Dublin" gives "Dublin"."""
    return zone.rsplit("/", 1)[-1].replace("_", " ")
