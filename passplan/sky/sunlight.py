"""When a satellite sees the Sun.

The Sun's place: the low-precision formulas of the Astronomical Almanac (page C5), 0.01 deg
over 1950 to 2050. The Earth is a sphere of its equatorial radius, and air neither bends
nor dims the light. Three models of shadow:
"umbra": all of the Sun's disc is behind the Earth's limb (cone);
"half": its centre is behind the limb, which is what the plan reckons with;
"penumbra": any of it is.
"""

import numpy as np
from numpy.typing import NDArray

from passplan.domain.constants import AU_KM, DAY_S, EARTH_RADIUS_KM, SUN_RADIUS_KM
from passplan.domain.moments import Horizon, Span, merged
from passplan.domain.passes import ShadowModel
from passplan.sky.nodes import chosen, expanded, middles, polynomials, slopes, stencils
from passplan.sky.propagate import Arc
from passplan.sky.roots import roots, secant

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_DISC = {"umbra": -1.0, "half": 0.0, "penumbra": 1.0}
_TT_MINUS_UTC_DAY = 69.184 / DAY_S  # since 2017; the Sun moves 0.01 arcsec in a quarter of a second
_TOLERANCE_S = 1e-3


def sun_km(julian_day: Floats) -> Floats:
    """Return the Sun's geocentric position in the mean equator and equinox of date, shape (3, n).

    Args:
        julian_day: UTC Julian dates, shape (n,).

    Source: Astronomical Almanac, page C5, "low-precision formulas for the Sun".
    """
    day = julian_day + _TT_MINUS_UTC_DAY - 2451545.0
    longitude = np.radians(280.460 + 0.9856474 * day)
    anomaly = np.radians(357.528 + 0.9856003 * day)
    ecliptic = longitude + np.radians(1.915 * np.sin(anomaly) + 0.020 * np.sin(2.0 * anomaly))
    obliquity = np.radians(23.439 - 0.0000004 * day)
    distance_km = AU_KM * (1.00014 - 0.01671 * np.cos(anomaly) - 0.00014 * np.cos(2.0 * anomaly))
    sine = np.sin(ecliptic)
    direction = np.stack((np.cos(ecliptic), np.cos(obliquity) * sine, np.sin(obliquity) * sine))
    position_km: Floats = distance_km * direction
    return position_km


def darkness(position_km: Floats, sun: Floats, model: ShadowModel) -> Floats:
    """Return how deep positions (3, n) stand in shadow: above zero inside, shape (n,).

    Seen from the satellite the Earth is a disc of radius asin(R / r). With psi the angle between its
    middle and the Sun's, shadow is psi < disc + k * (radius of the Sun's disc), k being -1, 0 or
    1 by model; returned is the difference of the cosines, which is smooth along an orbit.
    """
    distance_km = np.sqrt(np.einsum("ij,ij->j", position_km, position_km))
    to_sun = sun - position_km
    sun_distance_km = np.sqrt(np.einsum("ij,ij->j", to_sun, to_sun))
    cosine = -np.einsum("ij,ij->j", position_km, to_sun) / (distance_km * sun_distance_km)
    earth_disc = np.arcsin(np.minimum(EARTH_RADIUS_KM / distance_km, 1.0))
    sun_disc = np.arcsin(SUN_RADIUS_KM / sun_distance_km)
    depth: Floats = cosine - np.cos(earth_disc + _DISC[model] * sun_disc)
    return depth


def shadows(flown: Arc, horizon: Horizon, since_s: float, model: ShadowModel = "half") -> tuple[Span, ...]:
    """Return the spans (s of the week, merged, in order) in [since_s, end of horizon] spent in shadow."""
    end_s = horizon.end_s if flown.end_s is None else min(horizon.end_s, flown.end_s)
    first, last = flown.node_range(since_s, end_s)
    if flown.empty or last <= first:
        return ()
    begin_s = max(since_s, float(flown.start_s + flown.step_s * first))
    seconds = flown.start_s + flown.step_s * np.arange(flown.teme_km.shape[1], dtype=np.float64)
    day, fraction = horizon.julian(0.0)
    depth = darkness(flown.teme_km, sun_km(day + fraction + seconds / DAY_S), model)[np.newaxis]
    places = _crossings(depth, first, last, _TOLERANCE_S / flown.step_s)
    edges = [float(flown.start_s + flown.step_s * place) for place in places]
    if depth[0, first] > 0.0:
        edges.insert(0, begin_s)
    if depth[0, last] > 0.0:
        edges.append(end_s)
    return tuple(merged(zip(edges[::2], edges[1::2], strict=True), begin_s, end_s))


def _crossings(depth: Floats, first: int, last: int, tolerance: float) -> Floats:
    """Return the places between nodes `first` and `last` where `depth` (1, n) changes sign, in order."""
    node = np.arange(first, last)
    slope = slopes(depth)[0]
    above = depth[0] > 0.0
    turns = (slope[node] > 0.0) != (slope[node + 1] > 0.0)
    # A turn matters only where it makes two crossings of none.
    turns &= (above[node] == above[node + 1]) & ((slope[node] > 0.0) != above[node])
    knots = np.sort(
        np.concatenate((np.arange(first, last + 1.0), _turns(depth, slope, node[turns], tolerance)))
    )
    curves, middle = _curves(depth, np.minimum(knots.astype(np.intp), last - 1))
    at_knots = expanded(curves, knots - middle, 0)[0][0]
    low = np.flatnonzero((at_knots[:-1] > 0.0) != (at_knots[1:] > 0.0))
    curves, middle = chosen(curves, low), middle[low]

    def dark(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        (value,), (rate,) = expanded(chosen(curves, which), place, 1)
        return value, rate

    brackets = secant(knots[low] - middle, knots[low + 1] - middle, at_knots[low], at_knots[low + 1])
    return middle + roots(dark, brackets, tolerance)


def _turns(depth: Floats, slope: Floats, node: Ints, tolerance: float) -> Floats:
    """Return the places after `node` where the depth is greatest or least."""
    curves, middle = _curves(depth, node)

    def rate(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        _, (slope_there,), (half_bend,) = expanded(chosen(curves, which), place, 2)
        return slope_there, 2.0 * half_bend

    low = node - middle
    return middle + roots(rate, secant(low, low + 1.0, slope[node], slope[node + 1]), tolerance)


def _curves(depth: Floats, node: Ints) -> tuple[Floats, Floats]:
    first = stencils(node, depth.shape[1])
    return polynomials(depth, np.zeros_like(node)[np.newaxis], first), middles(first)
