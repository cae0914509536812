"""A page of plain text laid out to a width: sentences, columns, one thin rule."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

from rich.cells import cell_len, set_cell_size
from rich.text import Text

STRONG = "bold"
THIN = "yellow"  # a thin margin
BROKEN = "bold red"  # a broken rule

_GAP = 2
_INDENT = 2

Cell = str | tuple[str, ...]


@dataclass(frozen=True, kw_only=True, slots=True)
class Column:
    """One column; a cell that is a tuple is a list, cut to "clock +2" or "3 in all" where room is short.

    Attributes:
        right: figures stand right-aligned.
        rank: 0 stays at any width; of the others the highest go first when the columns
            do not all have their good width.
        good: width at which it reads well; None takes the widest cell.
        least: narrowest useful width; None takes `good`.
        brief: shorter cells that take the place of all of `cells` where these do not fit;
            with any `good` they do before a ranked column has to go.
    """

    heading: str
    cells: tuple[Cell, ...]
    right: bool = False
    rank: int = 0
    good: int | None = None
    least: int | None = None
    brief: tuple[str, ...] = ()

    @property
    def natural(self) -> int:
        """Width at which nothing is shortened."""
        return max([cell_len(self.heading), *(cell_len(_whole(cell)) for cell in self.cells)])

    @property
    def comfortable(self) -> int:
        """Width wanted before anything of a higher rank has room."""
        if self.brief and self.good is not None:
            return self.narrowest
        return (
            self.natural if self.good is None else min(self.natural, max(self.good, cell_len(self.heading)))
        )

    @property
    def narrowest(self) -> int:
        """Width below which the column makes no sense."""
        if self.brief:
            return max([cell_len(self.heading), *(cell_len(cell) for cell in self.brief)])
        return (
            self.comfortable
            if self.least is None
            else min(self.natural, max(self.least, cell_len(self.heading)))
        )


class Page:
    """Collects lines, none of them wider than `width` cells."""

    def __init__(self, width: int) -> None:
        self.width = max(width, 20)
        self._lines: list[tuple[str, str]] = []

    def line(self, text: str = "", style: str = "") -> None:
        """Add one line, cut at the width."""
        self._lines.append((_cut(text, self.width).rstrip(), style))

    def rule(self) -> None:
        """Add the thin rule."""
        self.line("-" * self.width)

    def heading(self, text: str) -> None:
        """Begin a section: a blank line, then its name."""
        self.line()
        self.sentences(text, style=STRONG)

    def sentences(self, *sentences: str, style: str = "", indent: int = 0) -> None:
        """Add sentences, each kept whole on a line where it fits; a longer one hangs by two."""
        lead, line = " " * indent, ""
        for sentence in filter(None, sentences):
            joined = f"{line} {sentence}" if line else lead + sentence
            if cell_len(joined) <= self.width:
                line = joined
                continue
            if line:
                self.line(line, style)
            *full, line = _wrapped(sentence, self.width, indent)
            for part in full:
                self.line(part, style)
        if line:
            self.line(line, style)

    def items(self, label: str, text: str, label_width: int, style: str = "") -> None:
        """Add a labelled paragraph that hangs under its own beginning."""
        start = _INDENT + label_width + _GAP
        head = " " * _INDENT + _fit(label, label_width, right=False) + " " * _GAP
        if start > self.width // 2:
            self.sentences(f"{label}: {text}", indent=_INDENT, style=style)
            return
        for number, part in enumerate(_broken(text, self.width - start)):
            self.line((head if number == 0 else " " * start) + part, style)

    def table(
        self,
        columns: Sequence[Column],
        *,
        groups: Mapping[int, str] | None = None,
        styles: Mapping[int, str] | None = None,
    ) -> set[str]:
        """Add a table and return the headings of the columns that had to be brief.

        Args:
            columns: all of one length; those that do not fit are left out, highest rank first.
            groups: row number to a label (a day) written above that row; the first one
                shares its line with the headings.
            styles: row number to the style of that row.
        """
        kept, widths = _laid_out(columns, self.width - _INDENT)
        headings = _row([column.heading for column in kept], kept, widths)
        labels = dict(groups or {})
        if labels:
            first = _fit(labels.pop(0, ""), len(headings) - len(headings.lstrip()), right=False)
            headings = first + headings[len(first) :]
        if headings.strip():
            self.line(headings, STRONG)
        for number in range(len(kept[0].cells)):
            if number in labels:
                self.line(labels[number], STRONG)
            cells = [
                _shortened(column.cells[number], width) for column, width in zip(kept, widths, strict=True)
            ]
            self.line(_row(cells, kept, widths), (styles or {}).get(number, ""))
        return {column.heading for column in kept if column.brief and column.cells == column.brief}

    def text(self) -> Text:
        """Return the page with no line feed at its end; print it softly wrapped, or take `.plain`."""
        page = Text(no_wrap=True, overflow="ignore")
        for number, (line, style) in enumerate(self._lines):
            page.append("\n" if number else "")
            page.append(line, style or None)
        return page


def _laid_out(columns: Sequence[Column], width: int) -> tuple[list[Column], list[int]]:
    """Return the columns that fit into `width` and the width of each."""
    kept = list(columns)
    while sum(column.comfortable + _GAP for column in kept) > width + _GAP:
        last = max(column.rank for column in kept)
        if last == 0:
            break
        kept = [column for column in kept if column.rank < last]
    gaps = _GAP * (len(kept) - 1)
    widths = [column.narrowest for column in kept]
    spare = width - gaps - sum(widths)
    for wanted in ("comfortable", "natural"):
        for number, column in enumerate(kept):
            more = max(0, getattr(column, wanted) - widths[number])
            more = 0 if column.brief and more > spare else min(more, spare)
            widths[number] += more
            spare -= more
    for number, column in enumerate(kept):
        if column.brief and widths[number] < column.natural:
            kept[number] = replace(column, cells=column.brief)
    return kept, widths


def _row(cells: Sequence[str], columns: Sequence[Column], widths: Sequence[int]) -> str:
    """Return one line of a table."""
    parts = [
        _fit(cell, width, right=col.right) for cell, col, width in zip(cells, columns, widths, strict=True)
    ]
    return " " * _INDENT + (" " * _GAP).join(parts)


def _whole(cell: Cell) -> str:
    """Return a cell with nothing left out."""
    return cell if isinstance(cell, str) else ", ".join(cell) or "-"


def _shortened(cell: Cell, width: int) -> str:
    """Return a cell that fits: a list says how many of its items are left out."""
    text = _whole(cell)
    if cell_len(text) <= width or isinstance(cell, str):
        return _cut(text, width)
    for shown in range(len(cell) - 1, 0, -1):
        text = f"{', '.join(cell[:shown])} +{len(cell) - shown}"
        if cell_len(text) <= width:
            return text
    return _cut(f"{len(cell)} in all" if len(cell) > 1 else cell[0], width)


def _cut(text: str, width: int) -> str:
    """Return `text`, its end replaced by dots where it is wider than `width` cells."""
    if cell_len(text) <= width:
        return text
    return set_cell_size(text, max(width - 2, 0)).rstrip() + ".." if width > 2 else set_cell_size(text, width)


def _fit(text: str, width: int, *, right: bool) -> str:
    """Return `text` padded to `width` cells."""
    pad = " " * max(0, width - cell_len(text))
    return pad + text if right else text + pad


def _wrapped(sentence: str, width: int, indent: int) -> list[str]:
    """Return a long sentence as lines, all but the first further in by two."""
    lead, flat = " " * indent, " ".join(sentence.split())
    first, *rest = _broken(flat, width - indent)
    if not rest:
        return [lead + first]
    after = _broken(flat[len(first) :].strip(), width - indent - 2)
    return [lead + first, *(f"{lead}  {part}" for part in after)]


def _broken(text: str, width: int) -> list[str]:
    """Return `text` as lines of at most `width` cells, broken at spaces where there are any."""
    lines, line = [], ""
    for whole in text.split():
        word = whole
        while cell_len(word) > width:
            head = set_cell_size(word, width).rstrip()
            lines += [line, head] if line else [head]
            line, word = "", word[len(head) :]
        joined = f"{line} {word}".strip()
        if cell_len(joined) > width:
            lines.append(line)
            joined = word
        line = joined
    return [*lines, line] if line or not lines else lines
