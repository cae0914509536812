"""Stretches above a horizon line that depends on azimuth, cut out of those above its lowest point.

Sampling a jagged line misses crossings. Here a stretch is split where the azimuth turns and
where it meets a corner of the line: between such places the line is straight over an azimuth
that only grows or only falls, so elevation less line is smooth. It is split once more where that
difference turns, and then crosses zero at most once in a piece.
"""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from passplan.sky.horizon_lines import HorizonLines
from passplan.sky.nodes import chosen, expanded
from passplan.sky.ragged import counted
from passplan.sky.roots import roots, secant
from passplan.sky.search import Stretches, holders
from passplan.sky.views import View

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]
Bools = NDArray[np.bool_]
Terms = tuple[Floats, Floats, Floats]  # east, north, up (3, m): value, slope, half the bend, per node

_PIECES = 8  # samples a step, to begin with
_NEAR_TOP = 2.0 ** -np.arange(3.0, 10.0)  # steps from a culmination, where the azimuth swings fastest
_TOLERANCE_S = 1e-3
_TINY_KM = 1e-9


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class _Knots:
    """Places inside stretches in order of `owner` (index of the stretch), then place, shape (k,)."""

    owner: Ints
    row: Ints
    place: Floats

    def joined(self, after: Ints, place: Floats) -> "_Knots":
        """Return these and new places in the pieces that follow knots `after`."""
        owner = np.concatenate((self.owner, self.owner[after]))
        places = np.concatenate((self.place, place))
        order = np.lexsort((places, owner))
        row = np.concatenate((self.row, self.row[after]))[order]
        return _Knots(owner=owner[order], row=row, place=places[order])

    @property
    def linked(self) -> Bools:
        """Whether a knot and the next bound a piece of one stretch, shape (k - 1,)."""
        same: Bools = self.owner[1:] == self.owner[:-1]
        return same


def cut(view: View, lines: HorizonLines, seen: Stretches) -> Stretches:
    """Return `seen` cut to what stands above the horizon lines.

    Args:
        view: one satellite over s stations.
        lines: their horizon lines.
        seen: stretches above the lowest point of each line.
    """
    jagged = lines.jagged[seen.row]
    if not jagged.any():
        return seen
    knots = _sampled(seen, np.flatnonzero(jagged))
    knots = knots.joined(*_azimuth_turns(view, knots))
    knots = knots.joined(*_corners(view, lines, knots))
    knots = knots.joined(*_gap_turns(view, lines, knots))
    row, rise, fall = _above(view, lines, knots)
    row = np.concatenate((seen.row[~jagged], row))
    rise = np.concatenate((seen.rise[~jagged], rise))
    fall = np.concatenate((seen.fall[~jagged], fall))
    order = np.lexsort((rise, row))
    return replace(seen, row=row[order], rise=rise[order], fall=fall[order])


def _sampled(seen: Stretches, which: Ints) -> _Knots:
    """Return the ends of the stretches `which`, regular samples, and more around culminations."""
    rise, fall = seen.rise[which], seen.fall[which]
    begin = np.floor(rise * _PIECES).astype(np.intp) + 1
    count = np.maximum(np.ceil(fall * _PIECES).astype(np.intp) - begin, 0)
    regular, steps = counted(begin, count)
    around = np.concatenate((-_NEAR_TOP, [0.0], _NEAR_TOP))
    tops = (seen.peak[:, np.newaxis] + around).ravel()
    top_row = np.repeat(seen.peak_row, len(around))
    holder = holders(seen.row[which], rise, fall, top_row, tops)
    each = np.arange(len(which))
    owner = np.concatenate((each, each, regular, holder[holder >= 0]))
    place = np.concatenate((rise, fall, steps / _PIECES, tops[holder >= 0]))
    order = np.lexsort((place, owner))
    return _Knots(owner=owner[order], row=seen.row[which][owner[order]], place=place[order])


def _terms(view: View, row: Ints, place: Floats) -> Terms:
    """Return east, north and up at places, with their derivatives."""
    curves, middle = view.curves(row, np.floor(place).astype(np.intp))
    value, slope, half_bend = expanded(curves, place - middle, 2)
    return value, slope, half_bend


def _azimuth_turns(view: View, knots: _Knots) -> tuple[Ints, Floats]:
    """Return where the azimuth turns back: piece and place."""
    swing, _ = _swing(_terms(view, knots.row, knots.place))
    low = np.flatnonzero(knots.linked & ((swing[:-1] > 0.0) != (swing[1:] > 0.0)))
    return low, _refined(view, knots, low, (swing[low], swing[low + 1]), lambda terms, _: _swing(terms))


def _corners(view: View, lines: HorizonLines, knots: _Knots) -> tuple[Ints, Floats]:
    """Return where the azimuth meets a corner of the line: piece and place."""
    terms = _terms(view, knots.row, knots.place)
    (east, north, _), (swing, _) = terms[0], _swing(terms)
    azimuth_deg = np.degrees(np.arctan2(east, north)) % 360.0
    piece = np.flatnonzero(knots.linked)
    start, stop = azimuth_deg[piece], azimuth_deg[piece + 1]
    clockwise = swing[piece] + swing[piece + 1] > 0.0
    low_deg = np.where(clockwise, start, start - (start - stop) % 360.0)
    high_deg = np.where(clockwise, start + (stop - start) % 360.0, start)
    owner, corner_deg = lines.corners_between(knots.row[piece], low_deg, high_deg)
    low = piece[owner]
    across, along = np.cos(np.radians(corner_deg)), np.sin(np.radians(corner_deg))
    aside = [east[at] * across - north[at] * along for at in (low, low + 1)]
    real = (aside[0] > 0.0) != (aside[1] > 0.0)
    across, along = across[real], along[real]

    def beside(terms: Terms, which: Ints | slice) -> tuple[Floats, Floats]:
        (east, north, _), (d_east, d_north, _), _ = terms
        return east * across[which] - north * along[which], d_east * across[which] - d_north * along[which]

    return low[real], _refined(view, knots, low[real], (aside[0][real], aside[1][real]), beside)


def _gap_turns(view: View, lines: HorizonLines, knots: _Knots) -> tuple[Ints, Floats]:
    """Return where elevation less line turns: piece and place."""
    piece = np.flatnonzero(knots.linked)
    line = _Line.of(view, lines, knots, piece)
    value, slope, half_bend = _terms(view, knots.row, knots.place)
    start, stop = (line.gap((value[:, at], slope[:, at], half_bend[:, at]))[1] for at in (piece, piece + 1))
    turns = (start > 0.0) != (stop > 0.0)
    low, line = piece[turns], line.part(turns)

    def rate(terms: Terms, which: Ints | slice) -> tuple[Floats, Floats]:
        return line.part(which).gap(terms)[1:]

    return low, _refined(view, knots, low, (start[turns], stop[turns]), rate)


def _above(view: View, lines: HorizonLines, knots: _Knots) -> tuple[Ints, Floats, Floats]:
    """Return row, rise and fall of what stands above the lines, in order of owner."""
    (east, north, up), _, _ = _terms(view, knots.row, knots.place)
    azimuth_deg = np.degrees(np.arctan2(east, north)) % 360.0
    elevation_deg = np.degrees(np.arctan2(up, np.hypot(east, north)))
    excess = elevation_deg - lines.elevation(knots.row, azimuth_deg)
    above, linked = excess > 0.0, knots.linked
    low = np.flatnonzero(linked & (above[:-1] != above[1:]))
    line = _Line.of(view, lines, knots, low)

    def gap(terms: Terms, which: Ints | slice) -> tuple[Floats, Floats]:
        return line.part(which).gap(terms)[:2]

    place = _refined(view, knots, low, (excess[low], excess[low + 1]), gap)
    rising = above[low + 1]
    opens = np.flatnonzero(above & np.concatenate(([True], ~linked)))
    shuts = np.flatnonzero(above & np.concatenate((~linked, [True])))
    rise_owner = np.concatenate((knots.owner[low[rising]], knots.owner[opens]))
    fall_owner = np.concatenate((knots.owner[low[~rising]], knots.owner[shuts]))
    rise = np.concatenate((place[rising], knots.place[opens]))
    fall = np.concatenate((place[~rising], knots.place[shuts]))
    rise_row = np.concatenate((knots.row[low[rising]], knots.row[opens]))
    by_rise, by_fall = np.lexsort((rise, rise_owner)), np.lexsort((fall, fall_owner))
    return rise_row[by_rise], rise[by_rise], fall[by_fall]


def _refined(
    view: View,
    knots: _Knots,
    low: Ints,
    at_ends: tuple[Floats, Floats],
    function: Callable[[Terms, Ints | slice], tuple[Floats, Floats]],
) -> Floats:
    """Return the places in the pieces after knots `low` where a function of the motion changes sign."""
    start, stop = knots.place[low], knots.place[low + 1]
    curves, middle = view.curves(knots.row[low], np.floor(start).astype(np.intp))

    def at(place: Floats, which: Ints | slice) -> tuple[Floats, Floats]:
        value, slope, half_bend = expanded(chosen(curves, which), place, 2)
        return function((value, slope, half_bend), which)

    return middle + roots(at, secant(start - middle, stop - middle, *at_ends), _TOLERANCE_S / view.step_s)


def _swing(terms: Terms) -> tuple[Floats, Floats]:
    """Return the rate of the azimuth times the squared horizontal distance, and its derivative."""
    (east, north, _), (d_east, d_north, _), (half_dd_east, half_dd_north, _) = terms
    return d_east * north - d_north * east, 2.0 * (half_dd_east * north - half_dd_north * east)


@dataclass(frozen=True, kw_only=True, slots=True, eq=False)
class _Line:
    """The straight line of the horizon in each of m pieces, through its middle."""

    azimuth_deg: Floats
    elevation_deg: Floats
    slope: Floats

    @classmethod
    def of(cls, view: View, lines: HorizonLines, knots: _Knots, piece: Ints) -> "_Line":
        """Return the lines in the pieces that follow knots `piece`."""
        row = knots.row[piece]
        middle = 0.5 * (knots.place[piece] + knots.place[piece + 1])
        (east, north, _), _, _ = _terms(view, row, middle)
        azimuth_deg = np.degrees(np.arctan2(east, north)) % 360.0
        elevation_deg = lines.elevation(row, azimuth_deg)
        slope = lines.slope_at(row, azimuth_deg)
        return cls(azimuth_deg=azimuth_deg, elevation_deg=elevation_deg, slope=slope)

    def part(self, which: Bools | Ints | slice) -> "_Line":
        """Return some of the pieces."""
        azimuth_deg, elevation_deg = self.azimuth_deg[which], self.elevation_deg[which]
        return _Line(azimuth_deg=azimuth_deg, elevation_deg=elevation_deg, slope=self.slope[which])

    def gap(self, terms: Terms) -> Terms:
        """Return elevation less line (deg) and its first and second derivatives per node."""
        (east, north, up), (d_east, d_north, d_up), bends = terms
        dd_east, dd_north, dd_up = 2.0 * bends
        flat2 = east * east + north * north + _TINY_KM**2
        flat = np.sqrt(flat2)
        d_flat = (east * d_east + north * d_north) / flat
        dd_flat = (d_east**2 + d_north**2 + east * dd_east + north * dd_north - d_flat**2) / flat
        swing, d_swing = _swing(terms)
        d_azimuth = swing / flat2
        dd_azimuth = (d_swing - 2.0 * d_azimuth * flat * d_flat) / flat2
        range2 = flat2 + up * up
        d_elevation = (d_up * flat - up * d_flat) / range2
        turn = 2.0 * d_elevation * (up * d_up + flat * d_flat)
        dd_elevation = (dd_up * flat - up * dd_flat - turn) / range2
        azimuth_deg = np.degrees(np.arctan2(east, north))
        beyond_deg = (azimuth_deg - self.azimuth_deg + 180.0) % 360.0 - 180.0
        value = np.degrees(np.arctan2(up, flat)) - self.elevation_deg - self.slope * beyond_deg
        return (
            value,
            np.degrees(d_elevation - self.slope * d_azimuth),
            np.degrees(dd_elevation - self.slope * dd_azimuth),
        )
