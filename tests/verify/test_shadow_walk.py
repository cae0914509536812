"""Shadow against published cases, closed forms and a walk second by second."""

import math
from datetime import UTC, datetime

import numpy as np
import pytest

from passplan.domain.constants import AU_KM, EARTH_MU_KM3_S2, EARTH_RADIUS_KM
from passplan.domain.moments import Horizon
from passplan.domain.passes import Floats
from passplan.verify.shadow_walk import in_shadow, shadow_spans
from passplan.verify.skyfield_view import orbit
from passplan.verify.sun_orbit import sun_km
from tests.verify.good_week import ELEMENTS, HORIZON


def circle_km(radius_km: float, count: int) -> Floats:
    turn = np.linspace(0.0, math.tau, count, endpoint=False)
    return radius_km * np.stack((np.cos(turn), np.sin(turn), np.zeros(count)), axis=1)


def test_curtis_example_12_8_is_in_shadow() -> None:
    """H. Curtis, Orbital Mechanics for Engineering Students, ex. 12.8 (angle 172.8 over 66.9 + 90.0 deg)."""
    place = np.array([[2817.899, -14110.473, -7502.672]])
    assert in_shadow(place, np.array([[-11747041.0, 139486985.0, 60472278.0]])).all()


def test_vallado_example_5_6_is_sunlit() -> None:
    """D. Vallado, Fundamentals of Astrodynamics, ex. 5-6: satellite 1 on 1995 February 15, 12:00."""
    place = np.array([[0.0, -4464.696, -5102.509]])
    day = 2449764.0 - 2451545.0
    assert not in_shadow(place, np.array([[1.22233e8, -7.6151e7, -3.3016e7]])).any()
    assert not in_shadow(place, sun_km(np.array([day]))).any()


def test_neta_and_vallado_entry_and_exit() -> None:
    """B. Neta, D. Vallado, J. Astronaut. Sci. 46 (1998) 91: true anomalies 50.0434 and 196.4727 deg.

    A cylinder of 6378.1363 km there; a sphere seen from so near is the same to 0.01 deg.
    """
    anomaly_deg = np.arange(0.0, 360.0, 0.001)
    anomaly = np.radians(anomaly_deg)
    semilatus_km, eccentricity, inclination = 1.029 * 6378.1363, 0.002, math.radians(63.4)
    radius = semilatus_km / (1.0 + eccentricity * np.cos(anomaly))
    up = radius * np.sin(anomaly)
    place = np.stack(
        (radius * np.cos(anomaly), up * math.cos(inclination), up * math.sin(inclination)), axis=1
    )
    sun = np.broadcast_to([67029379.329, -120206236.988, -52109013.710], place.shape)
    dark = in_shadow(place, sun)
    turns = anomaly_deg[1:][dark[1:] != dark[:-1]]
    assert turns == pytest.approx([50.0434, 196.4727], abs=0.01)


@pytest.mark.parametrize(
    ("height_km", "longest_min"),
    [(400, 36.11), (500, 35.75), (550, 35.61), (600, 35.49), (700, 35.29), (800, 35.13)],
)
def test_longest_eclipse_at_each_height(height_km: float, longest_min: float) -> None:
    """Cylinder of 6378.137 km, Sun in the plane of the orbit.

    35.8 and 35.3 min at 500 and 700 km in Wertz and Larson, Space Mission Analysis and
    Design, inside cover (from memory).
    """
    radius_km = EARTH_RADIUS_KM + height_km
    place = circle_km(radius_km, 40_000)
    share = in_shadow(place, np.broadcast_to([AU_KM, 0.0, 0.0], place.shape)).mean()
    period_min = math.tau * math.sqrt(radius_km**3 / EARTH_MU_KM3_S2) / 60.0
    assert share * period_min == pytest.approx(longest_min, abs=0.05)


@pytest.mark.parametrize(
    ("beta_deg", "share_min"), [(0, 35.61), (30, 33.58), (45, 30.01), (60, 20.54), (70, 0.0)]
)
def test_eclipse_over_the_sun_s_height_over_the_orbit(beta_deg: float, share_min: float) -> None:
    """acos(sqrt(h^2 + 2 R h) / ((R + h) cos beta)) / 180 deg of the period, at 550 km."""
    place = circle_km(EARTH_RADIUS_KM + 550.0, 40_000)
    beta = math.radians(beta_deg)
    sun = np.broadcast_to([AU_KM * math.cos(beta), 0.0, AU_KM * math.sin(beta)], place.shape)
    period_min = math.tau * math.sqrt((EARTH_RADIUS_KM + 550.0) ** 3 / EARTH_MU_KM3_S2) / 60.0
    assert in_shadow(place, sun).mean() * period_min == pytest.approx(share_min, abs=0.02)


def test_nowhere_is_not_in_shadow() -> None:
    assert not in_shadow(np.full((1, 3), np.nan), np.array([[AU_KM, 0.0, 0.0]])).any()


def test_spans_agree_with_every_second_of_a_day() -> None:
    body = orbit(ELEMENTS)
    seconds = np.arange(0.0, 86_400.0)
    whole, fraction = HORIZON.julian(0.0)
    days = fraction + seconds / 86_400.0
    _, place_km, _ = body.model.sgp4_array(np.full(len(days), whole), days)
    dark = in_shadow(place_km, sun_km(whole - 2451545.0 + days))
    spans = shadow_spans(body, HORIZON, 0.0, 86_400.0)
    told = np.zeros(len(seconds), dtype=bool)
    for begin, end in spans:
        told |= (seconds > begin) & (seconds < end)
    assert np.array_equal(dark, told)
    assert 14 <= len(spans) <= 16


def test_spans_may_begin_and_end_in_shadow() -> None:
    body = orbit(ELEMENTS)
    begin, end = shadow_spans(body, HORIZON, 0.0, 20_000.0)[1]
    inside = shadow_spans(body, HORIZON, begin + 100.0, end - 100.0)
    assert inside == [(begin + 100.0, end - 100.0)]
    assert shadow_spans(body, HORIZON, end + 100.0, end + 200.0) == []


def test_spans_are_the_same_from_another_monday() -> None:
    other = Horizon(week="2026-W49")
    body = orbit(ELEMENTS)
    apart = other.seconds(datetime(2026, 12, 7, tzinfo=UTC))
    shifted = [(a - apart, b - apart) for a, b in shadow_spans(body, other, apart, apart + 20_000.0)]
    assert np.array(shifted) == pytest.approx(np.array(shadow_spans(body, HORIZON, 0.0, 20_000.0)), abs=0.02)
