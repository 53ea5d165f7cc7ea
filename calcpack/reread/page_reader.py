"""A sheet's HTML to what it prints: the parts of the page, found by its headings and boxes.

Classes and ids of the markup tell which box is which; every number and every
formula comes from the text that a reader sees.
"""
from __future__ import annotations

import re
from collections.abc import Iterator

from calcpack.reread import step_reader
from calcpack.reread.elements import Element, elements_of
from calcpack.reread.linear import linear, plain
from calcpack.reread.printed_page import Cell, Page, PrintedFluid, PrintedInput, PrintedLimit, PrintedStep, Seen, Value
from calcpack.reread.reading import UnreadableError, read_value
from calcpack.reread.step_reader import columns_of, loose_value, value_in
from calcpack.reread.terms import Printed


def read_page(html: str) -> Page:
    """The page of one sheet, as printed."""
    root = elements_of(html)
    parts = {part.id.removeprefix("part-"): part for part in root.all(".part")}
    boxes = parts["calculation"].all(".step") if "calculation" in parts else []
    known = [box for box in boxes if box.first(".equation") is not None or box.first(".answer") is not None]
    steps, unread = _steps(known)
    number = root.first(".block")
    return Page(
        number.first(".strong").text if number is not None and number.first(".strong") else "",
        _ambient(parts.get("purpose")), tuple(_fluids(parts.get("fluids"))), tuple(_inputs(parts.get("inputs"))),
        steps, tuple(_seen(parts)), tuple(_cells(parts.get("states"))), tuple(_limits(parts.get("results"))), unread,
        tuple(box.id.removeprefix("step-") for box in boxes if all(box is not one for one in known)))


def _steps(boxes: list[Element]) -> tuple[tuple[PrintedStep, ...], tuple[tuple[str, str], ...]]:
    steps, unread = [], []
    for one in boxes:
        try:
            steps.append(step_reader.step(one))
        except UnreadableError as error:
            unread.append((one.id.removeprefix("step-"), str(error)))
    return tuple(steps), tuple(unread)


def table_of(part: Element | None, name: str) -> Element | None:
    """The table of a part that has the class ``name``; usual practice, beside the sheet's own limits, is none of it."""
    return next((one for one in part.all("table") if name in one.classes and "usual" not in one.classes), None) \
        if part is not None else None


def rows(table: Element | None) -> Iterator[list[Element]]:
    """The cells of each row of a table's body."""
    for row in table.all("tr") if table is not None else []:
        cells = [one for one in row.children if one.tag == "td"]
        if cells:
            yield cells


def _ambient(part: Element | None) -> Printed | None:
    for one in part.all("dd") if part is not None else []:
        if "pressures on this sheet are absolute" in one.text:
            printed, _, written = linear(one).split(";")[0].partition(", as written ")
            return loose_value(written or printed).number
    return None


def _fluids(part: Element | None) -> Iterator[PrintedFluid]:
    for one in part.all(".fluid") if part is not None else []:
        heading = one.first("h3")
        words = "".join(linear(one) for one in heading.inside if isinstance(one, str) or "role" not in one.classes) \
            if heading is not None else ""
        number, _, designation = words.strip().partition("\u2002")
        facts = {row.children[0].text: row.children[1].text for row in one.all("div")
                 if [each.tag for each in row.children] == ["dt", "dd"]}
        yield PrintedFluid(number, designation.strip(), facts)


def symbol_in(cell: Element) -> str:
    """The symbol in a cell, without the mark of a change beside it."""
    return "".join(linear(one) for one in cell.inside
                   if isinstance(one, str) or "delta" not in one.classes).strip()


def _inputs(part: Element | None) -> Iterator[PrintedInput]:
    for symbol, _, number, unit, written, *_ in rows(table_of(part, "inputs")):
        texts = [linear(one) for one in written.inside if isinstance(one, str) or "whole" not in one.classes]
        yield PrintedInput(symbol_in(symbol), _value_cells(number, unit), "".join(texts).strip())


def _value_cells(number: Element, unit: Element) -> Value:
    """A number and its unit in two cells, with a twin behind the unit."""
    also = unit.first(".also")
    text = "".join(linear(one) for one in unit.inside if one is not also).strip()
    value = read_value(linear(number).strip())
    return Value(Printed(value.text, text), loose_value(linear(also).strip(" ()")).number if also else None)


def _seen(parts: dict[str, Element]) -> Iterator[Seen]:
    """The values of the results table and of the table of the bound."""
    for name, words in (("results", "results table"), ("bound", "table of the reversible bound")):
        for symbol, _, number, unit, *_ in rows(table_of(parts.get(name), "results")):
            yield Seen(words, symbol_in(symbol), _value_cells(number, unit))


def _cells(part: Element | None) -> Iterator[Cell]:
    for name, words in (("states", "state table"), ("streams", "stream table")):
        table = table_of(part, name)
        if table is None:
            continue
        columns = columns_of(table)
        for row in rows(table):
            for (look, unit), cell in zip(columns, row, strict=True):
                value = _table_cell(cell, unit) if "number" in cell.classes else None
                if value is not None:
                    yield Cell(f"{words}, row {row[0].text}", look, value)


def _table_cell(cell: Element, unit: str) -> Value | None:
    also = cell.first(".also")
    text = "".join(linear(one) for one in cell.inside if one is not also).strip()
    if text == "–":
        return None
    number = read_value(text)
    twin = loose_value(linear(also).strip(" ()")).number if also else None
    return Value(Printed(number.text, number.unit or unit), twin)


def _limits(part: Element | None) -> Iterator[PrintedLimit]:
    for id_, symbol, value, bound, margin, verdict, *_ in rows(table_of(part, "limits")):
        sense = re.match(r"at (?:most|least) ", linear(bound))
        if sense is None:
            raise UnreadableError(f"the bound of a limit reads {plain(linear(bound))!r}")
        amount, _, percent = linear(margin).strip().partition("(")
        yield PrintedLimit(
            symbol_in(id_), symbol_in(symbol), value_in(linear(value)), sense[0].strip(),
            value_in(linear(bound)[sense.end():]), loose_value(amount).number if amount.strip() else None,
            loose_value(percent.rstrip(" )")).number if percent else None, verdict.text == "holds")
