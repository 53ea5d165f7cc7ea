"""Roots and optima: the bracket that is stated is the one that was used, and no answer is told as such."""
from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.errors import Fault, NoAnswerError, RootError
from calcpack.solving.roots import RELATIVE, find_optimum, find_root


def only_between(low, high, function):
    """``function`` where x is between the two, as a property that cannot be had elsewhere."""
    def residual(x):
        if not low <= x <= high:
            raise NoAnswerError(Fault("outside the range of the test"))
        return function(x)
    return residual


@given(st.floats(-50.0, 50.0), st.floats(0.1, 100.0), st.floats(0.1, 100.0))
def test_a_root_is_found_to_the_stated_width(where, below, above):
    root = find_root(lambda x: math.expm1(x - where) if x < where + 5 else math.expm1(5), where - below, where + above)
    assert abs(root.value - where) <= 2 * RELATIVE * max(abs(where - below), abs(where + above), 1.0)
    assert (root.low, root.high) == (where - below, where + above)


def test_evaluations_are_counted():
    calls = []
    root = find_root(lambda x: (calls.append(x), x**3 - 2.0)[1], 0.0, 3.0)
    assert root.value == pytest.approx(2.0 ** (1 / 3), rel=1e-11)
    assert 5 < root.evaluations <= len(calls)


@pytest.mark.parametrize("low, high", [(2.0, 7.0), (-3.0, 2.0)])
def test_a_root_exactly_at_an_end_is_the_root(low, high):
    root = find_root(lambda x: x - 2.0, low, high)
    assert (root.value, root.evaluations) == (2.0, 2)


def test_an_end_that_cannot_be_evaluated_moves_inwards_and_is_stated_so():
    root = find_root(only_between(1.0, 9.0, lambda x: x - 4.0), 0.0, 10.0)
    assert root.value == pytest.approx(4.0, abs=1e-9)
    assert (root.low, root.high) == (1.25, 8.75), "eighths of the bracket are the nearest usable ends"


def test_a_change_of_sign_inside_a_bracket_with_equal_ends_is_found():
    assert find_root(lambda x: (x - 3.0) * (x - 4.0), 0.0, 10.0).value == pytest.approx(3.0, abs=1e-9)


def test_no_change_of_sign_is_no_root_and_the_ends_are_told():
    with pytest.raises(RootError) as caught:
        find_root(lambda x: x * x + 1.0, 0.0, 2.0)
    fault = caught.value.faults[0]
    assert fault.what == "the equation has no root in its bracket"
    assert fault.found == "left minus right is 1 at the low end and 5 at the high end"
    assert caught.value.exit_status == 3


@pytest.mark.parametrize("low, high", [(2.0, 2.0), (3.0, 2.0), (float("nan"), 2.0), (0.0, math.inf)])
def test_an_empty_bracket_is_told(low, high):
    with pytest.raises(RootError) as caught:
        find_root(lambda x: x, low, high)
    assert caught.value.faults[0].what == "the bracket is empty"


def test_where_nothing_can_be_evaluated_the_reason_is_the_propertys():
    with pytest.raises(NoAnswerError) as caught:
        find_root(only_between(100.0, 101.0, lambda x: x), 0.0, 10.0)
    assert caught.value.faults[0].what == "outside the range of the test"


def test_a_bracket_usable_in_its_middle_alone_is_told_with_the_reason():
    with pytest.raises(RootError) as caught:
        find_root(only_between(4.9, 5.1, lambda x: 7.0), 0.0, 10.0)
    fault = caught.value.faults[0]
    assert fault.what == "the equation can be evaluated nowhere but in the middle of its bracket"
    assert fault.hint == "outside the range of the test"


def test_the_reason_of_a_moved_end_is_kept_where_no_root_is_found():
    with pytest.raises(RootError) as caught:
        find_root(only_between(1.0, 10.0, lambda x: x + 1.0), 0.0, 10.0)
    assert caught.value.faults[0].detail == "outside the range of the test"


@pytest.mark.parametrize("greatest", [True, False])
@pytest.mark.parametrize("where", [0.3, 2.0, 5.17, 9.9])
def test_an_optimum_inside_is_found(greatest, where):
    sign = -1.0 if greatest else 1.0
    found = find_optimum(lambda x: 3.0 + sign * (x - where) ** 2, 0.0, 10.0, greatest=greatest)
    assert found.value == pytest.approx(where, abs=1e-4)
    assert found.objective == pytest.approx(3.0, abs=1e-8)
    assert len(found.curve) == 9 and (found.curve[0][0], found.curve[-1][0]) == (0.0, 10.0)


@pytest.mark.parametrize("greatest, where", [(True, 10.0), (False, 0.0)])
def test_an_optimum_at_a_bound_is_that_bound(greatest, where):
    found = find_optimum(lambda x: 2.0 * x, 0.0, 10.0, greatest=greatest)
    assert (found.value, found.objective) == (where, 2.0 * where)


def test_empty_bounds_of_an_optimum_are_told():
    with pytest.raises(RootError) as caught:
        find_optimum(lambda x: x, 2.0, 1.0, greatest=True)
    assert caught.value.faults[0].what == "the bounds of the optimum are empty"
