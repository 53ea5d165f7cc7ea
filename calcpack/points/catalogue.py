"""The points, in words of our own: number, group, what must hold."""
from __future__ import annotations

_GROUPS: tuple[tuple[str, tuple[str, ...]], ...] = (
    ("Identity and status", (
        "a calculation number of its own", "a title", "project and system named", "the revision on every page",
        "the status in a word on every page", "page n of m on every page", "date of issue, ISO form",
        "hashes of the input file and of the output printed")),
    ("Purpose and basis", (
        "the purpose stated", "scope and what is left out stated", "safety class or grade of verification stated",
        "codes listed with their edition", "acceptance criteria before the results, each with its source",
        "a sketch whose state numbers are those of the tables")),
    ("Inputs", (
        "every input with value, unit, source and the source's revision",
        "no input unused, no value used that has no row", "units consistent in every equation",
        "ambient pressure stated, gauge and absolute told apart",
        "source of properties, fluid, version and reference state stated", "physical constants listed")),
    ("Assumptions and holds", (
        "assumptions numbered", "each with basis and effect", "each marked confirmed or open",
        "each open one with owner, due date and number", "the first page counts the open ones",
        "use blocked, or a stamp shown, while a hold is open", "engineering judgement named as such")),
    ("Working", (
        "every result with equation, numbers, result and unit", "each equation with a reference or derivation",
        "rounding on the way does not move a printed result beyond its digits",
        "iterations with tolerance, count and residual", "every state inside the range of its properties, or flagged",
        "mass and energy balances close, residual printed", "entropy generated in each part printed and not negative",
        "pinch printed and positive", "efficiency below the reversible bound")),
    ("Results and conclusions", (
        "results with criterion, margin and verdict", "a failed criterion stands on the first page",
        "triggered cautions with value, threshold and source", "cautions not triggered listed as evaluated",
        "cautions not evaluated listed with the reason", "uncertainty or sensitivity of the governing results",
        "the conclusion answers the purpose", "limits of validity stated")),
    ("Verification", (
        "author, checker and approver with dates, author not the checker", "method of verification named",
        "another calculation of each governing result: way, value, difference, what is allowed, verdict",
        "the other way shares no solver, and says what it shares", "the checker's comments and their answers kept",
        "a change after checking voids the signatures", "independent review noted where the grade asks for it")),
    ("Revision", (
        "history with revision, date, what, why, by, checked, approved",
        "changed items marked with the revision letter", "marks of this revision alone, and their number stated",
        "revision letters leave out I, O, Q, S, X, Z", "old and new values of what changed in a table",
        "what it supersedes, and by what it is superseded", "a stamp on every superseded or void page")),
    ("Register and records", (
        "the register agrees with the sheet", "sheets before and after this one listed with their revision",
        "references complete to page or clause", "attachments listed with their pages, all there",
        "a second run from the kept input gives the same output")),
    ("Software", (
        "names and versions of program and libraries, and the platform", "record of the program's verification",
        "the verification covers this case, or says that it does not", "known errors listed, or none known",
        "values set by hand and silenced warnings printed")),
    ("Layout", (
        "legible in black and white, no status by colour alone", "tables that go on repeat their headings",
        "every symbol in the nomenclature", "a stranger to the case can do one result again by hand")),
)

CATALOGUE: tuple[tuple[int, str, str], ...] = tuple(
    (number, group, text) for number, (group, text) in
    enumerate(((group, text) for group, texts in _GROUPS for text in texts), start=1))
"""Number, group and text of each point."""
