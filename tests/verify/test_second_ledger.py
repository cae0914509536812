"""The ledger against arithmetic done by hand."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.domain.mission import Mission
from passplan.domain.satellite import Battery, Beacon, Power, Satellite, Telemetry
from passplan.verify.second_ledger import (
    Loads,
    SecondLedger,
    ledger_begin_s,
    load_w,
    running_charge,
    second_ledger,
    share_of_seconds,
    stored_w,
)
from tests.verify.good_week import HORIZON, MISSION, SATELLITE

MONDAY = datetime(2026, 12, 7, tzinfo=UTC)
CELLS = Battery(capacity_wh=10.0, charge_efficiency=0.9, discharge_efficiency=0.8)  # 36 kJ
PLAIN = replace(
    SATELLITE,
    battery=CELLS,
    power=Power(array_w=5.0, attitude=1.0, bus_load_w=2.0, heater_eclipse_w=0.5, transmitter_draw_w=4.0),
    radio=replace(SATELLITE.radio, beacon=None),
)


def ledger(
    satellite: Satellite,
    shadows: tuple[tuple[float, float], ...],
    loads: Loads | None = None,
    **battery: object,
) -> SecondLedger:
    satellite = replace(satellite, battery=replace(satellite.battery, **battery))  # type: ignore[arg-type]
    mission: Mission = replace(MISSION, satellites=(satellite,))
    return second_ledger(mission, satellite, HORIZON, shadows, loads or Loads())


def test_shares_of_seconds_by_hand() -> None:
    spans = [(0.5, 2.25), (2.0, 3.0), (4.0, 4.0)]
    assert share_of_seconds(spans, 0, 5).tolist() == pytest.approx([0.5, 1.0, 1.25, 0.0, 0.0])
    assert share_of_seconds([], 0, 3).tolist() == [0.0, 0.0, 0.0]
    assert share_of_seconds([(-3.0, 1.5)], -2, 4).tolist() == [1.0, 1.0, 1.0, 0.5]


def test_a_full_battery_takes_no_more() -> None:
    """8 and 3 in, 5 out, 4 in over a lid of 10: 8, 10, 5, 9."""
    assert running_charge(0.0, np.array([8.0, 3.0, -5.0, 4.0]), 10.0).tolist() == [0.0, 8.0, 10.0, 5.0, 9.0]


@given(st.lists(st.floats(-50.0, 50.0), max_size=60), st.floats(0.0, 100.0))
def test_all_at_once_is_one_after_the_other(gains: list[float], start: float) -> None:
    stands = [start]
    for gain in gains:
        stands.append(min(100.0, stands[-1] + gain))
    assert running_charge(start, np.array(gains), 100.0) == pytest.approx(np.array(stands), abs=1e-9)


def test_cells_lose_on_the_way_in_and_out_and_have_a_limit() -> None:
    """0.9 of what is over goes in, 1/0.8 of what is missing goes out; at most 0.9 * 5 W go in."""
    net_w = np.array([4.0, -4.0, 8.0])
    assert stored_w(CELLS, net_w).tolist() == pytest.approx([3.6, -5.0, 7.2])
    assert stored_w(replace(CELLS, charge_limit_w=5.0), net_w).tolist() == pytest.approx([3.6, -5.0, 4.5])


def test_loads_by_hand() -> None:
    """2 W bus; 0.5 W heater in shadow; 4 W while it speaks; a beacon of 1 s in 10 adds 0.4 W always."""
    assert load_w(PLAIN, dark=False, keyed=False) == 2.0
    assert load_w(PLAIN, dark=True, keyed=True) == 6.5
    speaking = replace(PLAIN, radio=replace(PLAIN.radio, beacon=Beacon(interval_s=10.0, length_s=1.0)))
    assert load_w(speaking, dark=False, keyed=True) == pytest.approx(6.4)


def test_a_shadow_and_a_downlink_by_hand() -> None:
    """From 80 % of 36 kJ: sun +3 W * 0.9, shadow -2.5 W / 0.8, speaking in shadow -6.5 W / 0.8."""
    found = ledger(PLAIN, ((1000.0, 2000.0),), Loads(keyed=((1400.0, 1500.5),)))
    assert found.at(0) == pytest.approx(28_800.0)
    assert found.at(1000) == pytest.approx(28_800.0 + 2700.0)
    assert found.at(1400) == pytest.approx(31_500.0 - 400 * 3.125)
    assert found.at(1501) == pytest.approx(30_250.0 - 100.5 * 8.125 - 0.5 * 3.125)
    assert found.at(2000) == pytest.approx(31_500.0 - 1000 * 3.125 - 100.5 * 5.0)
    assert found.lowest(1400, 2500) == (2000, found.at(2000))
    assert found.at(10**9) == pytest.approx(36_000.0)
    assert found.idle_lowest_j == pytest.approx(31_500.0 - 3125.0)


def test_a_session_by_hand() -> None:
    """A draw of 7 W in the sun for 600 s: -4 W / 0.8 instead of +3 W * 0.9."""
    found = ledger(PLAIN, (), Loads(sessions=(((100.0, 700.0), 7.0),)))
    assert found.at(700) == pytest.approx(28_800.0 + 100 * 2.7 - 600 * 5.0)
    assert found.session_w[99:101].tolist() == [0.0, 7.0]


def test_nothing_is_lost_where_cells_are_perfect_and_never_full() -> None:
    """Charge at the end less charge at the start is what was made less what was used."""
    found = ledger(
        replace(PLAIN, power=replace(PLAIN.power, array_w=3.0)),
        ((50.0, 400_000.25),),
        Loads(keyed=((10.0, 300.0), (5000.0, 5100.0)), sessions=(((200_000.0, 200_600.0), 3.0),)),
        charge_efficiency=1.0,
        discharge_efficiency=1.0,
        capacity_wh=2000.0,
    )
    sun_s, dark_s = 691_200.0 - 399_950.25, 399_950.25
    balance = 3.0 * sun_s - 2.0 * 691_200.0 - 0.5 * dark_s - 4.0 * 390.0 - 3.0 * 600.0
    assert float(found.energy_j[-1]) - found.at(0) == pytest.approx(balance, abs=1.0)


def test_telemetry_is_carried_forward_to_monday() -> None:
    """Half full two hours before Monday, one of them in shadow: 18000 + 3600 * 2.7 - 3600 * 3.125 J."""
    telemetry = Telemetry(at_utc=MONDAY - timedelta(hours=2), charge_fraction=0.5)
    found = ledger(PLAIN, ((-3600.0, 0.0),), telemetry=telemetry)
    assert found.at(0) == pytest.approx(18_000.0 + 9720.0 - 11_250.0)
    assert ledger_begin_s(replace(PLAIN, battery=replace(CELLS, telemetry=telemetry)), HORIZON) == -7200.0


def test_telemetry_after_the_start_is_taken_as_it_is() -> None:
    telemetry = Telemetry(at_utc=MONDAY + timedelta(hours=2), charge_fraction=0.5)
    assert ledger(PLAIN, (), telemetry=telemetry).at(0) == pytest.approx(18_000.0)
    assert ledger_begin_s(PLAIN, HORIZON) == 0.0
