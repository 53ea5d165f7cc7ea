"""The order of sheets that feed each other, and what is seen of a spec at a glance."""
from __future__ import annotations

from itertools import pairwise
from pathlib import Path

import pytest
from hypothesis import given
from hypothesis import strategies as st

from calcpack.package.glance import glance, is_spec, specs_in
from calcpack.package.order import closure, levels, ring_through
from calcpack.spec.model import Link

GRAPHS = st.integers(1, 12).flatmap(lambda count: st.dictionaries(
    st.integers(0, count), st.lists(st.integers(0, count), unique=True, max_size=4), min_size=1))


@given(GRAPHS)
def test_every_name_stands_behind_what_it_takes_from_or_in_a_ring(sources):
    names = closure(sources, sources)
    rings = {(name, one) for name in names for one in sources.get(name, ()) if ring_through(name, one, sources)}
    open_ones = {name: [one for one in sources.get(name, ()) if (name, one) not in rings] for name in names}
    found = levels(names, open_ones)
    assert sorted(name for level in found for name in level) == sorted(set(names))
    at = {name: place for place, level in enumerate(found) for name in level}
    assert all(at[one] < at[name] for name, some in open_ones.items() for one in some)
    for name, one in rings:
        ring = ring_through(name, one, sources)
        assert ring[0] == ring[-1] == name and ring[1] == one
        assert all(after in sources[before] for before, after in pairwise(ring))


def test_a_ring_among_the_levels_is_an_error():
    with pytest.raises(ValueError, match="ring"):
        levels([1, 2], {1: [2], 2: [1]})


BLOCK = b"""\
calcpack: 1
sheet:
  number: MT-1
  title: "A title: with a colon"
  revision: B
  baseline: v1:specs/a.yaml
case:
  inputs:
    T_e: {from: MT-101.T_out, tol: 1 K}
    p_e:
      note: in block style
      from: "MT.2.p_c"
    eta: 0.7
    x: {value: 3, source: from}
    from: 3 kW
  series: {rows: loads.csv, shown: a}
steps:
  - {symbol: y, from: MT-9.z}
"""


def test_number_links_and_files_are_seen():
    one = glance(Path("specs/a.yaml"), BLOCK)
    assert (one.number, one.title, one.revision, one.baseline) == ("MT-1", "A title: with a colon", "B",
                                                                  "v1:specs/a.yaml")
    assert one.links == {"T_e": Link("MT-101", "T_out"), "p_e": Link("MT.2", "p_c")}
    assert one.rows_file == Path("specs/loads.csv") and one.status is None


@pytest.mark.parametrize("content", [
    b"calcpack: 1\nsheet: {number: MT-1}\ncase: {inputs: {a: {from: MT-2.b}}}\nsteps: [\n  }",
    b"calcpack: 1\nsheet: {number: MT-1}\ncase: {inputs: {a: {from: MT-2.b}}}\nx: &a [*a, *b]\n",
    b"calcpack: 1\nsheet: {? [1, 2] : 3, number: MT-1}\ncase: {inputs: {? {b: 1} : 2, a: {from: MT-2.b}}}\n\xff\xfe"])
def test_a_spec_that_breaks_off_shows_what_stands_before(content):
    one = glance(Path("a.yaml"), content)
    assert one.number == "MT-1" and one.links["a"] == Link("MT-2", "b")


@given(st.binary(max_size=200))
def test_no_bytes_are_too_odd_for_a_glance(content):
    glance(Path("a.yaml"), content)
    glance(Path("a.yaml"), BLOCK[:len(content)] + content)


def test_deep_nesting_is_no_matter():
    assert glance(Path("a.yaml"), b"sheet: {number: A-1}\nx: " + b"[" * 100_000).number == "A-1"


def test_the_specs_of_a_folder_are_those_that_mean_to_be(tmp_path):
    (tmp_path / "b.yaml").write_bytes(BLOCK)
    (tmp_path / "a.yml").write_bytes(b"# a comment\n'calcpack': 1\n")
    (tmp_path / "b.review.yaml").write_bytes(b"review: 1\n")
    (tmp_path / "c.yaml").mkdir()
    assert [path.name for path in specs_in(tmp_path)] == ["a.yml", "b.yaml"]
    assert is_spec(BLOCK) and not is_spec(b"x:\n  calcpack: 1\n")
