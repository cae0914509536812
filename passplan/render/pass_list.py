"""The list of passes on a screen, by day."""

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from rich.text import Text

from passplan.domain.mission import Mission
from passplan.domain.moments import Horizon
from passplan.domain.passes import Pass, Sky
from passplan.render.typeset import THIN, Column, Page
from passplan.render.words import (
    clock,
    compass,
    count,
    day,
    day_clock,
    degrees,
    duration,
    places,
    safe,
    there,
    there_brief,
    zone_of,
)


@dataclass(frozen=True, kw_only=True, slots=True)
class ListedPass:
    """One pass of the listing with what other rooms know about it.

    Attributes:
        useful_s: seconds in which mask, antenna and link allow data; None when not worked out.
        doppler_down_hz, doppler_up_hz: largest shift on either frequency, unsigned; None when not worked out.
    """

    sight: Pass
    useful_s: float | None = None
    doppler_down_hz: float | None = None
    doppler_up_hz: float | None = None


def passes_text(
    listed: Sequence[ListedPass], sky: Sky, mission: Mission, horizon: Horizon, width: int
) -> Text:
    """Return the passes as a list by day.

    Args:
        listed: the passes to show, in order of AOS.
        sky: for decay; its passes may be more than those listed.
        mission: for zones of stations.
        horizon: the week the seconds belong to.
        width: cells of the terminal; no line is wider.
    """
    page = Page(width)
    names = sorted({each.sight.satellite for each in listed}) or [each.name for each in mission.satellites]
    stations = len({each.sight.station for each in listed})
    found = f"{count(len(listed), 'pass', 'passes')} over {count(stations, 'station')}"
    page.sentences(f"Week {horizon.week}, {', '.join(map(safe, names))}: {found if listed else 'no passes'}")
    for name, second in sorted(sky.propagation_end_s.items()):
        end = horizon.utc(second)
        page.sentences(
            f"{safe(name)}: the element set leads into the atmosphere {day_clock(end)} UTC;",
            "there is nothing to list after that.",
            style=THIN,
        )
    if listed:
        page.line()
        if "there" in page.table(_columns(listed, mission, horizon), groups=_days(listed, horizon)):
            page.sentences(places(mission, (each.sight.station for each in listed)))
    if any(each.sight.clipped for each in listed):
        page.line()
        page.sentences('"open" stands where a pass goes on beyond the time that was searched.')
    return page.text()


def _days(listed: Sequence[ListedPass], horizon: Horizon) -> dict[int, str]:
    """Return the row at which each day begins."""
    groups: dict[int, str] = {}
    for number, each in enumerate(listed):
        today = day(horizon.utc(each.sight.aos_s))
        if today not in groups.values():
            groups[number] = today
    return groups


def _columns(listed: Sequence[ListedPass], mission: Mission, horizon: Horizon) -> list[Column]:
    """Return the columns, in order of reading."""
    several = len({each.sight.satellite for each in listed}) > 1

    def cells(said: Callable[[ListedPass], str]) -> tuple[str, ...]:
        return tuple(said(each) for each in listed)

    def local_time(each: ListedPass) -> str:
        return there(horizon.utc(each.sight.aos_s), zone_of(mission, each.sight.station))

    def local_brief(each: ListedPass) -> str:
        return there_brief(horizon.utc(each.sight.aos_s), zone_of(mission, each.sight.station))

    texts = [
        Column(heading="", cells=cells(lambda each: clock(horizon.utc(each.sight.aos_s)))),
        Column(heading="", cells=cells(lambda each: safe(each.sight.station))),
        Column(heading="there", cells=cells(local_time), brief=cells(local_brief), good=5),
    ]
    if several:
        names = cells(lambda each: safe(each.sight.satellite))
        texts.insert(2, Column(heading="satellite", cells=names, good=12, least=9))
    figures: tuple[tuple[str, Callable[[ListedPass], str], int], ...] = (
        ("minutes", lambda each: f"{each.sight.length_s / 60.0:.1f}", 0),
        ("highest", lambda each: degrees(each.sight.max_elevation_deg), 0),
        ("useful", _useful, 0),
        ("nearest", lambda each: f"{each.sight.tca_range_km:.0f} km", 4),
        ("Doppler down", lambda each: _shift(each.doppler_down_hz), 2),
        ("and up", lambda each: _shift(each.doppler_up_hz), 2),
    )
    minutes, highest, useful, *wide = (
        Column(heading=heading, cells=cells(said), right=True, rank=rank) for heading, said, rank in figures
    )
    wide = [column for column in wide if any(cell != "-" for cell in column.cells)]
    way = Column(heading="in > out", cells=cells(_way))
    light = Column(heading="light", cells=cells(lambda each: _light(each.sight, horizon)), rank=1)
    return [*texts, minutes, highest, way, useful, light, *wide]


def _way(each: ListedPass) -> str:
    """Return "NNE > SSE", with "open" where the search began or ended inside the pass."""
    sight = each.sight
    enters = "open" if sight.clipped in {"start", "both"} else compass(sight.aos_azimuth_deg)
    leaves = "open" if sight.clipped in {"end", "both"} else compass(sight.los_azimuth_deg)
    return f"{enters:>4} > {leaves}"


def _useful(each: ListedPass) -> str:
    """Return the useful time, "no" when there is none and "-" when nobody worked it out."""
    if each.useful_s is None:
        return "-"
    return duration(each.useful_s) if each.useful_s >= 0.5 else "no"


def _light(sight: Pass, horizon: Horizon) -> str:
    """Return "sun", "shadow", or when it changes."""
    if not sight.sunlit:
        return "shadow"
    begin, end = sight.sunlit[0][0], sight.sunlit[-1][1]
    early, late = begin <= sight.aos_s + 0.5, end >= sight.los_s - 0.5
    if early and late and len(sight.sunlit) == 1:
        return "sun"
    if early and late:
        return f"shadow {clock(horizon.utc(sight.sunlit[0][1]))}-{clock(horizon.utc(sight.sunlit[-1][0]))}"
    if early:
        return f"sun until {clock(horizon.utc(end))}"
    if late:
        return f"sun from {clock(horizon.utc(begin))}"
    return f"sun {clock(horizon.utc(begin))}-{clock(horizon.utc(end))}"


def _shift(shift_hz: float | None) -> str:
    """Return a Doppler shift in kHz, "-" when not worked out."""
    return "-" if shift_hz is None else f"{shift_hz / 1000.0:.1f} kHz"
