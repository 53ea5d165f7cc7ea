"""Equations as drawn: bars on the axis, ink clear of bars, roots closed, nothing outside the column."""
from __future__ import annotations

import numpy as np
import pytest

from calcpack.formula.parse import parse
from calcpack.formula.typeset import COLUMN, node_html, step_equation_html

EM = 48                     # pixels: 12 pt type at 288 dpi
DPI = 288
LONG = {
    "sum": " + ".join(f"m_dot_{n} * (h_{n} - h_0 - T_0 * (s_{n} - s_0))" for n in range(1, 8)),
    "product": " * ".join(f"eta_component_{n}" for n in range(1, 20)),
    "smallest": "min(" + ", ".join(f"T_source_{n} - T_e_{n} - dT_extra_{n}" for n in range(1, 9)) + ")",
    "numbers": " + ".join(["4.182 kJ/(kg·K) * (311.15 K - 300.12 K)"] * 5),
    "fraction": "(" + " + ".join(f"Q_dot_zone_{n}" for n in range(1, 30)) + ") / W_dot",
    "root": "sqrt(" + " + ".join(f"u_part_{n}^2" for n in range(1, 30)) + ")",
    "property": ("h(«a mixture of three refrigerants in equal parts, as supplied by the maker», "
                 "p=10.123 bar, s=1.7271 kJ/(kg·K))"),
}


def _formula(draw, text: str) -> np.ndarray:
    body = f'<div style="padding:1em">{node_html(parse(text))}</div>'
    style = "@page { size: 40em 12em; margin: 0 } body { margin: 0; font-size: 12pt }"
    return draw(body, style, dpi=DPI) > 0.5


def _runs(line: np.ndarray) -> list[tuple[int, int]]:
    """Where ink starts and ends along a row of pixels."""
    edges = np.flatnonzero(np.diff(np.concatenate(([0], line.astype(int), [0]))))
    return list(zip(edges[::2], edges[1::2], strict=True))


def _longest_bar(ink: np.ndarray) -> tuple[int, int, float]:
    """Left end, right end and middle row of the longest level line, [pixels]."""
    lengths = [max((end - start for start, end in _runs(line)), default=0) for line in ink]
    rows = [row for row, length in enumerate(lengths) if length > 0.97 * max(lengths)]
    start, end = max(_runs(ink[rows[0]]), key=lambda run: run[1] - run[0])
    return start, end, (rows[0] + rows[-1]) / 2


@pytest.mark.parametrize("formula", [
    "1 - long_name / b", "1 - W_dot_c / (long_name / b)", "1 - (a / b) / long_name",
    "1 - sqrt(a / b) / long_name", "1 - long_name / (p_2 / p_1)^((gamma - 1) / gamma)",
    "1 - long_name_x_p / sqrt(a / b)", "1 - Q_dot^2 / long_name",
])
def test_fraction_bar_lies_on_the_axis_and_touches_nothing(draw, formula):
    ink = _formula(draw, formula)
    start, end, middle = _longest_bar(ink)
    minus = [row for row, line in enumerate(ink)
             if any(0.55 * EM < stop - at < 0.65 * EM and stop < start for at, stop in _runs(line))]
    assert abs(middle - (minus[0] + minus[-1]) / 2) <= 0.025 * EM
    columns = ink[:, start:end].any(axis=1)
    bar = round(middle)
    for side in (columns[:bar - 1][::-1], columns[bar + 2:]):
        bare = np.flatnonzero(~side)[0]                       # past the rest of the bar's own thickness
        assert np.flatnonzero(side[bare:])[0] >= 0.09 * EM


@pytest.mark.parametrize("radicand", ["a", "x + y", "a / b", "u_1^2 + u_2^2", "p / (q / r)"])
def test_root_sign_meets_its_line_and_covers_the_radicand(draw, radicand):
    ink = _formula(draw, f"sqrt({radicand})")
    rows, columns = np.flatnonzero(ink.any(axis=1)), np.flatnonzero(ink.any(axis=0))
    sign = ink[:, columns[0]:columns[0] + round(0.7 * EM)]
    line = np.flatnonzero(ink[:, columns[-1] - 2])[0]
    assert abs(np.flatnonzero(sign.any(axis=1))[0] - line) <= 0.03 * EM
    assert line - rows[0] <= 0.03 * EM                         # nothing stands above the line
    # The line goes on from the sign without a gap.
    assert ink[line:line + 4, columns[0] + round(0.85 * EM):columns[-1] - 2].any(axis=0).all()
    assert rows[-1] - np.flatnonzero(sign.any(axis=1))[-1] <= 0.15 * EM


@pytest.mark.parametrize("kind", LONG)
def test_long_equations_stay_inside_the_column(draw, kind):
    assert _reach(draw, kind, COLUMN) <= COLUMN


def test_unbroken_long_equations_do_leave_the_column(draw):
    """The control: the same formulas, not broken, are seen to stand outside."""
    assert all(_reach(draw, kind, 500.0) > COLUMN for kind in LONG)


def _reach(draw, kind: str, column: float) -> float:
    """How far to the right the equation's ink reaches, [em]."""
    node = parse(LONG[kind])
    html = step_equation_html("Q_dot_sink", node, None, "1593.7", "kW", column=column)
    ink = draw(html, "@page { size: 90em 30em; margin: 0 } body { margin: 0; font-size: 12pt }", dpi=72) > 0.5
    return float(np.flatnonzero(ink.any(axis=0))[-1] + 1) / 12
