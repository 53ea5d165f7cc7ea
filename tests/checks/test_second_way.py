"""Second ways: they agree with the first on every sheet, and faults put in on purpose are found."""
from __future__ import annotations

from typing import Any

import pytest
from check_cases import Solved, by_id, solve_text, with_value
from law_cases import Altered, failures, flipped, sites, texts

import calcpack.fluids as fluids
from calcpack.checks.quadrature import entropy_change, simpson
from calcpack.checks.root_again import bisected, holds_another
from calcpack.checks.second_way import second_way
from calcpack.errors import RootError
from calcpack.methods.starter import starter
from calcpack.plan.plan import Section
from calcpack.solving.roots import Root

# No stream, machine, root or closed form on these sheets.
WITHOUT = {"none", "heat-driven", "endoreversible-estimate"}


@pytest.mark.parametrize("text", texts())
def test_every_second_way_agrees(text: str) -> None:
    solution, record = solve_text(text)
    entries = second_way(solution, record)
    assert [one["text"] for one in entries if one["status"] != "ok"] == []
    assert all("share" in one["detail"] for one in entries)
    assert entries or solution.method.name in WITHOUT


def test_each_kind_of_way_is_walked(engine: Solved) -> None:
    words = " | ".join(one["text"] for one in second_way(*engine))
    for way in ("from the reversible figure", "what crosses the outer boundary", "by the stream", "by the other side",
                "look-ups made again", "looked up again", "found back from its ends", "entropy change",
                "enthalpies alone", "conductance of the heater", "by bisection"):
        assert way in words, way


@pytest.mark.parametrize("symbol", [
    "W_dot_net", "W_dot_t", "Q_dot_h", "T_3", "s_4", "eta_t", "s_source_out", "T_m_source", "UA_h", "W_dot_rev_taken"])
def test_a_value_off_by_a_thousandth_is_found(engine: Solved, symbol: str) -> None:
    solution, record = engine
    spoiled = with_value(solution, **{symbol: solution.value(symbol) * 1.001})
    assert "fails" in {one["status"] for one in second_way(spoiled, record)}


@pytest.mark.parametrize("which", ["T_c", "T_e"])
def test_a_root_off_its_place_is_found(heat_pump: Solved, which: str) -> None:
    solution, record = heat_pump
    # One of the two holds the other, and is looked at without a whole bisection.
    assert [holds_another(solution, name) for name in ("T_c", "T_e")].count(True) == 1
    name, root = which, solution.program.roots[which]
    solution.program.roots[name] = Root(root.value * 1.00001, root.low, root.high, root.evaluations)
    try:
        wrong = [one["text"] for one in second_way(solution, record) if one["status"] == "fails"]
    finally:
        solution.program.roots[name] = root
    assert [one.split()[0].strip(",") for one in wrong] == [name]


def test_bisection_says_where_there_is_no_change_of_sign(engine: Solved) -> None:
    name, root = next(iter(engine[0].program.roots.items()))
    narrow = Root(root.value, root.value + 0.5 * (root.high - root.value), root.high, 0)
    with pytest.raises(RootError, match="one sign at both ends"):
        bisected(engine[0], name, narrow)


def test_entropy_by_quadrature_is_that_of_a_constant_heat_capacity() -> None:
    from math import log
    found = entropy_change(lambda p, T: 4180.0 * (T - 273.15), 1e5, 350.0, 300.0)
    assert found == pytest.approx(4180.0 * log(300.0 / 350.0), rel=1e-9)
    assert simpson([x**3 for x in (0.0, 0.5, 1.0)], 1.0) == pytest.approx(0.25)


FIXED = {"evaporating": "temperature", "condensing": "temperature"}
AUXILIARIES = ("W_dot_aux: 0 kW", "W_dot_aux: 3 kW")

# The fast plans of each kind, and the flips that no check can find, each with its reason.
PLANS: list[tuple[str, dict[str, str], dict[str, str]]] = [
    ("vapour-compression", FIXED | {"source_stream": "outlet", "sink_stream": "outlet"}, {}),
    ("organic-rankine", FIXED | {"recuperator": "yes"},
     {"m_dot_most": "an end of a bracket, which the root lies inside", "SP": "a figure for sizing, used by nothing"}),
    ("steam-plant", {}, {"y_ex": "a superheated or wet exhaust told once more, used by nothing"}),
    ("carnot-bound", {"between": "streams"}, {}), ("carnot-bound", {"between": "dead-state", "real": "power"}, {}),
    ("carnot-cycle", {}, {})]


NAMES = [f"{method}-{'-'.join(options.values())}" for method, options, _ in PLANS]


@pytest.mark.parametrize(("method", "options", "blind"), PLANS, ids=NAMES)
def test_every_flipped_sign_is_found(method: str, options: dict[str, str], blind: dict[str, str],
                                     monkeypatch: pytest.MonkeyPatch) -> None:
    text = starter(method, options).replace(*AUXILIARIES)
    places = sites(text, monkeypatch)
    assert len(places) >= 2
    missed = []
    for at in places:
        with monkeypatch.context() as patch:
            patch.setattr(Section, "formula", flipped(at))
            if not failures(text) and at[0] not in blind:
                missed.append(at)
    assert missed == []


@pytest.mark.parametrize(("role", "output", "share"), [
    ("wf", "h", 1e-4), ("wf", "s", 1e-4), ("wf", "T", 1e-5), ("wf", "p", 1e-4), ("source", "h", 1e-4),
    ("source", "s", 1e-4), ("sink", "h", 1e-4)])
def test_an_altered_property_is_found(role: str, output: str, share: float, monkeypatch: pytest.MonkeyPatch) -> None:
    text = starter("vapour-compression", FIXED | {"source_stream": "outlet", "sink_stream": "outlet"})
    text = text.replace("    sink: water", "    sink: {fluid: water, model: IF97}")
    opened = fluids.open_fluid
    wanted = {"wf": "", "source": "IAPWS-95", "sink": "IF97"}[role]

    def wrong(definition: Any) -> Any:
        fluid = opened(definition)
        mine = ("R-1234" in definition.name) if role == "wf" else "water" in definition.name and (
            definition.model == "IF97") == (wanted == "IF97")
        return Altered(fluid, output, share) if mine else fluid
    assert failures(text) == []
    monkeypatch.setattr(fluids, "open_fluid", wrong)
    assert failures(text) != []


@pytest.mark.parametrize("other", ["R-1234yf", "R-134a", "R-600a"])
def test_a_wrong_fluid_is_found(other: str, monkeypatch: pytest.MonkeyPatch) -> None:
    text = starter("vapour-compression", FIXED | {"source_stream": "outlet", "sink_stream": "outlet"})
    opened = fluids.open_fluid
    monkeypatch.setattr(fluids, "open_fluid", lambda definition: opened(
        fluids.FluidDefinition(other) if "R-1234ze" in definition.name else definition))
    assert failures(text) != []


def test_ids_are_unique_and_values_carry_units(heat_pump: Solved) -> None:
    entries = second_way(*heat_pump)
    assert len(by_id(entries)) == len(entries)
    assert by_id(entries)["V-A1"]["value"].count(" kW") == 2
    assert all(one["allowed"].endswith("apart") for one in entries)
