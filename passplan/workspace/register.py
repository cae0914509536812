"""The register of editions, `plans/editions.csv`: which were made, when, and the digest of each file.

A plan carries no clock, so that the same input gives the same bytes; the moment an
edition was made stands here.
"""

import os
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from passplan.domain.errors import InputError, Mistake
from passplan.domain.moments import iso
from passplan.workspace.documents import read_text

REGISTER = "editions.csv"
HEADER = ("week", "edition", "made_utc", "sha256")


@dataclass(frozen=True, kw_only=True, slots=True)
class Entered:
    """One line of the register; `made_utc` is aware, `sha256` in hex."""

    week: str
    edition: int
    made_utc: datetime
    sha256: str


def enter(home: Path, line: Entered) -> None:
    """Append a line, whole or not at all, after whatever a torn earlier write left.

    Args:
        home: the folder of plans.
        line: what to write; its week must be a sound ISO week.

    Raises:
        OSError: it cannot be written.
    """
    row = ",".join((line.week, str(line.edition), iso(line.made_utc), line.sha256)) + "\n"
    with (home / REGISTER).open("a+b") as register:
        size = register.seek(0, os.SEEK_END)
        if size == 0:
            row = ",".join(HEADER) + "\n" + row
        else:
            register.seek(size - 1)
            row = row if register.read(1) == b"\n" else "\n" + row
        try:
            register.write(row.encode("ascii"))
            register.flush()
            os.fsync(register.fileno())
        except OSError:
            os.ftruncate(register.fileno(), size)
            raise


def entered(home: Path) -> tuple[Entered, ...]:
    """Return the lines of the register in order; none where there is no register.

    Raises:
        InputError: lines that are not of the register's form, all of them.
    """
    if not (home / REGISTER).exists():
        return ()
    file = f"{home.name}/{REGISTER}"
    lines: list[Entered] = []
    mistakes: list[Mistake] = []
    for number, text in enumerate(read_text(home / REGISTER, file).splitlines(), 1):
        if text in ("", ",".join(HEADER)):
            continue
        try:
            lines.append(_line(text))
        except ValueError:
            told = f"expected {', '.join(HEADER)}; put the line back as it was written, or take it out"
            mistakes.append(Mistake(file, f"line {number}", text[:60], told))
    if mistakes:
        raise InputError(mistakes)
    return tuple(lines)


def _line(text: str) -> Entered:
    """Return one line of the register; ValueError when it is of another form."""
    week, edition, made, digest = text.split(",")
    made_utc = datetime.fromisoformat(made)
    if made_utc.tzinfo is None:
        raise ValueError(made)
    return Entered(week=week, edition=int(edition), made_utc=made_utc, sha256=digest)
