"""What must hold of any orbit, place and mask."""

from dataclasses import replace
from itertools import pairwise

import numpy as np
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon, Span
from passplan.domain.passes import Pass, Sky
from passplan.domain.station import Station
from passplan.sky import survey
from passplan.sky.frames import earth_rotation, turned
from passplan.sky.propagate import satrec
from tests.sky.orbits import Floats, Mask, between, element_set, horizontal_deg, line_deg, station

SHORT = Horizon(week="2026-W50", lookahead_h=0.0)
LAWS = settings(max_examples=25, deadline=None, suppress_health_check=[HealthCheck.too_slow])

heights = st.one_of(
    st.tuples(st.floats(300.0, 2000.0), st.floats(0.0, 1500.0)),
    st.tuples(st.floats(300.0, 1000.0), st.floats(20000.0, 40000.0)),
    st.tuples(st.floats(10000.0, 36000.0), st.floats(0.0, 500.0)),
)
angles = st.floats(0.0, 360.0)


@st.composite
def orbits(draw: st.DrawFn) -> ElementSet:
    low_km, more_km = draw(heights)
    return element_set(
        draw(st.floats(0.0, 179.9)),  # at 180 deg SGP4 itself is singular
        *between(low_km, low_km + more_km),
        perigee_deg=draw(angles),
        anomaly_deg=draw(angles),
        node_deg=draw(angles),
        bstar=0.0,
    )


@st.composite
def masks(draw: st.DrawFn) -> Mask:
    azimuths = draw(st.lists(st.integers(0, 719), min_size=0, max_size=24, unique=True))
    elevation = st.floats(-5.0, draw(st.sampled_from([5.0, 30.0, 80.0])))
    return tuple((azimuth / 2.0, draw(elevation)) for azimuth in sorted(azimuths))


@st.composite
def stations(draw: st.DrawFn) -> Station:
    latitude_deg = draw(st.one_of(st.floats(-90.0, 90.0), st.sampled_from([-90.0, 0.0, 90.0])))
    longitude_deg = draw(st.one_of(st.floats(-180.0, 180.0), st.sampled_from([-180.0, 0.0, 180.0])))
    mask = draw(masks())
    least_deg = draw(st.sampled_from([-5.0, 0.0, 10.0, 25.0] if mask else [0.0, 10.0, 25.0]))
    return station(latitude_deg, longitude_deg, draw(st.floats(-400.0, 5000.0)), least_deg, mask=mask)


def seen(one: ElementSet, place: Station) -> list[Pass]:
    return list(survey({"A": one}, [place], SHORT).passes)


def excess_deg(one: ElementSet, place: Station, seconds: Floats) -> Floats:
    """Return elevation less horizon line by SGP4 itself, on the same Earth."""
    day, fraction = SHORT.julian(0.0)
    _, position, _ = satrec(one).sgp4_array(np.full(seconds.shape, day), fraction + seconds / 86400.0)
    fixed = turned(position.T, earth_rotation(SHORT, seconds))
    elevation_deg, azimuth_deg = horizontal_deg(place, fixed)
    low = line_deg(place, azimuth_deg)
    return elevation_deg - low


@LAWS
@given(one=orbits(), place=stations())
def test_above_inside_and_below_outside(one: ElementSet, place: Station) -> None:
    """Just inside both ends the satellite stands above the line, just outside below it."""
    passes = [p for p in seen(one, place) if p.length_s > 0.1]
    rises = np.array([p.aos_s for p in passes if p.clipped not in {"start", "both"}])
    falls = np.array([p.los_s for p in passes if p.clipped not in {"end", "both"}])
    slack_deg = 1e-6
    for edges, inward in ((rises, 0.01), (falls, -0.01)):
        assert (excess_deg(one, place, edges + inward) > -slack_deg).all()
        assert (excess_deg(one, place, edges - inward) < slack_deg).all()


@LAWS
@given(one=orbits(), place=stations())
def test_passes_are_in_order_and_apart(one: ElementSet, place: Station) -> None:
    passes = seen(one, place)
    for p in passes:
        assert 0.0 <= p.aos_s <= p.tca_s <= p.los_s <= SHORT.end_s
        assert (p.aos_s == 0.0) == (p.clipped in {"start", "both"})
        assert (p.los_s == SHORT.end_s) == (p.clipped in {"end", "both"})
    assert all(before.los_s < after.aos_s for before, after in pairwise(passes))


@LAWS
@given(one=orbits(), place=stations())
def test_nowhere_in_a_pass_does_the_satellite_stand_higher_than_at_its_top(
    one: ElementSet, place: Station
) -> None:
    for p in seen(one, place)[:8]:
        day, fraction = SHORT.julian(0.0)
        seconds = np.linspace(p.aos_s, p.los_s, 201)
        _, position, _ = satrec(one).sgp4_array(np.full(seconds.shape, day), fraction + seconds / 86400.0)
        elevation_deg, _ = horizontal_deg(place, turned(position.T, earth_rotation(SHORT, seconds)))
        assert elevation_deg.max() <= p.max_elevation_deg + 1e-6


@LAWS
@given(one=orbits(), place=stations(), higher=st.floats(0.001, 20.0))
def test_raising_the_mask_never_adds_time_in_view(one: ElementSet, place: Station, higher: float) -> None:
    lifted = tuple((azimuth, min(elevation + higher, 90.0)) for azimuth, elevation in place.mask)
    raised = replace(
        place, mask=lifted, least_receive_elevation_deg=place.least_receive_elevation_deg + higher
    )
    before, after = seen(one, place), seen(one, raised)
    for p in after:
        assert any(whole.aos_s - 1e-3 <= p.aos_s and p.los_s <= whole.los_s + 1e-3 for whole in before)
    assert sum(p.length_s for p in after) <= sum(p.length_s for p in before) + 1e-3 * (1 + len(after))


@LAWS
@given(one=orbits(), place=stations())
def test_a_station_alone_or_among_others_sees_the_same(one: ElementSet, place: Station) -> None:
    others = [
        station(12.0, 34.0, code="QBB"),
        station(-70.0, 100.0, mask=((0.0, 3.0), (90.0, 50.0)), code="QCC"),
    ]
    among = survey({"A": one, "B": element_set(97.4, 15.2)}, [others[0], place, others[1]], SHORT)
    own = [p for p in among.passes if p.satellite == "A" and p.station == place.code]
    for alone, together in zip(seen(one, place), own, strict=True):
        assert abs(alone.aos_s - together.aos_s) < 1e-6
        assert abs(alone.los_s - together.los_s) < 1e-6


def lit_and_dark(sky: Sky, p: Pass) -> tuple[list[Span], list[Span]]:
    dark = [(max(a, p.aos_s), min(b, p.los_s)) for a, b in sky.shadows[p.satellite]]
    return list(p.sunlit), [(a, b) for a, b in dark if b > a]


@LAWS
@given(one=orbits())
def test_sunlit_and_dark_parts_make_up_each_pass(one: ElementSet) -> None:
    sky = survey({"A": one}, [station()], SHORT)
    for p in sky.passes:
        lit, dark = lit_and_dark(sky, p)
        pieces = sorted(lit + dark)
        assert pieces[0][0] == p.aos_s
        assert pieces[-1][1] == p.los_s
        assert all(a[1] == b[0] for a, b in pairwise(pieces))
