"""What a new edition changes for each person, to be told by whoever leads."""

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from datetime import timedelta

from rich.text import Text

from passplan.domain.mission import Mission
from passplan.domain.plan import Contact, IssuedPlan
from passplan.render.contact_words import ready_s, role
from passplan.render.event_history import made
from passplan.render.typeset import STRONG, THIN, Column, Page
from passplan.render.words import clock, count, day, safe, there, zone_of

SOON = timedelta(hours=24)  # calendars that are followed lag by up to a day


@dataclass(frozen=True, kw_only=True, slots=True)
class Change:
    """One change for one person.

    Attributes:
        kind: "new", "moved", "changed" or "dropped".
        contact: as it is now; of a dropped one, as it was.
        told: what changed, in words.
        soon: within a day of being made, so that a calendar may come too late.
    """

    person: str
    kind: str
    contact: Contact
    told: str
    soon: bool


def changes_text(editions: Sequence[IssuedPlan], mission: Mission, width: int) -> Text:
    """Return what the last of `editions` changes against the edition of its week before it.

    Args:
        editions: the chain that `calendars` gets, at least one.
        mission: for zones and preparation.
        width: cells of the terminal.
    """
    page = Page(width)
    plan = editions[-1].plan
    title = f"Edition {plan.edition} of week {plan.horizon.week}"
    before = _before(editions)
    if before is None:
        people = len({handle for each in plan.contacts for handle in each.operators})
        said = f"{count(len(plan.contacts), 'contact')} for {count(people, 'person', 'people')}"
        page.sentences(f"{title} is the first: {said}.", style=STRONG)
        return page.text()
    changes = list(_changes(before, editions[-1], mission))
    people = len({change.person for change in changes})
    said = (
        f"{count(len(changes), 'change')} for {count(people, 'person', 'people')}"
        if changes
        else "nothing changes"
    )
    page.sentences(f"{title}: {said}.", style=STRONG)
    if any(change.soon for change in changes):
        warning = "Tell those marked by phone: the contact is less than a day off, and calendars lag."
        page.sentences(warning, style=THIN)
    if changes:
        page.line()
        _add_changes(page, changes)
    return page.text()


def _add_changes(page: Page, changes: Sequence[Change]) -> None:
    """Add the changes by person."""
    groups: dict[int, str] = {}
    for number, change in enumerate(changes):
        if change.person not in groups.values():
            groups[number] = change.person
    columns = [
        Column(heading="", cells=tuple(change.kind for change in changes)),
        Column(heading="", cells=tuple(safe(change.contact.id) for change in changes)),
        Column(heading="", cells=tuple(change.told for change in changes), least=20),
    ]
    if any(change.soon for change in changes):
        columns.insert(
            0, Column(heading="", cells=tuple("phone" if change.soon else "" for change in changes))
        )
    page.table(columns, groups=groups)


def _before(editions: Sequence[IssuedPlan]) -> IssuedPlan | None:
    """Return the edition of the last one's week that came before it."""
    week = editions[-1].plan.horizon.week
    return next((each for each in reversed(editions[:-1]) if each.plan.horizon.week == week), None)


def _changes(before: IssuedPlan, last: IssuedPlan, mission: Mission) -> Iterator[Change]:
    """Yield the changes by person, each person's in order of time."""
    named = [person.handle for person in mission.operators]
    both = (*before.plan.contacts, *last.plan.contacts)
    named += sorted({handle for each in both for handle in each.operators} - set(named))
    for person in named:
        was = {each.id: each for each in before.plan.contacts if person in each.operators}
        now = {each.id: each for each in last.plan.contacts if person in each.operators}
        for contact in sorted((was | now).values(), key=lambda each: (each.start_s, each.id)):
            kind, told = _difference(was.get(contact.id), now.get(contact.id), last, mission, person)
            begin = last.plan.horizon.utc(ready_s(contact, mission, person))
            if kind and last.plan.horizon.utc(contact.end_s) > made(last):
                yield Change(
                    person=safe(person), kind=kind, contact=contact, told=told, soon=begin - made(last) < SOON
                )


def _difference(
    was: Contact | None, now: Contact | None, issued: IssuedPlan, mission: Mission, person: str
) -> tuple[str, str]:
    """Return the kind of a change and its words; ("", "") where nothing that matters changed."""
    if now is None:
        return "dropped", _when(was, issued, mission) if was else ""
    if was is None:
        return "new", f"{_when(now, issued, mission)}, {role(now, person, mission)}"
    if (was.start_s, was.end_s) != (now.start_s, now.end_s):
        old = issued.plan.horizon.utc(was.start_s)
        new = _when(now, issued, mission).removeprefix(f"{day(old)} ")
        return "moved", f"{day(old)} {clock(old)} becomes {new}"
    if (was.operators, was.station, was.satellite) != (now.operators, now.station, now.satellite):
        others = [safe(handle) for handle in now.operators if handle != person]
        beside = f", with {' and '.join(others)}" if others else ", alone"
        return "changed", f"{_when(now, issued, mission)}, {role(now, person, mission)}{beside}"
    return "", ""


def _when(contact: Contact, issued: IssuedPlan, mission: Mission) -> str:
    """Return "Tue 8 Dec 17:42 UTC, 17:42 Dublin"."""
    start = issued.plan.horizon.utc(contact.start_s)
    return f"{day(start)} {clock(start)} UTC, {there(start, zone_of(mission, contact.station))}"
