"""Commands of every day, one a day, and what others wait for."""

from datetime import UTC, datetime, timedelta

from passplan.domain.moments import Horizon
from passplan.domain.requests import After, Command, occurrences

WEEK = Horizon(week="2026-W50", lookahead_h=24.0)
MONDAY = datetime(2026, 12, 7, tzinfo=UTC)


def command(
    name: str, *after: str, daily: bool = False, begin: float | None = None, end: float | None = None
) -> Command:
    """Return a command; begin and end are days after Monday 00:00."""
    earliest, deadline = (None if day is None else MONDAY + timedelta(days=day) for day in (begin, end))
    links = tuple(After(command=other) for other in after)
    return Command(
        name=name,
        satellite="Finch-1",
        every_day=daily,
        earliest_utc=earliest,
        deadline_utc=deadline,
        after=links,
    )


def waits(*commands: Command) -> dict[str, list[str]]:
    """Return name to the names waited for, for each command of the horizon."""
    return {one.name: [link.command for link in one.after] for one in occurrences(commands, WEEK)}


def test_one_a_day_each_within_its_day_and_its_own_limits() -> None:
    found = occurrences((command("clock", daily=True, begin=1.5, end=3.25),), WEEK)
    assert [(one.name, one.earliest_utc, one.deadline_utc) for one in found] == [
        ("clock 2026-12-08", MONDAY + timedelta(days=1.5), MONDAY + timedelta(days=2)),
        ("clock 2026-12-09", MONDAY + timedelta(days=2), MONDAY + timedelta(days=3)),
        ("clock 2026-12-10", MONDAY + timedelta(days=3), MONDAY + timedelta(days=3.25)),
    ]
    assert not any(one.every_day for one in found)


def test_daily_ones_wait_for_that_of_the_same_day() -> None:
    found = waits(command("clock", daily=True), command("trim", "clock", daily=True))
    assert len(found) == 16
    assert all(found[name] == [name.replace("trim", "clock")] for name in found if name.startswith("trim"))


def test_a_single_one_waits_for_that_of_the_first_day_it_may_go() -> None:
    clock = command("clock", daily=True)
    assert waits(clock, command("load", "plain", "clock"), command("plain"))["load"] == [
        "plain",
        "clock 2026-12-07",
    ]
    assert waits(clock, command("load", "clock", begin=3.9))["load"] == ["clock 2026-12-10"]


def test_where_the_day_has_none_the_last_before_counts_else_the_first_after() -> None:
    early, late = command("clock", daily=True, end=2.5), command("clock", daily=True, begin=2.5)
    assert waits(early, command("load", "clock", begin=5.0))["load"] == ["clock 2026-12-09"]
    assert waits(late, command("load", "clock"))["load"] == ["clock 2026-12-09"]
    trims = waits(late, command("trim", "clock", daily=True))
    assert trims["trim 2026-12-07"] == ["clock 2026-12-09"]
    assert trims["trim 2026-12-12"] == ["clock 2026-12-12"]


def test_what_the_horizon_has_none_of_is_not_waited_for() -> None:
    assert waits(command("clock", daily=True, end=-2.0), command("load", "clock")) == {"load": []}
