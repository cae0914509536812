"""Passes second by second, for link sums and antennas."""

from collections.abc import Mapping, Sequence

import numpy as np
from numpy.typing import NDArray

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.domain.passes import Pass, Track
from passplan.domain.station import Station
from passplan.sky.looks import looks
from passplan.sky.nodes import POINTS, middles, stencils, weights
from passplan.sky.propagate import Arc, fly, grids
from passplan.sky.ragged import counted
from passplan.sky.sites import Sites, sites

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]


def tracks(
    elements: Mapping[str, ElementSet], stations: Sequence[Station], passes: Sequence[Pass], horizon: Horizon
) -> list[Track]:
    """Return the track of each pass, in the order given.

    Samples stand at the whole seconds of the week inside [AOS, LOS]; a pass too short to hold one has
    empty arrays. Positions are within 0.1 m of SGP4's own, and the range rate is the derivative
    of the range, which SGP4's velocity would miss by centimetres a second and more.

    Raises:
        KeyError: a pass of a satellite or station that is not among those given.
    """
    places = sites(stations)
    index = {station.code: number for number, station in enumerate(stations)}
    row = np.array([index[one.station] for one in passes], dtype=np.intp)
    grid = grids(horizon, 0.0)
    result: dict[int, Track] = {}
    for name in sorted({one.satellite for one in passes}):
        flown = fly(elements[name], grid)
        which = np.array([number for number, one in enumerate(passes) if one.satellite == name])
        cut = _tracks(flown, places, row[which], [passes[number] for number in which])
        result.update(zip(which.tolist(), cut, strict=True))
    return [result[number] for number in range(len(passes))]


def track(element_set: ElementSet, station: Station, one: Pass, horizon: Horizon) -> Track:
    """Return the track of one pass; see `tracks`."""
    return tracks({one.satellite: element_set}, [station], [one], horizon)[0]


def _tracks(flown: Arc, places: Sites, row: Ints, passes: Sequence[Pass]) -> list[Track]:
    """Return the tracks of passes of one satellite, computed all at once."""
    start = np.ceil([one.aos_s for one in passes]).astype(np.intp)
    stop = np.floor([one.los_s for one in passes]).astype(np.intp) + 1
    owner, second = counted(start, np.maximum(stop - start, 0))
    seen = looks(places, row[owner], *_each_second(flown, second))
    bounds = np.searchsorted(owner, np.arange(len(passes) + 1))
    return [
        Track(
            start_s=int(start[k]),
            azimuth_deg=seen.azimuth_deg[part],
            elevation_deg=seen.elevation_deg[part],
            range_km=seen.range_km[part],
            range_rate_km_s=seen.range_rate_km_s[part],
        )
        for k, part in enumerate(map(slice, bounds[:-1], bounds[1:]))
    ]


def _each_second(flown: Arc, second: Ints) -> tuple[Floats, Floats]:
    """Return Earth-fixed positions (km) and their derivatives (km/s) at whole seconds, shape (3, m) each.

    Between nodes the same seconds return in every interval, so one table of weights serves all.
    """
    interval, rest = np.divmod(second - flown.start_s, flown.step_s)
    nodes = flown.itrs_km.shape[1]
    met = np.zeros(nodes, dtype=bool)
    met[interval] = True
    used = np.flatnonzero(met)
    first = stencils(used, nodes)
    shift = used - middles(first)
    table = np.empty((2, 3, len(used), flown.step_s))
    part = np.arange(flown.step_s) / flown.step_s
    for one in np.unique(shift):
        which = np.flatnonzero(shift == one)
        near = flown.itrs_km[:, first[which, np.newaxis] + np.arange(POINTS)]
        to_value, to_slope = weights(part + one)
        table[0][:, which] = near @ to_value.T
        table[1][:, which] = near @ (to_slope.T / flown.step_s)
    picked = table.reshape(6, -1)[:, (np.cumsum(met) - 1)[interval] * flown.step_s + rest]
    return picked[:3], picked[3:]
