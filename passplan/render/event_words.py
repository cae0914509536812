"""What a phone shows for one contact: title, text and times, for one person, one station or everybody."""

from dataclasses import dataclass
from datetime import datetime
from typing import Literal

from passplan.domain.mission import Mission
from passplan.domain.moments import place_name
from passplan.domain.plan import Contact, Plan
from passplan.render.contact_words import (
    cautions,
    down_words,
    partner,
    ready_s,
    role,
    seen,
    timeline,
    up_words,
    who,
)
from passplan.render.words import clock, day, listed, offset, safe, station_name, there, there_brief, zone_of

OwnerKind = Literal["mission", "station", "operator"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Owner:
    """Whose calendar it is.

    Attributes:
        key: mission name, station code or operator handle.
    """

    kind: OwnerKind
    key: str

    def takes_part(self, contact: Contact) -> bool:
        """Return whether a contact belongs into this calendar."""
        if self.kind == "station":
            return self.key == contact.station or self.key in contact.listeners
        return self.kind == "mission" or self.key in contact.operators

    @property
    def person(self) -> str:
        """The handle of an operator, "" for a mission or a station."""
        return self.key if self.kind == "operator" else ""


@dataclass(frozen=True, kw_only=True, slots=True)
class Entry:
    """One contact as one calendar shows it in one edition.

    Attributes:
        text: all but the last line, which names the edition of the last change.
        matters: what makes a change significant (RFC 5545, 3.8.7.4): when two entries
            differ in it, the phone's owner has to know.
    """

    week: str
    contact: Contact
    title: str
    text: str
    begin_utc: datetime
    end_utc: datetime
    matters: tuple[object, ...]

    @property
    def shown(self) -> tuple[object, ...]:
        """All that a phone shows."""
        return self.title, self.text, self.begin_utc, self.end_utc


def entry(contact: Contact, plan: Plan, owner: Owner, mission: Mission) -> Entry:
    """Return a contact as `owner` sees it.

    An operator's event begins when they have to be ready, as their phone books the whole
    duty; everybody else's begins with the contact. Both end with the contact.
    """
    begin_s = ready_s(contact, mission, owner.person) if owner.person else contact.start_s
    return Entry(
        week=plan.horizon.week,
        contact=contact,
        title=_title(contact, owner, mission),
        text="\n".join(_lines(contact, plan, owner, mission)),
        begin_utc=plan.horizon.utc(begin_s),
        end_utc=plan.horizon.utc(contact.end_s),
        matters=(
            plan.horizon.utc(contact.start_s),
            plan.horizon.utc(contact.end_s),
            contact.satellite,
            contact.station,
            contact.operators,
            _listens_along(contact, owner),
        ),
    )


def _title(contact: Contact, owner: Owner, mission: Mission) -> str:
    """Return "Teasel-1, you send: Quarry Hill", or who sends where it is somebody else's calendar."""
    place = station_name(mission, contact.station)
    satellite = safe(contact.satellite)
    if owner.person:
        return f"{satellite}, {role(contact, owner.person, mission)}: {place}"
    if _listens_along(contact, owner):
        return f"{satellite}, listen along: {who(contact, mission)} from {place}"
    return f"{satellite}, {who(contact, mission)}: {place}"


def _lines(contact: Contact, plan: Plan, owner: Owner, mission: Mission) -> list[str]:
    """Return the text of an event, line by line."""
    zone = _zone(contact, owner, mission)
    utc = plan.horizon.utc
    start, ready = utc(contact.start_s), utc(ready_s(contact, mission, owner.person))
    named = f"in brackets {place_name(zone)} time ({zone}, {offset(start, zone)})"
    elsewhere = _listens_along(contact, owner)
    be_ready = [] if elsewhere else [f"Be ready at {clock(ready)} UTC, {there(ready, zone)}."]
    lines = [f"{_opening(contact, owner, mission)} Contact {safe(contact.id)}.", *be_ready, ""]
    lines.append(f"{day(start)} {start.year}. Times are UTC, {named}.")
    for moment in timeline(contact, mission, owner.person):
        if elsewhere and moment.end_s is None:
            continue  # the satellite rises, culminates and sets at other times where one listens along
        here = there_brief(utc(moment.start_s), zone, seconds=True)
        until = "" if moment.end_s is None else f" until {seen(plan.horizon, moment.end_s)}"
        look = f": {moment.look}" if moment.look else ""
        lines.append(f"{seen(plan.horizon, moment.start_s)} ({here}) {moment.what}{until}{look}")
    lines += ["", up_words(contact, mission), down_words(contact)]
    if contact.listeners:
        lines.append(f"Listening along: {listed(station_name(mission, code) for code in contact.listeners)}.")
    lines += filter(None, (partner(contact, plan, mission, before=before) for before in (True, False)))
    return [*lines, "", *cautions(contact, mission)]


def _opening(contact: Contact, owner: Owner, mission: Mission) -> str:
    """Return the first sentence: who does what from where."""
    place, satellite = station_name(mission, contact.station), safe(contact.satellite)
    if not owner.person:
        return f"{who(contact, mission)} at {place}, with {satellite}."
    does = {
        "you send": f"You send from {place} to {satellite}",
        "you listen": f"You listen to {satellite} at {place}",
        "you assist": f"You assist {safe(contact.operators[0])} at {place}, with {satellite}",
    }[role(contact, owner.person, mission)]
    others = [safe(handle) for handle in contact.operators[1:]]
    return does + (
        f", {' and '.join(others)} assisting." if others and owner.key == contact.operators[0] else "."
    )


def _listens_along(contact: Contact, owner: Owner) -> bool:
    """Return whether the calendar's station only listens to what another one sends."""
    return owner.kind == "station" and owner.key in contact.listeners


def _zone(contact: Contact, owner: Owner, mission: Mission) -> str:
    """Return the zone of whoever must be there: the operator's own, else the station's."""
    own = next((person.time_zone for person in mission.operators if person.handle == owner.person), "")
    if _listens_along(contact, owner):
        return zone_of(mission, owner.key)
    return own or zone_of(mission, contact.station)
