"""Charge second by second in plain arithmetic, and what a stretch of seconds does to any charge."""

import math
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from passplan.domain.passes import Floats
from passplan.domain.problem import Craft

Draw = tuple[float, float, float]


@dataclass(frozen=True, slots=True, eq=False)
class Stretch:
    """What some seconds do to the charge E at their start; each field a number or an array alike.

    Attributes:
        gain_j, top_j: the charge at the end is min(E + gain_j, top_j).
        dip_j, low_j: the lowest one inside is min(E + dip_j, low_j).
    """

    gain_j: Floats
    top_j: Floats
    dip_j: Floats
    low_j: Floats


def stretch(changes_j: Floats, capacity_j: float) -> Stretch:
    """Return what seconds do, from their changes (..., n).

    A walk reflected at the capacity is the free walk less its largest excess so far
    (Skorokhod; Lindley 1952), so one pass over the seconds serves every charge at the start.
    """
    start = np.zeros((*changes_j.shape[:-1], 1))
    walk = np.concatenate([start, np.cumsum(changes_j, axis=-1)], axis=-1)
    full = capacity_j + walk - np.maximum.accumulate(walk, axis=-1)
    return Stretch(walk[..., -1], full[..., -1], walk.min(axis=-1), full.min(axis=-1))


class SecondLedger:
    """The changes of charge in each second of the horizon."""

    def __init__(self, craft: Craft, end_s: float) -> None:
        self.craft = craft
        self.seconds = math.ceil(end_s)
        self._by_load: dict[float, Floats] = {}

    def change_w(self, net_w: float) -> float:
        """Return watts into the cells (negative: out of them) at a net power on the bus."""
        craft = self.craft
        if net_w < 0.0:
            return net_w / craft.discharge_efficiency
        return craft.charge_efficiency * min(net_w, craft.charge_limit_w)

    def under(self, load_w: float) -> Floats:
        """Return the change of each second (J) with a load on top of the idle ones."""
        if load_w not in self._by_load:
            changes = np.zeros(self.seconds)
            for span in self.craft.idle:
                watts = self.change_w(span.net_w - load_w)
                first, last = math.ceil(span.start_s), math.floor(span.end_s)
                if first > last:
                    changes[last] += watts * (span.end_s - span.start_s)
                    continue
                changes[first:last] += watts
                if first > span.start_s:
                    changes[first - 1] += watts * (first - span.start_s)
                if span.end_s > last:
                    changes[last] += watts * (span.end_s - last)
            self._by_load[load_w] = changes
        return self._by_load[load_w]

    def add(self, changes_j: Floats, begin_s: int, draw: Draw) -> None:
        """Put a draw into the changes of the seconds from `begin_s` on, whole or parts of seconds."""
        start, end, load_w = draw
        for second in range(math.floor(start), math.ceil(end)):
            part = min(end, second + 1.0) - max(start, float(second))
            extra = self.under(load_w)[second] - self.under(0.0)[second]
            changes_j[second - begin_s] += part * extra

    def replay(self, start_j: float, begin_s: int, end_s: int, draws: Iterable[Draw]) -> list[float]:
        """Return the charge at each whole second of [begin_s, end_s], by a plain loop."""
        changes = self.under(0.0)[begin_s:end_s].copy()
        for draw in draws:
            self.add(changes, begin_s, draw)
        charges = [start_j]
        for change in changes:
            charges.append(min(charges[-1] + float(change), self.craft.capacity_j))
        return charges
