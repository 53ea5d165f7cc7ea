"""What is printed can be re-done from what is printed: for every method and every option value.

The numbers are read from the record as text and worked again here, with this
file's own walk over the record; nothing of the program's own re-check is used.
"""
from __future__ import annotations

import math
from decimal import Decimal

import pytest

from calcpack.formula.evaluate import value
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import PropertyCall
from calcpack.record.build import build_record
from calcpack.units import read_quantity, unit
from calcpack.units.kinds import US_UNITS

# Equal to a place but for the last bit of a binary float.
ONE_PLACE = 1.0 + 1e-6


def place_of(shown):
    return 10.0 ** Decimal(shown).as_tuple().exponent


def again(solution, numbers, formula):
    """The SI value of printed numbers; a property call asks the fluid that the formula's role names."""
    tree = parse(numbers)
    if not isinstance(tree, PropertyCall):
        return value(tree)
    fluid = solution.plan.fluids[parse(formula).fluid]
    assert fluid.designation == tree.fluid
    return fluid.reader(tree.output, tuple(key for key, _ in tree.given))(*(value(part) for _, part in tree.given))


def gap(shown, unit_symbol, si):
    """The distance of a printed number from a value, in units of its last place."""
    return abs(unit(unit_symbol).from_si(si) - float(shown)) / place_of(shown)


def printed_results(solution):
    """(what, shown, unit, formula, numbers) of every printed result that has operands."""
    for step in build_record(solution).data["steps"]:
        if step["kind"] in ("formula", "property", "choice"):
            yield step["id"], step["shown"], step["unit"], step["formula"], step["numbers"]
        for row in step.get("table", {}).get("rows", ()):
            for column, cell in zip(step["table"]["columns"], row["cells"], strict=True):
                yield f"{step['id']} {row['label']} {column['symbol']}", cell["shown"], column["unit"], \
                    column["formula"], cell["numbers"]


def require_done_again(solution):
    gaps = {what: gap(shown, symbol, again(solution, numbers, formula))
            for what, shown, symbol, formula, numbers in printed_results(solution)}
    assert {what: places for what, places in gaps.items() if not places <= ONE_PLACE} == {}
    assert len(gaps) == 1 or max(gaps.values()) > 1e-9, "a grid without any rounding would prove nothing"


def test_every_result_can_be_done_again_from_print(arranged, method, options):
    require_done_again(arranged(method, options))


def test_every_result_can_be_done_again_from_print_in_us_units(arranged, any_method):
    require_done_again(arranged(any_method, units="us"))


def test_roots_reductions_and_conditions_hold_in_print(arranged, method, options):
    solution = arranged(method, options)
    for step in build_record(solution).data["steps"]:
        if step["kind"] == "root":
            at = unit(step["unit"]).to_si(float(step["shown"]))
            place = place_of(step["shown"]) * unit(step["unit"]).factor
            ends = [solution.program.residual_at(step["symbol"], at + part * place, solution.values) for part in (-1,
                1)]
            assert ends[0] * ends[1] <= 0.0, "the printed root is within its last place of the true one"
            left = solution.program.residual_at(step["symbol"], at, solution.values)
            assert step["root"]["residual_value"] == pytest.approx(left, rel=1e-4, abs=1e-12)
            # The residual is printed to two digits.
            stated = value(parse(step["root"]["residual"]))
            assert stated == pytest.approx(left, rel=0.06, abs=1e-300)
        elif step["kind"] == "series":
            table = step["table"]
            at = [column["symbol"] for column in table["columns"]].index(table["column"])
            cells = [float(row["cells"][at]["shown"]) for row in table["rows"]]
            assert table["reduction"] == "min" and float(step["shown"]) == pytest.approx(min(cells), abs=1e-12)
        elif step["kind"] == "choice":
            for branch in step["choice"]["branches"]:
                if branch["reached"] and branch["condition_numbers"]:
                    assert bool(value(parse_condition(branch["condition_numbers"]))) == branch["held"]


def test_inputs_are_printed_exactly_as_they_were_given(arranged, method, options):
    solution = arranged(method, options)
    for entry in build_record(solution).data["inputs"]:
        laid = solution.plan.inputs[entry["symbol"]]
        reading = read_quantity(entry["written"], laid.need.kind if laid.need else None)
        assert entry["value"] == reading.value
        # What was written in a unit of the other system is printed to six digits at least.
        within = 5e-6 if reading.unit.symbol in US_UNITS else 1e-11
        printed = unit(entry["unit"]).to_si(float(entry["shown"]))
        assert math.isclose(printed, entry["value"], rel_tol=within)


def test_values_that_must_agree_are_printed_equally_fine(arranged, method, options):
    solution = arranged(method, options)
    for pair in solution.plan.facts.equals:
        assert solution.printing.decimals[pair.symbol] == solution.printing.decimals[pair.other]


def test_us_units_change_no_number(arranged, any_method):
    si, us = (arranged(any_method, units=units) for units in ("si", "us"))
    assert si.values == us.values
    assert {step.symbol for step in us.plan.steps if step.unit.symbol in ("kW", "bar", "kJ/kg", "kg/s",
        "m³/h")} == set()


def test_temperature_levels_are_printed_absolute_with_their_everyday_twin(arranged):
    for units, absolute, everyday in (("si", "K", "°C"), ("us", "°R", "°F")):
        solution = arranged("vapour-compression", units=units)
        record = build_record(solution)
        step = record.step("T_2")
        assert step["unit"] == absolute and step["also_shown"].endswith(" " + everyday)
        twin = unit(everyday).to_si(float(step["also_shown"].split()[0]))
        assert twin == pytest.approx(step["value"], abs=0.01)
        assert record.step("dT_min_c")["also_shown"] is None


HARD = """\
  inputs: {a: 1000001 m, b: 1000000 m, tiny: 3e-7 kg, huge: 4.2e11 W, x: 0.999999, n: 2900 1/min}
steps:
  - {symbol: d, title: Small difference of great values, formula: (a - b) / b}
  - {symbol: s, title: Steep, formula: 1 / (1 - x)}
  - {symbol: e, title: Steeper, formula: exp(20 * s / 1e6)}
  - {symbol: q, title: Per mass, formula: huge / tiny * 1 s}
  - {symbol: z, title: Zero, formula: a - a}
  - {symbol: neg, title: Negative, formula: b - a - 0.3333333333 m}
  - {symbol: f, title: Frequency, formula: n * 1.5, unit: 1/s}
  - {symbol: cold, title: Cooling in tons, formula: huge / 1e7, unit: TR}
  - symbol: pick
    title: Chosen
    choice:
      - {when: d > 1 and s < 5 or x < 1, value: d * s, label: first}
      - {otherwise: s}
  - {symbol: t, title: Table, lookup: {of: x, points: [[0, 1 kW], [1, 3 kW]], source: R1}}
  - {symbol: r, title: Root, unit: m, root: {equation: r^3 - a * b * 1 m, between: [0 m, a]}}
references:
  - {id: R1, text: A table.}
"""


@pytest.mark.parametrize("units", ["si", "us"])
def test_hard_numbers_can_be_done_again_from_print(own_sheet, solution_of, units):
    solution = solution_of(own_sheet(HARD, units))
    for what, shown, symbol, formula, numbers in printed_results(solution):
        assert gap(shown, symbol, again(solution, numbers, formula)) <= ONE_PLACE, what
    assert solution.printing.shown("z").strip("0.") == ""
    record = build_record(solution)
    table = record.step("t")
    assert value(parse(table["numbers"])) == pytest.approx(0.999999, rel=1e-9)
    assert table["lookup"]["neighbours"] == [["0", "1 kW"], ["1", "3 kW"]]
