"""How long one command takes, and how much of it the satellite speaks."""

import math
from dataclasses import dataclass

from passplan.domain.requests import Command
from passplan.domain.satellite import Satellite
from passplan.verify.link_sum import bare_frame_bits, full_frame_bits, stuffed_bits

_ROUNDING_S = 1e-6


@dataclass(frozen=True, kw_only=True, slots=True)
class SlotTime:
    """Seconds of an uplink slot, and those at its end in which the satellite replies."""

    seconds: int
    reply_s: float


def slot_time(satellite: Satellite, command: Command) -> SlotTime:
    """Return what `command` takes; see "Exchange" in DEVELOPERS.md."""
    radio, framing = satellite.radio, satellite.radio.framing
    times = 1.0 + radio.expected_repeats
    reply_s = framing.keying_delay_s + full_frame_bits(framing) / radio.bit_rate_bit_s
    frames = math.ceil(command.length_byte / framing.information_byte)
    bits = frames * bare_frame_bits(framing) + stuffed_bits(framing, command.length_byte)
    up_s = framing.keying_delay_s + bits / radio.bit_rate_bit_s
    reckoned_s = times * (up_s + reply_s + 2.0 * radio.turn_round_s)
    whole_s = command.exchange_s if command.exchange_s is not None else reckoned_s
    seconds = math.ceil(whole_s - _ROUNDING_S)
    return SlotTime(seconds=seconds, reply_s=min(times * reply_s, float(seconds)))
