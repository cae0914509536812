"""The store played by hand."""

from dataclasses import replace
from typing import Literal

import pytest

from passplan.domain.constants import DAY_S, WEEK_S
from passplan.domain.satellite import DataKind, Partition, Satellite, Store
from passplan.verify.store_replay import Arrival, Taking, replay
from tests.verify.good_week import SATELLITE


def craft(size_byte: float, when_full: Literal["refuse", "overwrite_oldest"], *kinds: DataKind) -> Satellite:
    partition = Partition(name="main", size_byte=size_byte, when_full=when_full)
    return replace(SATELLITE, store=Store(partitions=(partition,), kinds=kinds))


def take(
    at_s: float, kind: str, day: int | None, byte: float, *, in_week: bool = True, chance: float = 1.0
) -> Taking:
    return Taking(
        contact="QUA-01", at_s=at_s, kind=kind, made_day=day, byte=byte, chance=chance, in_week=in_week
    )


STEADY = DataKind(name="steady", made_byte_s=1.0, on_board_byte=1000.0)
AGEING = DataKind(name="ageing", made_byte_s=1.0, on_board_byte=1000.0, halves_every_days=2.0)


def test_what_does_not_age_is_one_heap() -> None:
    story = replay(craft(1e9, "refuse", STEADY), WEEK_S, (), (take(500.0, "steady", None, 1200.0),))
    assert story.takings[0].there_byte == pytest.approx(1500.0)
    assert story.week["steady"].made_byte == pytest.approx(WEEK_S)
    assert story.week["steady"].down_byte == pytest.approx(1200.0)
    assert story.week["steady"].lost_byte == 0.0


def test_what_ages_has_a_heap_a_day() -> None:
    takings = (
        take(DAY_S + 100.0, "ageing", 1, 10.0),
        take(DAY_S + 100.0, "ageing", 0, 10.0),
        take(DAY_S + 100.0, "ageing", -1, 10.0),
        take(DAY_S + 100.0, "ageing", None, 10.0),
        take(DAY_S + 200.0, "ageing", 0, 10.0),
    )
    story = replay(craft(1e9, "refuse", AGEING), WEEK_S, (), takings)
    there = [taking.there_byte for taking in story.takings]
    assert there == pytest.approx([100.0, 86_400.0, 1000.0, 0.0, 86_390.0])
    assert story.week["ageing"].down_byte == pytest.approx(40.0)


def test_a_session_s_bytes_exist_from_its_end_on_the_day_of_its_end() -> None:
    still = replace(AGEING, made_byte_s=0.0)
    arrivals = (Arrival(at_s=DAY_S, byte={"ageing": 500.0, "unknown": 9.0}),)
    takings = (take(DAY_S - 1.0, "ageing", 1, 1.0), take(DAY_S, "ageing", 1, 1.0))
    story = replay(craft(1e9, "refuse", still), WEEK_S, arrivals, takings)
    assert [taking.there_byte for taking in story.takings] == [0.0, 500.0]
    assert story.week["ageing"].made_byte == 500.0


def test_a_full_store_that_refuses_loses_what_is_being_made() -> None:
    """1500 byte of room are used up after 500 s by 1 and 2 byte/s; then everything made is lost."""
    kinds = (STEADY, DataKind(name="more", made_byte_s=2.0))
    story = replay(craft(2500.0, "refuse", *kinds), 1000.0, (), (take(1000.0, "steady", None, 0.0),))
    assert story.takings[0].there_byte == pytest.approx(1500.0)
    week = replay(craft(2500.0, "refuse", *kinds), WEEK_S, (), ()).week
    assert week["steady"].lost_byte == pytest.approx(WEEK_S - 500.0)
    assert week["more"].lost_byte == pytest.approx(2.0 * WEEK_S - 1000.0)


def test_a_full_store_that_overwrites_loses_the_oldest_first() -> None:
    """3000 byte hold 1000 from before and 2000 of Monday; then the old go, then Monday's own."""
    satellite = craft(3000.0, "overwrite_oldest", AGEING)
    takings = (
        take(2500.0, "ageing", -1, 0.0),
        take(2500.0, "ageing", 0, 0.0),
        take(DAY_S + 1000.0, "ageing", 0, 0.0),
        take(DAY_S + 1000.0, "ageing", 1, 0.0),
    )
    story = replay(satellite, WEEK_S, (), takings)
    assert [taking.there_byte for taking in story.takings] == pytest.approx([500.0, 2500.0, 2000.0, 1000.0])
    assert story.week["ageing"].lost_byte == pytest.approx(1000.0 + WEEK_S - 3000.0)


def test_kinds_of_one_age_are_overwritten_by_their_share() -> None:
    kinds = (
        DataKind(name="a", on_board_byte=300.0),
        DataKind(name="b", on_board_byte=100.0, halves_every_days=1.0),
        DataKind(name="c"),
    )
    arrivals = (Arrival(at_s=10.0, byte={"c": 100.0}),)
    takings = (take(20.0, "a", None, 0.0), take(20.0, "b", -1, 0.0), take(20.0, "c", None, 0.0))
    story = replay(craft(400.0, "overwrite_oldest", *kinds), WEEK_S, arrivals, takings)
    assert sum(taking.there_byte for taking in story.takings) == pytest.approx(400.0)
    assert story.takings[1].there_byte == pytest.approx(80.0)


def test_partitions_do_not_share_their_room() -> None:
    store = Store(
        partitions=(Partition(name="main", size_byte=1e6), Partition(name="tiny", size_byte=10.0)),
        kinds=(DataKind(name="a", made_byte_s=1.0), DataKind(name="b", made_byte_s=1.0, partition="tiny")),
    )
    week = replay(replace(SATELLITE, store=store), WEEK_S, (), ()).week
    assert week["a"].lost_byte == 0.0
    assert week["b"].lost_byte == pytest.approx(WEEK_S - 10.0)


def test_the_week_s_sums_leave_the_look_ahead_out() -> None:
    end_s = WEEK_S + DAY_S
    takings = (take(WEEK_S, "steady", None, 100.0), take(end_s, "steady", None, 200.0, in_week=False))
    story = replay(craft(1e9, "refuse", STEADY), end_s, (), takings)
    assert story.week["steady"].made_byte == pytest.approx(WEEK_S)
    assert story.week["steady"].down_byte == pytest.approx(100.0)
    assert story.takings[1].there_byte == pytest.approx(1000.0 + end_s - 100.0)


def test_the_expected_share_leaves_and_the_rest_stays() -> None:
    """1500 there; 1000 asked with a chance of 0.8 leave 700."""
    still = replace(STEADY, made_byte_s=0.0, on_board_byte=1500.0)
    takings = (take(10.0, "steady", None, 1000.0, chance=0.8), take(20.0, "steady", None, 0.0))
    story = replay(craft(1e9, "refuse", still), WEEK_S, (), takings)
    assert [taking.there_byte for taking in story.takings] == [1500.0, 700.0]
    assert story.week["steady"].down_byte == pytest.approx(800.0)
