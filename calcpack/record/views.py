"""States, streams, exchangers and the sketch to the record's tables, from symbols' values."""
from __future__ import annotations

from typing import Any

from calcpack.formula.tree import PropertyCall
from calcpack.plan.facts import ExchangerView
from calcpack.plan.laid import LaidStep
from calcpack.solving.solution import Solution

Quantity = dict[str, Any]


def quantity(solution: Solution, symbol: str | None) -> Quantity | None:
    """A symbol's value, printed number and unit; None where there is no symbol."""
    if symbol is None or not solution.has(symbol):
        return None
    return {"symbol": symbol, "value": float(solution.value(symbol)), "shown": solution.printing.shown(symbol),
            "unit": solution.unit(symbol).symbol, "also_shown": solution.also_shown(symbol)}


def states(solution: Solution) -> list[dict[str, Any]]:
    """The state table, a row a numbered state."""
    return [{"number": point.number, "label": point.label, "fluid_role": point.fluid,
             **{name: quantity(solution, getattr(point, name)) for name in ("T", "p", "h", "s", "v")},
             "x": _vapour_fraction(solution, point)}
            for point in solution.plan.facts.states]


def _vapour_fraction(solution: Solution, point: Any) -> dict[str, Any]:
    """The vapour fraction of a two-phase state in words for the table; liquid and vapour by name."""
    from calcpack.errors import CalcpackError
    if point.h is None or point.fluid not in solution.plan.fluids:
        return {"shown": "", "unit": ""}
    fluid = solution.plan.fluids[point.fluid]
    try:
        share = fluid.reader("x_eq", ("p", "h"))(solution.value(point.p), solution.value(point.h))
    except CalcpackError:
        return {"shown": "supercritical or gas", "unit": ""}
    # Within rounding of a saturation line the state is named by the line.
    if abs(share) < 1e-7:
        return {"shown": "0 (sat. liquid)", "unit": "", "value": share}
    if abs(share - 1.0) < 1e-7:
        return {"shown": "1 (dry vapour)", "unit": "", "value": share}
    if share < 0.0:
        return {"shown": "liquid", "unit": "", "value": share}
    if share > 1.0:
        return {"shown": "superheated", "unit": "", "value": share}
    return {"shown": f"{share:.4f}", "unit": "", "value": share}


def streams(solution: Solution) -> list[dict[str, Any]]:
    """The stream table."""
    return [{"name": one.name, "role": one.role, "designation": solution.plan.fluids[one.role].designation,
             **{name: quantity(solution, getattr(one, name))
                for name in ("m_dot", "T_in", "T_out", "p", "h_in", "h_out", "Q_dot")}}
            for one in solution.plan.facts.streams]


def exchangers(solution: Solution) -> list[dict[str, Any]]:
    """Each exchanger's temperatures against the heat exchanged, with the row of the pinch."""
    return [_exchanger(solution, view) for view in solution.plan.facts.exchangers]


def _exchanger(solution: Solution, view: ExchangerView) -> dict[str, Any]:
    step = solution.step(view.series)
    index = {column.symbol: at for at, column in enumerate(step.columns)}
    table = solution.program.tables[view.series]
    first, last = table[0][index[view.enthalpy]], table[-1][index[view.enthalpy]]
    duty = solution.value(view.duty)
    rows = []
    for row, cells in zip(step.step.rows, table, strict=True):
        share = (cells[index[view.enthalpy]] - first) / (last - first)
        rows.append({"label": row.label, "q_share": share, "Q_W": share * duty,
                     "T_hot_K": cells[index[view.hot]], "T_cold_K": cells[index[view.cold]]})
    gaps = [cells[index[view.pinch]] for cells in table]
    sides = {side: _role(step, getattr(view, side)) for side in ("hot", "cold")}
    return {"id": step.id, "title": view.name, "Q_dot": quantity(solution, view.duty), "rows": rows,
            "hot_role": sides["hot"], "cold_role": sides["cold"],
            "pinch": {"row": gaps.index(min(gaps)), "dT": quantity(solution, view.series)}}


def _role(step: LaidStep, column: str) -> str | None:
    """The role of the fluid whose temperature a column of a profile is; None where it is no look-up."""
    tree = next(one.tree for one in step.columns if one.symbol == column)
    return tree.fluid if isinstance(tree, PropertyCall) else None


def sketch(solution: Solution) -> dict[str, Any]:
    """The arrangement: boxes on a grid and links between them, with state numbers."""
    drawn = solution.plan.facts.sketch
    return {"nodes": [{"name": box.name, "shape": box.shape, "column": box.column, "row": box.row}
                      for box in drawn.boxes],
            "links": [{"from": link.start, "to": link.end, "label": link.label, "style": link.style}
                      for link in drawn.links]}
