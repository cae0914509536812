"""Nothing missed and nothing extra: every second of the week looked at one by one."""

import numpy as np
import pytest

from passplan.domain.elements import ElementSet
from passplan.domain.passes import Pass, Sky
from passplan.domain.station import Station
from passplan.sky import survey
from tests.sky.orbits import FLAT, JAGGED, ORBITS, WEEK, excess_deg, horizontal_deg, itrs_km, line_deg

_SLACK_S = 0.005  # UT1 of two tables: up to 6 ms apart, which is 0.5 ms of most crossings


def faults(one: ElementSet, stations: list[Station], sky: Sky, end_s: float) -> list[str]:
    """Return the seconds at which search and brute force disagree, and passes that are not there."""
    end_s = min(end_s, sky.propagation_end_s.get("A", end_s))
    seconds = np.arange(0.0, np.floor(end_s) + 1.0)
    position_km, errors = itrs_km(one, seconds)
    assert not errors.any(), "the search goes on where SGP4 has given up"
    found: list[str] = []
    for place in stations:
        elevation_deg, azimuth_deg = horizontal_deg(place, position_km)
        above = elevation_deg > line_deg(place, azimuth_deg)
        passes = [one for one in sky.passes if one.station == place.code and one.aos_s <= end_s]
        ours, sure = shadowed(passes, seconds)
        found += [
            f"{place.code} differs at second {second:.0f}" for second in seconds[sure & (ours != above)]
        ]
        middles = np.array([0.5 * (p.aos_s + p.los_s) for p in passes if p.length_s < 2.0])
        below = excess_deg(one, place, middles) < -1e-6
        found += [f"{place.code} invents a pass at {middle}" for middle in middles[below]]
    return found


def shadowed(passes: list[Pass], seconds: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Return whether each second lies in a pass, and whether it is far enough from every end to be sure."""
    inside, sure = np.zeros(len(seconds), dtype=bool), np.ones(len(seconds), dtype=bool)
    for one in passes:
        inside[int(np.ceil(one.aos_s)) : int(np.floor(one.los_s)) + 1] = True
        for edge in (one.aos_s, one.los_s):
            near = int(np.rint(edge))
            if abs(edge - near) < _SLACK_S and near < len(sure):
                sure[near] = False
    return inside, sure


def share(days: float) -> float:
    return days * 86400.0


@pytest.mark.parametrize("orbit", ORBITS)
def test_two_days_second_by_second(orbit: str) -> None:
    """Two days of each orbit over four flat and four jagged horizons."""
    stations = [*FLAT[:8:2], *JAGGED[1:8:2]]
    sky = survey({"A": ORBITS[orbit]}, stations, WEEK)
    assert faults(ORBITS[orbit], stations, sky, share(2.0)) == []


@pytest.mark.slow
@pytest.mark.parametrize("orbit", ORBITS)
def test_the_whole_week_second_by_second(orbit: str) -> None:
    """All orbits, ten flat and ten jagged horizons, seven days."""
    sky = survey({"A": ORBITS[orbit]}, [*FLAT, *JAGGED], WEEK)
    assert faults(ORBITS[orbit], [*FLAT, *JAGGED], sky, share(7.0)) == []
