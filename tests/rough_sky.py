"""Passes and shadows at whole seconds, by brute force: good to a second, for material of the tests only.

SGP4 on a grid of whole seconds, turned by the mean sidereal time of UTC (IAU 1982) and
compared with the station's tangent plane (WGS 84). The Sun is the Astronomical Almanac's
low-precision series, the shadow a cylinder as wide as the Earth.
"""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from datetime import UTC, datetime

import numpy as np
from numpy.typing import NDArray
from sgp4.api import WGS72, Satrec

from passplan.domain.constants import DAY_S, EARTH_FLATTENING, EARTH_RADIUS_KM, MINUTE_S
from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, Span, julian
from passplan.domain.passes import Floats
from passplan.domain.station import Station

_SGP4_DAY_ZERO = datetime(1949, 12, 31, tzinfo=UTC)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class UsablePass:
    """What can be used of one pass: cut to mask, station hours, closures and guard time.

    Attributes:
        start_s, end_s: whole seconds of the week; `peak_s` is the highest moment between.
        elevation_deg, rate_byte_s: element k belongs to the second `start_s` + k; at
            least end_s - start_s of them. The rate is 0 where the downlink does not close.
    """

    satellite: str
    station: str
    start_s: int
    peak_s: int
    end_s: int
    elevation_deg: Floats
    rate_byte_s: Floats

    @property
    def max_elevation_deg(self) -> float:
        """Highest elevation in it."""
        return float(self.elevation_deg.max())


def positions_teme(elements: ElementSet, horizon: Horizon, seconds: Floats) -> Floats:
    """Return positions (km, TEME, shape (n, 3)) at `seconds` of the week, shape (n,)."""
    engine = Satrec()
    engine.sgp4init(
        WGS72,
        "i",
        elements.number or 0,
        (elements.epoch - _SGP4_DAY_ZERO).total_seconds() / DAY_S,
        elements.bstar_per_earth_radius,
        0.0,
        0.0,
        elements.eccentricity,
        math.radians(elements.argument_of_perigee_deg),
        math.radians(elements.inclination_deg),
        math.radians(elements.mean_anomaly_deg),
        elements.mean_motion_rev_day * math.tau / (DAY_S / MINUTE_S),
        math.radians(elements.node_deg),
    )
    whole, fraction = julian(horizon.start)
    faults, places, _ = engine.sgp4_array(np.full(len(seconds), whole), fraction + seconds / DAY_S)
    if faults.any():
        told = f"SGP4 gives up on {elements.name}"
        raise ValueError(told)
    return np.asarray(places, dtype=np.float64)


def elevations_deg(station: Station, horizon: Horizon, seconds: Floats, teme_km: Floats) -> Floats:
    """Return the elevation of TEME positions (n, 3) above a station, shape (n,)."""
    turn = _sidereal_rad(horizon, seconds)
    x, y, z = teme_km.T
    fixed = np.column_stack((np.cos(turn) * x + np.sin(turn) * y, np.cos(turn) * y - np.sin(turn) * x, z))
    latitude, longitude = math.radians(station.latitude_deg), math.radians(station.longitude_deg)
    up = np.array(
        [
            math.cos(latitude) * math.cos(longitude),
            math.cos(latitude) * math.sin(longitude),
            math.sin(latitude),
        ]
    )
    squash = 1.0 - EARTH_FLATTENING * (2.0 - EARTH_FLATTENING)
    curve_km = EARTH_RADIUS_KM / math.sqrt(1.0 - (1.0 - squash) * math.sin(latitude) ** 2)
    height_km = station.altitude_m / 1000.0
    place = up * (np.array([curve_km, curve_km, curve_km * squash]) + height_km)
    away = fixed - place
    sine: Floats = away @ up / np.linalg.norm(away, axis=1)
    return np.degrees(np.arcsin(sine))


def shadow_spans(horizon: Horizon, seconds: Floats, teme_km: Floats) -> tuple[Span, ...]:
    """Return the spans (s of the week) in which TEME positions (n, 3) lie in shadow."""
    sun = sun_direction(horizon, seconds)
    along = np.einsum("ij,ij->i", teme_km, sun)
    across = np.linalg.norm(teme_km - along[:, None] * sun, axis=1)
    return tuple(
        (float(seconds[first]), float(seconds[last]))
        for first, last in runs((along < 0.0) & (across < EARTH_RADIUS_KM))
    )


def usable_passes(
    stations: Iterable[Station],
    horizon: Horizon,
    places: Mapping[str, tuple[Floats, Floats]],
    least_s: float,
) -> list[UsablePass]:
    """Return the passes of at least `least_s` above each station's least receive elevation.

    Args:
        stations: with flat masks and no hours of their own.
        horizon: the week.
        places: satellite name to (whole seconds of the week (n,), TEME positions km (n, 3)).
        least_s: shortest pass wanted.
    """
    found = []
    for name, (seconds, teme_km) in places.items():
        for station in stations:
            elevation = elevations_deg(station, horizon, seconds, teme_km)
            for first, last in runs(elevation >= station.least_receive_elevation_deg):
                if seconds[last] - seconds[first] >= least_s:
                    part = elevation[first : last + 1]
                    found.append(
                        UsablePass(
                            satellite=name,
                            station=station.code,
                            start_s=int(seconds[first]),
                            peak_s=int(seconds[first + int(part.argmax())]),
                            end_s=int(seconds[last]),
                            elevation_deg=part,
                            rate_byte_s=np.zeros_like(part),
                        )
                    )
    return sorted(found, key=lambda one: (one.start_s, one.satellite, one.station))


def runs(true: NDArray[np.bool_]) -> list[tuple[int, int]]:
    """Return (first, last) index of each unbroken run of True."""
    steps = np.diff(np.concatenate(([0], true.astype(np.int8), [0])))
    return list(
        zip(np.flatnonzero(steps == 1).tolist(), (np.flatnonzero(steps == -1) - 1).tolist(), strict=True)
    )


def _sidereal_rad(horizon: Horizon, seconds: Floats) -> Floats:
    """Return Greenwich mean sidereal time (IAU 1982; Aoki et al. 1982), UTC taken for UT1."""
    whole, fraction = julian(horizon.start)
    days = (whole - 2451545.0) + fraction + seconds / DAY_S
    centuries = days / 36525.0
    turns_s = 67310.54841 + (876600.0 * 3600.0 + 8640184.812866) * centuries + 0.093104 * centuries**2
    return np.radians(turns_s / 240.0 % 360.0)


def sun_direction(horizon: Horizon, seconds: Floats) -> Floats:
    """Return unit vectors to the Sun, shape (n, 3), by the Almanac's series good to 0.01 deg (page C5)."""
    whole, fraction = julian(horizon.start)
    days = (whole - 2451545.0) + fraction + seconds / DAY_S
    anomaly = np.radians(357.528 + 0.9856003 * days)
    mean = 280.460 + 0.9856474 * days
    longitude = np.radians(mean + 1.915 * np.sin(anomaly) + 0.020 * np.sin(2.0 * anomaly))
    tilt = np.radians(23.439 - 0.0000004 * days)
    return np.column_stack(
        (np.cos(longitude), np.cos(tilt) * np.sin(longitude), np.sin(tilt) * np.sin(longitude))
    )
