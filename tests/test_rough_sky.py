"""The brute-force sky of the tests, against Skyfield's geometry and published positions of the Sun."""

import math
from datetime import timedelta

import numpy as np
import pytest
from sgp4.api import WGS72, Satrec
from skyfield.api import EarthSatellite, load, wgs84

from passplan.domain.moments import Horizon
from tests.generated import WEEK, generated_week
from tests.rough_sky import elevations_deg, positions_teme, runs, shadow_spans, sun_direction

HORIZON = Horizon(week=WEEK)


def test_elevations_are_skyfields() -> None:
    """Within 0.02 deg: the grid takes UTC for UT1."""
    mission, elements = generated_week("easy", 1)
    one, seconds = elements["Quill 1"], np.arange(0.0, HORIZON.end_s, 997.0)
    engine = Satrec()
    engine.sgp4init(
        WGS72,
        "i",
        0,
        28099.5,  # 2026-12-06 12:00 in days since 1949-12-31
        0.0,
        0.0,
        0.0,
        one.eccentricity,
        math.radians(one.argument_of_perigee_deg),
        math.radians(one.inclination_deg),
        math.radians(one.mean_anomaly_deg),
        one.mean_motion_rev_day * math.tau / 1440.0,
        math.radians(one.node_deg),
    )
    scale = load.timescale(builtin=True)
    moments = scale.from_datetimes([HORIZON.start + timedelta(seconds=float(s)) for s in seconds])
    for station in mission.stations[:3]:
        site = wgs84.latlon(station.latitude_deg, station.longitude_deg, elevation_m=station.altitude_m)
        flight = EarthSatellite.from_satrec(engine, scale) - site
        theirs = flight.at(moments).altaz()[0].degrees
        ours = elevations_deg(station, HORIZON, seconds, positions_teme(one, HORIZON, seconds))
        assert np.abs(ours - theirs).max() < 0.02


def test_the_sun_is_where_a_textbook_has_it() -> None:
    """2006-04-02 00:00: (146 186 212, 28 788 976, 12 481 064) km, mean equator of date.

    Vallado, Fundamentals of Astrodynamics and Applications, example 5-1.
    """
    (ours,) = sun_direction(Horizon(week="2006-W13"), np.array([6.0 * 86400.0]))
    theirs = np.array([146186212.0, 28788976.0, 12481064.0])
    assert ours == pytest.approx(theirs / np.linalg.norm(theirs), abs=3e-4)


def test_the_shadow_is_as_wide_as_the_earth() -> None:
    seconds = np.arange(4.0)
    sun = sun_direction(HORIZON, seconds)
    aside = np.cross(sun, [0.0, 0.0, 1.0])
    aside /= np.linalg.norm(aside, axis=1)[:, None]
    away_km = np.array([6377.0, 6379.0, 0.0, 0.0])[:, None]
    behind_km = np.array([3000.0, 3000.0, 7000.0, -7000.0])[:, None]
    places = away_km * aside - behind_km * sun
    assert shadow_spans(HORIZON, seconds, places) == ((0.0, 0.0), (2.0, 2.0))


def test_runs() -> None:
    assert runs(np.array([True, False, True, True])) == [(0, 0), (2, 3)]
    assert runs(np.array([False, False])) == []
