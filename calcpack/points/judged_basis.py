"""Points on identity, purpose, inputs and assumptions: what the title block and the first parts must print."""
from __future__ import annotations

import re
from collections.abc import Mapping

from calcpack.points.judged_issue import field
from calcpack.points.point import IDLE, MET, Data, Judge, Verdict, View, all_of, decided
from calcpack.record import Record
from calcpack.render.outcome import status_words
from calcpack.reread.page_reader import table_of
from calcpack.reread.reckoning import si_value

ISO_DATE = re.compile(r"\b\d{4}-\d{2}-\d{2}\b")
EDITION = re.compile(r"\b(19|20)\d\d\b|edition|revision|\brev\b", re.IGNORECASE)
DATED = re.compile(r"\b(19|20)\d\d\b|edition|\bed\.|revision|\brev\b|dated", re.IGNORECASE)
SOURCE = re.compile(r"[A-Za-z]{1,4}\d+")


def _titled(key: str, what: str) -> Judge:
    def judge(view: View) -> Verdict:
        value = " ".join(str(view.sheet[key] or "").split())
        return decided(bool(value) and value in view.title, "title block", f"the title block has no {what}")
    return judge


def _header(words: str, box: str) -> Judge:
    """Whether the rule for a margin box of every page has the sheet's own words."""
    def judge(view: View) -> Verdict:
        rule = re.search(rf"@{box} \{{ content: (.*?); \}}", view.html)
        text = re.sub(r"\\([0-9a-f]+) ", lambda code: chr(int(code[1], 16)), rule[1]) if rule else ""
        wanted = words.format(**view.sheet, status_words=status_words(view.record).upper())
        return decided(wanted in text, "margin of every printed page", f"no page margin says {wanted}")
    return judge


def _date(view: View) -> Verdict:
    name = "Issued" if view.record.get("issue") else "Date"
    return decided(bool(ISO_DATE.search(field(view, name))), "title block", "the sheet has no date")


def _hashes(view: View) -> Verdict:
    import hashlib
    of_record = hashlib.sha256(Record(view.record).to_json().encode()).hexdigest()
    return decided(view.prints("machine", view.record["spec_sha256"], of_record), "How it was computed",
                   "a hash is missing")


def _stated(key: str, what: str) -> Judge:
    def judge(view: View) -> Verdict:
        value = " ".join(str(view.sheet.get(key) or "").split())
        return decided(bool(value) and value in view.text("purpose"), "Purpose and scope",
                       f"the sheet states no {what}")
    return judge


def _codes(view: View) -> Verdict:
    codes = view.sheet.get("codes") or ()
    bare = [code for code in codes if not EDITION.search(code)]
    if not codes:
        return decided(False, "", "no codes are listed")
    return decided(not bare, "Purpose and scope", f"without an edition: {'; '.join(bare)}")


def _criteria(view: View) -> Verdict:
    limits = view.items("limits")
    if not limits:
        return decided(False, "", "no acceptance criterion is stated")
    bare = [one["id"] for one in limits if not one.get("source")]
    if bare:
        return decided(False, "", f"without a source: {', '.join(bare)}")
    part = view.parts["results"]
    tables = [one.classes for one in part.all("table")]
    first = next((at for at, classes in enumerate(tables) if "limits" in classes), len(tables))
    after = [at for at, classes in enumerate(tables) if "results" in classes]
    return decided(all(first < at for at in after), "Results and limits", "the limits stand behind the results")


def _sketch(view: View) -> Verdict:
    sketch, states = view.record.get("sketch"), view.items("states")
    if not sketch or not sketch.get("links"):
        return (IDLE, "the method has no equipment") if not states else decided(False, "", "there is no sketch")
    if not any(one.tag == "figure" for one in view.parts["method"].walk()):
        return decided(False, "", "the sketch is not on the page")
    if not states:
        return MET, "Method and arrangement; no state is numbered"
    drawn = {one["label"] for one in sketch["links"] if one.get("label")}
    missing = [one["number"] for one in states if one["number"] not in drawn]
    return decided(not missing, "Method and arrangement", f"states not in the sketch: {', '.join(missing)}")


def _sources(view: View) -> Verdict:
    known = {one["id"]: one["text"] for one in (*view.items("references"), *view.items("assumptions"))}
    assumed = {one["id"] for one in view.items("assumptions")}
    inputs = view.items("inputs")
    bare = [one["symbol"] for one in inputs if not one.get("source")]
    if bare:
        return decided(False, "", f"without a source: {', '.join(bare)}")
    named = {name for one in inputs for name in SOURCE.findall(one["source"]) if name in known and name not in assumed}
    undated = sorted(name for name in named if not DATED.search(known[name]))
    if not inputs:
        return IDLE, "the sheet has no inputs"
    return decided(not undated, "Design inputs, References", f"without a revision or date: {', '.join(undated)}")


def _used(view: View) -> Verdict:
    idle = [one["symbol"] for one in view.items("inputs") if not one.get("used_by")]
    known = {one["symbol"] for one in (*view.items("inputs"), *view.items("steps"))}
    known |= {column["symbol"] for one in view.items("steps") for column in (one.get("table") or {}).get("columns", ())}
    loose = [name for one in view.items("steps") for name in one["uses"] if name not in known]
    if loose:
        return decided(False, "", f"used without a row: {', '.join(dict.fromkeys(loose))}")
    return decided(not idle, "Design inputs", f"not used: {', '.join(idle)}")


def _dimensions(view: View) -> Verdict:
    return decided(not view.redone.wrong and not view.redone.not_followed,
                   "proved before solving; done again in the printed units",
                   "not every step could be done again in the printed units")


def _ambient(view: View) -> Verdict:
    pressure = view.sheet["p_atm"]
    said = view.prints("purpose", "absolute unless marked (g)", pressure["shown"], pressure["unit"])
    return decided(said and si_value_of(pressure) > 0.0, "Purpose and scope", "the ambient pressure is not printed")


def si_value_of(entry: Data) -> float:
    """The SI value of an entry's printed number."""
    from calcpack.reread.terms import Printed
    return si_value(Printed(entry["shown"], entry["unit"]))


def _properties(view: View) -> Verdict:
    fluids: Mapping[str, Data] = view.record["case"].get("fluids") or {}
    library = f"CoolProp {view.record['engine']['libraries']['CoolProp']}"
    lacking = [one["designation"] for one in fluids.values()
               if not view.prints("fluids", one["designation"], one["equation"], one["reference_state"])]
    if not fluids:
        return IDLE, "the sheet uses no fluid"
    return decided(not lacking and view.prints("machine", library), "Fluids, How it was computed",
                   f"not stated in full: {', '.join(lacking) or library}")


def _constants(view: View) -> Verdict:
    table = table_of(view.parts.get("nomenclature"), "constants")
    if table is None:
        return IDLE, "no constant stands in a formula"
    return MET, "Nomenclature"


def _numbered(view: View) -> Verdict:
    names = [one["id"] for one in view.items("assumptions")]
    if not names:
        return IDLE, "no assumption beyond those of the method"
    return decided(len(set(names)) == len(names) and view.prints("assumptions", *names), "Assumptions",
                   "a number stands twice or is missing")


def _bases(view: View) -> Verdict:
    return all_of(view.items("assumptions"), lambda one: bool(one.get("basis")) and bool(one.get("effect")),
                  lambda one: one["id"], "Assumptions", "without basis or effect", "no assumptions")


def _marked(view: View) -> Verdict:
    return all_of(view.items("assumptions"), lambda one: one.get("status") in ("open", "confirmed"),
                  lambda one: one["id"], "Assumptions", "neither confirmed nor open", "no assumptions")


def _owned(view: View) -> Verdict:
    open_ones = [one for one in view.items("assumptions") if one.get("status") == "open"]
    return all_of(open_ones, lambda one: bool(one.get("owner")) and bool(one.get("due")), lambda one: one["id"],
                  "Assumptions", "without owner or due date", "no assumption is open")


def _counted(view: View) -> Verdict:
    count = sum(one.get("status") == "open" for one in view.items("assumptions"))
    words = "No hold is open" if not count else f"{count} hold{'s' if count > 1 else ''} open"
    return decided(words in view.title, "title block", f"the title block does not say: {words}")


def _stamped(view: View) -> Verdict:
    if not any(one.get("status") == "open" for one in view.items("assumptions")):
        return IDLE, "no hold is open"
    stamps = " ".join(one.text for one in view.page.all(".stamp"))
    return decided("HOLD OPEN" in stamps or view.sheet["status"] in ("superseded", "void"), "stamp on every page",
                   "no stamp says that a hold is open")


JUDGES: dict[int, Judge] = {
    1: _titled("number", "number"), 2: _titled("title", "title"), 3: _titled("project", "project"),
    4: _header("Revision {revision}", "top-right"), 5: _header("{status_words}", "top-right"),
    6: _header('"Sheet " counter(page) " of " counter(pages)', "bottom-center"), 7: _date, 8: _hashes,
    9: _stated("purpose", "purpose"), 10: _stated("scope", "scope"), 11: _stated("grade", "grade of verification"),
    12: _codes, 13: _criteria, 14: _sketch, 15: _sources, 16: _used, 17: _dimensions, 18: _ambient,
    19: _properties, 20: _constants, 21: _numbered, 22: _bases, 23: _marked, 24: _owned, 25: _counted, 26: _stamped}
