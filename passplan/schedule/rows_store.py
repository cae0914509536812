"""Rows of the store: nothing comes down before it was made, and a full store loses data."""

from passplan.domain.constants import DAY_S
from passplan.domain.problem import Craft, Problem
from passplan.domain.rules import Rule
from passplan.schedule.model import Model, Term
from passplan.schedule.variables import DataClass, Variables

RULES = frozenset({Rule.STORE, Rule.BYTES_FIT})
_KB = 1e-3


def store_rows(problem: Problem, model: Model, names: Variables) -> None:
    """Add the rows of every satellite's store."""
    for number, craft in enumerate(problem.crafts):
        own = [index for index, offered in enumerate(problem.passes) if offered.satellite == number]
        for part in range(len(craft.partitions)):
            kinds = [kind for kind, told in enumerate(craft.kinds) if told.partition == part]
            if kinds and own:
                _partition(problem, model, names, number, part, kinds, own)


def begins(problem: Problem, own: list[int]) -> list[float]:
    """Return for each pass of a satellite a moment not after its first option, rising along the passes.

    What is made until then can be counted on whatever option is used.
    """
    moments = [float(min(option.start_s for option in problem.passes[index].options)) for index in own]
    for place in range(len(moments) - 2, -1, -1):
        moments[place] = min(moments[place], moments[place + 1])
    return moments


def made_byte(craft: Craft, data: DataClass, begin_s: float, end_s: float) -> float:
    """Return what flows into a class over a stretch, sessions aside."""
    if data.made_day is not None:
        begin_s = max(begin_s, data.made_day * DAY_S)
        end_s = min(end_s, (data.made_day + 1) * DAY_S)
    if data.made_day == -1:
        return 0.0
    return craft.kinds[data.kind].made_byte_s * max(0.0, end_s - begin_s)


def _on_board_byte(craft: Craft, data: DataClass) -> float:
    """Return what a class holds at the start."""
    return craft.kinds[data.kind].on_board_byte if data.made_day in {None, -1} else 0.0


def _partition(
    problem: Problem, model: Model, names: Variables, number: int, part: int, kinds: list[int], own: list[int]
) -> None:
    """Add the stocks of one partition, pass by pass."""
    craft = problem.crafts[number]
    moments = begins(problem, own)
    size = craft.partitions[part].size_byte
    can_fill = _most_byte(problem, craft, number, kinds) > size
    stock: dict[DataClass, int] = {}
    before_s = 0.0
    for place, index in enumerate(own):
        classes = [data for data in names.v[index] if data.kind in kinds]
        sessions = _session_bytes(problem, names, number, before_s, moments[place])
        lost = model.column(0.0, 1.0) if can_fill else None
        after: dict[DataClass, int] = {}
        for data in classes:
            after[data] = model.column()
            terms = _inflow(problem, names, craft, stock, own, place, data, sessions)
            made = made_byte(craft, data, before_s, moments[place]) * _KB
            if lost is not None:
                terms += _loss(model, craft, part, data, lost, made, sessions)
            start = _on_board_byte(craft, data) * _KB if data not in stock else 0.0
            model.row([(after[data], 1.0), *terms], made + start, made + start)
            model.row([(names.v[index][data], 1.0), (after[data], -1.0)], upper=0.0)
        if can_fill:
            model.row([(column, 1.0) for column in after.values()], upper=size * _KB)
        stock, before_s = after, moments[place]


def _most_byte(problem: Problem, craft: Craft, number: int, kinds: list[int]) -> float:
    """Return what a partition would hold if nothing ever came down."""
    told = [craft.kinds[kind] for kind in kinds]
    flowing = sum(kind.on_board_byte + kind.made_byte_s * problem.horizon.end_s for kind in told)
    names = {kind.name for kind in told}
    return flowing + sum(
        byte
        for session in problem.sessions
        if session.satellite == number
        for kind, byte in session.makes
        if kind in names
    )


def _session_bytes(
    problem: Problem, names: Variables, number: int, begin_s: float, end_s: float
) -> list[tuple[str, int, int, float]]:
    """Return (kind, day made, column, kB) of the sessions that may end in (begin_s, end_s]."""
    return [
        (kind, int((start + session.length_s) // DAY_S), column, byte * _KB)
        for which, session in enumerate(problem.sessions)
        if session.satellite == number
        for start, column in zip(session.starts_s, names.run[which], strict=True)
        if begin_s < start + session.length_s <= end_s
        for kind, byte in session.makes
    ]


def _inflow(
    problem: Problem,
    names: Variables,
    craft: Craft,
    stock: dict[DataClass, int],
    own: list[int],
    place: int,
    data: DataClass,
    sessions: list[tuple[str, int, int, float]],
) -> list[Term]:
    """Return the terms that carry a class from the last pass to this one: less what came down."""
    terms: list[Term] = []
    if data in stock:
        last = own[place - 1]
        terms = [(stock[data], -1.0), (names.v[last][data], problem.passes[last].success_fraction)]
    for kind, day, column, kilobyte in sessions:
        if kind == craft.kinds[data.kind].name and data.made_day in {None, day}:
            terms.append((column, -kilobyte))
    return terms


def _loss(
    model: Model,
    craft: Craft,
    part: int,
    data: DataClass,
    lost: int,
    made: float,
    sessions: list[tuple[str, int, int, float]],
) -> list[Term]:
    """Return the terms of what a full partition loses of a class in one stretch.

    Refusing loses the same share of every kind being made; overwriting may take
    anything on board, and the second reading plays which was the oldest.
    """
    if craft.partitions[part].overwrites:
        return [(model.column(), 1.0)]
    terms: list[Term] = [(lost, made)] if made else []
    for kind, day, column, kilobyte in sessions:
        if kind == craft.kinds[data.kind].name and data.made_day in {None, day}:
            refused = model.column()
            model.row([(refused, 1.0), (column, -kilobyte)], upper=0.0)
            terms.append((refused, 1.0))
    return terms
