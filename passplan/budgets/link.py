"""Both directions of the radio link, second by second along a pass."""

import math
from statistics import NormalDist

import numpy as np
from numpy.typing import ArrayLike

from passplan.budgets.framing import downlink_rate_byte_s
from passplan.domain.constants import BOLTZMANN_DBW_K_HZ, REFERENCE_TEMPERATURE_K, SPEED_OF_LIGHT_KM_S
from passplan.domain.passes import Floats, Track
from passplan.domain.satellite import Modulation, Polarisation, Satellite
from passplan.domain.station import Station

REFERENCE_ERROR_RATE = 1e-5  # at which the required Eb/N0 is stated
GMSK_ALPHA = 0.68  # Murota and Hirade, IEEE Trans. Commun. COM-29 (1981): BT 0.25, from memory

_FREE_SPACE_DB = 32.4478  # 20 log10(4 pi 1 MHz 1 km / c), ITU-R P.525
# Q(sqrt(factor x)) for the coherent kinds, exp(-factor x) / 2 for the others
# (Proakis, Digital Communications, chapter on optimum receivers).
_COHERENT: dict[Modulation, float] = {"fsk-coherent": 1.0, "bpsk": 2.0, "gmsk": 2.0 * GMSK_ALPHA}
_NON_COHERENT: dict[Modulation, float] = {"fsk-noncoherent": 0.5, "dpsk": 1.0}
_erfc = np.vectorize(math.erfc, otypes=[np.float64])


def free_space_loss_db(frequency_hz: float, range_km: ArrayLike) -> Floats:
    """Return the free-space basic transmission loss (ITU-R P.525), in the shape of `range_km`."""
    distance_db = 20.0 * np.log10(np.asarray(range_km, dtype=np.float64))
    return np.asarray(_FREE_SPACE_DB + 20.0 * math.log10(frequency_hz / 1e6) + distance_db)


def polarisation_loss_db(ours: Polarisation, theirs: Polarisation) -> float:
    """Return what two antennas lose by their polarisations.

    Common practice: 3 dB between circular and linear; 3 dB too between linear and linear,
    as Faraday rotation leaves the angle unknown; 20 dB between opposite circulars.
    """
    if "linear" in (ours, theirs):
        return 3.0
    return 0.0 if ours == theirs else 20.0


def eirp_dbw(power_w: float, line_loss_db: float, gain_dbi: ArrayLike) -> Floats:
    """Return the power radiated in the direction of `gain_dbi`, as from an isotropic source."""
    return np.asarray(10.0 * math.log10(power_w) - line_loss_db + np.asarray(gain_dbi, dtype=np.float64))


def cn0_dbhz(eirp: ArrayLike, losses_db: ArrayLike, figure_of_merit_db_k: ArrayLike) -> Floats:
    """Return the carrier to noise density C/N0 = EIRP - losses + G/T - k."""
    level = np.asarray(eirp, dtype=np.float64) - np.asarray(losses_db)
    return np.asarray(level + np.asarray(figure_of_merit_db_k) - BOLTZMANN_DBW_K_HZ)


def system_noise_k(station: Station) -> float:
    """Return the system noise temperature at the preamplifier's input.

    Ts = Ta / L + 290 (1 - 1/L) + 290 (F - 1): the line ahead of the preamplifier weakens
    the antenna's noise and adds its own (Friis, Proc. IRE 32 (1944)).
    """
    radio = station.radio
    line: float = 10.0 ** (radio.receive_line_loss_db / 10.0)
    factor: float = 10.0 ** (radio.noise_figure_db / 10.0)
    return radio.antenna_noise_k / line + REFERENCE_TEMPERATURE_K * (1.0 - 1.0 / line + factor - 1.0)


def station_gain_dbi(station: Station, elevation_deg: ArrayLike) -> Floats:
    """Return the gain towards the satellite, in the shape of `elevation_deg`.

    A rotator points its boresight; a fixed antenna has straight lines between the rows
    of its table and holds the first and the last value beyond them.
    """
    elevation = np.asarray(elevation_deg, dtype=np.float64)
    if station.fixed_antenna is None:
        return np.full(elevation.shape, station.radio.antenna_gain_dbi)
    rows = np.array(station.fixed_antenna.gain_table)
    return np.asarray(np.interp(elevation, rows[:, 0], rows[:, 1]))


def losses_db(satellite: Satellite, station: Station, frequency_hz: float, track: Track) -> Floats:
    """Return all that is lost between the two antennas, shape (n,).

    Free space, atmosphere, polarisation, and pointing where a rotator points.
    """
    pointing = station.radio.pointing_loss_db if station.rotator else 0.0
    polarisation = polarisation_loss_db(satellite.radio.polarisation, station.radio.polarisation)
    fixed = station.radio.atmosphere_loss_db + pointing + polarisation
    return free_space_loss_db(frequency_hz, track.range_km) + fixed


def downlink_ebn0_db(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return Eb/N0 at the station, shape (n,)."""
    radio = satellite.radio
    eirp = eirp_dbw(radio.transmit_power_w, radio.line_loss_db, radio.antenna_gain_dbi)
    gain = station_gain_dbi(station, track.elevation_deg) - station.radio.receive_line_loss_db
    merit = gain - 10.0 * math.log10(system_noise_k(station))
    density = cn0_dbhz(eirp, losses_db(satellite, station, radio.down_hz, track), merit)
    return density - 10.0 * math.log10(radio.bit_rate_bit_s)


def downlink_margin_db(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return Eb/N0 above the required, shape (n,); data count where it reaches `margin_db`."""
    return downlink_ebn0_db(satellite, station, track) - required_ebn0_db(satellite, station)


def uplink_received_dbm(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return the power at the input of the satellite's receiver, shape (n,)."""
    ground, radio = station.radio, satellite.radio
    gain = station_gain_dbi(station, track.elevation_deg)
    eirp = eirp_dbw(ground.transmit_power_w, ground.transmit_line_loss_db, gain)
    level = eirp - losses_db(satellite, station, radio.up_hz, track)
    return level + radio.antenna_gain_dbi - radio.line_loss_db + 30.0


def uplink_margin_db(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return the power received on board above the sensitivity, shape (n,)."""
    return uplink_received_dbm(satellite, station, track) - satellite.radio.receive_sensitivity_dbm


def uplink_ebn0_db(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return Eb/N0 at the satellite, shape (n,): its required value is met at the sensitivity."""
    return satellite_required_ebn0_db(satellite) + uplink_margin_db(satellite, station, track)


def bit_error_rate(modulation: Modulation, ebn0_db: ArrayLike) -> Floats:
    """Return the closed-form bit error rate, in the shape of `ebn0_db`."""
    ratio = 10.0 ** (np.asarray(ebn0_db, dtype=np.float64) / 10.0)
    if modulation in _NON_COHERENT:
        return np.asarray(0.5 * np.exp(-_NON_COHERENT[modulation] * ratio))
    return np.asarray(0.5 * _erfc(np.sqrt(0.5 * _COHERENT[modulation] * ratio)))


def ideal_ebn0_db(modulation: Modulation, error_rate: float = REFERENCE_ERROR_RATE) -> float:
    """Return the Eb/N0 at which the closed form gives `error_rate`, 0 < error_rate < 0.5."""
    if modulation in _NON_COHERENT:
        ratio = -math.log(2.0 * error_rate) / _NON_COHERENT[modulation]
    else:
        ratio = NormalDist().inv_cdf(error_rate) ** 2 / _COHERENT[modulation]
    return 10.0 * math.log10(ratio)


def satellite_required_ebn0_db(satellite: Satellite) -> float:
    """Return Eb/N0 for a bit error rate of 1e-5 through the mission's usual receivers."""
    radio = satellite.radio
    if radio.required_ebn0_db is not None:
        return radio.required_ebn0_db
    return ideal_ebn0_db(radio.modulation) + radio.implementation_loss_db


def required_ebn0_db(satellite: Satellite, station: Station) -> float:
    """Return Eb/N0 for a bit error rate of 1e-5 here: measured at the station, or the satellite's."""
    told = station.radio.required_ebn0_db
    return told if told is not None else satellite_required_ebn0_db(satellite)


def received_error_rate(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return the bit error rate on the downlink, shape (n,).

    The closed form, shifted along Eb/N0 until it passes through 1e-5 at the required value.
    """
    modulation = satellite.radio.modulation
    above = downlink_margin_db(satellite, station, track)
    return bit_error_rate(modulation, above + ideal_ebn0_db(modulation))


def goodput_byte_s(satellite: Satellite, station: Station, track: Track) -> Floats:
    """Return good information bytes a second on the downlink, shape (n,).

    Zero where Eb/N0 is under the required value plus the station's margin. The antenna,
    the mask and the hours are not looked at here.
    """
    rate = downlink_rate_byte_s(satellite, received_error_rate(satellite, station, track))
    closes = downlink_margin_db(satellite, station, track) >= station.radio.margin_db
    return np.where(closes, rate, 0.0)


def doppler_shift_hz(frequency_hz: float, range_rate_km_s: ArrayLike) -> Floats:
    """Return what motion adds to a frequency on its way, in the shape of `range_rate_km_s`.

    Positive while the satellite approaches (range rate negative). It is *heard* at
    frequency + shift; to be heard on the frequency, one *sends* frequency - shift.
    First order in v/c: within 0.3 Hz of the whole formula at 437 MHz in a low orbit.
    """
    return np.asarray(-frequency_hz * np.asarray(range_rate_km_s, dtype=np.float64) / SPEED_OF_LIGHT_KM_S)
