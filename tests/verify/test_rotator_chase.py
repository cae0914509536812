"""The chase over made-up tracks whose answer is known."""

from dataclasses import replace

import numpy as np
import pytest
from numpy.typing import ArrayLike

from passplan.domain.station import Rotator, Station
from passplan.verify.rotator_chase import half_beam_deg, worst_lag
from passplan.verify.skyfield_view import View
from tests.verify.good_week import EAST, WEST


def track(azimuth_deg: ArrayLike, elevation_deg: ArrayLike) -> View:
    azimuth, elevation = np.asarray(azimuth_deg, dtype=float), np.asarray(elevation_deg, dtype=float)
    count = len(azimuth)
    return View(
        start_s=100,
        azimuth_deg=azimuth % 360.0,
        elevation_deg=elevation,
        range_km=np.full(count, 1000.0),
        horizon_deg=np.zeros(count),
        aos_s=100.0,
        los_s=100.0 + count - 1,
    )


def turning(rotator: Rotator) -> Station:
    return replace(WEST, rotator=rotator)


def over_the_zenith() -> View:
    """Rise in the south, pass within 0.1 deg of the zenith, set in the north, 1 deg a second."""
    along = np.radians(np.arange(-80.0, 81.0))
    north, east, up = np.sin(along), np.full(len(along), np.sin(np.radians(0.1))), np.cos(along)
    azimuth = np.degrees(np.arctan2(east, north)) % 360.0
    return track(azimuth, np.degrees(np.arctan2(up, np.hypot(north, east))))


def test_a_steady_turn_lags_by_what_is_missing() -> None:
    """At the horizon 3 deg/s wanted and 2 deg/s given for 10 s leave 10 deg."""
    view = track(90.0 + 3.0 * np.arange(11), np.zeros(11))
    lag, second = worst_lag(turning(Rotator(azimuth_rate_deg_s=2.0)), view, 100, 110)
    assert second == 110
    assert lag == pytest.approx(10.0)
    assert worst_lag(turning(Rotator(azimuth_rate_deg_s=3.0)), view, 100, 110)[0] == pytest.approx(
        0.0, abs=1e-9
    )


def test_only_the_contact_is_watched_but_the_chase_begins_with_the_pass() -> None:
    view = track(90.0 + 3.0 * np.arange(11), np.zeros(11))
    lag, second = worst_lag(turning(Rotator(azimuth_rate_deg_s=2.0)), view, 102, 104)
    assert lag == pytest.approx(4.0)
    assert second == 104


def test_azimuth_counts_less_high_up() -> None:
    """At 60 deg elevation 10 deg of azimuth are 2 asin(sin 5 deg cos 60 deg) of arc."""
    view = track(90.0 + 3.0 * np.arange(11), np.full(11, 60.0))
    lag, _ = worst_lag(turning(Rotator(azimuth_rate_deg_s=2.0)), view, 100, 110)
    assert lag == pytest.approx(2.0 * np.degrees(np.arcsin(np.sin(np.radians(5.0)) * 0.5)))


def test_elevation_has_its_own_rate() -> None:
    view = track(np.full(11, 90.0), 10.0 + 3.0 * np.arange(11))
    lag, _ = worst_lag(turning(Rotator(elevation_rate_deg_s=1.0)), view, 100, 110)
    assert lag == pytest.approx(20.0)


def test_the_zenith_needs_a_flip() -> None:
    """Upright the azimuth has to turn half round in a moment; leaning over it hardly turns."""
    view = over_the_zenith()
    upright, _ = worst_lag(turning(Rotator(azimuth_rate_deg_s=3.0)), view, 100, 260)
    leaning, _ = worst_lag(turning(Rotator(azimuth_rate_deg_s=3.0, flip=True)), view, 100, 260)
    assert upright > 20.0
    assert leaning < 1.0


def test_the_zenith_from_the_other_side_needs_a_flip_too() -> None:
    view = over_the_zenith()
    mirrored = track(-view.azimuth_deg, view.elevation_deg)
    assert worst_lag(turning(Rotator(azimuth_rate_deg_s=3.0, flip=True)), mirrored, 100, 260)[0] < 1.0


@pytest.mark.parametrize("way", [1.0, -1.0])
def test_a_stop_in_the_north_costs_a_whole_turn_and_overlap_does_not(way: float) -> None:
    view = track(way * (np.arange(41) - 20.0), np.zeros(41))
    stopped, _ = worst_lag(turning(Rotator(azimuth_from_deg=0.0, azimuth_to_deg=360.0)), view, 100, 140)
    assert stopped > 50.0
    free, _ = worst_lag(turning(Rotator(azimuth_from_deg=0.0, azimuth_to_deg=450.0)), view, 100, 140)
    assert free == pytest.approx(0.0, abs=1e-9)


def test_a_fixed_antenna_never_lags() -> None:
    assert worst_lag(EAST, over_the_zenith(), 100, 260) == (0.0, 100)


def test_a_satellite_that_is_nowhere_cannot_be_followed() -> None:
    view = track(np.full(5, np.nan), np.full(5, np.nan))
    lag, second = worst_lag(WEST, view, 100, 104)
    assert np.isnan(lag)
    assert second == 100


def test_half_a_beam() -> None:
    """Kraus: sqrt(27000 / gain); 13 dBi are 36.8 deg, half of it 18.4 deg."""
    assert half_beam_deg(WEST) == 15.0
    assert half_beam_deg(turning(Rotator())) == pytest.approx(18.39, abs=0.01)
    assert half_beam_deg(EAST) == pytest.approx(np.sqrt(27000.0 / 10.0**1.2) / 2.0)
