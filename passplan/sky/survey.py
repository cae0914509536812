"""The whole sky of a mission for one horizon: passes, shadows, decays."""

from bisect import bisect_left, bisect_right
from collections.abc import Iterator, Mapping, Sequence
from operator import itemgetter
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, Span, without
from passplan.domain.passes import Pass, Sky
from passplan.domain.station import Station
from passplan.sky.looks import looks, state
from passplan.sky.overhead import Found, Ground, found
from passplan.sky.propagate import Arc, fly, grids
from passplan.sky.range_rates import largest_range_rate_km_s
from passplan.sky.sites import Sites
from passplan.sky.sunlight import shadows

Floats = NDArray[np.float64]

_Clipped = Literal["", "start", "end", "both"]
_CLIPPED: dict[tuple[bool, bool], _Clipped] = {
    (False, False): "",
    (True, False): "start",
    (False, True): "end",
    (True, True): "both",
}


def survey(
    elements: Mapping[str, ElementSet], stations: Sequence[Station], horizon: Horizon, since_s: float = 0.0
) -> Sky:
    """Return all passes in [0, horizon.end_s] and all shadows in [since_s, horizon.end_s].

    Args:
        elements: satellite name to the element set to use.
        stations: whose `horizon` lines count.
        horizon: the week.
        since_s: shadows are wanted from here on, which may be before the week.

    Where SGP4 gives up (decay) everything ends some minutes earlier, at `propagation_end_s`, and a
    pass open there is clipped. Elevations are geometric: refraction is left out.
    """
    ground = Ground.of(stations)
    grid = grids(horizon, since_s)
    passes: list[Pass] = []
    dark: dict[str, tuple[Span, ...]] = {}
    ends: dict[str, float] = {}
    for name in sorted(elements):
        flown = fly(elements[name], grid)
        dark[name] = shadows(flown, horizon, since_s)
        seen = found(name, flown, ground, horizon)
        passes.extend(_described(seen, flown, stations, ground.places, dark[name]))
        if flown.end_s is not None and flown.end_s < horizon.end_s:
            ends[name] = flown.end_s
    passes.sort(key=lambda one: (one.aos_s, one.satellite, one.station))
    return Sky(passes=tuple(passes), shadows=dark, propagation_end_s=ends)


def _described(
    seen: Found, flown: Arc, stations: Sequence[Station], places: Sites, dark: Sequence[Span]
) -> Iterator[Pass]:
    """Yield the passes found as objects, with directions, ranges and the parts in sunlight."""
    if not len(seen.station):
        return
    moments = np.stack((seen.aos_s, seen.tca_s, seen.los_s))
    view = looks(places, np.tile(seen.station, 3), *state(flown, moments.ravel()))
    azimuth, range_km = (array.reshape(3, -1).T.tolist() for array in (view.azimuth_deg, view.range_km))
    fastest = largest_range_rate_km_s(flown, places, seen.station, seen.aos_s, seen.los_s).tolist()
    for k, (aos_s, tca_s, los_s) in enumerate(moments.T.tolist()):
        yield Pass(
            satellite=seen.satellite,
            station=stations[int(seen.station[k])].code,
            aos_s=aos_s,
            tca_s=tca_s,
            los_s=los_s,
            aos_azimuth_deg=azimuth[k][0],
            tca_azimuth_deg=azimuth[k][1],
            los_azimuth_deg=azimuth[k][2],
            max_elevation_deg=float(seen.max_elevation_deg[k]),
            aos_range_km=range_km[k][0],
            tca_range_km=range_km[k][1],
            los_range_km=range_km[k][2],
            largest_range_rate_km_s=fastest[k],
            sunlit=_sunlit(aos_s, los_s, dark),
            clipped=_CLIPPED[bool(seen.open_start[k]), bool(seen.open_end[k])],
        )


def _sunlit(aos_s: float, los_s: float, dark: Sequence[Span]) -> tuple[Span, ...]:
    """Return the parts of a pass out of the shadows `dark`, which are many, in order and apart."""
    first = bisect_left(dark, aos_s, key=itemgetter(1))
    last = bisect_right(dark, los_s, key=itemgetter(0))
    return tuple(without([(aos_s, los_s)], dark[first:last]))
