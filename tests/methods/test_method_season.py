"""A calculation solved for each row of a season: cells, totals, accounts, and what is said where rows do not fit."""
from __future__ import annotations

import re
from pathlib import Path

import pytest

from calcpack.errors import BrokenLawError, CalcpackError
from calcpack.pipeline import solve_spec
from calcpack.plan.seasons import SEASONS
from calcpack.record.build import build_record
from calcpack.spec import json_schema

HEAD = """\
calcpack: 1
sheet: {number: S-1, title: Season, project: Works, revision: A, status: draft, purpose: Test., scope: All.}
case:
"""

PLAIN = HEAD + """\
  method: none
  series:
    rows: average
    shown: 2 degC
    account: heating
    heat: Q_dot_hp
    power: W_dot_hp
    cycling: water
  inputs:
    Q_dot_rated: {value: 6 kW, title: Rated capacity}
    g: {value: 0.4, title: Share of the reversible figure}
    Q_dot_design: 8 kW
steps:
  - {symbol: COP_hp, title: Coefficient, formula: g * 318.15 K / (318.15 K - T_out)}
  - {symbol: Q_dot_hp, title: Capacity, formula: Q_dot_rated + 0.1 kW/K * (T_out - 263.15 K), unit: kW}
  - {symbol: W_dot_hp, title: Power, formula: Q_dot_hp / COP_hp, unit: kW}
"""

PUMP = HEAD + """\
  method: vapour-compression
  options: {source_stream: none, sink_stream: none, evaporating: temperature, condensing: temperature,
            size_by: sink-duty}
  fluids: {wf: R-290}
  series:
    rows: |
      label, T_out [degC], t_bin [h]
      cold, -7, 300
      mild, 2, 1500
      warm, 12, 900
    shown: mild
    inputs:
      T_e: T_out - 8 K
      Q_dot_sink: 6 kW + 0.12 kW/K * (T_out - 263.15 K)
    account: heating
    heat: Q_dot_sink
    power: W_dot_net
    columns: [COP]
    totals:
      - {symbol: T_2_max, title: Hottest discharge, of: T_2, by: max}
  inputs: {T_c: 45 degC, dT_sh: 5 K, dT_sc: 3 K, eta_is: 0.7, eta_drive: 1, eta_motor: 0.93, f_loss: 0.03,
           Q_dot_design: 8 kW, T_design: -10 degC}
"""


def record_of(text, folder=None):
    path = (folder or Path()) / "season.yaml"
    return solve_spec(path, text=text, name=str(path))


@pytest.fixture(scope="module")
def plain():
    return record_of(PLAIN)


@pytest.fixture(scope="module")
def pump():
    return record_of(PUMP)


def test_what_rows_totals_and_account_add_names_its_ground(plain, pump):
    written = {"COP_hp", "Q_dot_hp", "W_dot_hp"}
    for record in (plain, pump):
        bare = [step["symbol"] for step in record.data["steps"]
                if step["kind"] != "property" and step["symbol"] not in written and not step["reference"]]
        assert bare == []


def value(record, symbol):
    return record.step(symbol)["value"]


def column(record, symbol):
    table = record.step("n_rows")["table"]
    at = [one["symbol"] for one in table["columns"]].index(symbol)
    return [row["cells"][at]["value"] for row in table["rows"]]


def faults(text, folder=None):
    with pytest.raises(CalcpackError) as caught:
        record_of(text, folder)
    return caught.value.faults


def changed(text, *pairs):
    for old, new in pairs:
        assert text.count(old) == 1, old
        text = text.replace(old, new)
    return text


@pytest.mark.parametrize("name, hours, full", [("average", 4910, 2066), ("warmer", 3590, 1336), ("colder", 6446, 2465)])
def test_a_reference_season_closes_against_its_published_equivalent_hours(name, hours, full):
    # Regulation (EU) 811/2013, Annex VII 4(c); the totals of hours are from memory.
    season = SEASONS[name]
    assert sum(season.hours) == hours
    assert round(sum(h * (T - 16) / (season.design - 16) for T, h in season.bins)) == full


def test_the_season_is_the_sum_of_its_bins_by_plain_arithmetic(plain):
    heat = machine = backup = lost = run = 0.0
    for celsius, hours in SEASONS["average"].bins:
        T = celsius + 273.15
        load = 8.0 * (16 - celsius) / 26
        full = 0.4 * 318.15 / (318.15 - T)
        capacity = 6.0 + 0.1 * (celsius + 10)
        share = min(1.0, load / capacity)
        actual = full * share / (0.9 * share + 0.1)
        lack = max(0.0, load - capacity)
        heat, backup, run = heat + load * hours, backup + lack * hours, run + share * hours
        machine += (load - lack) * hours / actual
        lost += (load - lack) * hours * (1 / actual - 1 / full)
    for symbol, expected in (("E_heat", heat), ("E_hp", machine), ("E_backup", backup), ("E_cycling_season", lost)):
        assert value(plain, symbol) / 3.6e6 == pytest.approx(expected, rel=1e-9), symbol
    assert value(plain, "t_run") / 3600 == pytest.approx(run, rel=1e-9)
    assert value(plain, "SCOP_on") == pytest.approx(heat / (machine + backup), rel=1e-9)
    assert value(plain, "SCOP_net") == pytest.approx((heat - backup) / machine, rel=1e-9)


def test_every_row_is_what_a_sheet_for_that_row_alone_gives(pump):
    for index, (celsius, label) in enumerate(((-7, "cold"), (2, "mild"), (12, "warm"))):
        alone = changed(PUMP, ("shown: mild", f"shown: {label}"))
        there = record_of(alone)
        assert value(there, "T_out") == pytest.approx(celsius + 273.15)
        for symbol in ("COP", "T_2", "E_hp_row", "Q_dot_sink"):
            assert column(pump, symbol)[index] == pytest.approx(value(there, symbol), rel=1e-9), (label, symbol)
        assert value(there, "E_hp") == pytest.approx(value(pump, "E_hp"), rel=1e-9)


def test_the_sheet_can_be_done_again_from_print_and_every_row_keeps_the_laws(plain, pump):
    for record in (plain, pump):
        checks = {one["id"]: one for one in record.data["checks"]}
        assert checks["V-H"]["status"] == "ok"
        assert "each of" in checks["V-N"]["text"]
        assert not [one for one in checks.values() if one["status"] == "fails"]


def test_a_cell_printed_wrong_is_found_by_the_hand_re_check(solution_of):
    from calcpack.checks.hand import redone
    solution = solution_of(PUMP)
    record = build_record(solution)
    table = record.step("n_rows")["table"]
    at = [one["symbol"] for one in table["columns"]].index("COP")
    for index in (0, 1):
        cell = table["rows"][index]["cells"][at]
        cell["shown"], right = str(float(cell["shown"]) + 0.01), cell["shown"]
        found = [one for one in redone(solution, record) if not one.agrees]
        assert any(one.symbol == "COP" and one.step == record.step("n_rows")["id"] for one in found)
        cell["shown"] = right
    total = record.step("E_hp")
    total["shown"] = str(float(total["shown"]) + 2.0)
    assert "E_hp" in [one.symbol for one in redone(solution, record) if not one.agrees]


def test_cycling_costs_and_air_heaters_lose_in_their_own_form(plain):
    none = record_of(changed(PLAIN, ("    cycling: water\n", "")))
    air = record_of(changed(PLAIN, ("cycling: water", "cycling: air")))
    assert value(none, "SCOP_net") > value(air, "SCOP_net") and value(none, "SCOP_net") > value(plain, "SCOP_net")
    assert "E_cycling_row" not in [one["symbol"] for one in none.data["steps"]]
    full, share = value(air, "COP_full"), value(air, "CR")
    assert value(air, "COP_row") == pytest.approx(full * (1 - 0.25 * (1 - share)), rel=1e-12)


def test_back_up_by_a_boiler_counts_fuel_carbon_dioxide_and_costs():
    record = record_of(changed(PLAIN, ("    cycling: water\n",
                                       "    cycling: water\n    backup: fuel\n    emissions: yes\n    "
                                       "costs: yes\n"), ("    Q_dot_design: 8 kW\n", """\
    Q_dot_design: 8 kW
    eta_boiler: 0.9
    f_CO2_el: {value: 0.3 kg/kWh, source: invented}
    f_CO2_fuel: {value: 0.2 kg/kWh, source: invented}
    c_el: 0.25
    c_fuel: 0.1
""")))
    kWh = 3.6e6
    electricity, fuel = value(record, "E_hp") / kWh, value(record, "E_backup") / 0.9 / kWh
    assert value(record, "E_fuel") / kWh == pytest.approx(fuel, rel=1e-12)
    assert value(record, "m_CO2") == pytest.approx(0.3 * electricity + 0.2 * fuel, rel=1e-12)
    assert value(record, "C_run") == pytest.approx(0.25 * electricity + 0.1 * fuel, rel=1e-12)
    assert "SCOP_on" not in [one["symbol"] for one in record.data["steps"]]


OUTPUT = HEAD + """\
  method: organic-rankine
  options: {source_stream: none, sink_stream: none, condensing: temperature}
  fluids: {wf: R-600}
  series:
    rows: loads.csv
    shown: half
    inputs: {m_dot_wf: x_load * m_dot_full}
    account: output
    heat: Q_dot_h
    power: W_dot_net
    emissions: yes
    costs: yes
  inputs: {T_e: 100 degC, T_c: 30 degC, eta_t: 0.85, eta_p: 0.65, eta_gen: 0.95, eta_pm: 0.9,
           m_dot_full: {value: 2 kg/s, title: Flow at full load}, f_CO2_el: 0.3 kg/kWh, f_CO2_fuel: 0 kg/kWh, c_el: 0.2,
           c_fuel: 0}
"""


def test_the_year_of_an_engine_from_a_table_beside_the_spec(tmp_path):
    (tmp_path / "loads.csv").write_text("label, x_load, t_bin [h]\nfull, 1, 2000\nhalf, 0.5, 4000\nlow, 0.25, 1000\n",
                                        "utf-8")
    record = record_of(OUTPUT, tmp_path)
    half, kWh = value(record, "W_dot_net"), 3.6e6
    assert value(record, "E_out_year") == pytest.approx((2 * 2000 + 4000 + 0.5 * 1000) * 3600 * half, rel=1e-9)
    assert value(record, "eta_year") == pytest.approx(value(record, "eta_th"), rel=1e-9)
    assert value(record, "C_saved") == pytest.approx(value(record, "E_out_year") / kWh * 0.2, rel=1e-9)
    assert record.step("n_rows")["table"]["source"] == "loads.csv"


def test_own_steps_may_feed_the_rows_and_rest_on_the_totals():
    text = changed(PLAIN, ("  - {symbol: COP_hp",
                           "  - {symbol: E_person, title: A head, formula: E_el / 4, unit: kWh}\n"
                                                   "  - {symbol: COP_hp"))
    record = record_of(text)
    assert value(record, "E_person") == pytest.approx(value(record, "E_el") / 4)
    order = [one["symbol"] for one in record.data["steps"]]
    assert order.index("COP_hp") < order.index("n_rows") < order.index("E_person")


def test_a_limit_that_fails_in_another_row_is_told():
    limit = "limits:\n  - {id: L1, symbol: T_2, at_most: 64 degC, why: Test.}\n"
    record = record_of(changed(PUMP, ("shown: mild", "shown: warm")) + limit)
    assert record.data["limits"][0]["status"] == "holds"
    told = next(one for one in record.data["checks"] if one["id"] == "V-N-L1")
    assert told["status"] == "fails" and told["detail"] == "cold, mild"


def test_a_law_broken_in_another_row_stops_the_sheet(monkeypatch, solution_of):
    from calcpack.checks.rows import laws_in_rows
    solution = solution_of(PUMP)
    row = solution.program.cases["n_rows"][2]
    row[solution.program.slots["h_2"]] += 1e3
    with pytest.raises(BrokenLawError, match="row 'warm'"):
        laws_in_rows(solution, build_record(solution))


def test_equal_rows_keep_their_identity_and_other_hours_do_not(plain):
    again = record_of(PLAIN)
    assert again.step("n_rows")["identity"] == plain.step("n_rows")["identity"]
    warmer = record_of(changed(PLAIN, ("rows: average", "rows: warmer")))
    for symbol in ("n_rows", "E_heat", "SCOP_on"):
        assert warmer.step(symbol)["identity"] != plain.step(symbol)["identity"], symbol


def test_a_spec_with_a_series_follows_the_schema_for_editors():
    import yaml
    from jsonschema import Draft202012Validator
    validator = Draft202012Validator(json_schema())
    written = yaml.safe_load(re.sub(r": yes\b", ": 'yes'", OUTPUT))
    assert list(validator.iter_errors(written)) == []
    written["case"]["series"]["account"] = "cooling"
    assert list(validator.iter_errors(written))


@pytest.mark.parametrize("pairs, what, line", [
    ([("rows: average", "rows: averige")], "'averige' names no rows", "rows"),
    ([("rows: average", "rows: ../loads.csv")], "names no rows", "rows"),
    ([("rows: average", "rows: missing.csv")], "cannot be read", "rows"),
    ([("shown: 2 degC", "shown: 40 degC")], "there is no row '40 degC'", "shown"),
    ([("    heat: Q_dot_hp\n", "")], "key 'heat' is missing in series", "series"),
    ([("    heat: Q_dot_hp", "    heat: Q_dot_hpp")], "'Q_dot_hpp' has no value", "heat"),
    ([("account: heating", "account: none")], "nothing is summed up of 'heat'", "heat"),
    ([("    Q_dot_design: 8 kW\n", "")], "the input 'Q_dot_design' is missing", "case"),
])
def test_a_series_that_does_not_fit_is_told_at_its_place(pairs, what, line):
    text = changed(PLAIN, *pairs)
    found = [one for one in faults(text) if what in one.what]
    assert found, faults(text)
    assert line in text.splitlines()[found[0].place.line - 1]


@pytest.mark.parametrize("pairs, what", [
    ([("      T_e: T_out", "      dT_sh: T_out\n      T_e: T_out"), ("dT_sh: 5 K, ", "")],
     "dT_sh is a temperature difference, its formula gives"),
    ([("T_e: T_out - 8 K", "T_e: dT_sh")], "T_e is a temperature difference, its unit 'degC' is for levels"),
    ([("T_e: T_out - 8 K", "T_ee: T_out - 8 K")], "the method takes no input 'T_ee'"),
    ([("inputs: {T_c: 45 degC", "inputs: {T_e: 1 degC, T_c: 45 degC")], "the input 'T_e' is given twice"),
    ([("of: T_2,", "of: T_22,")], "'T_22' has no value ahead of the table of rows"),
    ([("label, T_out [degC], t_bin [h]", "label, T_air [degC], t_bin [h]")], "the rows have no column T_out"),
    ([("mild, 2, 1500", "mild, 2 degC, 1500")], "row 2 of the table: '2 degC' is not a number"),
    ([("mild, 2, 1500", "mild, 2")], "row 2 of the table has 2 values"),
    ([("warm, 12, 900", "mild, 12, 900")], "two rows of the table have one label"),
    ([("t_bin [h]", "t_bin [hours]")], "'hours' is not a unit"),
])
def test_rows_and_inputs_by_row_that_do_not_fit_are_told(pairs, what):
    found = faults(changed(PUMP, *pairs))
    assert any(what in one.what for one in found), [one.what for one in found]


@pytest.mark.parametrize("pairs, what", [
    ([("warm, 12, 900", "warm, 60, 900")], "row 'warm'"),
    ([("Q_dot_sink: 6 kW", "Q_dot_sink: -4 kW")], "Q_dot_sink, "),
])
def test_a_row_without_an_answer_is_named(pairs, what):
    found = faults(changed(PUMP, *pairs))
    assert what in found[0].what, found


def test_a_row_without_heat_load_is_refused():
    found = faults(changed(PUMP, ("warm, 12, 900", "warm, 17, 900")))
    assert "row 'warm'" in found[0].what and "no heat load" in found[0].what


def test_every_fault_of_the_sheet_is_told_beside_one_in_the_series():
    found = faults(changed(PLAIN, ("cycling: water", "cycling: steam"), ("title: Power", "titel: Power")))
    assert len(found) >= 2 and any("titel" in one.what for one in found)
    assert not any("has no value" in one.what for one in found), [one.what for one in found]


def test_the_sheet_prints_the_table_in_bands(pump):
    from calcpack.render.sheet import sheet_html
    page = sheet_html(pump)
    assert "All steps before this one are solved again for each row" in page
    assert page.count('<table class="inner series">') >= 2
    assert "Sum of" in page and "Greatest of" in page
