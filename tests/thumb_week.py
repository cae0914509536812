"""The plan by hand for a week as the optimiser sees it, laid out and counted by the planner's own code."""

from collections.abc import Mapping, Sequence
from dataclasses import replace

from passplan.budgets.usable import MARGIN_FRACTION
from passplan.domain.passes import Track
from passplan.domain.plan import Slot
from passplan.domain.problem import OfferedPass, Option, Problem
from passplan.schedule.layout import LaidOut
from passplan.schedule.ledger import play
from passplan.schedule.outcome import Outcome, loads
from passplan.schedule.stock import carry
from passplan.schedule.variables import DataClass
from tests.planning_weeks import Week
from tests.rough_sky import UsablePass
from tests.rule_of_thumb import Choice, best_elevation_first

Tracks = Mapping[tuple[str, str, int], Track]


def thumb_choices(week: Week, *, uplink_by_peak: bool = False) -> list[Choice]:
    """Return what best elevation first takes of the passes that the optimiser is offered, whole ones.

    Both keep the same margin above the floors. On the charge wanted at the end the optimiser
    keeps none, so it is taken off for the thumb as well.
    """
    sights = zip(week.sky.passes, week.tracks, strict=True)
    tracks = {(sight.satellite, sight.station, track.start_s): track for sight, track in sights}
    planning = week.mission.planning
    wanted = replace(planning, end_fraction=planning.end_fraction - MARGIN_FRACTION)
    return best_elevation_first(
        replace(week.mission, planning=wanted),
        week.horizon,
        [usable_pass(offered, tracks) for offered in week.problem.passes],
        week.sky.shadows,
        {craft.name: craft.start_j / craft.capacity_j for craft in week.problem.crafts},
        margin_fraction=MARGIN_FRACTION,
        uplink_by_peak=uplink_by_peak,
    )


def thumb_outcome(week: Week, choices: Sequence[Choice]) -> Outcome:
    """Return a plan by hand as the outcome that a solution would be: `worth` counts it like any other."""
    problem = week.problem
    contacts = sorted(
        (_laid_out(problem, choice) for choice in choices), key=lambda laid: (laid.option.start_s, laid.index)
    )
    own = [
        [laid for laid in contacts if problem.passes[laid.index].satellite == number]
        for number in range(len(problem.crafts))
    ]
    return Outcome(
        problem=problem,
        contacts=tuple(contacts),
        starts={},
        stocks=tuple(carry(problem, number, mine, {}) for number, mine in enumerate(own)),
        charges=tuple(
            play(craft, loads(problem, number, own[number], {}))
            for number, craft in enumerate(problem.crafts)
        ),
    )


def plans_by_hand(week: Week) -> tuple[Outcome, Outcome]:
    """Return two plans by hand: uplink anywhere in a pass, and not beyond its peak."""
    anywhere, by_peak = (
        thumb_outcome(week, thumb_choices(week, uplink_by_peak=by_peak)) for by_peak in (False, True)
    )
    return anywhere, by_peak


def brought_kb(made: Outcome) -> float:
    """Return the expected kilobytes that a laid-out week brings down."""
    return sum(
        made.problem.passes[index].success_fraction * sum(carried.values()) / 1000.0
        for stock in made.stocks
        for index, carried in stock.carried.items()
    )


def usable_pass(offered: OfferedPass, tracks: Tracks) -> UsablePass:
    """Return an offered pass as the thumb sees it: the whole of it, second by second."""
    whole = whole_option(offered)
    track = tracks[offered.sight.satellite, offered.sight.station, offered.curve_start_s]
    first, last = whole.start_s - offered.curve_start_s, whole.end_s - offered.curve_start_s
    return UsablePass(
        satellite=offered.sight.satellite,
        station=offered.sight.station,
        start_s=whole.start_s,
        peak_s=offered.peak_s,
        end_s=whole.end_s,
        elevation_deg=track.elevation_deg[first : last + 1],
        rate_byte_s=offered.goodput_byte_s[first : last + 1],
    )


def whole_option(offered: OfferedPass) -> Option:
    """Return the longest option of a pass; all others are pieces of it."""
    return max(offered.options, key=lambda option: option.end_s - option.start_s)


def _laid_out(problem: Problem, choice: Choice) -> LaidOut:
    """Return one choice as a laid-out contact, acquire and close included."""
    offered = problem.passes[choice.index]
    option, craft = whole_option(offered), problem.crafts[offered.satellite]
    begin, end = option.start_s + problem.terms.acquire_s, option.end_s - problem.terms.close_s
    middle = [*choice.uplink, *([choice.downlink] if choice.downlink else [])]
    slots = [Slot(kind="acquire", start_s=option.start_s, end_s=begin), *middle]
    if end < option.end_s:
        slots.append(Slot(kind="close", start_s=end, end_s=option.end_s))
    kinds = [kind.name for kind in craft.kinds]
    commands = [command.name for command in problem.commands]
    asked_kb = {
        DataClass(kinds.index(part.kind), part.made_day): part.byte / 1000.0 for part in choice.carried
    }
    return LaidOut(
        index=choice.index,
        option=option,
        operators=([person.handle for person in problem.operators].index(choice.operator),),
        slots=tuple(slots),
        left=tuple(commands.index(slot.command) for slot in choice.uplink),
        right=(),
        asked_kb=asked_kb,
        link_byte=offered.byte(choice.downlink.start_s, choice.downlink.end_s) if choice.downlink else 0.0,
    )
