"""Points on verification, revision, records, software and layout."""
from __future__ import annotations

import re

from calcpack.points.point import IDLE, MET, PERSON, UNMET, Judge, Verdict, View, all_of, decided, shortened
from calcpack.record import Record
from calcpack.reread.page_reader import rows, table_of

LEFT_OUT = "IOQSXZ"
PLACE = re.compile(r"\b(pp?\.|pages?|clause|section|sect\.|§|annex|art\.|article|eqs?\.|equation|tables?|fig\.|ex\.|"
                   r"example|chapter|ch\.|row|rows|line|lines|sheets?|item|result)\s*[\w(]", re.IGNORECASE)


def _method(view: View) -> Verdict:
    groups = list(dict.fromkeys(one["group"] for one in view.items("checks")))
    return decided(bool(groups), f"Verification: {', '.join(group.lower() for group in groups[:3])} and others"
                   if len(groups) > 3 else "Verification", "no verification is named")


def _alternate(view: View) -> Verdict:
    """Each result reckoned anew from the printed inputs and formulas, by the reader of the page."""
    wanted = {f"step {one['step']}" for one in view.record["results"].values() if one.get("step")}
    if not wanted:
        return IDLE, "the sheet names no result that is worked out"
    anew = {one.place: one for one in view.redone.whole}
    lacking = sorted(name for name in wanted if name not in anew)
    bad = sorted(name for name in wanted if name in anew and not anew[name].agrees)
    return decided(not lacking and not bad, "Checklist: results reckoned anew",
                   f"not reckoned anew: {shortened([*lacking, *bad])}")


def _marks(view: View) -> Verdict:
    if view.comparison is None:
        return IDLE, "nothing to compare this revision with"
    symbols = set(view.comparison.get("changed_symbols") or ())
    deltas = [one for one in view.page.all(".delta")]
    wanted = symbols & {one["symbol"] for one in (*view.items("inputs"), *view.items("steps"))}
    letter = str(view.comparison["letter"])
    return decided(len(deltas) >= len(wanted) and all(one.text == letter for one in deltas),
                   f"{len(deltas)} marks {letter}", "a changed item carries no mark")


def _current(view: View) -> Verdict:
    if view.comparison is None:
        return IDLE, "nothing to compare this revision with"
    deltas = view.page.all(".delta")
    count = re.search(r"Changed since the last revision: (\d+) mark", view.title)
    alone = {one.text for one in deltas} <= {view.sheet["revision"]}
    return decided(alone and count is not None and int(count[1]) == len(deltas), "title block",
                   "the number of marks is not that of the page, or marks of another revision stand there")


def _letters(view: View) -> Verdict:
    letters = [one["revision"] for one in view.items("revisions")] or [view.sheet["revision"]]
    if not any(letter.isalpha() for letter in letters):
        return IDLE, "revisions are numbered"
    bad = [letter for letter in letters if set(letter.upper()) & set(LEFT_OUT)]
    return decided(not bad, "Revision history", f"revision {', '.join(bad)}")


def _old_and_new(view: View) -> Verdict:
    if view.comparison is None:
        return IDLE, "nothing to compare this revision with"
    return decided("changes" in view.parts and bool(view.parts["changes"].text), "Changes since the last revision",
                   "no table of changes stands on the sheet")


def _register(view: View) -> Verdict:
    """The register's row of this sheet, made as the register makes it, beside what the page prints."""
    from calcpack.render.outcome import status_words
    from calcpack.render.register import register_html
    from calcpack.render.sheet import file_stem
    from calcpack.reread.elements import elements_of
    sheet, around = view.sheet, view.extras.family or {}
    register = elements_of(register_html([Record(view.record)], [file_stem(sheet["number"])], pdf=False,
                                         extras={sheet["number"]: view.extras})).text
    title = [sheet["number"], " ".join(sheet["title"].split()), sheet["revision"], status_words(view.record),
             *([sheet["date"]] if sheet.get("date") else [])]
    wanted = {word: view.title for word in title} | {view.record["spec_sha256"][:12]: view.text("machine")}
    wanted |= {one["number"]: view.text("family") for one in around.get("upstream") or ()}
    lacking = [f"the register does not say {word}" for word in wanted if word not in register]
    lacking += [f"the sheet does not say {word}" for word, text in wanted.items() if word not in text]
    return decided(not lacking, "register of sheets", shortened(lacking, 2))


def _linked(view: View) -> Verdict:
    """The sheets before and after, each with its revision, as the page lists them."""
    around = view.extras.family
    if around is None or "family" not in view.parts:
        return UNMET, "the sheet does not say which sheets stand before and after it"
    known = {"upstream": {one["from"]["number"] for one in view.items("inputs") if one.get("from")},
             "downstream": {one["number"] for one in around["downstream"]}}
    lacking = []
    for side, numbers in known.items():
        printed = {cells[0].text: cells[1].text for cells in rows(table_of(view.parts["family"], side))}
        lacking += [number for number in sorted(numbers) if not printed.get(number, "").replace("not stated", "")]
    if not known["upstream"] and not view.prints("family", "takes nothing from other sheets"):
        return UNMET, "the sheet does not say that it takes nothing from others"
    count = len(known["upstream"]), len(known["downstream"])
    return decided(not lacking, "Sheets before and after: {} before, {} after".format(*count),
                   f"without a revision: {shortened(lacking)}")


def _placed(view: View) -> Verdict:
    return all_of(view.items("references"), lambda one: bool(PLACE.search(one["text"])), lambda one: one["id"],
                  "References", "without page, clause or part", "no references")


def _versions(view: View) -> Verdict:
    engine = view.record["engine"]
    wanted = [f"calcpack {engine['calcpack']}", f"Python {engine['python']}", engine["platform"],
              *(f"{name} {version}" for name, version in engine["libraries"].items())]
    return decided(view.prints("machine", *wanted), "How it was computed", "a version is not printed")


def _verified(view: View) -> Verdict:
    verified = view.verified
    if not verified["run"]:
        return UNMET, verified["words"].partition(":")[0]
    return decided(verified["passed"] and verified["same"], "How it was computed", "; ".join(verified["flags"]))


def _covered(view: View) -> Verdict:
    verified = view.verified
    if not verified["run"]:
        return UNMET, "no run of the published checks to compare with"
    if verified["covers"]:
        return MET, "How it was computed"
    return decided(view.prints("machine", *verified["flags"]), "flagged in How it was computed", "not flagged")


def _known_errors(view: View) -> Verdict:
    said = [one["what"] for one in view.verified["known_errors"]] or ["none known"]
    return decided(view.prints("machine", "Known errors", *said), "How it was computed", "not printed")


def _by_hand(view: View) -> Verdict:
    default = [one["symbol"] for one in view.items("inputs") if one.get("default")]
    if default:
        return decided(view.prints("inputs", "the method's default"), "Design inputs: values by default", "not printed")
    return IDLE, "a build sets no value by hand and silences no warning"


def _in_words(view: View) -> Verdict:
    marked = [*view.page.all(".fails"), *view.page.all(".holds"), *view.page.all(".open")]
    return decided(all(one.text for one in marked), f"{len(marked)} verdicts, each a word", "a status without a word")


def _headed(view: View) -> Verdict:
    bare = [" ".join(one.classes) for one in view.page.all("table")
            if "wide" in one.classes and one.first("thead") is None]
    return decided(not bare, "every table has a head that repeats", f"without a head: {', '.join(bare)}")


def _named(view: View) -> Verdict:
    from calcpack.reread.page_reader import symbol_in
    known = {symbol_in(cells[0]) for cells in rows(table_of(view.parts.get("nomenclature"), "nomenclature"))}
    used = {symbol_in(cells[0]) for cells in rows(table_of(view.parts.get("inputs"), "inputs"))}
    for equation in view.page.all(".equation"):
        used.add(symbol_in(equation.children[0]))
    lost = [look for look in used if look not in known]
    return decided(not lost, "Nomenclature", f"{len(lost)} symbols are not listed")


def _run_again(view: View) -> Verdict:
    if view.record.get("issue"):
        return PERSON, f"run: calcpack verify {view.record['issue']['file']}"
    return PERSON, f"run: calcpack build {view.record['spec_file']}, and compare the hash of the record"


JUDGES: dict[int, Judge] = {
    46: _method, 47: _alternate, 48: _alternate, 53: _marks, 54: _current,
    55: _letters, 56: _old_and_new, 59: _register, 60: _linked, 61: _placed,
    63: _run_again,
    64: _versions, 65: _verified, 66: _covered, 67: _known_errors, 68: _by_hand, 69: _in_words, 70: _headed,
    71: _named}
