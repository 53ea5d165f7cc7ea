"""The JSON Schema for editors, checked with jsonschema as an editor would."""
from __future__ import annotations

import copy
import json
import re
from pathlib import Path

import pytest
from jsonschema import Draft202012Validator

from calcpack.fluids.definition import MODELS, REFERENCES
from calcpack.formula.scan import scan
from calcpack.spec import json_schema
from calcpack.spec.faults import keys_at
from calcpack.spec.nodes import Listing, Scalar, read_tree
from calcpack.spec.source import source_of_text
from calcpack.spec.words import SYMBOL

GOOD = Path(__file__).parent / "good.yaml"


def as_an_editor_reads(node):
    """A tree with the scalars of the YAML 1.2 core schema (yaml.org/spec/1.2.2, 10.3.2)."""
    if isinstance(node, Listing):
        return [as_an_editor_reads(item) for item in node.items]
    if not isinstance(node, Scalar):
        return {key.text: as_an_editor_reads(value) for key, value in node.entries}
    if node.style == "plain" and re.fullmatch(r"[-+]?[0-9]+", node.text):
        return int(node.text)
    if node.style == "plain" and re.fullmatch(
            r"[-+]?(\.[0-9]+|[0-9]+(\.[0-9]*)?)([eE][-+]?[0-9]+)?", node.text):
        return float(node.text)
    if node.style == "plain" and node.text in ("true", "false"):
        return node.text == "true"
    return node.text if node.has_value else None


@pytest.fixture(scope="module")
def good():
    return as_an_editor_reads(read_tree(source_of_text(GOOD.read_text(encoding="utf-8"), "good.yaml"))[0])


@pytest.fixture(scope="module")
def validator():
    return Draft202012Validator(json_schema())


def test_the_schema_is_one_of_draft_2020_12():
    Draft202012Validator.check_schema(json_schema())
    assert json_schema()["$schema"] == "https://json-schema.org/draft/2020-12/schema"
    assert json.loads(json.dumps(json_schema())) == json_schema()


def test_a_right_spec_follows_the_schema(validator, good):
    assert list(validator.iter_errors(good)) == []


@pytest.mark.parametrize(("path", "value"), [
    (("calcpack",), 2),
    (("sheet", "status"), "isued"),
    (("sheet", "revision"), "I"),
    (("sheet", "purpose"), None),
    (("sheet", "units"), "SI"),
    (("sheet", "colour"), "red"),
    (("case", "inputs", "T-1"), "300 K"),
    (("case", "inputs", "eta_is", "valeu"), 1),
    (("case", "fluids", "wf"), ["water"]),
    (("steps", 0, "formula"), ["a"]),
    (("steps", 0, "root"), {"equation": "a - b", "between": ["a", "b"]}),
    (("steps", 1, "choice"), [{"otherwise": "a"}]),
    (("steps", 2, "root", "between"), ["a"]),
    (("limits", 0, "at_least"), 3),
    (("limits", 0, "why"), ""),
    (("assumptions", 0, "status"), "maybe"),
    (("results", 0), {"title": "No symbol"}),
    (("revisions", 0, "date"), "31.01.2026"),
])
def test_a_wrong_value_does_not_follow_the_schema(validator, good, path, value):
    wrong = copy.deepcopy(good)
    owner = wrong
    for segment in path[:-1]:
        owner = owner[segment]
    owner[path[-1]] = value
    assert list(validator.iter_errors(wrong))


def keys_with_their_schemas(part):
    """Each key of each mapping in the schema."""
    for definition in (part, *part["$defs"].values()):
        yield from ((definition["title"], name, key) for name, key in definition["properties"].items())


def test_every_key_is_described():
    keys = list(keys_with_their_schemas(json_schema()))
    assert len(keys) > 70
    assert [(owner, name) for owner, name, key in keys if not key.get("description", "").endswith(".")] == []


def test_an_editor_is_never_offered_null():
    assert '"null"' not in json.dumps(json_schema())


def test_the_words_of_a_fluid_are_those_that_fluids_knows():
    fluid = json_schema()["$defs"]["WrittenFluid"]["properties"]
    assert tuple(fluid["model"]["enum"]) == MODELS
    assert tuple(fluid["reference"]["enum"]) == REFERENCES


def test_examples_follow_their_own_schema():
    schema = json_schema()
    for owner, name, key in keys_with_their_schemas(schema):
        validator = Draft202012Validator({**key, "$defs": schema["$defs"]})
        for example in key.get("examples", []):
            assert list(validator.iter_errors(example)) == [], (owner, name, example)


def test_keys_are_found_by_path_through_short_forms_and_lists():
    schema = json_schema()
    assert keys_at(schema, ("case", "inputs", "anything")) == {"value", "from", "tol", "source", "title", "note"}
    assert keys_at(schema, ("steps", 3, "choice", 0)) == {"when", "value", "otherwise", "label"}
    assert keys_at(schema, ("signoff", "checked")) == {"name", "date"}
    assert keys_at(schema, ("sheet", "title")) == set()


@pytest.mark.parametrize("name", ["T_1", "eta_is", "COP", "m_dot_wf", "x2", "a_2b"])
def test_a_symbol_is_one_name_of_the_formula_language(name):
    assert re.fullmatch(SYMBOL, name)
    assert [(token.kind, token.text) for token in scan(name)] == [("name", name), ("end", "")]
