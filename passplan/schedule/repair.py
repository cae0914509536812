"""A finding of the second reading tightens the row it is about, before the next solve."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import replace

from passplan.domain.problem import Craft, OfferedPass, Option, Problem
from passplan.domain.rules import Rule
from passplan.domain.verdict import Finding

_POWER = {Rule.BATTERY_FLOOR: "floor_j", Rule.TRANSMIT_FLOOR: "transmit_floor_j"}
_BYTES = {Rule.BYTES_FIT, Rule.STORE}
_EDGES = {Rule.GUARD_TIME, Rule.STATION_OPEN, Rule.SATELLITE_OPEN}


def tightened(
    problem: Problem, findings: Sequence[Finding], passes: Mapping[str, int], *, drop: bool
) -> Problem:
    """Return the problem with each finding's row tightened by its shortfall.

    Args:
        problem: that was solved.
        findings: of its plan.
        passes: contact id to the index of its pass.
        drop: take the contacts in question out altogether, the last resort.
    """
    crafts, offers = list(problem.crafts), list(problem.passes)
    gone: set[int] = set()
    for finding in findings:
        index = passes.get(finding.where)
        if finding.rule in _POWER and not drop:
            number = _craft(problem, finding, index)
            crafts[number] = _raised(crafts[number], finding)
        elif index is None:
            continue
        elif finding.rule in _BYTES and not drop:
            offers[index] = _weaker(offers[index], finding)
        elif finding.rule in _EDGES and not drop:
            offers[index] = _shorter(offers[index], finding)
        else:
            gone.add(index)
    kept = tuple(offered for index, offered in enumerate(offers) if index not in gone and offered.options)
    return replace(problem, crafts=tuple(crafts), passes=kept)


def _craft(problem: Problem, finding: Finding, index: int | None) -> int:
    """Return the satellite a finding is about."""
    if index is not None:
        return problem.passes[index].satellite
    names = [craft.name for craft in problem.crafts]
    return names.index(finding.where) if finding.where in names else 0


def _raised(craft: Craft, finding: Finding) -> Craft:
    """Raise a floor by the shortfall and a little; never above the charge at the start."""
    name = _POWER[finding.rule]
    more = finding.shortfall + 0.001 * craft.capacity_j
    return replace(craft, **{name: min(getattr(craft, name) + more, craft.start_j)})


def _weaker(offered: OfferedPass, finding: Finding) -> OfferedPass:
    """Lower a pass's goodput by the share of its bytes that was too much."""
    total = max(1.0, float(offered.goodput_byte_s.sum()))
    factor = max(0.0, 1.0 - 1.5 * finding.shortfall / total)
    return replace(
        offered,
        goodput_byte_s=offered.goodput_byte_s * factor,
        slices=tuple(replace(part, goodput_byte_s=part.goodput_byte_s * factor) for part in offered.slices),
    )


def _shorter(offered: OfferedPass, finding: Finding) -> OfferedPass:
    """Take the shortfall in seconds off both ends of a pass's options."""
    cut = math.ceil(finding.shortfall) + 1
    low = min(option.start_s for option in offered.options) + cut
    high = max(option.end_s for option in offered.options) - cut
    options = [Option(start_s=max(o.start_s, low), end_s=min(o.end_s, high)) for o in offered.options]
    # Indices of options are used by duties and placings, so none is taken out.
    if any(option.end_s <= option.start_s for option in options):
        return replace(offered, options=())
    return replace(offered, options=tuple(options))
