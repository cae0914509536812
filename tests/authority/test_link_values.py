"""The link held to recommendations, textbooks and a published budget."""

import math
from dataclasses import replace

import numpy as np
import pytest

from passplan.budgets.link import (
    bit_error_rate,
    cn0_dbhz,
    doppler_shift_hz,
    downlink_ebn0_db,
    eirp_dbw,
    free_space_loss_db,
    ideal_ebn0_db,
    system_noise_k,
    uplink_margin_db,
    uplink_received_dbm,
)
from passplan.domain.constants import SPEED_OF_LIGHT_KM_S
from passplan.domain.satellite import Modulation, Radio
from passplan.domain.station import GroundRadio
from tests.flyby import flyby, satellite_with, slant_range_km, station_with, still

HUNDREDTH_DB = 0.01
PRINTED_TENTH_DB = 0.1  # the published budget prints one decimal


@pytest.mark.parametrize(
    ("frequency_hz", "range_km", "loss_db"),
    [(437e6, 1000.0, 145.26), (437e6, 2000.0, 151.28), (437e6, 2420.28, 152.94), (437.5e6, 400.0, 137.31)],
)
def test_free_space_loss_is_that_of_itu_r_p525(frequency_hz: float, range_km: float, loss_db: float) -> None:
    # ITU-R P.525-5 (2024): 32.4 + 20 log f[MHz] + 20 log d[km]; here with its constant to four decimals
    assert free_space_loss_db(frequency_hz, range_km) == pytest.approx(loss_db, abs=HUNDREDTH_DB)
    rounded = 32.4 + 20 * math.log10(frequency_hz / 1e6) + 20 * math.log10(range_km)
    assert free_space_loss_db(frequency_hz, range_km) == pytest.approx(rounded, abs=0.05)


def test_free_space_loss_is_the_spreading_of_a_sphere() -> None:
    # (4 pi d / wavelength)^2, from the definition (Friis 1946)
    wavelength_km = SPEED_OF_LIGHT_KM_S / 145.9e6
    sphere_db = 20 * math.log10(4 * math.pi * 1234.5 / wavelength_km)
    assert free_space_loss_db(145.9e6, 1234.5) == pytest.approx(sphere_db, abs=1e-4)


@pytest.mark.parametrize(("elevation_deg", "loss_db"), [(0.0, 153.90), (5.0, 152.13), (10.0, 150.44)])
def test_path_from_550_km(elevation_deg: float, loss_db: float) -> None:
    # worked by hand from the slant range on a sphere of 6378.137 km
    distance_km = slant_range_km(550.0, elevation_deg)
    assert free_space_loss_db(437e6, distance_km) == pytest.approx(loss_db, abs=HUNDREDTH_DB)


# A worked amateur budget, 826 km at 10 deg (docslib.org/doc/1948138). Its frequency is not
# printed; 437 MHz gives its path loss. Its printed G/T on board of -22.0 dB/K does not follow
# from its own lines: 3.0 - 1.2 - 10 log 183 = -20.8 does, and gives the S/N0 it prints.
ASIDE_DB = 0.5 + 0.2 + 1.1 + 0.4  # pointing, polarisation, atmosphere, ionosphere
ON_BOARD_POINTING_DB = 6.0
AMATEUR_RANGE_KM = 2420.28


def test_amateur_budget_distance_and_path() -> None:
    assert slant_range_km(826.0, 10.0) == pytest.approx(AMATEUR_RANGE_KM, abs=0.05)
    assert free_space_loss_db(437e6, AMATEUR_RANGE_KM) == pytest.approx(152.9, abs=PRINTED_TENTH_DB)


def test_amateur_budget_uplink_chain() -> None:
    eirp = eirp_dbw(10.0, 10.7, 22.0)
    assert eirp == pytest.approx(21.3, abs=PRINTED_TENTH_DB)
    lost_db = ASIDE_DB + free_space_loss_db(437e6, AMATEUR_RANGE_KM)
    assert eirp - lost_db == pytest.approx(-133.9, abs=PRINTED_TENTH_DB)
    merit_db_k = 3.0 - 1.2 - 10 * math.log10(183.0)
    density = cn0_dbhz(eirp, lost_db + ON_BOARD_POINTING_DB, merit_db_k)
    assert density == pytest.approx(67.9, abs=PRINTED_TENTH_DB)
    ebn0 = density - 10 * math.log10(1200.0)
    assert ebn0 == pytest.approx(37.1, abs=PRINTED_TENTH_DB)
    assert ebn0 - 22.0 == pytest.approx(15.1, abs=PRINTED_TENTH_DB)  # threshold of AFSK on FM at 1e-4


def test_amateur_budget_uplink_with_the_whole_nouns() -> None:
    """The budget's second method: -138.1 dBW at the receiver, 13.5 dB over the required -151.6 dBW."""
    satellite = satellite_with(
        Radio(
            down_hz=437e6,
            up_hz=437e6,
            transmit_power_w=0.8,
            line_loss_db=1.2,
            antenna_gain_dbi=3.0,
            receive_sensitivity_dbm=-166.0 + 14.4 + 30.0,
        )
    )
    station = station_with(
        GroundRadio(
            transmit_power_w=10.0,
            transmit_line_loss_db=10.7,
            antenna_gain_dbi=22.0,
            pointing_loss_db=0.5,
            atmosphere_loss_db=1.1 + 0.4 + 0.2 + ON_BOARD_POINTING_DB,
        )
    )
    received = uplink_received_dbm(satellite, station, still(AMATEUR_RANGE_KM))
    assert received - 30.0 == pytest.approx([-138.1], abs=PRINTED_TENTH_DB)
    assert uplink_margin_db(satellite, station, still(AMATEUR_RANGE_KM)) == pytest.approx(
        [13.5], abs=PRINTED_TENTH_DB
    )


def test_amateur_budget_downlink() -> None:
    """0.8 W, 2.2 dB, 3.0 dBi: -0.2 dBW; 6.0 + 0.2 + 152.9 + 1.1 + 0.8 dB later -161.2 dBW reach the ground.

    The ground end is ours: 15 dBi, no line and 290 K make G/T -9.6 dB/K, so 57.8 dBHz.
    """
    assert eirp_dbw(0.8, 2.2, 3.0) == pytest.approx(-0.2, abs=PRINTED_TENTH_DB)
    radio = Radio(
        down_hz=437e6,
        up_hz=437e6,
        bit_rate_bit_s=1200.0,
        transmit_power_w=0.8,
        line_loss_db=2.2,
        antenna_gain_dbi=3.0,
    )
    ground = GroundRadio(
        antenna_gain_dbi=15.0,
        pointing_loss_db=ON_BOARD_POINTING_DB,
        atmosphere_loss_db=0.2 + 1.1 + 0.8,
        receive_line_loss_db=0.0,
        noise_figure_db=0.0,
        antenna_noise_k=290.0,
    )
    ebn0 = downlink_ebn0_db(satellite_with(radio), station_with(ground), still(AMATEUR_RANGE_KM))
    arriving_dbw = -0.2 - 6.0 - 0.2 - 152.9 - 1.1 - 0.8
    by_hand = arriving_dbw + 15.0 - 10 * math.log10(290.0) + 228.6 - 10 * math.log10(1200.0)
    assert ebn0 == pytest.approx([by_hand], abs=PRINTED_TENTH_DB)


@pytest.mark.parametrize(
    ("modulation", "needed_db"),
    [
        # (1e-4, 1e-5, 1e-6): closed forms of Proakis, Digital Communications; figures worked apart
        ("fsk-noncoherent", (12.31, 13.35, 14.19)),
        ("fsk-coherent", (11.41, 12.60, 13.54)),
        ("dpsk", (9.30, 10.34, 11.18)),
        ("bpsk", (8.40, 9.59, 10.53)),
    ],
)
def test_closed_form_error_rates(modulation: Modulation, needed_db: tuple[float, float, float]) -> None:
    for error_rate, needed in zip((1e-4, 1e-5, 1e-6), needed_db, strict=True):
        assert ideal_ebn0_db(modulation, error_rate) == pytest.approx(needed, abs=HUNDREDTH_DB)
        assert bit_error_rate(modulation, needed) == pytest.approx(error_rate, rel=0.03)


def test_gmsk_costs_its_alpha_over_bpsk() -> None:
    # Q(sqrt(2 * 0.68 x)): Murota and Hirade 1981 for BT 0.25, from memory; 11.26 dB worked apart
    assert ideal_ebn0_db("gmsk") == pytest.approx(11.26, abs=HUNDREDTH_DB)
    assert ideal_ebn0_db("gmsk") - ideal_ebn0_db("bpsk") == pytest.approx(-10 * math.log10(0.68), abs=1e-9)


def test_noise_of_a_cascade() -> None:
    """Line 0.5 dB, preamplifier 0.8 dB and 20 dB gain, then 3 dB of cable into a 6 dB receiver: 244.0 K."""
    behind = 10 ** ((3.0 + 6.0) / 10)  # loss and noise figure of a passive line and its receiver multiply
    factor = 10 ** (0.8 / 10) + (behind - 1) / 10 ** (20.0 / 10)  # Friis 1944
    radio = GroundRadio(
        antenna_noise_k=150.0, receive_line_loss_db=0.5, noise_figure_db=10 * math.log10(factor)
    )
    assert system_noise_k(station_with(radio)) == pytest.approx(244.0, abs=0.1)


def test_noise_without_line_or_noise_is_the_antennas() -> None:
    radio = GroundRadio(antenna_noise_k=77.0, receive_line_loss_db=0.0, noise_figure_db=0.0)
    assert system_noise_k(station_with(radio)) == pytest.approx(77.0)


def test_a_whole_downlink_worked_by_hand() -> None:
    """1 W, 1 dB, 0 dBi; 4.5 dB lost; 13 dBi, 1 dB, 244 K; 550 km at 10 deg: 60.79 dBHz, 20.97 dB."""
    satellite = satellite_with(Radio(down_hz=437e6, up_hz=437e6, transmit_power_w=1.0, line_loss_db=1.0))
    line = 10**0.1
    radio = GroundRadio(
        antenna_gain_dbi=13.0,
        pointing_loss_db=3.0,
        atmosphere_loss_db=1.5,
        receive_line_loss_db=1.0,
        noise_figure_db=0.0,
        antenna_noise_k=(244.0 - 290.0 * (1 - 1 / line)) * line,
    )
    track = still(slant_range_km(550.0, 10.0))
    ebn0 = downlink_ebn0_db(satellite, station_with(radio), track)
    assert ebn0 == pytest.approx([20.97], abs=0.02)
    assert ebn0 + 10 * math.log10(9600.0) == pytest.approx([60.79], abs=0.02)
    # one circular against one linear antenna loses half the power (common practice)
    across = station_with(replace(radio, polarisation="linear"))
    assert downlink_ebn0_db(satellite, across, track) == pytest.approx([17.97], abs=0.02)


def test_half_a_watt_is_27_dbm() -> None:
    """A trap of units: a tutorial prints 27 dBW for 500 mW, which is -3 dBW or 27 dBm."""
    assert eirp_dbw(0.5, 0.0, 0.0) == pytest.approx(-3.0, abs=0.02)
    satellite = satellite_with(Radio(down_hz=437e6, up_hz=437e6, transmit_power_w=1.0, line_loss_db=0.0))
    station = station_with(
        GroundRadio(
            transmit_power_w=0.5,
            transmit_line_loss_db=0.0,
            antenna_gain_dbi=0.0,
            pointing_loss_db=0.0,
            atmosphere_loss_db=0.0,
        )
    )
    received = uplink_received_dbm(satellite, station, still(1000.0))
    assert received + free_space_loss_db(437e6, 1000.0) == pytest.approx([27.0], abs=0.02)


@pytest.mark.parametrize(
    ("height_km", "peak_khz", "overhead_hz_s"),
    [
        # (0, 5, 10 deg) and the steepest change, worked apart from the geometry of circular orbits
        (400.0, (10.52, 10.48, 10.36), 201.7),
        (500.0, (10.29, 10.25, 10.13), 156.7),
        (550.0, (10.18, 10.14, 10.02), 140.4),
        (600.0, (10.07, 10.03, 9.92), 126.8),
        (700.0, (9.86, 9.82, 9.71), 105.7),
        (800.0, (9.65, 9.62, 9.51), 89.9),
    ],
)
def test_doppler_of_overhead_passes(
    height_km: float, peak_khz: tuple[float, float, float], overhead_hz_s: float
) -> None:
    for from_deg, peak in zip((0.0, 5.0, 10.0), peak_khz, strict=True):
        track = flyby(height_km, from_deg=from_deg)
        shift_hz = doppler_shift_hz(437e6, track.range_rate_km_s)
        assert shift_hz[0] == pytest.approx(1000 * peak, abs=10.0)
        assert shift_hz[-1] == pytest.approx(-1000 * peak, abs=10.0)
        steepest = float(np.max(-np.diff(shift_hz)))
        assert steepest == pytest.approx(overhead_hz_s, abs=0.1)


def test_doppler_worked_by_an_amateur() -> None:
    """7.290 km/s at the horizon and 157 m/s2 overhead, from 15.716 rev/day.

    J. R. Miller on a public amateur mailing list, 2004-12-22.
    """
    track = flyby(6735.0 - 6378.137)
    assert abs(track.range_rate_km_s).max() == pytest.approx(7.290, rel=0.005)
    shift_hz = doppler_shift_hz(437e6, track.range_rate_km_s)
    assert shift_hz.max() == pytest.approx(10_630.0, rel=0.005)
    assert np.max(-np.diff(shift_hz)) == pytest.approx(229.0, rel=0.005)


def test_doppler_sign_both_ways() -> None:
    """Approaching, it is heard high and has to be sent low; the exact law of a moving source agrees."""
    frequency_hz, speed_km_s = 437e6, -7.0
    shift_hz = float(doppler_shift_hz(frequency_hz, speed_km_s))
    assert shift_hz == pytest.approx(10_203.7, abs=0.1)
    # exact: special relativity, motion along the line of sight (Einstein 1905)
    beta = speed_km_s / SPEED_OF_LIGHT_KM_S
    exact = math.sqrt((1 - beta) / (1 + beta))
    assert frequency_hz + shift_hz == pytest.approx(frequency_hz * exact, abs=0.3)
    sent_hz = frequency_hz - shift_hz
    assert sent_hz * exact == pytest.approx(frequency_hz, abs=0.3)
