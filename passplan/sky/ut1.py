"""How far the Earth's own clock, UT1, is from UTC.

The Earth turns by UT1; leaving UT1 - UTC out moves passes by some milliseconds. The
table holds TAI - UT1, which unlike UT1 - UTC has no leaps, on the first of each month.

Source: IERS Rapid Service, finals2000A (observed to mid 2026, predicted after), as
shipped with Skyfield 1.55. Straight lines between months stay within 6 ms of the daily
values (1.6 ms rms), which is at most 3 m of the Earth's surface, 0.4 ms of a low pass.
"""

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]

_FIRST_YEAR = 2015
# fmt: off
_TAI_MINUS_UT1 = (  # in 0.1 ms, first of each month
    354599, 354925, 355277, 355751, 356172, 356562, 356766, 356982, 357280, 357706, 358215, 358674,  # 2015
    359184, 359737, 360204, 360825, 361348, 361864, 362124, 362254, 362465, 362790, 363238, 363697,  # 2016
    364087, 364458, 364831, 365295, 365783, 366193, 366405, 366533, 366637, 366849, 367166, 367515,  # 2017
    367836, 368035, 368336, 368659, 368983, 369230, 369294, 369302, 369367, 369516, 369806, 370124,  # 2018
    370362, 370612, 370893, 371192, 371486, 371701, 371742, 371602, 371536, 371537, 371592, 371700,  # 2019
    371772, 371912, 372050, 372252, 372425, 372546, 372401, 372081, 371853, 371735, 371753, 371790,  # 2020
    371754, 371670, 371698, 371742, 371833, 371839, 371674, 371433, 371193, 371052, 371041, 371068,  # 2021
    371105, 371074, 371021, 370995, 370976, 370959, 370687, 370373, 370135, 370051, 370102, 370196,  # 2022
    370199, 370146, 370153, 370244, 370343, 370460, 370361, 370148, 369974, 369883, 369887, 369884,  # 2023
    369912, 369957, 370034, 370143, 370178, 370204, 370039, 369748, 369482, 369410, 369464, 369505,  # 2024
    369537, 369526, 369544, 369631, 369702, 369710, 369566, 369379, 369154, 369069, 369069, 369202,  # 2025
    369259, 369289, 369384, 369543, 369670, 369670, 369493, 369208, 369052, 369066, 369113, 369147,  # 2026
    369121,  # 2027
)
# fmt: on
_UNIX_EPOCH_JULIAN = 2440587.5
_MONTHS = np.datetime64(f"{_FIRST_YEAR}-01") + np.arange(len(_TAI_MINUS_UT1))
_TABLE_DAY = _MONTHS.astype("datetime64[D]").astype(np.float64) + _UNIX_EPOCH_JULIAN
_TABLE_S = np.array(_TAI_MINUS_UT1) / 1e4
_LEAP_DAY = np.array([2457204.5, 2457754.5])  # 2015-07-01, 2017-01-01 (IERS Bulletin C 49 and 52)
_FIRST_TAI_MINUS_UTC_S = 35.0


def ut1_minus_utc_s(julian_day: Floats) -> Floats:
    """Return UT1 - UTC in seconds at UTC Julian dates of any shape.

    Held at its first value before 2015 and at its last after January 2027, when the
    error grows by at most about 0.1 s (50 m on the equator) a year, while nobody announces a leap.
    """
    leaps = np.searchsorted(_LEAP_DAY, julian_day, side="right")
    held = np.where(np.asarray(julian_day) < _TABLE_DAY[0], 0, leaps)
    return _FIRST_TAI_MINUS_UTC_S + held - np.interp(julian_day, _TABLE_DAY, _TABLE_S)
