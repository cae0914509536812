"""The charge ledger: by hand, against a second-by-second sum, and as laws."""

from datetime import timedelta

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.budgets.energy import (
    bus_power_w,
    carry_forward,
    idle_balance_w,
    idle_ledger,
    idle_profile,
    load_w,
    lowest,
    stored_power_w,
    within_discharge_limit,
)
from passplan.domain.mission import Planning
from passplan.domain.moments import Horizon, Span
from passplan.domain.satellite import Battery, Beacon, Power, Radio, Satellite
from tests.flyby import charged, satellite_with

HORIZON = Horizon(week="2026-W50")
PLAIN = Battery(capacity_wh=1.0, charge_efficiency=0.9, discharge_efficiency=0.8)  # 3600 J


def satellite_of(sunlit_w: float, bus_w: float, battery: Battery = PLAIN, heater_w: float = 0.0) -> Satellite:
    power = Power(array_w=sunlit_w, attitude=1.0, bus_load_w=bus_w, heater_eclipse_w=heater_w)
    return satellite_with(power=power, battery=battery)


batteries = st.builds(
    Battery,
    capacity_wh=st.floats(0.5, 5.0),
    health_fraction=st.floats(0.5, 1.0),
    charge_efficiency=st.floats(0.5, 1.0),
    discharge_efficiency=st.floats(0.5, 1.0),
    charge_limit_w=st.none() | st.floats(0.1, 3.0),
)
satellites = st.builds(satellite_of, st.floats(0.0, 8.0), st.floats(0.0, 4.0), batteries, st.floats(0.0, 2.0))
edges = st.lists(st.integers(0, 3000), min_size=0, max_size=8, unique=True)


def shadows_of(moments: list[int]) -> list[Span]:
    """Return spans between every second pair of moments."""
    ordered = sorted(moments)
    return [(float(a), float(b)) for a, b in zip(ordered[::2], ordered[1::2], strict=False)]


def test_stored_power_by_hand() -> None:
    battery = Battery(capacity_wh=10.0, charge_efficiency=0.9, discharge_efficiency=0.8, charge_limit_w=2.0)
    # giving 1 W takes 1.25 W out of the cells; 1 W offered stores 0.9 W; at most 2 W are taken
    assert stored_power_w(battery, [-1.0, 0.0, 1.0, 2.0, 5.0]) == pytest.approx([-1.25, 0.0, 0.9, 1.8, 1.8])


def test_cells_with_no_limit_of_their_own() -> None:
    assert stored_power_w(PLAIN, 50.0) == pytest.approx(45.0)


@given(battery=batteries, low_w=st.floats(-20.0, 20.0), high_w=st.floats(-20.0, 20.0))
def test_stored_power_rises_and_is_concave(battery: Battery, low_w: float, high_w: float) -> None:
    low_w, high_w = sorted((low_w, high_w))
    low, middle, high = stored_power_w(battery, [low_w, (low_w + high_w) / 2.0, high_w])
    assert low <= high
    assert middle >= (low + high) / 2.0 - 1e-9


SATELLITE = satellite_with(
    Radio(
        down_hz=437e6,
        up_hz=437e6,
        transmit_power_w=1.5,
        beacon=Beacon(interval_s=60.0, length_s=3.0),
    ),
    Power(array_w=10.0, attitude=0.9, degradation_fraction=0.1, bus_load_w=2.0, heater_eclipse_w=0.5),
    Battery(capacity_wh=40.0, discharge_limit_w=8.0),
)


def test_loads_by_hand() -> None:
    # 1.5 W at 30 % efficiency draw 5 W; the beacon a twentieth of it
    assert load_w(SATELLITE, sunlit=True) == pytest.approx(2.25)
    assert load_w(SATELLITE, sunlit=False) == pytest.approx(2.75)
    assert load_w(SATELLITE, sunlit=True, transmitting=True, session_w=1.0) == pytest.approx(8.25)
    assert bus_power_w(SATELLITE, sunlit=True) == pytest.approx(8.1 - 2.25)
    assert bus_power_w(SATELLITE, sunlit=False, transmitting=True) == pytest.approx(-7.75)


def test_discharge_limit_counts_all_loads_in_shadow() -> None:
    assert within_discharge_limit(SATELLITE)  # 7.75 W of 8 W
    assert within_discharge_limit(SATELLITE, session_w=0.25)
    assert not within_discharge_limit(SATELLITE, session_w=0.26)
    assert within_discharge_limit(satellite_of(1.0, 9000.0))  # no limit told


def test_profile_touches_and_covers() -> None:
    satellite = satellite_of(6.0, 2.0, heater_w=1.0)
    spans = idle_profile(satellite, [(-50.0, 100.0), (400.0, 700.0), (900.0, 2000.0)], 0.0, 1000.0)
    assert [(s.start_s, s.end_s, s.sunlit, s.net_w) for s in spans] == [
        (0.0, 100.0, False, -3.0),
        (100.0, 400.0, True, 4.0),
        (400.0, 700.0, False, -3.0),
        (700.0, 900.0, True, 4.0),
        (900.0, 1000.0, False, -3.0),
    ]
    assert {(s.generation_w, s.idle_load_w) for s in spans} == {(0.0, 3.0), (6.0, 2.0)}


def test_no_shadow_is_one_span() -> None:
    (span,) = idle_profile(satellite_of(6.0, 2.0), [], 0.0, 1000.0)
    assert (span.start_s, span.end_s, span.sunlit) == (0.0, 1000.0, True)


def test_ledger_by_hand() -> None:
    """Shadow takes 2.5 W, sun gives 3.6 W; full 3600 J after 138.9 s of sun, then the shunt burns it."""
    satellite = satellite_of(6.0, 2.0)
    ledger = idle_ledger(satellite, [(0.0, 200.0), (600.0, 800.0)], 0.0, 800.0, 3600.0)
    full_s = 200.0 + 500.0 / 3.6
    assert ledger.times_s == pytest.approx([0.0, 200.0, full_s, 600.0, 800.0])
    assert ledger.energy_j == pytest.approx([3600.0, 3100.0, 3600.0, 3600.0, 3100.0])
    assert ledger.low_point == (200.0, 3100.0)
    assert ledger.end_j == pytest.approx(3100.0)
    assert ledger.at([0.0, 100.0, 400.0]) == pytest.approx([3600.0, 3350.0, 3600.0])


def test_a_start_over_capacity_is_cut() -> None:
    ledger = idle_ledger(satellite_of(6.0, 2.0), [], 0.0, 10.0, 9999.0)
    np.testing.assert_array_equal(ledger.times_s, [0.0, 10.0])
    np.testing.assert_array_equal(ledger.energy_j, [3600.0, 3600.0])


def test_a_bus_that_empties_the_cells_shows_how_far() -> None:
    assert lowest(satellite_of(0.0, 1.0), [], 0.0, 4000.0, 3600.0) == pytest.approx(3600.0 - 5000.0)


@given(satellite=satellites, moments=edges, fraction=st.floats(0.0, 1.0))
def test_agrees_with_a_sum_over_seconds(satellite: Satellite, moments: list[int], fraction: float) -> None:
    shadows = shadows_of(moments)
    capacity_j = satellite.battery.capacity_j
    ledger = idle_ledger(satellite, shadows, 0.0, 3000.0, fraction * capacity_j)
    charge_j, seen_j = fraction * capacity_j, []
    for second in range(3000):
        seen_j.append(charge_j)
        dark = any(begin <= second < end for begin, end in shadows)
        offered_w = -satellite.idle_shadow_w if dark else satellite.power.sunlit_w - satellite.idle_sun_w
        charge_j = min(capacity_j, charge_j + float(stored_power_w(satellite.battery, offered_w)))
    seconds = np.arange(0, 3000, 50)
    np.testing.assert_allclose(ledger.at(seconds), np.array(seen_j)[::50], atol=1e-6 * capacity_j)
    assert ledger.end_j == pytest.approx(charge_j, abs=1e-6 * capacity_j)


@given(satellite=satellites, moments=edges, fraction=st.floats(0.0, 1.0))
def test_energy_is_conserved(satellite: Satellite, moments: list[int], fraction: float) -> None:
    """Stored = in - out - shunt, and the shunt burns nothing unless the cells are full."""
    start_j = fraction * satellite.battery.capacity_j
    ledger = idle_ledger(satellite, shadows_of(moments), 0.0, 3000.0, start_j)
    spans = idle_profile(satellite, shadows_of(moments), 0.0, 3000.0)
    rates_w = [float(stored_power_w(satellite.battery, s.net_w)) for s in spans]
    flows_j = [rate * (s.end_s - s.start_s) for rate, s in zip(rates_w, spans, strict=True)]
    into_j, out_j = sum(f for f in flows_j if f > 0.0), -sum(f for f in flows_j if f < 0.0)
    small_j = 1e-9 * satellite.battery.capacity_j
    shunt_j = into_j - out_j - (ledger.end_j - start_j)
    full = (ledger.energy_j[:-1] == ledger.energy_j[1:]) & (
        ledger.energy_j[1:] == satellite.battery.capacity_j
    )
    begins_s = [s.start_s for s in spans]
    offered_w = np.array(rates_w)[np.searchsorted(begins_s, ledger.times_s[:-1], side="right") - 1]
    burned_j = float(np.sum(np.diff(ledger.times_s) * offered_w * full))
    assert shunt_j == pytest.approx(burned_j, abs=1e-6 * satellite.battery.capacity_j)
    assert shunt_j >= -small_j
    assert ledger.energy_j.max() <= satellite.battery.capacity_j
    mean_w = idle_balance_w(satellite, shadows_of(moments), 0.0, 3000.0)
    assert mean_w * 3000.0 == pytest.approx(into_j - out_j)


@given(satellite=satellites, moments=edges, one=st.floats(0.0, 1.0), other=st.floats(0.0, 1.0))
def test_more_at_the_start_is_never_less_later(
    satellite: Satellite, moments: list[int], one: float, other: float
) -> None:
    seconds = np.arange(0, 3001, 10)
    less, more = (
        idle_ledger(satellite, shadows_of(moments), 0.0, 3000.0, part * satellite.battery.capacity_j)
        for part in sorted((one, other))
    )
    assert np.all(less.at(seconds) <= more.at(seconds) + 1e-9 * satellite.battery.capacity_j)


PLANNING = Planning(end_fraction=0.8)


def test_no_telemetry_is_assumed() -> None:
    assert carry_forward(satellite_of(6.0, 2.0), [], HORIZON, PLANNING) == (0.8 * 3600.0, True)


def test_telemetry_from_before_is_carried_to_monday() -> None:
    battery = charged(PLAIN, HORIZON.start - timedelta(seconds=500), 0.5)
    start_j, assumed = carry_forward(satellite_of(6.0, 2.0, battery), [(-200.0, 90.0)], HORIZON, PLANNING)
    # 300 s of sun at 3.6 W, 200 s of shadow at 2.5 W
    assert start_j == pytest.approx(1800.0 + 1080.0 - 500.0)
    assert not assumed


def test_telemetry_from_the_week_is_taken_as_it_is() -> None:
    battery = charged(PLAIN, HORIZON.start + timedelta(hours=1), 0.75)
    satellite = satellite_of(6.0, 2.0, battery)
    assert carry_forward(satellite, [], HORIZON, PLANNING) == (2700.0, False)
