"""The laws of the page: nothing wider than the width, nothing lost without a sign."""

import pytest
from hypothesis import given
from hypothesis import strategies as st
from rich.cells import cell_len

from passplan.render.typeset import BROKEN, Column, Page

WORDS = st.text(st.characters(exclude_categories=("C", "Z")), min_size=1, max_size=30)


@given(
    sentences=st.lists(st.lists(WORDS, min_size=1, max_size=12).map(" ".join), max_size=6),
    width=st.integers(20, 100),
)
def test_sentences_stay_inside_the_width_and_keep_every_word(sentences: list[str], width: int) -> None:
    page = Page(width)
    page.sentences(*sentences)
    lines = page.text().plain.splitlines()
    assert all(cell_len(line) <= width for line in lines)
    assert "".join("".join(lines).split()) == "".join("".join(sentences).split())


@given(
    rows=st.lists(st.tuples(WORDS, st.lists(WORDS, max_size=4).map(tuple), WORDS), min_size=1, max_size=5),
    width=st.integers(20, 120),
)
def test_a_table_stays_inside_the_width(rows: list[tuple[str, tuple[str, ...], str]], width: int) -> None:
    page = Page(width)
    page.table(
        [
            Column(heading="", cells=tuple(row[0] for row in rows), good=6, least=4),
            Column(heading="up", cells=tuple(row[1] for row in rows), good=10, least=5),
            Column(heading="rest", cells=tuple(row[2] for row in rows), rank=1),
        ],
        groups={0: "Mon 7 Dec"},
    )
    assert all(cell_len(line) <= width for line in page.text().plain.splitlines())


def test_a_sentence_is_not_broken_where_a_line_can_hold_it() -> None:
    page = Page(30)
    page.sentences("One sentence here.", "Another one there.", "A third.")
    assert page.text().plain == "One sentence here.\nAnother one there. A third."


def test_a_long_sentence_hangs_by_two() -> None:
    page = Page(24)
    page.sentences("A sentence that is longer than one line.", indent=2)
    assert page.text().plain == "  A sentence that is\n    longer than one\n    line."


def table(width: int, columns: list[Column]) -> list[str]:
    page = Page(width)
    page.table(columns)
    return page.text().plain.splitlines()


@pytest.mark.parametrize(
    ("width", "said"),
    [
        (60, "clock, load-114, load-115"),
        (30, "clock, load-114 +1"),
        (29, "clock +2"),
        (20, "clock +2"),
    ],
)
def test_a_list_says_how_much_of_it_is_left_out(width: int, said: str) -> None:
    cells = (("clock", "load-114", "load-115"),)
    beside = Column(heading="", cells=("12345678",))
    assert table(width, [beside, Column(heading="", cells=cells, least=8)]) == [f"  12345678  {said}"]


def test_a_list_of_long_names_says_how_many() -> None:
    cells = (("a-rather-long-name", "another"),)
    assert table(20, [Column(heading="", cells=("12345678",)), Column(heading="", cells=cells, least=8)]) == [
        "  12345678  2 in all"
    ]


def test_columns_of_the_highest_rank_go_first_and_together() -> None:
    columns = [
        Column(heading="", cells=("kept",)),
        Column(heading="", cells=("second-to-go",), rank=1),
        Column(heading="", cells=("first-to-go",), rank=2),
        Column(heading="", cells=("too",), rank=2),
    ]
    assert table(60, columns) == ["  kept  second-to-go  first-to-go  too"]
    assert table(35, columns) == ["  kept  second-to-go"]
    assert table(20, columns) == ["  kept  second-to-go"]
    assert table(20, [*columns, Column(heading="", cells=("123456",))]) == ["  kept  123456"]


def test_brief_cells_take_over_where_the_long_ones_do_not_fit() -> None:
    columns = [
        Column(heading="there", cells=("05:12 Dublin",), brief=("05:12",)),
        Column(heading="", cells=("x" * 8,)),
    ]
    page = Page(40)
    assert page.table(columns) == set()
    narrow = Page(20)
    assert narrow.table(columns) == {"there"}
    assert "05:12  xxxxxxxx" in narrow.text().plain


def test_wide_characters_are_measured_as_the_terminal_shows_them() -> None:
    """A fullwidth character takes two cells (Unicode Standard Annex 11)."""
    page = Page(40)
    page.table([Column(heading="", cells=("丘", "ab")), Column(heading="", cells=("1", "2"))])
    assert page.text().plain == "  丘  1\n  ab  2"


def test_styles_change_no_letter() -> None:
    page = Page(40)
    page.line("plain")
    page.line("broken", BROKEN)
    assert page.text().plain == "plain\nbroken"
    assert [str(span.style) for span in page.text().spans] == [BROKEN]


def test_a_label_wider_than_half_the_page_is_followed_by_its_text() -> None:
    page = Page(30)
    page.items("a-name-of-twenty-four-let", "and why", 25)
    assert page.text().plain == "  a-name-of-twenty-four-let:\n    and why"
