"""From the frame SGP4 answers in to the Earth, and from the Earth to a station's sky.

TEME (true equator, mean equinox) turns into the Earth-fixed frame by the angle GMST of
IAU 1982 about the pole (AIAA 2006-6753, appendix C). Polar motion, at most 0.6 arcsec or
20 m on the ground, is left out: it moves a pass by 3 ms at most, far less than the elements' own error.
Refraction is left out too: it only lifts a satellite, by 0.5 deg on the horizon and 0.1 deg at 10 deg.
"""

import numpy as np
from numpy.typing import NDArray

from passplan.domain.constants import DAY_S
from passplan.domain.moments import Horizon
from passplan.sky.ut1 import ut1_minus_utc_s

Floats = NDArray[np.float64]

_J2000_DAY = 2451545.0


def gmst_rad(day: float, fraction: Floats) -> Floats:
    """Return Greenwich mean sidereal time (IAU 1982) in [0, 2 pi) at UT1 Julian dates.

    Args:
        day: whole and half days of the Julian date.
        fraction: the rest, in days, shape (n,).

    Source: Aoki et al., Astronomy and Astrophysics 105 (1982) 359, eq. 14. The day's own
    turn is added apart from the slow part, so that microseconds are not lost.
    """
    century = (day - _J2000_DAY + fraction) / 36525.0
    slow_s = 67310.54841 + century * (8640184.812866 + century * (0.093104 - century * 6.2e-6))
    return (day % 1.0 + fraction + slow_s / DAY_S % 1.0) % 1.0 * (2.0 * np.pi)


def earth_rotation(horizon: Horizon, seconds: Floats) -> tuple[Floats, Floats]:
    """Return cosine and sine of GMST at `seconds` of the week, shape (n,) each."""
    day, fraction = horizon_julian(horizon, seconds)
    angle = gmst_rad(day, fraction + ut1_minus_utc_s(day + fraction) / DAY_S)
    return np.cos(angle), np.sin(angle)


def horizon_julian(horizon: Horizon, seconds: Floats) -> tuple[float, Floats]:
    """Return `seconds` of the week as (Julian day at the start of the week, days since)."""
    day, fraction = horizon.julian(0.0)
    return day, fraction + seconds / DAY_S


def turned(vectors_teme: Floats, rotation: tuple[Floats, Floats]) -> Floats:
    """Return TEME vectors of shape (3, n) in the Earth-fixed frame, shape (3, n)."""
    cosine, sine = rotation
    x, y, z = vectors_teme
    return np.stack((cosine * x + sine * y, cosine * y - sine * x, z))
