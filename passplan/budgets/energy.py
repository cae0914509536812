"""Power at the bus and charge in the cells.

A shunt-regulated bus: the array feeds the loads, what is left charges the cells, and
what these do not take is burned off. Charge is a piecewise linear function of time, so
the ledger here is exact between the edges of shadow.
"""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from passplan.domain.mission import Planning
from passplan.domain.moments import Horizon, Span, merged, without
from passplan.domain.passes import Floats
from passplan.domain.satellite import Battery, Satellite


@dataclass(frozen=True, kw_only=True, slots=True)
class PowerSpan:
    """A stretch with no change of generation and idle load.

    Attributes:
        start_s, end_s: seconds of the week.
        sunlit: False in shadow.
        generation_w: what the array gives.
        idle_load_w: mean load with no contact and no session, beacon and heater included.
    """

    start_s: float
    end_s: float
    sunlit: bool
    generation_w: float
    idle_load_w: float

    @property
    def net_w(self) -> float:
        """Net power at the bus with no contact and no session."""
        return self.generation_w - self.idle_load_w


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Ledger:
    """Charge as straight lines between corners.

    Attributes:
        times_s, energy_j: the corners in order of time, arrays of one shape (n,). Under 0
            where the loads would have emptied the cells.
    """

    times_s: Floats
    energy_j: Floats

    def at(self, seconds_s: ArrayLike) -> Floats:
        """Return the charge (J) at moments inside the ledger, in their shape."""
        return np.asarray(np.interp(np.asarray(seconds_s, dtype=np.float64), self.times_s, self.energy_j))

    @property
    def low_point(self) -> tuple[float, float]:
        """The second of the lowest charge, the first of equals, and that charge (J)."""
        corner = int(np.argmin(self.energy_j))
        return float(self.times_s[corner]), float(self.energy_j[corner])

    @property
    def end_j(self) -> float:
        """Charge at the last corner."""
        return float(self.energy_j[-1])


def load_w(
    satellite: Satellite, *, sunlit: bool, transmitting: bool = False, session_w: float = 0.0
) -> float:
    """Return the total load on the bus."""
    idle = satellite.idle_sun_w if sunlit else satellite.idle_shadow_w
    return idle + (satellite.transmitter_draw_w if transmitting else 0.0) + session_w


def bus_power_w(
    satellite: Satellite, *, sunlit: bool, transmitting: bool = False, session_w: float = 0.0
) -> float:
    """Return generation less load; negative while the cells have to give."""
    generation = satellite.power.sunlit_w if sunlit else 0.0
    return generation - load_w(satellite, sunlit=sunlit, transmitting=transmitting, session_w=session_w)


def stored_power_w(battery: Battery, bus_power_w: ArrayLike) -> Floats:
    """Return the rate at which charge changes under a net power at the bus, in its shape.

    min(eta_c P, P / eta_d, eta_c P_limit): concave, so a mean over mixed loads may be
    bounded by the mean of the rates.
    """
    power = np.asarray(bus_power_w, dtype=np.float64)
    rate = np.minimum(battery.charge_efficiency * power, power / battery.discharge_efficiency)
    if battery.charge_limit_w is not None:
        rate = np.minimum(rate, battery.charge_efficiency * battery.charge_limit_w)
    return np.asarray(rate)


def within_discharge_limit(satellite: Satellite, *, session_w: float = 0.0) -> bool:
    """Return whether the cells alone may carry a transmission in shadow, with a session beside it."""
    limit = satellite.battery.discharge_limit_w
    return limit is None or load_w(satellite, sunlit=False, transmitting=True, session_w=session_w) <= limit


def idle_profile(
    satellite: Satellite, shadows: Iterable[Span], start_s: float, end_s: float
) -> tuple[PowerSpan, ...]:
    """Return the stretches of sun and shadow from `start_s` to `end_s`, in order, touching.

    Args:
        satellite: whose array and loads.
        shadows: spans in shadow (s of the week); they have to cover [start_s, end_s].
        start_s: first second.
        end_s: last second.
    """
    dark = merged(shadows, start_s, end_s)
    bright = without([(start_s, end_s)], dark)
    spans = sorted(
        [(begin, end, False) for begin, end in dark] + [(begin, end, True) for begin, end in bright]
    )
    return tuple(
        PowerSpan(
            start_s=begin,
            end_s=end,
            sunlit=sunlit,
            generation_w=satellite.power.sunlit_w if sunlit else 0.0,
            idle_load_w=load_w(satellite, sunlit=sunlit),
        )
        for begin, end, sunlit in spans
        if end > begin
    )


def idle_ledger(
    satellite: Satellite, shadows: Iterable[Span], start_s: float, end_s: float, start_j: float
) -> Ledger:
    """Return the charge with no contact and no session, exact, with a corner wherever its slope changes.

    Args:
        satellite: whose array, loads and cells.
        shadows: spans in shadow (s of the week); they have to cover [start_s, end_s].
        start_s: first second.
        end_s: last second.
        start_j: charge at `start_s`; anything over capacity is cut.
    """
    capacity = satellite.battery.capacity_j
    corners = [(start_s, min(start_j, capacity))]
    for span in idle_profile(satellite, shadows, start_s, end_s):
        corners.extend(_leg(satellite.battery, span, corners[-1][1]))
    times, energy = np.array(corners).T
    return Ledger(times_s=times, energy_j=energy)


def _leg(battery: Battery, span: PowerSpan, start_j: float) -> Sequence[tuple[float, float]]:
    """Return the corners (s, J) after the start of one span: where the cells get full, and its end."""
    slope_w = float(stored_power_w(battery, span.net_w))
    end_j = start_j + slope_w * (span.end_s - span.start_s)
    if end_j <= battery.capacity_j:
        return [(span.end_s, end_j)]
    full_s = span.start_s + (battery.capacity_j - start_j) / slope_w
    full = [(full_s, battery.capacity_j)] if span.start_s < full_s < span.end_s else []
    return [*full, (span.end_s, battery.capacity_j)]


def lowest(
    satellite: Satellite, shadows: Iterable[Span], start_s: float, end_s: float, start_j: float
) -> float:
    """Return the lowest charge (J) with no contact and no session; the arguments are `idle_ledger`'s."""
    return idle_ledger(satellite, shadows, start_s, end_s, start_j).low_point[1]


def carry_forward(
    satellite: Satellite, shadows: Iterable[Span], horizon: Horizon, planning: Planning
) -> tuple[float, bool]:
    """Return the charge (J) at the start of the week, and whether it had to be assumed.

    The last telemetry is carried to the start with no contact and no session; telemetry
    from after the start is taken as it is; without any the end fraction is assumed, as
    that is what the week before should have left.

    Args:
        satellite: whose telemetry.
        shadows: spans in shadow (s of the week); they have to reach back to the telemetry.
        horizon: the week.
        planning: its end fraction.
    """
    battery = satellite.battery
    if battery.telemetry is None:
        return planning.end_fraction * battery.capacity_j, True
    read_s = horizon.seconds(battery.telemetry.at_utc)
    read_j = battery.telemetry.charge_fraction * battery.capacity_j
    if read_s >= 0.0:
        return read_j, False
    return idle_ledger(satellite, shadows, read_s, 0.0, read_j).end_j, False


def idle_balance_w(satellite: Satellite, shadows: Iterable[Span], start_s: float, end_s: float) -> float:
    """Return the mean rate (W) at which idle charge would change if the cells never got full.

    Over whole orbits: positive where the bus can live on the array, negative where every
    week empties the cells.
    """
    spans = idle_profile(satellite, shadows, start_s, end_s)
    gained_j = sum(float(stored_power_w(satellite.battery, s.net_w)) * (s.end_s - s.start_s) for s in spans)
    return gained_j / (end_s - start_s)
