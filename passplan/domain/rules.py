"""The rules of a week, once, each in a sentence a volunteer understands.

The optimiser, the second reading, the words for "why not" and the table in
DEVELOPERS.md all use this list, and a test compares them.
"""

from enum import Enum


class Rule(Enum):
    """One rule; the value is the sentence people read."""

    IN_VIEW = "The satellite stands above the station's mask and least elevations all through the contact."
    GUARD_TIME = "Contacts keep off both ends of the pass by the guard time, as elements age."
    ANTENNA_FOLLOWS = "The antenna can follow the satellite all through the contact."
    LINK_CLOSES = "Data flow only while the downlink closes with its margin, commands while the uplink does."
    STATION_OPEN = "The station is open and not in an outage."
    SATELLITE_OPEN = "The satellite is not closed to contacts."
    LEAST_CONTACT = "A contact is long enough to be worth sitting down for."
    ONE_CONVERSATION = "A satellite talks to one station at a time, with a gap at a hand-over."
    STATION_FREE = "A station has one contact at a time, with its set-up time between."
    HALF_DUPLEX = "Acquire, uplink, downlink and close follow each other; nobody speaks over another."
    BYTES_FIT = "No more bytes come down than the link carries in the downlink slots."
    STORE = "Nothing comes down before it was made, and a full store loses data the way the satellite does."
    BATTERY_FLOOR = "The battery never falls under its floor."
    TRANSMIT_FLOOR = "No contact begins with the battery under its transmit floor."
    DISCHARGE_LIMIT = "The cells are never asked for more power than they may give."
    END_CHARGE = "The week ends with enough charge to begin the next."
    COMMAND_ONCE = "A command goes up at most once, whole, in one window."
    COMMAND_WINDOW = "A command goes up between its earliest moment and its deadline."
    COMMAND_LENGTH = "Each command has the seconds its exchange takes."
    COMMAND_STATION = "A command goes up from a station that may send it."
    COMMAND_ORDER = "A command goes up only after the ones it depends on."
    COMMAND_ELEVATION = "A command that wants the satellite high waits until it is."
    COMMAND_CHARGE = "A command that wants a charged battery has it."
    SESSION_WINDOW = "A payload session runs once, whole, inside one of its windows."
    SESSION_ALONE = "Payload sessions overlap neither each other nor a contact."
    LICENSED_OPERATOR = "A licensed and designated operator runs every contact that transmits."
    OPERATOR_STATION = "Operators serve only their own stations."
    OPERATOR_HOURS = "Operators serve only in their hours and not on days away."
    ONE_PLACE = "An operator is in one place at a time, with preparation and travel."
    REST = "Operators have their rest between two sittings."
    DUTIES_DAY = "No operator has more duties a day than they agreed to."
    DUTIES_WEEK = "No operator has more duties a week than they agreed to."
    TWO_PEOPLE = "Where a command asks for two people, two are there."
    ELEMENTS_AGE = "The element set is not too old at any contact."
