"""The text of one file of element sets, and how a slip in it is shown."""

from dataclasses import dataclass, field

from passplan.domain.elements import ElementSet
from passplan.domain.errors import Mistake

MOST_MISTAKES = 200
_WIDEST = 100


@dataclass(frozen=True, kw_only=True, slots=True)
class Page:
    """Decoded text; lines end in a bare line feed whatever the file had.

    Attributes:
        source: the file as the user would type it, or "standard input".
        lines: the text in lines, the first one is line 1.
    """

    source: str
    text: str
    lines: tuple[str, ...] = field(repr=False)

    def slip(
        self, *, line: int, text: str, allowed: str, column: int = 0, width: int = 1, template: str = ""
    ) -> Mistake:
        """Return a mistake in `line` that shows the line and carets under `width` characters from `column`.

        Args:
            line: counted from 1.
            text: the offending text as written.
            allowed: what is wrong and what to do.
            column: counted from 1; 0 shows no line.
            width: number of carets.
            template: a line to show above it, in the same columns.
        """
        shown = excerpt(self.lines[line - 1], column, width, template) if column else ""
        return Mistake(self.source, f"line {line}", text, allowed + shown)


@dataclass(frozen=True, kw_only=True, slots=True)
class Reading:
    """What one file gave: the sets that could be read, and every slip met on the way."""

    sets: list[ElementSet] = field(default_factory=list)
    mistakes: list[Mistake] = field(default_factory=list)


def page_of(text: str, source: str) -> Page:
    """Return `text` as a page, with every kind of line end made a line feed."""
    text = text.replace("\r\n", "\n").replace("\r", "\n")
    return Page(source=source, text=text, lines=tuple(text.split("\n")))


def excerpt(line: str, column: int, width: int, template: str) -> str:
    """Return the template, the line and the carets, indented, each on a line of its own.

    Characters a terminal could act on, and those of uncertain width, are shown as "?"
    so that the caret stands where it should; a long line is cut around the slip.
    """
    begin = 0 if column <= _WIDEST - 10 else column - 1 - _WIDEST // 2
    cut = line[begin : begin + _WIDEST]
    plain = "".join(char if " " <= char <= "~" else "?" for char in cut)
    lead = "..." if begin else ""
    tail = "..." if begin + _WIDEST < len(line) else ""
    carets = " " * (len(lead) + column - 1 - begin) + "^" * max(1, min(width, _WIDEST // 2))
    rows = [template, lead + plain + tail, carets] if template else [lead + plain + tail, carets]
    return "".join(f"\n    {row}" for row in rows)
