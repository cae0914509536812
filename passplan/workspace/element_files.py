"""Element sets from bytes, files and folders; the format is told from the content, never from the name."""

import re
import stat
from collections.abc import Callable
from itertools import islice
from pathlib import Path

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, Mistake
from passplan.workspace.omm_csv import read_csv
from passplan.workspace.omm_json import read_json
from passplan.workspace.omm_kvn import read_kvn
from passplan.workspace.omm_xml import read_xml
from passplan.workspace.page import MOST_MISTAKES, Page, Reading, page_of, printable, shortened
from passplan.workspace.tle import is_element_line, read_tle

MOST_BYTE = 64_000_000

_KVN_LINE = re.compile(r"^[ \t]*(?:CCSDS_[A-Z]+_VERS|OBJECT_NAME|EPOCH)[ \t]*=", re.MULTILINE)
_JSON_START = re.compile(r'\[\s*[\[\]{"]|\{\s*["}]')


def read_elements(data: bytes | str, source: str) -> list[ElementSet]:
    """Return every element set in `data`, in the order it holds them.

    TLE of two and three lines, and OMM in KVN, XML, JSON and CSV.

    Args:
        data: the content of a file.
        source: what to call it in messages and in `ElementSet.source`.

    Raises:
        InputError: every slip met (the first 200 of a file), or that no set is in it.
    """
    reading = scan_elements(data, source)
    if reading.mistakes:
        raise InputError(reading.mistakes)
    return reading.sets


def scan_elements(data: bytes | str, source: str) -> Reading:
    """Return the sets of `data` that could be read, beside every slip; at least one of either."""
    try:
        page = page_of(data, source)
    except InputError as error:
        return Reading(mistakes=list(error.mistakes))
    reader = next((reader for fits, reader in _READERS if fits(page)), _nothing)
    reading = reader(page)
    if not reading.sets and not reading.mistakes:
        reading.mistakes.append(Mistake(source, "", "", "no element set found in it; fetch it again"))
    if reading.hopeless:
        told = f"stopped after {MOST_MISTAKES} slips; this may not be a file of element sets"
        reading.mistakes[MOST_MISTAKES:] = [Mistake(source, "", "", told)]
    return reading


def _is_tle(page: Page) -> bool:
    """Return whether one of the first two lines is an element line, whatever the name looks like."""
    lines = (line.strip() for line in page.lines)
    begin = islice((line for line in lines if line and not line.startswith("#")), 2)
    return any(map(is_element_line, begin))


def _is_xml(page: Page) -> bool:
    return page.text.lstrip().startswith("<")


def _is_json(page: Page) -> bool:
    return _JSON_START.match(page.text.lstrip()) is not None


def _is_kvn(page: Page) -> bool:
    return _KVN_LINE.search(page.text) is not None


def _is_csv(page: Page) -> bool:
    cells = page.text.lstrip().partition("\n")[0].upper().replace('"', "").split(",")
    return "EPOCH" in (cell.strip() for cell in cells)


def _has_element_lines(page: Page) -> bool:
    return any(is_element_line(line.strip()) for line in page.lines)


def _nothing(page: Page) -> Reading:
    """Return the slip of a text in which nothing looks like elements."""
    begin = next(line.strip() for line in page.lines if line.strip())
    told = "no element set found; it may be a TLE, or an OMM in KVN, XML, JSON or CSV"
    return Reading(mistakes=[Mistake(page.source, "", shortened(begin), told)])


_READERS: tuple[tuple[Callable[[Page], bool], Callable[[Page], Reading]], ...] = (
    (_is_tle, read_tle),
    (_is_xml, read_xml),
    (_is_json, read_json),
    (_is_kvn, read_kvn),
    (_is_csv, read_csv),
    (_has_element_lines, read_tle),
)


def read_file(path: Path, source: str | None = None) -> list[ElementSet]:
    """Return every element set of one file.

    Args:
        path: the file.
        source: what to call it; None takes the path as it is.

    Raises:
        InputError: it cannot be read, or what `read_elements` raises.
    """
    label = printable(str(path) if source is None else source)
    return read_elements(content(path, label), label)


def read_folder(path: Path) -> list[ElementSet]:
    """Return every element set of every file in a folder, files in the order of their names.

    Hidden files, backups that end in "~", texts that end in ".md" and folders inside are
    passed over; any other file must hold element sets.

    Raises:
        InputError: the slips of all files together, or that there is no such folder.
    """
    sets: list[ElementSet] = []
    mistakes: list[Mistake] = []
    for file in element_paths(path):
        label = f"{path.name}/{file.name}"
        try:
            sets.extend(read_file(file, label))
        except InputError as error:
            mistakes.extend(error.mistakes)
    if mistakes:
        raise InputError(mistakes)
    return sets


def element_paths(path: Path) -> list[Path]:
    """Return the files of a folder that are meant to hold element sets, in order.

    Raises:
        InputError: the folder is not there or cannot be read.
    """
    try:
        found = sorted(path.iterdir())
    except OSError as error:
        told = f"cannot be read as a folder: {(error.strerror or str(error)).lower()}"
        raise InputError([Mistake(str(path), "", "", told)]) from None
    return [
        file
        for file in found
        if not file.name.startswith(".")
        and not file.name.endswith("~")
        and file.suffix.lower() != ".md"
        and not file.is_dir()
    ]


def content(path: Path, label: str) -> bytes:
    """Return the bytes of a plain file of a size people may mean.

    Raises:
        InputError: it cannot be read, with the reason.
    """
    try:
        status = path.stat()
        if not stat.S_ISREG(status.st_mode):
            raise InputError([Mistake(label, "", "", "not a plain file")])
        if status.st_size > MOST_BYTE:
            told = f"{status.st_size / 1e6:.0f} MB is too large; at most {MOST_BYTE / 1e6:.0f} MB"
            raise InputError([Mistake(label, "", "", told)])
        return path.read_bytes()
    except (OSError, ValueError) as error:  # ValueError: a zero byte in the path
        reason = getattr(error, "strerror", None) or str(error)
        raise InputError([Mistake(label, "", "", f"cannot be read: {reason.lower()}")]) from None
