"""Water beside an independent implementation: the package iapws (IAPWS95 and IAPWS97)."""
from __future__ import annotations

import pytest

from calcpack.fluids import FluidDefinition, open_fluid

iapws = pytest.importorskip("iapws")
STATES = [(300.0, 1e5), (450.0, 5e6), (600.0, 1e6), (823.15, 15e6), (700.0, 30e6)]


@pytest.mark.parametrize("T, p", STATES)
@pytest.mark.parametrize("model, other", [("IF97", "IAPWS97"), ("", "IAPWS95")])
def test_water_agrees_with_an_independent_implementation(model, other, T, p):
    water = open_fluid(FluidDefinition("water", model=model))
    second = getattr(iapws, other)(T=T, P=p / 1e6)
    for output, expected in (("h", second.h * 1e3), ("s", second.s * 1e3), ("v", second.v), ("cp", second.cp * 1e3)):
        assert water.reader(output, ("p", "T"))(p, T) == pytest.approx(expected, rel=2e-6), output


def test_the_two_formulations_of_water_agree_within_their_known_difference():
    industrial = open_fluid(FluidDefinition("water", model="IF97"))
    scientific = open_fluid(FluidDefinition("water"))
    for T, p in STATES:
        h_1, h_2 = (each.reader("h", ("p", "T"))(p, T) for each in (industrial, scientific))
        assert h_1 == pytest.approx(h_2, abs=600.0)     # the largest difference is known as 510 J/kg
        assert h_1 != h_2                               # two equations, not one under two names


def test_saturated_steam_of_if97_has_the_properties_of_the_vapour():
    water = open_fluid(FluidDefinition("water", model="IF97"))
    second = iapws.IAPWS97(P=1.0, x=1)
    assert water.reader("cp", ("p", "x"))(1e6, 1.0) == pytest.approx(second.Vapor.cp * 1e3, rel=1e-6)
    assert water.reader("a", ("x", "p"))(1.0, 1e6) == pytest.approx(second.Vapor.w, rel=1e-6)
