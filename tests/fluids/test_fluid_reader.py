"""Readers: order of inputs, memory of the last state, offsets, round trips, wrong names."""
from __future__ import annotations

import subprocess
import sys

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from calcpack.errors import FluidRangeError, FormulaError, SpecError
from calcpack.fluids import FluidDefinition, open_fluid

WORKING_FLUIDS = ("R-1234ze(E)", "R-290", "n-pentane", "toluene", "R-410A", "R-407C", "R-507A")


def fluid(name: str, **parts):
    return open_fluid(FluidDefinition(name, **parts))


def test_opening_costs_no_library_until_a_fluid_is_opened():
    code = ("import sys, calcpack.fluids as f; f.facts_for('propane'); "
            "sys.exit(any(name in sys.modules for name in ('CoolProp', 'scipy', 'numpy')))")
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


def test_inputs_are_taken_by_name_in_any_order():
    propane = fluid("propane")
    assert propane.reader("h", ("s", "p"))(2300.0, 8e5) == propane.reader("h", ("p", "s"))(8e5, 2300.0)


def test_an_equal_definition_opens_the_same_object():
    assert fluid("R-134a", reference="IIR") is fluid("R-134a", reference="IIR")
    assert fluid("R-134a", reference="IIR") is not fluid("R-134a")


def test_several_outputs_of_one_state_cost_one_flash(monkeypatch):
    propane = open_fluid(FluidDefinition("R-290", reference="NBP"))
    flashes = []
    real = propane._flashes[("p", "T")]
    monkeypatch.setitem(propane._flashes, ("p", "T"), lambda p, T: (flashes.append((p, T)), real(p, T)))
    for output in ("h", "s", "rho", "cp"):
        propane.reader(output, ("p", "T"))(8e5, 330.0)
        propane.reader(output, ("T", "p"))(330.0, 8e5)
    assert flashes == [(8e5, 330.0)]
    propane.reader("h", ("p", "T"))(8e5, 331.0)
    assert len(flashes) == 2


def test_interleaved_states_do_not_mix():
    propane = fluid("R-290")
    h, s, p = (propane.reader(*each) for each in (("h", ("p", "T")), ("s", ("p", "x")), ("p", ("T", "x"))))
    alone = h(8e5, 330.0), s(5e5, 1.0), p(300.0, 0.5)
    assert (h(8e5, 330.0), s(5e5, 1.0), p(300.0, 0.5)) == alone
    assert p(300.0, 0.5) == alone[2] and h(8e5, 330.0) == alone[0] and s(5e5, 1.0) == alone[1]


@pytest.mark.parametrize("reference, T, h, s", [("IIR", 273.15, 200e3, 1e3), ("ASHRAE", 233.15, 0.0, 0.0)])
@pytest.mark.parametrize("name, model", [("R-134a", ""), ("R-717", ""), ("R-410A", ""), ("R-454C", "mixture")])
def test_reference_states_hold_at_their_definition(name, model, reference, T, h, s):
    opened = fluid(name, model=model, reference=reference)
    assert opened.reader("h", ("T", "x"))(T, 0.0) == pytest.approx(h, abs=1e-5)
    assert opened.reader("s", ("T", "x"))(T, 0.0) == pytest.approx(s, abs=1e-8)
    assert reference in opened.reference_state


def test_a_reference_shifts_inputs_as_it_shifts_outputs():
    own, shifted = fluid("R-717"), fluid("R-717", reference="IIR")
    for name in ("h", "s"):
        value_own = own.reader(name, ("p", "T"))(10e5, 340.0)
        value_shifted = shifted.reader(name, ("p", "T"))(10e5, 340.0)
        assert abs(value_own - value_shifted) > 100.0
        assert shifted.reader("T", ("p", name))(10e5, value_shifted) == pytest.approx(340.0, abs=1e-6)
    h, s = (shifted.reader(each, ("p", "T"))(10e5, 340.0) for each in "hs")
    assert shifted.reader("p", ("h", "s"))(h, s) == pytest.approx(10e5, rel=1e-6)
    assert shifted.reader("p", ("T", "s"))(340.0, s) == pytest.approx(10e5, rel=1e-6)
    u, v = (shifted.reader(each, ("p", "T"))(10e5, 340.0) for each in "uv")
    assert u == pytest.approx(h - 10e5 * v, abs=1e-3)


def test_the_reference_of_one_fluid_leaves_the_others_alone():
    before = fluid("R-290").reader("h", ("T", "x"))(280.0, 0.0)
    open_fluid(FluidDefinition("R-290", reference="ASHRAE"))
    assert fluid("R-290").reader("h", ("T", "x"))(280.0, 0.0) == before


@pytest.mark.parametrize("name, reference", [("water", "IIR"), ("water", "ASHRAE"), ("CO2", "NBP"), ("air", "IIR")])
def test_impossible_references_are_refused(name, reference):
    with pytest.raises(SpecError, match="reference state"):
        fluid(name, reference=reference)


@settings(max_examples=25, deadline=None)
@given(name=st.sampled_from(WORKING_FLUIDS), reduced_T=st.floats(0.7, 1.05), log_p=st.floats(-3.0, -0.02))
def test_round_trips_from_p_and_T(name, reduced_T, log_p):
    opened = fluid(name)
    T = min(reduced_T * opened.T_crit, opened.T_max)
    p = opened.p_crit * 10.0**log_p
    try:
        h, s, rho = (opened.reader(each, ("p", "T"))(p, T) for each in ("h", "s", "rho"))
    except FluidRangeError as error:
        assert "between liquid and vapour" in str(error)
        return
    if abs(p / opened.p_crit - 1.0) > 0.005:
        assert opened.reader("T", ("p", "h"))(p, h) == pytest.approx(T, abs=1e-4)
        assert opened.reader("h", ("p", "s"))(p, s) == pytest.approx(h, abs=5.0)
    assert opened.reader("p", ("T", "rho"))(T, rho) == pytest.approx(p, rel=1e-4)


@settings(max_examples=20, deadline=None)
@given(name=st.sampled_from(WORKING_FLUIDS), reduced_T=st.floats(0.65, 0.97), x=st.floats(0.0, 1.0))
def test_round_trips_inside_the_dome(name, reduced_T, x):
    opened = fluid(name)
    T = reduced_T * opened.T_crit
    p, h = opened.reader("p", ("T", "x"))(T, x), opened.reader("h", ("T", "x"))(T, x)
    assert opened.reader("h", ("p", "x"))(p, x) == pytest.approx(h, abs=30.0)
    assert opened.reader("x_eq", ("p", "h"))(p, h) == pytest.approx(x, abs=1e-3)


def test_x_eq_goes_on_outside_the_dome_and_x_does_not():
    propane = fluid("R-290")
    h_liquid, h_vapour = (propane.reader("h", ("p", "x"))(8e5, x) for x in (0.0, 1.0))
    superheated = h_vapour + 0.25 * (h_vapour - h_liquid)
    assert propane.reader("x_eq", ("p", "h"))(8e5, superheated) == pytest.approx(1.25, rel=1e-9)
    assert propane.reader("T", ("p", "h"))(8e5, superheated) > propane.reader("T", ("p", "x"))(8e5, 1.0)
    with pytest.raises(FluidRangeError, match="single phase"):
        propane.reader("x", ("p", "h"))(8e5, superheated)


def test_saturated_states_have_the_properties_of_their_phase():
    propane = fluid("R-290")
    T = propane.reader("T", ("p", "x"))(8e5, 1.0)
    for output in ("cp", "gamma", "mu", "lambda", "a"):
        for x, nudge in ((0.0, -1e-3), (1.0, 1e-3)):
            beside = propane.reader(output, ("p", "T"))(8e5, T + nudge)
            assert propane.reader(output, ("p", "x"))(8e5, x) == pytest.approx(beside, rel=1e-4)


@pytest.mark.parametrize("output, names, hint", [
    ("enthalpy", ("p", "T"), None), ("H", ("p", "T"), "did you mean 'h'?"), ("T_crti", (), "did you mean 'T_crit'?"),
    ("h", ("p", "P"), "did you mean 'p'?"), ("h", ("p",), None), ("h", ("x", "h"), None), ("T_freeze", (), None)])
def test_unknown_names_are_refused_before_any_number(output, names, hint):
    with pytest.raises(FormulaError) as caught:
        fluid("R-290").reader(output, names)
    assert caught.value.faults[0].expected.startswith("one of ")
    if hint:
        assert caught.value.faults[0].hint == hint


def test_a_missing_transport_equation_is_refused_before_any_number():
    with pytest.raises(FormulaError, match="no equation for the dynamic viscosity of R-1233zd"):
        fluid("R-1233zd(E)").reader("mu", ("p", "T"))


def test_constants():
    water = fluid("water")
    constant = {name: water.reader(name, ())() for name in water.constants}
    assert constant["T_crit"] == pytest.approx(647.096) and constant["p_crit"] == pytest.approx(22.064e6, rel=1e-4)
    assert constant["M"] * constant["R"] == pytest.approx(8.314371357587)      # IAPWS-95 keeps its own R
    assert constant["T_triple"] == pytest.approx(273.16)
