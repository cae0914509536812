"""The second opinion on a plan: one check for each rule, in the order of the list of rules."""

from collections.abc import Callable, Mapping

from passplan.domain.constants import WEEK_S
from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission
from passplan.domain.plan import Plan
from passplan.domain.rules import Rule
from passplan.domain.verdict import Verdict
from passplan.verify import (
    checks_contacts,
    checks_people,
    checks_power,
    checks_radio,
    checks_requests,
    checks_sky,
)
from passplan.verify.evidence import Evidence, gather
from passplan.verify.tally import Reading

CHECKS: Mapping[Rule, Callable[[Evidence], Reading]] = {
    Rule.IN_VIEW: checks_sky.check_in_view,
    Rule.GUARD_TIME: checks_sky.check_guard_time,
    Rule.ANTENNA_FOLLOWS: checks_sky.check_antenna_follows,
    Rule.LINK_CLOSES: checks_radio.check_link_closes,
    Rule.STATION_OPEN: checks_contacts.check_station_open,
    Rule.SATELLITE_OPEN: checks_contacts.check_satellite_open,
    Rule.LEAST_CONTACT: checks_contacts.check_least_contact,
    Rule.ONE_CONVERSATION: checks_contacts.check_one_conversation,
    Rule.STATION_FREE: checks_contacts.check_station_free,
    Rule.HALF_DUPLEX: checks_contacts.check_half_duplex,
    Rule.BYTES_FIT: checks_radio.check_bytes_fit,
    Rule.STORE: checks_radio.check_store,
    Rule.BATTERY_FLOOR: checks_power.check_battery_floor,
    Rule.TRANSMIT_FLOOR: checks_power.check_transmit_floor,
    Rule.DISCHARGE_LIMIT: checks_power.check_discharge_limit,
    Rule.END_CHARGE: checks_power.check_end_charge,
    Rule.COMMAND_ONCE: checks_requests.check_command_once,
    Rule.COMMAND_WINDOW: checks_requests.check_command_window,
    Rule.COMMAND_LENGTH: checks_requests.check_command_length,
    Rule.COMMAND_STATION: checks_requests.check_command_station,
    Rule.COMMAND_ORDER: checks_requests.check_command_order,
    Rule.COMMAND_ELEVATION: checks_requests.check_command_elevation,
    Rule.COMMAND_CHARGE: checks_requests.check_command_charge,
    Rule.SESSION_WINDOW: checks_requests.check_session_window,
    Rule.SESSION_ALONE: checks_requests.check_session_alone,
    Rule.LICENSED_OPERATOR: checks_people.check_licensed_operator,
    Rule.OPERATOR_STATION: checks_people.check_operator_station,
    Rule.OPERATOR_HOURS: checks_people.check_operator_hours,
    Rule.ONE_PLACE: checks_people.check_one_place,
    Rule.REST: checks_people.check_rest,
    Rule.DUTIES_DAY: checks_people.check_duties_day,
    Rule.DUTIES_WEEK: checks_people.check_duties_week,
    Rule.TWO_PEOPLE: checks_people.check_two_people,
    Rule.ELEMENTS_AGE: checks_sky.check_elements_age,
}


def check(mission: Mission, elements: Mapping[str, ElementSet], plan: Plan) -> Verdict:
    """Read a plan a second time, starting again from what people wrote and from the elements.

    Args:
        mission: what people wrote.
        elements: satellite name to the element set the plan stands on.
        plan: what was decided, week and look-ahead.

    Returns:
        every broken rule, and how close the plan comes to breaking the others.
    """
    evidence = gather(mission, elements, plan)
    readings = {rule: read(evidence) for rule, read in CHECKS.items()}
    lowest = {name: ledger.lowest(0, int(WEEK_S)) for name, ledger in evidence.ledgers.items()}
    return Verdict(
        findings=tuple(finding for reading in readings.values() for finding in reading.findings),
        checked=tuple(readings),
        margins=tuple(reading.margin for reading in readings.values() if reading.margin is not None),
        lowest_fraction={name: low / evidence.ledgers[name].capacity_j for name, (_, low) in lowest.items()},
        lowest_s={name: float(second) for name, (second, _) in lowest.items()},
        downlink_byte={case.id: case.byte for case in evidence.cases},
    )
