"""How faults are printed: the whole text, as a compiler prints it."""
from __future__ import annotations

import pickle

import pytest

from calcpack.errors import (
    CalcpackError,
    CommandError,
    Fault,
    FluidRangeError,
    FormulaError,
    MissingPartError,
    NoAnswerError,
    Place,
    RootError,
    SpecError,
    UnitError,
    describe,
    nearest,
)

TEXT = "sheet:\n  sink: {inlet: 60 degC, outlett: 70 degC}\n\tlast"


def test_a_fault_with_its_line_and_hint():
    fault = Fault("unknown key 'outlett' in streams.sink", Place("pump.yaml", 2, 26, 7),
                  hint="did you mean 'outlet'?")
    assert describe([fault], {"pump.yaml": TEXT}) == (
        "pump.yaml:2:26: unknown key 'outlett' in streams.sink\n"
        "      sink: {inlet: 60 degC, outlett: 70 degC}\n"
        "                             ^^^^^^^ did you mean 'outlet'?\n"
        "1 error, nothing was written.")


def test_all_that_a_fault_can_say():
    fault = Fault("a power is meant here", Place("a.yaml", 2, 3, 4), found="'3 K'",
                  expected="a quantity such as '5 kW'", detail="raw text")
    assert describe([fault], {"a.yaml": TEXT}, ending="nothing was solved") == (
        "a.yaml:2:3: a power is meant here\n"
        "      sink: {inlet: 60 degC, outlett: 70 degC}\n"
        "      ^^^^\n"
        "    found:    '3 K'\n"
        "    expected: a quantity such as '5 kW'\n"
        "    detail:   raw text\n"
        "1 error, nothing was solved.")


def test_a_fault_without_a_place_and_one_without_its_text():
    faults = [Fault("the disk is full", hint="make room"),
              Fault("wrong", Place("b.yaml", 1, 1), hint="write it right")]
    assert describe(faults) == (
        "error: the disk is full\n"
        "    hint:     make room\n"
        "b.yaml:1:1: wrong\n"
        "    hint:     write it right\n"
        "2 errors, nothing was written.")


def test_a_line_beyond_the_text_has_no_source_line():
    assert describe([Fault("wrong", Place("a.yaml", 9, 1))], {"a.yaml": TEXT}) == (
        "a.yaml:9:1: wrong\n1 error, nothing was written.")


def test_a_tab_keeps_the_caret_under_its_character():
    assert describe([Fault("wrong", Place("a.yaml", 3, 2, 4))], {"a.yaml": TEXT}).splitlines()[1:3] == [
        "     last", "     ^^^^"]


@pytest.mark.parametrize("column", [1, 60, 200, 396, 397])
def test_a_long_line_is_cut_around_the_place(column):
    row = "".join(f"{index:04d}" for index in range(0, 99))
    _, shown, caret, _ = describe([Fault("wrong", Place("a", 1, column, 3))], {"a": row}).splitlines()
    at = caret.index("^")
    assert len(shown) == 4 + 110
    assert shown[at:at + 3] == row[column - 1:column + 2]
    assert caret.strip() == "^" * max(1, len(row[column - 1:column + 2]))


def test_a_caret_stays_inside_its_line():
    _, shown, caret, _ = describe([Fault("wrong", Place("a", 1, 3, 50))], {"a": "abcdef"}).splitlines()
    assert (shown, caret) == ("    abcdef", "      ^^^^")


def test_the_nearest_word():
    known = ["outlet", "inlet", "W_dot"]
    assert nearest("outlett", known) == "did you mean 'outlet'?"
    assert nearest("OUTLET", known) == "did you mean 'outlet'?"
    assert nearest("w_DOT", known) == "did you mean 'W_dot'?"
    assert nearest("pressure", known) is None
    assert nearest("x", []) is None


def test_a_place_is_filled_in_only_where_there_is_none():
    placed, bare = Fault("a", Place("a", 1, 2)), Fault("b")
    error = UnitError([placed, bare]).at(Place("b", 3, 4))
    assert type(error) is UnitError
    assert [str(fault.place) for fault in error.faults] == ["a:1:2", "b:3:4"]


def test_a_place_inside_a_scalar():
    assert Place("a", 4, 10, 30).shifted(5, 2) == Place("a", 4, 15, 2)
    assert Place("a", 4, 10, 30).shifted(5, 0).length == 1


@pytest.mark.parametrize("kind", [
    SpecError, FormulaError, UnitError, CommandError, RootError, FluidRangeError, MissingPartError])
def test_an_error_travels_between_processes(kind):
    error = kind([Fault("a", Place("f", 1, 2, 3), found="x", hint="y"), Fault("b", detail="z")])
    again = pickle.loads(pickle.dumps(error))
    assert type(again) is kind and again.faults == error.faults
    assert str(again) == "f:1:2: a (found x); b"


def test_exit_states():
    assert [kind.exit_status for kind in (SpecError, FormulaError, UnitError, CommandError)] == [2] * 4
    assert [kind.exit_status for kind in (NoAnswerError, RootError, FluidRangeError)] == [3] * 3
    assert MissingPartError.exit_status == 4
    assert all(issubclass(kind, CalcpackError) for kind in (SpecError, NoAnswerError, MissingPartError))


LONG = Fault("step 2.3, T_c (condensing temperature at which the condenser has the wanted pinch): the equation has no "
             "root in its bracket", Place("pump.yaml", 2, 3, 4), found="left minus right is -101.9 K at the low end "
             "and -45.64 K at the high end", hint="the bracket runs from T_sink_in = 328.150 K to 380.513 K")


def test_sentences_are_wrapped_to_the_width_and_source_lines_are_not():
    assert describe([LONG], {"pump.yaml": TEXT}, width=80) == (
        "pump.yaml:2:3: step 2.3, T_c (condensing temperature at which the condenser has\n"
        "  the wanted pinch): the equation has no root in its bracket\n"
        "      sink: {inlet: 60 degC, outlett: 70 degC}\n"
        "      ^^^^ the bracket runs from T_sink_in = 328.150 K to 380.513 K\n"
        "    found:    left minus right is -101.9 K at the low end and -45.64 K at the\n"
        "              high end\n"
        "1 error, nothing was written.")


def test_a_hint_without_room_beside_its_caret_has_lines_of_its_own():
    text = describe([LONG], {"pump.yaml": TEXT}, width=60).splitlines()
    assert text[text.index("      ^^^^") + 1:] == [
        "    found:    left minus right is -101.9 K at the low end", "              and -45.64 K at the high end",
        "    hint:     the bracket runs from T_sink_in = 328.150 K to", "              380.513 K",
        "1 error, nothing was written."]
    assert max(map(len, text)) <= 60


@pytest.mark.parametrize("width", [60, 80, 100])
def test_wrapping_loses_no_word(width):
    one = " ".join(describe([LONG], {"pump.yaml": TEXT}).replace("^^^^ ", "").split())
    other = " ".join(describe([LONG], {"pump.yaml": TEXT}, width=width).split())
    assert sorted(one.split()) == sorted(word for word in other.split() if word not in ("hint:", "^^^^"))
