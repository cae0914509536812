"""What a station sees of a satellite, second by second, through Skyfield (B. Rhodes)."""

import math
from dataclasses import dataclass
from functools import cache

import numpy as np
from skyfield.api import Timescale, load, wgs84
from skyfield.nutationlib import iau2000b_radians
from skyfield.sgp4lib import EarthSatellite, Satrec

from passplan.domain.constants import DAY_S
from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, julian
from passplan.domain.passes import Floats
from passplan.domain.station import Station
from passplan.verify.tally import TWENTIETH_DEG

_SGP4_EPOCH_JD = 2433281.5  # SGP4 counts days from 1949 December 31, 00:00 UT
_STEP_S = 240
_FARTHEST_S = int(DAY_S)
_WGS72 = 0
_FINE_STEPS = 201


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class View:
    """A stretch of sky, one element a whole second from `start_s` on, arrays of shape (n,).

    Attributes:
        aos_s, los_s: where the satellite comes up over the station's horizon before the
            contact, and goes down after it; at the first or last second seen if farther.
        horizon_deg: the station's horizon under each azimuth.
    """

    start_s: int
    azimuth_deg: Floats
    elevation_deg: Floats
    range_km: Floats
    horizon_deg: Floats
    aos_s: float
    los_s: float

    def above_deg(self, second: float) -> float:
        """Return the height over the horizon at a moment, that of the nearest end outside the view."""
        height = self.elevation_deg - self.horizon_deg
        return float(np.interp(second - self.start_s, np.arange(len(height)), height))

    def highest_deg(self, begin_s: float, end_s: float) -> float:
        """Return the highest elevation of [begin_s, end_s], between whole seconds too.

        Places a second apart are joined by straight lines, which lie 0.002 deg amiss at
        most; elevations joined so would be 0.3 deg amiss near the zenith.
        """
        part = self.seconds(math.floor(begin_s), math.ceil(end_s) + 1)
        top = part.start + int(np.argmax(self.elevation_deg[part]))
        near = slice(max(part.start, top - 1), min(part.stop, top + 2))
        azimuth, elevation = np.radians(self.azimuth_deg[near]), np.radians(self.elevation_deg[near])
        level_km = self.range_km[near] * np.cos(elevation)
        here = self.start_s + np.arange(near.start, near.stop, dtype=np.float64)
        fine = np.clip(np.linspace(here[0], here[-1], _FINE_STEPS), begin_s, end_s)
        north_km, east_km = (np.interp(fine, here, level_km * turn(azimuth)) for turn in (np.cos, np.sin))
        up_km = np.interp(fine, here, self.range_km[near] * np.sin(elevation))
        return float(np.degrees(np.arctan2(up_km, np.hypot(north_km, east_km))).max())

    def seconds(self, begin_s: int, end_s: int) -> slice:
        """Return the slice of whole seconds begin_s <= t < end_s, at least one and only what is seen."""
        last = len(self.elevation_deg) - 1
        first = min(max(begin_s - self.start_s, 0), last)
        return slice(first, min(max(first, end_s - 1 - self.start_s), last) + 1)


def orbit(elements: ElementSet) -> EarthSatellite:
    """Return the body Skyfield propagates, made from numbers, not from lines of text."""
    whole, fraction = julian(elements.epoch)
    record = Satrec()
    record.sgp4init(
        _WGS72,
        "i",
        0,
        (whole - _SGP4_EPOCH_JD) + fraction,
        elements.bstar_per_earth_radius,
        0.0,
        0.0,
        elements.eccentricity,
        math.radians(elements.argument_of_perigee_deg),
        math.radians(elements.inclination_deg),
        math.radians(elements.mean_anomaly_deg),
        elements.mean_motion_rev_day * math.tau / 1440.0,
        math.radians(elements.node_deg),
    )
    return EarthSatellite.from_satrec(record, _timescale())


def view(body: EarthSatellite, station: Station, horizon: Horizon, begin_s: int, end_s: int) -> View:
    """Return the sky around [begin_s, end_s], walked out both ways until the satellite is down.

    Args:
        body: from `orbit`.
        station: place and mask.
        horizon: the week whose seconds are meant.
        begin_s: first second of the contact.
        end_s: last second of the contact, included.
    """
    first, last = begin_s - _STEP_S, max(begin_s, end_s) + _STEP_S
    azimuth, elevation, distance = _look(body, station, horizon, first, last)
    while _up(station, azimuth[0], elevation[0]) and first > begin_s - _FARTHEST_S:
        more = _look(body, station, horizon, first - _STEP_S, first - 1)
        first -= _STEP_S
        azimuth, elevation, distance = _joined(more, (azimuth, elevation, distance))
    while _up(station, azimuth[-1], elevation[-1]) and last < end_s + _FARTHEST_S:
        more = _look(body, station, horizon, last + 1, last + _STEP_S)
        last += _STEP_S
        azimuth, elevation, distance = _joined((azimuth, elevation, distance), more)
    line = horizon_deg(station, azimuth)
    above = elevation - line
    return View(
        start_s=first,
        azimuth_deg=azimuth,
        elevation_deg=elevation,
        range_km=distance,
        horizon_deg=line,
        aos_s=first + _crossing(above, begin_s - first, -1),
        los_s=first + _crossing(above, end_s - first, 1),
    )


def horizon_deg(station: Station, azimuth_deg: Floats) -> Floats:
    """Return the elevation that counts as the horizon at each azimuth: mask (none = 0) or least elevation."""
    least = station.least_receive_elevation_deg
    if not station.mask:
        return np.full(np.shape(azimuth_deg), max(least, 0.0))
    turns = [(azimuth + turn, high) for turn in (-360.0, 0.0, 360.0) for azimuth, high in station.mask]
    corners = np.array(turns)
    return np.asarray(np.maximum(least, np.interp(azimuth_deg, corners[:, 0], corners[:, 1])))


def _look(
    body: EarthSatellite, station: Station, horizon: Horizon, first: int, last: int
) -> tuple[Floats, ...]:
    """Return azimuth, elevation (deg, no refraction) and range (km) at whole seconds first to last."""
    start = horizon.start
    seconds = np.arange(first, last + 1, dtype=np.float64)
    moments = _timescale().utc(start.year, start.month, start.day, 0, 0, seconds)
    # The short nutation series: both ends of the line of sight turn with it, so it cancels.
    moments._nutation_angles_radians = iau2000b_radians(moments)  # noqa: SLF001 - Skyfield's own door to it
    place = wgs84.latlon(station.latitude_deg, station.longitude_deg, elevation_m=station.altitude_m)
    elevation, azimuth, distance = (body - place).at(moments).altaz()
    return azimuth.degrees, elevation.degrees, distance.km


def _up(station: Station, azimuth_deg: float, elevation_deg: float) -> bool:
    """Return whether the satellite is not well under the station's horizon."""
    return bool(elevation_deg >= horizon_deg(station, np.array([azimuth_deg]))[0] - TWENTIETH_DEG)


def _joined(before: tuple[Floats, ...], after: tuple[Floats, ...]) -> tuple[Floats, ...]:
    """Return three arrays, each the one before and the one after in one."""
    return tuple(np.concatenate(pair) for pair in zip(before, after, strict=True))


def _crossing(above_deg: Floats, index: int, step: int) -> float:
    """Walk from `index` until the satellite is well down; return where it crossed the horizon last.

    A dip of less than a twentieth of a degree is no end of a pass: two readings of the
    sky need not both see it.
    """
    start = here = min(max(index, 0), len(above_deg) - 1)
    while 0 <= here + step < len(above_deg) and above_deg[here + step] >= -TWENTIETH_DEG:
        here += step
    while here != start and above_deg[here] < 0.0:
        here -= step
    height = float(above_deg[here])
    beyond = float(above_deg[here + step]) if 0 <= here + step < len(above_deg) else height
    return here + step * height / (height - beyond) if height >= 0.0 > beyond else float(here)


@cache
def _timescale() -> Timescale:
    """Return Skyfield's time scale from the files it carries, never from a network."""
    return load.timescale(builtin=True)
