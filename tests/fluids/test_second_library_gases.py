"""Ideal gases beside an independent library: the package cantera with the polynomials that come with it.

Calcpack takes the ideal-gas part of each component's equation of state, cantera the seven-coefficient NASA
polynomials of its files gri30.yaml, air.yaml and nasa_gas.yaml. Both rest on measured spectra, each by a fit of its
own, and what differs is the fit: the polynomials, two of them joined at 1000 K, run in waves about the tables they
stand for, and each file has its own. Differences seen here from 300 K to 1500 K, in parts of a thousand:

- cp of nitrogen, oxygen and carbon dioxide up to 3.9; of water vapour up to 5.2, at 1500 K, above the 1273 K to which
  IAPWS-95 is meant to be used (from memory); of mixtures up to 2.2, as the waves of the components do not fall
  together;
- h, in which the waves of cp are summed, up to 1.9; s the same, or near its zero 3 thousandths of R.

The tolerances stand just above, so that a wrong component, share, zero or unit is seen.
"""
from __future__ import annotations

import os
from collections.abc import Callable
from typing import Any

import pytest

from calcpack.fluids import FluidDefinition, open_fluid

if "CI" in os.environ:
    # There it must be installed: a missing second library is a failure, not a skip.
    import cantera
else:
    cantera = pytest.importorskip("cantera")

T_ZERO, P_ZERO = 298.15, 101325.0
PRESSURE = 3e5
TEMPERATURES = (300.0, 350.0, 400.0, 500.0, 600.0, 800.0, 1000.0, 1200.0, 1400.0, 1500.0)
FLOOR = 3e-3        # of R: s passes through zero, and a wave of 2 in a thousand of cp = 3.5 R makes this of s by 500 K

DRY = {"cp": 4e-3, "h": 2e-3, "s": 2e-3}
WET = {"cp": 5.5e-3, "h": 2e-3, "s": 2e-3}
MIXED = {"cp": 2.5e-3, "h": 2e-3, "s": 2e-3}
AIR = (("N2", 0.7812), ("O2", 0.2096), ("Ar", 0.0092))
# Natural gas burned with a fifth more air than it needs, and an exhaust that still holds half of the air's oxygen.
PRODUCTS = (("N2", 0.7265), ("CO2", 0.0806), ("H2O", 0.1613), ("O2", 0.0316))
LEAN = (("N2", 0.755), ("CO2", 0.045), ("H2O", 0.090), ("O2", 0.110))
FILES = ("gri30.yaml", "nasa_gas.yaml")


def second(file: str, composition: tuple[tuple[str, float], ...]) -> Callable[[float, float], dict[str, float]]:
    """h and s above 25 °C and 101.325 kPa, cp, and M of a composition by mole, from cantera [SI, by mass]."""
    names = [name for name, _ in composition]
    if file == "nasa_gas.yaml":
        # This file lists species without a phase.
        gas = cantera.Solution(thermo="ideal-gas", species=[
            one for one in cantera.Species.list_from_file(file) if one.name in names])
    else:
        gas = cantera.Solution(file)
    spelled = {name.upper(): name for name in gas.species_names}
    shares = {spelled[name.upper()]: share for name, share in composition}

    def at(T: float, p: float) -> tuple[float, float, float]:
        gas.TPX = T, p, shares
        return gas.enthalpy_mass, gas.entropy_mass, gas.cp_mass
    h_zero, s_zero, _ = at(T_ZERO, P_ZERO)

    def found(T: float, p: float) -> dict[str, float]:
        h, s, cp = at(T, p)
        return {"h": h - h_zero, "s": s - s_zero, "cp": cp, "M": gas.mean_molecular_weight / 1e3}
    return found


def require_same(fluid: Any, other: Callable[[float, float], dict[str, float]], allowed: dict[str, float]) -> None:
    """M, and at each temperature h, s and cp, within what is allowed."""
    R = fluid.reader("R", ())()
    # Atomic weights are older in the equations than in cantera, by 3e-5 at most, and air's composition is written to
    # four digits above: 2.3e-4.
    assert fluid.reader("M", ())() == pytest.approx(other(T_ZERO, P_ZERO)["M"], rel=3e-4)
    for T in TEMPERATURES:
        expected = other(T, PRESSURE)
        for name, rel in allowed.items():
            found = fluid.reader(name, ("p", "T"))(PRESSURE, T)
            least = FLOOR * R if name == "s" else 0.0
            assert found == pytest.approx(expected[name], rel=rel, abs=least), (name, T, found / expected[name] - 1)


def gas(composition: tuple[tuple[str, float], ...]) -> Any:
    return open_fluid(FluidDefinition("gas", composition=composition))


@pytest.mark.parametrize("file", FILES)
@pytest.mark.parametrize("name, allowed", [("N2", DRY), ("O2", DRY), ("CO2", DRY), ("H2O", WET)])
def test_each_component(file, name, allowed):
    require_same(open_fluid(FluidDefinition(name, model="ideal gas")), second(file, ((name, 1.0),)), allowed)


@pytest.mark.parametrize("file", FILES)
@pytest.mark.parametrize("composition", [PRODUCTS, LEAN], ids=["products", "lean"])
def test_combustion_products(file, composition):
    require_same(gas(composition), second(file, composition), MIXED)


def test_air_as_its_components_and_as_one_gas():
    other = second("air.yaml", AIR)
    require_same(gas(AIR), other, MIXED)
    require_same(open_fluid(FluidDefinition("air", model="ideal gas")), other, MIXED)


@pytest.mark.parametrize("wrong", [
    (("N2", 0.7065), ("CO2", 0.0806), ("H2O", 0.1813), ("O2", 0.0316)),     # 2 % of water for nitrogen
    (("N2", 0.7265), ("CO2", 0.0906), ("H2O", 0.1613), ("O2", 0.0216))])    # 1 % of carbon dioxide for oxygen
def test_a_wrong_composition_is_seen(wrong):
    with pytest.raises(AssertionError):
        require_same(gas(wrong), second("gri30.yaml", PRODUCTS), MIXED)


def test_a_heat_capacity_that_does_not_rise_is_seen():
    other = second("gri30.yaml", PRODUCTS)
    cold = gas(PRODUCTS).reader("cp", ("p", "T"))(PRESSURE, 300.0)
    assert cold == pytest.approx(other(300.0, PRESSURE)["cp"], rel=MIXED["cp"])
    assert cold != pytest.approx(other(1500.0, PRESSURE)["cp"], rel=0.1)
