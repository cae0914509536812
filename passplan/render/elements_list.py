"""The list of element sets: name, number, epoch, age, where from, and which one is used."""

from collections.abc import Collection, Sequence
from datetime import UTC, datetime

from rich.text import Text

from passplan.domain.constants import DAY_S
from passplan.domain.elements import ElementSet
from passplan.domain.moments import Horizon
from passplan.render.typeset import Column, Page
from passplan.render.words import clock, count, day, safe


def elements_text(
    sets: Sequence[ElementSet], horizon: Horizon, width: int, *, used: Collection[ElementSet] = ()
) -> Text:
    """Return the element sets as a list, in the order given.

    Args:
        sets: what the folder holds.
        horizon: the week their age is told at: from epoch to Monday 00:00 UTC.
        width: cells of the terminal.
        used: the sets a plan of that week would take.
    """
    page = Page(width)
    if not sets:
        page.sentences("No element sets yet.", "Add a file with: passplan elements add FILE")
        return page.text()
    page.sentences(f"{count(len(sets), 'element set')}; ages are at the start of week {horizon.week}.")
    for name in dict.fromkeys(safe(each.name) or "(no name)" for each in sets if each in used):
        page.sentences(f"A plan of that week uses the set of {name} marked below.")
    page.line()
    folder, sources = _sources(sets)
    epochs = [each.epoch.astimezone(UTC) for each in sets]
    page.table(
        [
            Column(heading="", cells=tuple("used" if each in used else "" for each in sets)),
            Column(heading="name", cells=tuple(safe(each.name) or "-" for each in sets), good=14, least=8),
            Column(
                heading="number",
                cells=tuple("none" if each.number is None else f"{each.number}" for each in sets),
                right=True,
            ),
            Column(heading="epoch (UTC)", cells=tuple(_epoch(at, horizon) for at in epochs)),
            Column(heading="age", cells=tuple(_age(each, horizon) for each in sets), right=True),
            Column(heading=f"from {folder}".rstrip(), cells=sources, good=28, least=10),
            Column(heading="written as", cells=tuple(each.kind for each in sets), rank=2),
            Column(heading="set", cells=tuple(f"{each.element_number}" for each in sets), right=True, rank=3),
            Column(heading="designator", cells=tuple(safe(each.designator) or "-" for each in sets), rank=4),
        ]
    )
    return page.text()


def _sources(sets: Sequence[ElementSet]) -> tuple[str, tuple[str, ...]]:
    """Return the folder all sets come from ("" when they differ) and the rest of each source."""
    sources = [safe(each.source).removesuffix(", line 1") for each in sets]
    folders = {source.rpartition("/")[0] for source in sources}
    folder = f"{folders.pop()}/" if len(folders) == 1 and "" not in folders else ""
    return folder, tuple(source.removeprefix(folder) for source in sources)


def _epoch(at: datetime, horizon: Horizon) -> str:
    """Return "5 Dec 18:20", with the year where it is not the week's."""
    year = "" if at.year == horizon.start.year else f" {at.year}"
    return f"{day(at).split(' ', 1)[1]}{year} {clock(at)}"


def _age(elements: ElementSet, horizon: Horizon) -> str:
    """Return the age at the start of the week; negative for a set of a later moment."""
    return f"{-horizon.seconds(elements.epoch) / DAY_S:.1f} days"
