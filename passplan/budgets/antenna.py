"""Whether a rotator can follow: rates, travel of the azimuth axis, and the keyhole near the zenith."""

import math
from collections.abc import Iterator

import numpy as np
from numpy.typing import NDArray

from passplan.domain.passes import Floats, Track
from passplan.domain.station import Rotator, Station

Follows = NDArray[np.bool_]
MARGIN_DEG = 0.05  # kept by the planner, so that no second reading finds a contact on the beam's very edge


def follows(station: Station, track: Track) -> Follows:
    """Return in which seconds the antenna has the satellite inside half its beam, shape (n,).

    The rotator stands on the satellite at the first second and chases it: each axis turns
    towards where the satellite is now, at most at its rate. The azimuth may start at any
    turn inside its travel; where the satellite leaves the travel the axis has to go back
    a whole turn. With flip the antenna may also lean over backwards, all through the pass
    or from its highest second on, which takes it over the zenith with hardly a turn.
    Of these ways the one with the longest unbroken stretch is taken, then the one that
    follows most seconds, then the first: upright before leaning, low turns before high.

    A fixed antenna follows always.
    """
    seconds = len(track.azimuth_deg)
    if station.rotator is None or seconds == 0:
        return np.ones(seconds, dtype=np.bool_)
    allowed_deg = beam_width_deg(station) / 2.0 - MARGIN_DEG
    best, best_rank = np.zeros(seconds, dtype=np.bool_), (-1, -1)
    for azimuth, elevation in _ways(station.rotator, track):
        place = (
            _chase(azimuth, station.rotator.azimuth_rate_deg_s),
            _chase(elevation, station.rotator.elevation_rate_deg_s),
        )
        caught = _separation_deg(*place, track.azimuth_deg, track.elevation_deg) <= allowed_deg
        rank = (_longest_run(caught), int(caught.sum()))
        if rank > best_rank:
            best, best_rank = caught, rank
        if best_rank[0] == seconds:
            break
    return best


def beam_width_deg(station: Station) -> float:
    """Return the half-power beam width: the rotator's own, or sqrt(27000 / gain).

    Kraus, Antennas (1950): a beam of a by b degrees has a gain of about 27000 / (a b).
    """
    told = station.rotator.beam_width_deg if station.rotator else None
    return told if told is not None else math.sqrt(27000.0 / 10.0 ** (station.radio.antenna_gain_dbi / 10.0))


def _ways(rotator: Rotator, track: Track) -> Iterator[tuple[Floats, Floats]]:
    """Yield where the axes (azimuth, elevation, deg) would have to stand, for each way of going about it."""
    upright = np.unwrap(track.azimuth_deg, period=360.0)
    branches = [(upright, track.elevation_deg)]
    if rotator.flip:
        leaning = (upright + 180.0, 180.0 - track.elevation_deg)
        branches += [leaning, _over_the_top(upright, track.elevation_deg)]
    low, high = rotator.azimuth_from_deg, rotator.azimuth_to_deg
    for azimuth, elevation in branches:
        first = math.ceil((low - azimuth[0]) / 360.0)
        last = max(first, math.floor((high - azimuth[0]) / 360.0))
        for turn in range(first, last + 1):
            yield _within_travel(rotator, azimuth + 360.0 * turn), elevation


def _over_the_top(azimuth_deg: Floats, elevation_deg: Floats) -> tuple[Floats, Floats]:
    """Return the axes of a pass taken upright up to its highest second and leaning over from then on.

    The half turn goes against the way the pass runs, so that the azimuth ends near where it began.
    """
    back = -math.copysign(180.0, azimuth_deg[-1] - azimuth_deg[0])
    leaning = np.arange(len(azimuth_deg)) > np.argmax(elevation_deg)
    azimuth = np.where(leaning, azimuth_deg + back, azimuth_deg)
    return azimuth, np.where(leaning, 180.0 - elevation_deg, elevation_deg)


def _within_travel(rotator: Rotator, azimuth_deg: Floats) -> Floats:
    """Return the azimuths with whole turns added from each second on at which they leave the travel."""
    low, high = rotator.azimuth_from_deg, rotator.azimuth_to_deg
    placed = azimuth_deg.copy()
    checked = 0
    while len(outside := np.flatnonzero((placed[checked:] < low) | (placed[checked:] > high))):
        second = checked + int(outside[0])
        short, over = low - placed[second], placed[second] - high
        placed[second:] += 360.0 * (math.ceil(short / 360.0) if short > 0.0 else -math.ceil(over / 360.0))
        checked = second + 1
    return placed


def _chase(wanted_deg: Floats, rate_deg_s: float) -> Floats:
    """Return where an axis stands that begins on `wanted_deg` and turns at most at its rate, shape (n,).

    Walks only through the seconds in which it is behind: elsewhere it stands where wanted.
    """
    place = wanted_deg.copy()
    second = 0
    for jump in np.flatnonzero(np.abs(np.diff(wanted_deg)) > rate_deg_s) + 1:
        second = max(second, int(jump))
        while second < len(place) and abs(gap := wanted_deg[second] - place[second - 1]) > rate_deg_s:
            place[second] = place[second - 1] + math.copysign(rate_deg_s, gap)
            second += 1
    return place


def _separation_deg(
    azimuth: Floats, elevation: Floats, other_azimuth: Floats, other_elevation: Floats
) -> Floats:
    """Return the great-circle angle between two directions, shape (n,).

    By the haversine, which keeps small angles; an elevation over 90 deg leans over backwards.
    """
    up, other_up = np.radians(elevation), np.radians(other_elevation)
    turn = np.sin(np.radians(azimuth - other_azimuth) / 2.0) ** 2
    square = np.sin((up - other_up) / 2.0) ** 2 + np.cos(up) * np.cos(other_up) * turn
    return np.asarray(2.0 * np.degrees(np.arcsin(np.sqrt(np.clip(square, 0.0, 1.0)))))


def _longest_run(caught: Follows) -> int:
    """Return the length of the longest unbroken stretch of True."""
    edges = np.flatnonzero(np.diff(np.concatenate(([False], caught, [False])).astype(np.int8)))
    return int((edges[1::2] - edges[::2]).max(initial=0))
