"""Below the contacts: commands, sessions, data, people, battery and silence."""

from collections.abc import Iterable

from passplan.domain.mission import Mission
from passplan.domain.plan import CommandOutcome, Plan
from passplan.render.typeset import BROKEN, THIN, Column, Page
from passplan.render.words import (
    charge,
    clock,
    day,
    day_clock,
    duration,
    percent,
    safe,
    size,
)

_MOST_NAME = 28


def add_account(page: Page, plan: Plan, mission: Mission) -> None:
    """Add every section that has something to say, in the order in which people ask."""
    _commands(page, plan)
    _sessions(page, plan)
    _data(page, plan)
    _people(page, plan)
    page.line()
    _battery(page, plan)
    _silence(page, plan, mission)


def _commands(page: Page, plan: Plan) -> None:
    placed = [each for each in plan.commands if each.placed]
    missing = [each for each in plan.commands if not each.placed]
    if placed:
        page.heading("Commands placed")
        moments = [_sent_s(plan, each) for each in placed]
        ordered = sorted(zip(moments, placed, strict=True), key=lambda pair: (pair[0], pair[1].name))
        utc = plan.horizon.utc
        page.table(
            [
                Column(heading="", cells=tuple(safe(each.name) for _, each in ordered), least=_MOST_NAME),
                Column(heading="", cells=tuple("must" if each.must else "" for _, each in ordered), rank=1),
                Column(heading="", cells=tuple(safe(each.contact) for _, each in ordered)),
                Column(heading="", cells=tuple(day(utc(at)) for at, _ in ordered), rank=2),
                Column(heading="", cells=tuple(f"{clock(utc(at), seconds=True)} UTC" for at, _ in ordered)),
            ]
        )
    if missing:
        page.heading("Commands not placed")
        widest = _label_width(safe(each.name) for each in missing)
        for each in missing:
            must = "a must; " if each.must else ""
            page.items(safe(each.name), must + _reason(each), widest, BROKEN if each.must else "")


def _reason(outcome: CommandOutcome) -> str:
    """Return why a command is not placed."""
    later = "left for next week, it goes up in the hours looked ahead" if outcome.left_for_next_week else ""
    return safe("; ".join(filter(None, (later, outcome.reason)))) or "no reason was recorded"


def _sent_s(plan: Plan, outcome: CommandOutcome) -> float:
    """Return the second at which a placed command's slot begins."""
    for contact in plan.all_contacts:
        for slot in contact.slots:
            if contact.id == outcome.contact and slot.command == outcome.name:
                return slot.start_s
    return 0.0


def _sessions(page: Page, plan: Plan) -> None:
    if not plan.sessions:
        return
    page.heading("Payload sessions")
    widest = _label_width(safe(each.name) for each in plan.sessions)
    for each in sorted(plan.sessions, key=lambda one: (one.start_s is None, one.start_s or 0, one.name)):
        if each.start_s is None or each.end_s is None:
            page.items(
                safe(each.name), f"does not run: {safe(each.reason) or 'no reason was recorded'}", widest
            )
            continue
        begin, end = plan.horizon.utc(each.start_s), plan.horizon.utc(each.end_s)
        ahead = ", in the hours looked ahead" if each.in_lookahead else ""
        page.items(safe(each.name), f"{day(begin)} {clock(begin)}-{clock(end)} UTC{ahead}", widest)


def _data(page: Page, plan: Plan) -> None:
    if not plan.data:
        return
    page.heading("Data, as expected with each contact's chance of success")
    several = len({report.satellite for report in plan.data}) > 1
    columns = [Column(heading="", cells=tuple(safe(report.kind) for report in plan.data), least=10)]
    if several:
        columns.append(
            Column(heading="satellite", cells=tuple(safe(report.satellite) for report in plan.data), least=8)
        )
    weeks = tuple(_weeks(report.backlog_weeks, report.on_board_end_byte) for report in plan.data)
    figures = (
        ("at start", tuple(_some(report.on_board_start_byte) for report in plan.data), 2),
        ("made", tuple(_some(report.made_byte) for report in plan.data), 3),
        ("down", tuple(_some(report.down_byte) for report in plan.data), 0),
        ("lost", tuple(_some(report.lost_byte) for report in plan.data), 1),
        ("left", tuple(_some(report.on_board_end_byte) for report in plan.data), 0),
        ("clears in", weeks, 0),
    )
    columns += [Column(heading=name, cells=cells, right=True, rank=rank) for name, cells, rank in figures]
    page.table(columns)


def _some(byte: float) -> str:
    """Return an amount of data, "-" for none."""
    return size(byte) if byte >= 0.5 else "-"


def _weeks(backlog_weeks: float | None, left_byte: float) -> str:
    """Return how long a backlog takes at this week's rate."""
    if left_byte < 0.5:
        return "-"
    if backlog_weeks is None:
        return "never"
    return f"{backlog_weeks:.1f} weeks"


def _people(page: Page, plan: Plan) -> None:
    if not plan.shares:
        return
    page.heading("People")
    page.table(
        [
            Column(heading="", cells=tuple(safe(share.operator) for share in plan.shares), least=10),
            Column(heading="contacts", cells=tuple(f"{share.contacts}" for share in plan.shares), right=True),
            Column(
                heading="sittings",
                cells=tuple(f"{share.sittings}" for share in plan.shares),
                right=True,
                rank=2,
            ),
            Column(
                heading="on duty", cells=tuple(_minutes(share.duty_min) for share in plan.shares), right=True
            ),
            Column(
                heading="at night",
                cells=tuple(_minutes(share.night_min) for share in plan.shares),
                right=True,
            ),
            Column(
                heading="offered",
                cells=tuple(_minutes(share.offered_min) for share in plan.shares),
                right=True,
                rank=1,
            ),
            Column(
                heading="used of offered",
                cells=tuple(
                    percent(share.duty_min / share.offered_min) if share.offered_min > 0.0 else "-"
                    for share in plan.shares
                ),
                right=True,
                rank=3,
            ),
        ]
    )


def _minutes(minutes: float) -> str:
    """Return minutes as a duration, "-" for none."""
    return duration(60.0 * minutes) if minutes >= 0.5 else "-"


def _battery(page: Page, plan: Plan) -> None:
    for battery in plan.batteries:
        whose = f" of {safe(battery.satellite)}" if len(plan.batteries) > 1 else ""
        at = plan.horizon.utc(battery.lowest_s)
        guess = ", assumed as there is no telemetry" if battery.start_assumed else ""
        page.sentences(
            f"Battery{whose}: lowest {charge(battery.lowest_fraction)} at {day_clock(at)} "
            f"(floor {charge(battery.floor_fraction)});",
            f"{charge(battery.start_fraction)} at the start{guess};",
            f"{charge(battery.end_fraction)} when the look-ahead ends "
            f"(wanted {charge(battery.end_wanted_fraction)}).",
        )
        if battery.floor_in_force_fraction < battery.floor_fraction:
            page.sentences(
                f"With no contact at all it would fall to {charge(battery.floor_in_force_fraction)}:",
                "that is the floor in force.",
                style=BROKEN,
            )


def _silence(page: Page, plan: Plan, mission: Mission) -> None:
    limit_h = mission.planning.longest_silence_h
    for silence in plan.silences:
        whose = f" of {safe(silence.satellite)}" if len(plan.silences) > 1 else ""
        begin, end = plan.horizon.utc(silence.from_s), plan.horizon.utc(silence.to_s)
        said = (
            f"Longest silence{whose} {duration(silence.to_s - silence.from_s)} (limit {limit_h:g} h), "
            f"{day_clock(begin)} to {day_clock(end)}"
        )
        if silence.hours > limit_h:
            page.sentences(
                f"{said}: for longer than the limit nobody could silence the satellite.", style=THIN
            )
        else:
            page.sentences(f"{said}.")


def _label_width(names: Iterable[str]) -> int:
    """Return the width of the widest label, within reason."""
    return min(_MOST_NAME, max((len(name) for name in names), default=0))
