"""README.md and DEVELOPERS.md as tests read them: tables and blocks of text."""

import re
from pathlib import Path

ROOT = Path(__file__).parents[1]
README = (ROOT / "README.md").read_text(encoding="utf-8")
DEVELOPERS = (ROOT / "DEVELOPERS.md").read_text(encoding="utf-8")

Row = tuple[str, ...]


def table(page: str, first_heading: str) -> list[Row]:
    """Return the rows of the one table whose first column has this heading, its heading not included."""
    lines = iter(page.splitlines())
    starts = [line for line in page.splitlines() if line.startswith(f"| {first_heading} |")]
    assert len(starts) == 1, f"{len(starts)} tables with a first column named {first_heading!r}"
    for line in lines:
        if line == starts[0]:
            break
    next(lines)  # the rule under the heading
    rows = []
    for line in lines:
        if not line.startswith("|"):
            break
        rows.append(tuple(cell.strip() for cell in re.split(r"(?<!\\)\|", line)[1:-1]))
    return rows


def ticked(cell: str) -> list[str]:
    """Return what stands in backticks."""
    return re.findall(r"`([^`]+)`", cell)
