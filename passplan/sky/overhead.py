"""Passes as arrays, satellite by satellite: what is needed where there are too many for objects."""

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass, fields, replace

import numpy as np
from numpy.typing import NDArray

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, Span
from passplan.domain.station import Station
from passplan.sky.horizon_lines import HorizonLines, horizon_lines
from passplan.sky.looks import looks, state
from passplan.sky.mask_cuts import cut
from passplan.sky.propagate import Arc, fly, grids
from passplan.sky.search import Stretches, holders, least_height_km, stretches
from passplan.sky.sites import Sites, sites
from passplan.sky.views import View

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]
Bools = NDArray[np.bool_]

_BLOCK = 32
_NO_INDEX, _NO_PLACE = np.zeros(0, dtype=np.intp), np.zeros(0)
_NOTHING = Stretches(
    row=_NO_INDEX, rise=_NO_PLACE, fall=_NO_PLACE, peak_row=_NO_INDEX, peak=_NO_PLACE, peak_sine=_NO_PLACE
)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Found:
    """Passes of one satellite in order of station, then AOS; arrays of shape (m,).

    Attributes:
        satellite: its name.
        station: index into the stations searched.
        aos_s, tca_s, los_s: seconds of the week.
        max_elevation_deg: at tca_s.
        open_start, open_end: whether the pass is cut where the horizon, or the propagation, ends.
    """

    satellite: str
    station: Ints
    aos_s: Floats
    tca_s: Floats
    los_s: Floats
    max_elevation_deg: Floats
    open_start: Bools
    open_end: Bools


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Block:
    """Some stations, from number `start` on."""

    start: int
    places: Sites
    lines: HorizonLines


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Ground:
    """All stations, and the same in blocks small enough for the cache of a processor."""

    places: Sites
    jagged: Bools
    blocks: tuple[Block, ...]

    @classmethod
    def of(cls, stations: Sequence[Station]) -> "Ground":
        """Return places and horizon lines of stations."""
        places = sites(stations)
        blocks = [
            Block(
                start=start,
                places=places.part(slice(start, start + _BLOCK)),
                lines=horizon_lines(stations[start : start + _BLOCK]),
            )
            for start in range(0, len(stations), _BLOCK)
        ]
        jagged = np.concatenate([np.zeros(0, dtype=bool), *(block.lines.jagged for block in blocks)])
        return cls(places=places, jagged=jagged, blocks=tuple(blocks))


def passes_of(
    elements: Mapping[str, ElementSet], stations: Sequence[Station], horizon: Horizon
) -> Iterator[Found]:
    """Yield the passes of each satellite over [0, horizon.end_s], satellites in order of name.

    Args:
        elements: satellite name to the element set to use.
        stations: whose `horizon` lines count.
        horizon: the week.
    """
    ground = Ground.of(stations)
    grid = grids(horizon, 0.0)
    for name in sorted(elements):
        yield found(name, fly(elements[name], grid), ground, horizon)


def found(name: str, flown: Arc, ground: Ground, horizon: Horizon) -> Found:
    """Return the passes of one satellite whose arc is known."""
    end_s = horizon.end_s if flown.end_s is None else min(horizon.end_s, flown.end_s)
    first, last = flown.node_range(0.0, end_s)
    parts = [_NOTHING]
    if not flown.empty and first < last:
        parts += [_seen(flown, block, first, last) for block in ground.blocks]
    begin_s = max(0.0, float(flown.start_s + flown.step_s * first))
    return _culminated(name, flown, ground, _chained(parts), (begin_s, end_s))


def _seen(flown: Arc, block: Block, first: int, last: int) -> Stretches:
    """Return the stretches above the horizon lines of one block of stations."""
    view = View.of(flown, block.places)
    level_sine = np.sin(np.radians(block.lines.lowest_deg))
    least_km = least_height_km(flown, block.places, level_sine)
    seen = cut(view, block.lines, stretches(view, least_km, level_sine, first, last))
    return replace(seen, row=seen.row + block.start, peak_row=seen.peak_row + block.start)


def _chained(parts: Sequence[Stretches]) -> Stretches:
    """Return the stretches of several blocks of stations as one."""
    names = [field.name for field in fields(Stretches)]
    return Stretches(**{name: np.concatenate([getattr(part, name) for part in parts]) for name in names})


def _culminated(name: str, flown: Arc, ground: Ground, seen: Stretches, span: Span) -> Found:
    """Return stretches cut to a span, each with its highest point.

    That is the highest culmination inside, or an end: a pass cut by the horizon, or by a notch in the
    mask, may climb or sink all along, or end higher than it culminated.
    """
    begin_s, end_s = span
    rise_s, fall_s, peak_s = (
        flown.start_s + flown.step_s * place for place in (seen.rise, seen.fall, seen.peak)
    )
    inside = (fall_s > begin_s) & (rise_s < end_s)
    row, rise_s, fall_s = seen.row[inside], rise_s[inside], fall_s[inside]
    aos_s, los_s = np.maximum(rise_s, begin_s), np.minimum(fall_s, end_s)
    holder = holders(row, aos_s, los_s, seen.peak_row, peak_s)
    held = holder >= 0
    lonely = np.ones(len(row), dtype=bool)
    lonely[holder[held]] = False
    cut_short = (rise_s <= begin_s) | (fall_s >= end_s) | ground.jagged[row]
    ends = np.flatnonzero(lonely | cut_short)
    of = np.concatenate((ends, ends, holder[held]))
    moments = np.concatenate((aos_s[ends], los_s[ends], peak_s[held]))
    at_ends = looks(
        ground.places, row[of[: 2 * len(ends)]], *state(flown, moments[: 2 * len(ends)])
    ).elevation_deg
    at_peaks = np.degrees(np.arcsin(np.minimum(seen.peak_sine[held], 1.0)))
    heights = np.concatenate((at_ends, at_peaks))
    rising = np.argsort(heights, kind="stable")
    tca_s, highest = np.empty_like(aos_s), np.empty_like(aos_s)
    tca_s[of[rising]] = moments[rising]  # of several, the last written stays: the highest
    highest[of[rising]] = heights[rising]
    return Found(
        satellite=name,
        station=row,
        aos_s=aos_s,
        tca_s=tca_s,
        los_s=los_s,
        max_elevation_deg=highest,
        open_start=rise_s <= begin_s,
        open_end=fall_s >= end_s,
    )
