"""How sizes, times, directions and names are said, the same everywhere."""

import math
from collections.abc import Iterable
from datetime import UTC, date, datetime

from passplan.domain.mission import Mission
from passplan.domain.moments import local, place_name
from passplan.domain.rules import Rule
from passplan.domain.station import Station

_DAYS = ("Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun")
_MONTHS = ("Jan", "Feb", "Mar", "Apr", "May", "Jun", "Jul", "Aug", "Sep", "Oct", "Nov", "Dec")
_POINTS = ("N", "NNE", "NE", "ENE", "E", "ESE", "SE", "SSE", "S", "SSW", "SW", "WSW", "W", "WNW", "NW", "NNW")
_MOST_TEXT = 200

SENDING_CAUTIONS = (
    "The licensed operator in charge decides whether to transmit; the licence and local rules come first.",
    "Keep everybody away from the antenna: it starts to turn and to radiate without warning.",
)
LISTENING_CAUTIONS = ("Keep everybody away from the antenna: it starts to turn without warning.",)


def safe(text: str) -> str:
    """Return `text` on one line: what cannot be printed becomes a space, at most 200 characters.

    Escape sequences, line breaks and bidirectional marks are refused where names are
    born; text that came another way must not rewrite a terminal or a calendar either.
    """
    flat = " ".join("".join(char if char.isprintable() else " " for char in text).split())
    return flat if len(flat) <= _MOST_TEXT else flat[: _MOST_TEXT - 3] + "..."


def size(byte: float) -> str:
    """Return an amount of data such as "64 byte", "0.6 kB", "310 kB" or "6.2 MB" (1 kB = 1000 byte)."""
    if round(byte) < 100:
        return f"{byte:.0f} byte"
    if round(byte) < 950:
        return f"{byte / 1000.0:.1f} kB"
    value = byte
    for unit in ("kB", "MB", "GB"):
        value /= 1000.0
        if unit != "kB" and round(value, 1) < 10.0:
            return f"{value:.1f} {unit}"
        if round(value) < 1000:
            return f"{value:.0f} {unit}"
    return f"{value:.0f} GB"


def percent(fraction: float) -> str:
    """Return "90 %", to the nearest."""
    return f"{100.0 * fraction:.0f} %"


def charge(fraction: float) -> str:
    """Return "71 %", rounded down: a floor that is missed must not look held."""
    return f"{math.floor(100.0 * fraction + 1e-6)} %"


def duration(seconds: float) -> str:
    """Return "45 s", "12 min" or "19 h 40 min"; minutes from two of them on."""
    if round(seconds) < 120:
        return f"{seconds:.0f} s"
    hours, minutes = divmod(round(seconds / 60.0), 60)
    return f"{hours} h {minutes:02d} min" if hours else f"{minutes} min"


def count(number: int, noun: str, plural: str = "") -> str:
    """Return "1 contact" or "3 contacts"; `plural` where an s does not do."""
    return f"{number} {noun}" if number == 1 else f"{number} {plural or noun + 's'}"


def compass(azimuth_deg: float) -> str:
    """Return the nearest of the sixteen points of the compass: 158 gives "SSE"."""
    return _POINTS[round(azimuth_deg / 22.5) % 16]


def degrees(angle_deg: float) -> str:
    """Return "47 deg", without a minus before zero."""
    return f"{round(angle_deg):d} deg"


def day(when: date) -> str:
    """Return "Mon 7 Dec", the same under every locale."""
    return f"{_DAYS[when.weekday()]} {when.day} {_MONTHS[when.month - 1]}"


def weekday(when: date) -> str:
    """Return "Mon"."""
    return _DAYS[when.weekday()]


def clock(moment: datetime, *, seconds: bool = False) -> str:
    """Return "05:12" or "05:12:40", cut and not rounded, as a clock shows it."""
    return f"{moment:%H:%M:%S}" if seconds else f"{moment:%H:%M}"


def day_clock(moment: datetime) -> str:
    """Return "Wed 22:05"."""
    return f"{weekday(moment)} {clock(moment)}"


def stamp(moment: datetime) -> str:
    """Return "Sat 5 Dec 2026 18:20 UTC"."""
    utc = moment.astimezone(UTC)
    return f"{day(utc)} {utc.year} {clock(utc)} UTC"


def there(moment: datetime, zone: str, *, seconds: bool = False) -> str:
    """Return local time with its place, "05:12 Dublin"; "11:47 Tue Auckland" where it is another day."""
    return f"{there_brief(moment, zone, seconds=seconds)} {place_name(zone)}"


def there_brief(moment: datetime, zone: str, *, seconds: bool = False) -> str:
    """Return local time without its place: "05:12", or "11:47 Tue" where it is another day."""
    here = local(moment, zone)
    other_day = "" if here.date() == moment.astimezone(UTC).date() else f" {weekday(here)}"
    return clock(here, seconds=seconds) + other_day


def places(mission: Mission, codes: Iterable[str]) -> str:
    """Return whose time is meant, in a sentence, for lists that only show hours."""
    said = [f"{place_name(zone_of(mission, code))} at {safe(code)}" for code in sorted(set(codes))]
    return f"Local time: {', '.join(said)}."


def offset(moment: datetime, zone: str) -> str:
    """Return how far a zone is from UTC at `moment`: "UTC+1", "UTC-3:30", "UTC"."""
    shift = local(moment, zone).utcoffset()
    minutes = round(shift.total_seconds() / 60.0) if shift else 0
    if minutes == 0:
        return "UTC"
    hours, rest = divmod(abs(minutes), 60)
    return f"UTC{'-' if minutes < 0 else '+'}{hours}" + (f":{rest:02d}" if rest else "")


def rule_name(rule: Rule) -> str:
    """Return a rule in two or three words: "battery floor"."""
    return rule.name.lower().replace("_", " ")


def amount(value: float, unit: str) -> str:
    """Return a figure with its unit, no more digits than it deserves: "20 min", "1.4 deg", "31 %"."""
    if unit == "s":
        return duration(value)
    if unit == "byte":
        return size(value)
    if unit == "J":
        return f"{figure(value / 3600.0)} Wh"
    return f"{figure(value)} {unit}".rstrip()


def figure(value: float) -> str:
    """Return a number with two digits where it is small and none after the point from ten on."""
    return f"{value:.0f}" if abs(value) >= 9.95 else f"{value:.2g}"


def listed(words: Iterable[str]) -> str:
    """Return "QX3AB", "QX3AB and Fern" or "QX3AB, QY1K and Fern"."""
    *most, last = list(words) or ["nobody"]
    return f"{', '.join(most)} and {last}" if most else last


def station_of(mission: Mission, code: str) -> Station | None:
    """Return the station of that code, None when an older plan names one the mission no longer has."""
    return next((station for station in mission.stations if station.code == code), None)


def zone_of(mission: Mission, code: str) -> str:
    """Return the time zone of a station, UTC for one the mission no longer has."""
    station = station_of(mission, code)
    return station.time_zone if station else "UTC"


def station_name(mission: Mission, code: str) -> str:
    """Return "Quarry Hill", or the code of a station the mission no longer has."""
    station = station_of(mission, code)
    return safe(station.name) if station else safe(code)
