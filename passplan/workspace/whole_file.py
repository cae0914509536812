"""Files that appear whole or not at all: written under a hidden name first, then given their own."""

import contextlib
import os
import tempfile
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path


@contextmanager
def part_in(folder: Path, content: bytes) -> Iterator[Path]:
    """Write a hidden file in `folder`, forced to the disk; what nobody renamed is gone afterwards."""
    handle, name = tempfile.mkstemp(prefix=".", suffix=".part", dir=folder)
    part = Path(name)
    try:
        with os.fdopen(handle, "wb") as file:
            file.write(content)
            file.flush()
            os.fsync(file.fileno())
        part.chmod(0o644)  # mkstemp gives a file to nobody else, and workspaces are shared
        yield part
    finally:
        part.unlink(missing_ok=True)


def claim(part: Path, path: Path) -> None:
    """Give `part` the name `path`; FileExistsError where that is taken, also by another process.

    A link refuses where a rename would overwrite.
    """
    try:
        os.link(part, path)
    except FileExistsError:
        raise
    except OSError:  # a file system without links, such as FAT: claim the name, then move over it
        os.close(os.open(path, os.O_CREAT | os.O_EXCL | os.O_WRONLY))
        part.replace(path)


def publish(path: Path, content: bytes) -> None:
    """Make `path` with `content` in one move; FileExistsError where it is there."""
    with part_in(path.parent, content) as part:
        claim(part, path)
    # The name itself is safe on the disk only once its folder is.
    with contextlib.suppress(OSError):
        folder = os.open(path.parent, os.O_RDONLY)
        try:
            os.fsync(folder)
        finally:
            os.close(folder)


def replace_with(path: Path, content: bytes) -> None:
    """Give a file new content in one move, so that nobody ever reads half of it."""
    with part_in(path.parent, content) as part:
        part.replace(path)
