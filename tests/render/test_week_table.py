"""The week on a screen: exact at two widths, inside it at every other, honest when something is wrong."""

import re
from collections.abc import Callable
from dataclasses import replace
from io import StringIO
from pathlib import Path

import pytest
from rich.console import Console

from passplan.domain.mission import Mission
from passplan.domain.plan import Plan
from passplan.domain.rules import Rule
from passplan.domain.verdict import Finding
from passplan.render.week_table import week_text
from tests.render.sample_week import commands, contact, mission, plan, satellite, verdict

GOLDEN = Path(__file__).parent / "golden"


def said(plan: Plan, width: int = 80, of: Mission | None = None) -> str:
    return week_text(plan, of or mission(), width).plain


@pytest.mark.parametrize("width", [80, 140])
def test_the_week_reads_exactly_so(width: int) -> None:
    assert said(plan(), width) == (GOLDEN / f"week_{width}.txt").read_text(encoding="utf-8").removesuffix(
        "\n"
    )


@pytest.mark.parametrize("width", range(40, 200, 7))
def test_no_line_is_wider_than_the_screen(width: int) -> None:
    assert max(len(line) for line in said(plan(), width).splitlines()) <= width


@pytest.mark.parametrize("width", [80, 140])
def test_the_words_are_plain_ascii_and_go_through_a_pipe_unchanged(width: int) -> None:
    text = said(plan(), width)
    assert text.isascii()
    sink = StringIO()
    Console(file=sink, width=20).print(week_text(plan(), mission(), width), soft_wrap=True)
    assert sink.getvalue() == text + "\n"


def test_colour_changes_no_letter() -> None:
    sink = StringIO()
    console = Console(file=sink, color_system="truecolor", force_terminal=True)
    console.print(week_text(plan(), mission(), 80), soft_wrap=True)
    assert "\x1b[1m" in sink.getvalue()
    assert re.sub(r"\x1b\[[0-9;]*m", "", sink.getvalue()) == said(plan()) + "\n"


def test_nothing_in_eighty_columns_is_cut() -> None:
    table = said(plan()).split("\n\n")[1]
    assert ".." not in table
    for each in plan().contacts:
        assert each.id in table


def with_a_must_missing(plan: Plan) -> Plan:
    must = replace(plan.commands[-1], must=True, reason="no pass")
    return replace(plan, good=False, commands=(*plan.commands[:-1], must))


def with_the_floor_not_held(plan: Plan) -> Plan:
    low = replace(plan.batteries[0], floor_in_force_fraction=0.55, lowest_fraction=0.55)
    return replace(plan, good=False, batteries=(low,))


def with_a_rule_broken(plan: Plan) -> Plan:
    finding = Finding(rule=Rule.REST, where="QX3AB", sentence="rests 7 h 12 min, 48 min too little")
    return replace(plan, verdict=replace(verdict(), findings=(finding,)))


@pytest.mark.parametrize(
    ("change", "headline"),
    [
        (lambda plan: plan, "proven and verified"),
        (lambda plan: replace(plan, proven=False), "verified, but time ran out before the proof"),
        (lambda plan: replace(plan, verdict=None), "not verified, not to be published"),
        (with_a_must_missing, "proven and verified, but 1 must cannot go up"),
        (with_the_floor_not_held, "proven and verified, but the battery floor is not held"),
        (with_a_rule_broken, "NOT to be used, the second reading found 1 broken rule"),
        (
            lambda plan: replace(plan, good=False, proven=False),
            "verified, not proven, but not all that must be is met",
        ),
    ],
)
def test_the_first_line_says_how_far_to_trust_the_plan(change: Callable[[Plan], Plan], headline: str) -> None:
    first = said(change(plan()), 120).splitlines()[0]
    assert first == f"Week 2026-W50, edition 1, Teasel-1: {headline}"


def test_a_must_not_placed_stands_before_the_wishes() -> None:
    extra = replace(
        commands()[-1], name="reset", must=True, left_for_next_week=False, reason="charge would fall to 17 %."
    )
    text = said(replace(plan(), good=False, commands=(*commands(), extra)))
    lines = text.splitlines()
    assert lines[3] == "Not placed: reset, a must, charge would fall to 17 %."
    assert "  reset     a must; charge would fall to 17 %." in lines


def test_many_commands_not_placed_are_counted_above_and_told_below() -> None:
    missing = tuple(replace(commands()[-2], name=f"wish-{number}") for number in range(5))
    text = said(replace(plan(), commands=missing))
    assert "2 more are not placed; the reasons stand below." in text
    assert text.count("wish-4") == 1


def test_the_gap_is_said_when_nothing_was_proven() -> None:
    text = said(replace(plan(), proven=False))
    assert "Its worth is within 0.1 % of the best possible." in text


def test_a_broken_rule_is_told_with_place_and_figure() -> None:
    text = said(with_a_rule_broken(plan()))
    assert "Broken: rest, QX3AB: rests 7 h 12 min, 48 min too little" in text


def test_the_floor_in_force_is_explained() -> None:
    text = said(with_the_floor_not_held(plan()))
    assert "With no contact at all it would fall to 55 %: that is the floor in force." in text


def test_a_silence_beyond_the_limit_is_a_warning() -> None:
    longer = replace(plan().silences[0], to_s=plan().silences[0].from_s + 30 * 3600)
    text = " ".join(said(replace(plan(), silences=(longer,))).split())
    assert (
        "Longest silence 30 h 00 min (limit 26 h), Wed 22:05 to Fri 04:05: for longer than the limit" in text
    )


def test_an_old_element_set_is_named_as_one() -> None:
    old = replace(plan().elements[0], old=True, number=None, name="")
    text = " ".join(said(replace(plan(), elements=(old,))).split())
    assert "Elements: Teasel-1, no catalogue number" in text
    assert "That is too old for good times" in text


def test_an_empty_week_is_still_an_answer() -> None:
    bare = replace(plan(), contacts=(), commands=(), sessions=(), batteries=(), data=(), shares=())
    bare = replace(bare, silences=(), elements=(), steps=(), gives={}, notices=("No pass at all.",))
    assert said(bare).splitlines()[:3] == [
        "Week 2026-W50, edition 1, Teasel: proven and verified",
        "No contact is planned.",
        "No pass at all.",
    ]


def test_several_satellites_are_told_apart() -> None:
    second = replace(plan().batteries[0], satellite="Teasel-2", lowest_fraction=0.65)
    other = contact("SKE-09", (2, 22, 30), 300, ("QY1K",), satellite="Teasel-2")
    stuck = replace(plan().data[0], satellite="Teasel-2", on_board_end_byte=0.0, down_byte=0.0)
    both = replace(
        plan(),
        contacts=(*plan().contacts, other),
        batteries=(*plan().batteries, second),
        data=(*plan().data, stuck),
    )
    text = said(both, 100, replace(mission(), satellites=(satellite(), satellite("Teasel-2"))))
    assert "Lowest charge of Teasel-2 65 % (floor 60 %)." in text
    assert "Battery of Teasel-2: lowest 65 %" in text
    (row,) = [line for line in text.splitlines() if line.startswith("  images  Teasel-2")]
    assert row.split()[-2:] == ["-", "-"]
    (line,) = [line for line in text.splitlines() if " SKE-09 " in line]
    assert "Teasel-2" in line


def test_hostile_names_can_neither_break_a_line_nor_colour_the_screen() -> None:
    nasty = "\x1b[2J\r\nx, [bold red]y[/] \u202e" + "z" * 10_000
    worse = replace(
        plan(),
        contacts=tuple(replace(each, operators=(nasty,), satellite=nasty) for each in plan().contacts),
        commands=tuple(replace(each, name=nasty, reason=nasty) for each in commands()),
        notices=(nasty,),
        gives={nasty: nasty},
    )
    for width in (80, 140):
        text = said(worse, width)
        assert all(len(line) <= width for line in text.splitlines())
        assert all(char.isprintable() or char == "\n" for char in text)
        assert "[bold red]" in text


def test_an_older_plan_of_a_station_no_longer_there_can_be_read() -> None:
    text = said(plan(), 80, replace(mission(), stations=(), operators=()))
    assert "05:12-05:19  QUA-01  05:12 UTC" in text


def test_long_places_give_way_to_one_line_that_names_them() -> None:
    zone = "America/Argentina/Buenos_Aires"
    moved = replace(mission(), stations=tuple(replace(each, time_zone=zone) for each in mission().stations))
    text = said(plan(), 72, moved)
    assert "\nLocal time: Buenos Aires at LOW, Buenos Aires at QUA," in text
    assert "05:12-05:19  QUA-01  02:12 " in text
