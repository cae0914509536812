"""The passes of a week, filtered: `passes`."""

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass
from datetime import timedelta
from typing import Literal

from passplan.budgets.link import doppler_shift_hz
from passplan.budgets.usable import open_spans, useful_s
from passplan.domain.constants import DAY_S, WEEK_S
from passplan.domain.errors import PassplanError
from passplan.domain.moments import Horizon, Span
from passplan.domain.passes import Pass, Track
from passplan.errands.days import named_day
from passplan.errands.desk import Answer, Desk
from passplan.errands.inputs import Inputs, read_inputs, warn_of_ages
from passplan.render.pass_data import passes_csv, passes_json
from passplan.render.pass_list import ListedPass, passes_text
from passplan.render.words import listed as in_words
from passplan.render.words import safe
from passplan.sky import survey, tracks

Form = Literal["text", "json", "csv"]


@dataclass(frozen=True, kw_only=True, slots=True)
class Wanted:
    """Which passes are asked for.

    Attributes:
        week: ISO week, None for the mission's.
        satellite, day: None for all; the day as people type it.
        stations: codes, none for all.
        least_elevation_deg: of the highest point.
        useful: only those in which data could flow.
        form: how they are written.
    """

    week: str | None = None
    satellite: str | None = None
    stations: tuple[str, ...] = ()
    day: str | None = None
    least_elevation_deg: float = -90.0
    useful: bool = False
    form: Form = "text"


def passes(desk: Desk, wanted: Wanted) -> Answer:
    """List the passes of a week.

    Raises:
        PassplanError: a filter names what is not there, or the workspace cannot be read.
    """
    inputs = read_inputs(desk, wanted.week)
    holds = _filter(wanted, inputs)
    sky = survey(inputs.elements, inputs.mission.stations, inputs.horizon)
    listed = _listed([one for one in sky.passes if holds(one)], inputs)
    if wanted.useful:
        listed = [one for one in listed if one.useful_s]
    _warn_of_age(desk, inputs, listed)
    if wanted.form == "json":
        return Answer(shown=passes_json(listed, sky, inputs.horizon).encode())
    if wanted.form == "csv":
        return Answer(shown=passes_csv(listed, inputs.horizon).encode())
    return Answer(shown=passes_text(listed, sky, inputs.mission, inputs.horizon, desk.width))


def _filter(wanted: Wanted, inputs: Inputs) -> Callable[[Pass], bool]:
    """Return whether a pass is asked for; it belongs to the day in which it begins.

    Raises:
        PassplanError: a name, a day or an angle that cannot be.
    """
    mission = inputs.mission
    satellites = [wanted.satellite] if wanted.satellite else []
    kept_satellites = _known("satellite", satellites, [one.name for one in mission.satellites])
    kept_stations = _known("station", wanted.stations, [one.code for one in mission.stations])
    begin_s, end_s = _day(wanted.day, inputs.horizon)
    least_deg = wanted.least_elevation_deg
    if not -90.0 <= least_deg <= 90.0:
        raise PassplanError(f"--least-elevation {least_deg:g}: name an angle from -90 to 90 deg")

    def holds(one: Pass) -> bool:
        named = one.satellite in kept_satellites and one.station in kept_stations
        return named and begin_s <= one.aos_s < end_s and one.max_elevation_deg >= least_deg

    return holds


def _known(what: str, wanted: Iterable[str], names: Sequence[str]) -> frozenset[str]:
    """Return the names meant, capitals set aside, all where none is wanted; PassplanError for no name."""
    by_word = {name.casefold(): name for name in names}
    for word in wanted:
        if word.casefold() not in by_word:
            raise PassplanError(f"no {what} {safe(word)!r}; there are {in_words(map(safe, names))}")
    return frozenset(by_word[word.casefold()] for word in wanted) or frozenset(names)


def _day(text: str | None, horizon: Horizon) -> Span:
    """Return the span (s) of a day of the week, of the whole week where none is named.

    Raises:
        PassplanError: it is no day, or not one of the week.
    """
    if text is None:
        return 0.0, WEEK_S
    day = named_day(text, horizon)
    first = horizon.start.date()
    last = first + timedelta(days=6)
    if day is None or not first <= day <= last:
        told = f"name mon, tue, ... sun, or a date from {first} to {last}"
        raise PassplanError(f"--day {safe(text)!r} is not a day of week {horizon.week}; {told}")
    begin_s = (day - first).days * DAY_S
    return begin_s, begin_s + DAY_S


def _listed(sights: Sequence[Pass], inputs: Inputs) -> list[ListedPass]:
    """Return passes with useful time and largest Doppler shifts."""
    mission, horizon = inputs.mission, inputs.horizon
    paths = tracks(inputs.elements, mission.stations, sights, horizon)
    open_s: dict[tuple[str, str], list[Span]] = {
        (satellite.name, station.code): open_spans(station, satellite, horizon)
        for satellite in mission.satellites
        for station in mission.stations
    }
    return [
        _described(one, path, inputs, open_s[one.satellite, one.station])
        for one, path in zip(sights, paths, strict=True)
    ]


def _described(one: Pass, path: Track, inputs: Inputs, spans: Sequence[Span]) -> ListedPass:
    """Return one pass with what link and antenna make of it."""
    radio = inputs.mission.satellite(one.satellite).radio
    return ListedPass(
        sight=one,
        useful_s=useful_s(inputs.mission, one, path, spans),
        doppler_down_hz=_largest_hz(radio.down_hz, one),
        doppler_up_hz=_largest_hz(radio.up_hz, one),
    )


def _largest_hz(frequency_hz: float, one: Pass) -> float:
    """Return the largest shift of a frequency in a pass, without its sign."""
    return float(abs(doppler_shift_hz(frequency_hz, one.largest_range_rate_km_s)))


def _warn_of_age(desk: Desk, inputs: Inputs, listed: Sequence[ListedPass]) -> None:
    """Warn of element sets that are old at a pass listed."""
    farthest: dict[str, float] = {}
    for name, used in inputs.elements.items():
        epoch_s = inputs.horizon.seconds(used.epoch)
        mine = (abs(one.sight.tca_s - epoch_s) for one in listed if one.sight.satellite == name)
        farthest[name] = max(mine, default=0.0) / DAY_S
    warn_of_ages(desk, inputs.mission, farthest)
