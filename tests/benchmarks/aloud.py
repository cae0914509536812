"""Figures as they come."""


def say(line: str) -> None:
    """Print a line at once."""
    print(line, flush=True)
