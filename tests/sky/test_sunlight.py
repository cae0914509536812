"""The Sun and the Earth's shadow, against published examples and an ephemeris."""

import math
from dataclasses import dataclass
from datetime import UTC, datetime
from typing import Any

import de421
import numpy as np
import pytest
from jplephem.ephem import Ephemeris  # type: ignore[import-untyped]
from numpy.typing import NDArray
from skyfield.api import EarthSatellite

from passplan.domain.constants import DAY_S, EARTH_RADIUS_KM
from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, julian
from passplan.domain.passes import ShadowModel
from passplan.sky import survey
from passplan.sky.propagate import fly, grids, satrec, step_s
from passplan.sky.sunlight import darkness, shadows, sun_km
from tests.sky.orbits import ORBITS, SCALE, WEEK, Floats, between, element_set

LOW = ("sun-synchronous 500 km", "400 x 1500 km", "equatorial 600 km")
MODELS: tuple[ShadowModel, ...] = ("umbra", "half", "penumbra")


def circle_km(radius_km: float, inclination_deg: float, anomaly_deg: Floats) -> Floats:
    """Return positions (3, n) on a circle whose node is on the x axis."""
    turn, tilt = np.radians(anomaly_deg), math.radians(inclination_deg)
    across = np.sin(turn)
    return radius_km * np.stack((np.cos(turn), across * math.cos(tilt), across * math.sin(tilt)))


def edges_deg(anomaly_deg: Floats, depth: Floats) -> tuple[float, float]:
    """Return where a shadow begins and ends on a circle that starts in sunlight."""
    dark = depth > 0.0
    begin, end = np.flatnonzero(dark[1:] != dark[:-1])
    return float(anomaly_deg[begin]), float(anomaly_deg[end])


# The Sun


def test_sun_vector_published_case() -> None:
    """Vallado, example 5-1, 2006-04-02 00:00; the editions of the book differ by 0.01 deg."""
    book = np.array([146186212.0, 28788976.0, 12481064.0])
    ours = sun_km(np.array([2453827.5]))[:, 0]
    cosine = ours @ book / np.linalg.norm(ours) / np.linalg.norm(book)
    assert math.degrees(math.acos(cosine)) < 0.01
    assert np.linalg.norm(ours) == pytest.approx(np.linalg.norm(book), rel=1e-4)


def apparent_sun_km(days: Floats) -> Floats:
    """Return DE421's Sun as seen from the Earth (light time and aberration), in GCRS, shape (3, n)."""
    tables = Ephemeris(de421)
    tdb = days + 69.184 / DAY_S

    def earth(moment: Floats) -> Floats:
        position: Floats = tables.position("earthmoon", moment) - tables.earth_share * tables.position(
            "moon", moment
        )
        return position

    velocity = (earth(tdb + 0.01) - earth(tdb - 0.01)) / (0.02 * DAY_S)
    seen: Floats = tables.position("sun", tdb) - earth(tdb)
    distance = np.linalg.norm(seen, axis=0)
    apparent: Floats = seen + velocity * distance / 299792.458
    return apparent


def test_sun_direction_all_through_ten_years() -> None:
    """Against DE421, turned to the equinox of date by Skyfield's precession: 0.012 deg at worst."""
    days = julian(datetime(2020, 1, 1, tzinfo=UTC))[0] + np.arange(0.0, 3652.0, 3.0)
    theirs = apparent_sun_km(days)
    precession = SCALE.tt_jd(days + 69.184 / DAY_S).P
    of_date = np.einsum("ijn,jn->in", precession, theirs)
    ours = sun_km(days)
    cosine = np.einsum("in,in->n", ours, of_date)
    cosine /= np.linalg.norm(ours, axis=0) * np.linalg.norm(of_date, axis=0)
    assert np.degrees(np.arccos(np.minimum(cosine, 1.0))).max() < 0.012
    assert np.abs(np.linalg.norm(ours, axis=0) / np.linalg.norm(of_date, axis=0) - 1.0).max() < 1e-4


# The shadow


def test_sunlit_published_case() -> None:
    """Vallado, example 5-6, first satellite, 1995-02-15 12:00 UTC: in sunlight."""
    position = np.array([[0.0], [-4464.696], [-5102.509]])
    given = np.array([[1.22233e8], [-7.6151e7], [-3.3016e7]])
    own = sun_km(np.array([julian(datetime(1995, 2, 15, 12, tzinfo=UTC))[0] + 0.0]))
    for model in MODELS:
        assert darkness(position, given, model)[0] < 0.0
        assert darkness(position, own, model)[0] < 0.0


def test_in_shadow_published_case() -> None:
    """Curtis, Orbital Mechanics for Engineering Students, example 12.8: in the Earth's shadow."""
    position = np.array([[2817.899], [-14110.473], [-7502.672]])
    given = np.array([[-11747041.0], [139486985.0], [60472278.0]])
    assert all(darkness(position, given, model)[0] > 0.0 for model in MODELS)


def test_cylinder_published_case() -> None:
    """Orbit of Neta and Vallado, J. Astronaut. Sci. 46 (1998) 91-104: 50.0434 and 196.4727 deg.

    "half" differs from a cylinder by the Sun's distance, 0.003 deg.
    """
    anomaly_deg = np.arange(0.0, 360.0, 0.002)
    radius_km = 1.029 * 6378.1363 / (1.0 + 0.002 * np.cos(np.radians(anomaly_deg)))
    position = circle_km(1.0, 63.4, anomaly_deg) * radius_km
    given = np.array([[67029379.329], [-120206236.988], [-52109013.710]])
    begin, end = edges_deg(anomaly_deg, darkness(position, given, "half"))
    assert begin == pytest.approx(50.0434, abs=0.01)
    assert end == pytest.approx(196.4727, abs=0.01)


@pytest.mark.parametrize(
    ("model", "published"), [("umbra", (171.456, 306.803)), ("penumbra", (170.928, 307.332))]
)
def test_cones_published_case(model: ShadowModel, published: tuple[float, float]) -> None:
    """Companion code of Vallado's book (Ex5_5neweclipse), 500 km circle, 28.5 deg, 2015-05-20 18:00 UTC."""
    anomaly_deg = np.arange(0.0, 360.0, 0.002)
    given = np.array([[77523937.09], [119297006.80], [51716128.10]])
    depth = darkness(circle_km(6878.14, 28.5, anomaly_deg), given, model)
    assert edges_deg(anomaly_deg, depth) == pytest.approx(published, abs=0.1)


EQUINOX = Horizon(week="2026-W39", lookahead_h=0.0)
EQUINOX_S = EQUINOX.seconds(datetime(2026, 9, 23, 0, 5, tzinfo=UTC))  # September equinox of 2026, from memory


@pytest.mark.parametrize(
    ("beta_deg", "minutes", "room"),
    [(0.0, 35.61, 0.1), (30.0, 33.58, 0.1), (45.0, 30.01, 0.1), (60.0, 20.54, 0.1), (65.0, 11.95, 0.3)],
)
def test_eclipse_length_by_beta_angle(beta_deg: float, minutes: float, room: float) -> None:
    """550 km circle: acos(sqrt(h^2 + 2 R h) / ((R + h) cos beta)) / 180 deg of a revolution.

    At the equinox the Sun stands at 180 deg on the equator; a polar orbit whose node is at
    90 + beta has its pole at beta from there. SGP4's orbit is not quite a circle: 0.1 min, or 0.3 where
    the length falls by 3 min a degree.
    """
    one = element_set(
        90.0, 15.0549, 1e-4, node_deg=(180.0 - beta_deg) % 360.0, bstar=0.0, epoch=EQUINOX.utc(EQUINOX_S)
    )
    spans = survey({"A": one}, [], EQUINOX).shadows["A"]
    (length_s,) = [b - a for a, b in spans if abs(0.5 * (a + b) - EQUINOX_S) < 0.5 * DAY_S / 15.0549]
    assert length_s / 60.0 == pytest.approx(minutes, abs=room)


def test_above_the_largest_beta_there_is_no_shadow() -> None:
    """550 km: none above 67.02 deg."""
    one = element_set(90.0, 15.0549, 1e-4, node_deg=110.0, bstar=0.0, epoch=EQUINOX.utc(EQUINOX_S))
    assert survey({"A": one}, [], EQUINOX).shadows["A"] == ()


def test_a_shadow_shorter_than_the_grid_is_found() -> None:
    """Near the largest beta shadows grow from nothing; SGP4 every 5 s sees as many as we do."""
    shortest_s = math.inf
    for node_deg in (113.0, 113.01, 113.02, 113.03):
        one = element_set(90.0, 15.0549, 1e-4, node_deg=node_deg, bstar=0.0, epoch=EQUINOX.utc(EQUINOX_S))
        spans = survey({"A": one}, [], EQUINOX).shadows["A"]
        dark = dark_at(one, np.arange(0.0, EQUINOX.end_s, 5.0), EQUINOX)
        assert int(np.sum(dark[1:] & ~dark[:-1]) + dark[0]) == sum(b - a > 5.0 for a, b in spans)
        shortest_s = min(shortest_s, *(b - a for a, b in spans[1:-1]))
        assert step_s(one) == 300
    assert shortest_s < 300.0


def dark_at(one: ElementSet, seconds: Floats, week: Horizon) -> NDArray[np.bool_]:
    """Return whether SGP4's own positions stand in shadow, shape (n,)."""
    day, fraction = week.julian(0.0)
    days = np.full(seconds.shape, day)
    _, position, _ = satrec(one).sgp4_array(days, fraction + seconds / DAY_S)
    return darkness(position.T, sun_km(day + fraction + seconds / DAY_S), "half") > 0.0


@pytest.mark.parametrize("orbit", LOW)
def test_umbra_lies_in_half_and_half_in_penumbra(orbit: str) -> None:
    """About 5 s of a low orbit from one model to the next, at each end."""
    flown = fly(ORBITS[orbit], grids(WEEK, 0.0))
    umbra, half, penumbra = (shadows(flown, WEEK, 0.0, model) for model in MODELS)
    assert len(umbra) == len(half) == len(penumbra)
    for inner, outer in ((umbra, half), (half, penumbra)):
        for (a, b), (low, high) in zip(inner[1:-1], outer[1:-1], strict=True):
            assert 2.0 < a - low < 40.0
            assert 2.0 < high - b < 40.0


def test_shadows_reach_back_before_the_week() -> None:
    """Where telemetry is older; what lies in the week is the same."""
    one = ORBITS["sun-synchronous 500 km"]
    back = survey({"A": one}, [], WEEK, since_s=-2.5 * DAY_S).shadows["A"]
    week = survey({"A": one}, [], WEEK).shadows["A"]
    assert min(a for a, _ in back) < -2.4 * DAY_S
    inside = [(max(a, 0.0), b) for a, b in back if b > 0.0]
    assert np.array(inside) == pytest.approx(np.array(week), abs=1e-3)


def test_shadows_that_begin_after_the_week_does() -> None:
    one = ORBITS["sun-synchronous 500 km"]
    late = survey({"A": one}, [], WEEK, since_s=DAY_S + 1000.0).shadows["A"]
    week = survey({"A": one}, [], WEEK).shadows["A"]
    assert late[0][0] >= DAY_S + 1000.0
    assert np.array(late[1:]) == pytest.approx(np.array(week[-len(late) + 1 :]), abs=1e-3)


@dataclass
class _Ephemeris:
    """Just enough of an ephemeris for `is_sunlit`: DE421's Sun as seen from the Earth."""

    def __getitem__(self, name: str) -> "_Ephemeris":
        return self

    def __sub__(self, other: "_Ephemeris") -> "_Ephemeris":
        return self

    def at(self, time: Any) -> Any:
        @dataclass
        class Place:
            m: Floats

        @dataclass
        class Position:
            xyz: Place

        return Position(xyz=Place(m=1000.0 * apparent_sun_km(np.atleast_1d(time.tt) - 69.184 / DAY_S)))


@pytest.mark.parametrize("orbit", LOW)
def test_a_week_of_shadows_is_skyfields(orbit: str) -> None:
    """Skyfield's `is_sunlit` with DE421 flips within 0.3 s of every edge, and agrees every 20 s."""
    spans = np.array(survey({"A": ORBITS[orbit]}, [], WEEK).shadows["A"])
    satellite = EarthSatellite.from_satrec(satrec(ORBITS[orbit]), SCALE)
    start = WEEK.start

    def sunlit(seconds: Floats) -> Any:
        time = SCALE.utc(start.year, start.month, start.day, 0, 0, seconds)
        return satellite.at(time).is_sunlit(_Ephemeris())

    begins, ends = spans[:, 0][spans[:, 0] > 0.0], spans[:, 1][spans[:, 1] < WEEK.end_s]
    assert sunlit(begins - 0.3).all()
    assert not sunlit(begins + 0.3).any()
    assert not sunlit(ends - 0.3).any()
    assert sunlit(ends + 0.3).all()
    seconds = np.arange(7.0, WEEK.end_s, 20.0)
    ours = np.searchsorted(spans.ravel(), seconds) % 2 == 0
    near = np.abs(seconds[:, np.newaxis] - spans.ravel()).min(axis=1) < 0.3
    assert (sunlit(seconds) == ours)[~near].all()


def test_the_earths_radius_is_the_equators() -> None:
    """A satellite on the terminator's line at exactly one radius from the axis is on the edge."""
    given = np.array([[1.5e8], [0.0], [0.0]])
    edge = np.array([[-1000.0, -1000.0], [EARTH_RADIUS_KM + 1.0, EARTH_RADIUS_KM - 1.0], [0.0, 0.0]])
    outside, inside = darkness(edge, given, "half")
    assert outside < 0.0 < inside


def test_an_eccentric_orbit_has_shadows_of_very_different_length() -> None:
    """Near perigee minutes, near apogee hours; SGP4 at whole minutes agrees with every one."""
    one = element_set(20.0, *between(400.0, 39000.0), perigee_deg=0.0, node_deg=255.0 - 180.0, bstar=0.0)
    flown = fly(one, grids(WEEK, 0.0))
    spans = np.array(shadows(flown, WEEK, 0.0))
    seconds = np.arange(30.0, WEEK.end_s, 60.0)
    dark = dark_at(one, seconds, WEEK)
    assert (dark == (np.searchsorted(spans.ravel(), seconds) % 2 == 1)).all()
