"""What can be marked on a sheet to attributes of its boxes, and its review file to data that the page carries."""
from __future__ import annotations

import json
from collections.abc import Callable, Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any

from markupsafe import Markup

from calcpack.review.targets import Target, targets_of
from calcpack.review.writing import review_path

if TYPE_CHECKING:
    from calcpack.review.marks import Mark, ReviewFile

Data = Mapping[str, Any]

SCRIPTS = ("js-yaml.min.js", "review_text.js", "review_marks.js", "review_store.js", "review_places.js",
           "review_desk.js", "review_view.js", "review.js")
"""The scripts of the page in the order in which they build on each other."""


def boxes_of(record: Data) -> Callable[[str, str], Markup]:
    """``box(kind, name)`` gives the attributes of the box that shows a target; none for what cannot be marked."""
    found = {one.key: _attributes(one) for one in targets_of(record)}
    return lambda kind, name: found.get((kind, name), Markup(""))


def no_boxes(kind: str, name: str) -> Markup:
    """Boxes of a page on which nothing is marked, such as that for print."""
    return Markup("")


def _attributes(target: Target) -> Markup:
    given = {"kind": target.kind, "name": target.name, "seen": target.identity, "shown": target.shown}
    return Markup("").join(Markup(' data-{}="{}"').format(key, text) for key, text in given.items() if text is not None)


def review_data(record: Data, review: ReviewFile | None) -> Markup:
    """The JSON that tells the page whose sheet it is, and the marks and signatures of the review file so far."""
    sheet = record["sheet"]
    prepared = (record.get("signoff") or {}).get("prepared") or {}
    data = {"number": sheet["number"], "project": sheet["project"], "revision": sheet["revision"],
            "author": prepared.get("name") or "", "spec": record["spec_file"],
            "file": review_path(Path(record["spec_file"])).name,
            "marks": [_mark(one) for one in review.marks] if review else [],
            "signatures": [_entry(one, "role", "by", "date", "revision", "record") for one in review.signatures]
            if review else []}
    # A text of the sheet must not end the script element that it stands in.
    text = json.dumps(data, ensure_ascii=False, separators=(",", ":"))
    return Markup(text.replace("&", "\\u0026").replace("<", "\\u003c").replace(">", "\\u003e"))


def _mark(mark: Mark) -> dict[str, Any]:
    """A mark with the keys that it has in the file."""
    answer = {"answer": _entry(mark.answer, "by", "date", "text")} if mark.answer else {}
    return {mark.kind: mark.name} | _entry(mark, "revision", "seen", "shown", "verdict", "by", "date", "text") | answer


def _entry(one: Any, *keys: str) -> dict[str, str]:
    return {key: value for key in keys if (value := getattr(one, key)) is not None}
