"""One day and one contact on a screen: who does what, second by second."""

from datetime import date

from rich.text import Text

from passplan.domain.errors import PassplanError
from passplan.domain.mission import Mission
from passplan.domain.moments import local, place_name
from passplan.domain.plan import Contact, Plan
from passplan.render.contact_words import (
    cautions,
    down_words,
    partner,
    ready_s,
    sends,
    timeline,
    up_words,
    who,
)
from passplan.render.typeset import STRONG, Column, Page
from passplan.render.week_table import add_contacts, add_trust
from passplan.render.words import (
    charge,
    clock,
    count,
    day,
    duration,
    listed,
    offset,
    percent,
    safe,
    station_name,
    there,
    there_brief,
    zone_of,
)

_CLOSE_NAMES = 8


def day_text(plan: Plan, mission: Mission, day_utc: date, width: int) -> Text:
    """Return one UTC day of a plan: its contacts in a table, then each second by second.

    Args:
        plan: one edition.
        mission: for names and zones.
        day_utc: a day of the plan's week.
        width: cells of the terminal.

    Raises:
        PassplanError: the day is not one of the plan's week.
    """
    first = plan.horizon.start.date()
    if not 0 <= (day_utc - first).days < 7:
        last = plan.horizon.utc(6 * 86_400.0).date()
        told = f"{day_utc} is not a day of week {plan.horizon.week}; name one from {first} to {last}"
        raise PassplanError(told)
    today = [each for each in plan.contacts if plan.horizon.utc(each.start_s).date() == day_utc]
    page = Page(width)
    said = count(len(today), "contact") if today else "no contact is planned"
    title = f"{day(day_utc)} {day_utc.year}, week {plan.horizon.week}, edition {plan.edition}: {said}"
    page.sentences(title, style=STRONG)
    add_trust(page, plan)
    if today:
        page.line()
        add_contacts(page, today, plan, mission)
    for contact in today:
        page.line()
        page.rule()
        _add_contact(page, contact, plan, mission)
    _add_cautions(page, today, mission)
    return page.text()


def contact_text(plan: Plan, mission: Mission, contact_id: str, width: int) -> Text:
    """Return one contact of a plan, second by second, in UTC and in the station's local time.

    Args:
        plan: one edition.
        mission: for names, zones and preparation minutes.
        contact_id: as people type it; capitals do not matter.
        width: cells of the terminal.

    Raises:
        PassplanError: the plan has no such contact; names those it has.
    """
    wanted = contact_id.strip().upper()
    found = next((contact for contact in plan.contacts if contact.id.upper() == wanted), None)
    if found is None:
        raise PassplanError(_no_contact(plan, contact_id))
    page = Page(width)
    _add_contact(page, found, plan, mission)
    add_trust(page, plan)
    _add_cautions(page, [found], mission)
    return page.text()


def _no_contact(plan: Plan, wanted: str) -> str:
    """Return what to say when a contact is not in the plan."""
    station = wanted.strip().upper().partition("-")[0]
    near = [each.id for each in plan.contacts if each.station == station] or [
        each.id for each in plan.contacts
    ]
    more = f" and {len(near) - _CLOSE_NAMES} more" if len(near) > _CLOSE_NAMES else ""
    has = f"there are {', '.join(near[:_CLOSE_NAMES])}{more}" if near else "it has no contacts at all"
    return f"{safe(wanted)!r} is not a contact of week {plan.horizon.week}, edition {plan.edition}; {has}"


def _add_contact(page: Page, contact: Contact, plan: Plan, mission: Mission) -> None:
    """Add one contact: headline, timeline, what goes up and comes down, the partners."""
    utc, zone = plan.horizon.utc, zone_of(mission, contact.station)
    start, ready = utc(contact.start_s), utc(ready_s(contact, mission))
    place = station_name(mission, contact.station)
    page.sentences(
        f"{safe(contact.id)}, {day(start)}: {who(contact, mission)},",
        f"{place} to {safe(contact.satellite)}"
        if sends(contact, mission)
        else f"{safe(contact.satellite)} at {place}",
        style=STRONG,
    )
    page.sentences(
        f"Be ready at {clock(ready)} UTC, {there(ready, zone)}.",
        f"The contact lasts {duration(contact.end_s - contact.start_s)}.",
    )
    page.line()
    _add_timeline(page, contact, plan, mission)
    page.line()
    page.sentences(up_words(contact, mission))
    page.sentences(down_words(contact))
    page.sentences(
        f"It works with a chance of {percent(contact.success_fraction)}.",
        f"Charge {charge(contact.charge_start_fraction)} at the start,",
        f"lowest {charge(contact.charge_lowest_fraction)}.",
    )
    for before in (True, False):
        page.sentences(partner(contact, plan, mission, before=before))
    if contact.listeners:
        page.sentences(
            f"Listening along: {listed(station_name(mission, code) for code in contact.listeners)}."
        )


def _add_timeline(page: Page, contact: Contact, plan: Plan, mission: Mission) -> None:
    """Add the contact's moments in order, in UTC and in local time."""
    zone = zone_of(mission, contact.station)
    moments = timeline(contact, mission)
    utc = [plan.horizon.utc(moment.start_s) for moment in moments]
    lengths = tuple("" if each.end_s is None else f"{each.end_s - each.start_s:.0f} s" for each in moments)
    page.table(
        [
            Column(heading="UTC", cells=tuple(clock(at, seconds=True) for at in utc)),
            Column(heading=place_name(zone), cells=tuple(there_brief(at, zone, seconds=True) for at in utc)),
            Column(heading="", cells=lengths, right=True),
            Column(heading="", cells=tuple(moment.what for moment in moments), least=16),
            Column(heading="", cells=tuple(moment.look for moment in moments), good=12),
        ]
    )
    here = local(utc[0], zone)
    page.sentences(f"{place_name(zone)} is {zone}, {offset(here, zone)} on that day.")


def _add_cautions(page: Page, contacts: list[Contact], mission: Mission) -> None:
    """Add what people at the antennas have to mind, once."""
    said = [caution for contact in contacts for caution in cautions(contact, mission)]
    if said:
        page.line()
    for caution in dict.fromkeys(said):
        page.sentences(caution)
