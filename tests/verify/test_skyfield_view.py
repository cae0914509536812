"""What is seen, against published states and passes."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta

import numpy as np
import pytest
from skyfield.api import load, wgs84

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.verify.skyfield_view import horizon_deg, orbit, view
from passplan.verify.tally import TWENTIETH_DEG
from tests.verify.good_week import ELEMENTS, HORIZON, WEST, flybys

PLACE = wgs84.latlon(WEST.latitude_deg, WEST.longitude_deg, elevation_m=WEST.altitude_m)


def moment(year: int, day: float) -> datetime:
    """Return the moment of a fractional day of a year, as TLE count them."""
    return datetime(year, 1, 1, tzinfo=UTC) + timedelta(days=day - 1.0)


# 25544 as printed in the documentation of Skyfield, earth-satellites.
STATION_SET = replace(
    ELEMENTS,
    epoch=moment(2014, 20.93268519),
    inclination_deg=51.6498,
    node_deg=109.4756,
    eccentricity=0.0003572,
    argument_of_perigee_deg=55.9686,
    mean_anomaly_deg=274.8005,
    mean_motion_rev_day=15.49815350,
    bstar_per_earth_radius=0.18200e-3,
)


def test_state_of_object_00005_at_its_epoch() -> None:
    """First line of tcppver.out in the sgp4 package (Vallado and others, AIAA 2006-6753)."""
    elements = ElementSet(
        name="",
        number=5,
        designator="",
        epoch=moment(2000, 179.78495062),
        inclination_deg=34.2682,
        node_deg=348.7242,
        eccentricity=0.1859667,
        argument_of_perigee_deg=331.7664,
        mean_anomaly_deg=19.3264,
        mean_motion_rev_day=10.82419157,
        bstar_per_earth_radius=0.28098e-4,
    )
    body = orbit(elements)
    model = body.model
    _, place_km, speed_km_s = model.sgp4(model.jdsatepoch, model.jdsatepochF)
    assert place_km == pytest.approx([7022.46529266, -1400.08296755, 0.03995155], abs=1e-5)
    assert speed_km_s == pytest.approx([1.893841015, 6.405893759, 4.534807250], abs=1e-7)


@pytest.mark.parametrize(
    ("rise", "top", "set_"), [("06:25:37", "06:26:58", "06:28:19"), ("12:54:56", "12:56:27", "12:57:58")]
)
def test_published_passes(rise: str, top: str, set_: str) -> None:
    """The documentation of Skyfield, earth-satellites: 2014 January 23, 40.8939 N 83.8917 W, over 30 deg."""
    station = replace(
        WEST,
        latitude_deg=40.8939,
        longitude_deg=-83.8917,
        altitude_m=0.0,
        mask=(),
        least_receive_elevation_deg=30.0,
    )
    horizon = Horizon(week="2014-W04")
    told = [
        horizon.seconds(datetime.fromisoformat(f"2014-01-23T{text}").replace(tzinfo=UTC))
        for text in (rise, top, set_)
    ]
    seen = view(orbit(STATION_SET), station, horizon, round(told[1]), round(told[1]) + 5)
    assert seen.aos_s == pytest.approx(told[0], abs=1.0)
    assert seen.los_s == pytest.approx(told[2], abs=1.0)
    assert seen.start_s + int(np.argmax(seen.elevation_deg)) == pytest.approx(told[1], abs=1.5)


def test_published_direction_and_range() -> None:
    """2014 January 23, 11:18:07: 16 deg 16 min 32.6 s, 350 deg 15 min 20.4 s, 1168.7 km (from memory)."""
    station = replace(WEST, latitude_deg=40.8939, longitude_deg=-83.8917, altitude_m=0.0)
    horizon = Horizon(week="2014-W04")
    second = round(horizon.seconds(datetime(2014, 1, 23, 11, 18, 7, tzinfo=UTC)))
    seen = view(orbit(STATION_SET), station, horizon, second, second)
    here = seen.seconds(second, second)
    assert seen.elevation_deg[here][0] == pytest.approx(16.0 + 16.0 / 60 + 32.6 / 3600, abs=3e-4)
    assert seen.azimuth_deg[here][0] == pytest.approx(350.0 + 15.0 / 60 + 20.4 / 3600, abs=3e-4)
    assert seen.range_km[here][0] == pytest.approx(1168.7, abs=0.1)


def test_aos_and_los_are_those_of_skyfield_s_own_search() -> None:
    """The search knows one flat line of 10 deg, so the station is given no mask; it is good to half a second.

    Asked directly, Skyfield has the satellite on that line at ours to a few ten-thousandths of a degree.
    """
    body, station, scale = orbit(ELEMENTS), replace(WEST, mask=()), load.timescale(builtin=True)
    for fly in flybys("QUA")[::5]:
        middle = round((fly.aos_s + fly.los_s) / 2.0)
        seen = view(body, station, HORIZON, middle, middle + 10)
        assert seen.aos_s == pytest.approx(fly.aos_s, abs=0.5)
        assert seen.los_s == pytest.approx(fly.los_s, abs=0.5)
        for second in (seen.aos_s, seen.los_s):
            assert (body - PLACE).at(scale.from_datetime(HORIZON.utc(second))).altaz()[0].degrees == (
                pytest.approx(10.0, abs=5e-4)
            )


def test_the_highest_point_is_found_between_seconds() -> None:
    """Skyfield's search gives culminations to half a second; near the zenith that is tenths of a degree."""
    body, station = orbit(ELEMENTS), replace(WEST, mask=())
    steep = max(flybys("QUA"), key=lambda fly: fly.highest_deg)
    middle = round((steep.aos_s + steep.los_s) / 2.0)
    seen = view(body, station, HORIZON, middle, middle)
    fine = load.timescale(builtin=True).from_datetimes(
        [HORIZON.utc(middle + step / 50.0) for step in range(-1500, 1500)]
    )
    highest = float((body - PLACE).at(fine).altaz()[0].degrees.max())
    assert seen.highest_deg(seen.aos_s, seen.los_s) == pytest.approx(highest, abs=0.01)
    assert seen.highest_deg(seen.aos_s, seen.aos_s + 20.5) == pytest.approx(
        float(
            np.interp(
                20.5 + seen.aos_s - seen.start_s, np.arange(len(seen.elevation_deg)), seen.elevation_deg
            )
        ),
        abs=1e-3,
    )


def test_the_horizon_is_the_mask_or_what_one_may_receive_at() -> None:
    station = replace(WEST, mask=((10.0, 20.0), (350.0, 0.0)), least_receive_elevation_deg=5.0)
    found = horizon_deg(station, np.array([0.0, 10.0, 100.0, 350.0, 359.0]))
    assert found.tolist() == pytest.approx([10.0, 20.0, 20.0 * 250.0 / 340.0, 5.0, 9.0])
    assert horizon_deg(replace(station, mask=()), np.array([77.0])).tolist() == [5.0]


def masked_at(second: int, high_deg: float) -> tuple[tuple[float, float], ...]:
    """Return a mask that stands `high_deg` over the satellite's place at one second of a pass, in 0.2 deg."""
    seen = view(orbit(ELEMENTS), replace(WEST, mask=()), HORIZON, second, second)
    here = seen.seconds(second, second)
    azimuth, height = float(seen.azimuth_deg[here][0]), float(seen.elevation_deg[here][0])
    return (
        (azimuth - 0.2, 0.0),
        (azimuth - 0.1, height + high_deg),
        (azimuth + 0.1, height + high_deg),
        (azimuth + 0.2, 0.0),
    )


def test_a_shallow_dip_ends_no_pass_and_a_deep_one_does() -> None:
    fly = flybys("QUA")[2]
    late = round(fly.los_s) - 40
    for over_deg, ends in ((TWENTIETH_DEG / 10.0, fly.los_s), (3.0, late)):
        station = replace(WEST, mask=masked_at(late, over_deg))
        seen = view(orbit(ELEMENTS), station, HORIZON, round(fly.aos_s) + 100, round(fly.aos_s) + 110)
        assert seen.los_s == pytest.approx(ends, abs=4.0)


def test_a_contact_under_the_horizon_has_no_pass_around_it() -> None:
    fly = flybys("QUA")[0]
    second = round(fly.los_s) + 100
    seen = view(orbit(ELEMENTS), replace(WEST, mask=()), HORIZON, second, second + 50)
    assert (seen.aos_s, seen.los_s) == (second, second + 50)
    assert seen.above_deg(second) < 0.0


def test_slices_stay_inside_what_is_seen() -> None:
    fly = flybys("QUA")[0]
    seen = view(orbit(ELEMENTS), WEST, HORIZON, round(fly.aos_s), round(fly.los_s))
    count = len(seen.elevation_deg)
    assert seen.seconds(seen.start_s + 3, seen.start_s + 5) == slice(3, 5)
    assert seen.seconds(seen.start_s + 3, seen.start_s) == slice(3, 4)
    assert seen.seconds(-(10**6), -(10**6)) == slice(0, 1)
    assert seen.seconds(10**9, 10**9 + 5) == slice(count - 1, count)
