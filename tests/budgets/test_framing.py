"""Laws of frames on the air."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from passplan.budgets.framing import downlink_rate_byte_s, frame_bits, frame_efficiency, frame_loss, keying_s
from passplan.domain.satellite import Framing, Radio, Satellite
from tests.flyby import satellite_with

framings = st.builds(
    Framing,
    information_byte=st.integers(1, 2048),
    digipeaters=st.integers(0, 8),
    stuffing_fraction=st.floats(0.0, 0.2),
    keying_delay_s=st.floats(0.0, 10.0),
    frames_per_keying=st.integers(1, 10_000),
)
rates = st.floats(0.0, 0.5)


def sending(framing: Framing, *, scrambled: bool = True) -> Satellite:
    return satellite_with(
        Radio(down_hz=437e6, up_hz=437e6, transmit_power_w=1.0, framing=framing, scrambled=scrambled)
    )


@given(framing=framings, error_rate=rates)
def test_nothing_comes_faster_than_the_bits(framing: Framing, error_rate: float) -> None:
    satellite = sending(framing)
    rate = float(downlink_rate_byte_s(satellite, error_rate))
    assert 0.0 <= rate <= frame_efficiency(framing) * satellite.radio.bit_rate_bit_s / 8.0 * (1 + 1e-12)
    assert frame_efficiency(framing) < 1.0


@given(framing=framings, low=rates, high=rates)
def test_more_errors_never_lose_fewer_frames(framing: Framing, low: float, high: float) -> None:
    low, high = sorted((low, high))
    plain, scrambled = sending(framing, scrambled=False), sending(framing)
    assert 0.0 <= frame_loss(plain, low) <= frame_loss(plain, high) <= 1.0
    assert frame_loss(plain, low) <= frame_loss(scrambled, low)


def test_the_smallest_rates_are_not_rounded_away() -> None:
    """1 - (1 - 1e-18)^n is 0 in floating point; n times 1e-18 is what is lost."""
    satellite = sending(Framing(), scrambled=False)
    assert frame_loss(satellite, 1e-18) == pytest.approx(frame_bits(Framing()) * 1e-18)


def test_keying_costs_less_the_more_goes_in_one_go() -> None:
    one, many = sending(Framing(frames_per_keying=1)), sending(Framing(frames_per_keying=16))
    assert keying_s(one) == pytest.approx(0.3 + 0.2337, abs=1e-4)
    assert keying_s(many) == pytest.approx(0.3 + 16 * 0.23368, abs=1e-4)
    assert downlink_rate_byte_s(many, 0.0) > 2.0 * downlink_rate_byte_s(one, 0.0)
