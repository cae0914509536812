"""How a noun checks itself at birth, and the kinds of number and text it is made of.

The limits stand once, beside the field, as `annotated_types` metadata: this file
enforces them for objects made in code, and pydantic reads the same metadata when
the workspace is read, so that files and code cannot disagree about what is allowed.
"""

import math
import re
from dataclasses import fields
from functools import cache
from typing import Annotated, Any, get_args, get_origin, get_type_hints

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

_CODE = re.compile(r"[A-Z][A-Z0-9]{1,7}")
_MOST_TEXT = 200


class Checked:
    """Base of the nouns: enforces field limits when an object is made."""

    __slots__ = ()
    __pydantic_config__ = {"extra": "forbid", "allow_inf_nan": False}

    def __post_init__(self) -> None:
        """Raise FieldError with every field outside its limits."""
        faults = [
            (name, value, told)
            for name, limits in _limits(type(self)).items()
            if (told := _fault(value := getattr(self, name), limits))
        ]
        faults.extend(self._faults())
        if faults:
            raise FieldError(type(self).__name__, faults)

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
    found = {field.name: tuple(_metadata(hints[field.name])) for field in fields(noun)}  # type: ignore[arg-type]
    return {name: limits for name, limits in found.items() if limits}


def _metadata(hint: Any) -> list[object]:
    """Return the limits in a type hint, also inside an optional one."""
    if get_origin(hint) is Annotated:
        return list(hint.__metadata__)
    if get_origin(hint) is tuple:
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
    match bound:
        case Ge(ge=low):
            return bool(value >= low)  # type: ignore[operator]
        case Gt(gt=low):
            return bool(value > low)  # type: ignore[operator]
        case Le(le=high):
            return bool(value <= high)  # type: ignore[operator]
        case Lt(lt=high):
            return bool(value < high)  # type: ignore[operator]
    return True


def _told(bound: object) -> str:
    """Return a bound in words."""
    match bound:
        case Ge(ge=low):
            return f"at least {low:g}"  # type: ignore[str-format]
        case Gt(gt=low):
            return f"more than {low:g}"  # type: ignore[str-format]
        case Le(le=high):
            return f"at most {high:g}"  # type: ignore[str-format]
        case Lt(lt=high):
            return f"less than {high:g}"  # type: ignore[str-format]
    return str(bound)
