"""What no single file can know: names that must exist, orders that must end, people who must be there."""

from dataclasses import dataclass
from pathlib import Path
from typing import Any

from passplan.domain.errors import Mistake
from passplan.domain.mission import Mission
from passplan.workspace.documents import Document, Place


@dataclass(frozen=True, kw_only=True, slots=True)
class Entry:
    """One table of the workspace and the noun it became.

    Attributes:
        data: the table as written; its names are known even where the rest is wrong.
        noun: None when something in it is wrong.
    """

    kind: type
    document: Document
    at: Place
    data: dict[str, Any]
    noun: Any


def reference_mistakes(
    mission: Mission | None, document: Document | None, entries: list[Entry], folder: Path
) -> list[Mistake]:
    """Return the mistakes between files."""
    return []


def warnings(mission: Mission) -> list[str]:
    """Return what is legal and surely unintended."""
    return []
