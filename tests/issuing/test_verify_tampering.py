"""Tampered copies of an issued PDF: each is found, at its place; what was not touched is the same."""
from __future__ import annotations

import json
from collections.abc import Callable, Sequence
from pathlib import Path
from typing import Any

import pytest
import tampering
from tampering import RECORD, REVIEW, SPEC, edited, file_of, fit_record, put_file

from calcpack.issuing.attached import Attachment
from calcpack.issuing.carried import CarriedSheet
from calcpack.issuing.verify import verify
from calcpack.issuing.verify_again import Again, made_again, solved_again
from calcpack.issuing.verify_report import DIFFERS, NOT_VERIFIABLE, SAME, Report
from calcpack.record import Record


def remembering() -> Again:
    """Solves and prints equal files once."""
    kept: dict[tuple, Any] = {}

    def once(key: tuple, call: Callable[[], Any]) -> Any:
        if key not in kept:
            kept[key] = call()
        return kept[key]

    def solve(carried: CarriedSheet) -> Record:
        files = tuple((one.name, one.content) for one in carried.files if one.name != carried.record_name)
        stated = json.dumps([carried.record.data["issue"], carried.record.data["sheet"]["status"]])
        return once(("solve", stated, files), lambda: solved_again(carried))

    def make(record: Record, attachments: Sequence[Attachment]) -> bytes:
        files = tuple((one.name, one.content) for one in attachments if one.role != "record")
        return once(("make", record.to_json(), files), lambda: made_again(record, attachments))
    return Again(solve, make)


@pytest.fixture(scope="module")
def content(_issued_twice: Path) -> bytes:
    return (_issued_twice / "issued" / "RT-12-B.pdf").read_bytes()


@pytest.fixture(scope="module")
def verified() -> Callable[[bytes], Report]:
    again = remembering()
    return lambda content: verify(content, "copy.pdf", again=again)


def told(report: Report) -> str:
    return "\n".join([*(f"{one.where}: {one.what}: {one.found} / {one.expected}" for one in report.differences),
                      *report.reasons])


def test_the_untouched_file_is_the_same(content: bytes, verified: Callable[[bytes], Report]) -> None:
    report = verified(content)
    assert report.status == SAME and not report.differences and not report.reasons, told(report)
    assert any("byte for byte" in stage.words for stage in report.stages)


@pytest.mark.parametrize("seed", range(60))
def test_a_digit_on_a_page_is_found_at_its_page(content: bytes, verified: Callable[[bytes], Report],
                                                seed: int) -> None:
    copy, page, old, new = tampering.digit_on_page(content, seed)
    report = verified(copy)
    assert report.status == DIFFERS
    found = [one for one in report.differences if one.where == f"page {page}" and one.what.startswith("another text")]
    assert found, told(report)
    assert all(new in one.found and old in one.expected for one in found), told(report)


@pytest.mark.parametrize("seed", range(40))
def test_a_digit_in_the_record_is_found(content: bytes, verified: Callable[[bytes], Report], seed: int) -> None:
    report = verified(tampering.digit_in_record(content, seed))
    assert report.status == DIFFERS
    assert "the hash of the record inside is not printed on any page" in told(report)


@pytest.mark.parametrize("seed", range(3))
def test_a_digit_in_what_the_record_states_of_its_issue_is_found(content: bytes, verified: Callable[[bytes], Report],
                                                               seed: int) -> None:
    report = verified(tampering.digit_in_record(content, seed, "issue"))
    assert report.status == DIFFERS
    assert any(one.where.startswith("page ") for one in report.differences), told(report)


def test_a_printed_number_in_the_record_is_found_by_its_symbol(content: bytes,
                                                              verified: Callable[[bytes], Report]) -> None:
    data = json.loads(file_of(content, RECORD))
    step = next(one for one in data["steps"] if one["symbol"] == "m_dot")
    right, step["shown"] = step["shown"], "1.0"
    raw = Record(data).to_json().encode()
    report = verified(edited(content, lambda pdf: put_file(pdf, RECORD, raw)))
    [found] = [one for one in report.differences if one.where == "record steps, m_dot, shown"]
    assert (found.found, found.expected) == ("'1.0'", repr(right))


@pytest.mark.parametrize("seed", range(20))
def test_a_digit_in_the_spec_is_found(content: bytes, verified: Callable[[bytes], Report], seed: int) -> None:
    report = verified(tampering.digit_in_spec(content, seed))
    assert report.status == DIFFERS
    assert "attachment rinse.yaml: this is not the file that the record lists" in told(report)


@pytest.mark.parametrize("seed", range(3))
def test_a_digit_in_the_spec_is_found_though_the_hashes_fit(content: bytes, verified: Callable[[bytes], Report],
                                                           seed: int) -> None:
    report = verified(tampering.digit_in_spec(content, seed, fitted=True))
    assert report.status == DIFFERS
    assert "record inputs, " in told(report) or report.reasons, told(report)


@pytest.mark.parametrize("value", ["121 kW", "110 kW"])
def test_a_consistent_change_of_spec_and_record_is_found_on_the_pages(
        content: bytes, verified: Callable[[bytes], Report], tmp_path: Path, value: str) -> None:
    from calcpack.pipeline import solve_spec
    spec = file_of(content, SPEC).decode().replace("value: 120 kW", f"value: {value}")
    (tmp_path / "rinse.yaml").write_text(spec, "utf-8")
    solved, old = solve_spec(tmp_path / "rinse.yaml").data, json.loads(file_of(content, RECORD))
    data = {**json.loads(Record(solved).to_json()), "issue": old["issue"]}
    data["sheet"]["status"] = old["sheet"]["status"]

    def edit(pdf: Any) -> None:
        put_file(pdf, SPEC, spec.encode())
        put_file(pdf, RECORD, fit_record(data, spec))
    report = verified(edited(content, edit))
    assert report.status == DIFFERS
    assert any(one.where.startswith("page ") and value.split()[0] in one.expected for one in report.differences)
    assert any(one.where == "check" for one in report.differences), "the signatures are of another record"


@pytest.mark.parametrize("seed", range(15))
def test_an_attached_file_in_place_of_another_is_found(content: bytes, verified: Callable[[bytes], Report],
                                                       seed: int) -> None:
    copy, name = tampering.swapped(content, seed)
    report = verified(copy)
    assert report.status == DIFFERS
    assert f"attachment {name}: this is not the file that the record lists" in told(report)


@pytest.mark.parametrize("seed", range(20))
def test_a_file_that_is_cut_short_is_not_verifiable(content: bytes, verified: Callable[[bytes], Report],
                                                    seed: int) -> None:
    report = verified(tampering.cut(content, seed))
    assert report.status == NOT_VERIFIABLE and report.reasons


@pytest.mark.parametrize("seed", range(30))
def test_one_byte_turned_is_found(content: bytes, verified: Callable[[bytes], Report], seed: int) -> None:
    report = verified(tampering.byte_turned(content, seed))
    assert report.status != SAME and (report.differences or report.reasons)


PLACES = {
    tampering.page_removed: "pages: the number of pages differs",
    tampering.page_doubled: "pages: the number of pages differs",
    tampering.pages_swapped: "page 3: calcpack gives no such page here",
    tampering.note_added: "page 1: something is laid over the page: FreeText",
    tampering.rectangle_over: "it looks otherwise in a field 22 mm wide",
    tampering.link_turned: "links and notes",
    tampering.link_to_program: "a link starts something: /Launch",
    tampering.title_changed: "whole file: not as calcpack makes it: metadata",
    tampering.script_added: "something that runs when it is opened: /OpenAction",
    tampering.bookmark_changed: "whole file: not as calcpack makes it: bookmarks",
    tampering.file_added: "attachment more.csv: this file is attached, and the record does not list it",
    tampering.file_hidden: "the PDF holds files that are not listed",
    tampering.file_removed: f"attachment {REVIEW}: the record lists this file, and it is not there",
    tampering.record_removed: "the file carries no record",
    tampering.relationship_changed: "the PDF gives it another relationship: Alternative",
    tampering.checksum_changed: "the PDF states another checksum",
    tampering.letters_of_font_changed: "page 1: another text is printed",
    tampering.font_program_changed: "fonts and pictures",
    tampering.language_changed: "catalogue /Lang",
    tampering.size_of_page_changed: "page 1: not as calcpack makes it",
}


@pytest.mark.parametrize("edit", tampering.EDITS, ids=lambda edit: edit.__name__)
def test_an_edit_is_found_at_its_place(content: bytes, verified: Callable[[bytes], Report],
                                       edit: Callable[[Any], None]) -> None:
    report = verified(edited(content, edit))
    assert report.status != SAME
    assert PLACES[edit] in told(report), told(report)


def test_an_update_behind_the_end_of_the_file_is_found(content: bytes, verified: Callable[[bytes], Report]) -> None:
    def cover(writer: Any) -> None:
        from pyhanko.pdf_utils import generic
        page = writer.root["/Pages"]["/Kids"][0]
        drawn = generic.StreamObject(stream_data=b"q 1 g 100 500 60 14 re f Q")
        page["/Contents"] = generic.ArrayObject([page.raw_get("/Contents"), writer.add_object(drawn)])
        writer.update_container(page["/Contents"])
    report = verified(tampering.added_to(content, cover))
    assert report.status == DIFFERS and "page 1: not as calcpack makes it" in told(report)


def test_something_behind_the_last_byte_is_found(content: bytes, verified: Callable[[bytes], Report]) -> None:
    assert verified(content + b"\n% more").status == NOT_VERIFIABLE
    assert verified(content + b"\n").status == DIFFERS


def test_the_copies_are_two_hundred_and_more() -> None:
    counted = {name: mark.args[1] for name, test in globals().items() if name.startswith("test_")
               for mark in getattr(test, "pytestmark", ()) if mark.name == "parametrize"}
    assert sum(len(list(values)) for values in counted.values()) >= 200
