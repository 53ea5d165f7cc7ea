"""Turn what pydantic finds in the shape of a spec into faults in our own words."""
from __future__ import annotations

from collections.abc import Callable, Iterator
from functools import lru_cache
from typing import Any

from pydantic_core import ErrorDetails

from calcpack.errors import Fault, nearest
from calcpack.spec.places import Path, Wrong, in_words
from calcpack.spec.scalars import clipped
from calcpack.spec.schema import json_schema


def wrongs_of(errors: list[ErrorDetails]) -> list[Wrong]:
    """The faults of pydantic's ``errors``, each with the path of what is wrong.

    A key that is missing only because it is misspelt is told once, at the
    misspelt key.
    """
    schema = _schema()
    told = {(*error["loc"][:-1], _meant(schema, error["loc"])) for error in errors
            if error["type"] == "extra_forbidden"}
    return [_wrong(schema, error) for error in errors
            if not (error["type"] == "missing" and error["loc"] in told)]


@lru_cache(maxsize=1)
def _schema() -> dict[str, Any]:
    return json_schema()


def _wrong(schema: dict[str, Any], error: ErrorDetails) -> Wrong:
    path = error["loc"]
    of_key = path[-1:] == ("[key]",) and error["type"] not in ("extra_forbidden", "missing")
    if of_key:
        path = path[:-1]
    fault = _sentence(schema, error, path)
    if error["type"] == "extra_forbidden":
        return Wrong(path, fault, at_key=True, spoils="key", meant=_meant(schema, path))
    return Wrong(path, fault, at_key=of_key)


def _sentence(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
    if error["input"] is None and error["type"] != "missing":
        return no_value(path)
    say = _SENTENCES.get(error["type"])
    if say is None:
        return Fault(f"the value of {in_words(path)} does not fit", detail=error["msg"])
    return say(schema, error, path)


def no_value(path: Path) -> Fault:
    """The fault for a key, or an entry of a list, with nothing behind it."""
    last = path[-1]
    if isinstance(last, int):
        return Fault(f"{in_words(path)} has no value", hint="write a value, or leave the entry out")
    if last[:1].isdigit():
        return Fault(f"key {clipped(last)} has no value",
                     hint="inside { } a comma parts entries: write the decimal point as '.'")
    return Fault(f"key {clipped(last)} has no value", hint="write a value, or leave the key out")


def _unknown(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
    known = sorted(keys_at(schema, path[:-1]))
    return Fault(f"unknown key {clipped(path[-1])} in {in_words(path[:-1])}",
                 expected="one of " + ", ".join(known), hint=nearest(str(path[-1]), known))


def _missing(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
    about = next(_candidates(schema, path), {}).get("description")
    return Fault(f"key {path[-1]!r} is missing in {in_words(path[:-1])}",
                 expected=f"{path[-1]}: {about[0].lower()}{about[1:].rstrip('.')}" if about else None)


def _not_in_list(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
    allowed = [str(value) for part in _candidates(schema, path) for value in part.get("enum", [])]
    found = error["input"]
    what = f"{clipped(found)} is not a value of {in_words(path)}" if isinstance(found, str) else \
        f"a text is meant for {in_words(path)}"
    return Fault(what, found=None if isinstance(found, str) else kind_in_words(found),
                 expected="one of " + ", ".join(allowed), hint=nearest(str(found), allowed))


def _written(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
    return error["ctx"]["fault"]


def _wrong_kind(kind: str) -> Callable[[dict[str, Any], ErrorDetails, Path], Fault]:
    def say(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
        keys = sorted(keys_at(schema, path))
        expected = "keys of " + ", ".join(keys) if keys and kind == "a mapping" else None
        return Fault(f"{kind} is meant for {in_words(path)}", found=kind_in_words(error["input"]),
                     expected=expected)
    return say


def _number_of_entries(schema: dict[str, Any], error: ErrorDetails, path: Path) -> Fault:
    words = error["ctx"]
    bound = f"at least {words['min_length']}" if "min_length" in words else f"at most {words['max_length']}"
    count = words.get("actual_length")
    return Fault(f"{in_words(path)} has {count if count is not None else 'too many'}"
                 f" {'entry' if count == 1 else 'entries'}", expected=f"{bound} entries")


_SENTENCES: dict[str, Callable[[dict[str, Any], ErrorDetails, Path], Fault]] = {
    "extra_forbidden": _unknown,
    "missing": _missing,
    "literal_error": _not_in_list,
    "written": _written,
    "string_type": _wrong_kind("a text"),
    "list_type": _wrong_kind("a list"),
    "dict_type": _wrong_kind("a mapping"),
    "model_type": _wrong_kind("a mapping"),
    "too_short": _number_of_entries,
    "too_long": _number_of_entries,
}


def kind_in_words(value: Any) -> str:
    """What a value is: 'a list', 'a mapping', or its text in quotes."""
    if isinstance(value, list):
        return "a list"
    return "a mapping" if isinstance(value, dict) else clipped(value)


def _meant(schema: dict[str, Any], path: Path) -> str | None:
    hint = nearest(str(path[-1]), keys_at(schema, path[:-1]))
    return hint.split("'")[1] if hint else None


def keys_at(schema: dict[str, Any], path: Path) -> set[str]:
    """The keys that the schema knows in the mapping at ``path``."""
    return {name for part in _candidates(schema, path) for name in part.get("properties", {})}


def _candidates(schema: dict[str, Any], path: Path) -> Iterator[dict[str, Any]]:
    """The parts of the JSON Schema that the value at ``path`` may follow."""
    parts = [schema]
    for segment in path:
        parts = [below for part in parts for option in _options(schema, part)
                 for below in _below(option, segment)]
    for part in parts:
        yield from _options(schema, part)


def _below(part: dict[str, Any], segment: str | int) -> list[dict[str, Any]]:
    if isinstance(segment, int):
        return [part["items"]] if "items" in part else []
    if segment in part.get("properties", {}):
        return [part["properties"][segment]]
    others = [*part.get("patternProperties", {}).values(), part.get("additionalProperties")]
    return [other for other in others if isinstance(other, dict)]


def _options(schema: dict[str, Any], part: dict[str, Any]) -> Iterator[dict[str, Any]]:
    if "$ref" in part:
        target = schema["$defs"][part["$ref"].rsplit("/", 1)[1]]
        kept = {name: value for name, value in part.items() if name != "$ref"}
        yield {**target, **kept}
    elif "anyOf" in part:
        for option in part["anyOf"]:
            yield from _options(schema, option)
    else:
        yield part
