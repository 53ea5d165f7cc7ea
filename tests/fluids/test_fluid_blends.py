"""Blends by the mixture model: past the holes of the library's flashes, and beside the pseudo-pure equation."""
from __future__ import annotations

import pytest

from calcpack.errors import FluidRangeError, FormulaError
from calcpack.fluids import FluidDefinition, open_fluid

BAR = 1e5


def blend(name: str, **parts):
    return open_fluid(FluidDefinition(name, model="mixture", **parts))


# The library's flash from p and quality fails here (CoolProp 8.0.0): bubble and dew each, bar.
HOLES = [("R-410A", 24.75), ("R-410A", 25.0), ("R-410A", 26.25), ("R-454C", 32.5), ("R-455A", 30.0)]


@pytest.mark.parametrize("name, p_bar", HOLES)
@pytest.mark.parametrize("x", [0.0, 1.0])
def test_saturation_is_smooth_across_the_holes(name, p_bar, x):
    T = blend(name).reader("T", ("p", "x"))
    at = [T(p_bar * BAR * factor, x) for factor in (0.97, 1.0, 1.03)]
    # Between its neighbours, and within 0.03 K of their line (ln p against T is nearly straight).
    assert at[0] < at[1] < at[2]
    assert at[1] == pytest.approx(0.5 * (at[0] + at[2]), abs=0.05)


@pytest.mark.parametrize("p_bar", [24.75, 25.0, 26.25])
def test_r410a_blend_agrees_with_the_pseudo_pure_equation(p_bar):
    pseudo = open_fluid(FluidDefinition("R-410A"))
    for x in (0.0, 1.0):
        found = blend("R-410A").reader("T", ("p", "x"))(p_bar * BAR, x)
        assert found == pytest.approx(pseudo.reader("T", ("p", "x"))(p_bar * BAR, x), abs=0.01)
    lift = [each.reader("h", ("p", "x"))(p_bar * BAR, 1.0) - each.reader("h", ("p", "x"))(p_bar * BAR, 0.0)
            for each in (pseudo, blend("R-410A"))]
    assert lift[1] == pytest.approx(lift[0], rel=0.01)


@pytest.mark.parametrize("name", ["R-410A", "R-454C", "R-513A", "R-455A"])
@pytest.mark.parametrize("p_bar", [4.0, 20.0, 25.0, 80.0])
def test_round_trips_from_p_and_T(name, p_bar):
    fluid, p = blend(name), p_bar * BAR
    for T in (265.0, 330.0, 400.0):
        h, s = (fluid.reader(each, ("p", "T"))(p, T) for each in "hs")
        assert fluid.reader("T", ("p", "h"))(p, h) == pytest.approx(T, abs=1e-6)
        assert fluid.reader("T", ("p", "s"))(p, s) == pytest.approx(T, abs=1e-6)


@pytest.mark.parametrize("name, p_bar", [("R-410A", 12.0), ("R-410A", 25.0), ("R-454C", 15.0), ("R-513A", 15.0)])
def test_round_trips_inside_the_dome(name, p_bar):
    fluid, p = blend(name), p_bar * BAR
    h_bubble, h_dew = (fluid.reader("h", ("p", "x"))(p, x) for x in (0.0, 1.0))
    s_bubble, s_dew = (fluid.reader("s", ("p", "x"))(p, x) for x in (0.0, 1.0))
    for share in (0.2, 0.7):
        h = h_bubble + share * (h_dew - h_bubble)
        T, x, s = (fluid.reader(each, ("p", "h"))(p, h) for each in ("T", "x", "s"))
        assert fluid.reader("x_eq", ("p", "h"))(p, h) == pytest.approx(share, abs=1e-9)
        assert fluid.reader("h", ("p", "x"))(p, x) == pytest.approx(h, abs=0.5)
        assert fluid.reader("h", ("p", "s"))(p, s) == pytest.approx(h, abs=0.5)
        assert fluid.reader("p", ("T", "x"))(T, x) == pytest.approx(p, rel=1e-5)
        assert s_bubble < s < s_dew


def test_the_vapour_fraction_is_by_mass():
    """R-454C: liquid and vapour of unlike composition, so mass and mole fractions differ; volumes add by mass."""
    fluid, p = blend("R-454C"), 15 * BAR
    h = fluid.reader("h", ("p", "x"))(p, 0.5)
    assert fluid.reader("x", ("p", "h"))(p, h) == pytest.approx(0.5, abs=1e-9)
    state = fluid._state
    by_mole = state.Q()
    assert abs(by_mole - 0.5) > 1e-3
    masses = [sum(share * M for share, M in zip(shares, (0.052024, 0.1140416), strict=True))
              for shares in (state.mole_fractions_liquid(), state.mole_fractions_vapor())]
    by_mass = by_mole * masses[1] / (by_mole * masses[1] + (1 - by_mole) * masses[0])
    assert by_mass == pytest.approx(0.5, abs=1e-4)


# Glide at 15 bar computed with CoolProp 8.0.0 itself, kept as a guard against a changed mixture table.
@pytest.mark.parametrize("name, glide", [("R-410A", 0.12), ("R-407C", 5.13), ("R-454C", 7.50), ("R-455A", 11.21)])
def test_glide_at_15_bar(name, glide):
    T = blend(name).reader("T", ("p", "x"))
    assert T(15 * BAR, 1.0) - T(15 * BAR, 0.0) == pytest.approx(glide, abs=0.01)


def test_p_and_T_between_bubble_and_dew_is_a_state():
    fluid = blend("R-454C")
    bubble, dew = (fluid.reader("T", ("p", "x"))(15 * BAR, x) for x in (0.0, 1.0))
    T = 0.5 * (bubble + dew)
    assert 0.3 < fluid.reader("x", ("p", "T"))(15 * BAR, T) < 0.7


def test_transport_properties_are_not_offered():
    with pytest.raises(FormulaError, match="has no property 'mu'"):
        blend("R-454C").reader("mu", ("p", "T"))


def test_next_to_the_critical_pressure_is_refused():
    fluid = blend("R-454C")
    p_crit = fluid.reader("p_crit", ())()
    with pytest.raises(FluidRangeError, match="within 2 % of the critical pressure"):
        fluid.reader("h", ("p", "T"))(1.01 * p_crit, 400.0)
    with pytest.raises(FluidRangeError, match="above the critical pressure"):
        fluid.reader("T", ("p", "x"))(1.01 * p_crit, 1.0)


def test_the_model_shows_mass_and_mole_fractions_and_the_source_of_the_mixing_rule():
    fluid = blend("R-454C")
    assert "21.5 / 78.5 % by mass (37.51 / 62.49 % by mole)" in fluid.model
    assert "mixing: " in fluid.equation and "doi:" in fluid.equation
    assert open_fluid(FluidDefinition("R-454C")) .model == fluid.model     # the usual choice without a pseudo-pure one
    assert "pseudo-pure" in open_fluid(FluidDefinition("R-407C")).model
