"""The horizon of a station: the larger of mask and least elevation, the same for every reader of it."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.budgets.usable import horizon_deg as usable_deg
from passplan.domain.station import Rotator, Station
from passplan.sky.horizon_lines import horizon_lines
from passplan.verify.skyfield_view import horizon_deg as second_reading_deg

ELEVATION = st.integers(-5, 90).map(float)
MASK = st.dictionaries(st.integers(0, 359).map(float), ELEVATION, max_size=9).map(
    lambda corners: tuple(sorted(corners.items()))
)


def station(mask: tuple[tuple[float, float], ...], least_deg: float) -> Station:
    return Station(
        name="Thistle Bank",
        code="THB",
        latitude_deg=50.0,
        longitude_deg=0.0,
        time_zone="UTC",
        mask=mask,
        least_receive_elevation_deg=least_deg,
        rotator=Rotator(),
    )


@pytest.mark.parametrize(
    ("mask", "least_deg", "flat_deg"),
    [
        ((), 10.0, 10.0),
        ((), 0.0, 0.0),
        ((), -5.0, 0.0),  # no mask is a flat one at 0 deg
        (((90.0, -2.0),), -5.0, -2.0),
        (((0.0, -4.0), (180.0, -4.0)), -3.0, -3.0),
    ],
)
def test_a_flat_horizon(mask: tuple[tuple[float, float], ...], least_deg: float, flat_deg: float) -> None:
    place, turn = station(mask, least_deg), np.arange(0.0, 360.0, 7.0)
    assert place.horizon == ((0.0, flat_deg),)
    assert set(usable_deg(place, turn)) == set(second_reading_deg(place, turn)) == {flat_deg}


@given(mask=MASK, least_deg=ELEVATION)
def test_all_readers_see_the_larger_of_mask_and_least_elevation(
    mask: tuple[tuple[float, float], ...], least_deg: float
) -> None:
    place, turn = station(mask, least_deg), np.arange(0.0, 360.0, 0.5)
    azimuths, elevations = np.array(mask or ((0.0, 0.0),)).T
    wanted = np.maximum(least_deg, np.interp(turn, azimuths, elevations, period=360.0))
    assert usable_deg(place, turn) == pytest.approx(wanted, abs=1e-9)
    assert second_reading_deg(place, turn) == pytest.approx(wanted, abs=1e-9)
    assert horizon_lines([place]).lowest_deg[0] <= wanted.min() + 1e-9
