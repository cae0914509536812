"""The lines that stations' horizons draw over azimuth, many at once."""

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.domain.station import Station
from passplan.sky.ragged import counted

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_APART_DEG = 2000.0  # the lines lie end to end on one axis, each from -360 to 720 deg


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class HorizonLines:
    """Straight lines between corners, station after station on one axis; flat ones are left out there.

    Attributes:
        key_deg: corners' azimuths, three turns of them so that a satellite can be followed
            across north, station k shifted by k * 2000 deg, rising.
        elevation_deg: at the corners.
        slope: rise of the line after each corner but the last, deg per deg.
        lowest_deg: lowest point of each of the s lines, shape (s,).
        jagged: whether each line depends on azimuth at all, shape (s,).
    """

    key_deg: Floats
    elevation_deg: Floats
    slope: Floats
    lowest_deg: Floats
    jagged: NDArray[np.bool_]

    def elevation(self, row: Ints, azimuth_deg: Floats) -> Floats:
        """Return the lines' elevation (deg) of jagged stations `row` at azimuths in [0, 360], shape (m,)."""
        result: Floats = np.interp(row * _APART_DEG + azimuth_deg, self.key_deg, self.elevation_deg)
        return result

    def slope_at(self, row: Ints, azimuth_deg: Floats) -> Floats:
        """Return the lines' slope (deg per deg) at azimuths in [0, 360], shape (m,)."""
        corner = np.searchsorted(self.key_deg, row * _APART_DEG + azimuth_deg, side="right") - 1
        result: Floats = self.slope[corner]
        return result

    def corners_between(self, row: Ints, low_deg: Floats, high_deg: Floats) -> tuple[Ints, Floats]:
        """Return the corners met between azimuths `low_deg` and `high_deg`, both in [-360, 720].

        Returns:
            Index of the stretch of azimuth each corner lies in, and the corner's azimuth.
        """
        start = np.searchsorted(self.key_deg, row * _APART_DEG + low_deg, side="right")
        stop = np.searchsorted(self.key_deg, row * _APART_DEG + high_deg, side="left")
        owner, corner = counted(start, np.maximum(stop - start, 0))
        return owner, self.key_deg[corner] - row[owner] * _APART_DEG


def horizon_lines(stations: Sequence[Station]) -> HorizonLines:
    """Return the horizon lines of `stations`, mask and least receive elevation in one."""
    horizons = [station.horizon for station in stations]
    keys, elevations = [np.zeros(0)], [np.zeros(0)]
    for number, horizon in enumerate(horizons):
        if len(horizon) > 1:
            azimuth, elevation = np.array(horizon).T
            turns = number * _APART_DEG + np.array([[-360.0], [0.0], [360.0]])
            keys.append((turns + azimuth).ravel())
            elevations.append(np.tile(elevation, 3))
    key_deg, elevation_deg = np.concatenate(keys), np.concatenate(elevations)
    rise, run = np.diff(elevation_deg), np.diff(key_deg)
    return HorizonLines(
        key_deg=key_deg,
        elevation_deg=elevation_deg,
        slope=np.divide(rise, run, out=np.zeros_like(rise), where=run > 0.0),  # corners may fall together
        lowest_deg=np.array([min(elevation for _, elevation in horizon) for horizon in horizons]),
        jagged=np.array([len(horizon) > 1 for horizon in horizons]),
    )
