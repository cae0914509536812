"""One calendar as bytes: RFC 5545 with the names and refreshing of RFC 7986, times in UTC."""

import hashlib
from collections.abc import Sequence
from datetime import datetime, timedelta

import icalendar

from passplan.domain.errors import PassplanError
from passplan.domain.mission import Mission
from passplan.domain.plan import IssuedPlan
from passplan.render.calendar_check import calendar_faults
from passplan.render.event_history import Event, made, newest
from passplan.render.event_words import Owner
from passplan.render.words import safe, stamp, station_name, station_of

_PRODUCT = "-//passplan//contact calendar//EN"
_UID_DOMAIN = "passplan.invalid"  # a name reserved to mean nothing (RFC 2606)
_REFRESH = timedelta(hours=1)


def calendar_bytes(
    events: Sequence[Event],
    editions: Sequence[IssuedPlan],
    owner: Owner,
    mission: Mission,
    *,
    alarm_min: int | None,
) -> bytes:
    """Return one calendar file; with no event it says so on an all-day one.

    Args:
        events: what it holds, in order.
        editions: the whole chain, at least one.
        owner: whose calendar it is.
        mission: for names and places.
        alarm_min: minutes before an operator's event at which the phone rings, or None.

    Raises:
        PassplanError: what would be written is not a calendar readers agree on.
    """
    calendar = icalendar.Calendar()
    name = calendar_name(owner, mission)
    _add(calendar, "prodid", _PRODUCT)
    _add(calendar, "version", "2.0")
    _add(calendar, "name", name)
    _add(calendar, "x-wr-calname", name)
    _add(calendar, "description", _about(editions))
    _add(calendar, "last-modified", newest(editions))
    _add(calendar, "refresh-interval", _REFRESH, {"VALUE": "DURATION"})
    _add(calendar, "x-published-ttl", "PT1H")
    now = newest(editions)
    for event in events:
        rings = alarm_min if owner.person and event.entry.end_utc > now else None
        calendar.add_component(_event(event, owner, mission, rings))
    if not events:
        calendar.add_component(_nothing(editions, owner, mission))
    content = bytes(calendar.to_ical(sorted=False))
    faults = calendar_faults(content)
    if faults:
        raise PassplanError(f"the calendar of {safe(owner.key)} cannot be written: {'; '.join(faults)}")
    return content


def calendar_name(owner: Owner, mission: Mission) -> str:
    """Return what the phone proposes to call the calendar."""
    of = {"mission": "", "station": station_name(mission, owner.key), "operator": safe(owner.key)}[owner.kind]
    return ", ".join(filter(None, (f"{safe(mission.name)} contacts", of)))


def _about(editions: Sequence[IssuedPlan]) -> str:
    """Return the calendar's own text: which editions it holds, and how to follow it."""
    last = {issued.plan.horizon.week: issued for issued in editions}
    held = [
        f"Week {week}: edition {issued.plan.edition}, made {stamp(made(issued))}."
        for week, issued in sorted(last.items())
    ]
    advice = "Subscribe to this calendar; an imported copy does not follow changes. Phones may lag by a day."
    return "\n".join([*held, advice])


def _event(event: Event, owner: Owner, mission: Mission, alarm_min: int | None) -> icalendar.Event:
    """Return one contact as a VEVENT."""
    entry = event.entry
    title = f"CANCELLED: {entry.title}" if event.cancelled else entry.title
    station = station_of(mission, entry.contact.station)
    item = icalendar.Event()
    _add(item, "uid", _uid(owner, mission, entry.contact.id))
    _stamps(item, made(event.changed), event.sequence)
    _add(item, "dtstart", entry.begin_utc)
    _add(item, "dtend", entry.end_utc)
    _add(item, "summary", title)
    _add(item, "status", "CANCELLED" if event.cancelled else "CONFIRMED")
    _add(item, "transp", "OPAQUE" if owner.person and not event.cancelled else "TRANSPARENT")
    _add(item, "location", station_name(mission, entry.contact.station))
    if station:
        _add(item, "geo", (station.latitude_deg, station.longitude_deg))
    _add(item, "categories", [safe(entry.contact.satellite)])
    _add(item, "description", _text(event))
    if alarm_min is not None and not event.cancelled:
        alarm = icalendar.Alarm()
        _add(alarm, "action", "DISPLAY")
        _add(alarm, "trigger", timedelta(minutes=-alarm_min))
        _add(alarm, "description", title)
        item.add_component(alarm)
    return item


def _text(event: Event) -> str:
    """Return the text of an event; the last line lets a stale copy be recognised."""
    issued = event.changed
    which = f"edition {issued.plan.edition} of week {issued.plan.horizon.week}, made {stamp(made(issued))}"
    if not event.cancelled:
        return f"{event.entry.text}\n\nLast changed in {which}."
    heirs = f"It is now with {' and '.join(map(safe, event.now_with))}." if event.now_with else ""
    why = " ".join(filter(None, (f"CANCELLED in {which}: please do not come for this contact.", heirs)))
    return f"{why}\n\nIt was: {event.entry.text}"


def _nothing(editions: Sequence[IssuedPlan], owner: Owner, mission: Mission) -> icalendar.Event:
    """Return the all-day event of a calendar that would be empty, as RFC 5545 (3.6) allows no empty one."""
    latest = editions[-1]
    week = latest.plan.horizon.week
    first = next(issued for issued in editions if issued.plan.horizon.week == week)
    monday = latest.plan.horizon.start.date()
    item = icalendar.Event()
    _add(item, "uid", _uid(owner, mission, f"none {week}"))
    _stamps(item, made(first), 0)
    _add(item, "dtstart", monday)
    _add(item, "dtend", monday + timedelta(days=7))
    _add(item, "summary", f"{safe(mission.name)}: no contacts planned")
    _add(item, "status", "CONFIRMED")
    _add(item, "transp", "TRANSPARENT")
    _add(item, "description", f"Nothing is planned in week {week}. Contacts appear here when they are.")
    return item


def _stamps(item: icalendar.Event, changed: datetime, sequence: int) -> None:
    """Add what tells readers which of two versions is the newer one."""
    _add(item, "dtstamp", changed)
    _add(item, "last-modified", changed)
    _add(item, "sequence", sequence)


def _uid(owner: Owner, mission: Mission, name: str) -> str:
    """Return the lasting name of an event: from mission, calendar and contact, never from time or edition.

    Each calendar has its own, as the same contact reads differently in each and counts
    its changes on its own.
    """
    whole = f"{mission.name}\n{owner.kind}\n{owner.key}\n{name}"
    return f"{hashlib.sha256(whole.encode()).hexdigest()[:24]}@{_UID_DOMAIN}"


def _add(
    item: icalendar.Component, name: str, value: object, parameters: dict[str, str] | None = None
) -> None:
    """Add one property."""
    item.add(name, value, parameters or {})
