"""Array and battery sized by the textbook come out balanced in the ledger."""

import numpy as np
import pytest

from passplan.budgets.energy import idle_balance_w, idle_ledger, stored_power_w
from passplan.domain.constants import HOUR_S
from passplan.domain.satellite import AttitudeMode, Battery, Power
from tests.flyby import satellite_with

# The worked small satellite of Wertz and Larson, Space Mission Analysis and Design,
# 3rd ed., tables 11-34 and 11-40 (from memory; both results worked again here).
LOAD_W, ECLIPSE_S, DAYLIGHT_S = 110.0, 35.3 * 60.0, 63.5 * 60.0
TO_LOAD_IN_ECLIPSE, TO_LOAD_IN_DAYLIGHT = 0.60, 0.80


def test_an_array_of_239_w_just_holds_the_balance() -> None:
    """Psa = (Pe Te / Xe + Pd Td / Xd) / Td = 239.4 W.

    The book's 0.80 from array to load is here the share of the array that reaches the
    bus, and 0.60 is that with the way through the cells behind it.
    """
    array_w = (
        LOAD_W * ECLIPSE_S / TO_LOAD_IN_ECLIPSE + LOAD_W * DAYLIGHT_S / TO_LOAD_IN_DAYLIGHT
    ) / DAYLIGHT_S
    assert array_w == pytest.approx(239.4, abs=0.1)
    through_cells = TO_LOAD_IN_ECLIPSE / TO_LOAD_IN_DAYLIGHT
    for share in (0.0, 0.3, 1.0):  # however the loss is split between charge and discharge
        satellite = satellite_with(
            power=Power(array_w=array_w, attitude=TO_LOAD_IN_DAYLIGHT, bus_load_w=LOAD_W),
            battery=Battery(
                capacity_wh=1000.0,
                charge_efficiency=through_cells**share,
                discharge_efficiency=through_cells ** (1.0 - share),
            ),
        )
        orbit_s = ECLIPSE_S + DAYLIGHT_S
        assert idle_balance_w(satellite, [(0.0, ECLIPSE_S)], 0.0, orbit_s) == pytest.approx(0.0, abs=1e-9)
        ledger = idle_ledger(satellite, [(0.0, ECLIPSE_S)], 0.0, orbit_s, 0.9 * 1000.0 * HOUR_S)
        assert ledger.end_j == pytest.approx(0.9 * 1000.0 * HOUR_S)


def test_three_batteries_of_119_wh_are_discharged_to_a_fifth() -> None:
    """Cr = Pe Te / (DOD N n) = 119.8 W h: after one eclipse from full, 80 % are left."""
    each_wh = LOAD_W * ECLIPSE_S / HOUR_S / (0.20 * 3 * 0.90)
    assert each_wh == pytest.approx(119.8, abs=0.1)
    satellite = satellite_with(
        power=Power(array_w=239.4, bus_load_w=LOAD_W),
        battery=Battery(capacity_wh=3 * each_wh, discharge_efficiency=0.90),
    )
    full_j = satellite.battery.capacity_j
    ledger = idle_ledger(satellite, [(0.0, ECLIPSE_S)], 0.0, ECLIPSE_S, full_j)
    assert ledger.end_j / full_j == pytest.approx(0.80)


def test_four_cells_in_parallel_hold_37_wh() -> None:
    """Common practice: four 18650 of 2.6 Ah at 3.6 V; at 2.35 W a 36 min eclipse takes a 25th of it."""
    battery = Battery(capacity_wh=4 * 2.6 * 3.6, discharge_efficiency=1.0)
    assert battery.capacity_wh == pytest.approx(37.4, abs=0.1)
    spent_wh = -float(stored_power_w(battery, -2.35)) * 36.0 / 60.0
    assert spent_wh / battery.capacity_wh == pytest.approx(0.0377, abs=1e-4)


@pytest.mark.parametrize(
    ("attitude", "factor"),
    [("sun-pointing", 0.95), ("tumbling", 0.25)],
)
def test_attitude_factors_are_means_over_directions(attitude: AttitudeMode, factor: float) -> None:
    """Cos 18 deg for a spinner (common practice); mean of max(0, cos) for a flat array that tumbles."""
    power = Power(array_w=10.0, attitude=attitude, bus_load_w=1.0)
    assert power.sunlit_w == pytest.approx(10.0 * factor)
    height = (np.arange(20_000) + 0.5) / 10_000 - 1.0  # equal areas of a sphere (Archimedes)
    means = {"sun-pointing": np.cos(np.radians(18.0)), "tumbling": np.mean(np.maximum(0.0, height))}
    assert factor == pytest.approx(means[attitude], abs=2e-3)
