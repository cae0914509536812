"""Where things are and when they can see each other."""

from passplan.sky.overhead import Found, passes_of
from passplan.sky.survey import survey
from passplan.sky.tracks import track, tracks

__all__ = ["Found", "passes_of", "survey", "track", "tracks"]
