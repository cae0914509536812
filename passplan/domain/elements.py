"""One element set of one object, whatever text it came in."""

from dataclasses import dataclass
from datetime import datetime
from typing import Annotated

from annotated_types import Interval

from passplan.domain.checked import Checked


@dataclass(frozen=True, kw_only=True, slots=True)
class ElementSet(Checked):
    """Mean elements for SGP4 (TEME, WGS 72), as a TLE or an OMM with theory SGP4 gives them.

    Attributes:
        name: object name, "" when the text has none.
        number: catalogue number; None for an object that has none yet.
        designator: international designator, "2026-101A" also where a TLE has "26101A"; as written when it is
            neither; "" when there is none.
        epoch: aware UTC moment of the elements.
        mean_motion_rev_day: Kozai mean motion.
        mean_motion_dot_rev_day2: as printed in a TLE, the first derivative divided by 2; SGP4 ignores it.
        mean_motion_ddot_rev_day3: as printed in a TLE, the second derivative divided by 6; ignored too.
        bstar_per_earth_radius: drag term.
        source: where it came from, for people ("elements/teasel-1.tle, line 3").
        kind: "TLE", "OMM KVN", "OMM XML", "OMM JSON" or "OMM CSV".
    """

    name: str
    number: int | None
    designator: str
    epoch: datetime
    inclination_deg: Annotated[float, Interval(ge=0.0, le=180.0)]
    node_deg: Annotated[float, Interval(ge=0.0, le=360.0)]
    eccentricity: Annotated[float, Interval(ge=0.0, lt=1.0)]
    argument_of_perigee_deg: Annotated[float, Interval(ge=0.0, le=360.0)]
    mean_anomaly_deg: Annotated[float, Interval(ge=0.0, le=360.0)]
    mean_motion_rev_day: Annotated[float, Interval(gt=0.0, le=20.0)]
    bstar_per_earth_radius: float
    mean_motion_dot_rev_day2: float = 0.0
    mean_motion_ddot_rev_day3: float = 0.0
    element_number: int = 0
    revolution: int = 0
    source: str = ""
    kind: str = "TLE"

    def _faults(self) -> list[tuple[str, object, str]]:
        if self.epoch.tzinfo is None:
            return [("epoch", str(self.epoch), "must carry a zone (UTC)")]
        return []
