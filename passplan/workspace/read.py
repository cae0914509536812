"""The workspace read into one Mission, or every mistake in it at once."""

from dataclasses import replace
from pathlib import Path
from typing import Any, TypeVar

from passplan.domain.errors import InputError, Mistake
from passplan.domain.mission import Mission
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.workspace.documents import Document, documents
from passplan.workspace.nouns import nearest, read_noun
from passplan.workspace.references import Entry, reference_mistakes

Noun = TypeVar("Noun")

# What a mission is made of but mission.toml does not hold.
ELSEWHERE = ("satellites", "stations", "operators", "commands", "sessions")


def read_workspace(folder: Path) -> Mission:
    """Return the mission a workspace describes.

    Raises:
        InputError: with every mistake of every file, in the order of files and lines.
    """
    found, mistakes = documents(folder)
    entries: list[Entry] = []
    mission: Mission | None = None
    for document in found:
        match document.kind:
            case "mission":
                mission, wrong = _mission(document)
                mistakes.extend(wrong)
            case "satellite":
                _add(Satellite, document.data, document, (), entries, mistakes)
            case "station":
                _add(Station, document.data, document, (), entries, mistakes)
            case "operators":
                _rows({"operator": Operator}, document, entries, mistakes)
            case "commands":
                _rows({"command": Command, "session": Session}, document, entries, mistakes)
    main = next(document for document in found if document.kind == "mission") if mission else None
    mistakes.extend(reference_mistakes(mission, main, entries, folder))
    if mistakes or mission is None:
        raise InputError(_in_order(mistakes, found))
    return replace(
        mission,
        satellites=_of(Satellite, entries),
        stations=_of(Station, entries),
        operators=_of(Operator, entries),
        commands=_of(Command, entries),
        sessions=_of(Session, entries),
    )


def _mission(document: Document) -> tuple[Mission | None, list[Mistake]]:
    """Return mission.toml as a mission with nothing in it yet."""
    data = {key: value for key, value in document.data.items() if key not in ELSEWHERE}
    mission, mistakes = read_noun(Mission, data | {"satellites": [], "stations": []}, document, ())
    for key in ELSEWHERE:
        if key in document.data:
            told = "not in this file; see satellites/, stations/, operators.toml and commands.toml"
            mistakes.append(Mistake(document.file, document.key((key,)), "", told))
    return mission, mistakes


def _rows(
    nouns: dict[str, type], document: Document, entries: list[Entry], mistakes: list[Mistake]
) -> None:
    """Read a file of [[tables]]: one noun each."""
    for key, rows in document.data.items():
        if key not in nouns:
            told = f"unknown table{nearest(key, list(nouns))}"
            mistakes.append(Mistake(document.file, document.key((key,)), "", told))
        elif not isinstance(rows, list):
            told = f"write each one under its own [[{key}]]"
            mistakes.append(Mistake(document.file, document.key((key,)), "", told))
        else:
            for number, row in enumerate(rows):
                _add(nouns[key], row, document, (key, number), entries, mistakes)


def _add(
    noun: type, data: Any, document: Document, at: tuple[str | int, ...], entries: list[Entry], mistakes: list[Mistake]
) -> None:
    """Read one noun and note where it stands."""
    made, wrong = read_noun(noun, data, document, at)
    mistakes.extend(wrong)
    entries.append(Entry(kind=noun, document=document, at=at, data=data if isinstance(data, dict) else {}, noun=made))


def _of(kind: type[Noun], entries: list[Entry]) -> tuple[Noun, ...]:
    """Return the nouns of one kind in the order in which they stand."""
    return tuple(entry.noun for entry in entries if isinstance(entry.noun, kind))


def _in_order(mistakes: list[Mistake], found: list[Document]) -> list[Mistake]:
    """Return mistakes by file, in the order read, and by line; the rest as they came."""
    order = {document.file: number for number, document in enumerate(found)}

    def place(mistake: Mistake) -> tuple[int, int]:
        _, _, rest = mistake.key.rpartition("line ")
        line = rest.rstrip(")").partition(",")[0]
        return order.get(mistake.file, -1), int(line) if line.isdigit() else 0

    return sorted(mistakes, key=place)
