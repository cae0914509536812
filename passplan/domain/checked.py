"""How a noun checks itself at birth, and the kinds of number and text it is made of.

The limits stand once, beside the field, as `annotated_types` metadata: this file
enforces them for objects made in code, and pydantic reads the same metadata when
the workspace is read, so that files and code cannot disagree about what is allowed.
"""

import math
import operator
import re
from dataclasses import fields
from functools import cache
from typing import Annotated, Any, ClassVar, TypeAlias, get_args, get_origin, get_type_hints

from annotated_types import Ge, Gt, Interval, Le, Lt

from passplan.domain.errors import FieldError

Fraction = Annotated[float, Interval(ge=0.0, le=1.0)]
Positive = Annotated[float, Interval(gt=0.0, le=1e15)]
NotNegative = Annotated[float, Interval(ge=0.0, le=1e15)]
Count = Annotated[int, Interval(ge=0, le=1_000_000)]
Decibel = Annotated[float, Interval(ge=-200.0, le=200.0)]
Loss = Annotated[float, Interval(ge=0.0, le=100.0)]
Hours = Annotated[float, Interval(ge=0.0, le=10_000.0)]
Minutes = Annotated[float, Interval(ge=0.0, le=100_000.0)]
Seconds = Annotated[float, Interval(ge=0.0, le=1e7)]
Azimuth = Annotated[float, Interval(ge=0.0, le=360.0)]
Elevation = Annotated[float, Interval(ge=-5.0, le=90.0)]

Hint: TypeAlias = Any  # the type hint of a field, or a part of one

_CODE = re.compile(r"[A-Z][A-Z0-9]{1,7}")
_MOST_TEXT = 200
_BOUNDS = (
    (Ge, "ge", operator.ge, "at least"),
    (Gt, "gt", operator.gt, "more than"),
    (Le, "le", operator.le, "at most"),
    (Lt, "lt", operator.lt, "less than"),
)


class Checked:
    """Base of the nouns: enforces field limits when an object is made."""

    __slots__ = ()
    __pydantic_config__: ClassVar[dict[str, object]] = {"extra": "forbid", "allow_inf_nan": False}

    def __post_init__(self) -> None:
        """Raise FieldError with every field outside its limits."""
        noun: type = type(self)
        faults = [
            (name, value, told)
            for name, limits in _limits(noun).items()
            if (told := _fault(value := getattr(self, name), limits))
        ]
        faults.extend(self._faults())
        if faults:
            raise FieldError(noun.__name__, faults)

    def _faults(self) -> list[tuple[str, object, str]]:
        """Return what only this noun can know is wrong; overridden where fields depend on each other."""
        return []


def text_fault(name: str, value: str) -> list[tuple[str, object, str]]:
    """Return a fault unless `value` is a visible one-line text of at most 200 characters.

    Control characters and the bidirectional marks would rewrite a terminal line or
    a calendar title, so they are refused where the name is born.
    """
    if not value.strip():
        return [(name, value, "must not be empty")]
    if len(value) > _MOST_TEXT:
        return [(name, value[:40] + "...", f"at most {_MOST_TEXT} characters")]
    if any(not char.isprintable() for char in value):
        return [(name, value, "one line of printable characters, no control characters")]
    return []


def code_fault(name: str, value: str) -> list[tuple[str, object, str]]:
    """Return a fault unless `value` is a short code: 2 to 8 of A-Z and 0-9, a letter first."""
    if _CODE.fullmatch(value):
        return []
    return [(name, value, "2 to 8 capital letters and digits, a letter first, such as QUA")]


@cache
def _limits(noun: type) -> dict[str, tuple[object, ...]]:
    """Return the limits of each field of `noun` that has any."""
    hints = get_type_hints(noun, include_extras=True)
    found = {field.name: tuple(_metadata(hints[field.name])) for field in fields(noun)}
    return {name: limits for name, limits in found.items() if limits}


def _metadata(hint: Hint) -> list[object]:
    """Return the limits in a type hint, also inside an optional one."""
    origin: object = get_origin(hint)
    if origin is Annotated:
        return list(hint.__metadata__)
    if origin is tuple:
        return []
    return [item for part in get_args(hint) for item in _metadata(part)]


def _fault(value: object, limits: tuple[object, ...]) -> str:
    """Return what is allowed when `value` breaks a limit, else an empty text."""
    if isinstance(value, bool) or not isinstance(value, int | float):
        return ""
    if not math.isfinite(value):
        return "a finite number"
    for limit in limits:
        bounds = list(limit) if isinstance(limit, Interval) else [limit]
        if not all(_holds(value, bound) for bound in bounds):
            return "must be " + " and ".join(_told(bound) for bound in bounds)
    return ""


def _holds(value: float, bound: object) -> bool:
    """Return whether one bound of annotated_types holds; an unknown kind always does."""
    return all(
        holds(value, getattr(bound, limit)) for kind, limit, holds, _ in _BOUNDS if isinstance(bound, kind)
    )


def _told(bound: object) -> str:
    """Return a bound in words."""
    for kind, limit, _, words in _BOUNDS:
        if isinstance(bound, kind):
            return f"{words} {getattr(bound, limit):g}"
    return str(bound)
