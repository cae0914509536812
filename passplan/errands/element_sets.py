"""Element sets listed and added: `elements` and `elements add`."""

from collections.abc import Callable, Iterator, Sequence
from pathlib import Path

from passplan.domain.elements import ElementSet
from passplan.domain.errors import InputError, Mistake
from passplan.domain.moments import iso
from passplan.errands.desk import Answer, Desk
from passplan.errands.inputs import ELEMENTS, chosen, element_sets, horizon_of
from passplan.render.elements_list import elements_text
from passplan.render.typeset import STRONG, Column, Page
from passplan.render.words import count, safe
from passplan.workspace.element_files import MOST_BYTE, content, element_paths, read_elements
from passplan.workspace.element_store import add as store
from passplan.workspace.read import read_workspace

STANDARD_INPUT = "-"

Added = tuple[ElementSet, Path, str]


def elements(desk: Desk, week: str | None) -> Answer:
    """List the element sets of the workspace, and which one each satellite is planned with."""
    mission = read_workspace(desk.folder)
    horizon = horizon_of(mission, week, desk.clock())
    sets = sorted(
        element_sets(desk.folder), key=lambda one: (one.name, one.number or 0, one.epoch, one.source)
    )
    used, mistakes = chosen(sets, mission, horizon)
    for error in mistakes if sets else ():
        desk.warn(str(error))
    return Answer(shown=elements_text(sets, horizon, desk.width, used=list(used.values())))


def add(desk: Desk, sources: Sequence[str], standard_input: Callable[[int], bytes]) -> Answer:
    """Add element sets from files, folders or standard input; a slip in any of them and nothing is added.

    Args:
        desk: for the workspace.
        sources: paths, or "-".
        standard_input: reads at most so many bytes of it.

    Raises:
        InputError: this is no workspace, or every slip of every source.
    """
    if not (desk.folder / "mission.toml").exists():
        told = "no mission.toml here, so this is no workspace; name it with --workspace DIR"
        raise InputError([Mistake(str(desk.folder), "", "", told)])
    texts = _sound(sources, standard_input)
    added = [one for label, data in texts for one in store(desk.folder / ELEMENTS, data, label)]
    return Answer(shown=_page(desk, added).text())


def _sound(sources: Sequence[str], standard_input: Callable[[int], bytes]) -> list[tuple[str, bytes]]:
    """Return (label, content) of every source, all of them free of slips.

    Raises:
        InputError: the slips of all sources.
    """
    texts: list[tuple[str, bytes]] = []
    mistakes: list[Mistake] = []
    for source in sources:
        try:
            for label, data in _contents(source, standard_input):
                texts.append((label, data))
                read_elements(data, label)
        except InputError as error:
            mistakes += error.mistakes
    if mistakes:
        raise InputError(mistakes)
    return texts


def _contents(source: str, standard_input: Callable[[int], bytes]) -> Iterator[tuple[str, bytes]]:
    """Yield (label, content) of each file a source stands for."""
    if source == STANDARD_INPUT:
        data = standard_input(MOST_BYTE + 1)
        if len(data) > MOST_BYTE:
            told = f"more than {MOST_BYTE / 1e6:.0f} MB; that is too large"
            raise InputError([Mistake("standard input", "", "", told)])
        yield "standard input", data
        return
    path = Path(source)
    for file in element_paths(path) if path.is_dir() else [path]:
        yield safe(str(file)), content(file, safe(str(file)))


def _page(desk: Desk, added: Sequence[Added]) -> Page:
    """Return what was added and what was there before, in the order given."""
    page = Page(desk.width)
    fresh = sum(outcome == "added" for _, _, outcome in added)
    said = f"{count(fresh, 'element set')} added" if fresh else "Nothing was added"
    there = len(added) - fresh
    already = f"{count(there, 'element set')} already there" if there else ""
    page.sentences(", ".join(filter(None, (said, already))) + ".", style=STRONG)
    page.line()
    rows = [
        (outcome, safe(one.name) or "-", iso(one.epoch), str(path.relative_to(desk.folder)))
        for one, path, outcome in added
    ]
    columns = list(zip(*rows, strict=True))
    page.table(
        [
            Column(heading="", cells=columns[0]),
            Column(heading="name", cells=columns[1], good=14, least=8),
            Column(heading="epoch (UTC)", cells=columns[2], rank=1),
            Column(heading="file", cells=columns[3], least=20),
        ]
    )
    return page
