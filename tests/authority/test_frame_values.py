"""AX.25 frames held to the protocol's text, by building them bit by bit."""

import numpy as np
import pytest

from passplan.budgets.framing import (
    ADDRESS_OCTETS,
    OVERHEAD_OCTETS,
    SCRAMBLED_ERRORS,
    body_octets,
    downlink_rate_byte_s,
    frame_bits,
    frame_efficiency,
    frame_loss,
)
from passplan.domain.satellite import Framing, Radio, Satellite
from tests.flyby import satellite_with

EXPECTED, NONE, WORST = 1.0 / 62.0, 0.0, 0.2


def radio_with(framing: Framing, *, scrambled: bool = False) -> Satellite:
    return satellite_with(
        Radio(down_hz=437e6, up_hz=437e6, transmit_power_w=1.0, framing=framing, scrambled=scrambled)
    )


def test_a_ui_frame_of_256_octets() -> None:
    # AX.25 v2.2 section 3: 14 address, 1 control, 1 PID, 256 information, 2 FCS = 274 octets, two flags
    framing = Framing(information_byte=256, stuffing_fraction=NONE)
    assert body_octets(framing) == 274
    assert frame_bits(framing) == 2192 + 16
    assert frame_bits(Framing()) / 9600.0 == pytest.approx(0.2337, abs=1e-4)


@pytest.mark.parametrize(
    ("information_byte", "stuffing_fraction", "efficiency"),
    [
        (256, NONE, 0.9275),
        (256, EXPECTED, 0.9129),
        (256, WORST, 0.7740),  # a 0 after every fifth bit of all ones
        (128, EXPECTED, 0.8513),
        (64, EXPECTED, 0.7501),
    ],
)
def test_efficiency(information_byte: int, stuffing_fraction: float, efficiency: float) -> None:
    # worked apart; the worst case rounds the stuffed bits down, hence 2e-4
    framing = Framing(information_byte=information_byte, stuffing_fraction=stuffing_fraction)
    assert frame_efficiency(framing) == pytest.approx(efficiency, abs=2e-4)


def test_a_digipeater_is_one_more_address() -> None:
    # AX.25 v2.2 section 3.12: seven octets each
    assert body_octets(Framing(digipeaters=2)) - body_octets(Framing()) == 2 * ADDRESS_OCTETS == 14


def test_frames_built_bit_by_bit_are_as_long_as_reckoned() -> None:
    """Stuff 400 frames of random octets the way the protocol does: a 0 after five 1s, between the flags."""
    framing = Framing()
    bits = np.random.default_rng(20261207).integers(0, 2, (400, 8 * body_octets(framing)))
    mean_bits = 16 + np.mean([_stuffed_bits(frame) for frame in bits.tolist()])
    assert mean_bits == pytest.approx(frame_bits(framing), rel=0.001)


def _stuffed_bits(body: list[int]) -> int:
    """Return the bits of a body once a 0 follows every five 1s in a row."""
    sent, ones = 0, 0
    for bit in body:
        sent, ones = sent + 1, ones + 1 if bit else 0
        if ones == 5:
            sent, ones = sent + 1, 0
    return sent


def test_a_scrambler_triples_a_channel_error() -> None:
    """Descramble 1 + x^12 + x^17, of 9600 bit/s amateur modems (from memory), with one bit hit."""
    sent = np.random.default_rng(7).integers(0, 2, 500).tolist()
    hit = [bit ^ (place == 200) for place, bit in enumerate(sent)]
    wrong = sum(a != b for a, b in zip(_descrambled(sent), _descrambled(hit), strict=True))
    assert wrong == SCRAMBLED_ERRORS


def _descrambled(channel: list[int]) -> list[int]:
    """Return the data bits: each channel bit with those 12 and 17 before it added."""
    return [channel[k] ^ channel[k - 12] ^ channel[k - 17] for k in range(17, len(channel))]


def test_frame_loss_is_that_all_bits_must_arrive() -> None:
    """At 1e-5 a frame of 2192 bits is lost with 2.17 %, with tripled errors with at most 6.36 %."""
    # 254 octets make 2192 bits with both flags and no stuffing
    framing = Framing(information_byte=2192 // 8 - 2 - OVERHEAD_OCTETS, stuffing_fraction=NONE)
    assert frame_bits(framing) == 2192
    assert frame_loss(radio_with(framing), 1e-5) == pytest.approx(0.0217, abs=5e-5)
    assert frame_loss(radio_with(framing, scrambled=True), 1e-5) == pytest.approx(0.0636, abs=5e-5)


def test_frame_loss_drawn_by_chance() -> None:
    """Draw bit errors at 2e-4 for 20 000 frames: the share with any agrees within three standard errors."""
    satellite = radio_with(Framing(information_byte=100))
    reckoned = float(frame_loss(satellite, 2e-4))
    hits = np.random.default_rng(9600).binomial(round(frame_bits(satellite.radio.framing)), 2e-4, 20_000)
    assert np.mean(hits > 0) == pytest.approx(reckoned, abs=3 * (reckoned / 20_000) ** 0.5)


def test_five_minutes_at_9600() -> None:
    # 9600 * 0.9129 * 300 / 8 = 328.7 kB before keying, beacon and repeats
    satellite = radio_with(Framing(keying_delay_s=0.0, frames_per_keying=10_000))
    assert 300.0 * downlink_rate_byte_s(satellite, 0.0) == pytest.approx(328_700.0, abs=100.0)
