"""How long it takes to send one command and hear its reply."""

import math
from dataclasses import dataclass

from passplan.budgets.framing import frame_bits
from passplan.domain.requests import Command
from passplan.domain.satellite import Satellite


@dataclass(frozen=True, kw_only=True, slots=True)
class Exchange:
    """The uplink slot of one command.

    Attributes:
        seconds: length of the slot, whole.
        reply_s: of it the satellite transmits, at the slot's end.
    """

    seconds: int
    reply_s: float


def exchange(satellite: Satellite, command: Command) -> Exchange:
    """Return the slot that `command` takes, replies, turn-rounds and expected repeats included.

    Up go as many frames as the command needs, the last one as short as it can be; down
    comes one full frame. A told `exchange_s` takes the place of the seconds; the reply
    stays as reckoned, at most the whole slot.
    """
    times = 1.0 + satellite.radio.expected_repeats
    reply_s = times * _reply_s(satellite)
    if command.exchange_s is not None:
        seconds = math.ceil(command.exchange_s)
    else:
        turn_rounds_s = 2.0 * satellite.radio.turn_round_s
        seconds = math.ceil(times * (_up_s(satellite, command) + _reply_s(satellite) + turn_rounds_s))
    return Exchange(seconds=seconds, reply_s=min(reply_s, float(seconds)))


def _up_s(satellite: Satellite, command: Command) -> float:
    """Return the seconds of the command's own frames, keying included."""
    radio, framing = satellite.radio, satellite.radio.framing
    frames = math.ceil(command.length_byte / framing.information_byte)
    stuffed = 8 * (1.0 + framing.stuffing_fraction)
    empty_bits = frame_bits(framing) - stuffed * framing.information_byte
    bits = frames * empty_bits + stuffed * command.length_byte
    return framing.keying_delay_s + bits / radio.bit_rate_bit_s


def _reply_s(satellite: Satellite) -> float:
    """Return the seconds of one reply, keying included."""
    radio = satellite.radio
    return radio.framing.keying_delay_s + frame_bits(radio.framing) / radio.bit_rate_bit_s
