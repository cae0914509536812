"""What `check` found: mistakes, doubts, and the values nobody wrote that are assumed."""

import textwrap
from collections.abc import Iterable, Sequence
from itertools import groupby

from rich.text import Text

from passplan.domain.errors import Mistake
from passplan.render.typeset import BROKEN, STRONG, THIN, Column, Page
from passplan.render.words import count, safe

_LEAST_KEY = 30
_SENTENCE = 190  # what `safe` shows whole


def check_text(
    mistakes: Sequence[Mistake], warnings: Sequence[str], assumed: Iterable[tuple[str, str, str]], width: int
) -> Text:
    """Return the findings, the answer first.

    Args:
        mistakes: what nobody can plan with, in the order of files.
        warnings: sentences about what is legal and surely unintended.
        assumed: (file, key, value with its unit) of each default in force, in the order of files.
        width: cells of the terminal.
    """
    page = Page(width)
    defaults = list(assumed)
    said = [count(len(mistakes), "mistake")] if mistakes else ["Nothing is wrong"]
    said += [count(len(warnings), "doubt")] if warnings else []
    said += [f"{count(len(defaults), 'value')} assumed"] if defaults else []
    page.sentences(f"{', '.join(said)}.", style=BROKEN if mistakes else STRONG)
    for file, group in groupby(mistakes, key=lambda mistake: mistake.file):
        page.heading(safe(file) or "The workspace")
        for mistake in group:
            _add_mistake(page, mistake)
    if warnings:
        page.heading("Doubts")
        for warning in warnings:
            page.sentences(safe(warning), indent=2, style=THIN)
    for file, rows in groupby(defaults, key=lambda row: row[0]):
        page.heading(f"Assumed in {safe(file)}")
        kept = list(rows)
        keys, values = (tuple(safe(row[index]) for row in kept) for index in (1, 2))
        page.table([Column(heading="", cells=keys, least=_LEAST_KEY), Column(heading="", cells=values)])
    return page.text()


def _add_mistake(page: Page, mistake: Mistake) -> None:
    """Add one mistake: where, what stands there, what is allowed."""
    where = safe(mistake.key)
    text = f"{safe(mistake.text)!r}" if mistake.text else ""
    page.sentences(": ".join(filter(None, (where, text))) or "the file", indent=2, style=STRONG)
    told, *lines = mistake.allowed.split("\n")
    page.sentences(*_whole(told), indent=4)
    for line in lines:  # the line of a file and a caret under it: the columns count
        page.line("".join(char if char.isprintable() else "?" for char in line))


def _whole(sentence: str) -> list[str]:
    """Return a long sentence in parts that are short enough to be shown whole."""
    return [safe(part) for part in textwrap.wrap(sentence, _SENTENCE)]
