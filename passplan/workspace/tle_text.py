"""Element sets as TLE text."""

from datetime import UTC, datetime, timedelta
from decimal import ROUND_HALF_UP, Decimal

from passplan.domain.elements import ElementSet
from passplan.domain.errors import PassplanError
from passplan.workspace.tle_columns import OLDEST_YEAR, checksum, field_of

_STEP = timedelta(microseconds=864)  # 1e-8 day, the last digit of an epoch
_DAY_STEPS = 100_000_000
_REVOLUTIONS = 100_000  # the counter has five columns and runs over (common practice)
_ELEMENT_NUMBERS = 10_000


def to_tle(element_set: ElementSet) -> str:
    """Return the set as two lines, a name line before them when it has a name.

    Values are rounded half up to what the columns hold: 1e-8 day, 1e-4 deg, 1e-7 of
    eccentricity, 1e-8 rev/day, five digits of the drag term.

    Raises:
        PassplanError: something has no place in a TLE, such as a catalogue number
            above 339999; an OMM holds it.
    """
    try:
        lines = [_name(element_set.name), _line_1(element_set), _line_2(element_set)]
    except ValueError as error:
        label = element_set.name or element_set.number or "the element set"
        raise PassplanError(f"{label} cannot be written as a TLE: {error}; write it as an OMM") from None
    return "".join(f"{line}\n" for line in lines if line)


def _name(name: str) -> str:
    """Return the name line; marked with a zero where it would be taken for another kind of line."""
    return f"0 {name}" if name.startswith(("0 ", "1 ", "2 ", "#")) else name


def _line_1(one: ElementSet) -> str:
    return _summed(
        f"1 {field_of(one.number)}U {_designator(one.designator)} {_epoch(one.epoch)} "
        f"{_rate(one.mean_motion_dot_rev_day2)} {_power(one.mean_motion_ddot_rev_day3)} "
        f"{_power(one.bstar_per_earth_radius)} 0 {one.element_number % _ELEMENT_NUMBERS:4d}"
    )


def _line_2(one: ElementSet) -> str:
    motion = _fixed(one.mean_motion_rev_day, 8)
    if Decimal(motion) == 0:
        raise ValueError(f"mean motion {one.mean_motion_rev_day} rev/day is too small for its columns")
    return _summed(
        f"2 {field_of(one.number)} {_angle(one.inclination_deg)} {_angle(one.node_deg)} "
        f"{_eccentricity(one.eccentricity)} {_angle(one.argument_of_perigee_deg)} "
        f"{_angle(one.mean_anomaly_deg)} {motion:>11}{one.revolution % _REVOLUTIONS:5d}"
    )


def _summed(line: str) -> str:
    return f"{line}{checksum(line)}"


def _fixed(value: float, places: int) -> str:
    """Return a value with so many decimals, rounded half up as printed, not as stored."""
    return f"{Decimal(repr(value)).quantize(Decimal(1).scaleb(-places), ROUND_HALF_UP):f}"


def _angle(degrees: float) -> str:
    return f"{_fixed(degrees, 4):>8}"


def _eccentricity(value: float) -> str:
    return min(_fixed(value, 7), "0.9999999")[2:]


def _rate(value: float) -> str:
    text = _fixed(value, 8)
    sign, digits = ("-", text[1:]) if text.startswith("-") else (" ", text)
    if not digits.startswith("0."):
        raise ValueError(f"first derivative {value} rev/day2 is too large for its columns")
    return f"{sign if digits.strip('0.') else ' '}{digits[1:]}"


def _power(value: float) -> str:
    """Return sign, five digits behind a point left out, and a power of ten of one digit."""
    size = abs(Decimal(repr(value)))
    power = max(size.adjusted() + 1, -9) if size else 0
    digits = int((size.scaleb(5 - power)).to_integral_value(ROUND_HALF_UP))
    if digits == 0:
        return " 00000+0"
    if digits == 100_000:  # rounded up into the next power
        digits, power = 10_000, power + 1
    if power > 9:
        raise ValueError(f"{value} is too large for its columns")
    return f"{'-' if value < 0.0 else ' '}{digits:05d}{power:+d}"


def _epoch(moment: datetime) -> str:
    """Return two digits of the year, the day of the year and eight digits of its fraction."""
    moment = moment.astimezone(UTC)
    midnight = moment.replace(hour=0, minute=0, second=0, microsecond=0)
    steps, rest = divmod(moment - midnight, _STEP)
    steps += 2 * rest >= _STEP
    if steps == _DAY_STEPS:
        midnight, steps = midnight + timedelta(days=1), 0
    if not OLDEST_YEAR <= midnight.year < OLDEST_YEAR + 100:
        raise ValueError(
            f"the year {midnight.year} has no two digits, which stand for {OLDEST_YEAR} to {OLDEST_YEAR + 99}"
        )
    return f"{midnight:%y%j}.{steps:08d}"


def _designator(text: str) -> str:
    """Return the eight columns of an international designator, "1998-067A" as "98067A"."""
    short = text[2:4] + text[5:] if text[4:5] == "-" else text
    if len(short) > 8 or not short.isascii():
        raise ValueError(f"designator {text!r} has no place in 8 columns")
    return f"{short:<8}"
