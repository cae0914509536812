"""What every errand is given, and what it brings back."""

from collections.abc import Callable
from dataclasses import dataclass
from datetime import datetime
from pathlib import Path

from rich.text import Text


@dataclass(frozen=True, kw_only=True, slots=True)
class Desk:
    """Where an errand is run from; the clock and the screen come in here and nowhere else.

    Attributes:
        folder: the workspace.
        width: cells of the screen.
        clock: gives the aware moment it is.
        warn: shows a sentence beside the answer, at once.
        tell: shows how far long work has come.
    """

    folder: Path
    width: int
    clock: Callable[[], datetime]
    warn: Callable[[str], None]
    tell: Callable[[str], None]


@dataclass(frozen=True, kw_only=True, slots=True)
class Answer:
    """What a command has to say.

    Attributes:
        shown: a page for people, or bytes for programs, which go out as they are.
        exit_code: what the process ends with.
        afterwards: sentences for people once the answer is out, beside it and not part of it.
    """

    shown: Text | bytes
    exit_code: int = 0
    afterwards: tuple[str, ...] = ()
