"""Whatever stands behind any key, the answer is a mission or a list of mistakes, never a traceback."""

import re
import shutil
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from passplan.domain.errors import InputError
from passplan.workspace.assumed import assumed
from passplan.workspace.doubts import warnings
from passplan.workspace.read import read_workspace

FROZEN = Path(__file__).parent / "frozen_week"
FILES = sorted(path.relative_to(FROZEN).as_posix() for path in FROZEN.rglob("*.toml"))
LINES = [
    (file, number)
    for file in FILES
    for number, line in enumerate((FROZEN / file).read_text(encoding="utf-8").splitlines())
    if re.match(r"\w+ = [^\[{]*$|\w+ = .*[\]}]\s*(#.*)?$", line)
]
VALUES = [
    *("0", "-1", "1e308", "-1e308", "1e-300", "nan", "inf", "-inf", "true", "99999999999999999999999"),
    *(
        '""',
        '"x"',
        '"QUA"',
        '"low"',
        "'''\n'''",
        '"\\u0000"',
        '"\\U0001F6F0"',
        "[]",
        "[[]]",
        "[[0, 1]]",
        "{}",
    ),
    *("[1, 2]", '["QUA", "QUA"]', "{ a = 1 }", "[{}]", '[{ command = "clock" }]', "2026-12-07", "10:00:00"),
    *("2026-12-07T05:12:00", "2026-12-07T05:12:00Z", "2026-12-07T05:12:00+23:59", "1990-01-01T00:00:00Z"),
    *("2200-12-31T23:59:59Z", "9999-12-31T23:59:59-23:59", "0001-01-01", "2200-12-31", "0x10", "1_000", "@"),
    *("[{ first_day = 2200-12-31, last_day = 2200-12-31 }]", "[{ begin = 00:00:00, end = 00:00:00 }]"),
]


@pytest.fixture(scope="module")
def scratch(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("any") / "week"
    shutil.copytree(FROZEN, folder)
    return folder


@settings(max_examples=120, deadline=None)
@given(slips=st.lists(st.tuples(st.sampled_from(LINES), st.sampled_from(VALUES)), min_size=1, max_size=3))
def test_any_value_behind_any_key(scratch: Path, slips: list[tuple[tuple[str, int], str]]) -> None:
    for (file, number), value in slips:
        rows = (scratch / file).read_text(encoding="utf-8").split("\n")
        rows[number] = f"{rows[number].partition(' = ')[0]} = {value}"
        (scratch / file).write_text("\n".join(rows), encoding="utf-8")
    try:
        lines = answer(scratch)
    finally:
        for (file, _), _ in slips:
            shutil.copy(FROZEN / file, scratch / file)
    assert lines
    assert all(line.isprintable() for line in lines)


def answer(folder: Path) -> list[str]:
    """Return the lines that `check` would print."""
    try:
        mission = read_workspace(folder)
    except InputError as error:
        return [str(mistake) for mistake in error.mistakes]
    return [*warnings(mission, folder), *(" ".join(row) for row in assumed(folder))]
