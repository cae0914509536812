"""How passplan speaks: the answer to standard output, progress and warnings to standard error."""

import contextlib
import sys
import time
from functools import cached_property

from rich.console import Console
from rich.status import Status
from rich.text import Text

from passplan.streams import write

LONG_S = 10.0  # work this long says how far it is, also where nobody watches a terminal
_NARROWEST, _WIDEST = 20, 400


class Voice:
    """The one writer to both streams; a reader that has gone away never disturbs the work.

    Args:
        every_step: tell each step on a line of its own, terminal or not.
    """

    def __init__(self, *, every_step: bool = False) -> None:
        self._every_step = every_step
        self._began = time.monotonic()
        self._held: list[str] = []
        self._status: Status | None = None

    @cached_property
    def _out(self) -> Console:
        return Console(file=sys.stdout, highlight=False, markup=False, emoji=False, soft_wrap=True)

    @cached_property
    def _err(self) -> Console:
        return Console(file=sys.stderr, highlight=False, markup=False, emoji=False, soft_wrap=True)

    @property
    def width(self) -> int:
        """Cells of the screen, or of what `COLUMNS` says; 80 where nobody knows."""
        return min(max(self._out.width, _NARROWEST), _WIDEST)

    def answer(self, shown: Text | bytes) -> None:
        """Write a page for people, or bytes for programs as they are.

        Raises:
            OSError: it cannot be written, other than because the reader has gone.
        """
        self.hush()
        if isinstance(shown, bytes):
            write(sys.stdout, shown)
        else:
            write(sys.stdout, _drawn(self._out, shown))

    def warn(self, sentence: str) -> None:
        """Write a sentence beside the answer; nothing in it can act on a terminal."""
        lines = (
            "".join(char if char.isprintable() else "?" for char in line) for line in sentence.split("\n")
        )
        text = Text("\n".join(lines))
        if self._status is not None:
            self._err.print(text)  # above the line that moves
            return
        with contextlib.suppress(OSError):  # with standard error gone there is nobody to tell
            write(sys.stderr, _drawn(self._err, text))

    def tell(self, step: str) -> None:
        """Tell what is being done: on the moving line of a terminal, else in lines once it takes long."""
        if self._every_step:
            self.warn(step)
        elif self._err.is_terminal and not self._err.is_dumb_terminal:
            if self._status is None:
                self._status = Status(Text(step), console=self._err, spinner="line")
                self._status.start()
            self._status.update(Text(step))
        else:
            self._held.append(step)
            if time.monotonic() - self._began > LONG_S:
                self.warn("\n".join(self._held))
                self._held.clear()

    def hush(self) -> None:
        """Take the moving line away."""
        if self._status is not None:
            self._status.stop()
            self._status = None


def _drawn(console: Console, text: Text) -> str:
    """Return a page as the console would write it, colour only where it has any."""
    # Written by us, as rich ends the process itself, with a code of its own, when a pipe is closed.
    with console.capture() as drawn:
        console.print(text)
    return drawn.get()
