"""Which set a week is planned with."""

from dataclasses import replace
from datetime import UTC, datetime, timedelta

import pytest

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError
from passplan.domain.moments import Horizon
from passplan.domain.satellite import Battery, Power, Radio, Satellite, Store
from passplan.workspace.element_choice import age_days, choose, file_of
from passplan.workspace.element_files import read_elements
from tests.workspace_elements.forms import GOES_TLE

MONDAY = datetime(2026, 12, 7, tzinfo=UTC)
WEEK = Horizon(week="2026-W50")


def a_set(
    days: float, name: str = "TEASEL-1", number: int | None = 270_449, file: str = "t.tle"
) -> ElementSet:
    """Return an invented set whose epoch is so many days after the Monday of the week."""
    one = read_elements(GOES_TLE, "x")[0]
    source = f"elements/{file}, line 2"
    return replace(one, name=name, number=number, epoch=MONDAY + timedelta(days=days), source=source)


def satellite(name: str = "Teasel-1", number: int | None = None) -> Satellite:
    """Return a satellite of which only name and number matter."""
    return Satellite(
        name=name,
        number=number,
        radio=Radio(
            down_hz=437e6,
            up_hz=437e6,
            bit_rate_bit_s=9600.0,
            transmit_power_w=1.0,
            receive_sensitivity_dbm=-117.0,
        ),
        power=Power(array_w=8.0, bus_load_w=1.0),
        battery=Battery(capacity_wh=37.0),
        store=Store(partitions=(), kinds=()),
    )


def told(sets: list[ElementSet], wanted: Satellite, pinned_file: str | None = None) -> str:
    """Return why no set is chosen."""
    with pytest.raises(InputError) as caught:
        choose(sets, wanted, WEEK, pinned_file)
    return str(caught.value)


def test_the_newest_set_that_is_not_after_the_start() -> None:
    sets = [a_set(days) for days in (-9.0, -2.5, 0.0, 0.001, 3.0)]
    assert choose(sets, satellite(), WEEK).epoch == MONDAY
    assert choose(reversed(sets), satellite(), WEEK).epoch == MONDAY
    assert choose(sets[:2], satellite(), WEEK).epoch == MONDAY - timedelta(days=2.5)


def test_of_one_epoch_the_text_with_more_digits_then_the_last_file() -> None:
    tle, omm = a_set(-1.0, file="z.tle"), replace(a_set(-1.0, file="a.omm"), kind="OMM KVN")
    other = replace(omm, source="elements/b.omm, line 2")
    assert choose([tle, omm, other], satellite(), WEEK) == other
    assert choose([other, omm, tle], satellite(), WEEK) == other


def test_a_number_counts_before_a_name() -> None:
    sets = [a_set(-1.0, number=5), a_set(-2.0, name="OBJECT C", number=7)]
    assert choose(sets, satellite(number=7), WEEK).name == "OBJECT C"


def test_a_set_without_a_number_fits_by_name() -> None:
    sets = [a_set(-3.0, name="OBJECT C", number=7), a_set(-1.0, name="teasel -1", number=None)]
    assert choose(sets, satellite(number=7), WEEK).number is None


@pytest.mark.parametrize("name", ["TEASEL-1", "teasel-1", " Tea sel-1"])
def test_capitals_and_blanks_do_not_matter_in_a_name(name: str) -> None:
    sets = [a_set(-1.0), a_set(-0.5, name="ROOK", number=9)]
    assert choose(sets, satellite(name), WEEK).name == "TEASEL-1"


def test_one_object_needs_no_name() -> None:
    sets = [a_set(-1.0, name="OBJECT C"), a_set(-3.0, name="")]
    assert choose(sets, satellite(), WEEK).epoch == MONDAY - timedelta(days=1)


def test_an_object_numbered_later_is_still_one() -> None:
    sets = [a_set(-3.0, number=None), a_set(-1.0, number=7)]
    assert choose(sets, satellite(), WEEK).number == 7


def test_a_pinned_file_is_taken_whatever_its_epoch() -> None:
    sets = [a_set(-1.0), a_set(2.0, file="later.tle"), a_set(1.0, file="later.tle")]
    for pinned in ("later.tle", "elements/later.tle"):
        assert choose(sets, satellite(), WEEK, pinned).epoch == MONDAY + timedelta(days=2)


def test_what_is_said_word_for_word() -> None:
    rook = a_set(-1.0, name="ROOK", number=9)
    assert told([], satellite()) == (
        "elements/: Teasel-1: no element set in the folder; add one with: passplan elements add FILE"
    )
    assert told([a_set(2.0), a_set(1.0)], satellite()) == (
        "elements/: Teasel-1: every element set is newer than the start of 2026-W50, "
        "2026-12-07T00:00:00Z; the "
        "oldest is of 2026-12-08T00:00:00Z (elements/t.tle, line 2); add an older set, plan a "
        "later week, or pin a file "
        "in mission.toml"
    )
    assert told([a_set(-1.0), rook], satellite(number=4)) == (
        "elements/: Teasel-1: no element set has catalogue number 4; the folder holds: 9 ROOK, "
        "270449 TEASEL-1; add "
        "its elements, or correct number in the satellite's file"
    )
    assert told([a_set(-1.0), rook], satellite("Thistle")) == (
        "elements/: Thistle: no element set has this name; the folder holds: 9 ROOK, 270449 "
        "TEASEL-1; write the "
        "number of the one meant in the satellite's file"
    )
    assert "several objects have this name; the folder holds: 8 TEASEL-1, 9 TEASEL-1" in told(
        [a_set(-1.0, number=8), a_set(-2.0, number=9)], satellite()
    )
    assert told([a_set(-1.0)], satellite(), "lost.tle") == (
        "elements/: Teasel-1: pinned to lost.tle, which is not there; there are: t.tle"
    )


def test_many_candidates_are_not_all_named() -> None:
    sets = [a_set(-1.0, name=f"OBJECT {number}", number=number) for number in range(1, 30)]
    assert "8 OBJECT 8 and 21 more;" in told(sets, satellite())


def test_age() -> None:
    assert age_days(a_set(-2.5), MONDAY) == 2.5
    assert age_days(a_set(1.0), MONDAY) == -1.0


def test_the_file_of_a_set() -> None:
    assert file_of(a_set(0.0, file="a, line 3.tle")) == "elements/a, line 3.tle"
    assert file_of(replace(a_set(0.0), source="standard input, item 12")) == "standard input"
    assert file_of(replace(a_set(0.0), source="by hand")) == "by hand"
