"""Turn a fluid with a saturation line into the arrays that draw its dome."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.errors import Fault, FormulaError, NoAnswerError
from calcpack.fluids.base import Fluid
from calcpack.fluids.two_phase import TwoPhaseFluid


@dataclass(frozen=True, slots=True)
class SaturationCurve:
    """Saturated liquid and vapour at equal temperatures; SI, rising in T [K].

    ``p`` [Pa] is the pressure of the saturated liquid, ``p_vap`` that of the
    vapour: equal for a pure fluid, apart for a blend with a glide.
    """

    T: tuple[float, ...]
    p: tuple[float, ...]
    p_vap: tuple[float, ...]
    h_liq: tuple[float, ...]
    h_vap: tuple[float, ...]
    s_liq: tuple[float, ...]
    s_vap: tuple[float, ...]
    v_liq: tuple[float, ...]
    v_vap: tuple[float, ...]


def saturation_curve(fluid: Fluid, points: int = 60, T_low: float | None = None) -> SaturationCurve:
    """The saturation line from ``T_low`` [K] to just below the critical temperature.

    ``T_low`` is raised to where the line begins; by default it is the higher of
    that and 0.55 T_crit. The points lie closer towards the critical one; a
    blend's line ends at 0.96 T_crit. A point that the model cannot find is left
    out; NoAnswerError if that is more than half of them. Raises FormulaError for
    a fluid without a saturation line.
    """
    if not isinstance(fluid, TwoPhaseFluid):
        raise FormulaError(Fault(f"{fluid.designation} ({fluid.model}) has no saturation line"))
    names = ("T", "x")
    readers = [fluid.reader(output, names) for output in ("p", "h", "s", "v")]
    rows, failures = [], []
    for T in _temperatures(fluid, points, T_low):
        try:
            liquid, vapour = ([read(T, x) for read in readers] for x in (0.0, 1.0))
        except NoAnswerError as error:
            failures.append(error)
            continue
        rows.append((T, liquid[0], vapour[0], liquid[1], vapour[1], liquid[2], vapour[2],
                     liquid[3], vapour[3]))
    if len(failures) > points // 2:
        raise failures[0]
    return SaturationCurve(*(tuple(column) for column in zip(*rows, strict=True)))


def _temperatures(fluid: TwoPhaseFluid, points: int, T_low: float | None) -> list[float]:
    """From low to high, the steps shrinking towards the critical temperature."""
    low = max(fluid.T_lowest, 0.55 * fluid.T_crit if T_low is None else T_low)
    high = fluid.T_crit * (0.96 if fluid.has_gaps else 0.99995)
    high = min(high, fluid.T_max)
    if not low < high:
        low = 0.9 * high
    return [high - (high - low) * (1.0 - place / (points - 1)) ** 2 for place in range(points)]
