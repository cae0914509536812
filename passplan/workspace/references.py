"""What no single file can know: names that must exist, orders that must end, people who must be there."""

import os
import re
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

from passplan.domain.checked import code_fault
from passplan.domain.errors import Mistake, PassplanError
from passplan.domain.mission import Mission
from passplan.domain.moments import week_start
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.workspace.entries import CALLED, Entry
from passplan.workspace.nouns import nearest, shown

_WEEKS = ("1990-W01", "2199-W52")
_DATED = re.compile(r"(.*) \d{4}-\d{2}-\d{2}")


def reference_mistakes(entries: list[Entry], unsure: set[type], folder: Path) -> list[Mistake]:
    """Return the mistakes between tables and files.

    Args:
        entries: all tables, sound or not.
        unsure: nouns of which some could not be read; nothing is said to be missing there.
        folder: the workspace, to look whether a pinned element set is there.
    """
    found: list[Mistake] = []
    for kind, name in CALLED.items():
        found.extend(_twice([entry for entry in entries if entry.kind is kind], name))
    known = {
        kind: _Names(
            said=[entry.called for entry in entries if entry.kind is kind],
            sure=kind not in unsure and all(_well_named(entry) for entry in entries if entry.kind is kind),
        )
        for kind in CALLED
    }
    found.extend(mistake for entry in entries for mistake in _unknown(entry, known, entries))
    people = [entry for entry in entries if entry.kind is Operator]
    # Who serves where is known only once every operator reads well.
    sure_people = known[Operator].sure and not any(
        person.noun is None or set(person.texts("stations")) - set(known[Station].said) for person in people
    )
    for entry in entries:
        match entry.noun:
            case Mission():
                found.extend(_pinned(entry, entry.noun, known[Satellite], folder))
            case Station():
                found.extend(_mask(entry, entry.noun))
                found.extend(_nobody(entry, entry.noun, people) if sure_people else ())
            case Command() | Session():
                found.extend(_too_short(entry, entry.noun))
    found.extend(_circles([entry for entry in entries if entry.kind is Command]))
    return found


@dataclass(frozen=True, kw_only=True, slots=True)
class _Names:
    """The names said of one kind of noun; `sure` when no name can be missing from them."""

    said: list[str]
    sure: bool

    def lack(self, name: str) -> bool:
        """Return whether a name is surely not there."""
        return self.sure and name not in self.said


def _well_named(entry: Entry) -> bool:
    """Return whether a table has a name that others can go by."""
    return bool(entry.called) and not (entry.kind is Station and code_fault("code", entry.called))


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


def _unknown(entry: Entry, known: dict[type, _Names], entries: list[Entry]) -> Iterator[Mistake]:
    """Yield references to things that are not there."""
    for number, code in enumerate(entry.texts("stations")):
        if known[Station].lack(code):
            yield entry.mistake(("stations", number), code, _no_such("station", code, known[Station].said))
        elif entry.kind is Command and _listens(code, entries):
            yield entry.mistake(("stations", number), code, "only listens; name stations that transmit")
    name = entry.data.get("satellite")
    if isinstance(name, str) and known[Satellite].lack(name):
        yield entry.mistake(("satellite",), name, _no_such("satellite", name, known[Satellite].said))
    for number, other in _links(entry):
        if known[Command].lack(other):
            place = ("after", number, "command")
            yield entry.mistake(place, other, _no_such("command", other, known[Command].said))
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


def _nobody(entry: Entry, station: Station, people: list[Entry]) -> Iterator[Mistake]:
    """Yield a station that transmits with nobody who may control it."""
    if station.radio.transmits and not any(
        person.noun.may_control and station.code in person.noun.stations for person in people
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


def _pinned(entry: Entry, mission: Mission, known: _Names, folder: Path) -> Iterator[Mistake]:
    """Yield pinned things that are not there."""
    if (week := mission.pinned_week) is not None and (told := _week_fault(week)):
        yield entry.mistake(("pinned_week",), week, told)
    for name, file in mission.pinned_elements.items():
        place = ("pinned_elements", name)
        if known.lack(name):
            yield entry.mistake(place, name, _no_such("satellite", name, known.said))
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
