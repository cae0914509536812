"""The battery second by second, in plain arithmetic.

Each second is worked out apart, in shadow and out of it, keyed and not; the cells take
what they can, and what is over goes to the shunt.
"""

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, Span
from passplan.domain.passes import Floats
from passplan.domain.satellite import Battery, Satellite


@dataclass(frozen=True, kw_only=True, slots=True)
class Loads:
    """What a plan asks of one satellite: spans (s of the week) keyed, and sessions with their watts."""

    keyed: tuple[Span, ...] = ()
    sessions: tuple[tuple[Span, float], ...] = ()


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class SecondLedger:
    """Stored energy at every whole second of the horizon.

    Attributes:
        capacity_j: of the cells.
        energy_j: from Monday 00:00 on, shape (n + 1,).
        idle_lowest_j: lowest charge of the horizon with no contact and no session.
        shadow_share, keyed_share, session_w: of each second, shape (n,).
    """

    capacity_j: float
    energy_j: Floats
    idle_lowest_j: float
    shadow_share: Floats
    keyed_share: Floats
    session_w: Floats

    def at(self, second: int) -> float:
        """Return the energy (J) at a whole second, that of the nearest end outside the horizon."""
        return float(self.energy_j[min(max(second, 0), len(self.energy_j) - 1)])

    def lowest(self, begin_s: int, end_s: int) -> tuple[int, float]:
        """Return (second, J) of the lowest charge in [begin_s, end_s], the first of equals."""
        first = min(max(begin_s, 0), len(self.energy_j) - 1)
        second = first + int(np.argmin(self.energy_j[first : max(first, end_s) + 1]))
        return second, float(self.energy_j[second])


def second_ledger(
    mission: Mission, satellite: Satellite, horizon: Horizon, shadows: Iterable[Span], loads: Loads
) -> SecondLedger:
    """Return the ledger of one horizon.

    Args:
        mission: for the charge taken when there is no telemetry.
        satellite: powers and cells.
        horizon: the week and its look-ahead.
        shadows: spans in shadow from `ledger_begin_s` to the end of the horizon.
        loads: what the plan asks.
    """
    dark, seconds = tuple(shadows), int(horizon.end_s)
    start_j = _start_j(mission, satellite, horizon, dark)
    shadow_share = share_of_seconds(dark, 0, seconds)
    keyed_share = np.minimum(1.0, share_of_seconds(loads.keyed, 0, seconds))
    session_w = np.zeros(seconds)
    for span, draw_w in loads.sessions:
        session_w += draw_w * share_of_seconds((span,), 0, seconds)
    idle_j = _charge(satellite, start_j, shadow_share)
    return SecondLedger(
        capacity_j=satellite.battery.capacity_j,
        energy_j=_charge(satellite, start_j, shadow_share, keyed_share, session_w),
        idle_lowest_j=float(idle_j.min()),
        shadow_share=shadow_share,
        keyed_share=keyed_share,
        session_w=session_w,
    )


def ledger_begin_s(satellite: Satellite, horizon: Horizon) -> float:
    """Return the second from which shadow has to be known: the last telemetry, or Monday 00:00."""
    telemetry = satellite.battery.telemetry
    return min(0.0, horizon.seconds(telemetry.at_utc)) if telemetry else 0.0


def share_of_seconds(spans: Iterable[Span], first_s: int, count: int) -> Floats:
    """Return how much of each of `count` seconds from `first_s` on lies in the spans; overlaps add up."""
    edges = sorted(edge for begin, end in spans for edge in ((begin, 1), (end, -1)))
    if not edges:
        return np.zeros(count)
    moments = np.array([moment for moment, _ in edges])
    open_spans = np.cumsum([change for _, change in edges])
    covered = np.concatenate(([0.0], np.cumsum(np.diff(moments) * open_spans[:-1])))
    grid = first_s + np.arange(count + 1, dtype=np.float64)
    return np.diff(np.interp(grid, moments, covered))


def stored_w(battery: Battery, net_w: Floats) -> Floats:
    """Return the rate at which the cells fill (or empty) at a net power on the bus."""
    filling = np.minimum(net_w * battery.charge_efficiency, net_w / battery.discharge_efficiency)
    if battery.charge_limit_w is None:
        return filling
    return np.minimum(filling, battery.charge_efficiency * battery.charge_limit_w)


def load_w(satellite: Satellite, *, dark: bool, keyed: bool) -> float:
    """Return the load on the bus, beacon and heater included, sessions not."""
    beacon = satellite.radio.beacon
    on_air = (beacon.duty_fraction if beacon else 0.0) + (1.0 if keyed else 0.0)
    heater_w = satellite.power.heater_eclipse_w if dark else 0.0
    return satellite.power.bus_load_w + heater_w + on_air * satellite.transmitter_draw_w


def running_charge(start_j: float, gain_j: Floats, capacity_j: float) -> Floats:
    """Return the charge after each gain, shape (n + 1,), never over capacity.

    What has overflowed so far is the most by which the sum without a lid ever stood over
    the lid; so E_n = min(capacity, E_n-1 + gain_n), all at once.
    """
    open_sum = np.concatenate(([start_j], start_j + np.cumsum(gain_j)))
    overflowed = np.maximum(0.0, np.maximum.accumulate(open_sum) - capacity_j)
    return np.asarray(open_sum - overflowed)


def _charge(
    satellite: Satellite,
    start_j: float,
    shadow_share: Floats,
    keyed_share: Floats | float = 0.0,
    session_w: Floats | float = 0.0,
) -> Floats:
    """Return the charge at each second from the shares of the seconds."""
    gain_j = np.zeros(len(shadow_share))
    for dark in (False, True):
        for keyed in (False, True):
            light = shadow_share if dark else 1.0 - shadow_share
            part = light * (keyed_share if keyed else 1.0 - keyed_share)
            made_w = 0.0 if dark else satellite.power.sunlit_w
            net_w = made_w - load_w(satellite, dark=dark, keyed=keyed) - np.asarray(session_w)
            gain_j += part * stored_w(satellite.battery, net_w)
    return running_charge(start_j, gain_j, satellite.battery.capacity_j)


def _start_j(mission: Mission, satellite: Satellite, horizon: Horizon, shadows: tuple[Span, ...]) -> float:
    """Return the charge at Monday 00:00: telemetry carried forward, or taken as it is, or the wanted end."""
    battery = satellite.battery
    if battery.telemetry is None:
        return mission.planning.end_fraction * battery.capacity_j
    read_j = battery.telemetry.charge_fraction * battery.capacity_j
    seconds = round(-ledger_begin_s(satellite, horizon))
    return float(_charge(satellite, read_j, share_of_seconds(shadows, -seconds, seconds))[-1])
