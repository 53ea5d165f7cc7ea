"""Two records that carry their specs to how much each change moved each key result; the parts sum to the whole.

Here alone a comparison computes: the old spec is solved again with the changes
of the new one taken in one set after the other.
"""
from __future__ import annotations

import hashlib
from collections.abc import Mapping
from dataclasses import dataclass, replace
from decimal import Decimal
from functools import partial
from math import fsum
from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError
from calcpack.revisions.causes import COMPUTING
from calcpack.revisions.edits import Cause, causes_between
from calcpack.revisions.mixtures import Mixtures
from calcpack.revisions.pairs import by
from calcpack.revisions.shares import MOST, Gap, averaged, one_by_one
from calcpack.units import shown_with_unit, unit
from calcpack.units.digits import number_text

if TYPE_CHECKING:
    from calcpack.solving.bind import Bound

Data = Mapping[str, Any]

NOISE = 1e-8
"""Share of a result below which a part is what the width of the roots leaves, printed as 0."""

REST = "anything else of the spec"
FILES = ", or the file of its rows"


class _UntoldError(Exception):
    """Why nothing can be said; its text is for the reader."""


@dataclass(frozen=True, slots=True)
class _Ground:
    """The mixtures of two specs, the two records' values, the old spec's values today, words for the program."""

    mixtures: Mixtures
    before: Data
    after: Data
    as_it_was: Mapping[str, float]
    program: str

    @property
    def causes(self) -> tuple[Cause, ...]:
        return self.mixtures.causes


def attribution(before: Data, after: Data, comparison: Data, folder: Path) -> tuple[dict[str, Any], str]:
    """Each changed key result's parts by cause, and a note where nothing can be said.

    Parameters
    ----------
    before, after : mapping
        The data of two records.
    comparison : mapping
        What changed between them: its ``results``, ``inputs``, ``formulas`` and ``engine`` are read.
    folder : Path
        Where a file of rows is looked for that the specs name.

    Returns
    -------
    dict
        By symbol: ``parts`` (each ``cause``, ``text``, ``part_value`` [SI],
        ``number`` and ``shown`` in the ``unit`` of print), ``program`` (the
        part that is the program's, of the same shape), ``sum`` [SI] of them
        all, ``sum_number``, ``method``, ``solves``; ``ends``, the result before and
        after (``value`` [SI], ``number`` in the ``ends_unit``, of a level its twin's).
    str
        Empty, or why nothing is attributed.
    """
    symbols = [one["symbol"] for one in comparison["results"] if one["kind"] == "changed"]
    if not symbols:
        return {}, ""
    try:
        ground = _ground(before, after, comparison, folder)
    except _UntoldError as error:
        return {}, f"not attributed: {error}"
    found, notes = {}, []
    for symbol in symbols:
        try:
            found[symbol] = _shared(ground, symbol)
        except _UntoldError as error:
            notes.append(f"{symbol} not attributed: {error}")
    return {symbol: {**one, "solves": ground.mixtures.solves} for symbol, one in found.items()}, "; ".join(notes)


def _ground(before: Data, after: Data, comparison: Data, folder: Path) -> _Ground:
    old, new = _bound(before, folder, "older"), _bound(after, folder, "newer")
    mixtures = Mixtures(old, new, causes_between(old, new, _words(comparison)))
    try:
        as_it_was = mixtures.as_it_was()
    except CalcpackError as error:
        raise _UntoldError(f"the older spec has no answer with today's program: {error.faults[0].what}") from None
    versions = ", ".join(f"{one['name']} {one['old'] or 'none'} → {one['new'] or 'none'}"
                         for one in comparison["engine"] if one["name"] in COMPUTING)
    program = f"the program: {versions}" if versions else "the program, though its versions are the same"
    rows = any(bound.spec.case.series for bound in (old, new))
    return _Ground(mixtures, before, after, as_it_was, program + (FILES if rows else ""))


def _words(comparison: Data) -> dict[str, str]:
    """Inputs and own formulas that changed, in the words that the comparison has for them."""
    told = [*comparison["inputs"], *(one for one in comparison["formulas"]
                                     if one["own"] and one["what"] in ("formula", "step"))]
    return {one["symbol"]: f"{one['symbol']}: {one['old'] or 'none'} → {one['new'] or 'none'}" for one in told}


def _bound(record: Data, folder: Path, which: str) -> Bound:
    """A record's own spec, bound again, with the inputs' values that the record was solved with."""
    from calcpack.solving.bind import bind
    from calcpack.spec import read_spec
    from calcpack.spec.model import Input
    text = record.get("spec_text")
    if not text:
        raise _UntoldError(f"the {which} record carries no spec")
    if hashlib.sha256(text.encode("utf-8", "surrogatepass")).hexdigest() != record["spec_sha256"]:
        raise _UntoldError(f"the spec that the {which} record carries is not the one it was solved from")
    path = folder / Path(record.get("spec_file") or "spec.yaml").name
    try:
        spec = read_spec(path, text=text, name=str(path))
        # A value may have been set on the command line: the record has it as written.
        written = {one["symbol"]: one["written"] for one in record["inputs"] if one.get("written")}
        inputs = {symbol: replace(spec.case.inputs.get(symbol) or Input(symbol, value), value=value, link=None)
                  for symbol, value in written.items()}
        return bind(replace(spec, case=replace(spec.case, inputs={**spec.case.inputs, **inputs})))
    except CalcpackError as error:
        raise _UntoldError(f"today's program does not read the {which} spec: {error.faults[0].what}") from None


def _shared(ground: _Ground, symbol: str) -> dict[str, Any]:
    """One result's parts: the causes', what is left of the spec, and the program's."""
    was, now = (by("symbol", (*one["inputs"], *one["steps"])) for one in (ground.before, ground.after))
    old, new = was[symbol], now[symbol]
    if symbol not in ground.as_it_was:
        raise _UntoldError("today's program gives it no value on the older sheet")
    value = partial(ground.mixtures.value, symbol)
    try:
        groups, method = _parts(ground, value)
        ends = value(0), value((1 << len(ground.causes)) - 1)
    except Gap as gap:
        raise _UntoldError(f"it has no value today: {gap.reason}") from None
    rest = ends[0] - ground.as_it_was[symbol]
    program = (ground.as_it_was[symbol] - old["value"]) + (new["value"] - ends[1])
    printing = _Printing(new["unit"], _decimals(old, new), NOISE * max(abs(old["value"]), abs(new["value"])))
    parts = [printing.part(", ".join(ground.causes[at].name for at in members),
                           "; ".join(ground.causes[at].text for at in members), part) for members, part in groups]
    if abs(rest) > printing.noise:
        parts.append(printing.part("rest", REST, rest))
    else:
        program += rest
    whole = fsum([*(part["part_value"] for part in parts), program])
    return {"parts": parts, "program": printing.part("program", ground.program, program), "sum": whole,
            "sum_number": printing.number(whole), "unit": new["unit"], "method": method, **_ends(old, new)}


def _ends(old: Data, new: Data) -> dict[str, Any]:
    """A result before and after, both in the unit that the newer sheet prints; of a level the twin, °C or °F."""
    in_print = unit(new["unit"])
    if old["unit"] == new["unit"] and old.get("also_shown") and new.get("also_shown"):
        numbers, name = [one["also_shown"].partition(" ")[0] for one in (old, new)], new["also_shown"].partition(" ")[2]
    else:
        decimals = max(0, -int(Decimal(new["shown"]).as_tuple().exponent))
        was = old["shown"] if old["unit"] == new["unit"] else number_text(in_print.from_si(old["value"]), decimals)
        numbers, name = [was, new["shown"]], in_print.symbol
    return {"ends_unit": name, "ends": [{"value": one["value"], "number": number}
                                        for one, number in zip((old, new), numbers, strict=True)]}


def _parts(ground: _Ground, value: Any) -> tuple[list[tuple[tuple[int, ...], float]], str]:
    """The causes, alone or together, with their parts; in words, how those were found."""
    count = len(ground.causes)
    if not count:
        return [], "the two specs compute the same"
    why = f"there are more than {MOST}"
    if count <= MOST:
        try:
            found = averaged(count, value)
            told = f"average over all orders of {count} causes" if count > 1 else "one cause moved it alone"
            return [((at,), part) for at, part in enumerate(found)], told
        except Gap as gap:
            if gap.mask in (0, (1 << count) - 1):
                raise
            why = f"with {ground.mixtures.names(gap.mask)} alone there is no answer: {gap.reason}"
    return one_by_one(count, value), f"{count} causes one at a time in the written order; {why}"


def _decimals(old: Data, new: Data) -> int:
    """One decimal more than the result is printed with."""
    places = [-int(Decimal(new["shown"]).as_tuple().exponent)]
    if old["unit"] == new["unit"]:
        places.append(-int(Decimal(old["shown"]).as_tuple().exponent))
    return min(places) + 1


@dataclass(frozen=True, slots=True)
class _Printing:
    """How parts of one result are printed: unit, decimals, and the size [SI] below which a part is 0."""

    unit: str
    decimals: int
    noise: float

    def number(self, part: float) -> str:
        """A part with its sign, in the unit of print; of a temperature level a difference."""
        if abs(part) <= self.noise:
            return "0"
        text = number_text(part / unit(self.unit).factor, self.decimals)
        return text if text.startswith("-") or not float(text) else f"+{text}"

    def part(self, cause: str, text: str, part: float) -> dict[str, Any]:
        """A part's entry."""
        number = self.number(part)
        return {"cause": cause, "text": text, "part_value": part, "number": number,
                "shown": shown_with_unit(number, self.unit)}
