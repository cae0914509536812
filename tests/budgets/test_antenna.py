"""The rotator's chase: cases by hand, a plain second-by-second rival, and laws."""

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import ArrayLike, NDArray

from passplan.budgets.antenna import MARGIN_DEG, beam_width_deg, follows
from passplan.domain.passes import Track
from passplan.domain.station import FixedAntenna, GroundRadio, Rotator, Station
from tests.flyby import flyby, station_with

FULL_TURN = Rotator(azimuth_from_deg=0.0, azimuth_to_deg=360.0, beam_width_deg=4.0)


def along(azimuth_deg: ArrayLike, elevation_deg: float = 20.0) -> Track:
    """Return a track at one elevation along given azimuths."""
    azimuth = np.asarray(azimuth_deg, dtype=np.float64) % 360.0
    even = np.full(len(azimuth), 1000.0)
    return Track(
        start_s=0,
        azimuth_deg=azimuth,
        elevation_deg=np.full(len(azimuth), elevation_deg),
        range_km=even,
        range_rate_km_s=even * 0.0,
    )


def through_north() -> Track:
    """Return a pass that crosses north clockwise at 100 s, a tenth of a degree a second."""
    return along(360.0 + 0.1 * (np.arange(400) - 100))


def turned(rotator: Rotator, track: Track) -> NDArray[np.bool_]:
    return follows(station_with(rotator=rotator), track)


def test_a_fixed_antenna_always_follows() -> None:
    station = station_with(fixed_antenna=FixedAntenna(gain_table=((0.0, 3.0),)))
    assert follows(station, flyby(highest_deg=90.0)).all()


def test_an_empty_track() -> None:
    assert follows(station_with(), along([])).shape == (0,)


def test_a_usual_pass_is_followed_by_the_usual_rotator() -> None:
    track = flyby(highest_deg=60.0, heading_deg=170.0)
    caught = follows(station_with(), track)
    assert caught.shape == track.azimuth_deg.shape
    assert caught.all()


def test_a_stop_in_mid_pass_makes_the_axis_go_back() -> None:
    """From 360 deg back to 0 takes 120 s at 3 deg/s; 1.95 deg of beam save a second at the end."""
    caught = turned(FULL_TURN, through_north())
    lost = np.flatnonzero(~caught)
    # the satellite runs on by 12 deg meanwhile: 360 / (3 + 0.1) = 116.1 s to meet it from ahead
    assert lost[0] == 101
    assert len(lost) == pytest.approx(116, abs=2)
    assert np.all(np.diff(lost) == 1)


def test_the_same_stop_met_counter_clockwise() -> None:
    mirror = along(-0.1 * (np.arange(400) - 100))
    np.testing.assert_array_equal(turned(FULL_TURN, mirror), turned(FULL_TURN, through_north()))


def test_overlap_or_another_stop_or_flip_gets_past_it() -> None:
    assert turned(replace(FULL_TURN, azimuth_to_deg=450.0), through_north()).all()
    assert turned(Rotator(azimuth_from_deg=-180.0, azimuth_to_deg=180.0), through_north()).all()
    assert turned(replace(FULL_TURN, flip=True), through_north()).all()


def test_overlap_is_entered_at_its_high_end_where_that_helps() -> None:
    """Counter-clockwise through north: from 10 deg one would meet the stop at once, from 370 deg not."""
    track = along(10.0 - 0.1 * np.arange(400))
    assert turned(replace(FULL_TURN, azimuth_to_deg=450.0), track).all()
    assert not turned(FULL_TURN, track).all()


def test_a_travel_of_three_turns_never_meets_a_stop() -> None:
    two_turns = along(350.0 + 1.0 * np.arange(700))
    wide = Rotator(azimuth_from_deg=-360.0, azimuth_to_deg=720.0, beam_width_deg=4.0)
    assert turned(wide, two_turns).all()
    assert not turned(FULL_TURN, two_turns).all()


def test_keyhole_near_the_zenith() -> None:
    """A narrow beam loses an overhead pass while the azimuth swings round, and only there."""
    track = flyby(highest_deg=89.5, from_deg=10.0, heading_deg=30.0)
    caught = turned(Rotator(beam_width_deg=6.0), track)
    lost = np.flatnonzero(~caught)
    top = int(track.elevation_deg.argmax())
    assert lost[0] > top - 5
    assert 20 < len(lost) < 60  # half a turn takes 60 s at 3 deg/s
    assert caught[:100].all()
    assert caught[-100:].all()


def test_flip_goes_over_the_top() -> None:
    for heading_deg in (0.0, 90.0, 200.0, 300.0):
        track = flyby(highest_deg=89.5, from_deg=10.0, heading_deg=heading_deg)
        assert turned(Rotator(beam_width_deg=6.0, flip=True), track).all()
        mirror = replace(track, azimuth_deg=(360.0 - track.azimuth_deg) % 360.0)
        assert turned(Rotator(beam_width_deg=6.0, flip=True), mirror).all()


def test_a_wide_beam_does_not_mind_the_lag() -> None:
    track = flyby(highest_deg=89.5, from_deg=10.0)
    assert turned(Rotator(beam_width_deg=130.0), track).all()


def test_a_slow_elevation_axis_falls_behind() -> None:
    track = flyby(highest_deg=70.0, from_deg=10.0)
    slow = Rotator(elevation_rate_deg_s=0.05, beam_width_deg=4.0)
    assert not turned(slow, track).all()
    assert turned(replace(slow, elevation_rate_deg_s=1.0), track).all()


def test_a_lag_inside_half_the_beam_costs_nothing() -> None:
    """On the horizon, 1 deg/s behind 2 deg/s: the lag grows a degree a second, up to 4.95 deg of 10."""
    rotator = Rotator(azimuth_rate_deg_s=1.0, beam_width_deg=10.0)
    caught = turned(rotator, along(100.0 + 2.0 * np.arange(20), elevation_deg=0.0))
    assert caught.tolist() == [True] * 5 + [False] * 15


def test_beam_width_of_a_gain() -> None:
    # Kraus, Antennas: gain 27000 / (a b); 15 dBi is 31.6, sqrt(27000 / 31.6) = 29.2 deg (from memory)
    assert beam_width_deg(station_with(GroundRadio(antenna_gain_dbi=15.0))) == pytest.approx(29.2, abs=0.05)


def test_beam_width_told() -> None:
    assert beam_width_deg(station_with(rotator=Rotator(beam_width_deg=21.0))) == 21.0


def plainly_followed(station: Station, track: Track) -> list[list[bool]]:
    """Return what each way follows: one second after the other, by vectors and dot products."""
    rotator = station.rotator
    assert rotator is not None
    half_deg = beam_width_deg(station) / 2.0 - MARGIN_DEG
    azimuth = [float(track.azimuth_deg[0])]
    for wanted in track.azimuth_deg[1:]:
        azimuth.append(azimuth[-1] + (float(wanted) - azimuth[-1] + 180.0) % 360.0 - 180.0)
    elevation = track.elevation_deg.tolist()
    top = elevation.index(max(elevation))
    back = -180.0 if azimuth[-1] >= azimuth[0] else 180.0
    ways = [(azimuth, elevation)]
    if rotator.flip:
        lean = [180.0 - up for up in elevation]
        ways.append(([a + 180.0 for a in azimuth], lean))
        ways.append(
            (
                azimuth[: top + 1] + [a + back for a in azimuth[top + 1 :]],
                elevation[: top + 1] + lean[top + 1 :],
            )
        )
    return [
        _flown(rotator, [a + 360.0 * turn for a in way], up, track, half_deg)
        for way, up in ways
        for turn in range(-4, 5)
        if rotator.azimuth_from_deg <= way[0] + 360.0 * turn <= rotator.azimuth_to_deg
    ]


def _flown(
    rotator: Rotator, azimuth: list[float], elevation: list[float], track: Track, half_deg: float
) -> list[bool]:
    place_azimuth, place_elevation, added = azimuth[0], elevation[0], 0.0
    caught = []
    for second, (turn, up) in enumerate(zip(azimuth, elevation, strict=True)):
        while turn + added > rotator.azimuth_to_deg:
            added -= 360.0
        while turn + added < rotator.azimuth_from_deg:
            added += 360.0
        place_azimuth += max(
            -rotator.azimuth_rate_deg_s, min(rotator.azimuth_rate_deg_s, turn + added - place_azimuth)
        )
        place_elevation += max(
            -rotator.elevation_rate_deg_s, min(rotator.elevation_rate_deg_s, up - place_elevation)
        )
        there = _direction(track.azimuth_deg[second], track.elevation_deg[second])
        here = _direction(place_azimuth, place_elevation)
        off_deg = math.degrees(math.acos(min(1.0, sum(a * b for a, b in zip(here, there, strict=True)))))
        caught.append(off_deg <= half_deg)
    return caught


def _direction(azimuth_deg: float, elevation_deg: float) -> tuple[float, float, float]:
    turn, up = math.radians(azimuth_deg), math.radians(elevation_deg)
    return math.cos(up) * math.sin(turn), math.cos(up) * math.cos(turn), math.sin(up)


def longest(caught: list[bool]) -> int:
    """Return the longest unbroken stretch."""
    run = best = 0
    for good in caught:
        run = run + 1 if good else 0
        best = max(best, run)
    return best


rotators = st.builds(
    Rotator,
    azimuth_rate_deg_s=st.floats(0.5, 8.0),
    elevation_rate_deg_s=st.floats(0.1, 4.0),
    azimuth_from_deg=st.sampled_from([0.0, -90.0, -180.0]),
    azimuth_to_deg=st.sampled_from([360.0, 400.0, 450.0, 540.0]),
    flip=st.booleans(),
    beam_width_deg=st.floats(2.0, 40.0),
)
passes = st.builds(
    flyby,
    st.floats(350.0, 900.0),
    st.floats(15.0, 89.9),
    from_deg=st.just(10.0),
    heading_deg=st.floats(0.0, 359.9),
)


@settings(max_examples=60, deadline=None)
@given(rotator=rotators, track=passes)
def test_agrees_with_a_plain_walk_through_the_seconds(rotator: Rotator, track: Track) -> None:
    station = station_with(rotator=rotator)
    caught = follows(station, track).tolist()
    rivals = plainly_followed(station, track)
    best = max((longest(rival), sum(rival)) for rival in rivals)
    assert (longest(caught), sum(caught)) == best
    assert caught in rivals


@settings(deadline=None)
@given(rotator=rotators, track=passes, more=st.floats(0.0, 40.0))
def test_a_wider_beam_never_shortens_the_best_stretch(rotator: Rotator, track: Track, more: float) -> None:
    assert rotator.beam_width_deg is not None
    wider = replace(rotator, beam_width_deg=rotator.beam_width_deg + more)
    assert longest(turned(rotator, track).tolist()) <= longest(turned(wider, track).tolist())


@settings(deadline=None)
@given(rotator=rotators, track=passes)
def test_flip_never_shortens_the_best_stretch(rotator: Rotator, track: Track) -> None:
    stiff, leaning = replace(rotator, flip=False), replace(rotator, flip=True)
    assert longest(turned(stiff, track).tolist()) <= longest(turned(leaning, track).tolist())


@settings(deadline=None)
@given(track=passes, beam_width_deg=st.floats(0.2, 40.0))
def test_a_rotator_fast_enough_always_follows(track: Track, beam_width_deg: float) -> None:
    fast = Rotator(azimuth_rate_deg_s=360.0, elevation_rate_deg_s=360.0, beam_width_deg=beam_width_deg)
    assert turned(fast, track).all()
