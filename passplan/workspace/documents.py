"""The text files of a workspace: found, opened, understood as TOML, and where each key stands."""

import os
import re
import stat
import tomllib
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Literal, TypeAlias

from passplan.domain.errors import InputError, Mistake

Kind = Literal["mission", "satellite", "station", "operators", "commands"]
Place = tuple[str | int, ...]
Data: TypeAlias = Any  # what tomllib gives: tables, lists, texts, numbers, dates

MOST_BYTE = 5_000_000  # a hand-written file is some kilobytes; more is a slip or a trap
MOST_TEXT = 200

_HEADER = re.compile(r"\s*(\[\[?)\s*([^\[\]]+?)\s*\]\]?\s*(?:#.*)?$")
_KEY = re.compile(r"""\s*((?:[\w-]+|"[^"]*"|'[^']*')(?:\s*\.\s*(?:[\w-]+|"[^"]*"|'[^']*'))*)\s*=""")
_WHERE = re.compile(r"\s*\(at (?:line (\d+), column (\d+)|end of document)\)$")


@dataclass(frozen=True, kw_only=True, slots=True)
class Document:
    """One file that was read as TOML.

    Attributes:
        file: path relative to the workspace, as people would type it.
        data: the tables as tomllib gives them.
        lines: line number (from 1) of every table and key that starts a line.
    """

    kind: Kind
    file: str
    data: dict[str, Any]
    lines: dict[Place, int] = field(default_factory=dict)

    def key(self, place: Place) -> str:
        """Return a place as people read it, with its line: "operator[2].hours (line 31)"."""
        line = self.line(place)
        return self.path(place) + (f" (line {line})" if line else "")

    @staticmethod
    def path(place: Place) -> str:
        """Return a place as people read it, without its line; numbers count from 0."""
        text = ""
        for part in place:
            if isinstance(part, int):
                text += f"[{part}]"
            else:
                text += ("." if text else "") + (part if part.isprintable() else repr(part))
        return text

    def line(self, place: Place) -> int:
        """Return the line of a key, or of the table it would stand in; 0 when unknown."""
        while place:
            if place in self.lines:
                return self.lines[place]
            place = place[:-1]
        return 0


@dataclass(frozen=True, kw_only=True, slots=True)
class Contents:
    """The TOML files of a workspace.

    Attributes:
        files: every one that is there, in the order in which mistakes are told.
        documents: those that could be read.
        unread: kinds of the others.
        mistakes: why they could not.
    """

    files: tuple[str, ...]
    documents: tuple[Document, ...]
    unread: frozenset[Kind]
    mistakes: tuple[Mistake, ...]


def documents(folder: Path) -> Contents:
    """Return every TOML file of a workspace and what is wrong with the ones that cannot be read.

    Raises:
        InputError: the folder is not there, or is no workspace.
    """
    if not folder.is_dir():
        told = "not a folder" if os.path.lexists(folder) else "no such folder"
        raise InputError([Mistake(str(folder), "", "", f"{told}; make one with: passplan new {folder}")])
    if not os.path.lexists(folder / "mission.toml"):
        told = "no mission.toml here, so this is no workspace; make one with: passplan new DIR"
        raise InputError([Mistake(str(folder), "", "", told)])
    found: list[Document] = []
    unread: set[Kind] = set()
    mistakes: list[Mistake] = []
    paths = [(kind, path, path.relative_to(folder).as_posix()) for kind, path in _paths(folder, mistakes)]
    for kind, path, file in paths:
        try:
            found.append(_read(kind, path, file))
        except InputError as error:
            mistakes.extend(error.mistakes)
            unread.add(kind)
    return Contents(
        files=tuple(file for _, _, file in paths),
        documents=tuple(found),
        unread=frozenset(unread),
        mistakes=tuple(mistakes),
    )


def read_bytes(path: Path, file: str) -> bytes:
    """Return the bytes of a regular file of at most 5 MB.

    Raises:
        InputError: it cannot be read, with the reason.
    """
    try:
        status = path.stat()
        if stat.S_ISDIR(status.st_mode):
            raise InputError([Mistake(file, "", "", "a folder stands where a file is expected")])
        if not stat.S_ISREG(status.st_mode):
            raise InputError([Mistake(file, "", "", "not a plain file")])
        if status.st_size > MOST_BYTE:
            told = f"{status.st_size / 1e6:.1f} MB is too large; at most {MOST_BYTE / 1e6:g} MB"
            raise InputError([Mistake(file, "", "", told)])
        return path.read_bytes()
    except OSError as error:
        told = f"cannot be read: {(error.strerror or str(error)).lower()}"
        raise InputError([Mistake(file, "", "", told)]) from None


def read_text(path: Path, file: str) -> str:
    """Return the text of a UTF-8 file, a byte-order mark taken off.

    Raises:
        InputError: it cannot be read, or is not UTF-8, with the line.
    """
    raw = read_bytes(path, file)
    try:
        return raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw.count(b"\n", 0, error.start) + 1
        told = f"byte 0x{raw[error.start]:02x} is not UTF-8; save the file as UTF-8"
        raise InputError([Mistake(file, f"line {line}", "", told)]) from None


def _paths(folder: Path, mistakes: list[Mistake]) -> list[tuple[Kind, Path]]:
    """Return the files to read, in the order in which mistakes are told."""
    paths: list[tuple[Kind, Path]] = [("mission", folder / "mission.toml")]
    homes: tuple[tuple[Kind, str], ...] = (("satellite", "satellites"), ("station", "stations"))
    for kind, home in homes:
        if not (folder / home).is_dir():
            mistakes.append(Mistake(f"{home}/", "", "", f"no such folder; it holds one file a {kind}"))
            continue
        try:
            names = sorted(path for path in (folder / home).iterdir() if is_toml(path))
        except OSError as error:
            told = f"cannot be read: {(error.strerror or str(error)).lower()}"
            mistakes.append(Mistake(f"{home}/", "", "", told))
            continue
        if not names:
            mistakes.append(
                Mistake(f"{home}/", "", "", f"empty; add at least one {kind}, such as {home}/name.toml")
            )
        paths.extend((kind, path) for path in names)
    rest: tuple[tuple[Kind, str], ...] = (("operators", "operators.toml"), ("commands", "commands.toml"))
    paths.extend((kind, folder / name) for kind, name in rest if os.path.lexists(folder / name))
    return paths


def is_toml(path: Path) -> bool:
    """Return whether a file in a folder of the workspace is one to read; editors' hidden files are not."""
    return path.suffix.lower() == ".toml" and not path.name.startswith(".")


def _read(kind: Kind, path: Path, file: str) -> Document:
    """Return one file understood as TOML; InputError with line, column and the line itself."""
    text = read_text(path, file)
    try:
        data = tomllib.loads(text)
    except RecursionError:
        raise InputError([Mistake(file, "", "", "nested too deeply")]) from None
    except ValueError as error:  # TOMLDecodeError, and int() on thousands of digits
        raise InputError([_syntax(file, text, str(error))]) from None
    return Document(kind=kind, file=file, data=data, lines=_lines(text))


def _syntax(file: str, text: str, told: str) -> Mistake:
    """Return what tomllib said as a mistake with its line."""
    where = _WHERE.search(told)
    sentence = told[: where.start()] if where else told
    sentence = sentence[:1].lower() + sentence[1:]
    if where is None:
        return Mistake(file, "", "", f"not TOML: {sentence}")
    rows = text.splitlines() or [""]
    line = min(int(where[1] or len(rows)), len(rows))
    if sentence == "invalid value":
        sentence = "invalid value; a text needs quotes, a number a point and no unit"
    column = f", column {where[2]}" if where[2] else ""
    return Mistake(file, f"line {line}{column}", rows[line - 1].strip()[:MOST_TEXT], f"not TOML: {sentence}")


def _lines(text: str) -> dict[Place, int]:
    """Return the line of each table and key that starts a line of a TOML text.

    A reading for people only: a key inside a text of several lines would be
    listed too, and then a mistake shows a line that is a little off.
    """
    lines: dict[Place, int] = {}
    counts: dict[Place, int] = {}
    table: Place = ()
    for number, row in enumerate(text.splitlines(), 1):
        if header := _HEADER.match(row):
            table = _table(_parts(header[2]), counts, grows=header[1] == "[[")
            lines.setdefault(table, number)
            if header[1] == "[[":
                lines.setdefault(table[:-1], number)
        elif key := _KEY.match(row):
            lines.setdefault(table + _parts(key[1]), number)
    return lines


def _table(parts: Place, counts: dict[Place, int], *, grows: bool) -> Place:
    """Return a header's place, the number of its element put in where a list of tables is met."""
    place: Place = ()
    for depth, part in enumerate(parts, 1):
        place = (*place, part)
        if grows and depth == len(parts):
            counts[place] = counts.get(place, -1) + 1
        if place in counts:
            place = (*place, counts[place])
    return place


def _parts(dotted: str) -> Place:
    """Return the parts of a dotted key."""
    return tuple(part.strip().strip("\"'") for part in dotted.split("."))
