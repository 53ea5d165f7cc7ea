"""Random formula trees for property tests: any tree that the grammar can write."""
from __future__ import annotations

from hypothesis import strategies as st

from calcpack.formula.tree import Binary, Call, Compare, Logic, Negative, Node, Number, Quantity, Symbol
from calcpack.units.spellings import LEVELS, UNITS

NAMES = ("T_1", "T_source_in", "Q_dot_sink", "eta", "x", "h_4s", "dT_pinch_e", "pi", "min", "e1")
# A number as text: digits, a point somewhere, an exponent now and then; never negative.
NUMBER_TEXTS = st.one_of(
    st.integers(0, 10**6).map(str), st.floats(1e-3, 1e6).map(lambda x: f"{x:.6g}"),
    st.floats(1e-9, 1e12).map(lambda x: f"{x:.3e}"), st.sampled_from(["1.40", "0.0", ".5", "2E3", "1e-5"]))


def numbers() -> st.SearchStrategy[Node]:
    return NUMBER_TEXTS.map(lambda text: Number(float(text), text))


def quantities() -> st.SearchStrategy[Node]:
    return st.builds(lambda text, unit: Quantity(float(text), text, unit), NUMBER_TEXTS,
                     st.sampled_from(sorted(set(UNITS) - LEVELS)))


def exponents() -> st.SearchStrategy[Node]:
    small = st.sampled_from(["2", "3", "0.5", "12", "1.4"]).map(lambda text: Number(float(text), text))
    return st.one_of(small, small.map(Negative), st.sampled_from(["x", "eta"]).map(Symbol))


def trees(leaves: st.SearchStrategy[Node], *, powers: bool = True, most: int = 18) -> st.SearchStrategy[Node]:
    """Trees of all operators and functions over ``leaves``; powers only of bounded exponents."""
    def grown(inner: st.SearchStrategy[Node]) -> st.SearchStrategy[Node]:
        kinds = [st.builds(Binary, st.sampled_from("+-*/"), inner, inner), st.builds(Negative, inner),
                 st.builds(lambda name, part: Call(name, (part,)), st.sampled_from(["sqrt", "ln", "exp", "abs"]),
                 inner),
                 st.builds(lambda name, parts: Call(name, tuple(parts)), st.sampled_from(["min", "max"]),
                           st.lists(inner, min_size=1, max_size=3))]
        if powers:
            kinds.append(st.builds(lambda base, exponent: Binary("^", base, exponent), inner, exponents()))
        return st.one_of(kinds)
    return st.recursive(leaves, grown, max_leaves=most)


def any_tree() -> st.SearchStrategy[Node]:
    return trees(st.one_of(numbers(), quantities(), st.sampled_from(NAMES).map(Symbol)))


def conditions() -> st.SearchStrategy[Node]:
    """Comparisons joined by 'and', those joined by 'or', as the grammar groups them."""
    part = trees(st.one_of(numbers(), st.sampled_from(NAMES).map(Symbol)), most=4)
    comparison = st.builds(Compare, st.sampled_from(["<", "<=", ">", ">="]), part, part)
    conjunction = st.lists(comparison, min_size=1, max_size=3).map(lambda parts: _joined("and", parts))
    return st.lists(conjunction, min_size=1, max_size=3).map(lambda parts: _joined("or", parts))


def _joined(word: str, parts: list[Node]) -> Node:
    node = parts[0]
    for other in parts[1:]:
        node = Logic(word, node, other)
    return node
