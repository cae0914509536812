"""Physical constants, each with its unit in the name and its source beside it."""

EARTH_RADIUS_KM = 6378.137  # WGS 84, equatorial (NIMA TR8350.2)
EARTH_FLATTENING = 1.0 / 298.257223563  # WGS 84
EARTH_MU_KM3_S2 = 398600.4418  # WGS 84 / EGM96
SPEED_OF_LIGHT_KM_S = 299792.458  # SI definition
AU_KM = 149597870.7  # IAU 2012 Resolution B2
SUN_RADIUS_KM = 696000.0  # Astronomical Almanac
BOLTZMANN_DBW_K_HZ = -228.599  # 10 log10(1.380649e-23), SI definition
REFERENCE_TEMPERATURE_K = 290.0  # IEEE standard noise temperature
DAY_S = 86400.0
HOUR_S = 3600.0
MINUTE_S = 60.0
WEEK_S = 604800.0
