"""Ways to change one thing about a week, and the odd changes that take more than a field."""

from collections.abc import Callable
from dataclasses import replace
from datetime import UTC, datetime, timedelta
from typing import Any

from passplan.domain.moments import Outage
from passplan.domain.plan import Contact, SessionOutcome, Slot
from passplan.domain.requests import After, Window
from passplan.verify.evidence import gather
from tests.verify.good_week import HORIZON, Week, good_week, told

Change = Callable[[Week], Week]


def mission(week: Week, **fields: Any) -> Week:
    return replace(week, mission=replace(week.mission, **fields))


def plan(week: Week, **fields: Any) -> Week:
    return replace(week, plan=replace(week.plan, **fields))


def planning(**fields: Any) -> Change:
    return lambda week: mission(week, planning=replace(week.mission.planning, **fields))


def station(code: str, **fields: Any) -> Change:
    def change(week: Week) -> Week:
        kept = tuple(replace(each, **fields) if each.code == code else each for each in week.mission.stations)
        return mission(week, stations=kept)

    return change


def operator(handle: str, **fields: Any) -> Change:
    def change(week: Week) -> Week:
        kept = tuple(
            replace(one, **fields) if one.handle == handle else one for one in week.mission.operators
        )
        return mission(week, operators=kept)

    return change


def command(name: str, **fields: Any) -> Change:
    def change(week: Week) -> Week:
        kept = tuple(replace(one, **fields) if one.name == name else one for one in week.mission.commands)
        return mission(week, commands=kept)

    return change


def session(**fields: Any) -> Change:
    return lambda week: mission(week, sessions=(replace(week.mission.sessions[0], **fields),))


def battery(**fields: Any) -> Change:
    def change(week: Week) -> Week:
        satellite = week.mission.satellites[0]
        return mission(week, satellites=(replace(satellite, battery=replace(satellite.battery, **fields)),))

    return change


def radio(**fields: Any) -> Change:
    def change(week: Week) -> Week:
        satellite = week.mission.satellites[0]
        return mission(week, satellites=(replace(satellite, radio=replace(satellite.radio, **fields)),))

    return change


def closed(**fields: Any) -> Change:
    return lambda week: mission(week, satellites=(replace(week.mission.satellites[0], **fields),))


def contact(name: str, change: Callable[[Contact], Contact]) -> Change:
    def changed(week: Week) -> Week:
        kept = tuple(change(each) if each.id == name else each for each in week.plan.contacts)
        ahead = tuple(change(each) if each.id == name else each for each in week.plan.lookahead)
        return plan(week, contacts=kept, lookahead=ahead)

    return changed


def field(name: str, **fields: Any) -> Change:
    return contact(name, lambda each: replace(each, **fields))


def slots(name: str, change: Callable[[tuple[Slot, ...]], tuple[Slot, ...]]) -> Change:
    return contact(name, lambda each: replace(each, slots=change(each.slots)))


def outcome(name: str, **fields: Any) -> Change:
    def change(week: Week) -> Week:
        kept = tuple(replace(one, **fields) if one.name == name else one for one in week.plan.commands)
        return plan(week, commands=kept)

    return change


def report(**fields: Any) -> Change:
    return lambda week: plan(week, batteries=(replace(week.plan.batteries[0], **fields),))


def data(**fields: Any) -> Change:
    return lambda week: plan(week, data=(replace(week.plan.data[0], **fields), *week.plan.data[1:]))


def run(start_s: int, end_s: int | None, **fields: Any) -> Change:
    def change(week: Week) -> Week:
        moved = replace(week.plan.sessions[0], start_s=start_s, end_s=end_s, **fields)
        return plan(week, sessions=(moved,))

    return change


def both(*changes: Change) -> Change:
    """Make changes one after the other, then let the plan tell its figures anew."""

    def change(week: Week) -> Week:
        for each in changes:
            week = each(week)
        return told(week.mission, week.plan, week.elements)

    return change


def first_slots(name: str) -> tuple[Slot, ...]:
    return next(each for each in good_week().plan.all_contacts if each.id == name).slots


def at(name: str) -> Contact:
    return next(each for each in good_week().plan.all_contacts if each.id == name)


def utc(seconds: float) -> datetime:
    return HORIZON.utc(seconds)


def around(name: str) -> tuple[Outage, ...]:
    return (Outage(begin_utc=utc(at(name).start_s + 60), end_utc=utc(at(name).end_s + 3600)),)


def notch(name: str) -> Change:
    """Raise the mask to 80 deg where the satellite is in the middle of a contact, and only there."""

    def change(week: Week) -> Week:
        case = next(c for c in gather(week.mission, week.elements, week.plan).cases if c.id == name)
        middle = case.view.seconds((at(name).start_s + at(name).end_s) // 2, 0)
        azimuth = float(case.view.azimuth_deg[middle][0])
        low = [(azimuth - 1.0, 5.0), (azimuth - 0.5, 80.0), (azimuth + 0.5, 80.0), (azimuth + 1.0, 5.0)]
        return station(case.station.code, mask=tuple(low))(week)

    return change


def swapped_order(week: Week) -> Week:
    """Send the table before the clock is set, in one window."""
    acquire, clock, table, *rest = first_slots("QUA-01")
    middle = acquire.end_s + table.end_s - table.start_s
    moved = (
        replace(table, start_s=acquire.end_s, end_s=middle),
        replace(clock, start_s=middle, end_s=table.end_s),
    )
    return slots("QUA-01", lambda _: (acquire, *moved, *rest))(week)


def draining(watts: float, start: datetime, seconds: int) -> Change:
    """Let the session draw more than the array gives, so long that the cells sink deep."""
    begin = int(HORIZON.seconds(start))
    window = (Window(begin_utc=start - timedelta(hours=1), end_utc=start + timedelta(days=1)),)
    ahead = begin >= 604_800
    return both(
        session(draw_w=watts, length_s=float(seconds), windows=window),
        run(begin, begin + seconds, in_lookahead=ahead),
    )


def own_order(order: Any) -> Change:
    return command("load table", after=(After(command="set clock", order=order),))


def other_epoch(week: Week) -> Week:
    used = replace(week.plan.elements[0], epoch_s=week.plan.elements[0].epoch_s - 60.0)
    return plan(week, elements=(used,))


def twice_up(week: Week) -> Week:
    """Send the keys in a second contact as well."""
    acquire, *rest = first_slots("QUA-02")
    again = Slot(kind="uplink", start_s=acquire.end_s, end_s=acquire.end_s + 40, command="new keys")
    down = replace(rest[0], start_s=acquire.end_s + 40)
    changed = slots("QUA-02", lambda _: (acquire, again, down, *rest[1:]))(week)
    changed = field("QUA-02", carried=())(changed)
    return both()(outcome("new keys", placed=True, left_for_next_week=False)(changed))


FREE_HOUR = datetime(2026, 12, 11, 16, tzinfo=UTC)


def later_run(week: Week) -> SessionOutcome:
    """Run the camera again an hour later."""
    ran = week.plan.sessions[0]
    start = (ran.start_s or 0) + 3600
    return replace(ran, start_s=start, end_s=start + 600)


def claims_low_end(week: Week) -> Week:
    """Drain the cells at the end of the look-ahead and claim the end asked for was less."""
    late = draining(12.0, utc(HORIZON.end_s - 3600.0), 3600)(week)
    return report(end_wanted_fraction=0.5)(late)


def during_a_contact(week: Week) -> Week:
    begin = at("QUB-02").start_s + 100
    window = (Window(begin_utc=utc(begin - 10), end_utc=utc(begin + 1000)),)
    return both(session(windows=window), run(begin, begin + 600))(week)


def over_another(week: Week) -> Week:
    camera = week.mission.sessions[0]
    other = replace(camera, name="radar", makes={})
    ran = week.plan.sessions[0]
    start = ran.start_s or 0
    second = SessionOutcome(name="radar", satellite="TEASEL-1", start_s=start + 300, end_s=start + 900)
    return both()(plan(mission(week, sessions=(camera, other)), sessions=(ran, second)))


def between_stations(week: Week) -> Week:
    """Give one person the last contact in the west and the next one in the east, a day apart and far."""
    served = operator("Q1AB", travel_min=2000.0)(week)
    return field("QUB-02", operators=("Q1AB", "Q3EF"))(served)


def placed_without_slot(week: Week) -> Week:
    """Say a command is placed that has no slot anywhere."""
    wanted = replace(week.mission.commands[3], name="spare keys")
    told_of = replace(week.plan.commands[0], name="spare keys", must=False, contact="")
    return plan(
        mission(week, commands=(*week.mission.commands, wanted)), commands=(*week.plan.commands, told_of)
    )
