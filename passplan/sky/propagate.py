"""Element sets to positions: SGP4 on a uniform grid of nodes, cut where it gives up."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray
from sgp4.api import WGS72, Satrec

from passplan.domain.constants import DAY_S, EARTH_MU_KM3_S2
from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, julian
from passplan.sky.frames import earth_rotation, horizon_julian, turned
from passplan.sky.nodes import MARGIN, POINTS

Floats = NDArray[np.float64]

_SGP4_DAY_ZERO = 2433281.5  # sgp4init counts days from 1949-12-31 00:00 UTC
_STEPS_S = (300, 240, 180, 150, 120, 90, 60, 30)  # whole seconds, for the second-by-second tracks
_STEP_RAD = 0.36


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Grid:
    """Equally spaced moments, and how the Earth stands at each.

    Attributes:
        start_s: second of the week of node 0, a whole number.
        step_s: between nodes.
        julian_day, day: Julian date of each node is julian_day + day, `day` of shape (n,).
        rotation: cosine and sine of GMST, shape (n,) each.
    """

    start_s: int
    step_s: int
    julian_day: float
    day: Floats
    rotation: tuple[Floats, Floats]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Arc:
    """Positions of one satellite at n nodes; velocities are left to the interpolation.

    SGP4's own velocity is not the derivative of its position (off by centimetres to metres
    a second), and taking it for one loses passes.

    Attributes:
        start_s: second of the week of node 0, a whole number.
        step_s: between nodes.
        teme_km, itrs_km: inertial and Earth-fixed positions, shape (3, n).
        end_s: where it ends when SGP4 reports an error (decay); None if it never does.
    """

    start_s: int
    step_s: int
    teme_km: Floats
    itrs_km: Floats
    end_s: float | None

    @property
    def empty(self) -> bool:
        """Whether there are too few nodes to interpolate between."""
        return int(self.itrs_km.shape[1]) < POINTS

    def node_range(self, begin_s: float, end_s: float) -> tuple[int, int]:
        """Return the first and last node of the shortest stretch of nodes around [begin_s, end_s]."""
        first = math.floor((begin_s - self.start_s) / self.step_s)
        last = math.ceil((end_s - self.start_s) / self.step_s)
        return max(first, MARGIN), min(last, self.itrs_km.shape[1] - 1 - MARGIN)


def satrec(element_set: ElementSet) -> Satrec:
    """Return SGP4's own record (WGS 72, improved mode) of an element set.

    The catalogue number plays no part in the motion and is left out, as SGP4's record
    has no room for numbers above 339999.
    """
    day, fraction = julian(element_set.epoch)
    record = Satrec()
    record.sgp4init(
        WGS72,
        "i",
        0,
        day - _SGP4_DAY_ZERO + fraction,
        element_set.bstar_per_earth_radius,
        element_set.mean_motion_dot_rev_day2,
        element_set.mean_motion_ddot_rev_day3,
        element_set.eccentricity,
        math.radians(element_set.argument_of_perigee_deg),
        math.radians(element_set.inclination_deg),
        math.radians(element_set.mean_anomaly_deg),
        element_set.mean_motion_rev_day * 2.0 * math.pi / 1440.0,
        math.radians(element_set.node_deg),
    )
    record.jdsatepoch, record.jdsatepochF = day, fraction  # one float would lose a microsecond
    return record


def step_s(element_set: ElementSet) -> int:
    """Return a step at which interpolation between nodes stays within 1 cm.

    The faster the satellite turns about the Earth at its lowest point, and the more
    eccentric its orbit, the shorter (limits found by trial, see the tests).
    """
    eccentricity = element_set.eccentricity
    mean_rad_s = element_set.mean_motion_rev_day * 2.0 * math.pi / DAY_S
    perigee_rad_s = mean_rad_s * math.sqrt(1.0 + eccentricity) / (1.0 - eccentricity) ** 1.5
    longest_s = _STEP_RAD / (1.0 + 1.2 * math.sqrt(eccentricity)) / perigee_rad_s
    return next((step for step in _STEPS_S if step <= longest_s), _STEPS_S[-1])


def grids(horizon: Horizon, since_s: float) -> Callable[[int], Grid]:
    """Return a maker of grids by step that cover [since_s, end of horizon] with room to spare.

    Satellites of one step share a grid, so that the Earth's rotation is computed once.
    """

    @cache
    def grid(step: int) -> Grid:
        start_s = math.floor(min(since_s, 0.0)) - MARGIN * step
        count = math.ceil((horizon.end_s - start_s) / step) + MARGIN + 1
        seconds = start_s + step * np.arange(count, dtype=np.float64)
        julian_day, day = horizon_julian(horizon, seconds)
        rotation = earth_rotation(horizon, seconds)
        return Grid(start_s=start_s, step_s=step, julian_day=julian_day, day=day, rotation=rotation)

    return grid


def fly(element_set: ElementSet, grid: Callable[[int], Grid]) -> Arc:
    """Return the arc of a satellite in steps that suit it.

    One that decays is flown in the smallest, so that little is lost before its end, and
    where drag has brought the eccentricity to nothing and SGP4 itself has kinks.
    """
    flown = arc(element_set, grid(step_s(element_set)))
    return flown if flown.end_s is None else arc(element_set, grid(_STEPS_S[-1]))


def arc(element_set: ElementSet, grid: Grid) -> Arc:
    """Return the satellite's positions at the nodes around its epoch that SGP4 answers without an error."""
    record = satrec(element_set)
    julian_days = np.full_like(grid.day, grid.julian_day)
    errors, positions, _ = record.sgp4_array(julian_days, grid.day)
    itrs_km = turned(positions.T, grid.rotation)
    first, stop = _good(errors, itrs_km, (record.jdsatepoch - grid.julian_day) + record.jdsatepochF, grid)
    end_s = float(grid.start_s + (stop - 1 - MARGIN) * grid.step_s)
    return Arc(
        start_s=grid.start_s + first * grid.step_s,
        step_s=grid.step_s,
        teme_km=positions.T[:, first:stop],
        itrs_km=itrs_km[:, first:stop],
        end_s=None if stop == len(errors) else end_s,
    )


def _good(errors: NDArray[np.uint8], itrs_km: Floats, epoch_day: float, grid: Grid) -> tuple[int, int]:
    """Return first node and one past the last of the unbroken stretch of good nodes at the epoch."""
    bad = np.flatnonzero((errors != 0) | ~np.isfinite(itrs_km[0]))
    if not len(bad):
        return 0, len(errors)
    epoch_node = int(np.searchsorted(grid.day, epoch_day).clip(0, len(errors) - 1))
    before, after = bad[bad < epoch_node], bad[bad >= epoch_node]
    first = int(before[-1]) + 1 if len(before) else 0
    return first, int(after[0]) if len(after) else len(errors)


def lowest_and_highest_km(positions_km: Floats) -> tuple[float, float]:
    """Return bounds of the distance from the Earth's centre over positions of shape (3, n)."""
    distance_km = np.sqrt(np.einsum("ij,ij->j", positions_km, positions_km))
    return float(distance_km.min()), float(distance_km.max())


def largest_acceleration_km_s2(lowest_km: float, highest_km: float) -> float:
    """Return a bound of the acceleration seen from the turning Earth.

    Gravity at the lowest point with 2 % for the Earth's oblateness, Coriolis at escape
    speed, and the centrifugal part at the highest point.
    """
    earth_rad_s = 2.0 * math.pi * 1.00273790935 / DAY_S
    gravity = 1.02 * EARTH_MU_KM3_S2 / lowest_km**2
    coriolis = 2.0 * earth_rad_s * math.sqrt(2.0 * EARTH_MU_KM3_S2 / lowest_km)
    return gravity + coriolis + earth_rad_s**2 * highest_km
