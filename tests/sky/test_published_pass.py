"""A pass with published rise, culmination and set, and single looks of it."""

import math
from datetime import UTC, datetime

import numpy as np
import pytest
from sgp4.api import Satrec

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.domain.passes import Pass
from passplan.sky import survey
from passplan.sky.looks import looks, state
from passplan.sky.propagate import fly, grids
from passplan.sky.sites import sites
from tests.sky.orbits import element_set, station

# Skyfield's documentation, earth-satellites.rst: elements, place, and events of 23 January 2014 at 30 deg.
LINES = (
    "1 25544U 98067A   14020.93268519  .00009878  00000-0  18200-3 0  5082",
    "2 25544  51.6498 109.4756 0003572  55.9686 274.8005 15.49815350868473",
)
PLACE = station(40.8939, -83.8917, 0.0, 30.0)
WEEK = Horizon(week="2014-W04", lookahead_h=0.0)
PUBLISHED = [("06:25:37", "06:26:58", "06:28:19"), ("12:54:56", "12:56:27", "12:57:58")]


def elements() -> ElementSet:
    record = Satrec.twoline2rv(*LINES)
    return element_set(
        math.degrees(record.inclo),
        record.no_kozai * 1440.0 / (2.0 * math.pi),
        record.ecco,
        perigee_deg=math.degrees(record.argpo),
        anomaly_deg=math.degrees(record.mo),
        node_deg=math.degrees(record.nodeo),
        bstar=record.bstar,
        epoch=datetime(2014, 1, 20, 22, 23, 4, 416, tzinfo=UTC),
    )


def thursday() -> list[Pass]:
    passes = survey({"A": elements()}, [PLACE], WEEK).passes
    return [one for one in passes if WEEK.utc(one.aos_s).day == 23]


@pytest.mark.parametrize(("number", "published"), list(enumerate(PUBLISHED)))
def test_rise_culmination_and_set(number: int, published: tuple[str, str, str]) -> None:
    """To the second printed; our UT1 table begins a year later, which is worth 25 ms here."""
    one = thursday()[number]
    for ours, theirs in zip((one.aos_s, one.tca_s, one.los_s), published, strict=True):
        moment = datetime.fromisoformat(f"2014-01-23T{theirs}+00:00")
        assert ours == pytest.approx(WEEK.seconds(moment), abs=0.55)


def test_there_are_just_the_two_published_passes() -> None:
    assert len(thursday()) == 2


def test_sunlit_as_published() -> None:
    """The same page: in shadow all through the first pass, in sunlight all through the second."""
    first, second = thursday()
    assert first.sunlit == ()
    assert second.sunlit == ((second.aos_s, second.los_s),)


def test_azimuth_elevation_and_range() -> None:
    """Computed with Skyfield 1.55: 2014-01-23 11:18:07 UTC, 16 deg 16' 32.6", 350 deg 15' 20.4", 1168.7 km.

    UT1 before 2015 is out of our table by 0.35 s here: 160 m of the Earth's surface, 0.01 deg.
    """
    flown = fly(elements(), grids(WEEK, 0.0))
    second = WEEK.seconds(datetime(2014, 1, 23, 11, 18, 7, tzinfo=UTC))
    seen = looks(sites([PLACE]), np.array([0]), *state(flown, np.array([second])))
    assert seen.elevation_deg[0] == pytest.approx(16 + 16 / 60 + 32.6 / 3600, abs=0.01)
    assert seen.azimuth_deg[0] == pytest.approx(350 + 15 / 60 + 20.4 / 3600, abs=0.01)
    assert seen.range_km[0] == pytest.approx(1168.7, abs=0.2)
