"""What a plan was made from: every input file by the digest of its bytes."""

import hashlib
from collections.abc import Iterable
from pathlib import Path

from passplan.workspace.documents import documents, read_bytes


def made_from(folder: Path, element_files: Iterable[Path] = ()) -> tuple[tuple[str, str], ...]:
    """Return (file, SHA-256 in hex) of every input of a plan, sorted by file.

    Args:
        folder: the workspace; all its TOML files count.
        element_files: the element files used; one outside the workspace goes by its
            name alone, so that the same inputs give the same plan on every machine.

    Raises:
        InputError: a file cannot be read.
    """
    paths = {file: folder / file for file in documents(folder).files}
    for path in element_files:
        inside = path.is_relative_to(folder)
        paths[path.relative_to(folder).as_posix() if inside else path.name] = path
    return tuple((file, hashlib.sha256(read_bytes(paths[file], file)).hexdigest()) for file in sorted(paths))
