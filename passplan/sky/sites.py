"""Where stations are, and which way up, north and east point there."""

from collections.abc import Sequence
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from passplan.domain.constants import EARTH_FLATTENING, EARTH_RADIUS_KM
from passplan.domain.station import Station

Floats = NDArray[np.float64]


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Sites:
    """Places of s stations in the Earth-fixed frame, one row a station.

    Attributes:
        position_km: from the Earth's centre, shape (s, 3).
        east, north, up: unit vectors, shape (s, 3); up is normal to the WGS 84 ellipsoid.
        height_km: of the tangent plane above the Earth's centre, position . up, shape (s,).
    """

    position_km: Floats
    east: Floats
    north: Floats
    up: Floats
    height_km: Floats

    def part(self, rows: slice) -> "Sites":
        """Return some of the stations."""
        return Sites(**{field.name: getattr(self, field.name)[rows] for field in fields(self)})


def sites(stations: Sequence[Station]) -> Sites:
    """Return the places of `stations` on the WGS 84 ellipsoid (NIMA TR8350.2, eq. 4-14)."""
    latitude = np.radians([station.latitude_deg for station in stations])
    longitude = np.radians([station.longitude_deg for station in stations])
    altitude_km = np.array([station.altitude_m for station in stations]) / 1000.0
    sin_lat, cos_lat = np.sin(latitude), np.cos(latitude)
    sin_lon, cos_lon = np.sin(longitude), np.cos(longitude)
    squash = (1.0 - EARTH_FLATTENING) ** 2
    normal_km = EARTH_RADIUS_KM / np.sqrt(cos_lat**2 + squash * sin_lat**2)
    out_km = (normal_km + altitude_km) * cos_lat
    position = (out_km * cos_lon, out_km * sin_lon, (squash * normal_km + altitude_km) * sin_lat)
    up = np.stack((cos_lat * cos_lon, cos_lat * sin_lon, sin_lat), axis=1)
    north = np.stack((-sin_lat * cos_lon, -sin_lat * sin_lon, cos_lat), axis=1)
    east = np.stack((-sin_lon, cos_lon, np.zeros_like(latitude)), axis=1)
    position_km = np.stack(position, axis=1)
    height_km = np.sum(position_km * up, axis=1)
    return Sites(position_km=position_km, east=east, north=north, up=up, height_km=height_km)
