"""Checks of the battery against the one-second ledger."""

import numpy as np

from passplan.domain.constants import WEEK_S
from passplan.domain.rules import Rule
from passplan.verify.evidence import Evidence
from passplan.verify.second_ledger import load_w
from passplan.verify.tally import HALF_PERCENT, Reading, Tally

_MOSTLY = 0.5


def check_battery_floor(evidence: Evidence) -> Reading:
    """The ledger never falls under the floor in force, and the plan's low points are the ledger's."""
    tally = Tally(Rule.BATTERY_FLOOR, "J")
    reports = {report.satellite: report for report in evidence.plan.batteries}
    for name, ledger in evidence.ledgers.items():
        battery, allowed = evidence.mission.satellite(name).battery, HALF_PERCENT * ledger.capacity_j
        floor_j = min(battery.floor_fraction * ledger.capacity_j, ledger.idle_lowest_j)
        second, lowest_j = ledger.lowest(0, int(evidence.horizon.end_s))
        told = f"the charge falls to {lowest_j / ledger.capacity_j:.1%} at {evidence.clock(second)}"
        floor = f"the floor is {floor_j / ledger.capacity_j:.1%}"
        tally.weigh(name, lowest_j - floor_j, allowed, f"{told}, {floor}")
        if (report := reports.get(name)) is None:
            continue
        for what, claimed, found_j in (
            ("lowest charge", report.lowest_fraction, ledger.lowest(0, int(WEEK_S))[1]),
            ("charge at the start", report.start_fraction, ledger.at(0)),
            ("floor in force", report.floor_in_force_fraction, floor_j),
        ):
            off_j = abs(claimed * ledger.capacity_j - found_j)
            told = f"the plan says {what} {claimed:.1%}, the ledger says {found_j / ledger.capacity_j:.1%}"
            tally.compare(name, off_j, allowed, told)
    for case in evidence.cases:
        ledger, contact = evidence.ledgers[case.satellite.name], case.contact
        _, found_j = ledger.lowest(contact.start_s, contact.end_s)
        off_j = contact.charge_lowest_fraction * ledger.capacity_j - found_j
        told = f"the plan promises never under {contact.charge_lowest_fraction:.1%} here"
        told = f"{told}, it falls to {found_j / ledger.capacity_j:.1%}"
        tally.compare(case.id, off_j, HALF_PERCENT * ledger.capacity_j, told)
    return tally.reading


def check_transmit_floor(evidence: Evidence) -> Reading:
    """No contact begins under the transmit floor, or with less charge than the plan promises."""
    tally = Tally(Rule.TRANSMIT_FLOOR, "J")
    for case in evidence.cases:
        ledger, battery = evidence.ledgers[case.satellite.name], case.satellite.battery
        allowed, least = HALF_PERCENT * ledger.capacity_j, battery.transmit_floor_fraction
        found_j, claimed = ledger.at(case.contact.start_s), case.contact.charge_start_fraction
        begins = f"it begins with {found_j / ledger.capacity_j:.1%}"
        told = f"{begins}, the transmit floor is {least:.1%}"
        tally.weigh(case.id, found_j - least * ledger.capacity_j, allowed, told)
        told = f"{begins}, the plan promises {claimed:.1%}"
        tally.compare(case.id, claimed * ledger.capacity_j - found_j, allowed, told)
    return tally.reading


def check_discharge_limit(evidence: Evidence) -> Reading:
    """While the satellite speaks in shadow, the loads stay within what the cells may give."""
    tally = Tally(Rule.DISCHARGE_LIMIT, "W")
    for case in evidence.cases:
        ledger, limit_w = evidence.ledgers[case.satellite.name], case.satellite.battery.discharge_limit_w
        if limit_w is None:
            continue
        begin = max(0, case.contact.start_s)
        part = slice(begin, max(begin, case.contact.end_s))
        speaks = (ledger.keyed_share[part] > 0.0) & (ledger.shadow_share[part] > _MOSTLY)
        if not speaks.any():
            continue
        speaking_w = load_w(case.satellite, dark=True, keyed=True) + ledger.session_w[part]
        asked_w = np.where(speaks, speaking_w, 0.0)
        worst = int(np.argmax(asked_w))
        when = evidence.clock(begin + worst)
        told = f"at {when} the cells are asked for {asked_w[worst]:.1f} W, they may give {limit_w:g} W"
        tally.weigh(case.id, limit_w - float(asked_w[worst]), 1e-6 * limit_w, told)
    return tally.reading


def check_end_charge(evidence: Evidence) -> Reading:
    """The charge at the end is what the plan says, and enough where the plan says so."""
    tally = Tally(Rule.END_CHARGE, "J")
    for report in evidence.plan.batteries:
        ledger = evidence.ledgers.get(report.satellite)
        if ledger is None:
            continue
        allowed = HALF_PERCENT * ledger.capacity_j
        found_j, start_j = float(ledger.energy_j[-1]), ledger.at(0)
        wanted_j = min(evidence.mission.planning.end_fraction * ledger.capacity_j, start_j)
        claimed_j = report.end_fraction * ledger.capacity_j
        shown = found_j / ledger.capacity_j
        if report.end_fraction >= report.end_wanted_fraction:
            told = f"the horizon ends with {shown:.1%}, {wanted_j / ledger.capacity_j:.1%} is wanted"
            tally.weigh(report.satellite, found_j - wanted_j, allowed, told)
        told = f"the plan says the horizon ends with {report.end_fraction:.1%}, the ledger says {shown:.1%}"
        tally.compare(report.satellite, abs(claimed_j - found_j), allowed, told)
    return tally.reading
