"""Three editions of the sample week: one contact moved, one dropped, one given to somebody else."""

from collections.abc import Sequence
from dataclasses import replace
from datetime import datetime, timedelta
from typing import Any

import icalendar

from passplan.domain.plan import Contact, IssuedPlan
from tests.render.sample_week import MADE, contacts, plan

HOUR = timedelta(hours=1)


def issued(edition: int, changed: Sequence[Contact], made: datetime | None = None) -> IssuedPlan:
    made = made or MADE + (edition - 1) * HOUR
    return IssuedPlan(plan=replace(plan(), edition=edition, contacts=tuple(changed)), made_utc=made)


def moved(contact: Contact, by_s: int) -> Contact:
    slots = tuple(
        replace(each, start_s=each.start_s + by_s, end_s=each.end_s + by_s) for each in contact.slots
    )
    later = {name: getattr(contact, name) + by_s for name in ("aos_s", "tca_s", "los_s", "start_s", "end_s")}
    return replace(contact, slots=slots, **later)


def changed(**contacts_by_id: Contact | None) -> list[Contact]:
    """Return the sample's contacts with some replaced, or left out where None."""
    wanted = {name.replace("_", "-"): each for name, each in contacts_by_id.items()}
    return [found for each in contacts() if (found := wanted.get(each.id, each)) is not None]


def by_id(name: str) -> Contact:
    return next(each for each in contacts() if each.id == name)


GIVEN_AWAY = replace(by_id("QUA-04"), operators=("QX3AB",))
MOVED = moved(by_id("QUA-03"), 120)
FIRST = issued(1, contacts())
SECOND = issued(2, changed(QUA_03=MOVED, SKE_02=None))
THIRD = issued(3, changed(QUA_03=MOVED, SKE_02=None, QUA_04=GIVEN_AWAY))
CHAIN = (FIRST, SECOND, THIRD)


def events(content: bytes) -> dict[str, Any]:
    """Return the events of a file by the contact named in their text."""
    found = icalendar.Calendar.from_ical(content).events
    return {str(each["DESCRIPTION"]).partition(" Contact ")[2][:6]: each for each in found}


def blocks(content: bytes) -> dict[str, bytes]:
    """Return the bytes of each event by UID."""
    parts = [part.partition(b"END:VEVENT")[0] for part in content.split(b"BEGIN:VEVENT\r\n")[1:]]
    return {part.partition(b"UID:")[2].partition(b"\r\n")[0].decode(): part for part in parts}
