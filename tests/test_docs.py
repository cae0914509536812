"""README.md and DEVELOPERS.md say what the code does; where they could rot, a test compares."""

import importlib
import os
import re
import shlex
import subprocess
from pathlib import Path
from typing import Any

import pytest
import typer.main

from passplan import cli
from passplan.domain import errors
from passplan.domain.rules import Rule
from passplan.verify.opinion import CHECKS
from passplan.workspace.sample import sample_files
from passplan.workspace.wording import UNITS
from tests.pages import DEVELOPERS, README, ROOT, table, ticked
from tests.readme_pages import block, keys_page

COMMANDS: Any = typer.main.get_command(cli.app)
EXAMPLES = [ticked(row[2])[0] for row in table(README, "command")]
FENCED = re.findall(r"^```\n(.*?)^```$", README, re.MULTILINE | re.DOTALL)


def parsed(line: str) -> tuple[str, set[str]]:
    """Return the name of a typed command and its options; the door's error where it cannot be typed."""
    program, *words = shlex.split(line)
    assert program.rpartition("/")[2] == "passplan"
    command, names = COMMANDS, []
    while words and words[0] in getattr(command, "commands", {}):
        names.append(words.pop(0))
        command = command.commands[names[-1]]
    command.make_context(names[-1], words)
    return " ".join(names), {option for one in command.params for option in one.opts}


# README.md


def test_the_first_command_installs_plans_and_writes_calendars() -> None:
    line = " ".join(FENCED[0].split())
    steps = [step.strip() for step in line.split("&&")]
    assert steps[:2] == ["python3 -m venv .venv", ".venv/bin/pip install --quiet ."]
    assert [parsed(step)[0] for step in steps[2:]] == ["new", "plan", "calendar"]
    assert all("my-week" in step for step in steps[2:])


def test_the_second_command_is_the_one_that_ci_types() -> None:
    script = ROOT / ".ci" / "run"
    told = script.read_text(encoding="utf-8")
    (read,) = re.findall(r'^command="\$\((grep .* README\.md)\)"$', told, re.MULTILINE)
    typed = subprocess.run(["bash", "-c", read], cwd=ROOT, capture_output=True, text=True, check=True)
    assert typed.stdout == FENCED[1]
    assert FENCED[1].startswith("python3 -m venv .venv-test && ")
    assert FENCED[1].endswith(" -m pytest\n")
    assert 'eval "$command"' in told
    assert os.access(script, os.X_OK)


def test_every_command_is_there_with_an_example_that_can_be_typed() -> None:
    known = []
    for name, command in COMMANDS.commands.items():
        known += [name, *(f"{name} {inner}" for inner in getattr(command, "commands", ()))]
    rows = table(README, "command")
    assert sorted(ticked(row[0])[0] for row in rows) == sorted(known)
    for row in rows:
        (name,) = ticked(row[0])
        assert parsed(ticked(row[2])[0])[0] == name


def test_options_that_are_named_exist() -> None:
    known = {"--help"}.union(*(parsed(line)[1] for line in EXAMPLES))
    named = set(re.findall(r"(?<![\w-])--[a-z][a-z-]+", README))
    assert named - {"--quiet"} <= known  # that one is pip's


def test_the_exit_codes_are_those_of_the_door() -> None:
    told = {int(row[0]) for row in table(README, "exit code")}
    assert told == {int(code) for code in re.findall(r"(?:^|[;:] )(\d+) ", str(cli.__doc__), re.MULTILINE)}
    raised = {one.exit_code for one in vars(errors).values() if hasattr(one, "exit_code")}
    assert raised | {cli.UNREADABLE, cli.FAULT, cli.INTERRUPTED} <= told


def test_the_tables_of_keys_are_those_of_the_code() -> None:
    assert block(README, "keys") == keys_page(), "run: python -m tests.readme_pages"


def test_the_tree_shows_the_files_of_a_workspace() -> None:
    (tree,) = [part for part in FENCED if part.startswith("my-week/")]
    shown = [line.split()[0] for line in tree.splitlines()[1:]]
    for name in sample_files():
        assert any(name == each or Path(name).match(each) or name.startswith(each) for each in shown), name


def test_the_sample_week_looks_like_one() -> None:
    lines = block(README, "sample week").splitlines()
    assert re.fullmatch(r"Week 2026-W50, edition 1, Teasel-1: .+", lines[1])
    assert re.search(r"there +who +up +down +charge$", "\n".join(lines), re.MULTILINE)
    contacts = [re.match(r"  \d\d:\d\d-\d\d:\d\d  ([A-Z]{3})-\d\d  ", line) for line in lines]
    codes = {found[1] for found in contacts if found}
    assert codes <= {Path(name).stem.upper() for name in sample_files() if name.startswith("stations/")}
    assert len(codes) > 4
    assert max(map(len, lines)) <= 80


# DEVELOPERS.md


def rule_sets() -> dict[str, frozenset[Rule]]:
    """Return file, from the package on, to the rules it keeps."""
    found = {}
    for file in sorted((ROOT / "passplan").rglob("*.py")):
        if re.search(r"^RULES\b", file.read_text(encoding="utf-8"), re.MULTILINE):
            name = file.relative_to(ROOT).with_suffix("")
            module = importlib.import_module(".".join(name.parts))
            found[file.relative_to(ROOT / "passplan").as_posix()] = module.RULES
    return found


def test_every_rule_is_kept_and_read_again() -> None:
    assert list(CHECKS) == list(Rule)
    assert frozenset().union(*rule_sets().values()) == frozenset(Rule)


def test_the_table_of_rules_is_that_of_the_code() -> None:
    keeps = rule_sets()
    rows = table(DEVELOPERS, "rule")
    assert [ticked(row[0])[0] for row in rows] == [rule.name for rule in Rule]
    for rule, (_, kept, read) in zip(Rule, rows, strict=True):
        assert sorted(ticked(kept)) == sorted(file for file, rules in keeps.items() if rule in rules)
        check = CHECKS[rule]
        assert ticked(read) == [f"{check.__module__.rpartition('.')[2]}.{check.__name__}"]


@pytest.mark.parametrize("stop", table(DEVELOPERS, "stop"), ids=lambda stop: stop[1].strip("`"))
def test_the_recipe_leads_through_the_files(stop: tuple[str, ...]) -> None:
    _, file, what = stop
    assert ticked(what)[0] in (ROOT / ticked(file)[0]).read_text(encoding="utf-8")


def test_every_unit_is_in_the_table_of_names() -> None:
    names = {
        name for row in table(DEVELOPERS, "ends in") for cell in (row[0], row[2]) for name in ticked(cell)
    }
    assert {f"_{unit}" for unit in UNITS} <= names


def test_every_folder_of_tests_is_in_the_table() -> None:
    there = {f"tests/{path.parent.name}/" for path in (ROOT / "tests").glob("*/*.py")}
    assert {ticked(row[0])[0] for row in table(DEVELOPERS, "folder")} == there


def test_files_that_are_named_exist() -> None:
    for name in set(re.findall(r"`([a-z0-9_./]+\.(?:py|md|toml))`", DEVELOPERS)):
        here = [ROOT / name, ROOT / "passplan" / name, *(ROOT / "passplan").glob(f"*/{name}")]
        assert any(path.exists() for path in [*here, ROOT / "tests" / name]), name
    for module in re.findall(r"python -m (tests[a-z_.]+)", DEVELOPERS + README):
        assert (ROOT / (module.replace(".", "/") + ".py")).exists(), module
    for line in re.findall(r"python -m pytest ([a-z_./ ]+)", DEVELOPERS):
        assert all((ROOT / name).exists() for name in line.split()), line
