"""Places, masks and orbits where a pass search goes wrong if it can."""

import subprocess
import sys
from dataclasses import replace
from datetime import timedelta

import numpy as np
import pytest

from passplan.domain.moments import Horizon
from passplan.domain.passes import Pass
from passplan.domain.station import Station
from passplan.sky import passes_of, survey, tracks
from passplan.sky.frames import earth_rotation, turned
from passplan.sky.looks import looks, state
from passplan.sky.nodes import MARGIN
from passplan.sky.propagate import fly, grids, satrec
from passplan.sky.sites import sites
from tests.sky.orbits import (
    FLAT,
    JAGGED,
    ORBITS,
    WEEK,
    Mask,
    between,
    element_set,
    itrs_km,
    line_deg,
    station,
)

LONGER = Horizon(week="2026-W50", lookahead_h=48.0)
LOW = ORBITS["sun-synchronous 500 km"]


def seen(place: Station, orbit: str = "sun-synchronous 500 km", week: Horizon = WEEK) -> list[Pass]:
    return list(survey({"A": ORBITS[orbit]}, [place], week).passes)


def spans(passes: list[Pass]) -> np.ndarray:
    return np.array([(one.aos_s, one.los_s) for one in passes])


def under(second: float) -> Station:
    """Return a station under the satellite: its subsatellite point to well under a metre."""
    position = itrs_km(LOW, np.array([second]))[0][:, 0]
    latitude = float(np.arctan2(position[2], np.hypot(position[0], position[1])))
    longitude_deg = float(np.degrees(np.arctan2(position[1], position[0])))
    axis, square = 6378.137, (2.0 - 1.0 / 298.257223563) / 298.257223563
    for _ in range(30):
        normal = axis / np.sqrt(1.0 - square * np.sin(latitude) ** 2)
        lifted = position[2] + square * normal * np.sin(latitude)
        latitude = float(np.arctan2(lifted, np.hypot(position[0], position[1])))
    return station(float(np.degrees(latitude)), longitude_deg)


def test_a_pass_through_the_zenith() -> None:
    """The azimuth jumps by 180 deg there; elevation and time do not care."""
    second = 2.0 * 86400.0 + 500.0
    place = under(second)
    (one,) = [p for p in seen(place) if p.aos_s < second < p.los_s]
    assert one.max_elevation_deg > 89.99
    assert one.tca_s == pytest.approx(second, abs=0.1)
    turn = abs((one.los_azimuth_deg - one.aos_azimuth_deg + 180.0) % 360.0 - 180.0)
    assert turn > 170.0
    walled = replace(place, mask=tuple((float(azimuth), 80.0) for azimuth in range(0, 360, 30)))
    (high,) = [p for p in seen(walled) if p.aos_s < second < p.los_s]
    assert one.aos_s < high.aos_s < high.los_s < one.los_s


def test_through_the_zenith_with_a_jagged_mask() -> None:
    """A mask with corners everywhere cuts the pass where SGP4 second by second says so."""
    second = 2.0 * 86400.0 + 500.0
    mask: Mask = tuple((float(azimuth), 10.0 + 50.0 * (azimuth // 15 % 2)) for azimuth in range(0, 360, 15))
    place = replace(under(second), mask=mask)
    seconds = np.arange(second - 600.0, second + 600.0, 0.1)
    flown = fly(LOW, grids(WEEK, 0.0))
    view = looks(sites([place]), np.zeros(len(seconds), dtype=np.intp), *state(flown, seconds))
    low = line_deg(place, view.azimuth_deg)
    up = view.elevation_deg > low
    edges = seconds[1:][up[1:] != up[:-1]]
    cut = [p for p in seen(place) if second - 600.0 < p.aos_s < second + 600.0]
    assert len(cut) >= 1
    assert spans(cut).ravel() == pytest.approx(edges, abs=0.11)


def test_one_visibility_cut_by_a_notch_is_two_passes() -> None:
    """A tower: two degrees wide, 30 deg high, in the way of a pass that culminates at 54 deg."""
    whole = next(p for p in seen(station()) if 40.0 < p.max_elevation_deg < 70.0 and not p.clipped)
    (track,) = tracks({"A": LOW}, [station()], [whole], WEEK)
    rising = int(np.argmin(np.abs(track.elevation_deg[: len(track.seconds) // 2] - 20.0)))
    tower = float(track.azimuth_deg[rising])
    mask = ((tower - 1.1, 10.0), (tower - 1.0, 30.0), (tower + 1.0, 30.0), (tower + 1.1, 10.0))
    place = station(mask=tuple(sorted((azimuth % 360.0, high) for azimuth, high in mask)))
    first, second = [p for p in seen(place) if whole.aos_s - 1.0 < p.aos_s < whole.los_s]
    assert first.aos_s == pytest.approx(whole.aos_s, abs=1e-3)
    assert second.los_s == pytest.approx(whole.los_s, abs=1e-3)
    assert first.los_s < track.seconds[rising] < second.aos_s
    assert first.tca_s == first.los_s, "it climbs until the tower hides it"
    assert second.tca_s == pytest.approx(whole.tca_s, abs=1e-3)


def test_a_mask_across_north() -> None:
    """The same wall told from 350 over 360 to 10 deg, and as if north were elsewhere."""
    wall = ((0.0, 40.0), (10.0, 40.0), (11.0, 5.0), (349.0, 5.0), (350.0, 40.0))
    without_zero = ((10.0, 40.0), (11.0, 5.0), (349.0, 5.0), (350.0, 40.0))
    told_twice = (*wall, (360.0, 40.0))
    one, other, third = (
        spans(seen(station(mask=mask, least_deg=0.0))) for mask in (wall, without_zero, told_twice)
    )
    assert one == pytest.approx(other, abs=1e-6)
    assert one == pytest.approx(third, abs=1e-6)
    assert np.diff(one).sum() < np.diff(spans(seen(station(least_deg=5.0)))).sum() - 600.0


def test_a_flat_mask_in_many_corners_is_a_flat_horizon() -> None:
    flat = spans(seen(station(least_deg=7.0)))
    many = spans(seen(station(least_deg=7.0, mask=tuple((float(a), 7.0) for a in range(0, 360, 20)))))
    nearly = tuple((float(a), 7.0 + 1e-9 * (a // 20 % 2)) for a in range(0, 360, 20))
    assert many == pytest.approx(flat)
    assert spans(seen(station(least_deg=7.0, mask=nearly))) == pytest.approx(flat, abs=1e-4)


def test_a_mask_under_the_horizontal_plane_lengthens_passes() -> None:
    low = seen(station(least_deg=-5.0, mask=((0.0, -4.0), (180.0, -3.0))))
    flat = seen(station(least_deg=0.0))
    assert len(low) >= len(flat)
    for one in flat:
        (around,) = [p for p in low if p.aos_s <= one.tca_s <= p.los_s]
        assert around.aos_s < one.aos_s or one.clipped
        assert around.los_s > one.los_s or one.clipped


def test_the_date_line_is_no_line() -> None:
    for latitude_deg in (-18.0, 66.0):
        west, east = (spans(seen(station(latitude_deg, longitude))) for longitude in (-180.0, 180.0))
        assert west == pytest.approx(east, abs=1e-6)


@pytest.mark.parametrize("latitude_deg", [90.0, -90.0])
def test_at_a_pole_longitude_only_turns_the_azimuth(latitude_deg: float) -> None:
    zero, turned_away = (seen(station(latitude_deg, longitude)) for longitude in (0.0, 77.0))
    assert spans(zero) == pytest.approx(spans(turned_away), abs=1e-6)
    for one, other in zip(zero, turned_away, strict=True):
        shift = 77.0 if latitude_deg > 0.0 else -77.0
        apart = (one.aos_azimuth_deg - other.aos_azimuth_deg - shift + 180.0) % 360.0 - 180.0
        assert abs(apart) < 1e-5 or abs(abs(apart) - 2.0 * 77.0) < 1e-5


def test_an_orbit_that_never_comes_up() -> None:
    """Equatorial, 600 km: never seen from 66 north."""
    assert seen(FLAT[5], "equatorial 600 km") == []
    assert seen(replace(JAGGED[5], longitude_deg=10.0), "equatorial 600 km") == []


def test_an_orbit_that_never_goes_down() -> None:
    """A day-long orbit over the place: one pass, open at both ends, with its top somewhere inside."""
    flown, errors = itrs_km(ORBITS["24 h inclined"], np.array([0.0]))
    assert not errors.any()
    longitude_deg = float(np.degrees(np.arctan2(flown[1, 0], flown[0, 0])))
    for mask in ((), ((0.0, 3.0), (120.0, 30.0), (240.0, 12.0))):
        (one,) = seen(station(0.0, longitude_deg, mask=mask), "24 h inclined")
        assert (one.aos_s, one.los_s, one.clipped) == (0.0, WEEK.end_s, "both")
        assert 0.0 < one.tca_s < WEEK.end_s
        assert one.max_elevation_deg > 80.0


def test_passes_open_at_the_ends_are_cut_and_said_to_be() -> None:
    """A look-ahead that ends in a pass: the pass of the longer span, cut."""
    week = survey({"A": LOW}, [station()], WEEK).passes
    one = next(p for p in survey({"A": LOW}, [station()], LONGER).passes if p.aos_s > WEEK.end_s)
    cut_at = replace(LONGER, lookahead_h=(one.aos_s + 100.0 - WEEK.end_s) / 3600.0)
    cut = survey({"A": LOW}, [station()], cut_at).passes[-1]
    assert cut.aos_s == pytest.approx(one.aos_s, abs=1e-6)
    assert cut.clipped == "end"
    assert cut.los_s == cut.tca_s == cut_at.end_s, "it was still climbing"
    assert cut.max_elevation_deg < one.max_elevation_deg
    same = survey({"A": LOW}, [station()], cut_at).passes[: len(week)]
    assert spans(list(same)) == pytest.approx(spans(list(week)), abs=1e-6)


def test_a_pass_open_at_the_start_has_its_top_at_the_start_when_it_is_sinking() -> None:
    """Places all around the Earth, so that for some the week begins in the second half of a pass."""
    stations = [station(10.0 * (k // 36) - 60.0, 10.0 * (k % 36) - 180.0, code=f"QX{k}") for k in range(468)]
    first = [p for p in survey({"A": LOW}, stations, WEEK).passes if p.aos_s == 0.0]
    assert {p.clipped for p in first} == {"start"}
    sinking = [p for p in first if p.tca_s == 0.0]
    assert sinking
    assert all(p.aos_range_km == p.tca_range_km < p.los_range_km for p in sinking)


def test_a_decaying_satellite_keeps_its_earlier_passes() -> None:
    decays = ORBITS["250 km, decays on Thursday"]
    sky = survey({"A": decays, "B": LOW}, FLAT[:4], WEEK)
    end_s = sky.propagation_end_s["A"]
    assert set(sky.propagation_end_s) == {"A"}
    early = [p for p in sky.passes if p.satellite == "A"]
    assert len(early) > 10
    assert all(p.los_s <= end_s for p in early)
    assert all(b <= end_s for _, b in sky.shadows["A"])
    assert max(p.los_s for p in sky.passes if p.satellite == "B") > end_s


def test_a_satellite_that_is_gone_before_the_week_is_said_to_be_gone() -> None:
    gone = element_set(51.6, *between(248.0, 252.0), bstar=0.05)
    sky = survey({"A": gone}, FLAT, WEEK, since_s=-3600.0)
    assert sky.passes == ()
    assert sky.shadows == {"A": ()}
    assert sky.propagation_end_s["A"] < 0.0


def test_ten_years_from_the_epoch_there_is_still_an_answer() -> None:
    """SGP4 does not complain; warning of age is the caller's."""
    old = replace(LOW, epoch=WEEK.start - timedelta(days=3652), bstar_per_earth_radius=1e-6)
    assert len(survey({"A": old}, [station()], WEEK).passes) > 20


def test_passes_come_in_order_of_aos_satellite_and_station() -> None:
    sky = survey({"B": LOW, "A": LOW, "C": ORBITS["polar 700 km"]}, FLAT[:5], WEEK)
    order = [(p.aos_s, p.satellite, p.station) for p in sky.passes]
    assert order == sorted(order)
    assert list(sky.shadows) == ["A", "B", "C"]
    assert {p.satellite for p in sky.passes} == {"A", "B", "C"}


def test_no_satellites_or_no_stations_is_an_empty_sky() -> None:
    assert survey({}, FLAT, WEEK).passes == ()
    bare = survey({"A": LOW}, [], WEEK)
    assert bare.passes == ()
    assert len(bare.shadows["A"]) > 90


def test_many_stations_are_the_same_as_each_alone() -> None:
    """More than one block of 32."""
    stations = [station(-80.0 + 4.0 * k, -170.0 + 8.5 * k, code=f"QX{k}") for k in range(40)]
    (found,) = passes_of({"A": LOW}, stations, WEEK)
    for number in (0, 31, 32, 39):
        (alone,) = passes_of({"A": LOW}, [stations[number]], WEEK)
        mine = found.station == number
        assert found.aos_s[mine] == pytest.approx(alone.aos_s, abs=1e-6)
        assert found.max_elevation_deg[mine] == pytest.approx(alone.max_elevation_deg, abs=1e-9)


def test_the_same_input_gives_the_same_passes_to_the_last_bit() -> None:
    first, second = (survey({"A": LOW}, [*FLAT, *JAGGED], WEEK) for _ in range(2))
    assert first == second


def test_directions_and_ranges_of_a_pass_are_those_of_its_moments() -> None:
    day, fraction = WEEK.julian(0.0)
    for one in seen(JAGGED[0])[:10]:
        moments = np.array([one.aos_s, one.tca_s, one.los_s])
        _, position, _ = satrec(LOW).sgp4_array(np.full(3, day), fraction + moments / 86400.0)
        fixed = turned(position.T, earth_rotation(WEEK, moments))
        view = looks(sites([JAGGED[0]]), np.zeros(3, dtype=np.intp), fixed, np.zeros((3, 3)))
        own = (one.aos_azimuth_deg, one.tca_azimuth_deg, one.los_azimuth_deg)
        assert own == pytest.approx(view.azimuth_deg.tolist(), abs=1e-5)
        assert (one.aos_range_km, one.tca_range_km, one.los_range_km) == pytest.approx(
            view.range_km.tolist(), abs=1e-4
        )
        assert one.max_elevation_deg == pytest.approx(view.elevation_deg[1], abs=1e-6)


def test_the_room_starts_fast() -> None:
    """It brings in numpy and sgp4, and nothing that takes long to load."""
    told = "import sys, passplan.sky; print('\\n'.join(sorted({name.split('.')[0] for name in sys.modules})))"
    loaded = subprocess.run(
        [sys.executable, "-c", told], capture_output=True, text=True, check=True
    ).stdout.split()
    assert {"numpy", "sgp4"} <= set(loaded)
    assert not {"skyfield", "ortools", "pandas", "pydantic", "rich", "icalendar", "jplephem"} & set(loaded)


def test_a_pass_cut_by_the_mask_may_end_higher_than_it_culminated() -> None:
    """A slow figure of eight behind a slope: it culminates, sinks, and climbs until the slope hides it."""
    slow = element_set(
        3.0, 1.0027212374121073, 1.2e-5, perigee_deg=0.0, anomaly_deg=0.0, node_deg=39.0, bstar=0.0
    )
    place = station(0.0, 0.0, 0.0, -5.0, mask=((0.0, 1.0), (233.0, 67.0)))
    passes = survey({"A": slow}, [place], WEEK).passes
    assert len(passes) > 3
    for one in passes:
        (cut,) = tracks({"A": slow}, [place], [one], WEEK)
        assert cut.elevation_deg.max() <= one.max_elevation_deg + 1e-9


def test_elements_that_fail_before_their_epoch_give_what_follows() -> None:
    """Drag of the wrong sign: carried back from Sunday SGP4 fails in the week, and the rest is kept."""
    one = element_set(51.6, *between(248.0, 252.0), bstar=-8e-3, epoch=WEEK.start + timedelta(days=6))
    flown = fly(one, grids(WEEK, 0.0))
    assert flown.start_s > 0.0
    first_km = flown.itrs_km[:, MARGIN]
    latitude_deg = float(np.degrees(np.arcsin(first_km[2] / np.linalg.norm(first_km))))
    under_it = station(latitude_deg, float(np.degrees(np.arctan2(first_km[1], first_km[0]))))
    sky = survey({"A": one}, [under_it], WEEK)
    assert sky.passes[0].clipped == "start"
    assert sky.passes[0].aos_s == flown.start_s + MARGIN * flown.step_s
    assert all(p.clipped in {"", "end"} for p in sky.passes[1:])
    assert sky.shadows["A"][0][0] > flown.start_s
    assert sky.propagation_end_s == {}
