"""The seconds of one command, by hand and as laws."""

import math
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.budgets.exchange_time import Exchange, exchange
from passplan.domain.requests import Command
from passplan.domain.satellite import Framing, Radio, Satellite
from tests.flyby import satellite_with


def satellite_on_air(bit_rate_bit_s: float = 1200.0, expected_repeats: float = 0.5) -> Satellite:
    return satellite_with(
        Radio(
            down_hz=437e6,
            up_hz=437e6,
            transmit_power_w=1.0,
            bit_rate_bit_s=bit_rate_bit_s,
            turn_round_s=0.25,
            expected_repeats=expected_repeats,
            framing=Framing(information_byte=100, stuffing_fraction=0.0, keying_delay_s=0.5),
        )
    )


def command_of(length_byte: int = 64, exchange_s: float | None = None) -> Command:
    return Command(name="clock", satellite="TEASEL", length_byte=length_byte, exchange_s=exchange_s)


def test_one_frame_by_hand() -> None:
    """A full frame is 16 + 8 * 118 = 960 bits, 0.8 s; 64 octets go up in 672 bits, 0.56 s."""
    up_s, reply_s, turns_s = 0.5 + 0.56, 0.5 + 0.8, 0.5
    assert up_s + reply_s + turns_s == pytest.approx(2.86)
    # 1.5 times 2.86 s, rounded up; the reply 1.5 times 1.3 s
    slot = exchange(satellite_on_air(), command_of())
    assert slot.seconds == 5
    assert slot.reply_s == pytest.approx(1.95)


def test_three_frames_by_hand() -> None:
    """Of 250 octets two frames are full, the third carries 50: 3 * 160 + 2000 bits, 2.0667 s."""
    slot = exchange(satellite_on_air(expected_repeats=0.0), command_of(length_byte=250))
    assert slot.seconds == 5  # 2.5667 + 1.3 + 0.5 = 4.3667 s
    assert slot.reply_s == pytest.approx(1.3)


def test_a_full_frame_needs_no_second_one() -> None:
    fits, spills = (
        exchange(satellite_on_air(bit_rate_bit_s=100.0), command_of(n)).seconds for n in (100, 101)
    )
    # 168 bits more at 100 bit/s, half of the exchanges repeated
    assert spills - fits == pytest.approx(1.5 * 1.68, abs=1.0)


def test_stuffing_grows_what_goes_up_and_what_comes_down() -> None:
    """With a fifth more of all but the flags the 672 and 960 bits become 803.2 and 1148.8."""
    plain = satellite_on_air(bit_rate_bit_s=100.0, expected_repeats=0.0)
    framing = replace(plain.radio.framing, stuffing_fraction=0.2)
    slot = exchange(replace(plain, radio=replace(plain.radio, framing=framing)), command_of())
    assert slot.reply_s == pytest.approx(0.5 + 11.488)
    assert slot.seconds == math.ceil(0.5 + 8.032 + 0.5 + 11.488 + 0.5) == 22


def test_told_seconds_replace_the_reckoned_and_the_reply_stays() -> None:
    reckoned = exchange(satellite_on_air(), command_of())
    assert exchange(satellite_on_air(), command_of(exchange_s=19.2)) == Exchange(
        seconds=20, reply_s=reckoned.reply_s
    )
    assert exchange(satellite_on_air(), command_of(exchange_s=20.0)).seconds == 20


def test_the_reply_is_never_longer_than_the_slot() -> None:
    assert exchange(satellite_on_air(), command_of(exchange_s=0.5)) == Exchange(seconds=1, reply_s=1.0)


@given(
    shorter=st.integers(1, 5000),
    longer=st.integers(1, 5000),
    bit_rate_bit_s=st.floats(300.0, 1e6),
    repeats=st.floats(0.0, 5.0),
)
def test_a_longer_command_never_takes_less_time(
    shorter: int, longer: int, bit_rate_bit_s: float, repeats: float
) -> None:
    satellite = satellite_on_air(bit_rate_bit_s, repeats)
    shorter, longer = sorted((shorter, longer))
    first, second = (exchange(satellite, command_of(length)) for length in (shorter, longer))
    assert first.seconds <= second.seconds
    assert first.reply_s == second.reply_s <= first.seconds
