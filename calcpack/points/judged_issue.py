"""Points on the issue of a sheet: its history, what it supersedes, the stamps of old issues, what is attached."""
from __future__ import annotations

from itertools import pairwise

from calcpack.points.point import IDLE, MET, UNMET, Data, Judge, Verdict, View, decided, shortened
from calcpack.render.issues import attached
from calcpack.reread.page_reader import rows, table_of

MISSING = ("", "not stated", "not yet")
COLUMNS = ("date", "what and why", "by", "checked", "approved")
"""What a row of the history must say, in the order of its cells after the revision."""


def field(view: View, name: str) -> str:
    """A field of the title block, by its heading; empty where it has none."""
    for block in view.page.all(".block"):
        cells = [one for one in block.walk() if one.tag in ("th", "td")]
        for head, cell in pairwise(cells):
            if head.text == name:
                return cell.text
    return ""


def _history(view: View) -> Verdict:
    printed = {cells[0].text.partition(" ")[0]: [cell.text for cell in cells[1:]]
               for cells in rows(table_of(view.parts.get("history"), "history"))}
    marks = [one["revision"] for one in view.items("revisions")]
    if not marks:
        return UNMET, "no history is stated"
    if view.sheet["revision"] not in marks:
        return UNMET, f"revision {view.sheet['revision']} is not in it"
    bare = [f"revision {mark}: {', '.join(lacking)}" for mark in marks
            if (lacking := _lacking(printed.get(mark, [])))]
    return decided(not bare, "Revision history", f"not stated of {'; '.join(bare)}")


def _lacking(cells: list[str]) -> list[str]:
    padded = [*cells, *[""] * len(COLUMNS)]
    return [name for name, text in zip(COLUMNS, padded, strict=False) if text in MISSING]


def _supersedes(view: View) -> Verdict:
    later = _superseded_by(view)
    if later is not None and later[0] == UNMET:
        return later
    earlier = _earlier(view)
    if earlier is not None:
        said = field(view, "Supersedes")
        return decided(f"revision {earlier['revision']}" in said, "title block",
                       f"the title block does not say that it supersedes revision {earlier['revision']}")
    if later is not None:
        return later
    if field(view, "Supersedes"):
        return MET, "title block: it supersedes nothing"
    if len(view.items("revisions")) <= 1 and view.comparison is None:
        return IDLE, "first revision; it supersedes nothing"
    return UNMET, "the sheet does not say what it supersedes"


def _earlier(view: View) -> Data | None:
    issue = view.record.get("issue")
    return issue["supersedes"] if issue else (view.extras.family or {}).get("supersedes")


def _superseded_by(view: View) -> Verdict | None:
    """Whether a sheet that is superseded says by what; None for one in force."""
    later = (view.extras.family or {}).get("superseded_by") if view.record.get("issue") is None else None
    if view.sheet["status"] != "superseded" and later is None:
        return None
    said = field(view, "Superseded by")
    return decided(bool(said), "title block", "the sheet does not say by what it is superseded")


def _old_stamp(view: View) -> Verdict:
    status, issue = view.sheet["status"], view.record.get("issue")
    if status in ("superseded", "void"):
        stamps = " ".join(one.text for one in view.page.all(".stamp"))
        return decided(status.upper() in stamps, "stamp on every page", "no stamp")
    earlier = issue["supersedes"] if issue else None
    if earlier is None:
        return IDLE, f"the status is {status}" if issue is None else "it supersedes no issue"
    if not earlier["file"].endswith(".pdf"):
        return IDLE, f"revision {earlier['revision']} was kept as a record, which has no pages"
    return decided(earlier["file"] in field(view, "Supersedes"), f"the stamped copy is {earlier['file']}",
                   "the title block does not name the stamped copy")


def _attached(view: View) -> Verdict:
    files = attached(view.record)
    if not files:
        return IDLE, "nothing is attached before it is issued"
    printed = {cells[0].text: [cell.text for cell in cells[1:]]
               for cells in rows(next((one for one in view.page.all("table") if "attached" in one.classes), None))}
    lost = [one["name"] for one in files if printed.get(one["name"]) != [one["says"], one["size"], one["sha256"]]]
    return decided(not lost, f"title block: {len(files)} files, with size and hash; none has pages",
                   f"not listed: {shortened(lost)}")


JUDGES: dict[int, Judge] = {52: _history, 57: _supersedes, 58: _old_stamp, 62: _attached}
