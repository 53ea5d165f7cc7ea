"""Lines of the property diagrams: saturation dome and the paths between states, in print units.

A figure computes nothing of its own, so the record holds the lines; they are
rounded to six digits, which no eye can tell from more.
"""
from __future__ import annotations

import math
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
    "p-v": (("v", "m³/kg", "ft³/lb"), ("p", "bar", "psi")),
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
    if kind not in ("T-s", "log p-h"):
        return None
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
        return _gas_path(path, ends, axes)
    fixed = path.along
    moving = {"p": "h" if start.h else "T", "v": "T"}.get(fixed, "p")
    constant, at_end = _of(solution, start, fixed), _of(solution, end, fixed)
    read = [_reader(fluid, quantity, fixed, moving) for quantity in axes]
    first, last = _of(solution, start, moving), _of(solution, end, moving)
    span = (last - first) or 1.0
    xs, ys = [ends[0][0]], [ends[0][1]]
    for value in _values(fluid, fixed, constant, first, last):
        # What is constant but for a loss, such as the pressure along an exchanger, falls in step with what moves.
        level = constant + (at_end - constant) * (value - first) / span
        try:
            x, y = (one(level, value) for one in read)
        except CalcpackError:
            continue
        xs.append(x)
        ys.append(y)
    return [*xs, ends[1][0]], [*ys, ends[1][1]]


def _gas_path(path: Path, ends: list[tuple[float, float]], axes: tuple[str, str]) -> tuple[list[float], list[float]]:
    """A change of an ideal gas of constant heat capacity between two corners, from the corners alone.

    What is constant along an axis is straight. Else, in p and v, it is a power
    law, p v^n = const; in T and s the temperature rises exponentially with s.
    """
    (x0, y0), (x1, y1) = ends
    if path.along in axes or x0 == x1:
        return [x0, x1], [y0, y1]
    shares = [index / POINTS for index in range(POINTS + 1)]
    xs = [x0 + (x1 - x0) * share for share in shares]
    if axes[1] == "T":
        return xs, [y0 * (y1 / y0) ** share for share in shares]
    exponent = math.log(y1 / y0) / math.log(x1 / x0)
    return xs, [y0 * (x / x0) ** exponent for x in xs]


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
    if fixed == "v":
        at_density = fluid.reader(quantity, ("T", "rho"))
        return lambda v, T: at_density(T, 1.0 / v)
    return fluid.reader(quantity, (fixed, moving))


def _six(value: float) -> float:
    return float(f"{value:.6g}")
