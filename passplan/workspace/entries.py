"""One table of the workspace, with where it stands and the noun it became."""

from dataclasses import dataclass
from typing import Any

from passplan.domain.errors import Mistake
from passplan.domain.mission import Mission
from passplan.domain.people import Operator
from passplan.domain.requests import Command, Session
from passplan.domain.satellite import Satellite
from passplan.domain.station import Station
from passplan.workspace.documents import Document, Place
from passplan.workspace.nouns import shown

# By which key each noun is called.
CALLED = {
    Mission: "name",
    Satellite: "name",
    Station: "code",
    Operator: "handle",
    Command: "name",
    Session: "name",
}


@dataclass(frozen=True, kw_only=True, slots=True)
class Entry:
    """One table of the workspace and the noun it became.

    Attributes:
        data: the table as written; its name is known even where the rest is wrong.
        noun: None when something in it is wrong.
    """

    kind: type
    document: Document
    at: Place
    data: dict[str, Any]
    noun: Any

    @property
    def called(self) -> str:
        """What it is called, "" when that is missing or no text."""
        name = self.data.get(CALLED[self.kind])
        return name if isinstance(name, str) else ""

    def texts(self, key: str) -> list[str]:
        """Return the texts of a list, as written."""
        values = self.data.get(key)
        return [value for value in values if isinstance(value, str)] if isinstance(values, list) else []

    def mistake(self, place: Place, text: object, told: str) -> Mistake:
        """Return a mistake at a place inside this table."""
        return Mistake(self.document.file, self.document.key(self.at + place), shown(text), told)
