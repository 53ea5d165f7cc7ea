"""A verification record to what a sheet says of it: which checks cover its method, when they ran, how they came out."""
from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from pathlib import Path
from typing import Any

import yaml

Data = Mapping[str, Any]

NOT_RUN = "not run on this machine: run 'calcpack self-check -o verification.json' beside the specs"
KNOWN_ERRORS = Path(__file__).with_name("known_errors.yaml")


def statement(record: Data, verification: Data | None) -> dict[str, Any]:
    """What the sheet prints of the verification of the program.

    ``run`` tells whether there is a run for the sheet's method and versions,
    ``passed`` whether it came out, ``covers`` whether the sheet's fluids are
    among those of the checks; ``words`` say it, ``flags`` say what is amiss.
    """
    known = known_errors(record["engine"]["calcpack"], record["case"]["method"])
    base = {"known_errors": known, "run": False, "passed": False, "covers": False, "same": False, "words": NOT_RUN,
            "flags": []}
    if verification is None:
        return base
    method = record["case"]["method"]
    done = verification["methods"].get(method)
    if done is None:
        return base | {"words": f"the run of {verification['date']} (set {verification['test_set']}) has no published "
                                f"check of the method {method}", "flags": ["this method is not covered"]}
    same = _same(record["engine"], verification["engine"])
    outside = [one["designation"] for one in (record["case"].get("fluids") or {}).values()
               if one["designation"] not in done["fluids"]]
    flags = [] if same else ["the run was made with other versions than this sheet: run calcpack self-check again"]
    flags += [] if done["pass"] else ["published checks of this method FAIL"]
    flags += [f"outside what the checks of this method cover: {', '.join(dict.fromkeys(outside))}"] if outside else []
    return base | {"run": True, "passed": done["pass"], "covers": not outside, "same": same, "flags": flags,
                   "words": _words(verification, method, done)}


def _same(engine: Data, other: Data) -> bool:
    """Whether two runs were made with the same program, properties and machine."""
    return all(engine[key] == other[key] for key in ("calcpack", "python", "platform", "libraries"))


def _words(verification: Data, method: str, done: Data) -> str:
    worst = done["worst"]
    memory = f", {done['from_memory']} of them in part from memory" if done["from_memory"] else ""
    cases = "1 case" if done["cases"] == 1 else f"{done['cases']} cases"
    text = (f"published checks solved by the method {method}: {cases} of {done['rows']} published "
            f"examples{memory}, {done['values']} values; run {verification['date']}, set {verification['test_set']}: "
            f"{'all within what is allowed' if done['pass'] else 'NOT all within what is allowed'}")
    if worst is None:
        return text
    return (f"{text}. Worst: {worst['symbol']} of example {worst['row']} ({worst['source']}), published "
            f"{worst['published']}, at {100.0 * worst['share']:.0f} % of the allowed deviation")


def known_errors(version: str, method: str) -> list[dict[str, str]]:
    """The errors known of a version of the program that can touch a method."""
    return [one for one in _listed() if version in str(one["versions"]).split(", ")
            and (one["methods"] == "all" or method in one["methods"])]


@cache
def _listed() -> tuple[dict[str, Any], ...]:
    return tuple(yaml.safe_load(KNOWN_ERRORS.read_text("utf-8"))["errors"])
