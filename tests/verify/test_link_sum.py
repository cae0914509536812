"""The second link sum against worked figures."""

import math
from dataclasses import replace

import numpy as np
import pytest

from passplan.domain.satellite import Beacon, Framing, Modulation, Polarisation, Radio
from passplan.domain.station import FixedAntenna, GroundRadio
from passplan.verify.link_sum import (
    bit_error_rate,
    down_ebn0_db,
    down_margin_db,
    full_frame_bits,
    goodput_byte_s,
    needed_ebn0_db,
    noise_temperature_k,
    theory_ebn0_db,
    up_margin_db,
)
from tests.verify.good_week import EAST, SATELLITE, WEST

NEAR = np.array([1000.0])
UP = np.array([45.0])


def slant_km(height_km: float, elevation_deg: float) -> float:
    """Sphere of 6378.137 km; Wertz and Larson, Space Mission Analysis and Design, ch. 5."""
    radius = 6378.137
    up = math.radians(elevation_deg)
    return math.sqrt((radius + height_km) ** 2 - (radius * math.cos(up)) ** 2) - radius * math.sin(up)


def test_a_whole_downlink_worked_by_hand() -> None:
    """C/N0 60.79 dBHz and Eb/N0 20.97 dB, worked with the exact constant of ITU-R P.525.

    1 W, 1 dB line, 0 dBi; 3 dB pointing, 0.5 dB air, 1 dB polarisation; 13 dBi, 1 dB line,
    244 K; 550 km at 10 deg, 437 MHz, 9600 bit/s.
    """
    satellite = replace(
        SATELLITE, radio=Radio(down_hz=437e6, up_hz=437e6, transmit_power_w=1.0, line_loss_db=1.0)
    )
    line = 10.0**0.1
    antenna_k = (244.0 - 290.0 * (1.0 - 1.0 / line)) * line
    ground = GroundRadio(
        antenna_gain_dbi=13.0,
        pointing_loss_db=3.0,
        atmosphere_loss_db=1.5,
        receive_line_loss_db=1.0,
        noise_figure_db=0.0,
        antenna_noise_k=antenna_k,
    )
    station = replace(WEST, radio=ground)
    assert noise_temperature_k(station) == pytest.approx(244.0)
    found_db = down_ebn0_db(satellite, station, np.array([10.0]), np.array([slant_km(550.0, 10.0)]))[0]
    assert found_db == pytest.approx(20.97, abs=0.02)
    assert found_db + 10.0 * math.log10(9600.0) == pytest.approx(60.79, abs=0.02)


@pytest.mark.parametrize(
    ("modulation", "needed_db"),
    [("fsk-noncoherent", 13.35), ("fsk-coherent", 12.60), ("dpsk", 10.34), ("bpsk", 9.59), ("gmsk", 11.26)],
)
def test_needed_ebn0_for_one_bit_in_100_000(modulation: Modulation, needed_db: float) -> None:
    """Closed forms of any text on digital radio; GMSK with 0.68 (Murota and Hirade 1981, from memory)."""
    assert theory_ebn0_db(modulation) == pytest.approx(needed_db, abs=0.01)
    assert bit_error_rate(modulation, np.array([theory_ebn0_db(modulation)]))[0] == pytest.approx(
        1e-5, rel=1e-9
    )


def test_noise_of_line_and_amplifier_by_hand() -> None:
    """150 K ahead of 0.5 dB and an amplifier of 1 dB: 133.69 + 31.54 + 75.09 K."""
    ground = GroundRadio(antenna_noise_k=150.0, receive_line_loss_db=0.5, noise_figure_db=1.0)
    assert noise_temperature_k(replace(WEST, radio=ground)) == pytest.approx(240.31, abs=0.02)


def test_measured_threshold_goes_before_told_and_told_before_theory() -> None:
    told = replace(SATELLITE, radio=replace(SATELLITE.radio, required_ebn0_db=16.0))
    measured = replace(WEST, radio=replace(WEST.radio, required_ebn0_db=18.0))
    assert needed_ebn0_db(told, measured) == 18.0
    assert needed_ebn0_db(told, WEST) == 16.0
    assert needed_ebn0_db(SATELLITE, WEST) == pytest.approx(13.35 + 2.0, abs=0.01)
    over = down_ebn0_db(told, WEST, UP, NEAR) - down_margin_db(told, WEST, UP, NEAR)
    assert over[0] == pytest.approx(16.0 + 3.0)


def test_uplink_worked_by_hand() -> None:
    """50 W are 46.99 dBm; what arrives is held against -112 dBm and 3 dB.

    1.5 dB line, 13 dBi, 0.5 + 0.8 dB losses, 1000 km at 437.1 MHz, satellite 0 dBi and 0.5 dB.
    """
    expected = 46.9897 - 1.5 + 13.0 - 1.3 - (32.4478 + 20 * math.log10(437.1) + 60.0) - 0.5 + 112.0 - 3.0
    assert up_margin_db(SATELLITE, WEST, UP, NEAR)[0] == pytest.approx(expected, abs=1e-3)


@pytest.mark.parametrize(
    ("sent", "caught", "lost_db"),
    [
        ("right-circular", "right-circular", 0.0),
        ("right-circular", "left-circular", 20.0),
        ("linear", "left-circular", 3.0),
        ("right-circular", "linear", 3.0),
        ("linear", "linear", 3.0),
    ],
)
def test_polarisation(sent: Polarisation, caught: Polarisation, lost_db: float) -> None:
    def level(sky: Polarisation, ground: Polarisation) -> float:
        satellite = replace(SATELLITE, radio=replace(SATELLITE.radio, polarisation=sky))
        station = replace(WEST, radio=replace(WEST.radio, polarisation=ground))
        return float(down_ebn0_db(satellite, station, UP, NEAR)[0])

    assert level("left-circular", "left-circular") - level(sent, caught) == pytest.approx(lost_db)


def test_a_fixed_antenna_has_its_table_and_no_pointing_loss() -> None:
    """8 dBi at the horizon, 9 at 45 deg, so 8.5 at 22.5; 0.5 dB of pointing are the rotator's."""
    fixed = replace(EAST, radio=WEST.radio)
    turned = replace(WEST, radio=replace(WEST.radio, antenna_gain_dbi=8.5))
    up = np.array([22.5])
    apart = down_ebn0_db(SATELLITE, fixed, up, NEAR) - down_ebn0_db(SATELLITE, turned, up, NEAR)
    assert apart[0] == pytest.approx(0.5)
    steady = replace(fixed, fixed_antenna=FixedAntenna(gain_table=((0.0, 8.0),)))
    below = down_ebn0_db(SATELLITE, fixed, np.array([0.0]), NEAR) - down_ebn0_db(SATELLITE, steady, up, NEAR)
    assert below[0] == pytest.approx(0.0)


def test_bits_of_a_full_frame() -> None:
    """AX.25 v2.2: 274 octets around 256 of information are 2192 bits, 16 of flags beside them."""
    assert full_frame_bits(Framing(stuffing_fraction=0.0)) == 2208.0
    assert 8 * 256 / full_frame_bits(Framing()) == pytest.approx(0.9129, abs=1e-4)
    assert 8 * 128 / full_frame_bits(Framing(information_byte=128)) == pytest.approx(0.8513, abs=1e-4)
    assert full_frame_bits(Framing(digipeaters=2, stuffing_fraction=0.0)) == 2208.0 + 112.0


@pytest.mark.parametrize(("scrambled", "lost"), [(False, 0.0217), (True, 0.0636)])
def test_frames_lost_at_the_needed_ebn0(scrambled: bool, lost: float) -> None:  # noqa: FBT001 - one row a case
    """1 - (1 - 1e-5)^n for a frame of 256 octets; tripled errors at most three times the bits."""
    framing = Framing(keying_delay_s=0.0, stuffing_fraction=0.0)
    radio = replace(SATELLITE.radio, scrambled=scrambled, framing=framing, beacon=None)
    satellite = replace(SATELLITE, radio=radio)
    needed, plenty = goodput_byte_s(satellite, WEST, np.array([-WEST.radio.margin_db, 40.0]))
    assert plenty == pytest.approx(9600.0 / 8.0 * 2048.0 / 2208.0)
    assert 1.0 - needed / plenty == pytest.approx(lost, abs=5e-4)


def test_five_minutes_of_frames_and_what_keying_and_beacon_take() -> None:
    """9600 * 0.9129 * 300 / 8 = 328.7 kB; a beacon on the air a tenth of the time leaves nine tenths."""
    framing = Framing(keying_delay_s=0.0)
    quiet = replace(SATELLITE, radio=replace(SATELLITE.radio, framing=framing, beacon=None))
    assert 300.0 * goodput_byte_s(quiet, WEST, np.array([40.0]))[0] == pytest.approx(328_700.0, rel=1e-3)
    keyed = replace(quiet, radio=replace(quiet.radio, framing=replace(framing, keying_delay_s=0.3)))
    burst_s = 16 * full_frame_bits(framing) / 9600.0
    share = goodput_byte_s(keyed, WEST, np.array([40.0])) / goodput_byte_s(quiet, WEST, np.array([40.0]))
    assert share[0] == pytest.approx(burst_s / (burst_s + 0.3))
    beacon = replace(quiet, radio=replace(quiet.radio, beacon=Beacon(interval_s=10.0, length_s=1.0)))
    share = goodput_byte_s(beacon, WEST, np.array([40.0])) / goodput_byte_s(quiet, WEST, np.array([40.0]))
    assert share[0] == pytest.approx(0.9)
