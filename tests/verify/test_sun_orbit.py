"""The second Sun against published places and an ephemeris."""

import de421
import numpy as np
import pytest
from jplephem.ephem import Ephemeris  # type: ignore[import-untyped]
from skyfield.api import load
from skyfield.framelib import mean_equator_and_equinox_of_date

from passplan.domain.constants import AU_KM
from passplan.domain.passes import Floats
from passplan.verify.sun_orbit import sun_km

J2000_JD = 2451545.0
LIGHT_KM_DAY = 299792.458 * 86400.0


def angle_deg(one: Floats, other: Floats) -> Floats:
    across = np.linalg.norm(np.cross(one, other), axis=-1)
    return np.asarray(np.degrees(np.arctan2(across, np.sum(one * other, axis=-1))))


def test_vallado_example_5_1() -> None:
    """D. Vallado, Fundamentals of Astrodynamics, ex. 5-1: 2006 April 2, 00:00."""
    book_km = np.array([[146_186_212.0, 28_788_976.0, 12_481_064.0]])
    found_km = sun_km(np.array([2453827.5 - J2000_JD]))
    assert angle_deg(found_km, book_km)[0] < 0.01
    assert np.linalg.norm(found_km) == pytest.approx(np.linalg.norm(book_km), rel=1e-4)


def test_meeus_example_25a() -> None:
    """J. Meeus, Astronomical Algorithms, ex. 25.a: 1992 October 13.0 TD (from memory).

    The book's place is apparent; ours leaves nutation out, up to 0.005 deg.
    """
    right_ascension, declination = np.radians(198.38083), np.radians(-7.78507)
    book = np.array(
        [
            [
                np.cos(declination) * np.cos(right_ascension),
                np.cos(declination) * np.sin(right_ascension),
                np.sin(declination),
            ]
        ]
    )
    assert angle_deg(sun_km(np.array([2448908.5 - J2000_JD])), book)[0] < 0.01


def test_against_de421_from_2000_to_2050() -> None:
    """JPL's DE421, light time taken off, in the mean equator and equinox of date of Skyfield."""
    ephemeris = Ephemeris(de421)
    tt_jd = np.arange(J2000_JD, 2469807.5, 9.13)

    def earth_km(moments: Floats) -> Floats:
        moon = ephemeris.position("moon", moments) / (1.0 + ephemeris.EMRAT)
        return np.asarray(ephemeris.position("earthmoon", moments) - moon)

    def sun_from_earth_km(moments: Floats) -> Floats:
        return np.asarray(ephemeris.position("sun", moments) - earth_km(moments))

    away_day = np.linalg.norm(sun_from_earth_km(tt_jd), axis=0) / LIGHT_KM_DAY
    apparent_km = sun_from_earth_km(tt_jd - away_day)
    turn = mean_equator_and_equinox_of_date.rotation_at(load.timescale(builtin=True).tt_jd(tt_jd))
    of_date_km = np.einsum("ijn,jn->ni", turn, apparent_km)

    found_km = sun_km(tt_jd - 69.184 / 86400.0 - J2000_JD)
    assert angle_deg(found_km, of_date_km).max() < 0.004
    ratio = np.linalg.norm(found_km, axis=1) / np.linalg.norm(of_date_km, axis=1)
    assert np.abs(ratio - 1.0).max() < 1e-4


def test_the_sun_stays_between_its_least_and_largest_distance() -> None:
    distance_au = np.linalg.norm(sun_km(np.arange(0.0, 366.0)), axis=1) / AU_KM
    assert distance_au.min() == pytest.approx(0.9833, abs=2e-4)  # perihelion of 2000, common practice
    assert distance_au.max() == pytest.approx(1.0167, abs=2e-4)
