"""What no single file can know: names that must exist, orders that must end, people who must be there."""

import os
import re
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from passplan.domain.errors import Mistake, PassplanError
from passplan.domain.mission import Mission
from passplan.domain.moments import week_start
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.workspace.documents import Document, Place
from passplan.workspace.nouns import nearest, shown

# By which key each noun is called.
_CALLED = {
    Mission: "name",
    Satellite: "name",
    Station: "code",
    Operator: "handle",
    Command: "name",
    Session: "name",
}
_WEEKS = ("1990-W01", "2199-W52")
_DATED = re.compile(r"(.*) \d{4}-\d{2}-\d{2}")


@dataclass(frozen=True, kw_only=True, slots=True)
class Entry:
    """One table of the workspace and the noun it became.

    Attributes:
        data: the table as written; its name is known even where the rest is wrong.
        noun: None when something in it is wrong.
    """

    kind: type
    document: Document
    at: Place
    data: dict[str, Any]
    noun: Any

    @property
    def called(self) -> str:
        """What it is called, "" when that is missing or no text."""
        name = self.data.get(_CALLED[self.kind])
        return name if isinstance(name, str) else ""

    def texts(self, key: str) -> list[str]:
        """Return the texts of a list, as written."""
        values = self.data.get(key)
        return [value for value in values if isinstance(value, str)] if isinstance(values, list) else []

    def mistake(self, place: Place, text: object, told: str) -> Mistake:
        """Return a mistake at a place inside this table."""
        return Mistake(self.document.file, self.document.key(self.at + place), shown(text), told)


def reference_mistakes(entries: list[Entry], folder: Path) -> list[Mistake]:
    """Return the mistakes between tables and files.

    Args:
        entries: all tables, sound or not.
        folder: the workspace, to look whether a pinned element set is there.
    """
    found: list[Mistake] = []
    for kind, name in _CALLED.items():
        found.extend(_twice([entry for entry in entries if entry.kind is kind], name))
    known = {kind: [entry.called for entry in entries if entry.kind is kind] for kind in _CALLED}
    for entry in entries:
        found.extend(_unknown(entry, known, entries))
        match entry.noun:
            case Mission():
                found.extend(_pinned(entry, entry.noun, known[Satellite], folder))
            case Station():
                found.extend(_mask(entry, entry.noun))
                found.extend(_nobody(entry, entry.noun, entries))
            case Command() | Session():
                found.extend(_too_short(entry, entry.noun))
    found.extend(_circles([entry for entry in entries if entry.kind is Command]))
    return found


def file_name(name: str) -> str:
    """Return the form in which a name can stand in a file name, the same for names that would collide."""
    return re.sub(r"[\W_]+", "-", name.casefold()).strip("-")


def _twice(entries: list[Entry], name: str) -> Iterator[Mistake]:
    """Yield names and catalogue numbers that are taken.

    Files are named after satellites, stations and operators, so there names that differ
    in letters' case or in signs alone count as one.
    """
    first: dict[str, Entry] = {}
    numbers: dict[int, Entry] = {}
    for entry in entries:
        folded = entry.called if entry.kind in (Command, Session) else file_name(entry.called)
        if folded and (other := first.setdefault(folded, entry)) is not entry:
            alike = "" if other.called == entry.called else f' as "{shown(other.called)}", too much alike'
            yield entry.mistake((name,), entry.called, f"taken{alike}; first in {_seat(other, name)}")
        number = entry.data.get("number")
        if isinstance(number, int) and (other := numbers.setdefault(number, entry)) is not entry:
            yield entry.mistake(("number",), number, f"taken; first in {_seat(other, 'number')}")
    for entry in entries:
        dated = _DATED.fullmatch(entry.called)
        if dated and dated[1] in first and first[dated[1]].data.get("every_day") is True:
            yield entry.mistake((name,), entry.called, f'taken by "{dated[1]}" of that day')


def _seat(entry: Entry, name: str) -> str:
    """Return where an entry stands, as people would look it up."""
    line = entry.document.line((*entry.at, name))
    return f"{entry.document.file}, line {line}" if line else entry.document.file


def _unknown(entry: Entry, known: dict[type, list[str]], entries: list[Entry]) -> Iterator[Mistake]:
    """Yield references to things that are not there."""
    for number, code in enumerate(entry.texts("stations")):
        if code not in known[Station]:
            yield entry.mistake(("stations", number), code, _no_such("station", code, known[Station]))
        elif entry.kind is Command and _listens(code, entries):
            yield entry.mistake(("stations", number), code, "only listens; name stations that transmit")
    name = entry.data.get("satellite")
    if isinstance(name, str) and name not in known[Satellite]:
        yield entry.mistake(("satellite",), name, _no_such("satellite", name, known[Satellite]))
    for number, other in _links(entry):
        if other not in known[Command]:
            place = ("after", number, "command")
            yield entry.mistake(place, other, _no_such("command", other, known[Command]))
    yield from _unknown_kinds(entry, entries)


def _unknown_kinds(entry: Entry, entries: list[Entry]) -> Iterator[Mistake]:
    """Yield kinds of data that a session makes and its satellite does not keep."""
    makes = entry.data.get("makes")
    homes = [
        other.noun
        for other in entries
        if other.kind is Satellite and other.called == entry.data.get("satellite")
    ]
    if not isinstance(makes, dict) or not homes or homes[0] is None:
        return
    kinds = [kind.name for kind in homes[0].store.kinds]
    for kind in makes:
        if kind not in kinds:
            yield entry.mistake(("makes", kind), kind, _no_such("kind of data", kind, kinds))


def _no_such(what: str, word: str, known: list[str]) -> str:
    """Return "no such station; did you mean ...?" or what there is."""
    names = sorted({shown(name) for name in known if name})
    some = ", ".join(names[:12]) + (", ..." if len(names) > 12 else "")
    return f"no such {what}" + (
        nearest(word, names) or (f"; there are: {some}" if names else "; there are none")
    )


def _listens(code: str, entries: list[Entry]) -> bool:
    """Return whether a station is known to have no transmitter."""
    return any(
        isinstance(entry.noun, Station) and entry.noun.code == code and not entry.noun.radio.transmits
        for entry in entries
    )


def _links(entry: Entry) -> list[tuple[int, str]]:
    """Return (number, name) of the commands a command comes after, as written."""
    links = entry.data.get("after")
    if not isinstance(links, list):
        return []
    named = [(number, link.get("command")) for number, link in enumerate(links) if isinstance(link, dict)]
    return [(number, name) for number, name in named if isinstance(name, str)]


def _circles(commands: list[Entry]) -> Iterator[Mistake]:
    """Yield each circle of the order once, at the command of it that stands first in the file."""
    after = {entry.called: [name for _, name in _links(entry)] for entry in reversed(commands)}
    told: set[str] = set()
    for entry in commands:
        circle = _circle(entry.called, after)
        if circle and not told.intersection(circle):
            told.update(circle)
            way = " after ".join(f'"{shown(name)}"' for name in [*circle, circle[0]])
            yield entry.mistake(("after",), "", f"goes round in a circle: {way}; take one link out")


def _circle(start: str, after: dict[str, list[str]]) -> list[str]:
    """Return the shortest way from a command through its order back to itself, [] where there is none."""
    ways = {start: [start]}
    queue = [start]
    for name in queue:
        for before in after.get(name, []):
            if before == start:
                return ways[name]
            if before not in ways:
                ways[before] = [*ways[name], before]
                queue.append(before)
    return []


def _mask(entry: Entry, station: Station) -> Iterator[Mistake]:
    """Yield masks that leave open what lies between."""
    azimuths = [pair[0] for pair in station.mask]
    if len(azimuths) == 1:
        told = "one pair says nothing of the other directions; give more, or none for a flat horizon"
        yield entry.mistake(("mask",), list(station.mask[0]), told)
    if len(azimuths) < 2:
        return
    if azimuths[0] == 0.0 and azimuths[-1] == 360.0:
        if station.mask[0] != (0.0, station.mask[-1][1]):
            told = "0 and 360 are the same direction with two elevations; leave one out"
            yield entry.mistake(("mask", len(azimuths) - 1), list(station.mask[-1]), told)
        return
    for before, behind in zip(azimuths, [*azimuths[1:], azimuths[0] + 360.0], strict=True):
        if behind - before > 180.0:
            told = f"nothing between {before:g} and {behind % 360.0:g} deg; leave no gap of more than 180 deg"
            yield entry.mistake(("mask",), "", told)


def _nobody(entry: Entry, station: Station, entries: list[Entry]) -> Iterator[Mistake]:
    """Yield a station that transmits with nobody who may control it."""
    if station.radio.transmits and not any(
        other.data.get("may_control") is True and station.code in other.texts("stations")
        for other in entries
        if other.kind is Operator
    ):
        told = (
            "it transmits and nobody may control it; "
            "give one of its operators may_control = true, or write transmits = false under [radio]"
        )
        yield entry.mistake(("code",), station.code, told)


def _too_short(entry: Entry, noun: Command | Session) -> Iterator[Mistake]:
    """Yield what cannot fit between its own earliest and latest moment."""
    if isinstance(noun, Session):
        longest = max((window.end_utc - window.begin_utc).total_seconds() for window in noun.windows)
        if longest < noun.length_s:
            told = f"no window is as long as length_s; the longest has {longest:g} s"
            yield entry.mistake(("length_s",), noun.length_s, told)
        return
    if noun.exchange_s is None or noun.earliest_utc is None or noun.deadline_utc is None:
        return
    room = (noun.deadline_utc - noun.earliest_utc).total_seconds()
    if room < noun.exchange_s:
        told = f"longer than the {room:g} s between earliest_utc and deadline_utc"
        yield entry.mistake(("exchange_s",), noun.exchange_s, told)


def _pinned(entry: Entry, mission: Mission, known: list[str], folder: Path) -> Iterator[Mistake]:
    """Yield pinned things that are not there."""
    if (week := mission.pinned_week) is not None and (told := _week_fault(week)):
        yield entry.mistake(("pinned_week",), week, told)
    for name, file in mission.pinned_elements.items():
        place = ("pinned_elements", name)
        if name not in known:
            yield entry.mistake(place, name, _no_such("satellite", name, known))
        if Path(file).name != file:
            yield entry.mistake(place, file, "the bare name of a file in elements/")
        elif not os.path.lexists(folder / "elements" / file):
            yield entry.mistake(place, file, "no such file in elements/")


def _week_fault(week: str) -> str:
    """Return what is wrong with a pinned week, "" when nothing is."""
    try:
        week_start(week)
    except PassplanError:
        return "expected an ISO week such as 2026-W50 (a year has 52 or 53)"
    return "" if _WEEKS[0] <= week <= _WEEKS[1] else f"a week from {_WEEKS[0]} to {_WEEKS[1]}"
