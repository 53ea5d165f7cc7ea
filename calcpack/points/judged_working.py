"""Points on the working, the results and the cautions: what the calculation must print."""
from __future__ import annotations

from collections.abc import Callable

from calcpack.points.point import IDLE, MET, UNMET, Data, Judge, Verdict, View, all_of, decided, shortened


def _shown(view: View) -> Verdict:
    steps, page = len(view.items("steps")), view.redone
    lost = [*page.not_followed, *(one["id"] for one in view.items("steps")
                                  if f'id="step-{one["id"]}"' not in view.html)]
    return decided(page.steps == steps and not lost, "Calculation", f"not followed on the page: {shortened(lost)}")


def _referenced(view: View) -> Verdict:
    steps = view.items("steps")
    bare = [one["id"] for one in steps if not _grounded(one)]
    if not steps:
        return IDLE, "the sheet has no steps"
    return decided(not bare, "Calculation", f"{len(bare)} of {len(steps)} steps name no reference: {shortened(bare)}")


def _grounded(step: Data) -> bool:
    """Whether a step says what it stands on; a property stands on its fluid's equation of state, named there."""
    if step["kind"] == "property" or step.get("reference"):
        return True
    return bool((step.get("lookup") or {}).get("source") or (step.get("own") and step.get("note")))


def _redone(view: View) -> Verdict:
    worst = view.redone.worst
    if worst is None:
        return IDLE, "the sheet prints no result"
    said = f"{len(view.redone.findings)} values done again from this page; worst {worst.places:.2f} in the last place"
    return decided(not view.redone.wrong and not view.redone.not_followed, said, "a value cannot be had from print")


def _iterations(view: View) -> Verdict:
    found = [one for one in view.items("steps") if one["kind"] in ("root", "optimum")]
    if not found:
        return IDLE, "nothing is iterated"
    tolerance = view.prints("machine", "Iterations")
    bare = [one["id"] for one in found if not one[one["kind"]].get("iterations")]
    return decided(tolerance and not bare, "Calculation, How it was computed",
                   f"not stated: {', '.join(bare) or 'tolerance'}")


def _checked(groups: tuple[str, ...], what: str) -> Judge:
    """The checks of some groups: all hold, and their found values stand on the page."""
    def judge(view: View) -> Verdict:
        inside = [one for one in view.items("checks") if one["group"] in groups and one["status"] != "not evaluated"]
        if not inside:
            return IDLE, f"the sheet has no {what}"
        bad = [one["id"] for one in inside if one["status"] != "ok"]
        bare = [one["id"] for one in inside if not one.get("value")]
        printed = all(group in view.text("verification") for group in {one["group"] for one in inside})
        return decided(printed and not bad and not bare, f"Verification: {len(inside)} checks",
                       f"fails or is not printed: {shortened([*bad, *bare])}")
    return judge


def _verdicts(view: View) -> Verdict:
    results, limits = view.record["results"], view.items("limits")
    if not limits:
        return decided(False, "", "no result has a criterion")
    if not results:
        return decided(False, "", "the sheet names no results")
    bare = [one["id"] for one in limits if not one.get("margin")]
    return decided(not bare, "Results and limits", f"without a margin: {', '.join(bare)}")


def _failed(view: View) -> Verdict:
    failed = [one["id"] for one in view.items("limits") if one["status"] == "fails"]
    if not failed:
        return IDLE, "no criterion fails"
    said = f"{len(failed)} of {len(view.items('limits'))} limit"
    return decided(said in view.title and all(name in view.title for name in failed), "title block",
                   "a failed criterion is not in the title block")


def _cautions(status: str, needed: Callable[[Data], bool], lacking: str) -> Judge:
    def judge(view: View) -> Verdict:
        inside = [one for one in view.items("cautions") if one["status"] == status]
        lost = [one["id"] for one in inside if f'id="caution-{one["id"]}"' not in view.html]
        if lost:
            return decided(False, "", f"not on the page: {shortened(lost)}")
        return all_of(inside, needed, lambda one: one["id"], f"Cautions: {len(inside)}", lacking,
                      f"no caution is {status}")
    return judge


def _uncertain(view: View) -> Verdict:
    found = view.record.get("uncertainty") or view.record.get("sensitivity")
    return decided(bool(found), "Uncertainty and sensitivity", "no uncertainty and no sensitivity is worked out")


def _validity(view: View) -> Verdict:
    case = view.record["case"]
    said = (*(case.get("assumes") or ()), *(case.get("leaves_out") or ()))
    ranges = [one["range"] for one in (case.get("fluids") or {}).values() if one.get("range")]
    if not said and not ranges:
        return _assumed(view) if case["method"] == "none" else (UNMET, "neither the method nor a fluid states limits")
    printed = view.prints("method", *said) and view.prints("fluids", *ranges)
    return decided(printed, "Method and arrangement, Fluids", "limits of validity are not printed")


def _assumed(view: View) -> Verdict:
    """A sheet of the engineer's own steps holds as far as its assumptions do."""
    if not view.items("assumptions"):
        return UNMET, "neither a fluid nor an assumption states limits"
    return all_of(view.items("assumptions"), lambda one: bool(one.get("effect")), lambda one: one["id"],
                  "Assumptions: what changes where one does not hold", "without an effect", "")


def _bounded(view: View) -> Verdict:
    verdict = _checked(("Bound",), "reversible bound")(view)
    return (MET, verdict[1] + "; table of the bound") if verdict[0] == MET and "bound" in view.parts else verdict


JUDGES: dict[int, Judge] = {
    28: _shown, 29: _referenced, 30: _redone, 31: _iterations, 32: _checked(("Property range",), "fluid states"),
    33: _checked(("Mass balance", "Energy balance"), "balance to close"),
    34: _checked(("Entropy generated",), "part that could generate entropy"),
    35: _checked(("Pinch",), "heat exchanger"), 36: _bounded, 37: _verdicts, 38: _failed,
    39: _cautions("triggered", lambda one: all(one.get(key) for key in ("value", "threshold", "source")),
                  "without value, threshold or source"),
    40: _cautions("not triggered", lambda one: bool(one.get("topic") or one.get("text")), "without a topic"),
    41: _cautions("not evaluated", lambda one: bool(one.get("reason")), "without a reason"),
    42: _uncertain, 44: _validity}
