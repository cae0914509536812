"""The volunteers: where they serve, what they may do, and when."""

from dataclasses import dataclass

from passplan.domain.checked import Checked, Count, Hours, Minutes, text_fault
from passplan.domain.moments import DaysAway, WeeklyHours
from passplan.domain.station import zone_fault


@dataclass(frozen=True, kw_only=True, slots=True)
class Operator(Checked):
    """One volunteer.

    Attributes:
        handle: call sign or the name used in the plan.
        stations: codes of the stations they serve.
        may_control: licensed, and designated by the satellite's licensee; False = receives only.
        time_zone: IANA name, such as "Europe/Dublin".
        hours: weekly hours in their own zone; empty = none, they take no duty.
        away: whole days of their zone without any duty.
        most_duties_day: duties begun in one calendar day of their zone.
        most_duties_week: duties begun in one ISO week, in UTC.
        rest_h: free hours between two sittings.
        preparation_min: from sitting down to the start of a contact.
        travel_min: between two stations.
    """

    handle: str
    stations: tuple[str, ...]
    may_control: bool = False
    time_zone: str
    hours: tuple[WeeklyHours, ...] = ()
    away: tuple[DaysAway, ...] = ()
    most_duties_day: Count = 3
    most_duties_week: Count = 8
    rest_h: Hours = 8.0
    preparation_min: Minutes = 15.0
    travel_min: Minutes = 60.0

    def _faults(self) -> list[tuple[str, object, str]]:
        faults = text_fault("handle", self.handle) + zone_fault("time_zone", self.time_zone)
        if not self.stations:
            faults.append(("stations", self.stations, "name the code of at least one station"))
        return faults
