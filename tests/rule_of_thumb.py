"""Best elevation first: how a careful person plans a week by hand; the yardstick of the optimiser.

Passes by highest elevation, each taken whole if satellite, station, the least-loaded free
operator and the battery allow; then commands by deadline into the earliest window that
holds them; data by weight. The charge wanted at the end and the margin on the floors are
the optimiser's own. Payload sessions are not run, and a command that asks for two people
is not placed. Worth is not counted here: who compares lays the choices out as any plan.
"""

import math
from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, Span
from passplan.domain.people import Operator
from passplan.domain.plan import Carried, Slot
from passplan.domain.requests import Command, occurrences
from passplan.domain.satellite import Satellite
from tests.rough_sky import UsablePass
from tests.thumb_ledgers import ChargeLedger, Draw, StoreLedger
from tests.thumb_people import People


@dataclass(frozen=True, kw_only=True, slots=True)
class Choice:
    """One pass taken, from its first second to its last.

    Attributes:
        index: of the pass in the list that was given.
        uplink: one slot a command, in order, all before the downlink.
        downlink: None when nothing is left to bring down.
        carried: bytes by kind and day made if the contact works.
    """

    index: int
    operator: str
    uplink: tuple[Slot, ...]
    downlink: Slot | None
    carried: tuple[Carried, ...]


def best_elevation_first(
    mission: Mission,
    horizon: Horizon,
    passes: Sequence[UsablePass],
    shadows: Mapping[str, Sequence[Span]],
    start_fraction: Mapping[str, float],
    *,
    margin_fraction: float = 0.005,
    uplink_by_peak: bool = False,
) -> list[Choice]:
    """Return the passes taken, in order of start.

    Args:
        mission: people, batteries, commands.
        horizon: week and look-ahead.
        passes: to choose from, in any order.
        shadows: satellite name to its spans in shadow, s of the week.
        start_fraction: satellite name to the charge at the start of the horizon.
        margin_fraction: of the capacity, kept above every floor.
        uplink_by_peak: let no uplink slot reach beyond the peak of its pass.
    """
    ledgers = {
        sat.name: ChargeLedger(
            sat,
            horizon,
            shadows=shadows.get(sat.name, ()),
            start_fraction=start_fraction[sat.name],
            end_fraction=mission.planning.end_fraction,
            margin_fraction=margin_fraction,
        )
        for sat in mission.satellites
    }
    week = _Week(mission, horizon, passes, ledgers)
    for index in sorted(range(len(passes)), key=lambda one: _rank(passes[one])):
        week.take(index)
    waiting = sorted(
        occurrences(mission.commands, horizon), key=lambda one: (not one.must, week.window(one)[1])
    )
    while ready := next((c for c in waiting if week.in_turn(c)), None):
        waiting.remove(ready)
        week.place(ready, by_peak=uplink_by_peak)
    return week.choices()


def _rank(one: UsablePass) -> tuple[float, int, str, str]:
    return -one.max_elevation_deg, one.start_s, one.station, one.satellite


class _Week:
    """The week as it fills."""

    def __init__(
        self,
        mission: Mission,
        horizon: Horizon,
        passes: Sequence[UsablePass],
        ledgers: Mapping[str, ChargeLedger],
    ) -> None:
        self._mission, self._horizon, self._passes, self._ledgers = mission, horizon, passes, ledgers
        self._commands = {one.name: one for one in occurrences(mission.commands, horizon)}
        self._people = People(mission, horizon)
        self._holder: dict[int, Operator] = {}
        self._uplink: dict[int, list[Slot]] = {}
        self._least_charge: dict[int, float] = {}
        self._contact_of: dict[str, int] = {}

    def in_order(self) -> list[Command]:
        """Return the commands, musts first, then by deadline, then as in the file."""
        return sorted(self._commands.values(), key=lambda one: (not one.must, self.window(one)[1]))

    def take(self, index: int) -> None:
        """Take a pass whole if satellite, station, somebody and the battery allow."""
        one, least_s = self._passes[index], self._mission.planning.least_contact_s
        if one.end_s - one.start_s < least_s or not self._clear(one):
            return
        free = self._people.free(one)
        if free is None:
            return
        self._holder[index], self._uplink[index] = free, []
        if self._powered(one.satellite):
            self._people.add(free, one)
        else:
            del self._holder[index], self._uplink[index]

    def in_turn(self, command: Command) -> bool:
        """Return whether all a command waits for is placed."""
        return all(link.command in self._contact_of for link in command.after)

    def window(self, command: Command) -> Span:
        """Return earliest moment and deadline (s); those not told are the ends of the horizon."""
        earliest, deadline = command.earliest_utc, command.deadline_utc
        return (
            0.0 if earliest is None else self._horizon.seconds(earliest),
            self._horizon.end_s if deadline is None else self._horizon.seconds(deadline),
        )

    def place(self, command: Command, *, by_peak: bool) -> None:
        """Place a command in the earliest contact that holds it, if any."""
        if command.two_people:
            return
        for index in sorted(self._holder, key=lambda one: self._passes[one].start_s):
            slot = self._slot(command, index, by_peak=by_peak)
            if slot is None:
                continue
            before = self._least_charge.get(index, 0.0)
            self._uplink[index].append(slot)
            self._least_charge[index] = max(before, command.least_charge_fraction or 0.0)
            if self._powered(command.satellite):
                self._contact_of[command.name] = index
                return
            self._uplink[index].pop()
            self._least_charge[index] = before

    def choices(self) -> list[Choice]:
        """Return the passes in which something goes up or comes down, in order of start."""
        found = [
            Choice(
                index=index,
                operator=self._holder[index].handle,
                uplink=tuple(self._uplink[index]),
                downlink=downlink,
                carried=carried,
            )
            for satellite in self._mission.satellites
            for index, downlink, carried in self._played(satellite)
            if downlink or self._uplink[index]
        ]
        return sorted(found, key=lambda one: (self._passes[one.index].start_s, one.index))

    def _clear(self, one: UsablePass) -> bool:
        """Return whether satellite and transmitting station are free for a pass."""
        station = self._mission.station(one.station)
        taken = [self._passes[index] for index in self._holder]
        gap_s = self._mission.planning.hand_over_gap_s
        return station.radio.transmits and not any(
            (other.satellite == one.satellite and _meet(one, other, gap_s))
            or (other.station == one.station and _meet(one, other, station.set_up_s))
            for other in taken
        )

    def _slot(self, command: Command, index: int, *, by_peak: bool) -> Slot | None:
        """Return where a command fits behind what already goes up in a contact, None where it does not."""
        one, planning = self._passes[index], self._mission.planning
        station = self._mission.station(one.station)
        if one.satellite != command.satellite or (command.stations and one.station not in command.stations):
            return None
        earliest_s, deadline_s = self.window(command)
        last_s = min(one.end_s - planning.close_s, deadline_s, one.peak_s if by_peak else math.inf)
        first_s = max([one.start_s + planning.acquire_s, earliest_s, *(s.end_s for s in self._uplink[index])])
        for link in command.after:
            other = self._passes[self._contact_of[link.command]]
            if other.start_s > one.start_s or (link.order == "after_contact" and other is one):
                return None
        least_deg = max(station.least_transmit_elevation_deg, command.least_elevation_deg or -90.0)
        length_s, _ = exchange(command, self._mission.satellite(command.satellite))
        high = one.elevation_deg >= least_deg
        for start_s in range(math.ceil(first_s), math.floor(last_s) - length_s + 1):
            begin = start_s - one.start_s
            if high[begin : begin + length_s + 1].all():
                return Slot(kind="uplink", start_s=start_s, end_s=start_s + length_s, command=command.name)
        return None

    def _played(self, satellite: Satellite) -> Iterator[tuple[int, Slot | None, tuple[Carried, ...]]]:
        """Give (pass index, downlink, bytes) of each contact of a satellite, in order of start."""
        store, planning = StoreLedger(satellite, self._mission.worth), self._mission.planning
        mine = [index for index in self._holder if self._passes[index].satellite == satellite.name]
        for index in sorted(mine, key=lambda i: self._passes[i].start_s):
            one = self._passes[index]
            first_s = max(
                [math.ceil(one.start_s + planning.acquire_s), *(s.end_s for s in self._uplink[index])]
            )
            last_s = math.floor(one.end_s - planning.close_s)
            rate = one.rate_byte_s[first_s - one.start_s : max(first_s, last_s) - one.start_s]
            closes = rate.nonzero()[0]
            if not len(closes):
                yield index, None, ()
                continue
            first_s, rate = first_s + int(closes[0]), rate[closes[0] : closes[-1] + 1]
            success = self._mission.success_fraction(self._mission.station(one.station))
            carried = store.bring_down(first_s, float(rate.sum()), success)
            down = sum(part.byte for part in carried)
            needed_s = int((rate.cumsum() < down * (1.0 - 1e-9)).sum()) + 1 if down else 0
            slot = Slot(kind="downlink", start_s=first_s, end_s=first_s + needed_s) if needed_s else None
            yield index, slot, carried

    def _powered(self, name: str) -> bool:
        """Return whether a satellite's battery bears what it has been given."""
        satellite = self._mission.satellite(name)
        draws = []
        for index, downlink, _ in self._played(satellite):
            spans = [(float(downlink.start_s), float(downlink.end_s))] if downlink else []
            for slot in self._uplink[index]:
                _, reply_s = exchange(self._commands[slot.command], satellite)
                spans.append((slot.end_s - reply_s, float(slot.end_s)))
            start_s, least = self._passes[index].start_s, self._least_charge.get(index, 0.0)
            draws.append(Draw(start_s=start_s, transmit=tuple(spans), least_charge_fraction=least))
        return self._ledgers[name].allows(draws)


def exchange(command: Command, satellite: Satellite) -> tuple[int, float]:
    """Return (whole seconds of a command's exchange, seconds the satellite answers at their end)."""
    radio, framing = satellite.radio, satellite.radio.framing
    growth = 8.0 * (1.0 + framing.stuffing_fraction)
    around = 14 + 7 * framing.digipeaters + 1 + 1 + 2
    empty_bit = 16.0 + growth * around
    frames = math.ceil(command.length_byte / framing.information_byte)
    up_s = framing.keying_delay_s + (frames * empty_bit + growth * command.length_byte) / radio.bit_rate_bit_s
    reply_s = framing.keying_delay_s + (empty_bit + growth * framing.information_byte) / radio.bit_rate_bit_s
    times = 1.0 + radio.expected_repeats
    told = command.exchange_s
    length_s = math.ceil(times * (up_s + reply_s + 2.0 * radio.turn_round_s) if told is None else told)
    return length_s, min(times * reply_s, float(length_s))


def _meet(one: UsablePass, other: UsablePass, gap_s: float) -> bool:
    return one.start_s < other.end_s + gap_s and other.start_s < one.end_s + gap_s
