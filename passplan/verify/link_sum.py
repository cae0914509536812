"""The radio link, added up line by line: what arrives, how much of it is good, what goes up.

Written down from the physical model in DEVELOPERS.md a second time, on purpose.
Sources: free-space loss ITU-R P.525; noise of a cascade, IEEE standard 290 K; error rates
as in any text on digital radio (Sklar, Digital Communications, ch. 4); AX.25 v2.2 frames.
"""

import math
from statistics import NormalDist

import numpy as np

from passplan.domain.constants import BOLTZMANN_DBW_K_HZ, REFERENCE_TEMPERATURE_K
from passplan.domain.passes import Floats
from passplan.domain.satellite import Framing, Modulation, Satellite
from passplan.domain.station import Station

_REFERENCE_RATE = 1e-5
_GMSK_ALPHA = 0.68
_AX25_BYTE = 14 + 1 + 1 + 2  # two addresses, control, protocol, check sequence
_FLAGS_BIT = 16


def down_ebn0_db(satellite: Satellite, station: Station, elevation_deg: Floats, range_km: Floats) -> Floats:
    """Return Eb/N0 at the station's receiver, shape (n,)."""
    radio, ground = satellite.radio, station.radio
    sent_dbw = 10.0 * math.log10(radio.transmit_power_w) - radio.line_loss_db + radio.antenna_gain_dbi
    lost_db = _path_db(radio.down_hz, range_km) + _other_losses_db(satellite, station)
    caught_db = _gain_dbi(station, elevation_deg) - ground.receive_line_loss_db
    density_dbw_hz = BOLTZMANN_DBW_K_HZ + 10.0 * math.log10(noise_temperature_k(station))
    return sent_dbw - lost_db + caught_db - density_dbw_hz - 10.0 * math.log10(radio.bit_rate_bit_s)


def noise_temperature_k(station: Station) -> float:
    """Return the system noise temperature at the preamplifier's input."""
    ground = station.radio
    line: float = 10.0 ** (ground.receive_line_loss_db / 10.0)
    figure: float = 10.0 ** (ground.noise_figure_db / 10.0)
    room_k = REFERENCE_TEMPERATURE_K
    return ground.antenna_noise_k / line + room_k * (1.0 - 1.0 / line) + room_k * (figure - 1.0)


def needed_ebn0_db(satellite: Satellite, station: Station) -> float:
    """Return Eb/N0 for one wrong bit in 100 000: measured here, else told, else theory and losses."""
    for told in (station.radio.required_ebn0_db, satellite.radio.required_ebn0_db):
        if told is not None:
            return told
    return theory_ebn0_db(satellite.radio.modulation) + satellite.radio.implementation_loss_db


def theory_ebn0_db(modulation: Modulation) -> float:
    """Return Eb/N0 at which the closed form of the error rate is 1e-5."""
    tail = NormalDist().inv_cdf(1.0 - _REFERENCE_RATE)
    logarithm = -math.log(2.0 * _REFERENCE_RATE)
    ratio = {
        "fsk-noncoherent": 2.0 * logarithm,
        "fsk-coherent": tail**2,
        "dpsk": logarithm,
        "bpsk": tail**2 / 2.0,
        "gmsk": tail**2 / (2.0 * _GMSK_ALPHA),
    }[modulation]
    return 10.0 * math.log10(ratio)


def bit_error_rate(modulation: Modulation, ebn0_db: Floats) -> Floats:
    """Return the closed form of the error rate at each Eb/N0."""
    ratio = 10.0 ** (np.asarray(ebn0_db) / 10.0)
    if modulation == "fsk-noncoherent":
        return np.exp(-ratio / 2.0) / 2.0
    if modulation == "dpsk":
        return np.exp(-ratio) / 2.0
    # Q(sqrt(c x)) = erfc(sqrt(c x / 2)) / 2
    factor = {"fsk-coherent": 1.0, "bpsk": 2.0, "gmsk": 2.0 * _GMSK_ALPHA}[modulation]
    return np.array([math.erfc(math.sqrt(factor * x / 2.0)) / 2.0 for x in ratio.tolist()])


def down_margin_db(satellite: Satellite, station: Station, elevation_deg: Floats, range_km: Floats) -> Floats:
    """Return how far the downlink is over what it needs, the station's margin taken off."""
    over = down_ebn0_db(satellite, station, elevation_deg, range_km) - needed_ebn0_db(satellite, station)
    return over - station.radio.margin_db


def up_margin_db(satellite: Satellite, station: Station, elevation_deg: Floats, range_km: Floats) -> Floats:
    """Return how far the power at the satellite's receiver is over sensitivity and margin."""
    radio, ground = satellite.radio, station.radio
    sent_dbm = 10.0 * math.log10(1000.0 * ground.transmit_power_w) - ground.transmit_line_loss_db
    lost_db = _path_db(radio.up_hz, range_km) + _other_losses_db(satellite, station)
    received_dbm = (
        sent_dbm + _gain_dbi(station, elevation_deg) - lost_db + radio.antenna_gain_dbi - radio.line_loss_db
    )
    return received_dbm - radio.receive_sensitivity_dbm - ground.margin_db


def goodput_byte_s(satellite: Satellite, station: Station, margin_db: Floats) -> Floats:
    """Return good bytes a second at each downlink margin, whether the link counts as closed or not."""
    radio, framing = satellite.radio, satellite.radio.framing
    # The curve is moved along so that it meets 1e-5 where the receiver really does.
    on_curve_db = margin_db + station.radio.margin_db + theory_ebn0_db(radio.modulation)
    wrong = bit_error_rate(radio.modulation, on_curve_db)
    bits_at_stake = (3 if radio.scrambled else 1) * full_frame_bits(framing)
    whole_frame = np.exp(bits_at_stake * np.log1p(-wrong))
    frames = framing.frames_per_keying
    burst_s = framing.keying_delay_s + frames * full_frame_bits(framing) / radio.bit_rate_bit_s
    free = 1.0 - (radio.beacon.duty_fraction if radio.beacon else 0.0)
    return np.asarray(frames * framing.information_byte / burst_s * whole_frame * free)


def full_frame_bits(framing: Framing) -> float:
    """Return the bits of a full frame on the air, flags and expected stuffing included."""
    return bare_frame_bits(framing) + stuffed_bits(framing, framing.information_byte)


def bare_frame_bits(framing: Framing) -> float:
    """Return the bits of a frame with nothing in it."""
    return _FLAGS_BIT + stuffed_bits(framing, _AX25_BYTE + 7 * framing.digipeaters)


def stuffed_bits(framing: Framing, octets: float) -> float:
    """Return the bits that so many octets take on the air."""
    return 8.0 * octets * (1.0 + framing.stuffing_fraction)


def _path_db(frequency_hz: float, range_km: Floats) -> Floats:
    """Return the free-space loss."""
    return 32.4478 + 20.0 * math.log10(frequency_hz / 1e6) + 20.0 * np.log10(range_km)


def _other_losses_db(satellite: Satellite, station: Station) -> float:
    """Return atmosphere, pointing (only what moves can point amiss) and polarisation."""
    ground = station.radio
    pointing_db = ground.pointing_loss_db if station.rotator else 0.0
    kinds = {satellite.radio.polarisation, ground.polarisation}
    crossed_db = 3.0 if "linear" in kinds else (0.0 if len(kinds) == 1 else 20.0)
    return ground.atmosphere_loss_db + pointing_db + crossed_db


def _gain_dbi(station: Station, elevation_deg: Floats) -> Floats:
    """Return the antenna's gain towards the satellite."""
    if station.fixed_antenna is None:
        return np.full(np.shape(elevation_deg), station.radio.antenna_gain_dbi)
    table = np.array(station.fixed_antenna.gain_table)
    return np.asarray(np.interp(elevation_deg, table[:, 0], table[:, 1]))
