"""The formulas of the cautions against published worked examples, and the tables at their corners."""
from __future__ import annotations

import pytest

from calcpack.checks.cautions import charge, equipment, flow, flue_gas, release, relief, room
from calcpack.checks.cautions.worked import lines, plain, worked
from calcpack.fluids import FluidDefinition, open_fluid
from calcpack.units import unit


def test_a_working_shows_symbols_numbers_result_and_units() -> None:
    found = worked("m_max", "2.5 * LFL^1.25 * h_0 * sqrt(A)", "kg", LFL=(0.307, "kg/m³"), h_0=(2.2, "m"),
                   A=(75.0, "m²"))
    assert found.line == ("m_max = 2.5 * LFL^1.25 * h_0 * sqrt(A) = 2.5 * 0.307^1.25 * 2.2 * sqrt(75) = 10.88 kg, "
                          "with LFL in kg/m³, h_0 in m, A in m²")
    assert found.shown == "10.88 kg" and lines(found, None, found).count("\n") == 1


def test_a_working_comes_from_its_operands_as_printed() -> None:
    found = worked("y", "a * b", "", a=1.23456789, b=2.0)
    assert found.line == "y = a * b = 1.23457 * 2 = 2.469" and found.value == 1.23457 * 2
    assert [plain(number) for number in (75.0, 0.0, 1e-7, 240000.0, -3.50)] == [
        "75", "0", "1.00000e-7", "240000", "-3.5"]


@pytest.mark.parametrize(("LFL", "height", "area", "kilograms", "within"), [
    # R-32 in 75 m² from the ceiling: 10.85 kg printed with the rule, 10.88 kg recomputed (RD 552/2019 IF-04 App. 3).
    (0.307, 2.2, 75.0, 10.88, 0.005),
    # R-290 in 30 m² at a window: 0.230 kg (same).
    (0.038, 1.0, 30.0, 0.230, 0.0005)])
def test_charge_of_a_room_for_comfort(LFL: float, height: float, area: float, kilograms: float, within: float) -> None:
    assert charge.comfort_charge(LFL, height, area).value == pytest.approx(kilograms, abs=within)


@pytest.mark.parametrize(("height", "area"), [(0.6, 142.1), (1.0, 51.2), (1.8, 15.8), (2.2, 10.6)])
def test_area_of_a_room_for_comfort(height: float, area: float) -> None:
    # 300 g of R-290 (recomputed from RD 552/2019 IF-04 App. 3).
    assert charge.comfort_area(0.038, height, 0.300).value == pytest.approx(area, abs=0.06)


def test_area_and_charge_of_a_room_are_each_others_inverse() -> None:
    assert charge.comfort_area(0.307, 1.8, charge.comfort_charge(0.307, 1.8, 40.0).value).value == pytest.approx(
        40.0, rel=1e-5)


def test_caps_by_flammability() -> None:
    # m1 is 0.152 kg; the factors come of 150 g, 1 kg and 5 kg of propane (RD 552/2019 IF-04 App. 2).
    first, second, third = charge.caps(0.038, two_L=False)
    assert first.value == pytest.approx(0.152) and first.shown == "0.1520 kg"
    assert (second.value, third.value) == (pytest.approx(1.0, rel=0.02), pytest.approx(5.0, rel=0.02))
    # Class 2L counts 1.5 times: 6, 39 and 195 times the limit (same).
    assert [one.value for one in charge.caps(1.0, two_L=True)] == [6.0, 39.0, 195.0]


def test_measures_by_concentration() -> None:
    # R-134a, 90 kg in 300 m³: 0.30 above QLMV 0.28 and below QLAV 0.58, one measure (RD 552/2019 IF-04 App. 4).
    concentration = worked("c", "m / V", "kg/m³", m=(90.0, "kg"), V=(300.0, "m³")).value
    assert concentration == pytest.approx(0.30)
    assert [charge.measures(one, 0.28, 0.58) for one in (0.28, concentration, 0.58, 0.59)] == [0, 1, 1, 2]


@pytest.mark.parametrize(("molar_mass", "LFL", "carbon_dioxide", "QLAV"), [
    # RD 552/2019 IF-04 App. 4 for R-134a; the others from EN 378-1:2016 Table C.3, from memory.
    (102.032, None, False, 0.58), (72.585, None, False, 0.42), (44.010, None, True, 0.18), (52.024, 0.307, False, 0.15),
    (114.042, 0.289, False, 0.14)])
def test_instant_hazard(molar_mass: float, LFL: float | None, carbon_dioxide: bool, QLAV: float) -> None:
    assert charge.instant_hazard(molar_mass, LFL, carbon_dioxide)[0].value == pytest.approx(QLAV, abs=0.006)


def test_charge_of_a_bedroom_by_the_practical_limit() -> None:
    # R-410A, 16 m² by 2.7 m, practical limit 0.44: 19 kg (RD 552/2019 IF-04 App. 2).
    assert worked("m", "c * V", "kg", c=0.44, V=16 * 2.7).value == pytest.approx(19.0, abs=0.05)


def test_a_fifth_of_the_flammability_limit_of_ammonia() -> None:
    # 0.2 · 0.116 = 0.0232 kg/m³ (RD 552/2019 IF-04 App. 2).
    assert worked("c_20", "0.2 * LFL", "kg/m³", LFL=0.116).value == pytest.approx(0.0232)


@pytest.mark.parametrize(("kilograms", "litres"), [(10.0, 65.0), (100.0, 302.0), (1000.0, 1400.0)])
def test_emergency_ventilation(kilograms: float, litres: float) -> None:
    # RD 552/2019 IF-07 5.2: V = 14·m^(2/3) L/s.
    assert room.emergency_ventilation(kilograms).value == pytest.approx(litres, abs=0.5)


def test_emergency_ventilation_keeps_between_6_and_15_changes() -> None:
    # RD 552/2019 IF-07 5.2: 300 m³ are 500 L/s at 6 and 1250 L/s at 15 changes an hour.
    assert [room.emergency_ventilation(m, 300.0).value for m in (10.0, 400.0, 1000.0)] == [
        pytest.approx(500.0), pytest.approx(760.0, abs=0.1), pytest.approx(1250.0)]


def test_ventilation_by_the_united_states_formula() -> None:
    # 100·√G cfm with G in lb (ASHRAE 15, from memory): 100 lb give 1000 cfm.
    needed = room.american_ventilation(unit("lb").to_si(100.0)).value
    assert unit("ft³/min").from_si(needed / 1000.0) == pytest.approx(1000.0, rel=0.002)


def test_yearly_leak() -> None:
    # RD 552/2019 IF-02 App. 2: L = 0.4·m^(2/3), so 1000 kg lose 40 kg.
    assert room.annual_leak(1000.0).value == pytest.approx(40.0)


def test_ventilated_enclosure() -> None:
    # RD 552/2019 IF-04 4.3: Q = 15·4·m/ρ, at least 2 m³/h; 1 kg of propane at 1.8 kg/m³.
    assert charge.ventilated_enclosure(1.0, 1.8).value == pytest.approx(33.33, abs=0.01)
    assert charge.ventilated_enclosure(0.01, 1.8).value == 2.0


def test_oxygen_left_by_the_limit_of_oxygen_deprivation() -> None:
    # 140 000 ppm leave 18.0 % (RD 552/2019 IF-01 3.7.11): 20.95 · 0.86.
    assert release.oxygen_left(0.14).value == pytest.approx(0.180, abs=0.0005)
    assert release.oxygen_left(1.7).value == 0.0


def test_density_to_share_by_volume() -> None:
    # Ammonia: 320 ppm are 0.00022 kg/m³ (EN 378-1 Annex E, second-hand).
    assert release.share_of(0.00022, 17.031).value == pytest.approx(320e-6, rel=0.02)


def test_water_hammer() -> None:
    # Joukowsky (from memory), water at 20 °C and 5 bar: 998.4 kg/m³, 1483 m/s, 14.8 bar for 1 m/s.
    assert flow.hammer(998.4, 1483.0, 1.0).value == pytest.approx(14.8, abs=0.01)
    water = open_fluid(FluidDefinition("water"))
    assert water.reader("rho", ("p", "T"))(5e5, 293.15) == pytest.approx(998.4, abs=0.05)
    assert water.reader("a", ("p", "T"))(5e5, 293.15) == pytest.approx(1483.0, abs=0.5)


def test_head_available_at_a_pump() -> None:
    # Liquid on its bubble line has the static head less the loss; 1 bar above it of water is 10.2 m more.
    assert flow.available_head(1.0, 1.0, 998.0, 2.0, 0.3).value == pytest.approx(1.7)
    assert flow.available_head(2.0, 1.0, 1000.0, 2.0, 0.3).value == pytest.approx(11.90, abs=0.01)


def test_relief_flow_of_a_vessel_and_of_a_compressor() -> None:
    # EN 13136 6.2 (from memory): 10 kW/m² on 2 m² at 180 kJ/kg; 6.3: 60·V·n·ρ·η.
    assert relief.vessel_flow(2.0, 180.0).value == pytest.approx(400.0)
    assert relief.compressor_flow(0.001, 1500.0, 20.0, 0.8).value == pytest.approx(1440.0)


def test_acid_dew_point_by_the_other_equation() -> None:
    # Okkes, Hydrocarbon Processing, July 1987: 109.0 °C for the first worked example.
    mmHg = unit("mmHg")
    assert flue_gas.acid_dew_point_okkes(mmHg.to_si(38.1104), mmHg.to_si(9.7421e-4)) - 273.15 == pytest.approx(
        109.0, abs=0.05)


PRACTICE = equipment.PRACTICE_ONLY
# French decree 99-1046 Art. 3 for what has a category (from the text); PED Annex II, tables 1, 2, 5, 6, 7 (from
# memory; the corners of DN 100 agree with the French order of 15 March 2000).
VESSELS = [
    (1, 20.0, 1.25, PRACTICE), (1, 20.0, 1.26, "I"), (1, 10.0, 5.0, "I"), (1, 10.0, 5.1, "II"), (1, 10.0, 20.0, "II"),
    (1, 10.0, 20.1, "III"), (1, 10.0, 100.0, "III"), (1, 10.0, 100.1, "IV"), (1, 200.0, 1.0, PRACTICE),
    (1, 201.0, 1.0, "III"), (1, 1000.0, 1.0, "III"), (1, 1001.0, 1.0, "IV"),
    (2, 10.0, 5.0, PRACTICE), (2, 10.0, 5.1, "I"), (2, 10.0, 20.0, "I"), (2, 10.0, 20.1, "II"), (2, 10.0, 100.0, "II"),
    (2, 10.0, 100.1, "III"), (2, 10.0, 300.0, "III"), (2, 10.0, 300.1, "IV"), (2, 4.0, 5000.0, "III"),
    (2, 4.1, 5000.0, "IV")]


@pytest.mark.parametrize(("group", "PS", "V", "category"), VESSELS)
def test_category_of_a_vessel(group: int, PS: float, V: float, category: str) -> None:
    assert equipment.vessel_category(PS, V, group) == category


@pytest.mark.parametrize(("group", "PS", "DN", "category"), [
    (1, 40.0, 25.0, PRACTICE), (1, 10.0, 26.0, "I"), (1, 10.0, 100.0, "I"), (1, 10.1, 100.0, "II"),
    (1, 10.0, 101.0, "II"), (1, 10.0, 350.0, "II"), (1, 10.1, 350.0, "III"), (1, 1.0, 351.0, "III"),
    (2, 40.0, 32.0, PRACTICE), (2, 10.0, 100.0, PRACTICE), (2, 10.1, 100.0, "I"), (2, 35.0, 100.0, "I"),
    (2, 35.0, 101.0, "II"), (2, 40.0, 100.0, "I"), (2, 20.0, 250.0, "II"), (2, 20.0, 251.0, "III")])
def test_category_of_piping(group: int, PS: float, DN: float, category: str) -> None:
    assert equipment.pipe_category(PS, DN, group) == category


@pytest.mark.parametrize(("PS", "V", "category"), [
    (10.0, 2.0, PRACTICE), (10.0, 5.0, "I"), (10.0, 5.1, "II"), (10.0, 20.0, "II"), (10.0, 20.1, "III"),
    (10.0, 300.0, "III"), (10.0, 300.1, "IV"), (33.0, 50.0, "IV"), (2.0, 1001.0, "IV")])
def test_category_of_a_steam_generator(PS: float, V: float, category: str) -> None:
    assert equipment.steam_category(PS, V) == category


@pytest.mark.parametrize(("group", "PS", "V", "expected"), [
    (1, 10.0, 20.0, False), (1, 10.0, 20.1, True), (1, 501.0, 0.1, True), (2, 10.0, 1000.1, False),
    (2, 10.0, 5000.0, False), (2, 10.1, 1000.0, True), (2, 1001.0, 0.1, True)])
def test_vessels_for_liquid(group: int, PS: float, V: float, expected: bool) -> None:
    # French decree 99-1046 Art. 3: group 2 needs PS above 10 bar and PS·V above 10 000 bar·L (from the text).
    assert equipment.vessel_in_scope(PS, V, group, gas=False) is expected


@pytest.mark.parametrize(("group", "PS", "DN", "expected"), [
    (1, 80.0, 25.0, False), (1, 80.0, 26.0, True), (1, 40.0, 50.0, False), (2, 10.0, 1000.0, False),
    (2, 26.0, 201.0, True), (2, 26.0, 200.0, False), (2, 20.0, 250.0, False)])
def test_piping_for_liquid(group: int, PS: float, DN: float, expected: bool) -> None:
    assert equipment.pipe_in_scope(PS, DN, group, gas=False) is expected


@pytest.mark.parametrize(("group", "steam", "PS", "V", "expected"), [
    (1, False, 10.0, 5.0, False), (1, False, 10.0, 5.1, True), (2, False, 10.0, 20.0, False),
    (2, False, 10.0, 20.1, True), (2, False, 4.0, 500.0, False), (2, True, 4.0, 51.0, True)])
def test_inspection_of_vessels(group: int, steam: bool, PS: float, V: float, expected: bool) -> None:
    # French order of 15 March 2000 (from the text).
    assert equipment.inspected_vessel(PS, V, group, steam) is expected
    assert equipment.inspected_pipe(10.0, 100.0, 1) is False and equipment.inspected_pipe(10.1, 100.0, 1) is True
    assert equipment.inspected_pipe(35.0, 100.0, 2) is False and equipment.inspected_pipe(35.0, 101.0, 2) is True
