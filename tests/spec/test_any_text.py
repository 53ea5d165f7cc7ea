"""Whatever is given as a spec: a Spec or faults with places in the text, and nothing else."""
from __future__ import annotations

from pathlib import Path

import yaml
from hypothesis import given, settings
from hypothesis import strategies as st

from calcpack.spec import read_for_faults
from calcpack.spec.nodes import Listing, Scalar, read_tree
from calcpack.spec.places import place_of
from calcpack.spec.source import Source, source_of_text

GOOD = (Path(__file__).parent / "good.yaml").read_text(encoding="utf-8")
HEAD = "calcpack: 1\nsheet: {number: T-1, title: Test, project: Tests, revision: A, status: draft}\n"

KEYS = st.sampled_from([
    "calcpack", "sheet", "case", "steps", "limits", "assumptions", "references", "results", "revisions",
    "signoff", "method", "options", "fluids", "inputs", "value", "tol", "source", "symbol", "title",
    "formula", "formla", "choice", "when", "otherwise", "root", "equation", "between", "lookup", "of",
    "points", "id", "at_most", "at_least", "why", "text", "basis", "status", "revision", "date", "note",
    "fluid", "prepared", "composition", "checked", "name", "wf", "T_1", "[key]", "<<", "", "no", "1"])
WORDS = st.sampled_from([
    "1", "5 bar", "T_1", "a +", "draft", "issued", "A", "R1", "2026-03-31", "water", "30 %", "", None,
    "1,5 bar", "no", "x\ny", "3 < T_1", "kW", "none", "\u202e", "9^9^9"])
VALUES = st.recursive(
    WORDS, lambda inner: st.lists(inner, max_size=3) | st.dictionaries(KEYS, inner, max_size=4),
    max_leaves=25)


def read_and_check(text: str) -> None:
    """Read ``text``; every fault has a place in it."""
    spec, faults = read_for_faults(Path("any.yaml"), text=text)
    assert spec is not None or faults
    rows = text.removeprefix("\ufeff").splitlines() or [""]
    for fault in faults:
        assert "\n" not in fault.what and fault.what.strip() and not fault.what.endswith(".")
        if fault.place is not None:
            assert 1 <= fault.place.line <= len(rows)
            assert 1 <= fault.place.column <= len(rows[fault.place.line - 1]) + 1


@given(st.text(alphabet=st.characters(exclude_categories=())))
@settings(max_examples=300, deadline=None)
def test_any_text(text):
    read_and_check(text)


@given(st.text(alphabet="ab:-{}[],&*!|>'\"%@`#\n \t\\?~<=1."))
@settings(max_examples=400, deadline=None)
def test_any_text_of_the_signs_that_mean_something(text):
    read_and_check(HEAD + text)


@given(st.integers(0, len(GOOD)), st.integers(0, 40), st.text(max_size=12))
@settings(max_examples=250, deadline=None)
def test_a_right_spec_with_a_piece_replaced(at, length, piece):
    read_and_check(GOOD[:at] + piece + GOOD[at + length:])


@given(st.dictionaries(KEYS, VALUES, max_size=8))
@settings(max_examples=300, deadline=None)
def test_any_tree_of_known_keys(tree):
    read_and_check(yaml.safe_dump(tree, allow_unicode=True, sort_keys=False))


@given(st.fixed_dictionaries(
    {"calcpack": st.just(1), "case": st.fixed_dictionaries({"method": st.just("orc")})},
    optional=dict.fromkeys(
        ("steps", "limits", "references", "sheet", "signoff", "results", "revisions"), VALUES)))
@settings(max_examples=200, deadline=None)
def test_a_spec_that_names_a_method_can_always_be_read_on(tree):
    spec, faults = read_for_faults(Path("any.yaml"), text=yaml.safe_dump(tree, sort_keys=False))
    assert spec is not None and faults
    assert spec.case.method == "orc"


@given(st.binary(max_size=200))
@settings(max_examples=100, deadline=None)
def test_any_bytes(tmp_path_factory, content):
    path = tmp_path_factory.mktemp("bytes") / "any.yaml"
    path.write_bytes(content)
    spec, faults = read_for_faults(path)
    assert spec is not None or faults


def leaves(node, path=()):
    """The path and scalar of each leaf below ``node``."""
    if isinstance(node, Scalar):
        yield path, node
        return
    inside = enumerate(node.items) if isinstance(node, Listing) else (
        (key.text, value) for key, value in node.entries)
    for segment, below in inside:
        yield from leaves(below, (*path, segment))


PLAIN = st.text(alphabet="abcxyzαβ_0123456789", min_size=1, max_size=8).map(lambda text: "k" + text)
TREES = st.recursive(PLAIN, lambda inner: st.lists(inner, min_size=1, max_size=3)
                     | st.dictionaries(PLAIN, inner, min_size=1, max_size=3), max_leaves=12)


@given(st.dictionaries(PLAIN, TREES, min_size=1, max_size=5), st.booleans())
@settings(max_examples=150, deadline=None)
def test_at_the_place_of_a_leaf_stands_its_text(tree, flow):
    source: Source = source_of_text(
        yaml.safe_dump(tree, allow_unicode=True, default_flow_style=flow, width=60), "any.yaml")
    nodes, faults = read_tree(source)
    assert faults == ()
    rows = source.text.splitlines()
    for path, leaf in leaves(nodes):
        place = place_of(source, nodes, path)
        assert rows[place.line - 1][place.column - 1:][:place.length] == leaf.text
        owner = tree
        for segment in path:
            owner = owner[segment]
        assert owner == leaf.text
