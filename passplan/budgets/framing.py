"""AX.25 UI frames on the air: their length, their overhead and how many are lost.

AX.25 Link Access Protocol v2.2, section 3: flag, address, control, PID, information,
frame check sequence, flag; a 0 is stuffed after five 1s between the flags.
"""

import numpy as np
from numpy.typing import ArrayLike

from passplan.domain.passes import Floats
from passplan.domain.satellite import Framing, Satellite

FLAG_BITS = 16  # one before, one after
ADDRESS_OCTETS = 7  # six of call sign, one of SSID
OVERHEAD_OCTETS = 2 * ADDRESS_OCTETS + 1 + 1 + 2  # destination, source, control, PID, FCS
SCRAMBLED_ERRORS = 3  # a self-synchronising scrambler of three taps repeats each channel error


def body_octets(framing: Framing) -> int:
    """Return the octets between the flags of one full frame, before stuffing."""
    return OVERHEAD_OCTETS + ADDRESS_OCTETS * framing.digipeaters + framing.information_byte


def frame_bits(framing: Framing) -> float:
    """Return the expected bits on air of one full frame: both flags, and the body with its stuffing."""
    return FLAG_BITS + 8 * body_octets(framing) * (1.0 + framing.stuffing_fraction)


def frame_efficiency(framing: Framing) -> float:
    """Return the share of a full frame's bits on air that is information."""
    return 8 * framing.information_byte / frame_bits(framing)


def frame_loss(satellite: Satellite, bit_error_rate: ArrayLike) -> Floats:
    """Return the share of full frames lost, in the shape of `bit_error_rate`.

    There is no error correction: a frame counts only when all its bits arrive. The
    scrambler's extra errors are taken as falling in as many bits, which overstates the
    loss a little where they fall outside the frame.
    """
    radio = satellite.radio
    errors = SCRAMBLED_ERRORS if radio.scrambled else 1
    rate = np.asarray(bit_error_rate, dtype=np.float64)
    # log1p and expm1 keep the small rates that 1 - (1 - p) would round away
    return np.asarray(-np.expm1(errors * frame_bits(radio.framing) * np.log1p(-rate)))


def keying_s(satellite: Satellite) -> float:
    """Return the seconds of one keying of the downlink: the delay, then its frames in one go."""
    framing = satellite.radio.framing
    on_air = framing.frames_per_keying * frame_bits(framing) / satellite.radio.bit_rate_bit_s
    return framing.keying_delay_s + on_air


def downlink_rate_byte_s(satellite: Satellite, bit_error_rate: ArrayLike) -> Floats:
    """Return good information bytes a second while the satellite sends, in the shape of `bit_error_rate`.

    Frames in one keying over its seconds, less the frames lost and the time the beacon takes.
    """
    radio = satellite.radio
    sent = radio.framing.frames_per_keying * radio.framing.information_byte / keying_s(satellite)
    free = 1.0 - radio.beacon.duty_fraction if radio.beacon else 1.0
    return sent * free * (1.0 - frame_loss(satellite, bit_error_rate))
