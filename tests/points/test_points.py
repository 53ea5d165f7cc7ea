"""The list of points: what a sheet meets, and that each judge can find a sheet that does not."""
from __future__ import annotations

import copy
import re
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest
from click.testing import CliRunner

from calcpack.cli import main
from calcpack.pipeline import record_and_comparison
from calcpack.points import JUDGES, Point, points, unmet
from calcpack.points.catalogue import CATALOGUE
from calcpack.points.point import IDLE, MET, PERSON, UNMET
from calcpack.record import Record
from calcpack.render.pages import Extras
from calcpack.render.sheet import sheet_html
from calcpack.render.site import judged_pages
from calcpack.reread.from_print import redo

SPECS = Path(__file__).parent.parent.parent / "specs"
Data = dict[str, Any]


class Sheet:
    """A record with its comparison; :meth:`judge` gives the verdicts of it, or of a change of it."""

    def __init__(self, name: str) -> None:
        from calcpack.figures import figures
        self.record, self.comparison = record_and_comparison(SPECS / f"{name}.yaml")
        self.figures = tuple(figures(self.record.data))
        self.html = self.page(self.record.data)
        self.redone = redo(self.html)

    def page(self, data: Data) -> str:
        return sheet_html(Record(data), comparison=self.comparison, figures=self.figures)

    def judge(self, data: Data | None = None, html: str | None = None) -> dict[int, Point]:
        data = data if data is not None else self.record.data
        found = points(data, html if html is not None else self.html, self.redone, self.comparison,
                       Extras())
        return {one.number: one for one in found}


@pytest.fixture(scope="module")
def pump() -> Sheet:
    return Sheet("process-water-heat-pump")


@pytest.fixture(scope="module")
def engine() -> Sheet:
    return Sheet("kiln-exhaust-engine")


def test_the_list_has_72_points_in_order_and_a_judge_for_each_that_needs_no_person(pump: Sheet) -> None:
    assert [number for number, _, _ in CATALOGUE] == list(range(1, 73))
    assert {number for number, _, _ in CATALOGUE} - JUDGES.keys() == {27, 43, 51, 72}
    found = pump.judge()
    assert all(one.verdict in (MET, UNMET, IDLE, PERSON) for one in found.values())
    assert all(one.where for one in found.values() if one.number in JUDGES)


def test_what_the_heat_pump_meets(pump: Sheet) -> None:
    found = pump.judge()
    met = {number for number, one in found.items() if one.verdict == MET}
    assert met >= {*range(1, 24), 25, *range(28, 38), 39, 40, 41, 44, 46, 47, 48, 53, 54, 55, 56, 59, 64, 67, 69,
                   70, 71}
    # What the record has no data for, it says.
    assert {number for number, one in found.items() if one.verdict == UNMET} >= {45, 52, 57, 60, 65}


def _sheet(key: str, value: Any) -> Callable[[Data], None]:
    return lambda data: data["sheet"].update({key: value})


def _each(part: str, **values: Any) -> Callable[[Data], None]:
    return lambda data: [one.update(values) for one in data[part]]


def _first(part: str, **values: Any) -> Callable[[Data], None]:
    return lambda data: data[part][0].update(values)


def _without(part: str) -> Callable[[Data], None]:
    return lambda data: data[part].clear()


RECORDS: list[tuple[int, Callable[[Data], None]]] = [
    (9, _sheet("purpose", None)), (10, _sheet("scope", "")), (11, _sheet("grade", None)),
    (12, _sheet("codes", [])), (12, _sheet("codes", ["EN 378"])), (13, _without("limits")),
    (13, _first("limits", source="")), (14, _first("states", number="99")), (15, _first("inputs", source="")),
    (15, lambda data: [one.update(text="a data sheet") for one in data["references"]]),
    (16, _first("inputs", used_by=[])), (16, lambda data: data["steps"][0]["uses"].append("nowhere")),
    (21, _each("assumptions", id="A1")), (22, _first("assumptions", effect=None)),
    (23, _first("assumptions", status="maybe")), (29, _each("steps", reference=None, note=None)),
    (32, lambda data: [one.update(status="fails") for one in data["checks"] if one["group"] == "Property range"]),
    (33, lambda data: [one.update(value="") for one in data["checks"] if one["group"] == "Energy balance"]),
    (34, lambda data: [one.update(status="fails") for one in data["checks"] if one["group"] == "Entropy generated"]),
    (35, lambda data: [one.update(status="fails") for one in data["checks"] if one["group"] == "Pinch"]),
    (36, lambda data: [one.update(status="fails") for one in data["checks"] if one["group"] == "Bound"]),
    (37, _without("limits")), (37, _first("limits", margin=None)),
    (39, lambda data: [one.update(source="") for one in data["cautions"] if one["status"] == "triggered"]),
    (40, lambda data: [one.update(topic="", text="") for one in data["cautions"] if one["status"] == "not triggered"]),
    (41, lambda data: [one.update(reason="") for one in data["cautions"] if one["status"] == "not evaluated"]),
    (44, lambda data: data["case"].update(assumes=[], leaves_out=[], fluids={})),
    (46, _without("checks")), (50, lambda data: data["signoff"].update(checked={"name": "A", "date": "2026-12-01"})),
    (55, _each("revisions", revision="O")), (61, _each("references", text="a book")),
    (61, lambda data: data["references"][0].update(text="Handbook of 2019")),
]


@pytest.mark.parametrize(("number", "change"), RECORDS)
def test_a_record_that_lacks_it_does_not_meet_the_point(pump: Sheet, number: int,
                                                        change: Callable[[Data], None]) -> None:
    data = copy.deepcopy(pump.record.data)
    change(data)
    assert pump.judge(data)[number].verdict == UNMET


HEADED = '<table class="wide[^"]*">\\s*(<caption>.*?</caption>)?\\s*(<colgroup>.*?</colgroup>)?\\s*<thead>.*?</thead>'
PAGES: list[tuple[int, str, str]] = [
    (1, "MT-103</td>", "</td>"), (2, "<h1>[^<]*</h1>", "<h1></h1>"), (3, "Marrowfield", "M"),
    (4, "@top-right", "@top-x"), (5, "FOR REVIEW", "ISSUED"), (6, "counter\\(pages\\)", ""),
    (7, "<td>2026-10-19</td>", "<td>19 October</td>"), (8, '<code class="hash">\\w{64}', "<code>"),
    (14, "<figure", "<span"), (18, "absolute unless marked", "as they are"),
    (19, "IAPWS Formulation 1995", "formulation"), (25, "No hold is open", ""), (28, 'id="step-3.1"', ""),
    (31, "Iterations", ""), (39, 'id="caution-', 'id="'), (53, '<span class="delta"', '<span class="x"'),
    (54, "\\d+ marks", "2 marks"), (64, "CoolProp 8", "CoolProp 7"), (67, "none known", "perhaps"),
    (69, '<span class="holds">holds', '<span class="holds">'), (70, HEADED, '<table class="wide x">'),
    (71, '<table class="wide nomenclature">', '<table class="wide">')]


@pytest.mark.parametrize(("number", "old", "new"), PAGES)
def test_a_page_that_does_not_print_it_does_not_meet_the_point(pump: Sheet, number: int, old: str, new: str) -> None:
    html, count = re.subn(old, new, pump.html, flags=re.DOTALL)
    assert count
    assert pump.judge(html=html)[number].verdict == UNMET


def test_an_open_hold_is_counted_stamped_and_owned(engine: Sheet) -> None:
    found = engine.judge()
    assert [found[number].verdict for number in (24, 25, 26)] == [MET, MET, MET]
    assert engine.judge(html=engine.html.replace("HOLD OPEN", ""))[26].verdict == UNMET
    data = copy.deepcopy(engine.record.data)
    for one in data["assumptions"]:
        one["owner"] = None
    assert engine.judge(data)[24].verdict == UNMET


def test_failed_criteria_and_stamps_are_looked_for_where_they_must_stand(pump: Sheet) -> None:
    data = copy.deepcopy(pump.record.data)
    data["limits"][0]["status"] = "fails"
    data["sheet"]["status"] = "void"
    html = pump.page(data)
    found = pump.judge(data, html)
    assert found[38].verdict == MET and found[58].verdict == MET
    hidden = pump.judge(data, pump.html)
    assert hidden[38].verdict == UNMET and hidden[58].verdict == UNMET


def test_signatures_of_one_person_do_not_do(pump: Sheet) -> None:
    data = copy.deepcopy(pump.record.data)
    signed = {"name": "R. Aldane", "date": "2026-10-19"}
    data["signoff"] = dict.fromkeys(("prepared", "checked", "approved"), signed)
    assert pump.judge(data)[45].where == "author, checker and approver are not three people"
    data["signoff"]["checked"] = {"name": "S. Virta", "date": "2026-10-20"}
    assert pump.judge(data)[45].verdict == UNMET
    data["signoff"]["approved"] = {"name": "M. Okoro", "date": "2026-10-21"}
    assert pump.judge(data)[45].where == "a name or a date is not in the title block"
    assert pump.judge(data, pump.page(data))[45].verdict == MET


def test_the_sheet_ends_with_the_list_and_with_its_results_anew(pump: Sheet) -> None:
    pages = judged_pages(pump.record, pump.comparison, pump.figures, True)
    for page in (pages.screen, pages.paper):
        at = page.index('id="part-checklist"')
        assert page.index('id="part-history"') < at < page.index('id="part-machine"')
        assert page.count("Results reckoned anew") == 1
        text = page[at:page.index('id="part-machine"')]
        assert len(re.findall(r"<tr><td>\d+</td>", text)) == 72
        assert text.count('<strong class="fails">not met</strong>') == len(unmet(pages.points))


def test_a_sheet_that_was_not_looked_at_has_no_list(pump: Sheet) -> None:
    assert "part-checklist" not in sheet_html(pump.record, extras=Extras())


def test_strict_builds_leave_with_1_and_say_which(tmp_path: Path) -> None:
    spec = str(SPECS / "kiln-exhaust-bound.yaml")
    plain = CliRunner().invoke(main, ["build", spec, "-o", str(tmp_path / "a"), "--no-pdf", "-q"])
    strict = CliRunner().invoke(main, ["build", spec, "-o", str(tmp_path / "b"), "--no-pdf", "-q", "--strict"])
    assert plain.exit_code == 0 and plain.stdout == ""
    assert strict.exit_code == 1
    assert "not yet signed: checked" in " ".join(strict.stdout.split())
