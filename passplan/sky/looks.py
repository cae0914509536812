"""What a station sees: azimuth, elevation, range and its rate at any moment of an arc."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.sky.nodes import expanded, middles, polynomials, stencils
from passplan.sky.propagate import Arc
from passplan.sky.sites import Sites

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Looks:
    """Directions and distances, shape (m,) each; range rate is positive when the satellite recedes."""

    azimuth_deg: Floats
    elevation_deg: Floats
    range_km: Floats
    range_rate_km_s: Floats


def state(arc: Arc, seconds: Floats) -> tuple[Floats, Floats]:
    """Return Earth-fixed positions (km) and their derivatives (km/s) at `seconds`, shape (3, m) each."""
    places = (seconds - arc.start_s) / arc.step_s
    first = stencils(np.floor(places).astype(np.intp), arc.itrs_km.shape[1])
    axes = np.arange(3)[:, np.newaxis] + np.zeros_like(first)
    position, per_node = expanded(polynomials(arc.itrs_km, axes, first), places - middles(first), 1)
    return position, per_node / arc.step_s


def looks(sites: Sites, row: Ints, position_km: Floats, velocity_km_s: Floats) -> Looks:
    """Return what the stations of index `row` (m,) see of satellites at Earth-fixed states (3, m)."""
    away = position_km - sites.position_km[row].T
    range_km = np.sqrt(np.einsum("ij,ij->j", away, away))
    east, north, up = (np.einsum("ji,ij->j", axis[row], away) for axis in (sites.east, sites.north, sites.up))
    return Looks(
        azimuth_deg=np.degrees(np.arctan2(east, north)) % 360.0,
        elevation_deg=np.degrees(np.arctan2(up, np.hypot(east, north))),
        range_km=range_km,
        range_rate_km_s=np.einsum("ij,ij->j", away, velocity_km_s) / range_km,
    )
