"""Lines of the property diagrams: saturation dome and the paths between states, in print units.

A figure computes nothing of its own, so the record holds the lines; they are
rounded to six digits, which no eye can tell from more.
"""
from __future__ import annotations

from collections.abc import Callable
from typing import Any

from calcpack.errors import CalcpackError
from calcpack.plan.facts import Diagram, Path, StatePoint
from calcpack.solving.solution import Solution
from calcpack.units import Unit, unit

POINTS = 40

AXES: dict[str, tuple[tuple[str, str, str], tuple[str, str, str]]] = {
    "T-s": (("s", "kJ/(kg·K)", "Btu/(lb·°R)"), ("T", "°C", "°F")),
    "p-V": (("v", "L", "ft³"), ("p", "bar", "psi")),
    "T-S": (("s", "J/K", "Btu/°R"), ("T", "K", "°R")),
    "log p-h": (("h", "kJ/kg", "Btu/lb"), ("p", "bar", "psi")),
}


def diagrams(solution: Solution) -> list[dict[str, Any]]:
    """Every diagram that the plan asks for."""
    return [_diagram(solution, one) for one in solution.plan.facts.diagrams if one.kind in AXES]


def _axis_unit(solution: Solution, axis: tuple[str, str, str]) -> Unit:
    return unit(axis[1] if solution.system == "si" else axis[2])


def _diagram(solution: Solution, diagram: Diagram) -> dict[str, Any]:
    x_axis, y_axis = AXES[diagram.kind]
    x_unit, y_unit = (_axis_unit(solution, axis) for axis in (x_axis, y_axis))
    points = {point.number: point for point in solution.plan.facts.states if point.fluid == diagram.fluid}
    fluid = solution.plan.fluids.get(diagram.fluid)

    def in_units(xs: list[float], ys: list[float]) -> dict[str, list[float]]:
        return {"x": [_six(x_unit.from_si(x)) for x in xs], "y": [_six(y_unit.from_si(y)) for y in ys]}

    coldest = min(solution.value(point.T) for point in points.values())
    dome = _dome(fluid, diagram.kind, coldest) if fluid else None
    paths = []
    for path in diagram.paths:
        xs, ys = _path(solution, fluid, path, points, (x_axis[0], y_axis[0]))
        paths.append({"from": path.start, "to": path.end, "style": "solid" if path.along != "straight" else "dashed",
                      **in_units(xs, ys)})
    marks = [{"label": number, **{key: values[0] for key, values in in_units(
        [_of(solution, point, x_axis[0])], [_of(solution, point, y_axis[0])]).items()}}
        for number, point in points.items()]
    return {"kind": diagram.kind, "title": f"{diagram.kind} diagram" + (f" of {fluid.designation}" if fluid else ""),
            "x": {"quantity": x_axis[0], "unit": x_unit.symbol}, "y": {"quantity": y_axis[0], "unit": y_unit.symbol},
            "dome": in_units(*dome) if dome else None, "paths": paths, "points": marks}


def _of(solution: Solution, point: StatePoint, quantity: str) -> float:
    return solution.value(getattr(point, quantity))


def _dome(fluid: Any, kind: str, lowest: float) -> tuple[list[float], list[float]] | None:
    from calcpack.fluids import saturation_curve
    try:
        curve = saturation_curve(fluid, points=60, T_low=lowest - 15.0)
    except CalcpackError:
        # A gas or a stream of constant heat capacity has no dome.
        return None
    if kind == "T-s":
        return [*curve.s_liq, *reversed(curve.s_vap)], [*curve.T, *reversed(curve.T)]
    return [*curve.h_liq, *reversed(curve.h_vap)], [*curve.p, *reversed(curve.p_vap)]


def _path(solution: Solution, fluid: Any, path: Path, points: dict[str, StatePoint],
          axes: tuple[str, str]) -> tuple[list[float], list[float]]:
    start, end = points[path.start], points[path.end]
    ends = [(_of(solution, one, axes[0]), _of(solution, one, axes[1])) for one in (start, end)]
    if path.along == "straight":
        return [ends[0][0], ends[1][0]], [ends[0][1], ends[1][1]]
    if fluid is None:
        return _gas_path(solution, path, ends, axes)
    fixed = path.along
    moving = "h" if fixed == "p" else "p"
    constant = _of(solution, start, fixed)
    read = [_reader(fluid, quantity, fixed, moving) for quantity in axes]
    first, last = _of(solution, start, moving), _of(solution, end, moving)
    xs, ys = [ends[0][0]], [ends[0][1]]
    for value in _values(fluid, fixed, constant, first, last):
        try:
            x, y = (one(constant, value) for one in read)
        except CalcpackError:
            continue
        xs.append(x)
        ys.append(y)
    return [*xs, ends[1][0]], [*ys, ends[1][1]]


def _gas_path(solution: Solution, path: Path, ends: list[tuple[float, float]],
              axes: tuple[str, str]) -> tuple[list[float], list[float]]:
    """An isotherm or a reversible adiabat of an ideal gas between two corners, in p and V or T and S."""
    (x0, y0), (x1, y1) = ends
    if axes == ("s", "T"):
        return [x0, x1], [y0, y1]
    exponent = 1.0 if path.along == "T" else solution.value("gamma")
    xs = [x0 + (x1 - x0) * index / POINTS for index in range(POINTS)]
    return [*xs, x1], [*(y0 * (x0 / x) ** exponent for x in xs), y1]


def _values(fluid: Any, fixed: str, constant: float, first: float, last: float) -> list[float]:
    """Even steps between two states; along an isobar also the saturation lines, where the path has corners."""
    values = [first + (last - first) * index / POINTS for index in range(1, POINTS)]
    if fixed == "p":
        for share in (0.0, 1.0):
            try:
                corner = fluid.reader("h", ("p", "x"))(constant, share)
            except CalcpackError:
                # Above the critical pressure, and for gases, an isobar has no corner.
                continue
            if min(first, last) < corner < max(first, last):
                values.append(corner)
    return sorted(values, reverse=last < first)


def _reader(fluid: Any, quantity: str, fixed: str, moving: str) -> Callable[[float, float], float]:
    if quantity == fixed:
        return lambda a, b: a
    if quantity == moving:
        return lambda a, b: b
    if {fixed, moving} == {"p", "h"}:
        return fluid.reader(quantity, (fixed, moving))
    if fixed == "h":
        return fluid.reader(quantity, ("h", "p"))
    return fluid.reader(quantity, (fixed, moving))


def _six(value: float) -> float:
    return float(f"{value:.6g}")
