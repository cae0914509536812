"""What the plan stands on: elements, the steps it was made by, and the second reading."""

from passplan.domain.plan import Plan, StepReport
from passplan.domain.verdict import Margin, Verdict
from passplan.render.typeset import BROKEN, THIN, Column, Page
from passplan.render.words import amount, charge, clock, count, day, figure, rule_name, safe

_SHOWN_MARGINS = 4

# How much of each unit counts as plenty, so that margins of different kinds can be ordered.
_PLENTY = {
    "s": 3600.0,
    "deg": 10.0,
    "dB": 6.0,
    "byte": 100_000.0,
    "J": 36_000.0,
    "duties": 4.0,
    "W": 5.0,
    "days": 5.0,
}
_USED_UP = 0.001  # of plenty: what is left is rounding


def add_proof(page: Page, plan: Plan) -> None:
    """Add the element sets, each step with its bound and give, and what the second reading says."""
    _elements(page, plan)
    _steps(page, plan)
    _verdict(page, plan)


def _elements(page: Page, plan: Plan) -> None:
    for used in plan.elements:
        number = "no catalogue number" if used.number is None else f"number {used.number}"
        epoch = plan.horizon.utc(used.epoch_s)
        old = " That is too old for good times; it was allowed for this plan." if used.old else ""
        page.sentences(
            f"Elements: {safe(used.name) or safe(used.satellite)}, {number},",
            f"of {day(epoch)} {clock(epoch)} UTC,",
            f"{used.farthest_days:.1f} days from the farthest contact,",
            f"from {safe(used.source)}.{old}",
            style=THIN if used.old else "",
        )


def _steps(page: Page, plan: Plan) -> None:
    for name, given in plan.gives.items():
        page.sentences(f"Gives: {safe(name)} {safe(given)}.")
    if not plan.steps:
        return
    page.heading("Steps, each kept by the ones below it but for its give")
    page.table(
        [
            Column(heading="", cells=tuple(safe(step.name) for step in plan.steps), least=30),
            *(
                Column(heading=heading, cells=_figures(plan.steps, heading), right=True, rank=rank)
                for heading, rank in (("value", 1), ("bound", 3), ("give", 2), ("kept", 0))
            ),
            Column(heading="unit", cells=tuple(safe(step.unit) for step in plan.steps)),
            Column(heading="proven", cells=tuple("yes" if step.proven else "no" for step in plan.steps)),
        ]
    )


def _figures(steps: tuple[StepReport, ...], name: str) -> tuple[str, ...]:
    """Return one figure of every step."""
    return tuple(figure(float(getattr(step, name))) for step in steps)


def _verdict(page: Page, plan: Plan) -> None:
    page.line()
    verdict = plan.verdict
    if verdict is None:
        page.sentences("Not checked by the second reading.", style=BROKEN)
        return
    for finding in verdict.findings:
        name = rule_name(finding.rule)
        page.sentences(f"Broken: {name}, {safe(finding.where)}: {safe(finding.sentence)}", style=BROKEN)
    used_up = [rule_name(margin.rule) for margin in verdict.margins if _tightness(margin) < _USED_UP]
    left = [margin for margin in verdict.margins if _tightness(margin) >= _USED_UP]
    thinnest = sorted(left, key=_tightness)[:_SHOWN_MARGINS]
    margins = [_margin(margin, plan, verdict) for margin in thinnest]
    ends = [","] * (len(margins) - 1) + ["."]
    page.sentences(
        f"Checked: {count(len(verdict.checked), 'rule')}" + ("; thinnest margins:" if margins else "."),
        *(margin + end for margin, end in zip(margins, ends, strict=False)),
    )
    if used_up:
        page.sentences(f"Used to the full, as a plan may: {', '.join(used_up)}.")
    if verdict.shared:
        page.sentences(
            f"Both readings stand on {safe(verdict.shared)}: what it gets wrong, neither of them sees."
        )


def _tightness(margin: Margin) -> float:
    """Return a margin as a share of what counts as plenty of its unit."""
    return margin.value / _PLENTY.get(margin.unit, 1.0)


def _margin(margin: Margin, plan: Plan, verdict: Verdict) -> str:
    """Return "battery floor 11 % (Teasel-1)": charge in per cent, everything else in its unit."""
    battery = next((each for each in plan.batteries if each.satellite == margin.where), None)
    said = amount(margin.value, margin.unit)
    if margin.rule.name == "BATTERY_FLOOR" and battery and margin.where in verdict.lowest_fraction:
        said = charge(max(0.0, verdict.lowest_fraction[margin.where] - battery.floor_in_force_fraction))
    return f"{rule_name(margin.rule)} {said} ({safe(margin.where)})"
