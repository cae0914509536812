"""When a satellite is in the Earth's shadow: a walk along its orbit in steps of 20 s, edges halved out.

"Half" model: shadow while the Sun's centre stands behind the limb of a sphere of
6378.137 km. A graze shorter than a step may be lost; it is worth nothing to the cells.
"""

import numpy as np
from numpy.typing import NDArray
from skyfield.sgp4lib import EarthSatellite

from passplan.domain.constants import DAY_S, EARTH_RADIUS_KM
from passplan.domain.moments import Horizon, Span
from passplan.domain.passes import Floats
from passplan.verify.sun_orbit import sun_km

Flags = NDArray[np.bool_]

_STEP_S = 20.0
_HALVINGS = 12  # 20 s / 2^12 = 5 ms
_J2000_JD = 2451545.0


def shadow_spans(body: EarthSatellite, horizon: Horizon, begin_s: float, end_s: float) -> list[Span]:
    """Return the spans (s of the week) of [begin_s, end_s] in shadow, in order.

    TEME and the mean equator of date differ by a few thousandths of a degree (nutation in
    obliquity), which is less than the Sun is known to here.
    """
    count = max(2, int((end_s - begin_s) // _STEP_S) + 2)
    seconds = np.linspace(begin_s, end_s, count)
    dark = _dark(body, horizon, seconds)
    turns = np.flatnonzero(dark[1:] != dark[:-1])
    low, high = seconds[turns], seconds[turns + 1]
    before = dark[turns]
    for _ in range(_HALVINGS):
        middle = (low + high) / 2.0
        same = _dark(body, horizon, middle) == before
        low, high = np.where(same, middle, low), np.where(same, high, middle)
    edges = [float(edge) for edge in (low + high) / 2.0]
    if dark[0]:
        edges.insert(0, begin_s)
    if dark[-1]:
        edges.append(end_s)
    return list(zip(edges[::2], edges[1::2], strict=True))


def in_shadow(satellite_km: Floats, sun_km_: Floats) -> Flags:
    """Return whether the Sun's centre is behind the limb, seen from each place; arrays (n, 3), one frame.

    False where a place is not a number.
    """
    to_sun = sun_km_ - satellite_km
    distance = np.linalg.norm(satellite_km, axis=-1)
    towards_earth = -np.sum(satellite_km * to_sun, axis=-1) / (distance * np.linalg.norm(to_sun, axis=-1))
    apart = np.arccos(np.clip(towards_earth, -1.0, 1.0))
    return np.asarray(apart < np.arcsin(np.minimum(1.0, EARTH_RADIUS_KM / distance)))


def _dark(body: EarthSatellite, horizon: Horizon, seconds: Floats) -> Flags:
    """Return whether the satellite is in shadow at each second of the week; never once SGP4 gives up."""
    whole, fraction = horizon.julian(0.0)
    days = fraction + seconds / DAY_S
    errors, place_km, _ = body.model.sgp4_array(np.full(len(days), whole), days)
    place_km[errors != 0] = np.nan  # after a decay it still gives places, under the ground
    return in_shadow(place_km, sun_km(whole - _J2000_JD + days))
