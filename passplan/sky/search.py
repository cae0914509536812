"""Stretches of one satellite above flat horizons, fast and missing none.

A satellite's way east, north and up of a station is smooth and interpolated between nodes, so
SGP4 is asked at nodes only. With H the squared horizontal distance, the elevation turns
where up' H = up H' / 2, and stands above a level m where up - sin(m) range > 0.

A stretch shorter than a step cannot hide between nodes: between two nodes the height rises above
both by at most A h^2 / 8 (A the largest acceleration, h the step), which picks the nodes worth
a look; there turning points are found first, then crossings between nodes and turning points.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from passplan.sky.nodes import chosen, expanded
from passplan.sky.propagate import Arc, largest_acceleration_km_s2, lowest_and_highest_km
from passplan.sky.roots import Brackets, roots, secant
from passplan.sky.sites import Sites
from passplan.sky.views import View

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
class _Knots:
    """Places in order at which `excess` = up - sin(level) range is known, shape (k,) each.

    `interval` is the node at or before; `turns` marks turning points; `linked` (k - 1,)
    says that nothing turns between a knot and the next.
    """

    row: Ints
    interval: Ints
    place: Floats
    excess: Floats
    turns: Bools
    linked: Bools


def stretches(view: View, least_km: Floats, level_sine: Floats, first: int, last: int) -> Stretches:
    """Return all stretches above flat levels between nodes `first` and `last`.

    Args:
        view: one satellite over s stations.
        least_km: from `least_height_km`, shape (s,).
        level_sine: sin of each station's level, shape (s,); may be negative.
        first: node to begin at.
        last: node to end at.
    """
    near = view.up[:, first : last + 1] > least_km[:, np.newaxis]
    wide = near.copy()
    wide[:, :-1] |= near[:, 1:]
    wide[:, 1:] |= near[:, :-1]
    row, node = np.divmod(np.flatnonzero(wide), wide.shape[1])
    knots, peaks = _knots(view, level_sine, row, node + first)
    return _paired(knots, _crossings(view, level_sine, knots), peaks, (first, last))


def least_height_km(arc: Arc, sites: Sites, level_sine: Floats) -> Floats:
    """Return the height under which a node cannot be within a step of a place above the level, shape (s,).

    At the level, range d solves |site + d direction| = r; the plumb line leans by `lean` on the
    line to the Earth's centre. The height sin(level) d is least at the lowest r, or, under a negative
    level, at the highest.

    Args:
        arc: the satellite.
        sites: s stations.
        level_sine: sin of each station's level, shape (s,).
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


def _knots(view: View, level_sine: Floats, row: Ints, node: Ints) -> tuple[_Knots, Floats]:
    """Return the candidate nodes and the turning points between them, and row, place, sine of the tops."""
    (east, north, up), (d_east, d_north, d_up) = view.at_nodes(row, node)
    flat2 = east * east + north * north
    turning = d_up * flat2 - up * (east * d_east + north * d_north)
    excess = up - level_sine[row] * np.sqrt(flat2 + up * up)
    linked = (np.diff(node) == 1) & (np.diff(row) == 0)
    climbs, above = turning > 0.0, excess > 0.0
    tops = climbs[:-1] & ~climbs[1:]
    dips = ~climbs[:-1] & climbs[1:] & above[:-1] & above[1:]
    turns = np.flatnonzero(linked & (tops | dips))
    place, turn_up, turn_range = _turned(view, row[turns], node[turns], (turning[turns], turning[turns + 1]))
    turn_excess = turn_up - level_sine[row[turns]] * turn_range
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
    return knots, np.stack((row[turns][high], place[high], (turn_up / turn_range)[high]))


def _merged(second: Bools, one: Floats | Ints, other: Floats) -> Floats:
    """Return the elements of `one` and, where `second` says so, of `other`."""
    both = np.empty(len(second))
    both[~second] = one
    both[second] = other
    return both


def _turned(
    view: View, row: Ints, node: Ints, at_ends: tuple[Floats, Floats]
) -> tuple[Floats, Floats, Floats]:
    """Return places after `node` where the elevation turns, and height and range there, shape (m,) each."""
    curves, middle = view.curves(row, node)

    def turning(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        here, rate, half_bend = expanded(chosen(curves, which), place, 2)
        (east, north, up), (d_east, d_north, d_up) = here, rate
        flat2, half_flat2_rate = east * east + north * north, east * d_east + north * d_north
        bent = d_east * d_east + d_north * d_north + 2.0 * (east * half_bend[0] + north * half_bend[1])
        slope = 2.0 * half_bend[2] * flat2 + d_up * half_flat2_rate - up * bent
        return d_up * flat2 - up * half_flat2_rate, slope

    low = node - middle
    place = roots(turning, secant(low, low + 1.0, *at_ends), _TOLERANCE_S / view.step_s)
    (here,) = expanded(curves, place, 0)
    return place + middle, here[2], np.sqrt(np.einsum("am,am->m", here, here))


def _crossings(view: View, level_sine: Floats, knots: _Knots) -> tuple[Ints, Floats, Bools]:
    """Return row, place and direction (True: rising) of every crossing of the level, in order."""
    above = knots.excess > 0.0
    low = np.flatnonzero(knots.linked & (above[:-1] != above[1:]))
    high = low + 1
    row = knots.row[low]
    sine = level_sine[row]
    curves, middle = view.curves(row, knots.interval[low])

    def excess(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        here, rate = expanded(chosen(curves, which), place, 1)
        distance = np.sqrt(np.einsum("am,am->m", here, here))
        receding = np.einsum("am,am->m", here, rate) / distance
        return here[2] - sine[which] * distance, rate[2] - sine[which] * receding

    share = knots.excess[low] / (knots.excess[low] - knots.excess[high])
    share = np.where(knots.turns[low], np.sqrt(share), share)  # a parabola about its top
    share = np.where(knots.turns[high], 1.0 - np.sqrt(1.0 - share), share)
    start, stop = knots.place[low] - middle, knots.place[high] - middle
    guess = start + share * (stop - start)
    brackets = Brackets(low=start, high=stop, guess=guess, low_is_above=above[low])
    place = roots(excess, brackets, _TOLERANCE_S / view.step_s)
    return row, place + middle, above[high]


def _paired(
    knots: _Knots, crossings: tuple[Ints, Floats, Bools], peaks: Floats, ends: tuple[int, int]
) -> Stretches:
    """Return the stretches between rising and falling crossings, those open at either end included."""
    row, place, rising = crossings
    first, last = ends
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
