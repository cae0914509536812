"""The generated weeks are the ones described, and stay the same for ever."""

from datetime import time

import numpy as np
import pytest

from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon
from tests.draws import Draws, fingerprint
from tests.generated import FEATURES, START_FRACTION, WEEK, WeekKind, generated_week, goodput_rule
from tests.rough_sky import positions_teme, usable_passes
from tests.thumb_people import People
from tests.tiny import FEWEST_PASSES, MOST_PASSES, tiny_mission

KINDS: tuple[WeekKind, ...] = ("easy", "hard", "weak-link", "long-uplink")


@pytest.mark.parametrize(
    ("kind", "seed", "printed"),
    [
        ("easy", 1, "dd2cbbdcd9573fdf"),
        ("hard", 1, "7aa1d908755d7511"),
        ("weak-link", 1, "dd2cbbdcd9573fdf"),
        ("long-uplink", 1, "fea490662f6e8402"),
        ("easy", 20, "bc1fa31722cb059c"),
    ],
)
def test_a_seed_gives_the_week_it_always_gave(kind: WeekKind, seed: int, printed: str) -> None:
    assert fingerprint(*generated_week(kind, seed)) == printed


@pytest.mark.parametrize(("seed", "printed"), [(0, "9726e757550c569a"), (7, "0f1def718c23161d")])
def test_a_seed_gives_the_tiny_mission_it_always_gave(seed: int, printed: str) -> None:
    assert fingerprint(*tiny_mission(seed)) == printed


def test_chance_is_the_published_generator() -> None:
    """PCG64 seeded with 12345: the first double as in NumPy's manual, the second as NumPy 2 draws it."""
    draws = Draws(12345)
    assert draws.between(0.0, 1.0) == pytest.approx(0.22733602246716966, abs=1e-15)
    assert draws.between(-1.0, 1.0) == pytest.approx(2.0 * 0.31675833970975287 - 1.0, abs=1e-15)


@pytest.mark.parametrize("kind", KINDS)
def test_counts(kind: WeekKind) -> None:
    mission, elements = generated_week(kind, 3, satellites=2, stations=5)
    assert list(elements) == [sat.name for sat in mission.satellites]
    assert len(elements) == 2
    assert len(mission.stations) == 5
    assert len(mission.operators) == 5 * (3 if kind == "hard" else 2)
    assert len(mission.commands) == 2 * (30 if kind == "long-uplink" else 25)
    assert {person.stations[0] for person in mission.operators} == {site.code for site in mission.stations}


def test_the_kinds_of_one_seed_share_sky_and_stations() -> None:
    weeks = {kind: generated_week(kind, 4) for kind in KINDS}
    easy, elements = weeks["easy"]
    for mission, others in weeks.values():
        assert others == elements
        assert mission.stations == easy.stations
        assert mission.commands[:25] == easy.commands


def test_orbits_and_places_are_as_described() -> None:
    for seed in range(1, 21):
        mission, elements = generated_week("easy", seed)
        for one in elements.values():
            # Kepler's third law the other way, radius and mu of WGS 84
            axis_km = (398600.4418 * (86400.0 / (2.0 * np.pi * one.mean_motion_rev_day)) ** 2) ** (1.0 / 3.0)
            assert 480.0 <= axis_km - 6378.137 <= 580.0
            assert (one.eccentricity, one.inclination_deg) == (0.0012, 97.4)
            assert one.epoch < Horizon(week=WEEK).start
        for station in mission.stations:
            assert 36.0 <= station.latitude_deg <= 62.0
            assert -10.0 <= station.longitude_deg <= 30.0
            assert station.horizon == ((0.0, 10.0),)
            assert station.radio.transmits


def test_commands_are_as_described() -> None:
    for seed in range(1, 6):
        mission, _ = generated_week("long-uplink", seed)
        horizon = Horizon(week=WEEK)
        for index, command in enumerate(mission.commands):
            assert command.earliest_utc is not None
            assert command.deadline_utc is not None
            earliest_s, deadline_s = (
                horizon.seconds(command.earliest_utc),
                horizon.seconds(command.deadline_utc),
            )
            assert 0.0 <= earliest_s <= 0.7 * 604800.0 + 1.0
            assert 43200.0 <= deadline_s - earliest_s <= 3.0 * 86400.0
            after = [(link.command, link.order) for link in command.after]
            if index >= 25:
                assert (command.exchange_s, command.least_elevation_deg) == (150.0, 20.0)
                assert not after
            else:
                assert command.exchange_s in {20.0, 25.0, 35.0, 75.0}
                leader = [(mission.commands[index - 1].name, "after_contact")]
                assert after == (leader if index in {1, 6, 11, 16, 21} else [])


def test_people_are_as_described() -> None:
    for kind, shifts in [
        ("easy", {(time(6), time(14)), (time(14), time(22))}),
        ("hard", {(time(0), time(0))}),
    ]:
        mission, _ = generated_week("hard" if kind == "hard" else "easy", 2)
        assert {(o.hours[0].begin, o.hours[0].end) for o in mission.operators} == shifts
        assert all(len(o.hours[0].days) == 6 and o.may_control for o in mission.operators)
        assert {(o.most_duties_day, o.most_duties_week, o.time_zone) for o in mission.operators} == {
            (3, 8, "UTC")
        }


def test_energy_and_data_are_as_described() -> None:
    easy, hard = generated_week("easy", 1)[0].satellites[0], generated_week("hard", 1)[0].satellites[0]
    assert (easy.power.sunlit_w, easy.battery.floor_fraction) == (4.2, 0.75)
    assert (hard.power.sunlit_w, hard.battery.floor_fraction) == (4.1, 0.80)
    for sat in (easy, hard):
        assert (sat.battery.capacity_j, sat.idle_sun_w, sat.transmitter_draw_w) == (144000.0, 2.35, 8.0)
        assert sat.battery.telemetry is not None
        assert sat.battery.telemetry.charge_fraction == START_FRACTION
    assert sum(kind.made_byte_s for kind in hard.store.kinds) == pytest.approx(30.0)
    assert sum(kind.on_board_byte for kind in hard.store.kinds) == 0.0
    # without end: more than the top rate could bring down in week and look-ahead together
    assert sum(kind.on_board_byte for kind in easy.store.kinds) > 960.0 * 8.0 * 86400.0


@pytest.mark.parametrize(
    ("kind", "expected"),
    [
        ("easy", {10.0: 384.0, 20.0: 768.0, 25.0: 960.0, 80.0: 960.0, 5.0: 240.0}),
        ("hard", {10.0: 384.0, 25.0: 960.0}),
        ("long-uplink", {10.0: 384.0, 25.0: 960.0}),
        ("weak-link", {5.0: 0.0, 10.0: 0.0, 25.0: 480.0, 40.0: 960.0, 80.0: 960.0}),
    ],
)
def test_rate_curves(kind: WeekKind, expected: dict[float, float]) -> None:
    """By hand from 960 min(1, max(1/4, e/25)) and 960 max(0, min(1, (e - 10)/30))."""
    rates = goodput_rule(kind)(np.array(list(expected)))
    assert rates == pytest.approx(list(expected.values()))


def test_the_radio_carries_what_the_rule_asks_within_what_a_second_reading_allows() -> None:
    """Nine AX.25 frames of 256 octets in a keying: by hand, 16 + 8 * 274 * 63/62 bits each at 9600 bit/s."""
    radio = generated_week("easy", 1)[0].satellites[0].radio
    bits = 16.0 + 8.0 * (14 + 2 + 256 + 2) * 63.0 / 62.0
    frames = radio.framing.frames_per_keying
    rate = frames * radio.framing.information_byte / (radio.framing.keying_delay_s + frames * bits / 9600.0)
    assert 0.995 * 960.0 < rate < 960.0
    # at 2000 km: ITU-R P.525 loss 151.3 dB, EIRP 3.3 dBW, gain 14.5 dBi, 0.8 dB of air, under 400 K = 26 dBK
    ebn0_db = 3.3 - 151.3 - 0.8 + 14.5 + 228.6 - 26.0 - 39.8
    closed_form_db, implementation_db, margin_db = 13.35, 2.0, 3.0  # -2 ln(2e-5) = 21.6
    assert ebn0_db > closed_form_db + implementation_db + margin_db + 5.0


def test_each_feature_can_be_switched_off() -> None:
    mission, _ = generated_week("easy", 1, features=())
    sat = mission.satellites[0]
    assert [(kind.name, kind.weight) for kind in sat.store.kinds] == [("images", "low")]
    assert (sat.battery.charge_efficiency, sat.battery.discharge_efficiency) == (1.0, 1.0)
    assert sat.battery.transmit_floor_fraction == sat.battery.floor_fraction
    assert (mission.planning.success_fraction, mission.planning.lookahead_h) == (1.0, 0.0)
    for feature in FEATURES:
        assert generated_week("easy", 1, features=(feature,))[0] != mission


@pytest.mark.parametrize("seed", range(12))
def test_a_tiny_mission_has_two_to_four_passes_to_choose_from(seed: int) -> None:
    mission, elements = tiny_mission(seed)
    assert len(mission.satellites) == len(elements) == 1
    assert 1 <= len(mission.stations) <= 3
    assert 1 <= len(mission.operators) <= 2
    assert len(mission.commands) <= 3
    assert FEWEST_PASSES <= _offered(mission, seed) <= MOST_PASSES


def _offered(mission: Mission, seed: int) -> int:
    """Return how many passes of the least contact time somebody could take, at whole seconds."""
    horizon = Horizon(week=WEEK, lookahead_h=mission.planning.lookahead_h)
    name, elements = next(iter(tiny_mission(seed)[1].items()))
    seconds = np.arange(0.0, horizon.end_s, 2.0)
    places = {name: (seconds, positions_teme(elements, horizon, seconds))}
    people = People(mission, horizon)
    passes = usable_passes(mission.stations, horizon, places, mission.planning.least_contact_s)
    return sum(people.free(one) is not None for one in passes)
