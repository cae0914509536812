"""Invented orbits and places for the tests of the sky, and a plain sky that shares no code with it."""

import math
from datetime import datetime, timedelta

import numpy as np
from numpy.typing import NDArray
from sgp4.api import WGS72, Satrec
from skyfield.api import load
from skyfield.sgp4lib import theta_GMST1982
from skyfield.timelib import Timescale

from passplan.domain.constants import EARTH_FLATTENING, EARTH_MU_KM3_S2, EARTH_RADIUS_KM
from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.domain.station import Rotator, Station
from passplan.sky.ut1 import ut1_minus_utc_s

Floats = NDArray[np.float64]
Mask = tuple[tuple[float, float], ...]

WEEK = Horizon(week="2026-W50", lookahead_h=0.0)
SCALE: Timescale = load.timescale()


def element_set(
    inclination_deg: float,
    rev_day: float,
    eccentricity: float = 0.001,
    *,
    perigee_deg: float = 30.0,
    anomaly_deg: float = 10.0,
    node_deg: float = 40.0,
    bstar: float = 1e-4,
    epoch: datetime | None = None,
) -> ElementSet:
    """Return invented elements, a day old at the start of the week."""
    return ElementSet(
        name="INVENTED",
        number=None,
        designator="",
        epoch=epoch or WEEK.start - timedelta(days=1),
        inclination_deg=inclination_deg,
        node_deg=node_deg,
        eccentricity=eccentricity,
        argument_of_perigee_deg=perigee_deg,
        mean_anomaly_deg=anomaly_deg,
        mean_motion_rev_day=rev_day,
        bstar_per_earth_radius=bstar,
    )


def between(low_km: float, high_km: float) -> tuple[float, float]:
    """Return mean motion (rev/day) and eccentricity of an orbit between two heights."""
    axis_km = EARTH_RADIUS_KM + (low_km + high_km) / 2.0
    mean_motion = math.sqrt(EARTH_MU_KM3_S2 / axis_km**3) * 86400.0 / (2.0 * math.pi)
    return mean_motion, (high_km - low_km) / 2.0 / axis_km


ORBITS: dict[str, ElementSet] = {
    "sun-synchronous 500 km": element_set(97.4, *between(498.0, 505.0)),
    "400 x 1500 km": element_set(60.0, *between(400.0, 1500.0)),
    "polar 700 km": element_set(90.0, *between(700.0, 702.0), node_deg=200.0),
    "equatorial 600 km": element_set(0.0, *between(600.0, 610.0)),
    "low inclination 550 km": element_set(8.0, *between(545.0, 555.0), anomaly_deg=200.0),
    "250 km": element_set(51.6, *between(248.0, 252.0), bstar=8e-4),
    "250 km, decays on Thursday": element_set(51.6, *between(248.0, 252.0), bstar=3e-3),
    "retrograde 1200 km": element_set(140.0, *between(1200.0, 1210.0), node_deg=300.0),
    "12 h circular": element_set(55.0, 2.0056, 0.01, bstar=0.0),
    "12 h eccentric": element_set(63.4, 2.0058, 0.72, perigee_deg=270.0, bstar=0.0),
    "transfer 250 x 35786 km": element_set(7.0, *between(250.0, 35786.0), perigee_deg=178.0, bstar=0.0),
    "24 h inclined": element_set(12.0, 1.0027, 0.0003, bstar=0.0),
}

_PLACES = (  # latitude, longitude, altitude m, least elevation
    (52.0, 5.0, 10.0, 10.0),
    (0.0, 0.0, 0.0, 0.0),
    (90.0, 0.0, 0.0, 5.0),
    (-90.0, 77.0, 2800.0, 10.0),
    (-18.0, 180.0, 40.0, 0.0),
    (66.0, -180.0, 5.0, -3.0),
    (31.0, 35.4, -400.0, 10.0),
    (-16.5, -68.1, 3900.0, -5.0),
    (-41.0, 174.8, 100.0, 30.0),
    (78.2, 15.6, 450.0, 3.0),
)


def station(
    latitude_deg: float = 50.0,
    longitude_deg: float = 10.0,
    altitude_m: float = 0.0,
    least_deg: float = 10.0,
    *,
    mask: Mask = (),
    code: str = "QAA",
) -> Station:
    """Return an invented station that differs from the simplest one only in what is told."""
    return Station(
        name="Place",
        code=code,
        latitude_deg=latitude_deg,
        longitude_deg=longitude_deg,
        altitude_m=altitude_m,
        time_zone="UTC",
        mask=mask,
        rotator=Rotator(),
        least_receive_elevation_deg=least_deg,
    )


def jagged(seed: int) -> Mask:
    """Return a mask nobody would call smooth: many corners, steep flanks, hill-top and house wall."""
    chance = np.random.default_rng(seed)
    azimuth = np.sort(chance.choice(np.arange(0.0, 360.0, 0.5), size=10 + 6 * (seed % 6), replace=False))
    top = (20.0, 35.0, 70.0)[seed % 3]
    elevation = chance.uniform(-4.0, top, len(azimuth))
    return tuple(zip(azimuth.tolist(), elevation.tolist(), strict=True))


FLAT = [
    station(*place, mask=((0.0, place[3]), (180.0, place[3])), code=f"QF{number}")
    for number, place in enumerate(_PLACES)
]
JAGGED = [station(*place, mask=jagged(number), code=f"QJ{number}") for number, place in enumerate(_PLACES)]


def textbook_record(one: ElementSet) -> Satrec:
    """Return SGP4's record by way of the package's documented call."""
    days = (one.epoch - datetime(1949, 12, 31, tzinfo=one.epoch.tzinfo)) / timedelta(days=1)
    record = Satrec()
    angles = (one.argument_of_perigee_deg, one.inclination_deg, one.mean_anomaly_deg)
    speed = math.radians(one.mean_motion_rev_day * 360.0) / 1440.0
    perigee, inclination, anomaly = map(math.radians, angles)
    orbit = (one.eccentricity, perigee, inclination, anomaly, speed, math.radians(one.node_deg))
    record.sgp4init(WGS72, "i", 5, days, one.bstar_per_earth_radius, 0.0, 0.0, *orbit)
    return record


def itrs_km(one: ElementSet, seconds: Floats, week: Horizon = WEEK) -> tuple[Floats, NDArray[np.uint8]]:
    """Return Earth-fixed positions (3, n) and SGP4's error codes, by Skyfield's sidereal time and UT1."""
    start = week.start
    time = SCALE.utc(start.year, start.month, start.day, 0, 0, seconds)
    day = np.full(seconds.shape, week.julian(0.0)[0])
    fraction = week.julian(0.0)[1] + seconds / 86400.0
    errors, position, _ = textbook_record(one).sgp4_array(day, fraction)
    theta, _ = theta_GMST1982(time.whole, time.ut1_fraction)
    x, y, z = position.T
    turned = (np.cos(theta) * x + np.sin(theta) * y, np.cos(theta) * y - np.sin(theta) * x, z)
    return np.array(turned), errors


def horizontal_deg(place: Station, position_km: Floats) -> tuple[Floats, Floats]:
    """Return elevation and azimuth (deg) of Earth-fixed positions (3, n), by the textbook's rotation."""
    lat, lon = math.radians(place.latitude_deg), math.radians(place.longitude_deg)
    square = EARTH_FLATTENING * (2.0 - EARTH_FLATTENING)
    radius = EARTH_RADIUS_KM / math.sqrt(1.0 - square * math.sin(lat) ** 2)
    height = place.altitude_m / 1000.0
    flat = (radius + height) * math.cos(lat)
    site = (flat * math.cos(lon), flat * math.sin(lon), (radius * (1.0 - square) + height) * math.sin(lat))
    x, y, z = position_km - np.array(site)[:, np.newaxis]
    outward = math.cos(lon) * x + math.sin(lon) * y
    east = math.cos(lon) * y - math.sin(lon) * x
    north = math.cos(lat) * z - math.sin(lat) * outward
    up = math.cos(lat) * outward + math.sin(lat) * z
    return np.degrees(np.arctan2(up, np.hypot(east, north))), np.degrees(np.arctan2(east, north)) % 360.0


def line_deg(place: Station, azimuth_deg: Floats) -> Floats:
    """Return the station's horizon at azimuths, from mask and least elevation apart."""
    if not place.mask:
        return np.full(azimuth_deg.shape, max(place.least_receive_elevation_deg, 0.0))
    azimuths, elevations = np.array(place.mask).T
    low: Floats = np.interp(azimuth_deg, azimuths, elevations, period=360.0)
    return np.maximum(low, place.least_receive_elevation_deg)


def excess_deg(one: ElementSet, place: Station, seconds: Floats) -> Floats:
    """Return elevation less horizon line at `seconds`; minus infinity where SGP4 gives up."""
    position_km, errors = itrs_km(one, seconds)
    elevation_deg, azimuth_deg = horizontal_deg(place, position_km)
    return np.where(errors == 0, elevation_deg - line_deg(place, azimuth_deg), -np.inf)


def our_scale() -> Timescale:
    """Return Skyfield's time scale with UT1 from our table, so that geometry alone is compared."""
    scale = Timescale.__new__(Timescale)
    scale.__dict__.update(SCALE.__dict__)
    shift_s = 32.184 + 37.0  # TT - UTC since 2017
    scale.delta_t_function = lambda tt: shift_s - ut1_minus_utc_s(np.asarray(tt) - shift_s / 86400.0)
    return scale
