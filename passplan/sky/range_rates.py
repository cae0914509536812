"""The fastest that a satellite comes or goes in a pass, which sets its largest Doppler shift."""

import numpy as np
from numpy.typing import NDArray

from passplan.sky.nodes import chosen, expanded
from passplan.sky.propagate import Arc
from passplan.sky.ragged import counted
from passplan.sky.roots import roots, secant
from passplan.sky.sites import Sites
from passplan.sky.views import View

Floats = NDArray[np.float64]
Ints = NDArray[np.intp]

_PIECES = 2  # samples a step
_TOLERANCE_S = 1e-2  # at a largest value, where a slip in time counts by its square


def largest_range_rate_km_s(arc: Arc, sites: Sites, row: Ints, aos_s: Floats, los_s: Floats) -> Floats:
    """Return the largest absolute range rate between AOS and LOS, shape (m,).

    It is at an end unless the range bends the other way in between, as it does under the
    horizontal plane and for high orbits: with q the squared range, where 2 q q'' = q'^2.

    Args:
        arc: the satellite.
        sites: s stations.
        row: station of each pass, shape (m,).
        aos_s: beginnings, seconds of the week.
        los_s: ends.
    """
    owner, place = _samples((aos_s - arc.start_s) / arc.step_s, (los_s - arc.start_s) / arc.step_s)
    curves, middle = View.of(arc, sites).curves(row[owner], np.floor(place).astype(np.intp))
    rate, (bend, _) = _rate(curves, place - middle), _bend(curves, place - middle)
    low = np.flatnonzero((owner[1:] == owner[:-1]) & ((bend[:-1] > 0.0) != (bend[1:] > 0.0)))
    curves, middle = chosen(curves, low), middle[low]
    start, stop = place[low] - middle, place[low + 1] - middle
    turn = roots(
        lambda at, which: _bend(chosen(curves, which), at),
        secant(start, stop, bend[low], bend[low + 1]),
        _TOLERANCE_S / arc.step_s,
    )
    fastest = np.zeros(len(row))
    np.maximum.at(fastest, owner, np.abs(rate))
    np.maximum.at(fastest, owner[low], np.abs(_rate(curves, turn)))
    return fastest / arc.step_s


def _samples(begin: Floats, end: Floats) -> tuple[Ints, Floats]:
    """Return stretch and place of both ends of each stretch and of regular samples between, in order."""
    start = np.floor(begin * _PIECES).astype(np.intp) + 1
    regular, step = counted(start, np.maximum(np.ceil(end * _PIECES).astype(np.intp) - start, 0))
    each = np.arange(len(begin))
    owner = np.concatenate((each, each, regular))
    place = np.concatenate((begin, end, step / _PIECES))
    order = np.lexsort((place, owner))
    return owner[order], place[order]


def _rate(curves: Floats, place: Floats) -> Floats:
    """Return the range rate, km per node."""
    away, moving = expanded(curves, place, 1)
    rate: Floats = np.einsum("am,am->m", away, moving) / np.sqrt(np.einsum("am,am->m", away, away))
    return rate


def _bend(curves: Floats, place: Floats) -> tuple[Floats, Floats]:
    """Return 2 q q'' - q'^2, of the sign of the range's second derivative, and its slope 2 q q'''."""
    away, moving, half_bend, sixth = expanded(curves, place, 3)

    def product(one: Floats, other: Floats) -> Floats:
        result: Floats = np.einsum("am,am->m", one, other)
        return result

    range2, half_slope = product(away, away), product(away, moving)
    half_second = product(moving, moving) + 2.0 * product(away, half_bend)
    third = 12.0 * (product(moving, half_bend) + product(away, sixth))
    return 4.0 * (range2 * half_second - half_slope * half_slope), 2.0 * range2 * third
