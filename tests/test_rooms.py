"""The architecture, read from the imports and held against the tables in DEVELOPERS.md."""

import ast
import re
import sys
import tomllib
from collections import Counter
from collections.abc import Iterator
from pathlib import Path

import pytest

from tests.pages import DEVELOPERS, ROOT, table, ticked

PACKAGE = ROOT / "passplan"
FILES = sorted(PACKAGE.rglob("*.py"))
ROOMS = sorted(folder.name for folder in PACKAGE.iterdir() if (folder / "__init__.py").exists())
LONGEST_FILE, LONGEST_FUNCTION = 400, 60
EVERYWHERE, NOWHERE = "everywhere", "nowhere"

# Whom the parts that walk between rooms may know; a room knows `domain` and itself.
MAY_KNOW = {
    "week": {"domain", "sky", "budgets", "schedule", "verify"},
    "errands": {*ROOMS, "week"},
    "cli": {"domain", "errands", "streams", "voice"},
    "voice": {"streams"},
    "streams": set[str](),
    "__main__": {"cli"},
    "__init__": set[str](),
}

# What reads the clock, chance, the environment or the network, and who may.
OUTSIDE = {
    "clock": {"datetime.now", "datetime.today", "datetime.utcnow", "date.today", "time.time", "time.time_ns"},
    "stop-watch": {"time.monotonic", "time.perf_counter", "time.process_time"},
    "environment": {"os.environ", "os.environb", "os.getenv", "sys.argv", "sys.stdin"},
    "chance": {"np.random", "numpy.random", "os.urandom"},
}
MAY_ASK = {
    "clock": {"cli.py"},
    "stop-watch": {"voice.py", "schedule/"},
    "environment": {"cli.py", "__init__.py"},  # there: BLAS threads, before numpy is imported
    "chance": set[str](),
}
CHANCE = {"random", "secrets", "uuid"}
NETWORK = {"ftplib", "http", "imaplib", "poplib", "smtplib", "socket", "socketserver", "ssl", "urllib"}


def name_of(file: Path) -> str:
    return file.relative_to(PACKAGE).as_posix()


def part_of(file: Path) -> str:
    """Return the room a file is in, or the name of a file beside the rooms."""
    return file.relative_to(PACKAGE).parts[0].removesuffix(".py")


def imported(file: Path) -> Iterator[str]:
    """Yield the dotted name of every module a file imports, wherever in it."""
    for node in ast.walk(ast.parse(file.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from (alias.name for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{name_of(file)}: a relative import"
            if node.module == "passplan":
                yield from (f"passplan.{alias.name}" for alias in node.names)
            else:
                yield str(node.module)


def attributes(file: Path) -> set[str]:
    """Return every dotted name a file uses, such as time.time."""
    tree = ast.parse(file.read_text(encoding="utf-8"))
    return {ast.unparse(node) for node in ast.walk(tree) if isinstance(node, ast.Attribute)}


def libraries(file: Path) -> set[str]:
    """Return the outside libraries a file imports; pydantic_core is a part of pydantic."""
    heads = {name.partition(".")[0].removesuffix("_core") for name in imported(file)}
    return heads - set(sys.stdlib_module_names) - {"passplan"}


def places(cell: str) -> set[str]:
    """Return the parts named in a cell: "`voice.py`, `streams.py`" gives voice and streams."""
    return {name.removesuffix("/").removesuffix(".py") for name in ticked(cell)}


def homes() -> dict[str, set[str]]:
    """Return library to the parts that may import it, by the two tables."""
    home: dict[str, set[str]] = {}
    for rooms, _, names in table(DEVELOPERS, "room"):
        for name in filter(None, re.split(r",\s*", names)):
            assert name not in home, f"{name} has two homes"
            home[name] = places(rooms)
    for name, where, _ in table(DEVELOPERS, "library"):
        home.setdefault(name, set()).update(places(where) or {where})
    return home


@pytest.mark.parametrize("file", FILES, ids=name_of)
def test_a_room_knows_the_nouns_and_nothing_else_of_the_house(file: Path) -> None:
    part = part_of(file)
    known = {name.split(".")[1] for name in imported(file) if name.startswith("passplan.")}
    assert known <= MAY_KNOW.get(part, {"domain"}) | {part}


@pytest.mark.parametrize("file", FILES, ids=name_of)
def test_a_library_is_used_at_its_home(file: Path) -> None:
    home = homes()
    for library in libraries(file):
        assert home[library] & {part_of(file), EVERYWHERE}, f"{library} in {name_of(file)}"


def test_every_place_named_for_a_library_uses_it() -> None:
    used = {(library, part_of(file)) for file in FILES for library in libraries(file)}
    named = {(library, part) for library, parts in homes().items() for part in parts}
    assert {pair for pair in named if pair[1] not in (EVERYWHERE, NOWHERE)} <= used


def test_every_part_stands_in_the_table() -> None:
    told = {part for row in table(DEVELOPERS, "room") for part in places(row[0])}
    assert told == set(map(part_of, FILES)) - {"__init__", "__main__"}


def test_what_is_installed_is_what_is_imported() -> None:
    project = tomllib.loads((ROOT / "pyproject.toml").read_text(encoding="utf-8"))["project"]
    wanted = {re.split(r"[^a-z0-9-]", line)[0].replace("-", "_") for line in project["dependencies"]}
    assert wanted == set(homes())


def test_no_two_files_share_a_name() -> None:
    count = Counter(file.name for file in FILES if file.name != "__init__.py")
    assert [name for name, times in count.items() if times > 1] == []


def test_no_file_is_a_drawer_for_odds_and_ends() -> None:
    drawers = {"common", "core", "helper", "helpers", "manager", "misc", "tools", "util", "utils"}
    assert [name_of(file) for file in FILES if drawers & set(file.stem.split("_"))] == []


@pytest.mark.parametrize("file", FILES, ids=name_of)
def test_files_and_functions_can_be_read_in_one_go(file: Path) -> None:
    text = file.read_text(encoding="utf-8")
    assert len(text.splitlines()) <= LONGEST_FILE
    for node in ast.walk(ast.parse(text)):
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef):
            told = (ast.get_docstring(node, clean=False) or "").count("\n") + 1
            assert int(node.end_lineno or 0) - node.lineno + 1 - told <= LONGEST_FUNCTION, node.name


@pytest.mark.parametrize("file", FILES, ids=name_of)
def test_only_the_door_asks_the_world(file: Path) -> None:
    for what, names in OUTSIDE.items():
        if not name_of(file).startswith(tuple(MAY_ASK[what])):
            assert attributes(file) & names == set(), f"{name_of(file)} reads the {what}"
    assert not {name.partition(".")[0] for name in imported(file)} & CHANCE


def test_every_exception_is_still_needed() -> None:
    for what, places_told in MAY_ASK.items():
        for place in places_told:
            used = [attributes(file) & OUTSIDE[what] for file in FILES if name_of(file).startswith(place)]
            assert any(used), f"{place} no longer reads the {what}"


@pytest.mark.parametrize("file", FILES, ids=name_of)
def test_nobody_opens_a_socket(file: Path) -> None:
    assert not {name.partition(".")[0] for name in imported(file)} & NETWORK
