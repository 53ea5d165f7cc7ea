"""The published checks to a verification record: each solved here and now, and how far it came out."""
from __future__ import annotations

import datetime
import json
import platform
from collections.abc import Callable, Mapping, Sequence
from importlib.metadata import version
from pathlib import Path
from typing import Any

import calcpack
from calcpack.errors import CalcpackError, CommandError, Fault, nearest
from calcpack.pipeline import solve_spec
from calcpack.verification.published import Case, Deviation, cases, compare, method_of, row_order, test_set

FORMAT = 1
Data = Mapping[str, Any]


def self_check(method: str | None = None, tell: Callable[[str], None] = lambda text: None) -> dict[str, Any]:
    """Every published check, or those of one method, as a verification record.

    A case that cannot be solved, or whose sheet has a failing check of its
    own, is a failure like a value that is off.

    Raises
    ------
    CommandError
        Where no published check names the method.
    """
    chosen = [(case, method_of(case.spec)) for case in cases()]
    known = sorted({name for _, name in chosen})
    if method is not None:
        chosen = [pair for pair in chosen if pair[1] == method]
        if not chosen:
            raise CommandError(Fault(f"no published check is solved by a method {method!r}",
                                     expected=", ".join(known), hint=nearest(method, known)))
    results = []
    for number, (case, name) in enumerate(chosen, start=1):
        tell(f"{number} of {len(chosen)}: {case.name}")
        results.append(_result(case, name))
    return _record(results, whole=method is None)


def _result(case: Case, method: str) -> dict[str, Any]:
    """One case: its deviations, or why it has none."""
    entry: dict[str, Any] = {"row": case.row, "case": case.name, "method": method, "source": case.source,
                             "known": case.known, "fluids": [], "values": [], "failure": None}
    try:
        record = solve_spec(case.spec, case.overrides)
        entry["values"] = [_value(one) for one in compare(case, record)]
    except CalcpackError as error:
        return entry | {"failure": "; ".join(fault.what for fault in error.faults)}
    except (KeyError, ValueError) as error:
        return entry | {"failure": f"the sheet does not give what is published: {error}"}
    entry["fluids"] = sorted({one["designation"] for one in record.data["case"]["fluids"].values()})
    failed = [one["id"] for one in record.data["checks"] if one["status"] == "fails"]
    return entry | {"failure": f"checks of the sheet fail: {', '.join(failed)}"} if failed else entry


def _value(one: Deviation) -> dict[str, Any]:
    return {"symbol": one.symbol, "published": one.published, "computed": one.computed, "deviation": one.deviation,
            "allowed": one.allowed, "scale": one.scale, "share": one.share, "holds": one.holds}


def _record(results: Sequence[Data], *, whole: bool) -> dict[str, Any]:
    from calcpack.record.build import LIBRARIES
    results = sorted(results, key=lambda one: (row_order(one["row"]), one["case"]))
    methods = sorted({one["method"] for one in results})
    return {"calcpack verification": FORMAT, "date": datetime.date.today().isoformat(), "test_set": test_set(),
            "whole": whole,
            "engine": {"calcpack": calcpack.__version__, "python": platform.python_version(),
                       "platform": f"{platform.system()} {platform.machine()}",
                       "libraries": {name: version(name) for name in LIBRARIES}},
            "methods": {name: _summary([one for one in results if one["method"] == name]) for name in methods},
            "pass": all(passes(one) for one in results), "results": results}


def _summary(results: Sequence[Data]) -> dict[str, Any]:
    values = [(one, value) for one in results for value in one["values"]]
    worst = max(values, key=lambda pair: pair[1]["share"], default=None)
    return {"cases": len(results), "rows": len({one["row"] for one in results}), "values": len(values),
            "from_memory": sum(one["known"] != "source" for one in results),
            "fluids": sorted({fluid for one in results for fluid in one["fluids"]}),
            "worst": {"row": worst[0]["row"], "source": worst[0]["source"],
                      **{key: value for key, value in worst[1].items() if key not in ("computed", "holds")}}
            if worst else None, "pass": all(passes(one) for one in results)}


def passes(result: Data) -> bool:
    """Whether a case came out, and every value of it within what is allowed."""
    return result["failure"] is None and all(value["holds"] for value in result["values"])


def to_json(verification: Data) -> str:
    """The record's text, equal for equal runs."""
    return json.dumps(verification, indent=1, ensure_ascii=False, sort_keys=True) + "\n"


def read_verification(path: Path) -> dict[str, Any]:
    """A verification record as :func:`to_json` wrote it.

    Raises
    ------
    CommandError
        For a file that is none.
    """
    try:
        data = json.loads(path.read_text("utf-8"))
    except (OSError, ValueError) as error:
        raise CommandError(Fault(f"cannot read the verification record {path}", detail=str(error))) from None
    if not isinstance(data, dict) or data.get("calcpack verification") != FORMAT:
        raise CommandError(Fault(f"{path} is no verification record",
                                 expected="a file written by 'calcpack self-check -o FILE'"))
    return data
