"""Adding element sets to a workspace: one file each, and a file that is there is never touched."""

import contextlib
import re
import unicodedata
from collections.abc import Iterator
from dataclasses import replace
from itertools import count
from pathlib import Path
from typing import Literal

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, PassplanError
from passplan.workspace.element_files import element_paths, read_elements, read_file
from passplan.workspace.omm_kvn import to_omm_kvn
from passplan.workspace.tle_text import to_tle
from passplan.workspace.whole_file import claim, part_in

Outcome = Literal["added", "already there"]

_MOST_NAME = 40


def add(folder: Path, data: bytes, source: str) -> list[tuple[ElementSet, Path, Outcome]]:
    """Store every element set of `data` in a file of its own, and say where each one is.

    A TLE is stored as a TLE, an OMM of any form as an OMM in KVN; both keep every
    digit. A set that any file of the folder already holds is left where it is.

    Args:
        folder: the workspace's folder of element sets; made when it is not there.
        data: the content of a file, all of which must be good.
        source: what to call it in messages.

    Raises:
        InputError: every slip in `data`; nothing is stored then.
        PassplanError: a file cannot be written; those stored before stay.
    """
    sets = read_elements(data, source)
    try:
        folder.mkdir(exist_ok=True)
    except OSError as error:
        raise _unwritable(folder, error) from None
    held = _held(folder)
    done: list[tuple[ElementSet, Path, Outcome]] = []
    for element_set in sets:
        bare = _bare(element_set)
        there = held.get(bare)
        path = there or _store(folder, element_set)
        held[bare] = path
        done.append((element_set, path, "already there" if there else "added"))
    return done


def file_name(element_set: ElementSet) -> str:
    """Return a name such as "23581_2026-12-05T101112.omm": plain letters only, so it leads nowhere else."""
    if element_set.number is not None:
        label = f"{element_set.number:05d}"
    else:
        plain = unicodedata.normalize("NFKD", element_set.name).encode("ascii", "ignore").decode().lower()
        label = re.sub(r"[^a-z0-9]+", "-", plain)[:_MOST_NAME].strip("-") or "object"
    ending = "tle" if element_set.kind == "TLE" else "omm"
    return f"{label}_{element_set.epoch:%Y-%m-%dT%H%M%S}.{ending}"


def _bare(element_set: ElementSet) -> ElementSet:
    """Return the set without where it came from, so that equal ones are equal."""
    return replace(element_set, source="", kind="")


def _held(folder: Path) -> dict[ElementSet, Path]:
    """Return the sets the folder holds; files that cannot be read hold none."""
    held: dict[ElementSet, Path] = {}
    for path in element_paths(folder):
        with contextlib.suppress(InputError):
            for element_set in read_file(path):
                held.setdefault(_bare(element_set), path)
    return held


def _store(folder: Path, element_set: ElementSet) -> Path:
    """Write the set under the first free name and return its path."""
    text = to_tle(element_set) if element_set.kind == "TLE" else to_omm_kvn(element_set)
    try:
        with part_in(folder, text.encode()) as part:
            return next(path for path in _names(folder, element_set) if _claimed(part, path))
    except OSError as error:
        raise _unwritable(folder, error) from None


def _names(folder: Path, element_set: ElementSet) -> Iterator[Path]:
    """Yield names for a set: the plain one, then with _2, _3 and so on."""
    first = folder / file_name(element_set)
    yield first
    for number in count(2):
        yield first.with_stem(f"{first.stem}_{number}")


def _claimed(part: Path, path: Path) -> bool:
    """Give the written file the name `path`, unless something has it; return whether it worked."""
    try:
        claim(part, path)
    except FileExistsError:
        return False
    return True


def _unwritable(folder: Path, error: OSError) -> PassplanError:
    reason = (error.strerror or str(error)).lower()
    return PassplanError(f"{folder}: cannot store element sets here: {reason}; earlier files are untouched")
