"""JSON Schemas of the workspace's files, so that an editor can check and explain while one types."""

import json
import re
from pathlib import Path
from types import NoneType
from typing import Any, TypeAlias

from pydantic import TypeAdapter

from passplan.domain.errors import InputError, Mistake
from passplan.workspace.read import ELSEWHERE, ROWS, WHOLE

Json: TypeAlias = Any  # dicts, lists, texts and numbers, as the json module has them

_DIALECT = "https://json-schema.org/draft/2020-12/schema"  # what pydantic writes
_ATTRIBUTE = re.compile(r"^    (\w+(?:, \w+)*): (.+(?:\n        .+)*)", re.MULTILINE)


def schemas() -> dict[str, dict[str, Any]]:
    """Return a JSON Schema (draft 2020-12) of each kind of file, by kind."""
    whole = {str(kind): _schema(noun) for kind, noun in WHOLE.items()}
    mission = whole["mission"]
    mission["properties"] = {key: part for key, part in mission["properties"].items() if key not in ELSEWHERE}
    mission["required"] = [key for key in mission["required"] if key not in ELSEWHERE]
    rows = {str(kind): _rows(nouns) for kind, nouns in ROWS.items()}
    return {kind: {"$schema": _DIALECT} | schema for kind, schema in (whole | rows).items()}


def write_schemas(folder: Path) -> tuple[Path, ...]:
    """Write `mission.schema.json` and its like into a folder, made if need be; return the files.

    They are made from passplan alone, so older ones of the same name are replaced.

    Raises:
        InputError: the folder cannot be written.
    """
    made = []
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for kind, schema in schemas().items():
            path = folder / f"{kind}.schema.json"
            path.write_text(json.dumps(schema, indent=2) + "\n", encoding="utf-8")
            made.append(path)
    except OSError as error:
        told = f"cannot be written: {(error.strerror or str(error)).lower()}"
        raise InputError([Mistake(str(folder), "", "", told)]) from None
    return tuple(made)


def _schema(noun: type) -> dict[str, Json]:
    """Return the schema of a file that is one noun."""
    return {"title": noun.__name__, **_plain(TypeAdapter(noun).json_schema())}


def _rows(nouns: dict[str, type]) -> dict[str, Json]:
    """Return the schema of a file of [[tables]]."""
    schema: dict[str, Json] = {"type": "object", "additionalProperties": False, "properties": {}, "$defs": {}}
    for key, noun in nouns.items():
        rows = _plain(TypeAdapter(tuple[noun, ...]).json_schema())  # type: ignore[valid-type]
        schema["$defs"] |= rows.pop("$defs")
        schema["properties"][key] = rows
    return schema


def _plain(schema: Json) -> Json:
    """Return a schema fit for TOML and for people: no null, no made-up titles, our words on each key."""
    if isinstance(schema, list):
        return [_plain(part) for part in schema]
    if not isinstance(schema, dict):
        return schema
    kept = {key: _plain(part) for key, part in schema.items() if key != "title" or not isinstance(part, str)}
    if isinstance(kept.get("default", ""), dict | NoneType):  # a whole table tells an editor nothing
        del kept["default"]
    if "anyOf" in kept:
        kept["anyOf"] = [part for part in kept["anyOf"] if part != {"type": "null"}]
        if len(kept["anyOf"]) == 1:
            kept |= kept.pop("anyOf")[0]
    if "properties" in kept and isinstance(kept.get("description"), str):
        kept["description"], told = _told(kept["description"])
        for key in told.keys() & kept["properties"].keys():
            kept["properties"][key] = {"description": told[key], **kept["properties"][key]}
    return kept


def _told(docstring: str) -> tuple[str, dict[str, str]]:
    """Return a noun's sentence, and what its docstring says of each attribute."""
    head, _, rest = docstring.partition("\n\nAttributes:\n")
    told = {}
    for names, words in _ATTRIBUTE.findall(rest):
        told.update(dict.fromkeys(names.split(", "), _in_toml(" ".join(words.split()))))
    return head, told


def _in_toml(words: str) -> str:
    """Return what a docstring says in the words of a file, which has no None, no True and no False."""
    words = re.sub(r"\bNone = ", "left out: ", words)
    words = re.sub(r"(?<=\. )None (?=[a-z])", "Left out, it ", words)
    words = re.sub(r"\bNone (?=[a-z])", "left out, it ", words)
    return re.sub(r"\b(?:True|False)\b", lambda match: match[0].lower(), words)
