"""The text of one file of element sets, and how a slip in it is shown."""

import codecs
import re
from dataclasses import dataclass, field

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, Mistake

MOST_LINES = 4_000_000  # some hundred bytes of memory each
MOST_MISTAKES = 200  # in one file; past that it is not a file of element sets with slips in it
_MOST_SHOWN = 80
_WIDEST = 100
_PACKED = (b"\x1f\x8b", b"PK\x03\x04", b"BZh", b"\xfd7zXZ")
_MARKS = (
    (codecs.BOM_UTF8, "utf-8"),
    (codecs.BOM_UTF32_LE, "utf-32-le"),  # before UTF-16, whose mark it begins with
    (codecs.BOM_UTF32_BE, "utf-32-be"),
    (codecs.BOM_UTF16_LE, "utf-16-le"),
    (codecs.BOM_UTF16_BE, "utf-16-be"),
)
_NOT_TEXT = re.compile(r"[\x00-\x08\x0e-\x1a\x1c-\x1f]")  # escape is left: a name with it is told as such


@dataclass(frozen=True, kw_only=True, slots=True)
class Page:
    """Decoded text; lines end in a bare line feed whatever the file had.

    Attributes:
        source: the file as the user would type it, or "standard input".
        lines: the text in lines, the first one is line 1.
    """

    source: str
    text: str = field(repr=False)
    lines: list[str] = field(repr=False)

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
        return Mistake(self.source, f"line {line}", shortened(text), allowed + shown)


@dataclass(frozen=True, kw_only=True, slots=True)
class Reading:
    """What one file gave: the sets that could be read, and every slip met on the way."""

    sets: list[ElementSet] = field(default_factory=list)
    mistakes: list[Mistake] = field(default_factory=list)

    @property
    def hopeless(self) -> bool:
        """True when there are so many slips that reading on would not help."""
        return len(self.mistakes) >= MOST_MISTAKES


def page_of(data: bytes | str, source: str) -> Page:
    """Return the content of a file as a page.

    A byte-order mark tells UTF-8, UTF-16 or UTF-32; with none it is UTF-8, and
    Latin-1 when it cannot be, as old lists of names are.

    Raises:
        InputError: empty, packed, not text, or longer than anyone can mean.
    """
    text = data.encode("utf-8", "replace").decode() if isinstance(data, str) else _decoded(data, source)
    text = text.removeprefix("\ufeff").rstrip("\x1a").replace("\r\n", "\n").replace("\r", "\n")
    if not text.strip():
        raise _refused(source, "no element set found: it is empty")
    odd = _NOT_TEXT.search(text)
    if odd is not None:
        line = text.count("\n", 0, odd.start()) + 1
        told = f"character {ord(odd[0]):#04x} in line {line}: no text file; save or fetch it as plain text"
        raise _refused(source, told)
    if text.count("\n") > MOST_LINES:
        raise _refused(source, f"more than {MOST_LINES} lines; split the file")
    return Page(source=source, text=text, lines=text.split("\n"))


def _decoded(data: bytes, source: str) -> str:
    """Return bytes as text."""
    if data.startswith(_PACKED):
        raise _refused(source, "this is a packed file (gzip, zip, ...); unpack it first")
    for mark, encoding in _MARKS:
        if data.startswith(mark):
            return data[len(mark) :].decode(encoding, "replace")
    try:
        return data.decode()
    except UnicodeDecodeError:
        return data.decode("latin-1")


def _refused(source: str, told: str) -> InputError:
    return InputError([Mistake(source, "", "", told)])


def printable(text: str) -> str:
    """Return `text` with "?" for what a terminal could act on or cannot show."""
    return "".join(char if char.isprintable() else "?" for char in text)


def shortened(text: str) -> str:
    """Return `text`, cut with dots when it is long."""
    return text if len(text) <= _MOST_SHOWN else text[: _MOST_SHOWN - 3] + "..."


def excerpt(line: str, column: int, width: int, template: str = "") -> str:
    """Return the template, the line and the carets, indented, each on a line of its own.

    Characters a terminal could act on, and those of uncertain width, are shown as "?"
    so that the caret stands where it should; a long line is cut around the slip.
    """
    begin = 0 if column + width <= _WIDEST else column - 1 - _WIDEST // 2
    cut = line[begin : begin + _WIDEST]
    plain = "".join(char if " " <= char <= "~" else "?" for char in cut)
    lead = "..." if begin else ""
    tail = "..." if begin + _WIDEST < len(line) else ""
    carets = " " * (len(lead) + column - 1 - begin) + "^" * max(1, min(width, _WIDEST // 2))
    rows = [template] if template else []
    return "".join(f"\n    {row}" for row in (*rows, lead + plain + tail, carets))
