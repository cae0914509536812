"""What is left of a pass once mask, antenna, link, hours and guard time have had their say."""

from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.budgets.antenna import follows
from passplan.budgets.link import goodput_byte_s, uplink_margin_db
from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon, Span, merged, outage_spans, weekly_spans, without
from passplan.domain.passes import Floats, Pass, Track
from passplan.domain.rules import Rule
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station

# Kept by offering nothing else: what breaks one of these is no part of a run.
RULES = frozenset(
    {
        Rule.IN_VIEW,
        Rule.GUARD_TIME,
        Rule.ANTENNA_FOLLOWS,
        Rule.LINK_CLOSES,
        Rule.STATION_OPEN,
        Rule.SATELLITE_OPEN,
    }
)

MARGIN_S = 0.5
MARGIN_DEG = 0.05
MARGIN_FRACTION = 0.005

# A curve that falls by more than this share of its best and rises again has two peaks.
_DIP_FRACTION = 0.05

Flags = NDArray[np.bool_]


@dataclass(frozen=True, slots=True, eq=False)
class Run:
    """A stretch of one pass in which a contact may stand, with one peak of goodput.

    Attributes:
        sight, track: the pass and its seconds.
        first, last: indices into the track, both usable.
        peak: index of best goodput, nearest to the highest point among equals.
        number: which peak of the visibility, from 0.
        goodput_byte_s: along the whole track, the planner's share of bytes taken off.
        may_send: seconds in which the station may transmit and the uplink closes.
    """

    sight: Pass
    track: Track
    first: int
    last: int
    peak: int
    number: int
    goodput_byte_s: Floats
    may_send: Flags

    @property
    def start_s(self) -> int:
        """First whole second."""
        return self.track.start_s + self.first

    @property
    def end_s(self) -> int:
        """Last whole second."""
        return self.track.start_s + self.last

    @property
    def peak_s(self) -> int:
        """Whole second of the peak."""
        return self.track.start_s + self.peak

    def byte(self, start_s: int, end_s: int) -> float:
        """Return the bytes carried over [start_s, end_s)."""
        low, high = start_s - self.track.start_s, end_s - self.track.start_s
        return float(self.goodput_byte_s[max(0, low) : max(0, high)].sum())

    def reach(self, least_elevation_deg: float) -> tuple[int, int]:
        """Return (rise, fall), whole seconds around the peak in which one may send that high.

        Both are the peak itself where there is no such second.
        """
        good = self.may_send & (self.track.elevation_deg >= least_elevation_deg + MARGIN_DEG)
        if not good[self.peak]:
            return self.peak_s, self.peak_s
        bad = np.flatnonzero(~good)
        before, after = bad[bad < self.peak], bad[bad > self.peak]
        rise = int(before[-1]) + 1 if len(before) else 0
        fall = int(after[0]) - 1 if len(after) else len(good) - 1
        return self.track.start_s + max(rise, self.first), self.track.start_s + min(fall, self.last)


def horizon_deg(station: Station, azimuth_deg: Floats) -> Floats:
    """Return the station's horizon at each azimuth, straight lines between its corners."""
    corners = np.array(station.horizon)
    return np.asarray(np.interp(azimuth_deg, corners[:, 0], corners[:, 1], period=360.0))


def open_spans(station: Station, satellite: Satellite, horizon: Horizon) -> list[Span]:
    """Return the spans in which the station is open, not in an outage, and the satellite not closed."""
    whole = [(0.0, horizon.end_s)]
    hours = weekly_spans(station.hours, station.time_zone, horizon) if station.hours else whole
    shut = outage_spans([*station.outages, *satellite.closed], horizon)
    return without(merged(hours, 0.0, horizon.end_s), shut)


def runs(mission: Mission, sight: Pass, track: Track, spans: Iterable[Span]) -> list[Run]:
    """Return the usable runs of one pass of a transmitting station, in order of time.

    Args:
        mission: for satellite, station and planning values.
        sight: the pass.
        track: its seconds.
        spans: open spans of station and satellite (s of the week).

    Returns:
        runs of at least the least contact time with a moment to send in.
    """
    station, satellite = mission.station(sight.station), mission.satellite(sight.satellite)
    usable, goodput = _usable(mission, sight, track, spans)
    above = track.elevation_deg >= station.transmit_floor_deg + MARGIN_DEG
    may_send = usable & above & (uplink_margin_db(satellite, station, track) >= station.radio.margin_db)
    least = int(mission.planning.least_contact_s)
    found: list[Run] = []
    for first, last in _stretches(usable):
        for low, high in _one_peaked(goodput, first, last, least):
            if high - low >= least and may_send[low : high + 1].any():
                peak = _peak(goodput, track, sight, low, high)
                found.append(Run(sight, track, low, high, peak, len(found), goodput, may_send))
    return found


def useful_s(mission: Mission, sight: Pass, track: Track, spans: Iterable[Span]) -> float:
    """Return the seconds of a pass in which data could flow, for the listing."""
    usable, _ = _usable(mission, sight, track, spans)
    return float(usable.sum())


def _usable(mission: Mission, sight: Pass, track: Track, spans: Iterable[Span]) -> tuple[Flags, Floats]:
    """Return which seconds can be used, and the goodput (n,) less the planner's margin."""
    station, satellite = mission.station(sight.station), mission.satellite(sight.satellite)
    seconds = track.seconds
    guard = mission.planning.guard_s + MARGIN_S
    goodput = goodput_byte_s(satellite, station, track) * (1.0 - MARGIN_FRACTION)
    usable = track.elevation_deg >= horizon_deg(station, track.azimuth_deg) + MARGIN_DEG
    usable &= (seconds >= sight.aos_s + guard) & (seconds <= sight.los_s - guard)
    inside = np.zeros(len(seconds), dtype=bool)
    for begin, end in spans:
        inside |= (seconds >= begin + MARGIN_S) & (seconds <= end - MARGIN_S)
    usable &= inside & (goodput > 0.0)
    if usable.any():
        usable &= follows(station, track)
    return usable, goodput


def _stretches(flags: Flags) -> list[tuple[int, int]]:
    """Return (first, last) of each run of True."""
    padded = np.concatenate(([False], flags, [False]))
    edges = np.flatnonzero(padded[1:] != padded[:-1])
    return [(int(low), int(high) - 1) for low, high in zip(edges[::2], edges[1::2], strict=True)]


def _one_peaked(goodput: Floats, first: int, last: int, least: int) -> list[tuple[int, int]]:
    """Return [first, last] cut at dips between two peaks, where both parts are long enough."""
    curve = goodput[first : last + 1]
    top = int(curve.argmax())
    left = np.maximum.accumulate(curve[: top + 1]) - curve[: top + 1]
    right = np.maximum.accumulate(curve[top:][::-1])[::-1] - curve[top:]
    defect = np.concatenate((left, right[1:]))
    worst = int(defect.argmax())
    if defect[worst] <= _DIP_FRACTION * curve[top] or worst < least or last - first - worst < least:
        return [(first, last)]
    cut = first + worst
    return _one_peaked(goodput, first, cut, least) + _one_peaked(goodput, cut + 1, last, least)


def _peak(goodput: Floats, track: Track, sight: Pass, first: int, last: int) -> int:
    """Return the index of best goodput, the one nearest to culmination where many are as good."""
    curve = goodput[first : last + 1]
    best = first + np.flatnonzero(curve >= 0.999 * curve.max())
    return int(best[np.abs(track.start_s + best - sight.tca_s).argmin()])
