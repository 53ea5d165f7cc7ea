"""Outside the range of an equation: a sentence with units, never a number."""
from __future__ import annotations

import math

import pytest

from calcpack.errors import FluidRangeError, SpecError
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.fluids.pure import PureFluid


def refused(fluid, output: str, inputs: dict[str, float]):
    with pytest.raises(FluidRangeError) as caught:
        fluid.reader(output, tuple(inputs))(*inputs.values())
    return caught.value.faults[0]


@pytest.fixture
def ze():
    return open_fluid(FluidDefinition("R-1234ze(E)"))


def test_condensing_above_the_critical_temperature_names_both(ze):
    fault = refused(ze, "p", {"T": 390.0, "x": 1.0})
    assert fault.what == ("condensing/saturation temperature 390.00 K (116.85 °C) is above the critical "
                          "temperature 382.51 K (109.36 °C) of R-1234ze(E)")
    assert fault.found == "T = 390.00 K (116.85 °C), x = 1"


@pytest.mark.parametrize("inputs, words", [
    ({"p": 1e5, "T": 430.0}, "above the limit of 420.00 K"), ({"p": 1e5, "T": 150.0}, "below the limit of 168.62 K"),
    ({"p": 16e6, "T": 350.0}, "above the limit of 150 bar"), ({"p": -1e5, "T": 350.0}, "not above zero"),
    ({"p": 0.0, "T": 350.0}, "not above zero"), ({"p": 5e6, "x": 1.0}, "is above the critical pressure 36.3487 bar"),
    ({"p": 1.0, "x": 1.0}, "below the lowest"), ({"T": 160.0, "x": 0.0}, "below the lowest"),
    ({"p": 1e6, "x": 1.2}, "not between 0 and 1"), ({"p": 1e6, "x": -0.01}, "not between 0 and 1"),
    ({"T": 300.0, "x": math.nan}, "finite"), ({"p": math.inf, "T": 300.0}, "finite"),
    ({"p": 1e6, "h": 9e5}, "no state"), ({"T": 350.0, "rho": -2.0}, "not above zero")])
def test_each_limit_is_named(ze, inputs, words):
    fault = refused(ze, "s", inputs)
    assert words in fault.what
    assert fault.found


def test_a_flash_that_lands_above_the_limit_is_refused(ze):
    h = ze.reader("h", ("p", "T"))(1e6, 420.0)
    assert "above the limit of 420.00 K" in refused(ze, "T", {"p": 1e6, "h": h + 30e3}).what


def test_swapped_pressure_and_temperature_are_guessed(ze):
    assert refused(ze, "h", {"p": 300.0, "T": 1e5}).hint == "are pressure and temperature swapped?"


def test_p_and_T_on_the_saturation_line_point_to_x(ze):
    T = ze.reader("T", ("p", "x"))(1e6, 0.0)
    fault = refused(ze, "h", {"p": 1e6, "T": T})
    assert "do not fix its state" in fault.what and "give x" in fault.hint


@pytest.mark.parametrize("names", [("p", "h"), ("p", "s")])
def test_flashes_next_to_the_critical_pressure_are_refused(ze, names):
    values = {"p": 1.003 * ze.p_crit, names[1]: 4e5 if names[1] == "h" else 1.7e3}
    assert "within 0.5 % of the critical pressure" in refused(ze, "T", values).what


@pytest.mark.parametrize("output", ["cp", "cv", "gamma", "mu", "lambda", "a"])
def test_properties_of_one_phase_are_refused_in_a_mixture(ze, output):
    assert "not defined for a mixture" in refused(ze, output, {"p": 1e6, "x": 0.5}).what


def test_x_eq_is_refused_above_the_critical_pressure(ze):
    assert "above the critical pressure" in refused(ze, "x_eq", {"p": 5e6, "T": 400.0}).what


def test_a_failure_leaves_no_garbage_behind(ze):
    h = ze.reader("h", ("p", "T"))
    good = h(1e6, 350.0)
    for bad in ({"p": 1e6, "h": 9e5}, {"p": 1e6, "T": 999.0}, {"h": 1e9, "s": -1e6}):
        refused(ze, "T", bad)
        assert h(1e6, 350.0) == good
    assert refused(ze, "T", {"p": 1e6, "h": 9e5}).detail    # the library's words are kept, as detail only


def test_the_message_never_is_the_library_text(ze):
    fault = refused(ze, "T", {"p": 1e6, "h": 9e5})
    assert fault.detail not in fault.what


# Within some per cent below p_crit the library's flash from p and h fails for these fluids (CoolProp 8.0.0).
@pytest.mark.parametrize("name, reduced_p", [("methanol", 0.99), ("n-heptane", 0.99), ("MDM", 0.985), ("R-410A", 0.99)])
def test_where_the_flash_fails_a_bracketed_search_answers(monkeypatch, name, reduced_p):
    fluid = open_fluid(FluidDefinition(name, reference="" if name == "methanol" else "NBP"))
    searches = []
    real = PureFluid._by_bracket
    monkeypatch.setattr(PureFluid, "_by_bracket", lambda self, *rest: (searches.append(rest), real(self, *rest)))
    p = reduced_p * fluid.p_crit
    for T in (0.8 * fluid.T_crit, min(1.01 * fluid.T_crit, fluid.T_max)):
        for name_2 in ("h", "s"):
            given = fluid.reader(name_2, ("p", "T"))(p, T)
            assert fluid.reader("T", ("p", name_2))(p, given) == pytest.approx(T, abs=1e-6)
            # The state is whole again: no phase stays imposed, other outputs follow.
            assert fluid.reader("rho", ("p", name_2))(p, given) == pytest.approx(
                fluid.reader("rho", ("p", "T"))(p, T), rel=1e-8)
    assert searches


@pytest.mark.parametrize("name", ["water", "air", "R-32"])
def test_a_flash_from_p_and_rho_is_right_or_refused(name):
    """This flash of the library can be far off without a word, for water by 41 % of T at p = p_crit."""
    fluid = open_fluid(FluidDefinition(name, model="Helmholtz"))
    answered = 0
    for reduced_p in (0.05, 0.5, 0.9, 1.0001, 1.5, 3.0):
        for reduced_T in (0.75, 0.9, 1.05, 1.2):
            p, T = reduced_p * fluid.p_crit, reduced_T * fluid.T_crit
            rho = fluid.reader("rho", ("p", "T"))(p, T)
            try:
                found = fluid.reader("T", ("p", "rho"))(p, rho)
            except FluidRangeError:
                continue
            answered += 1
            # A dense liquid can have one density at two temperatures: what must hold is p(T, rho).
            assert fluid.reader("p", ("T", "rho"))(found, rho) == pytest.approx(p, abs=2e-3 * fluid.p_crit)
    assert answered > 20


def test_if97_knows_its_two_pressure_limits():
    water = open_fluid(FluidDefinition("water", model="IF97"))
    assert "500 bar" in refused(water, "h", {"p": 60e6, "T": 1200.0}).what
    assert water.reader("h", ("p", "T"))(60e6, 1000.0) > 3e6
    assert "do not fix" in refused(water, "h", {"p": 1e6, "T": water.reader("T", ("p", "x"))(1e6, 0.0)}).what
    hot = water.reader("h", ("p", "T"))(0.5e6, 1500.0)
    assert water.reader("T", ("p", "h"))(0.5e6, hot) == pytest.approx(1500.0, abs=1e-5)


@pytest.mark.parametrize("parts, words, hint", [
    ({"name": "watr"}, "unknown fluid 'watr'", "did you mean 'water'?"),
    ({"name": "R-1234zf"}, "unknown fluid", "did you mean"),
    ({"name": "R-290", "model": "helmholz"}, "unknown model", "did you mean 'Helmholtz'?"),
    ({"name": "R-290", "reference": "iir"}, "unknown reference state", "did you mean 'IIR'?"),
    ({"name": "R-290", "model": "IF97"}, "water only", None),
    ({"name": "R-290", "model": "mixture"}, "not a blend", None),
    ({"name": "R-454C", "model": "Helmholtz"}, "no equation of state of its own", None),
    ({}, "needs a name", None), ({"name": "glue", "mass_fraction": 0.2}, "no solution", None)])
def test_wrong_definitions(parts, words, hint):
    with pytest.raises(SpecError) as caught:
        open_fluid(FluidDefinition(**parts))
    assert words in caught.value.faults[0].what
    if hint:
        assert caught.value.faults[0].hint.startswith(hint)
