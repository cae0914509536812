"""What must hold of a week planned by hand, read again from the mission in other words.

Each check returns sentences, none when all is well. Nothing here uses what
`rule_of_thumb` and its ledgers compute with: hours are read from the clock on the wall
and charge is summed second by second.
"""

import itertools
from collections import Counter
from collections.abc import Hashable, Iterable, Iterator, Sequence
from dataclasses import dataclass
from datetime import datetime, timedelta
from zoneinfo import ZoneInfo

import numpy as np

from passplan.domain.mission import Mission
from passplan.domain.moments import WEEKDAYS, Horizon, Span
from passplan.domain.passes import Floats
from passplan.domain.people import Operator
from passplan.domain.plan import Slot
from passplan.domain.requests import Command
from passplan.domain.satellite import Satellite
from tests.rough_sky import UsablePass
from tests.rule_of_thumb import Choice

_SLACK_FRACTION = 5e-4  # of the capacity: shadows here begin and end at whole seconds
_REPLY_S = 0.53  # 0.3 s of keying and a frame of 2243 bits at 9600 bit/s


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Case:
    """A mission with its passes and shadows (by satellite name), and the charge it starts with."""

    mission: Mission
    horizon: Horizon
    passes: tuple[UsablePass, ...]
    shadows: dict[str, tuple[Span, ...]]
    start_fraction: float


def faults(case: Case, plan: Sequence[Choice]) -> list[str]:
    """Return everything wrong with a plan."""
    return [
        *(told for person in case.mission.operators for told in _people_faults(case, person, plan)),
        *_contact_faults(case, plan),
        *_command_faults(case, plan),
        *(told for sat in case.mission.satellites for told in _charge_faults(case, sat, plan)),
    ]


def _people_faults(case: Case, person: Operator, plan: Sequence[Choice]) -> Iterator[str]:
    """Give what is wrong with where and when one operator serves."""
    own = [case.passes[choice.index] for choice in plan if choice.operator == person.handle]
    for one in own:
        if not person.may_control or one.station not in person.stations:
            yield f"{person.handle} may not run a contact of {one.station}"
        begin = case.horizon.utc(one.start_s) - timedelta(minutes=person.preparation_min)
        if not _serves(person, begin, case.horizon.utc(one.end_s)):
            yield f"{person.handle} is off duty at {one.start_s}"
    begun = [case.horizon.utc(one.start_s) for one in own]
    if (
        _most(moment.astimezone(ZoneInfo(person.time_zone)).date() for moment in begun)
        > person.most_duties_day
    ):
        yield f"{person.handle} has too many duties a day"
    if _most(moment.isocalendar()[:2] for moment in begun) > person.most_duties_week:
        yield f"{person.handle} has too many duties a week"
    yield from _unrested(case.mission, person, sorted(own, key=lambda one: one.start_s))


def _most(marks: Iterable[Hashable]) -> int:
    """Return how often the most frequent mark comes."""
    return max(Counter(marks).values(), default=0)


def _serves(person: Operator, begin: datetime, end: datetime) -> bool:
    """Return whether an operator serves at every minute of [begin, end], by the clock on their wall."""
    zone = ZoneInfo(person.time_zone)
    moments = [begin + n * timedelta(minutes=1) for n in range(int((end - begin) / timedelta(minutes=1)) + 1)]
    return all(_on_duty(person, moment.astimezone(zone)) for moment in [*moments, end - timedelta(seconds=1)])


def _on_duty(person: Operator, wall: datetime) -> bool:
    if any(away.first_day <= wall.date() <= away.last_day for away in person.away):
        return False
    today, yesterday = WEEKDAYS[wall.weekday()], WEEKDAYS[wall.weekday() - 1]
    return any(
        (today in hours.days and hours.begin <= wall.time() < hours.end)
        if hours.begin < hours.end
        else (today in hours.days and wall.time() >= hours.begin)
        or (yesterday in hours.days and wall.time() < hours.end)
        for hours in person.hours
    )


def _unrested(mission: Mission, person: Operator, own: Sequence[UsablePass]) -> Iterator[str]:
    """Give a sentence for duties, in order of start, that are too close to each other."""
    for one, other in itertools.combinations(own, 2):
        free_min = (other.start_s - one.end_s) / 60.0 - person.preparation_min
        if free_min < (person.travel_min if one.station != other.station else 0.0):
            yield f"{person.handle} cannot be at {one.station} and then at {other.station}"
    sittings: list[list[UsablePass]] = []
    for one in own:
        last = sittings[-1][-1] if sittings else None
        gap_s = mission.planning.sitting_gap_h * 3600.0
        if last and last.station == one.station and one.start_s - last.start_s < gap_s:
            sittings[-1].append(one)
        else:
            sittings.append([one])
    for before, after in itertools.pairwise(sittings):
        if after[0].start_s - person.preparation_min * 60.0 - before[-1].end_s < person.rest_h * 3600.0:
            yield f"{person.handle} has no rest before {after[0].start_s}"


def _contact_faults(case: Case, plan: Sequence[Choice]) -> Iterator[str]:
    """Give contacts of one satellite or one station that come too close, and slots out of place."""
    planning = case.mission.planning
    for a, b in itertools.combinations((case.passes[choice.index] for choice in plan), 2):
        apart_s = max(a.start_s, b.start_s) - min(a.end_s, b.end_s)
        if a.satellite == b.satellite and apart_s < planning.hand_over_gap_s:
            yield f"{a.satellite} speaks with {a.station} and {b.station}"
        if a.station == b.station and apart_s < case.mission.station(a.station).set_up_s:
            yield f"{a.station} is busy at {max(a.start_s, b.start_s)}"
    for choice in plan:
        one, slots = (
            case.passes[choice.index],
            [*choice.uplink, *([choice.downlink] if choice.downlink else [])],
        )
        edges = [one.start_s + planning.acquire_s, *(t for slot in slots for t in (slot.start_s, slot.end_s))]
        if edges != sorted(edges) or edges[-1] > one.end_s - planning.close_s:
            yield f"slots of {choice.index} are out of order"
        low, high = (choice.downlink.start_s, choice.downlink.end_s) if choice.downlink else (0, 0)
        room = one.rate_byte_s[max(0, low - one.start_s) : max(0, high - one.start_s)].sum()
        if sum(part.byte for part in choice.carried) > room * (1.0 + 1e-9):
            yield f"{choice.index} brings down more than its link carries"


def _command_faults(case: Case, plan: Sequence[Choice]) -> Iterator[str]:
    """Give what is wrong with the commands that go up."""
    placed: dict[str, tuple[int, Slot]] = {}
    for choice in plan:
        for slot in choice.uplink:
            if slot.command in placed:
                yield f"{slot.command} goes up twice"
            placed[slot.command] = (choice.index, slot)
    for command in case.mission.commands:
        if command.name in placed:
            index, slot = placed[command.name]
            yield from _slot_faults(case, command, case.passes[index], slot)
            for link in command.after:
                other = placed.get(link.command)
                same = other is not None and other[0] == index
                if not other or other[1].end_s > slot.start_s or (link.order == "after_contact" and same):
                    yield f"{command.name} does not wait for {link.command}"


def _slot_faults(case: Case, command: Command, one: UsablePass, slot: Slot) -> Iterator[str]:
    """Give what is wrong with one uplink slot."""
    begin, end = case.horizon.utc(slot.start_s), case.horizon.utc(slot.end_s)
    if begin < (command.earliest_utc or begin) or end > (command.deadline_utc or end):
        yield f"{command.name} is out of its window"
    if slot.end_s - slot.start_s < (command.exchange_s or 0.0):
        yield f"{command.name} is cut short"
    least = max(
        command.least_elevation_deg or 0.0, case.mission.station(one.station).least_transmit_elevation_deg
    )
    if one.elevation_deg[slot.start_s - one.start_s : slot.end_s - one.start_s].min() < least:
        yield f"{command.name} goes up too low"
    if one.satellite != command.satellite or command.two_people:
        yield f"{command.name} cannot go up here"


def _charge_faults(case: Case, sat: Satellite, plan: Sequence[Choice]) -> Iterator[str]:
    """Give broken floors and ends, by a ledger of whole seconds."""
    own = [choice for choice in plan if case.passes[choice.index].satellite == sat.name]
    charge = _charge_fractions(case, sat, own)
    for choice in own:
        begun = charge[case.passes[choice.index].start_s]
        if begun < sat.battery.transmit_floor_fraction - _SLACK_FRACTION:
            yield f"{sat.name} is at {begun:.3f} where contact {choice.index} begins"
    floor, end = sat.battery.floor_fraction, min(case.start_fraction, case.mission.planning.end_fraction)
    if charge.min() >= floor - _SLACK_FRACTION and charge[-1] >= end - _SLACK_FRACTION:
        return
    idle = _charge_fractions(case, sat, [])
    if charge.min() < min(floor, idle.min()) - _SLACK_FRACTION:
        yield f"{sat.name} falls to {charge.min():.3f}"
    if charge[-1] < min(end, idle[-1]) - _SLACK_FRACTION:
        yield f"{sat.name} ends at {charge[-1]:.3f}"


def _charge_fractions(case: Case, sat: Satellite, plan: Sequence[Choice]) -> Floats:
    """Return the charge at every second, shape (n + 1,), one second after the other."""
    lit, keyed = np.ones(int(case.horizon.end_s)), np.zeros(int(case.horizon.end_s))
    for begin, end in case.shadows.get(sat.name, ()):
        lit[round(begin) : round(end)] = 0.0
    for choice in plan:
        if choice.downlink:
            keyed[choice.downlink.start_s : choice.downlink.end_s] = 1.0
        for slot in choice.uplink:
            keyed[slot.end_s - 1] = _REPLY_S
    battery, power = sat.battery, sat.power
    net_w = lit * power.sunlit_w - power.bus_load_w - keyed * sat.transmitter_draw_w
    step_j = np.where(net_w > 0.0, net_w * battery.charge_efficiency, net_w / battery.discharge_efficiency)
    charge = [case.start_fraction]
    for step in (step_j / battery.capacity_j).tolist():
        charge.append(min(1.0, charge[-1] + step))
    return np.array(charge)
