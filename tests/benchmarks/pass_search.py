"""How fast the pass search is, beside Skyfield's, and how far its events are from Skyfield's.

    python -m tests.benchmarks.pass_search

One thread; every figure is the least CPU time of repeated runs within this process, and
bars are ratios of them. Both sides work from the element sets in memory to event times.
"""

import math
import os
import time
from collections.abc import Callable
from datetime import timedelta
from typing import Any, TypeVar

os.environ["OPENBLAS_NUM_THREADS"] = os.environ["OMP_NUM_THREADS"] = "1"

import numpy as np
import sgp4
import skyfield
from numpy.typing import NDArray
from skyfield.api import EarthSatellite, load, wgs84
from skyfield.timelib import Timescale
from skyfield.toposlib import GeographicPosition

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.domain.station import Rotator, Station
from passplan.sky import passes_of, survey, tracks
from passplan.sky.overhead import Found
from passplan.sky.propagate import grids, satrec, step_s
from passplan.sky.ut1 import ut1_minus_utc_s

Floats = NDArray[np.float64]

T = TypeVar("T")

WEEK = Horizon(week="2026-W50", lookahead_h=0.0)
LEVEL_DEG = 10.0
JAGGED = tuple((float(azimuth), 12.0 + 8.0 * math.sin(7.0 * azimuth)) for azimuth in range(0, 360, 15))


def element_set(number: int, rev_day: float, eccentricity: float, inclination_deg: float) -> ElementSet:
    """Return an invented orbit; `number` spreads node and anomaly."""
    return ElementSet(
        name=f"INVENTED {number}",
        number=None,
        designator="",
        epoch=WEEK.start - timedelta(days=1),
        inclination_deg=inclination_deg,
        node_deg=(47.0 * number) % 360.0,
        eccentricity=eccentricity,
        argument_of_perigee_deg=(29.0 * number) % 360.0,
        mean_anomaly_deg=(113.0 * number) % 360.0,
        mean_motion_rev_day=rev_day,
        bstar_per_earth_radius=1e-4,
    )


def station(number: int, mask: tuple[tuple[float, float], ...] = ()) -> Station:
    """Return an invented place; the sines of the latitudes are evenly spread from 65 S to 70 N."""
    latitude_deg = math.degrees(math.asin(-0.9 + 1.84 * ((0.618 * number) % 1.0)))
    return Station(
        name=f"Place {number}",
        code=f"Q{number:03d}",
        latitude_deg=latitude_deg,
        longitude_deg=(137.5 * number) % 360.0 - 180.0,
        altitude_m=100.0,
        time_zone="UTC",
        mask=mask,
        rotator=Rotator(),
        least_receive_elevation_deg=LEVEL_DEG,
    )


def fleet(count: int) -> dict[str, ElementSet]:
    """Return low orbits between 450 and 800 km, most of them steep."""
    kinds = [
        (15.22, 0.001, 97.4),
        (14.9, 0.002, 97.8),
        (14.6, 0.0005, 86.0),
        (15.3, 0.001, 51.6),
        (14.4, 0.012, 98.5),
    ]
    sets = [element_set(number, *kinds[number % len(kinds)]) for number in range(count)]
    return {one.name: one for one in sets}


def least_cpu_ms(job: Callable[[], T], runs: int) -> tuple[float, T]:
    """Return the least CPU time of `runs` runs in milliseconds, and the last answer."""
    answer, least = job(), math.inf
    for _ in range(runs):
        begin = time.process_time_ns()
        answer = job()
        least = min(least, time.process_time_ns() - begin)
    return least / 1e6, answer


class Yardstick:
    """Skyfield's own search on the same orbits, places and level."""

    def __init__(self, sets: dict[str, ElementSet], stations: list[Station]) -> None:
        """Build Skyfield's objects, which is not timed."""
        self.sets = [sets[name] for name in sorted(sets)]
        self.places: list[GeographicPosition] = [
            wgs84.latlon(one.latitude_deg, one.longitude_deg, one.altitude_m) for one in stations
        ]
        self.use(load.timescale())

    def use(self, scale: Timescale) -> None:
        """Take another time scale."""
        self.scale = scale
        self.satellites = [EarthSatellite.from_satrec(satrec(one), scale) for one in self.sets]

    def time(self, seconds: Any) -> Any:
        """Return Skyfield's time at seconds of the week."""
        start = WEEK.start
        return self.scale.utc(start.year, start.month, start.day, 0, 0, seconds)

    def search(self, pairs: list[tuple[int, int]]) -> list[tuple[Floats, NDArray[np.uint8]]]:
        """Return moments (s of the week) and kinds of Skyfield's events of each pair."""
        begin, end = self.time(0.0), self.time(WEEK.end_s)
        result = []
        for satellite, place in pairs:
            times, kinds = self.satellites[satellite].find_events(self.places[place], begin, end, LEVEL_DEG)
            result.append(((times.tt - begin.tt) * 86400.0, kinds))
        return result

    def elevation_deg(self, pair: tuple[int, int], seconds: Floats) -> Floats:
        """Return Skyfield's elevation, all of its frames included."""
        view = (self.satellites[pair[0]] - self.places[pair[1]]).at(self.time(seconds))
        degrees: Floats = view.altaz()[0].degrees
        return degrees

    def polished(self, pair: tuple[int, int], seconds: Floats, kinds: NDArray[np.uint8]) -> Floats:
        """Return event times improved by Newton's method on Skyfield's own elevation.

        `find_events` itself stops at half a second.
        """
        tops, width = kinds == 1, 0.02
        for _ in range(6):
            low, here, high = (self.elevation_deg(pair, seconds + shift) for shift in (-width, 0.0, width))
            slope, bend = (high - low) / (2.0 * width), (high - 2.0 * here + low) / width**2
            step = np.where(tops, slope, here - LEVEL_DEG) / np.where(tops, bend, slope)
            seconds = seconds - np.clip(step, -1.0, 1.0)
        return seconds


def our_ut1(scale: Timescale) -> Timescale:
    """Return Skyfield's time scale with UT1 from our table, so that geometry alone is compared."""
    ours = Timescale.__new__(Timescale)
    ours.__dict__.update(scale.__dict__)
    shift_s = 69.184  # TT - UTC since 2017
    ours.delta_t_function = lambda tt: shift_s - ut1_minus_utc_s(np.asarray(tt) - shift_s / 86400.0)
    return ours


def farthest_ms(found: list[Found], yardstick: Yardstick, pairs: list[tuple[int, int]]) -> str:
    """Return in words by how much events differ at most, and how many passes only one side has."""
    worst, unmatched, count = [0.0, 0.0, 0.0], 0, 0
    for pair, (rough, kinds) in zip(pairs, yardstick.search(pairs), strict=True):
        theirs = yardstick.polished(pair, rough, kinds)
        ours = found[pair[0]]
        mine = ours.station == pair[1]
        for slot, moments in enumerate((ours.aos_s, ours.tca_s, ours.los_s)):
            own, other = moments[mine], theirs[kinds == slot]
            own = own[(own > 1.0) & (own < WEEK.end_s - 1.0)]
            other = other[(other > 1.0) & (other < WEEK.end_s - 1.0)]
            apart = np.abs(own[:, np.newaxis] - other)
            unmatched += int(np.sum(apart.min(axis=1) > 5.0)) + abs(len(other) - len(own))
            worst[slot] = max(worst[slot], 1e3 * float(apart.min(axis=1).max(initial=0.0)))
            count += len(own)
    aos, tca, los = worst
    return f"AOS {aos:.3f}, TCA {tca:.3f}, LOS {los:.3f} ms; {count} events, {unmatched} only on one side"


def raw_ms(sets: dict[str, ElementSet], step: int | None) -> float:
    """Return the CPU time of SGP4 alone, on our own grid or on one of `step` seconds."""
    grid = grids(WEEK, 0.0)
    jobs = []
    for one in sets.values():
        nodes = grid(step or step_s(one))
        jobs.append((satrec(one), np.full_like(nodes.day, nodes.julian_day), nodes.day))
    return least_cpu_ms(lambda: [record.sgp4_array(whole, part) for record, whole, part in jobs], 15)[0]


def tell(ours: float, theirs: float, bar: float, sets: dict[str, ElementSet]) -> None:
    """Print times and ratios."""
    print(f"  ours {ours:.2f} ms, Skyfield's find_events {theirs:.1f} ms:", end=" ")
    print(f"{theirs / ours:.1f} times faster (bar {bar:g})")
    own, minute = raw_ms(sets, None), raw_ms(sets, 60)
    print(f"  ours / SGP4 alone on our grid {ours / own:.2f}, on one of 60 s {ours / minute:.2f}")


def tell_events(found: list[Found], yardstick: Yardstick, pairs: list[tuple[int, int]]) -> None:
    """Print how far our events are from Skyfield's polished ones."""
    print(f"  farthest from Skyfield's polished events (bar 1): {farthest_ms(found, yardstick, pairs)}")
    yardstick.use(our_ut1(yardstick.scale))
    print(f"  the same with Skyfield told our UT1: {farthest_ms(found, yardstick, pairs)}")


def one_by_eight() -> None:
    """One satellite, eight stations, a week: the job of every planning run."""
    sets, stations = fleet(1), [station(number) for number in range(8)]
    yardstick, pairs = Yardstick(sets, stations), [(0, place) for place in range(8)]
    ours, found = least_cpu_ms(lambda: list(passes_of(sets, stations, WEEK)), 60)
    theirs, events = least_cpu_ms(lambda: yardstick.search(pairs), 5)
    rises = sum(int(np.sum(kinds == 0)) for _, kinds in events)
    print(f"1 x 8, 7 days, {LEVEL_DEG:g} deg: {len(found[0].station)} passes ({rises} risings by Skyfield)")
    tell(ours, theirs, 25.0, sets)
    tell_events(found, yardstick, pairs)
    whole, sky = least_cpu_ms(lambda: survey(sets, stations, WEEK), 15)
    every, _ = least_cpu_ms(lambda: tracks(sets, stations, sky.passes, WEEK), 5)
    masked = [station(number, JAGGED) for number in range(8)]
    jagged, (cut,) = least_cpu_ms(lambda: list(passes_of(sets, masked, WEEK)), 10)
    print(f"  with shadows, as Pass objects {whole:.1f} ms; second-by-second tracks {every:.1f} ms")
    print(f"  masks of {len(JAGGED)} corners everywhere: {len(cut.station)} passes, {jagged:.1f} ms")


def twenty_by_thirty() -> None:
    """Twenty satellites, thirty stations; Skyfield on every thirteenth pair, scaled up."""
    sets, stations = fleet(20), [station(number) for number in range(30)]
    yardstick = Yardstick(sets, stations)
    pairs = [(k // 30, k % 30) for k in range(0, 600, 13)]
    ours, found = least_cpu_ms(lambda: list(passes_of(sets, stations, WEEK)), 10)
    sampled, _ = least_cpu_ms(lambda: yardstick.search(pairs), 2)
    passes = sum(len(one.station) for one in found)
    print(
        f"20 x 30, 7 days, {LEVEL_DEG:g} deg: {passes} passes; Skyfield on {len(pairs)} of 600 pairs, scaled"
    )
    tell(ours, sampled * 600 / len(pairs), 60.0, sets)
    tell_events(found, yardstick, pairs)


if __name__ == "__main__":
    versions = f"skyfield {skyfield.__version__}, sgp4 {sgp4.__version__}, numpy {np.__version__}"
    print(f"{versions}; one thread, least CPU time")
    one_by_eight()
    twenty_by_thirty()
