"""Contact options: whole passes and the pieces that hand-overs between stations make of them."""

import itertools
from collections.abc import Sequence

import numpy as np

from passplan.budgets.usable import Run
from passplan.domain.mission import Mission
from passplan.domain.problem import Option, Slice
from passplan.domain.rules import Rule

RULES = frozenset({Rule.LEAST_CONTACT})  # kept by offering nothing shorter

# A hand-over is offered where it covers this much more time than one of the two alone.
_LEAST_GAIN_S = 60
_GRID_S = 60


def options(mission: Mission, run: Run, others: Sequence[Run]) -> tuple[Option, ...]:
    """Return every piece of a run worth offering, by start and end.

    Args:
        mission: for the times a contact is made of.
        run: the pass to cut.
        others: runs of the same satellite at other stations that overlap it.
    """
    planning = mission.planning
    acquire, close = int(planning.acquire_s), int(planning.close_s)
    rise, fall = run.reach(mission.station(run.sight.station).transmit_floor_deg)
    begin, end = max(run.start_s, rise - acquire), run.end_s
    gap = int(planning.hand_over_gap_s)
    starts, ends = {begin}, {end}
    for other in others:
        before = (other.peak_s, other.sight.station) < (run.peak_s, run.sight.station)
        for cut in _cuts(*((other, run) if before else (run, other)), gap):
            (starts if before else ends).add(cut + gap if before else cut)
    least = max(int(planning.least_contact_s), acquire + close + 1)
    found = {
        (low, high)
        for low in starts
        for high in ends
        if begin <= low and high <= end and high - low >= least and rise - acquire <= low <= fall - acquire
    }
    return tuple(Option(start_s=low, end_s=high) for low, high in sorted(found))


def slices(run: Run) -> tuple[Slice, ...]:
    """Return a run cut at whole minutes of the week and at its peak, with mean goodputs."""
    edges = {run.start_s, run.peak_s, run.end_s}
    edges |= set(range(-(-run.start_s // _GRID_S) * _GRID_S, run.end_s, _GRID_S))
    ordered = sorted(edges)
    found = []
    for low, high in itertools.pairwise(ordered):
        mean = run.byte(low, high) / (high - low)
        side = "left" if high <= run.peak_s else "right"
        minute = low // _GRID_S * _GRID_S
        found.append(Slice(start_s=low, end_s=high, side=side, goodput_byte_s=mean, minute_s=minute))  # type: ignore[arg-type]
    return tuple(found)


def _cuts(first: Run, second: Run, gap: int) -> list[int]:
    """Return the seconds at which the first of two overlapping runs may hand over to the second.

    The moment at which the later goodput overtakes the earlier, and the two at which one
    of them is kept whole; none where a hand-over covers hardly more than one alone.
    """
    low, high = max(first.start_s, second.start_s), min(first.end_s, second.end_s)
    covered = max(first.end_s, second.end_s) - min(first.start_s, second.start_s) - gap
    longest = max(first.end_s - first.start_s, second.end_s - second.start_s)
    if high <= low or covered - longest < _LEAST_GAIN_S:
        return []
    seconds = np.arange(low, high)
    ahead = (
        second.goodput_byte_s[seconds - second.track.start_s]
        > first.goodput_byte_s[seconds - first.track.start_s]
    )
    carried = np.concatenate(([0.0], np.cumsum(np.where(ahead, 1.0, -1.0))))
    overtakes = low + int((carried[-1] - 2.0 * carried).argmax()) if len(seconds) else low
    return sorted({overtakes, second.start_s - gap, first.end_s})
