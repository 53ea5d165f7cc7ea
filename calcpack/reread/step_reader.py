"""One step's box on the page to its lines: symbols, numbers, result, and what its kind adds."""
from __future__ import annotations

import re
from collections.abc import Iterator

from calcpack.reread.elements import Element
from calcpack.reread.linear import ABOVE_END, THIN, linear, plain
from calcpack.reread.printed_page import (
    BranchLine,
    CaseColumn,
    CaseLines,
    ColumnLine,
    Detail,
    End,
    LookupLines,
    OptimumLines,
    PrintedStep,
    RootLines,
    SeriesLines,
    SeriesRow,
    TotalLine,
    Value,
)
from calcpack.reread.reading import UnreadableError, read_value
from calcpack.reread.terms import Printed

BRACKETED = re.compile(r"^(.*?)(?: \((-?−?[\d.]+[ \u202f]?(?:°C|°F|K|°R))\))?$", re.DOTALL)
LEFT = re.compile(r"At the printed solution the equation is (less than )?(.*?) from zero\.")
LOOKED_UP = re.compile(r"Read from a table at (.*?)(?: = (.*?))?, linear between")
REDUCED = re.compile(r"(Least|Greatest|Sum|Mean) of (.*?): ")
TOTAL = re.compile(r"(Least|Greatest|Sum|Mean) of (.*?) in table (\S+): ")
MOVED = re.compile(r"(.*?) \(inwards of (.*) = (.*?)\)")
BEST = re.compile(r"There it is (.*?), the (greatest|least) of")


def step(box: Element) -> PrintedStep:
    """The step in a box.

    Raises
    ------
    UnreadableError
        Where the box has not the lines of a step.
    """
    id_ = box.id.removeprefix("step-")
    fluids = tuple(one.text for one in box.all("a") if one.href.startswith("#fluid-"))
    detail = _detail(box)
    equation, answer = box.first(".equation"), box.first(".answer")
    if equation is not None:
        look, symbols, numbers, result = _equation(equation)
    elif answer is not None:
        look, symbols, numbers = _answer_symbol(answer), "", ""
        result = result_of(answer)
    else:
        raise UnreadableError("no equation and no answer stand in this step")
    return PrintedStep(id_, look, symbols, numbers, result, fluids, detail)


def _equation(box: Element) -> tuple[str, str, str, Value]:
    left, right = box.children
    groups: list[str] = []
    for row in right.children:
        line = linear(row)
        if "more" in row.classes:
            groups[-1] += " " + line
        else:
            groups.append(line.removeprefix("= "))
    symbols, *numbers, _ = groups
    return linear(left).strip(), symbols, numbers[0] if numbers else "", result_of(right.children[-1])


def result_of(line: Element) -> Value:
    """The bold number of a line, with the temperature in brackets behind it."""
    bold = line.first("b")
    if bold is None:
        raise UnreadableError("no result stands in bold")
    behind = linear(line).rpartition(linear(bold))[2].strip()
    twin = loose_value(behind.strip("()")).number if behind else None
    return Value(read_value(linear(bold).strip()), twin)


def loose_value(line: str) -> Value:
    """A number with its unit in running text, where the gap before the unit may be a plain space."""
    return Value(read_value(re.sub(rf"(?<=[\d{ABOVE_END}]) (?=\S)", THIN, line.strip().replace("-", "−"))))


def value_in(line: str) -> Value:
    """A number in running text with the temperature in brackets behind it."""
    found = BRACKETED.match(line.strip())
    if found is None:
        raise UnreadableError(f"{plain(line)!r} is no value")
    return Value(loose_value(found[1]).number, loose_value(found[2]).number if found[2] else None)


def columns_of(table: Element) -> list[tuple[str, str]]:
    """The symbol and the unit in each head of a table."""
    found = []
    for head in table.first("thead").all("th") if table.first("thead") else []:
        unit = head.first(".unit")
        symbol = "".join(linear(one) for one in head.inside if one is not unit).strip()
        found.append((symbol, linear(unit).strip() if unit is not None else ""))
    return found


def _detail(box: Element) -> Detail:
    if box.first(".zero") is not None:
        return _root(box)
    if box.first(".curve") is not None:
        return _optimum(box)
    if box.first(".points") is not None:
        return _lookup(box)
    if box.first(".series") is not None:
        return _series(box) if any(REDUCED.search(linear(one)) for one in box.all("p")) else _cases(box)
    if any(TOTAL.search(linear(one)) for one in box.all("p")):
        return TotalLine(*_paragraph(box, TOTAL).groups())
    if box.first(".condition") is not None:
        return tuple(_branches(box))
    return None


def _paragraph(box: Element, pattern: re.Pattern[str]) -> re.Match[str]:
    for one in box.all("p"):
        found = pattern.search(linear(one))
        if found:
            return found
    raise UnreadableError(f"no line of this step reads {pattern.pattern!r}")


def _ends(box: Element) -> tuple[End, End]:
    line = next((linear(one).strip() for one in box.all("p") if linear(one).startswith("between ")), "")
    low, and_, high = line.removeprefix("between ").rstrip(": ").partition(" and ")
    if not and_:
        raise UnreadableError("no bracket stands in this step")
    return _end(low), _end(high)


def _end(line: str) -> End:
    if moved := MOVED.fullmatch(line):
        return End(moved[2], loose_value(moved[1]).number, loose_value(moved[3]).number)
    formula, equals, value = line.rpartition(" = ")
    return End(formula if equals else "", loose_value(value).number)


def _root(box: Element) -> RootLines:
    equation = linear(box.first(".zero")).strip()
    left = _paragraph(box, LEFT)
    return RootLines(equation.removesuffix("= 0").strip(), _ends(box), loose_value(left[2]).number, bool(left[1]))


def _optimum(box: Element) -> OptimumLines:
    best = _paragraph(box, BEST)
    table = box.first(".curve")
    units = [unit for _, unit in columns_of(table)]
    curve = tuple(tuple(Printed(read_value(linear(cell).strip()).text, unit)
                        for cell, unit in zip(row, units, strict=True)) for row in _body(table))
    return OptimumLines(linear(box.first(".objective")).strip(), best[2] == "greatest", _ends(box),
                        loose_value(best[1]).number, curve)


def _lookup(box: Element) -> LookupLines:
    found = _paragraph(box, LOOKED_UP)
    points = tuple((loose_value(linear(x)).number, loose_value(linear(y)).number, near.text == "neighbour")
                   for x, y, near in _body(box.first(".points")))
    return LookupLines(found[1], found[2] or "", points)


def _branches(box: Element) -> Iterator[BranchLine]:
    for _, condition, numbers, verdict in _body(box.first("table")):
        words = linear(condition).strip()
        yield BranchLine("" if words == "otherwise" else words, linear(numbers).strip(), verdict.text)


def _series(box: Element) -> SeriesLines:
    table, worked = box.first(".series"), box.first(".columns")
    heads = columns_of(table)[1:]
    found = _paragraph(box, REDUCED)
    rows = tuple(_series_row(cells, [unit for _, unit in heads]) for cells in _body(table))
    label = re.search("‘(.*)’", worked.first("thead").text)
    lines = list(_body(worked))
    columns = tuple(_column(look, unit, cells) for (look, unit), cells in zip(heads, lines, strict=True))
    return SeriesLines(columns, rows, label[1] if label else "", found[1], found[2].strip())


def _cases(box: Element) -> CaseLines:
    """The bands of a table solved row by row, side by side again."""
    bands = [one for one in box.all("table") if "series" in one.classes]
    heads = [head for band in bands for head in columns_of(band)[1:]]
    found: dict[str, SeriesRow] = {}
    for band in bands:
        units = [unit for _, unit in columns_of(band)[1:]]
        for cells in _body(band):
            row = _series_row(cells, units)
            before = found.get(row.label, SeriesRow(row.label, "", ()))
            found[row.label] = SeriesRow(row.label, "", (*before.cells, *row.cells))
    worked = box.first(".columns")
    label = re.search("‘(.*)’", worked.first("thead").text)
    columns = []
    for (look, unit), cells in zip(heads, _body(worked), strict=True):
        words = linear(cells[1]).strip()
        given, solved = words == "given by the row", words.startswith("solved for the row")
        columns.append(CaseColumn(look, unit, "" if given or solved else words, given, solved))
    return CaseLines(tuple(columns), tuple(found.values()), label[1] if label else "")


def _series_row(cells: list[Element], units: list[str]) -> SeriesRow:
    formula = cells[0].first(".from")
    label = " ".join("".join(linear(one) for one in cells[0].inside if one is not formula).split())
    numbers = (read_value(linear(cell).strip()) for cell in cells[1:])
    return SeriesRow(label, linear(formula).strip(" =") if formula is not None else "",
                     tuple(Printed(one.text, unit) for one, unit in zip(numbers, units, strict=True)))


def _column(look: str, unit: str, cells: list[Element]) -> ColumnLine:
    formula = linear(cells[1]).strip()
    numbers, _, result = linear(cells[2]).strip().rpartition(" = ")
    return ColumnLine(look, unit, "" if formula == "given for each row" else formula, numbers, read_value(result))


def _answer_symbol(answer: Element) -> str:
    line = linear(answer)
    return line.partition(": ")[2 if ": " in line else 0].partition(" = ")[0].strip()


def _body(table: Element | None) -> list[list[Element]]:
    body = table.first("tbody") if table is not None else None
    return [[one for one in row.children if one.tag == "td"] for row in body.all("tr")] if body is not None else []
