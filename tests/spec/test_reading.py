"""A right spec: what it means, where its parts are written, that it travels between processes."""
from __future__ import annotations

import dataclasses
import hashlib
import pickle
import subprocess
import sys
from pathlib import Path

import pytest

from calcpack.errors import Fault, Place, SpecError
from calcpack.fluids.definition import FluidDefinition
from calcpack.spec import Spec, read_for_faults, read_spec
from calcpack.spec.model import Branch, Input, Limit, Result, Root, Signature

GOOD = Path(__file__).parent / "good.yaml"
BROKEN = Path(__file__).parent / "broken"
SHORT = """calcpack: 1
sheet: {number: T-1, title: Test sheet, project: Tests, revision: A, status: draft}
case: {method: none}
"""


@pytest.fixture(scope="module")
def spec() -> Spec:
    return read_spec(GOOD, name="good.yaml")


def short(text: str = "") -> Spec:
    """A short draft with ``text`` after it."""
    return read_spec(Path("short.yaml"), text=SHORT + text)


def with_inputs(text: str) -> Spec:
    return read_spec(Path("short.yaml"), text=SHORT.replace("none}", f"none, inputs: {{{text}}}}}"))


def test_the_title_block_with_defaults_filled_in(spec):
    assert spec.sheet.number == "HP-101"
    assert spec.sheet.scope == "The machine and its two streams, without the building."
    assert (spec.sheet.p_atm, spec.sheet.p_atm_text) == (98_000.0, "0.98 bar")
    assert (spec.sheet.units, spec.sheet.page, spec.sheet.grade) == ("si", "A4", None)
    assert spec.sheet.codes == ("EN 378-2",)
    assert not spec.sheet.draft
    assert (short().sheet.p_atm, short().sheet.p_atm_text) == (101_325.0, "1.01325 bar")


def test_signatures_that_are_open_are_none(spec):
    assert spec.signoff.prepared == Signature("A. Example", "2026-03-31")
    assert spec.signoff.checked is None and spec.signoff.approved is None


def test_options_keep_the_words_that_were_written(spec):
    assert spec.case.options == {"recuperator": "no", "stages": "2"}


def test_fluids_are_definitions(spec):
    assert spec.case.fluids["wf"] == FluidDefinition(name="R-1234ze(E)")
    assert spec.case.fluids["source"] == FluidDefinition(
        name="ethylene glycol", model="incompressible", mass_fraction=0.3)
    air = spec.case.fluids["air"].composition
    assert [name for name, _ in air] == ["nitrogen", "oxygen", "argon"]
    assert [share for _, share in air] == pytest.approx([0.781, 0.21, 0.009], rel=1e-15)


def test_a_composition_within_half_a_percent_is_scaled_to_one():
    text = SHORT.replace("none}", "none, fluids: {a: {composition: {N2: 0.788, O2: 21 %}, basis: mass}}}")
    fluid = read_spec(Path("a"), text=text).case.fluids["a"]
    assert sum(share for _, share in fluid.composition) == pytest.approx(1.0, abs=1e-15)
    assert fluid.composition[0][1] == pytest.approx(0.788 / 0.998, rel=1e-15)
    assert fluid.basis == "mass"


def test_a_constant_heat_capacity_is_read_in_si():
    text = SHORT.replace("none}", "none, fluids: {a: {constant_cp: 2.1 kJ/(kg·K), density: 870 kg/m³}}}")
    fluid = read_spec(Path("a"), text=text).case.fluids["a"]
    assert (fluid.constant_cp, fluid.density) == (pytest.approx(2100.0, rel=1e-15), 870.0)


def test_inputs_long_and_short(spec):
    assert spec.case.inputs["T_source_in"] == Input("T_source_in", "38 degC", "1.0 K", "R1")
    assert with_inputs("eta_is: 0.72").case.inputs == {"eta_is": Input("eta_is", "0.72")}


@pytest.mark.parametrize("written", [
    "1e3", "1.5e-3 bar", "+4", "-10 degC", "0.5", ".5", "'12 kW'", "0", "0.72 %"])
def test_numbers_in_the_meaning_of_yaml_1_2(written):
    assert with_inputs(f"a: {written}").case.inputs["a"].value == written.strip("'")


def test_the_four_kinds_of_step(spec):
    fan, chosen, solved, looked_up = spec.steps
    assert (fan.kind, fan.formula, fan.unit, fan.reference) == ("formula", "V_dot * dp / eta_is", "kW", "R1")
    assert fan.choice is None and fan.root is None and fan.lookup is None
    assert chosen.choice == (Branch("T_a < T_b and x <= 1", "Q_a", "pinch at outlet"), Branch(None, "Q_b"))
    assert solved.root == Root("Q_a - Q_b", "300 K", "T_source_in")
    assert looked_up.lookup.points == (("0.5", "0.61"), ("1", "72 %"))
    assert [step.kind for step in spec.steps] == ["formula", "choice", "root", "lookup"]


def test_limits_have_a_sense_and_a_bound(spec):
    assert spec.limits == (Limit("L1", "T_2", "at most", "120 degC", "Oil.", "A1"),
                           Limit("L2", "COP", "at least", "COP_min", "Tender."))
    assert [limit.key for limit in spec.limits] == ["at_most", "at_least"]


def test_results_long_and_short(spec):
    assert spec.results == (Result("COP"), Result("Q_x", "Duty"))


def test_no_part_of_a_spec_can_be_changed(spec):
    with pytest.raises(dataclasses.FrozenInstanceError):
        spec.sheet.title = "Another"
    with pytest.raises(dataclasses.FrozenInstanceError):
        spec.steps = ()


def test_a_spec_comes_out_of_a_pickle_as_it_went_in(spec):
    again = pickle.loads(pickle.dumps(spec))
    assert again == spec
    assert again.place("steps", 1, "choice", 0, "when") == spec.place("steps", 1, "choice", 0, "when")


def test_the_hash_is_that_of_the_bytes(spec, tmp_path):
    assert spec.sha256 == hashlib.sha256(GOOD.read_bytes()).hexdigest()
    marked = tmp_path / "marked.yaml"
    marked.write_bytes(b"\xef\xbb\xbf" + SHORT.replace("\n", "\r\n").encode())
    read = read_spec(marked)
    assert read.sha256 == hashlib.sha256(marked.read_bytes()).hexdigest()
    assert read.text == SHORT.replace("\n", "\r\n")
    assert read.place("case", "method") == Place(str(marked), 3, 16, 4)


def test_places_of_values_and_keys(spec):
    row = GOOD.read_text(encoding="utf-8").splitlines()
    for path, line, key, value in (
            (("case", "inputs", "T_source_in", "tol"), "    T_source_in: {value", "tol", "1.0 K"),
            (("sheet", "number"), "  number", "number", "HP-101"),
            (("steps", 1, "choice", 0, "when"), "      - {when", "when", "T_a < T_b and x <= 1"),
            (("results", 1, "title"), "results", "title", "Duty")):
        number = next(index for index, text in enumerate(row) if text.startswith(line))
        at = row[number].index(f"{key}: {value}")
        assert spec.place(*path, key=True) == Place("good.yaml", number + 1, at + 1, len(key))
        assert spec.place(*path) == Place("good.yaml", number + 1, at + 1 + len(f"{key}: "), len(value))


def test_what_is_not_written_stands_where_its_owner_is(spec):
    assert spec.place("case", "inputs", "not_there") == spec.place("case", "inputs", key=True)
    assert spec.place("sheet", "units") == spec.place("sheet", key=True)
    assert spec.place("results", 0, "symbol") == spec.place("results", 0)
    assert spec.place() == Place("good.yaml", 1, 1, len("calcpack: 1"))


def test_a_fault_inside_a_formula_is_located_in_the_file(spec):
    fault = Fault("no such symbol", Place("", 1, len("V_dot * ") + 1, len("dp")))
    row = GOOD.read_text(encoding="utf-8").splitlines()[spec.place("steps", 0).line - 1]
    located = spec.located(fault, "steps", 0, "formula")
    assert located.place.length == 2
    assert row[located.place.column - 1:].startswith("dp / eta_is")
    assert spec.located(Fault("all of it"), "steps", 0, "unit").place == spec.place("steps", 0, "unit")
    assert spec.located(fault, "steps", 1, "choice").place == spec.place("steps", 1, "choice")
    elsewhere = Fault("known", Place("other.yaml", 1, 2))
    assert spec.located(elsewhere, "steps", 0, "formula") == elsewhere


@pytest.mark.parametrize(("written", "shown"), [
    ("a + beta * c", "beta"),
    ("'a + beta * c'", "beta"),
    ('"a + beta * c"', "beta"),
    (r'"a \u002b beta * c"', "beta"),
    (r'"\x61 + b\x65ta * c"', r"b\x65ta"),
    ("a\n      + beta\n      * c", "beta"),
    (">\n      a +\n      beta * c\n", "beta"),
    ("|-2\n      a\n      + beta\n      * c", "beta"),
])
def test_a_place_inside_a_scalar_however_it_is_written(written, shown):
    spec = short(f"steps:\n  - symbol: s\n    title: Sum\n    formula: {written}\n")
    column = spec.steps[0].formula.index("beta")
    place = spec.located(Fault("x", Place("", 1, column + 1, 4)), "steps", 0, "formula").place
    row = spec.text.splitlines()[place.line - 1]
    assert row[place.column - 1:place.column - 1 + place.length] == shown


def test_a_missing_file_a_folder_and_a_large_file_are_faults(tmp_path):
    large = tmp_path / "large.yaml"
    large.write_bytes(b"#" + b"x" * 1_000_000)
    for path, what in ((tmp_path / "none.yaml", "there is no file 'it'"), (tmp_path, "'it' is not a file"),
                       (large, "the spec is larger than 1 MB")):
        with pytest.raises(SpecError) as raised:
            read_spec(path, name="it")
        assert [fault.what for fault in raised.value.faults] == [what]


def test_an_error_of_a_spec_comes_out_of_a_pickle_as_it_went_in():
    with pytest.raises(SpecError) as raised:
        short("steps: 3\nlimits: 4\n")
    assert pickle.loads(pickle.dumps(raised.value)).faults == raised.value.faults
    assert len(raised.value.faults) == 2


def test_a_faulty_spec_goes_on_without_its_faulty_entries():
    spec, faults = read_for_faults(Path("a.yaml"), text=SHORT.replace(
        "case: {method: none}", "case: {method: orc, inputs: {T_1: 3 Kk, p_1: 5 bar, m_1: }}") + """steps:
  - {symbol: a, title: Bad, formula: b +}
  - {symbol: c, title: Good, formula: p_1 * 2}
  - {symbol: d, title: Misspelt, formla: c + 1}
limits:
  - {id: L1, symbol: c, why: No bound.}
  - {id: L2, symbol: c, at_most: 3, why: Test.}
""")
    assert len(faults) == 5
    assert [step.symbol for step in spec.steps] == ["c", "d"]
    assert spec.steps[1].formula == "c + 1"
    assert set(spec.case.inputs) == {"p_1"}
    assert [limit.id for limit in spec.limits] == ["L2"]
    assert spec.dropped == {"T_1", "m_1", "a"}
    row = spec.text.splitlines()[spec.place("steps", 0, "title").line - 1]
    assert row.endswith("title: Good, formula: p_1 * 2}")


def test_of_two_misspellings_the_first_is_read_on_and_none_takes_the_place_of_the_right_key():
    spec, faults = read_for_faults(BROKEN / "misspelt_twice.yaml")
    assert len(faults) == 3
    assert (spec.sheet.title, spec.sheet.project) == ("Test sheet", "Tests")
    assert [key.text for key, _ in spec.tree.get("sheet").entries].count("title") == 1


def test_a_title_block_that_cannot_be_used_gets_stopgaps_and_the_faults_stay():
    text = "calcpack: 1\nsheet: {title: Test, revision: I}\ncase: {method: orc}\n"
    spec, faults = read_for_faults(Path("a.yaml"), text=text)
    assert (spec.sheet.title, spec.sheet.number, spec.sheet.status) == ("Test", "unnamed", "draft")
    assert len(faults) == 4
    assert "'I' is not a revision" in {fault.what for fault in faults}


def test_without_a_method_there_is_nothing_to_read_on():
    spec, faults = read_for_faults(Path("a.yaml"), text=SHORT.replace("method: none", "options: {a: b}"))
    assert spec is None
    assert [fault.what for fault in faults] == ["key 'method' is missing in case"]


def test_reading_a_spec_loads_no_library_of_a_later_stage():
    script = ("import sys; from pathlib import Path; from calcpack.spec import read_spec;"
              f"read_spec(Path({str(GOOD)!r}));"
              "print([name for name in ('CoolProp', 'matplotlib', 'weasyprint') if name in sys.modules])")
    done = subprocess.run([sys.executable, "-c", script], capture_output=True, text=True, check=True)
    assert done.stdout.strip() == "[]"
