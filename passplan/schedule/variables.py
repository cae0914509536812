"""The columns of the model, named after what they decide."""

from collections.abc import Iterable
from dataclasses import dataclass, field

from passplan.domain.constants import DAY_S
from passplan.domain.problem import Craft, OfferedPass, Problem
from passplan.schedule.model import Model


@dataclass(frozen=True, slots=True)
class DataClass:
    """One kind of data on one satellite, and for kinds that age one UTC day made (-1: at the start)."""

    kind: int
    made_day: int | None


@dataclass(slots=True, eq=False)
class Variables:
    """Column indices; i counts passes, o options, j slices, c commands, q session starts.

    Attributes:
        x: [i][o] the option is used.
        y: [i][operator] the operator runs the contact in the pass.
        second: [i] a second person is there, where a command may ask for one.
        up_left, up_right: [c, i] the command goes up before / after the downlink.
        up_either: [c, i] it goes up on a side that the lay-out chooses.
        leaning: [i] seconds of those that stand before the downlink.
        t: [i][j] seconds the satellite transmits in the slice.
        v: [i][class] kilobytes brought down.
        run: [session][q] the session starts there.
        sitting: [i, operator] a sitting begins with this duty.
        short: [craft] kilojoules missing at the end of the horizon.
    """

    x: list[list[int]] = field(default_factory=list)
    y: list[dict[int, int]] = field(default_factory=list)
    second: dict[int, int] = field(default_factory=dict)
    up_left: dict[tuple[int, int], int] = field(default_factory=dict)
    up_right: dict[tuple[int, int], int] = field(default_factory=dict)
    up_either: dict[tuple[int, int], int] = field(default_factory=dict)
    leaning: dict[int, int] = field(default_factory=dict)
    t: list[list[int]] = field(default_factory=list)
    v: list[dict[DataClass, int]] = field(default_factory=list)
    run: list[list[int]] = field(default_factory=list)
    sitting: dict[tuple[int, int], int] = field(default_factory=dict)
    short: list[int] = field(default_factory=list)

    def up(self, command: int, index: int) -> list[int]:
        """Return the columns of one command in one pass, on whatever side."""
        sides = (self.up_left, self.up_right, self.up_either)
        return [side[command, index] for side in sides if (command, index) in side]

    def uplinks(self) -> list[int]:
        """Return every column that sends a command up."""
        return [*self.up_left.values(), *self.up_right.values(), *self.up_either.values()]

    def integers(self) -> Iterable[int]:
        """Return every 0/1 column."""
        for row in self.x:
            yield from row
        for people in self.y:
            yield from people.values()
        yield from self.uplinks()
        for starts in self.run:
            yield from starts


def variables(problem: Problem, model: Model) -> Variables:
    """Add the columns of a problem to a model and return where they are."""
    names = Variables()
    for index, offered in enumerate(problem.passes):
        names.x.append([model.binary() for _ in offered.options])
        pair = [p.command for p in offered.placings if problem.commands[p.command].two_people]
        names.y.append(
            {
                duty.operator: model.binary()
                for duty in offered.duties
                if pair or problem.operators[duty.operator].may_control
            }
        )
        if pair:
            names.second[index] = model.column(0.0, 1.0)
        for placing in offered.placings:
            _uplinks(problem, model, names, index, placing.command)
        if any(where == index for _, where in names.up_either):
            names.leaning[index] = model.column()
        names.t.append([model.column(0.0, part.end_s - part.start_s) for part in offered.slices])
        classes = data_classes(problem, offered)
        names.v.append({data: model.column() for data in classes})
    for session in problem.sessions:
        names.run.append([model.binary() for _ in session.starts_s])
    names.short.extend(model.column() for _ in problem.crafts)
    return names


def _uplinks(problem: Problem, model: Model, names: Variables, index: int, command: int) -> None:
    """Add the columns of one command in one pass, where its seconds fit beside the peak.

    A command's side matters to the model only where its own least elevation asks for it;
    otherwise half the columns do, and the lay-out chooses, the order of chains in mind.
    """
    offered, wanted = problem.passes[index], problem.commands[command]
    reach = offered.reach(wanted.least_elevation_deg)
    first = max(min(option.start_s for option in offered.options) + problem.terms.acquire_s, reach.rise_s)
    last = min(max(option.end_s for option in offered.options) - problem.terms.close_s, reach.fall_s)
    left = min(offered.peak_s, last) - first >= wanted.seconds
    right = last - max(offered.peak_s, first) >= wanted.seconds
    everywhere = reach.rise_s <= first and reach.fall_s >= offered.slices[-1].end_s - problem.terms.close_s
    if left and right and wanted.least_elevation_deg is None and everywhere:
        names.up_either[command, index] = model.binary()
        return
    if left:
        names.up_left[command, index] = model.binary()
    if right:
        names.up_right[command, index] = model.binary()


def data_classes(problem: Problem, offered: OfferedPass) -> list[DataClass]:
    """Return the classes of data that can be on board when a pass begins."""
    craft = problem.crafts[offered.satellite]
    made = {kind for session in problem.sessions for kind, _ in session.makes}
    day = int(min(option.start_s for option in offered.options) // DAY_S)
    found = []
    for number, kind in enumerate(craft.kinds):
        if kind.halves_every_days is None:
            found.append(DataClass(number, None))
        else:
            grows = kind.made_byte_s > 0.0 or kind.name in made
            found.extend(DataClass(number, made_day) for made_day in range(-1, day + 1 if grows else 0))
    return found


def weight_of(craft: Craft, data: DataClass, moment_s: float) -> float:
    """Return the worth of a kilobyte of a class brought down at a moment.

    The weight halves every so many days since the middle of the day made; what was on
    board at the start counts from Monday 00:00.
    """
    kind = craft.kinds[data.kind]
    if kind.halves_every_days is None or data.made_day is None:
        return kind.weight
    made_s = 0.0 if data.made_day < 0 else (data.made_day + 0.5) * DAY_S
    age_days = max(0.0, moment_s - made_s) / DAY_S
    return float(kind.weight * 0.5 ** (age_days / kind.halves_every_days))
