"""Seconds of an exchange against sums done by hand."""

from dataclasses import replace

import pytest

from passplan.domain.requests import Command
from passplan.domain.satellite import Framing
from passplan.verify.slot_times import slot_time
from tests.verify.good_week import SATELLITE

SLOW = replace(
    SATELLITE,
    radio=replace(
        SATELLITE.radio,
        bit_rate_bit_s=1000.0,
        turn_round_s=0.5,
        expected_repeats=1.0,
        framing=Framing(information_byte=100, stuffing_fraction=0.0, keying_delay_s=0.2),
    ),
)


def test_two_frames_up_and_a_reply_by_hand() -> None:
    """Seconds of a command of 150 octets, all of it twice.

    An empty frame has 16 + 8 * 18 = 160 bits, a full one 960. Two frames go up: 320 + 1200
    bits, with keying 1.72 s; the reply takes 1.16 s, two turn-rounds 1 s: 7.76 s, of which
    2.32 s are replies.
    """
    found = slot_time(SLOW, Command(name="table", satellite="TEASEL-1", length_byte=150))
    assert found.seconds == 8
    assert found.reply_s == pytest.approx(2.32)


def test_told_seconds_take_the_place_of_the_sum() -> None:
    found = slot_time(SLOW, Command(name="table", satellite="TEASEL-1", exchange_s=20.2))
    assert found.seconds == 21
    assert found.reply_s == pytest.approx(2.32)


def test_the_reply_is_at_most_the_slot() -> None:
    found = slot_time(SLOW, Command(name="table", satellite="TEASEL-1", exchange_s=1.0))
    assert (found.seconds, found.reply_s) == (1, 1.0)
