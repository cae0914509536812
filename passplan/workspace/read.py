"""The workspace read into one Mission, or every mistake in it at once."""

from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path
from typing import TypeVar

from passplan.domain.errors import InputError, Mistake
from passplan.domain.mission import Mission
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.workspace.documents import Data, Document, Kind, Place, documents
from passplan.workspace.entries import Entry
from passplan.workspace.nouns import nearest, read_noun
from passplan.workspace.references import reference_mistakes

Noun = TypeVar("Noun")

# A file that is one noun, and a file of [[tables]].
WHOLE: dict[Kind, type] = {"mission": Mission, "satellite": Satellite, "station": Station}
ROWS: dict[Kind, dict[str, type]] = {
    "operators": {"operator": Operator},
    "commands": {"command": Command, "session": Session},
}
# What a mission is made of and mission.toml does not hold.
ELSEWHERE = ("satellites", "stations", "operators", "commands", "sessions")


def read_workspace(folder: Path) -> Mission:
    """Return the mission a workspace describes.

    Raises:
        InputError: with every mistake of every file, in the order of files and lines.
    """
    entries = read_entries(folder)
    (mission,) = _of(Mission, entries)
    return replace(
        mission,
        satellites=_of(Satellite, entries),
        stations=_of(Station, entries),
        operators=_of(Operator, entries),
        commands=_of(Command, entries),
        sessions=_of(Session, entries),
    )


def read_entries(folder: Path) -> list[Entry]:
    """Return every table of a workspace with the noun it became; the mission has only what its file holds.

    Raises:
        InputError: with every mistake of every file, in the order of files and lines.
    """
    contents = documents(folder)
    mistakes = list(contents.mistakes)
    unsure = {noun for kind in contents.unread for noun in _nouns(kind)}
    entries: list[Entry] = []
    for document in contents.documents:
        if strays := _strays(document):
            mistakes.extend(strays)
            unsure.update(_nouns(document.kind))
        for noun, at, data in _tables(document):
            made, wrong = read_noun(noun, data, document, at)
            mistakes.extend(wrong)
            named = data if isinstance(data, dict) else {}
            entries.append(Entry(kind=noun, document=document, at=at, data=named, noun=made))
    unsure |= {Satellite, Station} - {entry.kind for entry in entries}  # an empty folder, told above
    mistakes.extend(reference_mistakes(entries, unsure, folder))
    if mistakes:
        raise InputError(_in_order(mistakes, contents.files))
    return entries


def _nouns(kind: Kind) -> tuple[type, ...]:
    """Return the nouns that files of a kind hold."""
    return (WHOLE[kind],) if kind in WHOLE else tuple(ROWS[kind].values())


def _strays(document: Document) -> list[Mistake]:
    """Return keys at the top of a file that belong elsewhere, or are no [[table]] of this file."""
    mistakes = []
    for key, value in document.data.items():
        told = ""
        if document.kind in ROWS:
            nouns = ROWS[document.kind]
            if key not in nouns:
                told = f"unknown table{nearest(key, list(nouns))}"
            elif not isinstance(value, list):
                told = f"write each one under its own [[{key}]]"
        elif document.kind == "mission" and key in ELSEWHERE:
            told = "not in this file; see satellites/, stations/, operators.toml and commands.toml"
        if told:
            mistakes.append(Mistake(document.file, document.key((key,)), "", told))
    return mistakes


def _tables(document: Document) -> Iterator[tuple[type, Place, Data]]:
    """Yield (noun, place, table) of each noun a file holds."""
    if document.kind == "mission":  # a mission with nothing in it yet
        kept = {key: value for key, value in document.data.items() if key not in ELSEWHERE}
        yield Mission, (), kept | {"satellites": [], "stations": []}
    elif document.kind in WHOLE:
        yield WHOLE[document.kind], (), document.data
    else:
        for key, noun in ROWS[document.kind].items():
            rows = document.data.get(key)
            for number, row in enumerate(rows if isinstance(rows, list) else ()):
                yield noun, (key, number), row


def _of(kind: type[Noun], entries: list[Entry]) -> tuple[Noun, ...]:
    """Return the nouns of one kind in the order in which they stand."""
    return tuple(entry.noun for entry in entries if isinstance(entry.noun, kind))


def _in_order(mistakes: list[Mistake], files: tuple[str, ...]) -> list[Mistake]:
    """Return mistakes by file, in the order read, and by line; the rest as they came."""
    order = {file: number for number, file in enumerate(files)}

    def place(mistake: Mistake) -> tuple[int, int]:
        line = mistake.key.rpartition("line ")[2].rstrip(")").partition(",")[0]
        return order.get(mistake.file, -1), int(line) if line.isdigit() else 0

    return sorted(mistakes, key=place)
