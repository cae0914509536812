"""How far a rotator falls behind the satellite: an axis by axis chase in steps of one second."""

import math
from collections.abc import Iterator
from itertools import product

import numpy as np

from passplan.domain.passes import Floats
from passplan.domain.station import Rotator, Station
from passplan.verify.skyfield_view import View
from passplan.verify.tally import TWENTIETH_DEG

_NOTHING_DEG = 1e-6


def half_beam_deg(station: Station) -> float:
    """Return how far the antenna may point beside the satellite: half its half-power beam width.

    Not told, the width is sqrt(27000 / gain) deg (J. Kraus, Antennas: directivity of a pencil beam).
    """
    told = station.rotator.beam_width_deg if station.rotator else None
    gain = 10.0 ** (station.radio.antenna_gain_dbi / 10.0)
    return (told if told is not None else math.sqrt(27000.0 / gain)) / 2.0


def worst_lag(station: Station, view: View, begin_s: int, end_s: int) -> tuple[float, int]:
    """Return the largest lag (deg) in [begin_s, end_s] and its second, for the best way of going about it.

    The rotator stands on the satellite when the pass begins. Not a number where the
    satellite itself is nowhere.
    """
    if station.rotator is None:
        return 0.0, begin_s
    last_seen = view.start_s + len(view.azimuth_deg) - 1
    first = min(begin_s, max(0, math.ceil(view.aos_s)))
    last = min(last_seen, max(end_s, math.floor(view.los_s)))
    shown = view.seconds(first, last + 1)
    azimuth, elevation = view.azimuth_deg[shown], view.elevation_deg[shown]
    if not np.isfinite(azimuth).all():
        return math.nan, begin_s
    watched = slice(begin_s - first, end_s - first + 1)
    best = (math.inf, begin_s)
    for wanted_azimuth, wanted_elevation in _ways(station.rotator, azimuth, elevation):
        stands_azimuth = _chase(wanted_azimuth, station.rotator.azimuth_rate_deg_s)
        stands_elevation = _chase(wanted_elevation, station.rotator.elevation_rate_deg_s)
        lag = _angle_deg(stands_azimuth, stands_elevation, azimuth, elevation)[watched]
        worst = int(np.argmax(lag))
        best = min(best, (float(lag[worst]), begin_s + worst))
        if best[0] < _NOTHING_DEG:
            break
    return best


def _ways(rotator: Rotator, azimuth: Floats, elevation: Floats) -> Iterator[tuple[list[float], list[float]]]:
    """Yield where the axes should stand second by second, for each way of taking the pass.

    Upright all through; with flip also leaning over all through, or from the highest second on.
    """
    upright = np.degrees(np.unwrap(np.radians(azimuth)))
    bodies = [(upright, elevation)]
    if rotator.flip:
        bodies.append((upright + 180.0, 180.0 - elevation))
        half_turn = -180.0 if upright[-1] >= upright[0] else 180.0
        late = np.arange(len(upright)) > int(np.argmax(elevation))
        bodies.append((upright + half_turn * late, np.where(late, 180.0 - elevation, elevation)))
    # Where the axis meets its stop a little sooner or later, it goes back a second sooner or later.
    for slack, (body_azimuth, body_elevation) in product((0.0, TWENTIETH_DEG, -TWENTIETH_DEG), bodies):
        low, high = rotator.azimuth_from_deg - slack, rotator.azimuth_to_deg + slack
        start = float(body_azimuth[0])
        for turn in range(math.ceil((low - start) / 360.0), math.floor((high - start) / 360.0) + 1):
            yield _in_travel(body_azimuth + 360.0 * turn, low, high), body_elevation.tolist()


def _in_travel(azimuth: Floats, low: float, high: float) -> list[float]:
    """Return the azimuths with whole turns added wherever the axis would leave its travel."""
    placed, turned = [], 0.0
    for wanted in azimuth.tolist():
        if wanted + turned > high:
            turned -= 360.0 * math.ceil((wanted + turned - high) / 360.0)
        elif wanted + turned < low:
            turned += 360.0 * math.ceil((low - wanted - turned) / 360.0)
        placed.append(wanted + turned)
    return placed


def _chase(wanted: list[float], rate_deg_s: float) -> Floats:
    """Return where an axis stands that begins where wanted and turns at most `rate_deg_s` each second."""
    stands = [wanted[0]]
    for aim in wanted[1:]:
        here = stands[-1]
        stands.append(min(max(aim, here - rate_deg_s), here + rate_deg_s))
    return np.array(stands)


def _angle_deg(azimuth: Floats, elevation: Floats, other_azimuth: Floats, other_elevation: Floats) -> Floats:
    """Return the angle between two directions by their unit vectors, exact for small angles too."""
    one, other = _direction(azimuth, elevation), _direction(other_azimuth, other_elevation)
    half_chord = np.clip(np.linalg.norm(one - other, axis=0) / 2.0, 0.0, 1.0)
    return np.asarray(np.degrees(2.0 * np.arcsin(half_chord)))


def _direction(azimuth_deg: Floats, elevation_deg: Floats) -> Floats:
    """Return unit vectors (north, east, up), shape (3, n); beyond 90 deg elevation leans over backwards."""
    azimuth, elevation = np.radians(azimuth_deg), np.radians(elevation_deg)
    level = np.cos(elevation)
    return np.stack((level * np.cos(azimuth), level * np.sin(azimuth), np.sin(elevation)))
