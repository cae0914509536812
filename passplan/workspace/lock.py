"""One writer at a time in a workspace."""

import fcntl
import os
from collections.abc import Iterator
from contextlib import contextmanager
from datetime import UTC, datetime
from pathlib import Path

from passplan.domain.errors import HeldError, InputError, Mistake
from passplan.domain.moments import iso

NAME = ".lock"


@contextmanager
def hold(folder: Path) -> Iterator[None]:
    """Hold a workspace for writing until the block ends, however it ends.

    The lock is the kernel's, so it falls with its process; the file only tells whose it is.

    Args:
        folder: the workspace; its `plans/` is made if it is not there.

    Raises:
        HeldError: another process holds it, with its number and since when.
        InputError: the folder cannot be written.
    """
    path = folder / "plans" / NAME
    try:
        path.parent.mkdir(exist_ok=True)
        handle = _taken(path)
    except OSError as error:
        told = f"cannot be written: {(error.strerror or str(error)).lower()}"
        raise InputError([Mistake(f"plans/{NAME}", "", "", told)]) from None
    try:
        yield
    finally:
        # Unlinked while still held: whoever waits then finds the file gone and makes a new one.
        path.unlink(missing_ok=True)
        os.close(handle)


def _taken(path: Path) -> int:
    """Return the descriptor of the lock file, held; HeldError where another process has it."""
    while True:
        handle = os.open(path, os.O_RDWR | os.O_CREAT | os.O_CLOEXEC, 0o644)
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
            if _still_there(handle, path):
                os.ftruncate(handle, 0)
                os.write(handle, f"{os.getpid()}\n".encode("ascii"))
                return handle
        except BlockingIOError:
            told = _holder(handle)
            os.close(handle)
            raise HeldError(told) from None
        except OSError:
            os.close(handle)
            raise
        os.close(handle)  # the holder before us took the file away; make a new one


def _still_there(handle: int, path: Path) -> bool:
    """Return whether an open file is the one that has the name now."""
    try:
        return os.path.samestat(os.fstat(handle), path.stat())
    except FileNotFoundError:
        return False


def _holder(handle: int) -> str:
    """Return who holds the lock, as the file tells: its text and when that was written."""
    number = os.pread(handle, 20, 0).decode("ascii", "replace").strip()
    since = datetime.fromtimestamp(int(os.fstat(handle).st_mtime), UTC)
    who = f"process {number}" if number.isdigit() else "another process"
    return f"this workspace is held by {who} since {iso(since)}; wait until it is done, or stop it"
