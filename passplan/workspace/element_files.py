"""Element sets from bytes and files, whatever format they are in."""

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, Mistake
from passplan.workspace.page import page_of
from passplan.workspace.tle import read_tle


def read_elements(data: bytes | str, source: str) -> list[ElementSet]:
    """Return every element set in `data`, in the order it holds them.

    Args:
        data: the content of a file.
        source: what to call it in messages and in `ElementSet.source`.

    Raises:
        InputError: every slip met, or that there is no element set in it.
    """
    text = data.decode("utf-8", "replace") if isinstance(data, bytes) else data
    reading = read_tle(page_of(text, source))
    if reading.mistakes:
        raise InputError(reading.mistakes)
    if not reading.sets:
        raise InputError([Mistake(source, "", "", "no element set found")])
    return reading.sets
