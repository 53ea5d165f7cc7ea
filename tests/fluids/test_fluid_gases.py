"""Ideal gases, brines and streams of constant heat capacity."""
from __future__ import annotations

import math

import pytest

from calcpack.errors import FluidRangeError, FormulaError, SpecError
from calcpack.fluids import FluidDefinition, open_fluid

FLUE_GAS = (("N2", 0.72), ("CO2", 0.10), ("H2O", 0.10), ("O2", 0.08))


@pytest.fixture
def flue():
    return open_fluid(FluidDefinition("flue gas", composition=FLUE_GAS))


def brine(name: str, fraction: float):
    return open_fluid(FluidDefinition(name, mass_fraction=fraction))


def test_mixture_enthalpy_is_the_mole_weighted_sum_of_its_components(flue):
    total, M = 0.0, flue.reader("M", ())()
    for name, share in FLUE_GAS:
        pure = open_fluid(FluidDefinition(name, model="ideal gas"))
        rise = pure.reader("h", ("T",))(1400.0) - pure.reader("h", ("T",))(400.0)
        total += share * rise * pure.reader("M", ())()
    assert flue.reader("h", ("T",))(1400.0) - flue.reader("h", ("T",))(400.0) == pytest.approx(total / M, rel=1e-12)


def test_cp_is_the_slope_of_h_and_s_follows_from_it(flue):
    h, s, cp = (flue.reader(each, ("p", "T")) for each in ("h", "s", "cp"))
    slope = (h(1e5, 900.01) - h(1e5, 899.99)) / 0.02
    assert cp(1e5, 900.0) == pytest.approx(slope, rel=1e-7)
    assert 900.0 * (s(1e5, 900.01) - s(1e5, 899.99)) / 0.02 == pytest.approx(slope, rel=1e-7)


def test_entropy_falls_by_R_ln_p_and_h_does_not_see_p(flue):
    s, h, R = flue.reader("s", ("p", "T")), flue.reader("h", ("p", "T")), flue.reader("R", ())()
    assert s(4e5, 700.0) - s(1e5, 700.0) == pytest.approx(-R * math.log(4.0), rel=1e-12)
    assert h(4e5, 700.0) == h(1e5, 700.0) == flue.reader("h", ("T",))(700.0)


def test_inversions(flue):
    for T in (300.0, 700.0, 1900.0):
        h, s = (flue.reader(each, ("p", "T"))(3e5, T) for each in "hs")
        assert flue.reader("T", ("h",))(h) == pytest.approx(T, rel=1e-10)
        assert flue.reader("T", ("p", "s"))(3e5, s) == pytest.approx(T, rel=1e-10)
        assert flue.reader("p", ("h", "s"))(h, s) == pytest.approx(3e5, rel=1e-9)
        rho = flue.reader("rho", ("T", "p"))(T, 3e5)
        assert flue.reader("p", ("rho", "T"))(rho, T) == pytest.approx(3e5, rel=1e-12)


def test_reference_and_mayer_relation(flue):
    assert flue.reader("h", ("T",))(298.15) == 0.0
    assert flue.reader("s", ("p", "T"))(101325.0, 298.15) == pytest.approx(0.0, abs=1e-12)
    assert (flue.reader("cp", ("T",))(800.0) - flue.reader("cv", ("T",))(800.0)
            == pytest.approx(flue.reader("R", ())(), rel=1e-12))


def test_ideal_air_is_the_thin_limit_of_real_air():
    # 1e-5: the equation's own gas constant differs from the exact one by 6e-6.
    ideal, real = open_fluid(FluidDefinition("air")), open_fluid(FluidDefinition("air", model="Helmholtz"))
    for output in ("cp", "gamma", "a"):
        assert ideal.reader(output, ("p", "T"))(10.0, 500.0) == pytest.approx(
            real.reader(output, ("p", "T"))(10.0, 500.0), rel=1e-5)
    rise = [each.reader("h", ("p", "T"))(10.0, 900.0) - each.reader("h", ("p", "T"))(10.0, 300.0)
            for each in (ideal, real)]
    assert rise[0] == pytest.approx(rise[1], rel=1e-5)


def test_mass_and_mole_basis_describe_one_gas(flue):
    M = {name: open_fluid(FluidDefinition(name, model="ideal gas")).reader("M", ())() for name, _ in FLUE_GAS}
    total = sum(share * M[name] for name, share in FLUE_GAS)
    by_mass = tuple((name, share * M[name] / total) for name, share in FLUE_GAS)
    same = open_fluid(FluidDefinition("flue gas", composition=by_mass, basis="mass"))
    assert same.reader("cp", ("T",))(1000.0) == pytest.approx(flue.reader("cp", ("T",))(1000.0), rel=1e-12)


@pytest.mark.parametrize("composition, words", [
    ((("N2", 0.5), ("O2", 0.4)), "add up to 1"), ((("N2", 0.5), ("nitrogen", 0.5)), "given twice"),
    ((("N2", 1.2), ("O2", -0.2)), "must have a share"), ((("N2", 0.5), ("Oxygn", 0.5)), "unknown component")])
def test_wrong_compositions(composition, words):
    with pytest.raises(SpecError, match=words):
        open_fluid(FluidDefinition("gas", composition=composition))


def test_a_gas_outside_its_range_or_without_pressure_is_refused(flue):
    with pytest.raises(FluidRangeError, match=r"above the limit of 2000\.00 K"):
        flue.reader("h", ("T",))(2100.0)
    with pytest.raises(FluidRangeError, match="inside its range"):
        flue.reader("T", ("h",))(9e6)
    with pytest.raises(FluidRangeError, match="pressure of flue gas was not given"):
        flue.reader("s", ("T",))(500.0)
    with pytest.raises(FormulaError, match="has no property 'mu'"):
        flue.reader("mu", ("T",))


# Melinder, Properties of Secondary Working Fluids for Indirect Systems, IIR 2010, ethylene glycol 30 % by mass:
# freezing near -14.5 degC, density at 20 degC near 1038 kg/m3, heat capacity near 3.7 kJ/(kg K). From memory.
def test_ethylene_glycol_beside_its_table():
    glycol = brine("ethylene glycol", 0.30)
    assert glycol.reader("T_freeze", ())() - 273.15 == pytest.approx(-14.5, abs=0.5)
    assert glycol.reader("rho", ("T",))(293.15) == pytest.approx(1038.0, rel=3e-3)
    assert glycol.reader("cp", ("T",))(293.15) == pytest.approx(3700.0, rel=2e-2)


@pytest.mark.parametrize("name, fraction", [("ethylene glycol", 0.35), ("propylene glycol", 0.4), ("ethanol", 0.3),
                                            ("calcium chloride", 0.2), ("sodium chloride", 0.2),
                                            ("potassium formate", 0.3), ("methanol-water", 0.25)])
def test_brines_round_trip_and_freeze(name, fraction):
    liquid = brine(name, fraction)
    for given in ("h", "s"):
        value = liquid.reader(given, ("p", "T"))(3e5, 285.0)
        assert liquid.reader("T", ("p", given))(3e5, value) == pytest.approx(285.0, abs=1e-6)
    slope = (liquid.reader("h", ("T",))(285.5) - liquid.reader("h", ("T",))(284.5))
    assert liquid.reader("cp", ("T",))(285.0) == pytest.approx(slope, rel=1e-3)
    freezing = liquid.reader("T_freeze", ())()
    assert freezing < 273.15
    with pytest.raises(FluidRangeError, match="below the freezing temperature"):
        liquid.reader("h", ("T",))(freezing - 1.0)


def test_brines_need_a_fraction_inside_their_correlation():
    with pytest.raises(SpecError, match="needs the mass fraction"):
        open_fluid(FluidDefinition("propylene glycol"))
    with pytest.raises(SpecError, match="outside its correlation"):
        brine("ethylene glycol", 0.9)
    with pytest.raises(SpecError, match="by volume"):
        brine("AEG", 0.3)
    with pytest.raises(FormulaError, match="does not fix a state"):
        brine("ethylene glycol", 0.3).reader("p", ("T", "x"))


def test_constant_heat_capacity():
    stream = open_fluid(FluidDefinition("thermal oil", constant_cp=2100.0, density=900.0))
    assert stream.reader("h", ("T",))(373.15) == pytest.approx(210e3)
    assert stream.reader("T", ("p", "h"))(2e5, 210e3) == pytest.approx(373.15)
    assert stream.reader("s", ("p", "T"))(2e5, 2 * 273.15) == pytest.approx(2100.0 * math.log(2.0))
    assert stream.reader("v", ("T",))(300.0) == pytest.approx(1 / 900.0)
    with pytest.raises(SpecError, match="must be above zero"):
        open_fluid(FluidDefinition("thermal oil", constant_cp=-1.0))
    with pytest.raises(FluidRangeError, match="below the limit"):
        stream.reader("h", ("T",))(-20.0)
    with pytest.raises(FormulaError, match="has no property 'rho'"):
        open_fluid(FluidDefinition("thermal oil", constant_cp=2100.0)).reader("rho", ("T",))
