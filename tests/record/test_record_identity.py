"""Identities: one input changed moves the identity of what hangs on it, and of nothing else."""
from __future__ import annotations

import pytest

from calcpack.plan.laid import LaidStep
from calcpack.plan.steps import Closing
from calcpack.record.build import build_record
from calcpack.record.identity import identity, input_identity
from calcpack.units import read_quantity

CASES = {
    "heat pump": ("vapour-compression", {}, {}),
    "engine": ("organic-rankine", {"recuperator": "yes"}, {}),
    "engine, level found": ("organic-rankine", {"evaporating": "pinch"}, {}),
    "cycle": ("carnot-cycle", {}, {}),
}
CHANGES = {
    "heat pump": {"eta_is": "0.71", "T_sink_out": "36 degC", "dT_pinch_e": "6 K", "eta_motor": "0.9",
    "W_dot_aux": "1 kW",
                  "dT_sc": "5 K", "p_source": "4 bar", "Q_dot_sink": "300 kW"},
    "engine": {"eta_t": "0.79", "T_source_min": "125 degC", "T_0": "10 degC", "dT_rec": "12 K", "eta_gen": "0.9",
               "p_sink": "4 bar"},
    "engine, level found": {"eta_p": "0.6", "dT_pinch_c": "6 K", "T_source_set": "95 degC", "T_0": "10 degC"},
    "cycle": {"gamma": "1.3", "T_c": "20 degC", "V_2": "6 L"},
}


def reads(solution):
    """What each step reads, from the plan alone; an unknown reads all that its body reads, and itself for the body."""
    uses = {step.symbol: set(step.uses) for step in solution.plan.steps}
    open_ = []
    for item in solution.plan.items:
        if isinstance(item, Closing):
            open_.remove(item.symbol)
        elif isinstance(item, LaidStep) and item.kind in ("root", "optimum"):
            open_.append(item.symbol)
    assert open_ == [], "every unknown is closed"
    return uses


def downstream(solution, changed):
    """All steps that hang on ``changed`` by way of what they read; unknowns hang on their equation's steps."""
    uses, moved = reads(solution), {changed}
    while True:
        more = {name for name, used in uses.items() if used & moved} - moved
        if not more:
            return moved - {changed}
        moved |= more


def identities(solution):
    return {step["symbol"]: step["identity"] for step in build_record(solution).data["steps"]}


@pytest.mark.parametrize("case, symbol", [(case, symbol) for case in CASES for symbol in CHANGES[case]])
def test_one_input_changed_moves_what_hangs_on_it_and_nothing_else(arranged, case, symbol):
    method, options, fluids = CASES[case]
    base = arranged(method, options, fluids=fluids)
    changed = arranged(method, options, {symbol: CHANGES[case][symbol]}, fluids)
    before, after = identities(base), identities(changed)
    assert {name for name in before if before[name] != after[name]} == downstream(base, symbol)


@pytest.mark.parametrize("case", CASES)
def test_a_value_that_moved_has_an_identity_that_moved(arranged, case):
    method, options, fluids = CASES[case]
    base = arranged(method, options, fluids=fluids)
    before = identities(base)
    for symbol, text in CHANGES[case].items():
        changed = arranged(method, options, {symbol: text}, fluids)
        after = identities(changed)
        same = [name for name in before if before[name] == after[name]]
        # A root's last bits hang on where its search began.
        assert all(changed.values[name] == pytest.approx(base.values[name], rel=1e-9, abs=1e-9) for name in same)
        assert len(same) < len(before)


def test_a_fluid_changed_moves_what_reads_it(arranged):
    base, other = (arranged("vapour-compression", fluids={"wf": fluid}) for fluid in ("R-1234ze(E)", "R-1234yf"))
    before, after = identities(base), identities(other)
    for name in ("T_crit_wf", "T_e", "T_c", "p_e", "h_1", "COP", "dT_min_e"):
        assert before[name] != after[name], name
    for name in ("h_source_in", "s_sink_out", "T_m_source"):
        assert before[name] == after[name], name


def test_a_title_or_note_moves_no_identity_and_a_formula_or_unit_does(own_sheet, solution_of):
    rest = "  inputs: {q: 5 kW}\nsteps:\n  - {symbol: a, title: A, formula: q * 2}\n" \
           "  - {symbol: b, title: B, formula: a + q}\n"

    def of(text):
        return identities(solution_of(own_sheet(text)))
    base = of(rest)
    assert of(rest.replace("title: A", "title: Other, note: New")) == base
    assert of(rest.replace("q * 2", "q*2")) == base, "spacing means nothing"
    moved = of(rest.replace("q * 2", "q * 3"))
    assert moved["a"] != base["a"] and moved["b"] != base["b"]
    unit_moved = of(rest.replace("formula: a + q", "formula: a + q, unit: MW"))
    assert unit_moved["a"] == base["a"] and unit_moved["b"] != base["b"]


def test_an_inputs_identity_is_its_value_not_its_spelling():
    assert input_identity("p", read_quantity("1 bar").value, "bar") == input_identity(
        "p", read_quantity("1.000 bar").value, "bar")
    assert input_identity("p", 1e5, "bar") != input_identity("p", 1.00001e5, "bar")
    assert input_identity("p", 1e5, "bar") != input_identity("q", 1e5, "bar")
    assert identity(["a", "b"]) != identity(["ab"])
