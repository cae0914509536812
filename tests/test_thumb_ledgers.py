"""Battery and store of the planner by hand, against sums worked out with pencil."""

from dataclasses import replace
from typing import Literal

import pytest

from passplan.domain.moments import Horizon
from passplan.domain.satellite import DataKind, Partition, Store
from tests.generated import WEEK, generated_week
from tests.thumb_ledgers import ChargeLedger, Draw, StoreLedger

HORIZON = Horizon(week=WEEK)


def test_charge_clips_at_full_and_pays_both_efficiencies() -> None:
    """By hand: 1.85 W * 0.95 in from 0.9 * 144 kJ fills 14.4 kJ in 8193.5 s; 6.15 W / 0.95 out for 1000 s."""
    sat = generated_week("easy", 1)[0].satellites[0]
    ledger = ChargeLedger(sat, HORIZON, shadows=(), start_fraction=0.9, end_fraction=0.8, margin_fraction=0.0)
    seconds, charge_j = ledger.trace([Draw(start_s=8000.0, transmit=((20000.0, 21000.0),))])
    at = dict(zip(seconds.tolist(), charge_j.tolist(), strict=True))
    assert at[8000.0] == pytest.approx(0.9 * 144000.0 + 8000.0 * 1.85 * 0.95)
    assert at[20000.0] == pytest.approx(144000.0)
    assert at[21000.0] == pytest.approx(144000.0 - 1000.0 * (8.0 - 1.85) / 0.95)
    assert at[HORIZON.end_s] == pytest.approx(144000.0)


def test_each_floor_stops_a_contact() -> None:
    """In 2000 s of shadow the bus takes 2.35 W / 0.95, the transmitter 8 W / 0.95 more."""
    sat = generated_week("easy", 1)[0].satellites[0]

    def ledger(start: float, end: float = 0.0, margin: float = 0.0, **fields: float | None) -> ChargeLedger:
        other = replace(sat, battery=replace(sat.battery, **fields))  # type: ignore[arg-type]
        dark = ((0.0, 2000.0),)
        return ChargeLedger(
            other, HORIZON, shadows=dark, start_fraction=start, end_fraction=end, margin_fraction=margin
        )

    draw = Draw(start_s=1000.0, transmit=((1000.0, 2000.0),))
    # lowest: 0.9 - (2000 * 2.35 + 1000 * 8) / 0.95 / 144000 = 0.8072
    assert ledger(0.9).allows([draw])
    assert not ledger(0.9, floor_fraction=0.81, transmit_floor_fraction=0.81).allows([draw])
    assert not ledger(0.9, margin=0.06).allows([draw])
    # at its start: 0.9 - 1000 * 2.35 / 0.95 / 144000 = 0.8828
    assert not ledger(0.9, transmit_floor_fraction=0.89).allows([draw])
    assert not ledger(0.9).allows([replace(draw, least_charge_fraction=0.89)])
    assert not ledger(0.9, discharge_limit_w=10.0).allows([draw])
    assert ledger(0.9, discharge_limit_w=11.0).allows([draw])
    late = Draw(start_s=HORIZON.end_s - 2000.0, transmit=((HORIZON.end_s - 2000.0, HORIZON.end_s),))
    assert not ledger(0.95, end=1.0).allows([late])
    assert ledger(0.9, end=0.9).allows([late])


def test_the_store_gives_the_worthiest_first_and_keeps_what_may_fail() -> None:
    kinds = (
        DataKind(name="old", weight="low", on_board_byte=1000.0),
        DataKind(name="fresh", weight="high", made_byte_s=1.0, halves_every_days=1.0),
    )
    mission, _ = generated_week("easy", 1)
    sat = replace(
        mission.satellites[0], store=Store(partitions=(Partition(name="main", size_byte=1e6),), kinds=kinds)
    )
    store = StoreLedger(sat, mission.worth)
    parts = store.bring_down(100.0, 300.0, 0.9)
    assert [(part.kind, part.made_day, part.byte) for part in parts] == [
        ("fresh", 0, 100.0),
        ("old", None, 200.0),
    ]
    # a tenth of the 100 stays; on day 4 what was made on Monday has halved 3.5 times, 10 -> 0.88, under 1
    parts = store.bring_down(4.0 * 86400.0, 1e9, 0.9)
    assert [part.made_day for part in parts] == [3, 2, 1, None, 0]
    assert parts[-1].byte == pytest.approx(86400.0 - 90.0)
    assert parts[-2].byte == pytest.approx(1000.0 - 180.0)


@pytest.mark.parametrize(
    ("when_full", "old", "new"), [("refuse", 900.0, 100.0), ("overwrite_oldest", 800.0, 200.0)]
)
def test_a_full_store_loses_as_the_satellite_does(
    when_full: Literal["refuse", "overwrite_oldest"], old: float, new: float
) -> None:
    kinds = (
        DataKind(name="old", on_board_byte=900.0, halves_every_days=5.0),
        DataKind(name="new", made_byte_s=1.0, halves_every_days=5.0),
    )
    part = Partition(name="main", size_byte=1000.0, when_full=when_full)
    mission, _ = generated_week("easy", 1)
    sat = replace(mission.satellites[0], store=Store(partitions=(part,), kinds=kinds))
    carried = StoreLedger(sat, mission.worth).bring_down(200.0, 1e9, 1.0)
    assert {part.kind: part.byte for part in carried} == pytest.approx({"old": old, "new": new})
