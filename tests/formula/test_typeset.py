"""How formulas are set: signs, brackets, units, lines, and the twin for screen readers."""
from __future__ import annotations

import re
from xml.etree import ElementTree

import pytest

from calcpack.formula.lines import break_lines
from calcpack.formula.mathml import node_mathml, step_mathml
from calcpack.formula.parse import parse, parse_condition
from calcpack.formula.tree import Negative, Number, Quantity
from calcpack.formula.typeset import equation_html, node_html, quantity_html, step_equation_html, unit_html


def read(html: str) -> str:
    """The markup as a line of text: thin spaces as spaces, scripts as _( ) and ^( ), a stroke for a bar."""
    html = re.sub(r'<span class="frac"[^>]*><span[^>]*>', "{", html).replace("\u202f", " ")
    for tag, mark in (("sub", "_"), ("sup", "^")):
        html = re.sub(rf"<{tag}[^>]*>", f"{mark}(", html).replace(f"</{tag}>", ")")
    html = re.sub(r"</span><span[^>]*>", "|", html)
    return re.sub(r"<[^>]*>", "", html).replace("&lt;", "<").replace("&gt;", ">").replace("&amp;", "&")


@pytest.mark.parametrize(("formula", "line"), [
    ("m_dot * (h_3 - h_4s) * eta_is", "ṁ(h_(3) − h_(4s)) η_(is)"),
    ("3.142 kg/s * (2782.1 kJ/kg - 2192.3 kJ/kg) * 0.860", "3.142 kg/s × (2782.1 − 2192.3) kJ/kg × 0.860"),
    ("2 K * (3 kJ/kg - 4 J/kg)", "2 K × (3 kJ/kg − 4 J/kg)"),
    ("(3 m - 1 m)^2", "(3 m − 1 m)^(2)"),
    ("12.4 K - 5.1 K", "12.4 K − 5.1 K"),
    ("a - (b - c)", "a − (b − c)"),
    ("a - b - c", "a − b − c"),
    ("a - -b", "a − (−b)"),
    ("a * -b", "a × (−b)"),
    ("-a + b", "−a + b"),
    ("-(a + b)", "−(a + b)"),
    ("a * (b * c)", "a (b c)"),
    ("(18.0 m/s)^2", "(18.0 m/s)^(2)"),
    ("x^-1", "x^(−1)"),
    ("ln(x)^2", "(ln(x))^(2)"),
    ("4 * m_dot", "4 ṁ"),
    ("m_dot * 4", "ṁ × 4"),
    ("pi * 14.2 kg/m3", "π × 14.2 kg/m³"),
    ("2 * pi", "2 × π"),
    ("UA * dT_lm", "UA × ΔT_(lm)"),
    ("1.23e-5 * 2E3", "1.23 × 10^(−5) × 2 × 10^(3)"),
    ("abs(a - b)", "|a − b|"),
    ("exp(a) * min(b, c, d)", "exp(a) min(b, c, d)"),
    ("h(wf, p=p_c, s=s_1)", "h(wf; p_(c), s_(1))"),
    ("p(wf, T=T_e, x=1)", "p(wf; T_(e), x = 1)"),
    ("h(«R-1234ze(E)», p=10.12 bar, s=1.727 kJ/(kg·K))",
     "h(R-1234ze(E); p = 10.12 bar, s = 1.727 kJ/(kg·K))"),
    ("h(«A<b>&B», T=-5 K)", "h(A<b>&B; T = −5 K)"),
    ("T_crit(wf)", "T_(crit)(wf)"),
])
def test_formula_is_set_as(formula, line):
    assert read(node_html(parse(formula))) == line


def test_fractions_nest():
    html = node_html(parse("a / (b / c)"))
    assert html.count('class="frac"') == 2
    assert read(html) == "{a|{b|c"


@pytest.mark.parametrize(("condition", "line"), [
    ("dT_e <= 5 K", "ΔT_(e) ≤ 5 K"),
    ("a > b and c >= d or e < 1", "a > b and c ≥ d or e < 1"),
])
def test_condition_is_set_as(condition, line):
    assert read(node_html(parse_condition(condition))) == line


@pytest.mark.parametrize(("shown", "unit", "line"), [
    ("3.142", "kg/s", "3.142 kg/s"),
    ("-0.50", "", "−0.50"),
    ("-1.20e-05", "m³/s", "−1.20 × 10^(−5) m³/s"),
    ("33.00", "degC", "33.00 °C"),
    ("fails", "", "fails"),
])
def test_quantity_is_set_as(shown, unit, line):
    assert read(quantity_html(shown, unit)) == line


def test_unit_is_upright_and_escaped():
    assert unit_html("kJ/(kg·K)") == "kJ/(kg·K)"
    assert "<" not in unit_html("<b>")


def test_step_has_a_row_each_for_symbols_numbers_and_result():
    html = step_equation_html("T_c", parse("T_sink + dT"), parse("301.15 K + 5 K"), "306.15", "K", "33.00 °C")
    tree = ElementTree.fromstring(html)
    left, right = tree
    assert "".join(left.itertext()) == "Tc"
    assert ["".join(row.itertext()).replace("\u202f", " ") for row in right] == [
        "= Tsink + ΔT", "= 301.15 K + 5 K", "= 306.15 K (33.00 °C)"]
    assert [part.text for part in right.iter("b")] == ["306.15\u202fK"]


def test_step_without_numbers_has_two_rows():
    html = step_equation_html("x", parse("y"), None, "1", "")
    assert len(ElementTree.fromstring(html)[1]) == 2


def test_long_sum_goes_on_before_a_sign_and_loses_nothing():
    text = " + ".join(f"m_dot_{n} * (h_{n} - h_0)" for n in range(1, 9)) + " - W_dot"
    lines = break_lines(parse(text), 40.0)
    assert len(lines) > 1 and all(line.width <= 40.0 for line in lines)
    assert all(read(line.html).lstrip()[0] in "+−" for line in lines[1:])
    assert node_html(parse(text)) == f'<span class="math">{"".join(line.html for line in lines)}</span>'


def test_long_list_goes_on_after_a_comma():
    text = "min(" + ", ".join(f"T_source_{n} - T_e_{n}" for n in range(1, 9)) + ")"
    lines = break_lines(parse(text), 30.0)
    assert len(lines) > 1 and all(read(line.html).endswith(", ") for line in lines[:-1])


def test_long_fraction_is_written_with_a_stroke_and_brackets():
    text = "(" + " + ".join(f"Q_dot_zone_{n}" for n in range(1, 20)) + ") / (W_dot + V_dot)"
    line = read("".join(box.html for box in break_lines(parse(text), 40.0)))
    assert line.startswith("(Q˙_(zone,1) + ") and line.endswith(" + Q˙_(zone,19)) / (Ẇ + V˙ )")


@pytest.mark.parametrize(("formula", "start", "end"), [
    ("sqrt({})", "√(a_", "zone,24)^(2))"),
    ("exp({})", "exp(a_", "zone,24)^(2))"),
    ("({})^0.5", "(a_", "zone,24)^(2))^(0.5)"),
    ("-({})", "−(a_", "zone,24)^(2))"),
    ("b * ({})", "b × (a_", "zone,24)^(2))"),
])
def test_wide_functions_are_broken_inside_their_brackets(formula, start, end):
    text = formula.format(" + ".join(f"a_zone_{n}^2" for n in range(1, 25)))
    lines = break_lines(parse(text), 30.0)
    line = read("".join(box.html for box in lines))
    assert len(lines) > 2 and max(line.width for line in lines) <= 30.0
    assert line.startswith(start) and line.endswith(end)


def test_a_symbol_wider_than_the_line_is_set_smaller():
    lines = break_lines(parse("T_" + "long" * 40), 40.0)
    assert [line.html.startswith('<span style="font-size:') for line in lines] == [True]
    assert lines[0].width <= 40.0


def test_short_formula_is_one_line_and_starts_at_the_symbol():
    html = equation_html(parse("a / b"), "eta")
    assert html.count("<div") == 4 and read(html).startswith("η= {a|b")


def test_twin_hides_the_boxes_from_screen_readers_only_when_it_is_there():
    twin = step_mathml("x", parse("y + 1"), None, "2", "K")
    with_twin = step_equation_html("x", parse("y + 1"), None, "2", "K", twin=twin)
    assert with_twin.startswith(twin + '<div class="equation" aria-hidden="true">')
    assert "aria-hidden" not in step_equation_html("x", parse("y + 1"), None, "2", "K")


@pytest.mark.parametrize(("formula", "line"), [
    ("m_dot * (h_3 - h_4s)", "m˙\u2062(h3−h4s)"),
    ("2 * (3 K - 1 K)", "2×(3−1)\u00a0K"),
    ("2 * -1.5 K", "2×(−1.5\u00a0K)"),
    ("a * (b * c)", "a\u2062(b\u2062c)"),
    ("-1.2e-5", "−1.2×10−5"),
    ("min(a, b)", "min\u2061(a,b)"),
    ("h(«A&B», p=p_c, x=1)", "h(A&B;pc,x=1)"),
])
def test_mathml_says_the_same(formula, line):
    tree = ElementTree.fromstring(f"<math>{node_mathml(parse(formula))}</math>")
    assert "".join(tree.itertext()) == line


@pytest.mark.parametrize(("formula", "tag", "parts"), [
    ("a / b", "mfrac", ["a", "b"]), ("(a + b)^2", "msup", ["(a+b)", "2"]), ("sqrt(a + b)", "msqrt", ["a+b"]),
    ("eta_is", "msub", ["η", "is"]), ("Q_dot", "mover", ["Q", "˙"]),
])
def test_mathml_structure(formula, tag, parts):
    element = next(ElementTree.fromstring(f"<math>{node_mathml(parse(formula))}</math>").iter(tag))
    assert ["".join(part.itertext()) for part in element] == parts


def test_step_in_mathml_is_one_chain_of_equals():
    twin = step_mathml("T_c", parse("T_s + dT"), parse("301.15 K + 5 K"), "306.15", "K", "33.00 °C")
    text = "".join(ElementTree.fromstring(twin).itertext()).replace("\u00a0", " ")
    assert text == "Tc=Ts+ΔT=301.15 K+5 K=306.15 K (33.00 °C)"


def test_negative_printed_number_stays_in_brackets():
    """A record's numbers hold negative operands as negatives of positive quantities."""
    node = parse("a + b")
    numbers = type(node)("+", Number(1.0, "1.0"), Negative(Quantity(2.5, "2.5", "K")))
    assert read(node_html(numbers)) == "1.0 + (−2.5 K)"
