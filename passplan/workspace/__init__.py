"""Files in, files out: TOML, element sets (TLE and OMM), plans."""
