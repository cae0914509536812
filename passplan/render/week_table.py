"""The week on a screen: the answer first, then one line a contact, then the account."""

from collections.abc import Callable, Sequence

from rich.text import Text

from passplan.domain.mission import Mission
from passplan.domain.plan import Contact, Plan, SlotKind
from passplan.render.contact_words import kinds_down, short_command, total_down
from passplan.render.typeset import BROKEN, STRONG, THIN, Column, Page
from passplan.render.week_account import add_account
from passplan.render.week_proof import add_proof
from passplan.render.words import (
    charge,
    clock,
    count,
    day,
    degrees,
    percent,
    places,
    safe,
    size,
    there,
    there_brief,
    zone_of,
)

_SHOWN_REASONS = 3


def week_text(plan: Plan, mission: Mission, width: int) -> Text:
    """Return a stored plan as people read it.

    Args:
        plan: one edition.
        mission: for stations' names, zones and limits; what it no longer has is shown by its code.
        width: cells of the terminal; no line is wider.

    Returns:
        Plain lines with styles that only repeat the words.
    """
    page = Page(width)
    add_headline(page, plan)
    if plan.contacts:
        page.line()
        add_contacts(page, plan.contacts, plan, mission)
    page.line()
    page.rule()
    add_account(page, plan, mission)
    add_proof(page, plan)
    return page.text()


def add_headline(page: Page, plan: Plan) -> None:
    """Add what the plan is worth trusting, and the three figures asked for first."""
    names = ", ".join(safe(battery.satellite) for battery in plan.batteries) or safe(plan.mission)
    state, style = _state(plan)
    page.sentences(f"Week {plan.horizon.week}, edition {plan.edition}, {names}: {state}", style=style)
    page.sentences(*_figures(plan))
    unplaced = sorted((each for each in plan.commands if not each.placed), key=lambda each: not each.must)
    for each in unplaced[:_SHOWN_REASONS]:
        must = "a must, " if each.must else ""
        later = "left for next week" if each.left_for_next_week else ""
        reason = safe(each.reason or later or "no reason was recorded")
        style = BROKEN if each.must else ""
        page.sentences(f"Not placed: {safe(each.name)}, {must}{reason.rstrip('.')}.", style=style)
    if len(unplaced) > _SHOWN_REASONS:
        page.sentences(f"{len(unplaced) - _SHOWN_REASONS} more are not placed; the reasons stand below.")
    for notice in plan.notices:
        page.sentences(safe(notice), style=THIN)


def add_trust(page: Page, plan: Plan) -> None:
    """Add a warning where a plan is not fit to be followed; nothing where it is."""
    if plan.verdict is None or not plan.verdict.ok:
        page.sentences(f"This plan is {_state(plan)[0]}.", style=BROKEN)


def _state(plan: Plan) -> tuple[str, str]:
    """Return how far the plan can be trusted, and the style it is said in."""
    if plan.verdict is None:
        return "not verified, not to be published", BROKEN
    if not plan.verdict.ok:
        found = count(len(plan.verdict.findings), "broken rule")
        return f"NOT to be used, the second reading found {found}", BROKEN
    lacking = _lacking(plan)
    if lacking:
        how = "proven and verified" if plan.proven else "verified, not proven"
        return f"{how}, but {lacking}", BROKEN
    if not plan.proven:
        return "verified, but time ran out before the proof", THIN
    return "proven and verified", STRONG


def _lacking(plan: Plan) -> str:
    """Return what keeps the plan from being good, "" when it is."""
    if plan.good:
        return ""
    musts = sum(1 for each in plan.commands if each.must and not each.placed)
    said = [f"{count(musts, 'must')} cannot go up"] if musts else []
    if any(battery.floor_in_force_fraction < battery.floor_fraction for battery in plan.batteries):
        said.append("the battery floor is not held")
    return " and ".join(said) or "not all that must be is met"


def _figures(plan: Plan) -> list[str]:
    """Return the sentences below the headline."""
    down = sum(report.down_byte for report in plan.data)
    wanted = sum(report.on_board_start_byte + report.made_byte for report in plan.data)
    placed = sum(each.placed for each in plan.commands)
    said = [f"{count(len(plan.contacts), 'contact')}." if plan.contacts else "No contact is planned."]
    if plan.data:
        said.append(f"{size(down)} expected down of {size(wanted)} wanted.")
    if plan.commands:
        said.append(f"{placed} of {count(len(plan.commands), 'command')} up.")
    for battery in plan.batteries:
        whose = f" of {safe(battery.satellite)}" if len(plan.batteries) > 1 else ""
        lowest, floor = charge(battery.lowest_fraction), charge(battery.floor_fraction)
        said.append(f"Lowest charge{whose} {lowest} (floor {floor}).")
    if not plan.proven:
        said.append(f"Its worth is within {100.0 * plan.worth.gap_fraction:.1f} % of the best possible.")
    return said


def add_contacts(page: Page, contacts: Sequence[Contact], plan: Plan, mission: Mission) -> None:
    """Add one line a contact, by day; what has no room at this width is left out."""
    groups: dict[int, str] = {}
    for number, contact in enumerate(contacts):
        today = day(plan.horizon.utc(contact.start_s))
        if today not in groups.values():
            groups[number] = today
    if "there" in page.table(_columns(contacts, plan, mission), groups=groups):
        page.sentences(places(mission, (contact.station for contact in contacts)))


def _columns(contacts: Sequence[Contact], plan: Plan, mission: Mission) -> list[Column]:
    """Return the columns of the week, in order of reading."""
    utc = plan.horizon.utc
    several = len({battery.satellite for battery in plan.batteries}) > 1
    columns = [
        Column(heading="", cells=tuple(f"{clock(utc(c.start_s))}-{clock(utc(c.end_s))}" for c in contacts)),
        Column(heading="", cells=tuple(safe(c.id) for c in contacts)),
    ]
    if several:
        columns.append(
            Column(heading="satellite", cells=tuple(safe(c.satellite) for c in contacts), least=10)
        )
    place = tuple(there(utc(c.start_s), zone_of(mission, c.station)) for c in contacts)
    brief = tuple(there_brief(utc(c.start_s), zone_of(mission, c.station)) for c in contacts)
    commands = tuple(tuple(short_command(name) for name in c.commands) for c in contacts)
    people = tuple(tuple(map(safe, c.operators)) for c in contacts)
    kinds = tuple(kinds_down(c) for c in contacts)
    columns += [
        Column(heading="there", cells=place, brief=brief),
        Column(heading="who", cells=people, good=8),
        Column(heading="hand-over", cells=_each(contacts, _hand_over), rank=4),
        Column(
            heading="highest",
            cells=_each(contacts, lambda c: degrees(c.max_elevation_deg)),
            right=True,
            rank=3,
        ),
        Column(heading="sends", cells=_each(contacts, lambda c: _seconds(c, "uplink")), right=True, rank=6),
        Column(heading="up", cells=commands, good=9, least=8),
        Column(heading="hears", cells=_each(contacts, lambda c: _seconds(c, "downlink")), right=True, rank=6),
        Column(heading="down", cells=_each(contacts, lambda c: size(total_down(c))), right=True),
        Column(heading="of which", cells=kinds, rank=7, good=16),
        Column(
            heading="works", cells=_each(contacts, lambda c: percent(c.success_fraction)), right=True, rank=5
        ),
        Column(
            heading="charge", cells=_each(contacts, lambda c: charge(c.charge_lowest_fraction)), right=True
        ),
    ]
    return columns


def _each(contacts: Sequence[Contact], said: Callable[[Contact], str]) -> tuple[str, ...]:
    """Return one cell for each contact."""
    return tuple(said(contact) for contact in contacts)


def _seconds(contact: Contact, kind: SlotKind) -> str:
    """Return the seconds of one kind of slot, "-" for none."""
    seconds = contact.seconds_of(kind)
    return f"{seconds} s" if seconds else "-"


def _hand_over(contact: Contact) -> str:
    """Return the partners of a hand-over: "from QUA-01", "to SKE-02" or both."""
    before = f"from {safe(contact.hand_over_from)}" if contact.hand_over_from else ""
    after = f"to {safe(contact.hand_over_to)}" if contact.hand_over_to else ""
    return ", ".join(filter(None, (before, after))) or "-"
