"""A record to what a checker can mark on its sheet, each with the identity and the number that are seen."""
from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from decimal import Decimal
from typing import Any

from calcpack.record.identity import identity
from calcpack.review.identities import (
    assumption_seen,
    documents,
    figures_seen,
    input_seen,
    known_identities,
    limit_seen,
    step_seen,
)
from calcpack.units import shown_with_unit

Data = Mapping[str, Any]

KINDS = ("limit", "input", "assumption", "step", "figure")
"""What can be marked, in the order of the sheet."""

_NUMBER = re.compile(r"([-+−]?\d+(?:\.\d+)?(?:e-?\d+)?)(?: (.*))?")


@dataclass(frozen=True, slots=True)
class Target:
    """One thing on a sheet that a checker can mark.

    ``name`` is the symbol of a step or input, or an id; ``identity`` moves
    when anything moves that is seen there; ``shown`` is the number with its
    unit as printed, None where there is none; ``label`` says in words what it
    is; ``number`` is a step's number on the sheet, else empty.
    """

    kind: str
    name: str
    identity: str
    shown: str | None
    label: str
    number: str = ""

    @property
    def key(self) -> tuple[str, str]:
        """Kind and name, which together are unique on a sheet."""
        return self.kind, self.name


def targets_of(data: Data) -> tuple[Target, ...]:
    """Everything on the sheet that can be marked: limits, inputs, assumptions, steps, figures."""
    known, cited = known_identities(data), documents(data)
    found = [Target("limit", one["id"], limit_seen(one, known, cited), one["value"], one.get("text") or one["symbol"])
             for one in data["limits"]]
    found += [Target("input", one["symbol"], input_seen(one, cited), _shown(one), one.get("title") or "")
              for one in data["inputs"]]
    found += [Target("assumption", one["id"], assumption_seen(one), None, one["text"])
              for one in data.get("assumptions") or ()]
    found += [Target("step", one["symbol"], step_seen(one, cited), _shown(one), one.get("title") or "", one["id"])
              for one in data["steps"]]
    found += [Target("figure", name, seen, None, title) for name, (title, seen) in figures_seen(data, known).items()]
    return tuple(found)


def _shown(entry: Data) -> str:
    return shown_with_unit(entry["shown"], entry["unit"])


def shows_the_same(seen: str | None, now: str | None) -> bool:
    """Whether two printed numbers are the same to the digits of the one that has fewer, in the same unit.

    Decided on the printed texts alone: ``'88.31 °C'`` was seen, ``'88.312 °C'``
    and ``'88.3 °C'`` are the same, ``'88.32 °C'`` is not. A second reading in
    brackets, such as the Celsius twin of a level, is not compared.
    """
    if seen is None or now is None:
        return seen == now
    old, new = (_NUMBER.fullmatch(text.partition(" (")[0]) for text in (seen, now))
    if old is None or new is None or old[2] != new[2]:
        return seen == now
    was, present = (Decimal(one[1].replace("−", "-")) for one in (old, new))
    coarser = max(was.as_tuple().exponent, present.as_tuple().exponent)
    return abs(present - was) <= Decimal(5).scaleb(coarser - 1)


_CASE = ("method", "method_title", "method_text", "assumes", "leaves_out")
_SHEET = ("number", "title", "project", "revision", "purpose", "scope", "grade", "codes", "units")


def record_identity(data: Data) -> str:
    """The identity of the whole sheet, which a signature is bound to.

    Covers what the sheet prints of the calculation: title block, case, inputs,
    steps, limits, assumptions, references, results, cautions, verdicts of the
    checks, revisions. The status, the date, who signed, the block of an issue,
    versions and hashes are left out: they may change without the calculation.
    """
    sheet = data["sheet"]
    return identity((
        "sheet", [sheet.get(key) for key in _SHEET], f"{sheet['p_atm']['shown']} {sheet['p_atm']['unit']}",
        _case(data["case"]), [[*one.key, one.identity, one.shown] for one in targets_of(data)],
        [[one["symbol"], one["id"], one["numbers"], one.get("also_shown")] for one in data["steps"]],
        [[one["id"], one["text"]] for one in data.get("references") or ()],
        [[symbol, one["shown"], one["unit"], one["title"]] for symbol, one in _in_order(data["results"])],
        *_findings(data),
        [[one.get(key) for key in ("revision", "date", "note", "by")] for one in data.get("revisions") or ()]))


def _in_order(results: Data) -> list[tuple[str, Any]]:
    return sorted(results.items(), key=lambda item: item[1].get("order", 0))


def _case(case: Data) -> list[Any]:
    safety = case.get("safety") or {}
    return [[case.get(key) for key in _CASE],
            [[name, one["value"], one["meaning"]] for name, one in sorted((case.get("options") or {}).items())],
            [[role, one["title"], one["designation"], one["identity"]]
             for role, one in sorted((case.get("fluids") or {}).items())],
            [safety.get(key) for key in ("source", "room_level", "fluid_group")],
            [[one["name"], one["written"]] for one in safety.get("quantities") or ()]]


def _findings(data: Data) -> list[Any]:
    """Verdicts and printed values; of a check the verdict alone, since its residual is the noise of a machine."""
    keys = ("id", "status", "topic", "text", "value", "threshold", "source", "defer", "reason")
    margins = (data.get("uncertainty") or {}).get("limits") or ()
    return [[[one["id"], one["group"], one["status"]] for one in data["checks"]],
            [[one.get(key) for key in keys] for one in data["cautions"]],
            [[one["id"], one["status"], one["value"], one["bound"]] for one in data.get("usual_limits") or ()],
            [[one["id"], one["verdict"]] for one in margins]]
