"""Stretches of one satellite above flat horizons, fast and missing none.

Two smooth scalars describe a satellite over a station: its height above the station's
tangent plane, z = r . up - c, and its squared range. sin(elevation) is z / range, its
turning points are the roots of 2 z' range2 - z range2', and it stands above a level m where
z - sin(m) range > 0. Both are interpolated between nodes, so SGP4 is asked at nodes only.

A stretch shorter than a step cannot hide between nodes: between two nodes z rises above
both by at most A h^2 / 8 (A the largest acceleration, h the step), which picks the nodes worth
a look; there turning points are found first, then crossings between nodes and turning points.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.sky.nodes import expanded, middles, polynomials, slopes, stencils
from passplan.sky.propagate import Arc, largest_acceleration_km_s2, lowest_and_highest_km
from passplan.sky.roots import Brackets, roots, secant
from passplan.sky.sites import Sites

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]
Bools = NDArray[np.bool_]

_TOLERANCE_S = 1e-2  # of the last Newton step; what is left is its square over some 100 s


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class Stretches:
    """Stretches above the level in order of row, then place; places are in nodes of the arc.

    Attributes:
        row: index of the station, shape (m,).
        rise, fall: first and last place above, shape (m,); the first or last node searched
            where the stretch is open there.
        peak_row, peak, peak_sine: station, place and sin(elevation) of the points where the
            satellite culminates above the level, shape (p,).
    """

    row: Ints
    rise: Floats
    fall: Floats
    peak_row: Ints
    peak: Floats
    peak_sine: Floats


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class _Scene:
    """One satellite over s stations.

    Attributes:
        pair: rows z, then rows range2, shape (2 s, n).
        directions: what positions are multiplied by for z, then for range2, shape (2 s, 3).
        motion: velocity per node and half the rate of the squared distance, shape (4, n).
        level_sine: sin of the levels, shape (s,).
        tolerance: of roots, in nodes.
    """

    pair: Floats
    directions: Floats
    motion: Floats
    level_sine: Floats
    tolerance: float

    def rates(self, row: Ints, node: Ints) -> tuple[Floats, Floats]:
        """Return the slopes of z and range2 at nodes, shape (m,) each."""
        moving = self.motion[:, node]
        height, range2 = (
            np.einsum("mi,im->m", self.directions[rows], moving[:3])
            for rows in (row, row + len(self.level_sine))
        )
        return height, range2 + 2.0 * moving[3]

    def polynomials(self, rows: Ints, intervals: Ints) -> tuple[Floats, Floats]:
        """Return polynomials of z and range2 (POINTS, 2, m) after nodes `intervals`, and their middles."""
        first = stencils(intervals, self.pair.shape[1])
        both = np.stack((rows, rows + len(self.level_sine)))
        return polynomials(self.pair, both, first), middles(first)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class _Knots:
    """Places in order at which `excess` = z - sin(level) range is known, shape (k,) each.

    `interval` is the node at or before; `turns` marks turning points; `linked` (k - 1,)
    says that nothing turns between a knot and the next.
    """

    row: Ints
    interval: Ints
    place: Floats
    excess: Floats
    turns: Bools
    linked: Bools


def stretches(arc: Arc, sites: Sites, level_sine: Floats, first: int, last: int) -> Stretches:
    """Return all stretches above flat levels between nodes `first` and `last` of an arc.

    Args:
        arc: at least POINTS nodes.
        sites: s stations.
        level_sine: sin of each station's level, shape (s,); may be negative.
        first: node to begin at.
        last: node to end at.
    """
    scene = _scene(arc, sites, level_sine)
    heights = scene.pair[: len(level_sine), first : last + 1]
    near = heights > _least_height_km(arc, sites, level_sine)[:, np.newaxis]
    wide = near.copy()
    wide[:, :-1] |= near[:, 1:]
    wide[:, 1:] |= near[:, :-1]
    row, node = np.nonzero(wide)
    knots, peaks = _knots(scene, row, node + first)
    return _paired(scene, knots, peaks, first, last)


def _scene(arc: Arc, sites: Sites, level_sine: Floats) -> _Scene:
    """Return z and range2 of every station at every node: one matrix product."""
    stations = len(level_sine)
    directions = np.concatenate((sites.up, -2.0 * sites.position_km))
    velocity = slopes(arc.itrs_km)
    pair = directions @ arc.itrs_km
    pair[:stations] -= sites.height_km[:, np.newaxis]
    pair[stations:] += np.einsum("ij,ij->j", arc.itrs_km, arc.itrs_km)
    pair[stations:] += np.einsum("ij,ij->i", sites.position_km, sites.position_km)[:, np.newaxis]
    outward = np.einsum("ij,ij->j", arc.itrs_km, velocity)
    return _Scene(
        pair=pair,
        directions=directions,
        motion=np.concatenate((velocity, outward[np.newaxis])),
        level_sine=level_sine,
        tolerance=_TOLERANCE_S / arc.step_s,
    )


def _least_height_km(arc: Arc, sites: Sites, level_sine: Floats) -> Floats:
    """Return z below which a node cannot be within a step of a place above the level, shape (s,).

    At the level, range d solves |site + d direction| = r; the plumb line leans by `lean` on the
    line to the Earth's centre. z = sin(level) d is least at the lowest r, or, under a negative
    level, at the highest.
    """
    lowest_km, highest_km = lowest_and_highest_km(arc.itrs_km)
    sagitta_km = largest_acceleration_km_s2(0.98 * lowest_km, highest_km) * arc.step_s**2 / 8.0
    site2 = np.einsum("ij,ij->i", sites.position_km, sites.position_km)
    lean_km = np.sqrt(np.maximum(site2 - sites.height_km**2, 0.0))
    rising = level_sine >= 0.0
    reach_km = np.where(rising, lowest_km - sagitta_km, highest_km + sagitta_km)
    half = sites.height_km * level_sine + np.where(rising, lean_km, -lean_km)
    range_km = np.sqrt(np.maximum(half**2 + reach_km**2 - site2, 0.0)) - half
    least_km: Floats = level_sine * np.maximum(range_km, 0.0) - sagitta_km
    return least_km


def _knots(scene: _Scene, row: Ints, node: Ints) -> tuple[_Knots, Floats]:
    """Return the candidate nodes and the turning points between them, and sin(elevation) at the knots."""
    stations = len(scene.level_sine)
    height, range2 = scene.pair[row, node], scene.pair[row + stations, node]
    height_rate, range2_rate = scene.rates(row, node)
    turning = 2.0 * height_rate * range2 - height * range2_rate
    excess = height - scene.level_sine[row] * np.sqrt(range2)
    linked = (np.diff(node) == 1) & (np.diff(row) == 0)
    climbs, above = turning > 0.0, excess > 0.0
    tops = climbs[:-1] & ~climbs[1:]
    dips = ~climbs[:-1] & climbs[1:] & above[:-1] & above[1:]
    turns = np.flatnonzero(linked & (tops | dips))
    place, turn_height, turn_range2 = _turned(
        scene, row[turns], node[turns], turning[turns], turning[turns + 1]
    )
    turn_excess = turn_height - scene.level_sine[row[turns]] * np.sqrt(turn_range2)
    is_turn = np.zeros(len(row) + len(turns), dtype=bool)
    is_turn[turns + np.arange(1, len(turns) + 1)] = True
    before = np.cumsum(~is_turn) - 1  # the node at or before each knot
    knots = _Knots(
        row=row[before],
        interval=node[before],
        place=_merged(is_turn, node, place),
        excess=_merged(is_turn, excess, turn_excess),
        turns=is_turn,
        linked=linked[before[:-1]],
    )
    high = tops[turns] & (turn_excess > 0.0)
    sine = turn_height / np.sqrt(turn_range2)
    return knots, np.stack((row[turns][high], place[high], sine[high]))


def _merged(second: Bools, one: Floats | Ints, other: Floats) -> Floats:
    """Return the elements of `one` and, where `second` says so, of `other`."""
    both = np.empty(len(second))
    both[~second] = one
    both[second] = other
    return both


def _turned(
    scene: _Scene, row: Ints, node: Ints, before: Floats, after: Floats
) -> tuple[Floats, Floats, Floats]:
    """Return places after `node` where the elevation turns, and z and range2 there, shape (m,) each."""
    curves, middle = scene.polynomials(row, node)

    def turning(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        (z, range2), (dz, drange2), (half_ddz, half_ddrange2) = expanded(curves[..., which], place, 2)
        slope = 4.0 * half_ddz * range2 + dz * drange2 - 2.0 * z * half_ddrange2
        return 2.0 * dz * range2 - z * drange2, slope

    low = node - middle
    place = roots(turning, secant(low, low + 1.0, before, after), scene.tolerance)
    z, range2 = expanded(curves, place, 0)[0]
    return place + middle, z, range2


def _crossings(scene: _Scene, knots: _Knots) -> tuple[Ints, Floats, Bools]:
    """Return row, place and direction (True: rising) of every crossing of the level, in order."""
    above = knots.excess > 0.0
    low = np.flatnonzero(knots.linked & (above[:-1] != above[1:]))
    high = low + 1
    row = knots.row[low]
    level_sine = scene.level_sine[row]
    curves, middle = scene.polynomials(row, knots.interval[low])

    def excess(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        (z, range2), (dz, drange2) = expanded(curves[..., which], place, 1)
        range_km = np.sqrt(range2)
        sine = level_sine[which]
        return z - sine * range_km, dz - 0.5 * sine * drange2 / range_km

    share = knots.excess[low] / (knots.excess[low] - knots.excess[high])
    share = np.where(knots.turns[low], np.sqrt(share), share)  # a parabola about its top
    share = np.where(knots.turns[high], 1.0 - np.sqrt(1.0 - share), share)
    start, stop = knots.place[low] - middle, knots.place[high] - middle
    guess = start + share * (stop - start)
    place = roots(
        excess, Brackets(low=start, high=stop, guess=guess, low_is_above=above[low]), scene.tolerance
    )
    return row, place + middle, above[high]


def _paired(scene: _Scene, knots: _Knots, peaks: Floats, first: int, last: int) -> Stretches:
    """Return the stretches between rising and falling crossings, those open at either end included."""
    row, place, rising = _crossings(scene, knots)
    above = knots.excess > 0.0
    at_node = above & ~knots.turns
    open_first = at_node & (knots.place == first)
    open_last = at_node & (knots.place == last)
    rise_row = np.concatenate((row[rising], knots.row[open_first]))
    rise = np.concatenate((place[rising], knots.place[open_first]))
    fall_row = np.concatenate((row[~rising], knots.row[open_last]))
    fall = np.concatenate((place[~rising], knots.place[open_last]))
    by_rise, by_fall = np.lexsort((rise, rise_row)), np.lexsort((fall, fall_row))
    return Stretches(
        row=rise_row[by_rise],
        rise=rise[by_rise],
        fall=fall[by_fall],
        peak_row=peaks[0].astype(np.intp),
        peak=peaks[1],
        peak_sine=peaks[2],
    )


def holders(row: Ints, low: Floats, high: Floats, of_row: Ints, place: Floats) -> Ints:
    """Return the stretch [low, high] of the same row that each place lies in, -1 for none, shape (p,)."""
    if not len(row):
        return np.full(len(of_row), -1)
    apart = 2.0 * (np.abs(high).max() + np.abs(place).max(initial=0.0)) + 1.0
    holder = np.searchsorted(row * apart + low, of_row * apart + place, side="right") - 1
    fits = (holder >= 0) & (row[holder] == of_row) & (place <= high[holder])
    return np.where(fits, holder, -1)
