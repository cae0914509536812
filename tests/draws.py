"""Chance that stays the same for ever, and a fingerprint that shows it did."""

import hashlib

import numpy as np

from passplan.domain.elements import ElementSet
from passplan.domain.mission import Mission


class Draws:
    """Uniform numbers of one seed.

    Only `Generator.random` is drawn from, as NumPy may change the algorithms of its other
    methods between releases (NEP 19).
    """

    def __init__(self, seed: int) -> None:
        self._random = np.random.default_rng(seed)

    def between(self, low: float, high: float) -> float:
        """Return a number in [low, high)."""
        return low + (high - low) * float(self._random.random())

    def below(self, count: int) -> int:
        """Return a whole number of 0 to count - 1."""
        return int(self.between(0.0, count))

    def chance(self, fraction: float) -> bool:
        """Return True in `fraction` of the cases."""
        return self.between(0.0, 1.0) < fraction


def fingerprint(mission: Mission, elements: dict[str, ElementSet]) -> str:
    """Return a short SHA-256 of all that was drawn, whatever fields the nouns gain later."""
    drawn = [
        *((e.name, e.mean_motion_rev_day, e.node_deg, e.mean_anomaly_deg) for e in elements.values()),
        *((s.code, s.latitude_deg, s.longitude_deg) for s in mission.stations),
        *((o.handle, o.stations, [(h.days, h.begin, h.end) for h in o.hours]) for o in mission.operators),
        *((c.name, c.exchange_s, str(c.earliest_utc), str(c.deadline_utc)) for c in mission.commands),
        *((c.name, c.must, c.urgent, c.two_people, c.least_elevation_deg) for c in mission.commands),
        *(
            (c.name, c.least_charge_fraction, [(a.command, a.order) for a in c.after])
            for c in mission.commands
        ),
        *(
            (s.name, s.power.array_w, s.battery.capacity_wh, s.battery.floor_fraction)
            for s in mission.satellites
        ),
        *((k.name, k.made_byte_s, k.on_board_byte) for s in mission.satellites for k in s.store.kinds),
    ]
    return hashlib.sha256(repr(drawn).encode()).hexdigest()[:16]
