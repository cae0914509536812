"""The charge of a laid-out week, exact between its edges."""

import itertools
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from passplan.domain.passes import Floats
from passplan.domain.problem import Craft

Load = tuple[float, float, float]


@dataclass(frozen=True, slots=True, eq=False)
class Charge:
    """Charge (J) as straight lines between corners, arrays of one shape (n,)."""

    times_s: Floats
    energy_j: Floats

    def at(self, moment_s: float) -> float:
        """Return the charge at a moment."""
        return float(np.interp(moment_s, self.times_s, self.energy_j))

    def lowest(self, begin_s: float, end_s: float) -> tuple[float, float]:
        """Return (second, charge) of the lowest point in [begin_s, end_s]."""
        inside = (self.times_s > begin_s) & (self.times_s < end_s)
        moments = [begin_s, *self.times_s[inside].tolist(), end_s]
        charges = [self.at(begin_s), *self.energy_j[inside].tolist(), self.at(end_s)]
        place = int(np.argmin(charges))
        return moments[place], charges[place]


def play(craft: Craft, loads: Iterable[Load]) -> Charge:
    """Return the charge over the horizon under the given loads.

    Args:
        craft: idle power, cells, charge at the start.
        loads: (start s, end s, W) on top of the idle ones; may overlap.
    """
    told = sorted(loads)
    edges = sorted(
        {edge for span in craft.idle for edge in (span.start_s, span.end_s)}
        | {edge for start, end, _ in told for edge in (start, end)}
    )
    extra = dict.fromkeys(edges, 0.0)
    for start, end, draw_w in told:
        extra[start] += draw_w
        extra[end] -= draw_w
    times, energy = [edges[0]], [min(craft.start_j, craft.capacity_j)]
    span, load_w = 0, 0.0
    for low, high in itertools.pairwise(edges):
        load_w += extra[low]
        while craft.idle[span].end_s <= low and span + 1 < len(craft.idle):
            span += 1
        slope_w = craft.stored_w(craft.idle[span].net_w - load_w)
        reached = energy[-1] + slope_w * (high - low)
        if reached > craft.capacity_j:
            full_s = low + (craft.capacity_j - energy[-1]) / slope_w
            if low < full_s < high:
                times.append(full_s)
                energy.append(craft.capacity_j)
            reached = craft.capacity_j
        times.append(high)
        energy.append(reached)
    return Charge(np.array(times), np.array(energy))
