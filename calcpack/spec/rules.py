"""Check what the shape cannot show: keys that belong together, ids that must exist, people that must differ.

:data:`RULES` lists the rules in order; each takes a :class:`Draft` and yields what is wrong.
"""
from __future__ import annotations

import re
from collections.abc import Callable, Iterable, Iterator
from itertools import combinations

from calcpack.errors import Fault, UnitError, nearest
from calcpack.spec.drafts import Draft
from calcpack.spec.formulas import FORMULA_RULES
from calcpack.spec.places import Path, Wrong
from calcpack.spec.safety import QUANTITIES
from calcpack.spec.scalars import quantity
from calcpack.spec.schema import Document

_LOOKS_LIKE_ID = re.compile(r"[A-Z]{1,3}\d+")
_BETWEEN_IDS = re.compile(r"[^,;]+")
COMPOSITION_TOLERANCE = 0.005


def purpose_and_scope(draft: Draft) -> Iterator[Wrong]:
    """Only a draft may leave out what it is for."""
    sheet = draft.document.sheet
    for name in ("purpose", "scope"):
        if sheet.status != "draft" and getattr(sheet, name) is None and not draft.is_touched("sheet", name):
            yield Wrong(("sheet", name), Fault(f"key {name!r} is missing in sheet", hint=(
                f"only a draft may leave it out, and the status is {sheet.status!r}")), spoils="nothing")


def near_baseline(draft: Draft) -> Iterator[Wrong]:
    """A baseline stays beside the spec or in its repository, and is no option of git."""
    written = draft.document.sheet.baseline
    if written is None:
        return
    revision, colon, path = written.rpartition(":")
    if written.startswith(("/", "-")) or "\\" in written or ".." in path.split("/") or path.startswith("/") \
            or (colon and not (revision and path)):
        yield Wrong(("sheet", "baseline"), Fault(
            f"{written!r} is not the baseline of a sheet",
            expected="the path of a record in or below the spec's folder, or REV:path in git"), spoils="key")


def different_people(draft: Draft) -> Iterator[Wrong]:
    """Nobody checks or approves their own work."""
    signed = [(role, signature.name) for role in ("prepared", "checked", "approved")
              if (signature := getattr(draft.document.signoff, role)) is not None]
    for (first, name), (second, other) in combinations(signed, 2):
        if name.casefold().split() == other.casefold().split():
            yield Wrong(("signoff", second, "name"), Fault(
                f"{other!r} cannot be both {first!r} and {second!r}", expected="different people"),
                spoils="nothing")


def history(draft: Draft) -> Iterator[Wrong]:
    """A revision history, where there is one, holds the revision of the sheet."""
    document = draft.document
    marks = [entry.revision for entry in document.revisions]
    if marks and document.sheet.revision not in marks and not draft.is_touched("revisions") \
            and not draft.is_touched("sheet", "revision"):
        yield Wrong(("sheet", "revision"), Fault(
            f"revision {document.sheet.revision!r} is not in the revision history",
            expected="one of " + ", ".join(marks), hint="add a line for it under revisions"),
            spoils="nothing")


def fluids(draft: Draft) -> Iterator[Wrong]:
    """A fluid is named, composed or of constant heat capacity; the shares of a composition sum to 1."""
    for role, fluid in draft.document.case.fluids.items():
        path: Path = ("case", "fluids", role)
        if fluid.fluid is None and fluid.composition is None and fluid.constant_cp is None:
            yield Wrong(path, Fault(f"nothing says which fluid {role!r} is",
                                    expected="one of fluid, composition, constant_cp"), at_key=True)
        if fluid.composition is None:
            continue
        total = sum(quantity(text, "number").value for text in fluid.composition.values())
        if abs(total - 1.0) > COMPOSITION_TOLERANCE:
            yield Wrong((*path, "composition"), Fault(
                f"the shares of a composition sum to {total:.4g}",
                expected=f"a sum of 1, within {COMPOSITION_TOLERANCE}"), at_key=True)


def one_value_each(draft: Draft) -> Iterator[Wrong]:
    """An input has a value of its own or takes one from another sheet."""
    for symbol, entry in draft.document.case.inputs.items():
        path: Path = ("case", "inputs", symbol)
        if (entry.value is None) == (entry.link is None) and not draft.is_touched(*path):
            both = entry.value is not None
            yield Wrong((*path, "from") if both else path, Fault(
                f"input {symbol!r} has {'two values' if both else 'no value'}",
                expected="either value or from"), at_key=True, spoils="key" if both else "entry")


def inputs(draft: Draft) -> Iterator[Wrong]:
    """Outside a draft every input has a source; one that is taken from another sheet has that sheet."""
    status = draft.document.sheet.status
    for symbol, entry in draft.document.case.inputs.items():
        if entry.source is None and entry.link is None and status != "draft":
            yield Wrong(("case", "inputs", symbol, "source"), Fault(
                f"input {symbol!r} has no source",
                expected="the id of a reference or an assumption, or words, as in {value: …, source: R1}",
                hint=f"only a draft may leave it out, and the status is {status!r}"),
                at_key=True, spoils="nothing")


def safety(draft: Draft) -> Iterator[Wrong]:
    """Outside a draft the safety quantities have a source; a gauge pressure is above absolute zero."""
    written, status = draft.document.case.safety, draft.document.sheet.status
    if written is None:
        return
    if written.source is None and status != "draft" and not draft.is_touched("case", "safety", "source"):
        yield Wrong(("case", "safety"), Fault(
            "the safety quantities have no source", expected="the id of a reference, or words",
            hint=f"only a draft may leave it out, and the status is {status!r}"), at_key=True, spoils="nothing")
    for one in QUANTITIES:
        text = getattr(written, one.name)
        try:
            if text is not None:
                one.value(text, draft.p_atm)
        except UnitError as error:
            yield Wrong(("case", "safety", one.name), error.faults[0], spoils="key")


def series(draft: Draft) -> Iterator[Wrong]:
    """An account of a season needs the machine's heat and power; an input has one value."""
    written = draft.document.case.series
    if written is None:
        return
    for name in ("heat", "power"):
        given = getattr(written, name) is not None
        if given != (written.account != "none") and not draft.is_touched("case", "series"):
            what = f"key {name!r} is missing in series" if not given else f"nothing is summed up of {name!r}"
            yield Wrong(("case", "series", *([name] if given else [])), Fault(what, expected=(
                f"a symbol for the account {written.account!r}" if not given else "account: heating or output")),
                at_key=True)
    for symbol in written.inputs:
        if symbol in draft.document.case.inputs:
            yield Wrong(("case", "series", "inputs", symbol), Fault(
                f"the input {symbol!r} is given twice, for all rows and by row", hint="leave one of the two out"),
                at_key=True)


def limits(draft: Draft) -> Iterator[Wrong]:
    """A limit has one bound."""
    for index, limit in enumerate(draft.document.limits):
        given = [name for name in ("at_most", "at_least") if getattr(limit, name) is not None]
        if len(given) != 1:
            yield Wrong(("limits", index, *given[1:]), Fault(
                f"limit {limit.id!r} has {'two bounds' if given else 'no bound'}",
                expected="either at_most or at_least"), at_key=bool(given))


def ids_once(draft: Draft) -> Iterator[Wrong]:
    """An id stands for one thing; sources may name references and assumptions."""
    document = draft.document
    yield from _twice(_names(document, "limits", "id"), "id")
    yield from _twice([*_names(document, "assumptions", "id"), *_names(document, "references", "id")], "id")
    yield from _twice(_names(document, "results", "symbol"), "result")
    yield from _twice(_names(document, "revisions", "revision"), "revision")


def _names(document: Document, listing: str, key: str) -> list[tuple[Path, str]]:
    return [((listing, index, key), getattr(entry, key))
            for index, entry in enumerate(getattr(document, listing))]


def _twice(written: Iterable[tuple[Path, str]], noun: str) -> Iterator[Wrong]:
    seen: set[str] = set()
    for path, name in written:
        if name in seen:
            yield Wrong(path, Fault(f"the {noun} {name!r} is given twice"))
        seen.add(name)


def sources_exist(draft: Draft) -> Iterator[Wrong]:
    """What looks like an id in a source is the id of a reference or an assumption."""
    known = "one of " + ", ".join(sorted(draft.ids)) if draft.ids else None
    for path, text in _sources(draft):
        for part in _BETWEEN_IDS.finditer(text):
            name = part.group().strip()
            if _LOOKS_LIKE_ID.fullmatch(name) and name not in draft.ids:
                column = part.start() + len(part.group()) - len(part.group().lstrip())
                yield Wrong(path, Fault(f"there is no reference or assumption {name!r}",
                                        Draft.column(column, len(name)),
                                        expected=known, hint=nearest(name, draft.ids)), spoils="nothing")


def _sources(draft: Draft) -> Iterator[tuple[Path, str]]:
    document = draft.document
    places: list[tuple[Path, str | None]] = [
        *((("case", "inputs", symbol, "source"), entry.source)
          for symbol, entry in document.case.inputs.items()),
        *((("steps", index, "reference"), step.reference) for index, step in enumerate(document.steps)),
        *((("steps", index, "lookup", "source"), step.lookup.source)
          for index, step in enumerate(document.steps) if step.lookup is not None),
        *((("limits", index, "source"), limit.source) for index, limit in enumerate(document.limits)),
        (("case", "safety", "source"), document.case.safety.source if document.case.safety else None),
        *((("assumptions", index, "basis"), entry.basis) for index, entry in enumerate(document.assumptions))]
    return ((path, text) for path, text in places if text is not None)


RULES: tuple[Callable[[Draft], Iterator[Wrong]], ...] = (
    purpose_and_scope, near_baseline, different_people, history, fluids, one_value_each, inputs, safety, series,
    *FORMULA_RULES, limits, ids_once, sources_exist)
