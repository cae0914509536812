"""Checks of what the radio carries and what the store holds."""

from dataclasses import replace

import numpy as np

from passplan.domain.passes import Floats
from passplan.domain.plan import DataReport, Slot
from passplan.domain.rules import Rule
from passplan.domain.satellite import Satellite
from passplan.verify.evidence import Case, Evidence, within_half_second
from passplan.verify.store_replay import Arrival, StoreStory, Sums, Taking, replay
from passplan.verify.tally import HALF_PERCENT, Reading, Tally

_ROUNDING_BYTE = 1.0


def check_link_closes(evidence: Evidence) -> Reading:
    """Downlink and uplink close with their margin wherever they are used, and where the request goes."""
    tally = Tally(Rule.LINK_CLOSES, "dB")
    for case in evidence.cases:
        down, up = within_half_second(case.down_margin_db), within_half_second(case.up_margin_db)
        for slot in case.slots("downlink"):
            _weigh_weakest(tally, evidence, case, down, slot)
        if not case.station.radio.transmits:
            tally.fail(case.id, f"{case.station.code} only listens, so nobody asks the satellite to speak")
            continue
        for slot in case.slots("acquire"):
            # The request goes when acquire is over.
            _weigh_weakest(tally, evidence, case, up, replace(slot, start_s=slot.end_s, end_s=slot.end_s + 1))
        for slot in case.slots("uplink"):
            _weigh_weakest(tally, evidence, case, up, slot)
    return tally.reading


def _weigh_weakest(tally: Tally, evidence: Evidence, case: Case, margin_db: Floats, slot: Slot) -> None:
    """Weigh the weakest second of a slot."""
    part = margin_db[case.view.seconds(slot.start_s, slot.end_s)]
    weakest = int(np.argmin(part))
    way = "downlink" if slot.kind == "downlink" else "uplink"
    told = f"at {evidence.clock(slot.start_s + weakest)} the {way} is {-part[weakest]:.2f} dB short"
    tally.weigh(case.id, float(part[weakest]), 0.0, f"{told} of what closes it with its margin")


def check_bytes_fit(evidence: Evidence) -> Reading:
    """No contact is to bring down more than its downlink slots carry."""
    tally = Tally(Rule.BYTES_FIT, "byte")
    for case in evidence.cases:
        planned = sum(part.byte for part in case.contact.carried)
        told = f"{planned:.0f} byte are to come down, the link carries {case.byte:.0f}"
        tally.weigh(case.id, case.byte - planned, HALF_PERCENT * case.byte + _ROUNDING_BYTE, told)
    return tally.reading


def check_store(evidence: Evidence) -> Reading:
    """Played in order, the store has what each contact takes, and loses no more than the plan says."""
    tally = Tally(Rule.STORE, "byte")
    for case in evidence.cases:
        chance = evidence.mission.success_fraction(case.station)
        if abs(case.contact.success_fraction - chance) > 1e-9:
            told = f"the plan gives it a chance of {case.contact.success_fraction:g}"
            tally.fail(case.id, f"{told}, the mission gives it {chance:g}")
    for name in evidence.ledgers:
        satellite = evidence.mission.satellite(name)
        story = store_story(evidence, satellite)
        for taking in story.takings:
            made = "" if taking.made_day is None else f" made on day {taking.made_day}"
            there = f"{taking.there_byte:.0f} byte of {taking.kind}{made} are on board"
            told = f"{there} when {taking.byte:.0f} are to come down"
            allowed = HALF_PERCENT * taking.byte + _ROUNDING_BYTE
            tally.weigh(taking.contact, taking.there_byte - taking.byte, allowed, told)
        for report in evidence.plan.data:
            if report.satellite == name:
                _weigh_report(tally, report, story.week.get(report.kind))
    return tally.reading


def store_story(evidence: Evidence, satellite: Satellite) -> StoreStory:
    """Play one satellite's store under the plan."""
    arrivals = [
        Arrival(at_s=float(run.end_s), byte=run.session.makes)
        for run in evidence.runs
        if run.session.satellite == satellite.name
    ]
    takings = [
        Taking(
            contact=case.id,
            at_s=float(max([slot.end_s for slot in case.slots("downlink")], default=case.contact.end_s)),
            kind=part.kind,
            made_day=part.made_day,
            byte=part.byte,
            chance=evidence.mission.success_fraction(case.station),
            in_week=case.in_week,
        )
        for case in evidence.cases
        if case.satellite is satellite
        for part in case.contact.carried
    ]
    return replay(satellite, evidence.horizon.end_s, arrivals, takings)


def _weigh_report(tally: Tally, report: DataReport, sums: Sums | None) -> None:
    """Compare the plan's sums of one kind with those of the replay."""
    where = f"{report.satellite} {report.kind}"
    if sums is None:
        tally.fail(where, f"{report.satellite} keeps no {report.kind}")
        return
    allowed = HALF_PERCENT * (report.on_board_start_byte + sums.made_byte) + _ROUNDING_BYTE
    for name, told, found in (
        ("made", report.made_byte, sums.made_byte),
        ("come down", report.down_byte, sums.down_byte),
        ("lost", report.lost_byte, sums.lost_byte),
    ):
        sentence = f"{told:.0f} byte of {report.kind} are {name} by the plan, {found:.0f} played in order"
        tally.compare(where, abs(told - found), allowed, sentence)
    left = report.on_board_start_byte + report.made_byte - report.down_byte - report.lost_byte
    sentence = (
        f"{report.on_board_end_byte:.0f} byte of {report.kind} are left by the plan, {left:.0f} by its sums"
    )
    tally.compare(where, abs(left - report.on_board_end_byte), allowed, sentence)
