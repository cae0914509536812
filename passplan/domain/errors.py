"""What may go wrong with what people gave us, in words that help them."""

from collections.abc import Iterable
from dataclasses import dataclass


class PassplanError(Exception):
    """Something a person can put right; `exit_code` is what the process ends with."""

    exit_code = 2


class NothingVerifiedError(PassplanError):
    """No plan came through the second reading."""

    exit_code = 3


class HeldError(PassplanError):
    """Another passplan process is writing in this workspace."""

    exit_code = 4


@dataclass(frozen=True, slots=True)
class Mistake:
    """One slip in one place.

    Attributes:
        file: path as the user would type it, relative to the workspace.
        key: path of the key ("battery.floor_fraction", "mask[3]"), or "line 12".
        text: the offending text as written, "" when something is missing.
        allowed: what is wrong and what would be right, one sentence.
    """

    file: str
    key: str
    text: str
    allowed: str

    def __str__(self) -> str:
        """Return "file: key: 'text': sentence", empty parts left out."""
        shown = repr(self.text) if self.text else ""
        return ": ".join(part for part in (self.file, self.key, shown, self.allowed) if part)


class InputError(PassplanError):
    """Files nobody can plan with; carries every mistake found, not the first."""

    def __init__(self, mistakes: Iterable[Mistake]) -> None:
        self.mistakes = tuple(mistakes)
        super().__init__("\n".join(str(mistake) for mistake in self.mistakes))


class FieldError(ValueError):
    """Values of one noun that cannot be; raised at birth, all of them at once.

    Attributes:
        faults: (field name, offending value, what is allowed) of each.
    """

    def __init__(self, noun: str, faults: Iterable[tuple[str, object, str]]) -> None:
        self.faults = tuple(faults)
        told = "; ".join(f"{name} = {value!r}: {allowed}" for name, value, allowed in self.faults)
        super().__init__(f"{noun}: {told}")
