"""A day as people type it."""

from datetime import date, timedelta

from passplan.domain.moments import WEEKDAYS, Horizon


def named_day(text: str, horizon: Horizon) -> date | None:
    """Return the UTC day that "mon" or "2026-12-07" means in a week; None when it is no day at all."""
    word = text.strip().lower()
    if word in WEEKDAYS:
        return horizon.start.date() + timedelta(days=WEEKDAYS.index(word))
    try:
        return date.fromisoformat(word)
    except ValueError:
        return None
