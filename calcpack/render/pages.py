"""A record and what goes with it to the ground that every part of a sheet is built on."""
from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from markupsafe import Markup

from calcpack.render import quantities
from calcpack.render.marks import Marks, marks_of

Data = Mapping[str, Any]

SOURCE_ID = re.compile(r"[A-Za-z]{1,4}\d+")
NOT_FOR_ANCHORS = re.compile(r"[^A-Za-z0-9._-]")


@dataclass(frozen=True, slots=True)
class Extras:
    """What is known of a sheet beside its record.

    ``verification`` is the record of a run of the published checks;
    ``review`` how the checker's marks and the signatures stand (None where
    the sheet has no review file); ``family`` what the sheet takes from others,
    gives to others, and the revisions issued before and after it;
    ``checklist`` the points of the sheet and ``anew`` its results reckoned
    anew from the page, both empty until the page has been looked at.
    """

    verification: Data | None = None
    review: Any | None = None
    family: Any | None = None
    checklist: tuple[Any, ...] = ()
    anew: tuple[Any, ...] = ()


NO_EXTRAS = Extras()


@dataclass(frozen=True, slots=True)
class Ground:
    """What the parts read: the record, its comparison, its figures, and who is where.

    ``anchors`` gives the anchor of each symbol (an input, a step, a column),
    ``used_by`` the numbers of the steps that read it, ``fluids`` the number
    (F1, F2 …) of each fluid role, ``sources`` the anchor of each reference
    and assumption.
    """

    record: Data
    comparison: Data | None
    figures: Sequence[Any]
    for_print: bool
    marks: Marks
    anchors: Mapping[str, str]
    used_by: Mapping[str, tuple[str, ...]]
    fluids: Mapping[str, str]
    sources: Mapping[str, str]
    extras: Extras = NO_EXTRAS

    def items(self, key: str) -> Sequence[Data]:
        """A list of the record; empty where the record has none."""
        return self.record.get(key) or ()

    def prose(self, text: str | None) -> Markup:
        """A sentence of the record, with the sheet's symbols set as symbols."""
        return quantities.prose((text or "").replace(" - ", " − ").replace(" * ", " × "), self.anchors)

    def sourced(self, text: str | None) -> Markup:
        """A source text with its reference and assumption numbers as links."""
        if not text:
            return Markup("")
        pieces, end = [], 0
        for match in SOURCE_ID.finditer(text):
            if match[0] in self.sources:
                pieces += [quantities.prose(text[end:match.start()]), link(self.sources[match[0]], match[0])]
                end = match.end()
        return Markup("").join([*pieces, quantities.prose(text[end:])])


def ground_of(record: Data, comparison: Data | None, figures: Sequence[Any], for_print: bool,
              extras: Extras = NO_EXTRAS) -> Ground:
    """The ground of one sheet."""
    anchors = {one["symbol"]: anchor("input", one["symbol"]) for one in record["inputs"]}
    for step in record["steps"]:
        anchors |= {one["symbol"]: anchor("step", step["id"])
                    for one in (*(step.get("table") or {}).get("columns", ()), step)}
    used: dict[str, list[str]] = {}
    for step in record["steps"]:
        for symbol in step["uses"]:
            used.setdefault(symbol, []).append(step["id"])
    sources = {one["id"]: anchor("reference", one["id"]) for one in record.get("references") or ()}
    sources |= {one["id"]: anchor("assumption", one["id"]) for one in record.get("assumptions") or ()}
    return Ground(record, comparison, tuple(figures), for_print, marks_of(record, comparison), anchors,
                  {symbol: tuple(ids) for symbol, ids in used.items()},
                  {role: f"F{number}" for number, role in enumerate(_roles(record), start=1)}, sources,
                  extras)


def _roles(record: Data) -> list[str]:
    """The fluid roles, in the order in which the formulas call on them."""
    roles = record["case"].get("fluids") or {}
    texts = " ".join(one["formula"] for one in record["steps"])
    called = [word for word in re.findall(r"\((\w+)[,)]", texts) if word in roles]
    return list(dict.fromkeys([*called, *sorted(roles)]))


def anchor(kind: str, name: str) -> str:
    """The id of a place in the page, made of characters that need no escape."""
    return f"{kind}-{NOT_FOR_ANCHORS.sub('-', str(name))}"


def link(target: str, text: str | Markup) -> Markup:
    """A link to a place in the same page."""
    return Markup('<a href="#{}">{}</a>').format(target, text)
