"""Standard output and error as a process may find them: closed, full, gone, or short of letters."""

import contextlib
import io
import os
import sys
from pathlib import Path
from typing import TextIO


def open_streams() -> None:
    """Make both streams safe to write to: a closed one leads nowhere, a letter it has not becomes "?"."""
    for name in ("stdout", "stderr"):
        if getattr(sys, name) is None:  # closed by whoever started us
            setattr(sys, name, Path(os.devnull).open("w", encoding="utf-8"))  # noqa: SIM115 - while we run
        if isinstance(stream := getattr(sys, name), io.TextIOWrapper):
            stream.reconfigure(errors="replace")


def take_stdout() -> None:
    """Keep standard output to ourselves: what a library says there on its own is dropped.

    Solvers do, from their C++ and in the middle of an answer that a program is to read.
    """
    with contextlib.suppress(OSError, ValueError):  # no file behind it
        ours = os.fdopen(os.dup(sys.stdout.fileno()), "w", encoding=sys.stdout.encoding, errors="replace")
        _lead_nowhere(sys.stdout)
        sys.stdout = ours


def write(stream: TextIO, content: str | bytes) -> None:
    """Write and flush; a closed pipe is no error, and after any error the stream swallows the rest.

    Raises:
        OSError: it cannot be written, other than because the reader has gone.
    """
    try:
        if isinstance(content, bytes):
            stream.flush()
            stream.buffer.write(content)
        else:
            stream.write(content)
        stream.flush()
    except BrokenPipeError:
        _lead_nowhere(stream)
    except OSError:
        _lead_nowhere(stream)
        raise


def _lead_nowhere(stream: TextIO) -> None:
    """Lead a stream nowhere, so that what is left in it does not fail once more at the end."""
    with contextlib.suppress(OSError, ValueError):
        nowhere = os.open(os.devnull, os.O_WRONLY)
        os.dup2(nowhere, stream.fileno())
        os.close(nowhere)
