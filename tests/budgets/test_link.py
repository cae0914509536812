"""What the link does with the nouns, and the laws it has to keep."""

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.budgets.framing import downlink_rate_byte_s
from passplan.budgets.link import (
    REFERENCE_ERROR_RATE,
    bit_error_rate,
    doppler_shift_hz,
    downlink_ebn0_db,
    downlink_margin_db,
    free_space_loss_db,
    goodput_byte_s,
    ideal_ebn0_db,
    losses_db,
    polarisation_loss_db,
    received_error_rate,
    required_ebn0_db,
    satellite_required_ebn0_db,
    station_gain_dbi,
    uplink_ebn0_db,
    uplink_margin_db,
)
from passplan.domain.satellite import Beacon, Framing, Modulation, Polarisation, Radio
from passplan.domain.station import FixedAntenna, GroundRadio
from tests.flyby import flyby, satellite_with, station_with, still

RADIO = Radio(down_hz=437e6, up_hz=145.9e6, transmit_power_w=1.0)
MODULATIONS: tuple[Modulation, ...] = ("fsk-noncoherent", "fsk-coherent", "dpsk", "bpsk", "gmsk")
modulations = st.sampled_from(MODULATIONS)
ranges_km = st.floats(200.0, 40_000.0)


@given(near=ranges_km, far=ranges_km, frequency_hz=st.floats(1e6, 1e11))
def test_more_range_never_lowers_the_loss(near: float, far: float, frequency_hz: float) -> None:
    near, far = sorted((near, far))
    assert free_space_loss_db(frequency_hz, near) <= free_space_loss_db(frequency_hz, far)


@given(modulation=modulations, low_db=st.floats(-30.0, 30.0), high_db=st.floats(-30.0, 30.0))
def test_error_rate_falls_with_ebn0_and_never_exceeds_a_coin(
    modulation: Modulation, low_db: float, high_db: float
) -> None:
    low_db, high_db = sorted((low_db, high_db))
    worse, better = bit_error_rate(modulation, [low_db, high_db])
    assert 0.0 <= better <= worse <= 0.5


@given(modulation=modulations, error_rate=st.floats(1e-9, 0.4))
def test_ideal_ebn0_is_the_inverse_of_the_curve(modulation: Modulation, error_rate: float) -> None:
    assert bit_error_rate(modulation, ideal_ebn0_db(modulation, error_rate)) == pytest.approx(
        error_rate, rel=1e-6
    )


@given(
    modulation=modulations,
    measured_db=st.none() | st.floats(0.0, 30.0),
    range_km=ranges_km,
    margin_db=st.floats(0.0, 10.0),
    scrambled=st.booleans(),
    beacon=st.none() | st.just(Beacon(interval_s=30.0, length_s=3.0)),
)
def test_goodput_is_never_above_the_raw_rate(
    *,
    modulation: Modulation,
    measured_db: float | None,
    range_km: float,
    margin_db: float,
    scrambled: bool,
    beacon: Beacon | None,
) -> None:
    satellite = satellite_with(
        replace(
            RADIO, modulation=modulation, required_ebn0_db=measured_db, scrambled=scrambled, beacon=beacon
        )
    )
    station = station_with(GroundRadio(margin_db=margin_db))
    track = still(range_km)
    goodput = float(goodput_byte_s(satellite, station, track)[0])
    assert 0.0 <= goodput <= RADIO.bit_rate_bit_s / 8.0
    if downlink_margin_db(satellite, station, track)[0] < margin_db:
        assert goodput == 0.0
    else:
        assert goodput > 0.0


@pytest.mark.parametrize(
    ("ours", "theirs", "loss_db"),
    [
        ("right-circular", "right-circular", 0.0),
        ("left-circular", "left-circular", 0.0),
        ("right-circular", "left-circular", 20.0),
        ("right-circular", "linear", 3.0),
        ("linear", "left-circular", 3.0),
        ("linear", "linear", 3.0),
    ],
)
def test_polarisation(ours: Polarisation, theirs: Polarisation, loss_db: float) -> None:
    assert polarisation_loss_db(ours, theirs) == polarisation_loss_db(theirs, ours) == loss_db


def test_required_ebn0_is_measured_here_or_there_or_reckoned() -> None:
    plain, here = station_with(), station_with(GroundRadio(required_ebn0_db=17.5))
    reckoned = satellite_with(replace(RADIO, modulation="bpsk", implementation_loss_db=1.5))
    told = satellite_with(replace(RADIO, required_ebn0_db=16.0))
    assert required_ebn0_db(reckoned, plain) == pytest.approx(9.588 + 1.5, abs=1e-3)
    assert required_ebn0_db(told, plain) == 16.0
    assert required_ebn0_db(told, here) == required_ebn0_db(reckoned, here) == 17.5


@pytest.mark.parametrize("modulation", MODULATIONS)
def test_the_error_curve_passes_through_its_reference_at_the_required_value(modulation: Modulation) -> None:
    satellite = satellite_with(replace(RADIO, modulation=modulation, required_ebn0_db=18.0))
    station = station_with()
    here_db = float(downlink_ebn0_db(satellite, station, still(1000.0))[0])
    at_required = still(1000.0 * 10 ** ((here_db - 18.0) / 20.0))
    assert downlink_margin_db(satellite, station, at_required) == pytest.approx([0.0], abs=1e-9)
    assert received_error_rate(satellite, station, at_required) == pytest.approx(
        [REFERENCE_ERROR_RATE], rel=1e-6
    )


def test_pointing_is_lost_by_rotators_only() -> None:
    satellite, track = satellite_with(RADIO), still(1000.0)
    radio = GroundRadio(pointing_loss_db=0.7)
    turning = station_with(radio)
    fixed = station_with(radio, fixed_antenna=FixedAntenna(gain_table=((0.0, 2.0),)))
    difference = losses_db(satellite, turning, 437e6, track) - losses_db(satellite, fixed, 437e6, track)
    assert difference == pytest.approx([0.7])


def test_gain_of_a_fixed_antenna_is_read_from_its_table() -> None:
    station = station_with(fixed_antenna=FixedAntenna(gain_table=((0.0, -3.0), (30.0, 3.0), (90.0, 6.0))))
    gain = station_gain_dbi(station, [-5.0, 0.0, 15.0, 30.0, 60.0, 90.0])
    assert gain == pytest.approx([-3.0, -3.0, 0.0, 3.0, 4.5, 6.0])
    assert station_gain_dbi(station_with(), [5.0, 50.0]) == pytest.approx([12.0, 12.0])


def test_each_direction_uses_its_own_frequency() -> None:
    satellite, station, track = satellite_with(RADIO), station_with(), still(1000.0)
    swapped = satellite_with(replace(RADIO, down_hz=RADIO.up_hz, up_hz=RADIO.down_hz))
    octave_db = 20 * math.log10(437.0 / 145.9)
    down_db = downlink_ebn0_db(swapped, station, track) - downlink_ebn0_db(satellite, station, track)
    up_db = uplink_margin_db(satellite, station, track) - uplink_margin_db(swapped, station, track)
    assert down_db == pytest.approx([octave_db])
    assert up_db == pytest.approx([octave_db])


def test_uplink_ebn0_meets_the_required_value_at_the_sensitivity() -> None:
    satellite, station, track = satellite_with(RADIO), station_with(), flyby(highest_deg=50.0)
    above_db = uplink_ebn0_db(satellite, station, track) - satellite_required_ebn0_db(satellite)
    np.testing.assert_allclose(above_db, uplink_margin_db(satellite, station, track))


def test_goodput_of_a_pass_begins_where_the_margin_is_met() -> None:
    """A weak downlink closes only above some elevation, and its curve is best on top."""
    satellite = satellite_with(replace(RADIO, transmit_power_w=0.05))
    station, track = station_with(), flyby(highest_deg=70.0)
    goodput = goodput_byte_s(satellite, station, track)
    closes = downlink_margin_db(satellite, station, track) >= station.radio.margin_db
    np.testing.assert_array_equal(goodput > 0.0, closes)
    assert 0 < closes.sum() < len(closes)
    assert goodput.argmax() == pytest.approx(track.elevation_deg.argmax(), abs=1)
    full = downlink_rate_byte_s(satellite, 0.0)
    assert goodput.max() == pytest.approx(float(full), rel=0.01)


def test_the_beacon_takes_its_share() -> None:
    quiet = satellite_with(replace(RADIO, framing=Framing(keying_delay_s=0.5, frames_per_keying=4)))
    talking = satellite_with(replace(quiet.radio, beacon=Beacon(interval_s=60.0, length_s=3.0)))
    assert downlink_rate_byte_s(talking, 0.0) == pytest.approx(0.95 * downlink_rate_byte_s(quiet, 0.0))
    # four frames of 256 octets, (16 + 8 * 274 * 63/62) bits each, behind half a second of carrier
    assert downlink_rate_byte_s(quiet, 0.0) == pytest.approx(1024 / (0.5 + 4 * 2243.3548 / 9600.0), rel=1e-6)


@given(speed_km_s=st.floats(-8.0, 8.0), frequency_hz=st.floats(1e6, 1e11))
def test_doppler_adds_when_it_approaches(speed_km_s: float, frequency_hz: float) -> None:
    shift_hz = float(doppler_shift_hz(frequency_hz, speed_km_s))
    assert shift_hz == pytest.approx(-float(doppler_shift_hz(frequency_hz, -speed_km_s)))
    assert (shift_hz > 0.0) == (speed_km_s < 0.0 and shift_hz != 0.0)
