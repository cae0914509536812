"""Passes second by second, for link sums and antennas."""

import math
from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.domain.passes import Pass, Track
from passplan.domain.station import Station
from passplan.sky.looks import looks, state
from passplan.sky.propagate import arc, grids, step_s
from passplan.sky.sites import sites

Floats = NDArray[np.float64]


def tracks(
    elements: Mapping[str, ElementSet], stations: Sequence[Station], passes: Sequence[Pass], horizon: Horizon
) -> list[Track]:
    """Return the track of each pass, in the order given.

    Samples stand at the whole seconds of the week inside [AOS, LOS]; a pass too short to hold one has
    empty arrays. Positions between nodes are within 0.1 m of SGP4's own, and the range rate is the
    derivative of the range, which SGP4's velocity would give only to centimetres a second.

    Raises:
        KeyError: a pass of a satellite or station that is not among those given.
    """
    places = sites(stations)
    index = {station.code: number for number, station in enumerate(stations)}
    grid = grids(horizon, 0.0)
    result: dict[int, Track] = {}
    for name in sorted({one.satellite for one in passes}):
        flown = arc(elements[name], grid(step_s(elements[name])))
        for number, one in enumerate(passes):
            if one.satellite != name:
                continue
            start, stop = math.ceil(one.aos_s), math.floor(one.los_s)
            seconds = np.arange(start, stop + 1, dtype=np.float64)
            row = np.full(len(seconds), index[one.station])
            seen = looks(places, row, *state(flown, seconds))
            result[number] = Track(
                start_s=start,
                azimuth_deg=seen.azimuth_deg,
                elevation_deg=seen.elevation_deg,
                range_km=seen.range_km,
                range_rate_km_s=seen.range_rate_km_s,
            )
    return [result[number] for number in range(len(passes))]


def track(element_set: ElementSet, station: Station, one: Pass, horizon: Horizon) -> Track:
    """Return the track of one pass; see `tracks`."""
    return tracks({one.satellite: element_set}, [station], [one], horizon)[0]
