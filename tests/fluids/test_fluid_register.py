"""The register of facts, the citations, and the saturation curves."""
from __future__ import annotations

import re

import pytest

from calcpack.errors import FormulaError, SpecError
from calcpack.fluids import FluidDefinition, designations, fact, facts_for, open_fluid, register, saturation_curve
from calcpack.fluids.literature import citation


@pytest.mark.parametrize("name, designation", [
    ("R-1234ze(E)", "R-1234ze(E)"), ("R1234ze(E)", "R-1234ze(E)"), ("R1234ZEE", "R-1234ze(E)"), ("r290", "R-290"),
    ("propane", "R-290"), ("isobutane", "R-600a"), ("Ammonia", "R-717"), ("water", "R-718"), ("CO2", "R-744"),
    ("carbon dioxide", "R-744"), ("(toluene)", "toluene"), ("pentane", "R-601"), ("DME", "R-E170"),
    ("air", "R-729"), ("R1224YDZ", "R-1224yd(Z)"), ("R1234ze(Z)", "R-1234ze(Z)")])
def test_usual_spellings_find_one_entry(name, designation):
    assert register.lookup(name).designation == designation


def test_no_two_entries_share_a_name():
    owners: dict[str, set[str]] = {}
    for entry in register.entries():
        for name in entry.names:
            owners.setdefault(register.folded(name), set()).add(entry.designation)
    assert {name: who for name, who in owners.items() if len(who) > 1} == {}


def test_unknown_names_point_to_the_nearest():
    with pytest.raises(SpecError) as caught:
        facts_for("R-1234zd(E)")
    assert caught.value.faults[0].hint.startswith("did you mean")


def test_every_fact_has_a_source_and_says_how_far_it_is_confirmed():
    for designation in designations():
        for each in facts_for(designation):
            assert each.source and each.confirmed in ("yes", "no", "derived", "second-hand"), designation
            if each.source == "from memory":
                assert each.confirmed == "no", designation


def test_facts_are_numbers_except_the_safety_class():
    for designation in designations():
        for each in facts_for(designation):
            if each.quantity.startswith("safety class"):
                assert re.fullmatch(r"[AB](1|2L|2|3)", each.value), designation
            else:
                assert each.number >= (-60.0 if each.unit == "degC" else 0.0), designation


# Royal Decree 552/2019 (Spain), IF-04; IEC 60079-20-1:2010.
def test_the_facts_that_cautions_ask_for():
    propane = open_fluid(FluidDefinition("propane"))
    assert fact(propane, "LFL").number == 0.038 and fact(propane, "LFL").unit == "kg/m3"
    assert fact(propane, "autoignition temperature").number == 450.0
    assert fact(propane, "safety class").value == "A3"
    assert fact("propane", "PED fluid group").value == "1"
    assert fact("propane", "practical limit").number == 0.008
    assert fact("R-134a", "ATEL/ODL").number == 0.21
    assert fact("R-134a", "LFL") is None
    assert fact("R-1233zd(E)", "thermal-stability guide temperature").number == 150.0


def test_the_register_describes_the_equations_that_are_opened():
    for entry in register.entries():
        model = "Helmholtz" if entry.library_name == "Air" else ""
        opened = open_fluid(FluidDefinition(entry.designation, model=model))
        assert opened.reader("M", ())() * 1e3 == pytest.approx(entry.molar_mass_g_mol, abs=6e-4), entry.designation
        assert opened.T_min == pytest.approx(entry.T_min_K, abs=0.006), entry.designation
        assert opened.T_max == pytest.approx(entry.T_max_K, abs=0.006), entry.designation
        if not entry.library_name.endswith(".mix"):
            assert opened.T_crit == pytest.approx(entry.T_crit_K, abs=0.006), entry.designation
            assert opened.equation and "no entry" not in opened.equation, entry.designation


def test_a_fluid_of_the_library_opens_without_an_entry():
    krypton = open_fluid(FluidDefinition("Krypton"))
    assert krypton.facts == () and krypton.reader("T_crit", ())() == pytest.approx(209.48, abs=0.01)


def test_a_citation_is_whole():
    text = open_fluid(FluidDefinition("R-134a")).equation
    assert text.startswith("Reiner Tillner-Roth, Hans Dieter Baehr: ")
    assert "J. Phys. Chem. Ref. Data 23 (1994) 657-729" in text and "doi:10.1063/1.555958" in text
    assert "Pruß" in open_fluid(FluidDefinition("water")).equation
    assert citation("Nobody-1900").startswith("Nobody-1900 (key")
    assert "; " in open_fluid(FluidDefinition("MM")).equation     # two sources under one key


def test_no_citation_keeps_its_markup():
    for entry in register.entries():
        if not entry.library_name.endswith(".mix"):
            opened = open_fluid(FluidDefinition(entry.designation))
            assert not re.search(r"[\\{}$]", opened.equation), opened.equation


def test_identity_tells_equations_apart_and_nothing_else():
    def identity(*parts, **named):
        return open_fluid(FluidDefinition(*parts, **named)).identity
    assert identity("water") == identity("R-718") == identity("H2O")
    assert len({identity("water"), identity("water", model="IF97"), identity("water", reference="NBP"),
                identity("R-410A"), identity("R-410A", model="mixture")}) == 5


@pytest.mark.parametrize("name, model", [("R-290", ""), ("water", "IF97"), ("R-410A", ""), ("R-454C", "")])
def test_saturation_curve_is_the_dome(name, model):
    fluid = open_fluid(FluidDefinition(name, model=model))
    curve = saturation_curve(fluid, 30, T_low=283.15)
    assert len(curve.T) >= 25 and curve.T[0] == pytest.approx(283.15, abs=2.0)
    assert list(curve.T) == sorted(curve.T) and list(curve.p) == sorted(curve.p)
    assert all(low < high for low, high in zip(curve.h_liq, curve.h_vap, strict=True))
    # Clapeyron: T (s'' - s') = h'' - h' for a pure fluid.
    if name in ("R-290", "water"):
        for T, h_1, h_2, s_1, s_2 in zip(curve.T, curve.h_liq, curve.h_vap, curve.s_liq, curve.s_vap, strict=True):
            assert T * (s_2 - s_1) == pytest.approx(h_2 - h_1, rel=2e-4)
    gap = [vapour - liquid for liquid, vapour in zip(curve.h_liq, curve.h_vap, strict=True)]
    assert gap == sorted(gap, reverse=True)


def test_a_gas_has_no_saturation_curve():
    with pytest.raises(FormulaError, match="no saturation line"):
        saturation_curve(open_fluid(FluidDefinition("air")))
