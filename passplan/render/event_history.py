"""What became of each contact of one calendar over the editions: new, changed, dropped, back again.

Nothing is remembered between runs. The chain of editions is walked from its beginning
each time, and so the same chain always gives the same numbers (RFC 5545, 3.8.7.4:
SEQUENCE starts at 0 and rises with each significant change).
"""

from collections.abc import Sequence
from dataclasses import dataclass, replace
from datetime import UTC, datetime, timedelta

from passplan.domain.mission import Mission
from passplan.domain.plan import Contact, IssuedPlan
from passplan.render.event_words import Entry, Owner, entry

KEPT_FINISHED = timedelta(days=7)


@dataclass(frozen=True, kw_only=True, slots=True)
class Event:
    """One contact in one calendar after the last edition.

    Attributes:
        entry: what it says; of a cancelled one, what it last said.
        sequence: significant changes so far.
        changed: the edition in which a byte of it last changed.
        cancelled: dropped, or given to somebody else.
        now_with: who has a cancelled contact instead, () for nobody.
    """

    entry: Entry
    sequence: int
    changed: IssuedPlan
    cancelled: bool = False
    now_with: tuple[str, ...] = ()


def history(editions: Sequence[IssuedPlan], owner: Owner, mission: Mission) -> list[Event]:
    """Return the events of one calendar after the last of `editions`, by begin and then contact id.

    A contact that an edition of its own week leaves out is cancelled, unless it was over
    when that edition was made. Cancelled ones stay until their end has passed, finished
    ones for seven days; both are reckoned from the newest edition, as no clock is read here.
    """
    events: dict[str, Event] = {}
    for issued in editions:
        mine = [contact for contact in issued.plan.contacts if owner.takes_part(contact)]
        for contact in mine:
            told = entry(contact, issued.plan, owner, mission)
            events[contact.id] = _advanced(events.get(contact.id), told, issued)
        missing = set(events) - {contact.id for contact in mine}
        for name in missing:
            events[name] = _left_out(events[name], issued)
    now = newest(editions)
    kept = [event for event in events.values() if event.entry.end_utc > _oldest(event, now)]
    return sorted(kept, key=lambda event: (event.entry.begin_utc, event.entry.contact.id))


def newest(editions: Sequence[IssuedPlan]) -> datetime:
    """Return when the newest edition was made, UTC in whole seconds."""
    return max(made(issued) for issued in editions)


def made(issued: IssuedPlan) -> datetime:
    """Return when an edition was made, UTC in whole seconds."""
    return issued.made_utc.astimezone(UTC).replace(microsecond=0)


def _advanced(before: Event | None, told: Entry, issued: IssuedPlan) -> Event:
    """Return the event of a contact that is in this edition."""
    if before is None:
        return Event(entry=told, sequence=0, changed=issued)
    if before.cancelled or before.entry.matters != told.matters:
        return Event(entry=told, sequence=before.sequence + 1, changed=issued)
    if before.entry.shown != told.shown:
        return Event(entry=told, sequence=before.sequence, changed=issued)
    return before


def _left_out(event: Event, issued: IssuedPlan) -> Event:
    """Return the event of a contact that is not, or no longer ours, in this edition."""
    over = event.entry.end_utc <= made(issued)
    if event.cancelled or over or event.entry.week != issued.plan.horizon.week:
        return event
    others: dict[str, Contact] = {contact.id: contact for contact in issued.plan.contacts}
    heir = others.get(event.entry.contact.id)
    return replace(
        event,
        sequence=event.sequence + 1,
        changed=issued,
        cancelled=True,
        now_with=heir.operators if heir else (),
    )


def _oldest(event: Event, now: datetime) -> datetime:
    """Return the moment after which an event must end to be kept."""
    return now if event.cancelled else now - KEPT_FINISHED
