"""OMM as XML, alone or several in an NDM. CCSDS 505.0-B-3.

Expat is told to stop at a document type, so no entity can be declared: neither a
small file that swells to gigabytes nor one that reads other files gets through.
"""

from xml.parsers.expat import ExpatError, ParserCreate

from passplan.domain.errors import Mistake
from passplan.workspace.omm import KEYWORDS, Record, Value, add_record, repeated
from passplan.workspace.page import Page, Reading


def read_xml(page: Page) -> Reading:
    """Return the sets of every <omm> in a page, and every slip in it."""
    return _Messages(page).read()


class _StopError(Exception):
    """Reading on would be wrong or useless."""


class _Messages:
    """Gathers the leaves of each <omm> while expat walks through the page."""

    def __init__(self, page: Page) -> None:
        self.page = page
        self.reading = Reading()
        self.record: Record | None = None
        self.leaf = ""
        self.unit = ""
        self.chunks: list[Value] = []
        self.body = page.text.lstrip()
        self.lines_before = page.text.count("\n", 0, len(page.text) - len(self.body))
        self.parser = ParserCreate()
        self.parser.StartDoctypeDeclHandler = self.doctype
        self.parser.StartElementHandler = self.start
        self.parser.EndElementHandler = self.end
        self.parser.CharacterDataHandler = self.characters

    def read(self) -> Reading:
        """Walk through the page."""
        try:
            self.parser.Parse(self.body, True)  # noqa: FBT003 - expat takes it by place only
        except _StopError:
            pass
        except ExpatError as error:
            self.reading.mistakes.append(self.broken(error))
        return self.reading

    def line(self) -> int:
        """Return the line expat is in."""
        return self.parser.CurrentLineNumber + self.lines_before

    def broken(self, error: ExpatError) -> Mistake:
        """Return the slip of text that is no XML."""
        line = min(self.line(), len(self.page.lines))
        reason = str(error).partition(":")[0]
        told = f"not well-formed XML ({reason}); the file was cut or changed, fetch it again"
        return self.page.slip(line=line, text="", allowed=told, column=error.offset + 1)

    def doctype(self, name: str, *_: object) -> None:
        """Refuse a document type."""
        if name.lower() == "html":
            told = (
                "a web page and no element set: the download failed; open its address in a browser to see why"
            )
        else:
            told = "a DOCTYPE has no place in an OMM and is refused; fetch the set where it comes without one"
        self.reading.mistakes.append(self.page.slip(line=self.line(), text=f"<!DOCTYPE {name}", allowed=told))
        raise _StopError

    def start(self, tag: str, attributes: dict[str, str]) -> None:
        """Begin a message or a leaf of one."""
        name = tag.rpartition(":")[2]
        if name == "omm" and self.record is None:
            if self.reading.hopeless:
                raise _StopError
            line = self.line()
            self.record = Record(place=f"line {line}", kind="OMM XML", line=line, values={})
        self.leaf = name if name in KEYWORDS else ""
        self.unit = attributes.get("units", "")
        self.chunks.clear()

    def characters(self, data: str) -> None:
        """Keep the text of a leaf."""
        if self.leaf and self.record is not None:
            column = self.parser.CurrentColumnNumber + 1 + len(data) - len(data.lstrip())
            self.chunks.append(Value(data, self.line(), column))

    def end(self, tag: str) -> None:
        """End a leaf, or a message."""
        name = tag.rpartition(":")[2]
        if self.record is not None and name == self.leaf:
            self.keep(self.record, name)
        elif self.record is not None and name == "omm":
            add_record(self.page, self.record, self.reading)
            self.record = None
        self.leaf = ""

    def keep(self, record: Record, keyword: str) -> None:
        """Put the text of a leaf into its record."""
        text = "".join(chunk.text for chunk in self.chunks).strip()
        if not text:
            return
        first = next(chunk for chunk in self.chunks if chunk.text.strip())
        value = Value(text, first.line, first.column, self.unit)
        if keyword in record.values:
            self.reading.mistakes.append(repeated(self.page, record, keyword, value))
        else:
            record.values[keyword] = value
