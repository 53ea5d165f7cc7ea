"""The carried review file against what the record says of check and signatures at issue."""
from __future__ import annotations

from pathlib import Path
from typing import TYPE_CHECKING, Any

from calcpack.errors import CalcpackError
from calcpack.issuing.carried import CarriedSheet
from calcpack.issuing.paper import FOR_USE
from calcpack.issuing.verify_again import UNFIT
from calcpack.issuing.verify_report import Difference, Stage

if TYPE_CHECKING:
    from calcpack.review.standing import Standing


def check_stage(carried: CarriedSheet) -> Stage:
    """Who signed, and whether marks and signatures hold for the record as it is."""
    record, issue = carried.record.data, carried.record.data["issue"]
    name = next((name for name, role in carried.roles.items() if role == "review"), None)
    if name is None:
        wrongs = _unfit("there is no review file inside", issue) + _signed_otherwise({}, issue)
        return Stage("check", "no review file inside", wrongs)
    from calcpack.review.reading import read_review
    from calcpack.review.standing import standing
    try:
        stands = standing(record, read_review(Path(name), text=carried.content(name).decode("utf-8")))
    except (CalcpackError, UnicodeDecodeError) as error:
        return Stage("check", "THE REVIEW FILE CANNOT BE READ", (Difference(
            f"attachment {name}", "this is no review file of this sheet", str(error), "one that calcpack writes"),))
    except UNFIT as error:
        return Stage("check", "NOT TO BE TOLD", blocked="the record does not say what there is to check: "
                     f"{type(error).__name__}, {error}")
    wrongs = _signed_otherwise(_held(stands), issue)
    if not stands.complete:
        wrongs += _unfit("the review file does not show that all is checked and signed", issue)
    return Stage("check", _words(stands), wrongs)


def _held(stands: Standing) -> dict[str, dict[str, str | None]]:
    from calcpack.review.standing import SIGNED
    return {role: {"name": one.name, "date": one.date} for role, one in stands.signatures.items()
            if one.state == SIGNED}


def _words(stands: Standing) -> str:
    done = len(stands.of("agreed", "corrected"))
    names = "; ".join(f"{role} {one['name']}, {one['date']}" for role, one in _held(stands).items())
    return f"{done} of {len(stands.items)} items checked; " + (names or "nobody has signed")


def _unfit(what: str, issue: Any) -> tuple[Difference, ...]:
    """An issue for use needs a whole check; one for information says itself what it lacks."""
    if issue["kind"] != FOR_USE:
        return ()
    return (Difference("check", f"{what}, and the sheet is issued for use"),)


def _signed_otherwise(held: dict[str, Any], issue: Any) -> tuple[Difference, ...]:
    listed = issue.get("signatures")
    stated = {role: one for role, one in listed.items() if one} if isinstance(listed, dict) else {}
    return tuple(Difference("check", f"the record states another signature as {role}", _signer(stated.get(role)),
                            f"{_signer(held.get(role))}, by the review file inside")
                 for role in sorted({*stated, *held}) if stated.get(role) != held.get(role))


def _signer(one: Any) -> str:
    return f"{one.get('name')}, {one.get('date')}" if isinstance(one, dict) else "nobody"
