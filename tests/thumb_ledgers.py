"""Battery and store as the rule of thumb keeps them: plain arithmetic, no optimiser."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np

from passplan.domain.constants import DAY_S
from passplan.domain.mission import Worth
from passplan.domain.moments import Horizon, Span
from passplan.domain.passes import Floats
from passplan.domain.plan import Carried
from passplan.domain.satellite import DataKind, Partition, Satellite


@dataclass(frozen=True, kw_only=True, slots=True)
class Draw:
    """What one contact asks of the battery.

    Attributes:
        start_s: where it begins; the transmit floor holds there.
        transmit: spans (s) in which the transmitter is keyed.
        least_charge_fraction: of the capacity at its start, as its commands want it.
    """

    start_s: float
    transmit: tuple[Span, ...]
    least_charge_fraction: float = 0.0


class ChargeLedger:
    """The charge of one satellite, exact between changes of power."""

    def __init__(
        self,
        satellite: Satellite,
        horizon: Horizon,
        *,
        shadows: Sequence[Span],
        start_fraction: float,
        end_fraction: float,
        margin_fraction: float,
    ) -> None:
        self._satellite, self._shadows, self._end_s = satellite, list(shadows), horizon.end_s
        battery = satellite.battery
        self._full_j = battery.capacity_j
        self._start_j = start_fraction * self._full_j
        _, idle_j = self.trace([])
        self._floor_j = min((battery.floor_fraction + margin_fraction) * self._full_j, float(idle_j.min()))
        self._transmit_floor_j = (battery.transmit_floor_fraction + margin_fraction) * self._full_j
        end_j = (end_fraction + margin_fraction) * self._full_j
        self._end_j = min(self._start_j, end_j, float(idle_j[-1]))

    def trace(self, draws: Iterable[Draw]) -> tuple[Floats, Floats]:
        """Return (seconds, joules) at every change of power and every start, both of shape (n,).

        The surplus that a full battery cannot take is what the sum has risen above
        full so far, so no loop is needed.
        """
        asked = list(draws)
        transmit = [span for draw in asked for span in draw.transmit]
        edges = [0.0, self._end_s, *(draw.start_s for draw in asked)]
        edges += [moment for span in (*self._shadows, *transmit) for moment in span]
        seconds = np.unique(np.clip(edges, 0.0, self._end_s))
        middle = (seconds[1:] + seconds[:-1]) / 2.0
        sat, battery = self._satellite, self._satellite.battery
        shaded, keyed = _inside(middle, self._shadows), _inside(middle, transmit)
        net_w = np.where(shaded, -sat.idle_shadow_w, sat.power.sunlit_w - sat.idle_sun_w)
        net_w = net_w - np.where(keyed, sat.transmitter_draw_w, 0.0)
        limit_w = np.inf if battery.charge_limit_w is None else battery.charge_limit_w
        into_w = battery.charge_efficiency * np.minimum(net_w, limit_w)
        rate_w = np.where(net_w > 0.0, into_w, net_w / battery.discharge_efficiency)
        free_j = self._start_j + np.concatenate(([0.0], np.cumsum(rate_w * np.diff(seconds))))
        surplus_j = np.maximum.accumulate(np.maximum(0.0, free_j - self._full_j))
        return seconds, free_j - surplus_j

    def allows(self, draws: Iterable[Draw]) -> bool:
        """Return whether floors, discharge limit and end condition hold with these contacts."""
        asked = list(draws)
        if not all(self._discharge_allowed(draw) for draw in asked):
            return False
        seconds, charge_j = self.trace(asked)
        if charge_j.min() < self._floor_j or charge_j[-1] < self._end_j:
            return False
        wanted_j = [max(self._transmit_floor_j, draw.least_charge_fraction * self._full_j) for draw in asked]
        there_j = charge_j[np.searchsorted(seconds, [draw.start_s for draw in asked])]
        return bool(np.all(there_j >= wanted_j))

    def _discharge_allowed(self, draw: Draw) -> bool:
        limit_w = self._satellite.battery.discharge_limit_w
        load_w = self._satellite.idle_shadow_w + self._satellite.transmitter_draw_w
        if limit_w is None or load_w <= limit_w:
            return True
        return not any(a < dark[1] and dark[0] < b for a, b in draw.transmit for dark in self._shadows)


class StoreLedger:
    """What lies on board of one satellite, by kind and, where a kind ages, by day made."""

    def __init__(self, satellite: Satellite, worth: Worth) -> None:
        self._store, self._worth = satellite.store, worth
        self._now_s = 0.0
        self._held: dict[tuple[str, int | None], float] = {
            (kind.name, None if kind.halves_every_days is None else -1): kind.on_board_byte
            for kind in self._store.kinds
        }

    def bring_down(self, at_s: float, room_byte: float, success: float) -> tuple[Carried, ...]:
        """Return what a downlink begun at `at_s` carries, most worth a byte first.

        The expected part leaves the board. Call in order of time.
        """
        while self._now_s < at_s:
            until_s = min(at_s, (self._now_s // DAY_S + 1.0) * DAY_S)
            self._make(int(self._now_s // DAY_S), until_s - self._now_s)
            self._now_s = until_s
        carried = []
        for key in sorted(self._held, key=lambda one: -self._worth_of(one)):
            taken = min(self._held[key], room_byte)
            if taken > 0.0:
                room_byte -= taken
                self._held[key] -= success * taken
                carried.append(Carried(kind=key[0], made_day=key[1], byte=taken))
        return tuple(carried)

    def _make(self, day: int, length_s: float) -> None:
        """Let `length_s` pass within one day; what a full partition cannot hold is lost."""
        for part in self._store.partitions:
            kinds = [kind for kind in self._store.kinds if kind.partition == part.name]
            made = {_key(kind, day): kind.made_byte_s * length_s for kind in kinds}
            held = sum(byte for key, byte in self._held.items() if key[0] in {kind.name for kind in kinds})
            over = held + sum(made.values()) - part.size_byte
            if over > 0.0:
                self._lose(part, made, over)
            for key, byte in made.items():
                self._held[key] = self._held.get(key, 0.0) + byte

    def _lose(self, part: Partition, made: dict[tuple[str, int | None], float], over: float) -> None:
        """Take `over` bytes off what is being made, or off the oldest on board first."""
        if part.when_full == "overwrite_oldest":
            kinds = {key[0] for key in made}
            for key in sorted((k for k in self._held if k[0] in kinds), key=_oldest):
                lost = min(self._held[key], over)
                self._held[key] -= lost
                over -= lost
        total = sum(made.values()) or 1.0
        made.update({key: byte * (1.0 - over / total) for key, byte in made.items()})

    def _worth_of(self, key: tuple[str, int | None]) -> float:
        """Return the worth of a byte of one class now."""
        kind = next(kind for kind in self._store.kinds if kind.name == key[0])
        fresh = self._worth.of_kilobyte(kind.weight)
        if key[1] is None or kind.halves_every_days is None:
            return fresh
        born_s = 0.0 if key[1] < 0 else (key[1] + 0.5) * DAY_S
        age_days = max(0.0, self._now_s - born_s) / DAY_S
        return float(fresh * 2.0 ** (-age_days / kind.halves_every_days))


def _key(kind: DataKind, day: int) -> tuple[str, int | None]:
    return kind.name, None if kind.halves_every_days is None else day


def _oldest(key: tuple[str, int | None]) -> float:
    """Return what sorts classes by the day made; those that do not age count as on board from the start."""
    return -1.0 if key[1] is None else float(key[1])


def _inside(moments: Floats, spans: Iterable[Span]) -> np.ndarray[tuple[int, ...], np.dtype[np.bool_]]:
    """Return whether each moment lies in one of `spans`, shape as `moments`; spans do not overlap."""
    ordered = np.array(sorted(spans), dtype=np.float64).reshape(-1, 2)
    begun = np.searchsorted(ordered[:, 0], moments, side="right")
    ended = np.searchsorted(np.sort(ordered[:, 1]), moments, side="right")
    return np.asarray(begun > ended)
