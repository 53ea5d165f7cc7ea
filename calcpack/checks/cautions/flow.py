"""Velocities and heads to cautions: erosion, oil return, hammer, cavitation."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, PRACTICE, SECOND_HAND, Caution, Source, Topic
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import gauge, pressure, printed
from calcpack.errors import CalcpackError
from calcpack.plan.facts import StreamLine
from calcpack.units import unit

HAZARD = "Flow in pipes and pumps"

GRAVITY = 9.80665
WATER_VELOCITY, SUCTION_VELOCITY, STEAM_VELOCITY = (0.9, 2.5), (5.0, 20.0), (25.0, 60.0)
"""Usual velocities [m/s] (practice, from memory)."""
NPSH_RATIO, NPSH_RATIO_NEAR_BUBBLE, NPSH_MARGIN = 1.1, 2.0, 0.9
HOT_WATER = 273.15 + 149.0
NEAR_BUBBLE = 10.0
"""Below its bubble point [K] a liquid counts as near it; the page names no figure, this one is calcpack's choice."""

K12 = Topic("C-K12", HAZARD, "Suction head of the feed pump",
            "The pump draws near-saturated liquid: the head available must exceed what the pump needs, which is where "
            "it has already lost 3 % of its head.",
            Source("a page citing ANSI/HI 9.6.1: ratio 1.1 and 0.9 m, 2.0 near the bubble point; another page citing "
                   "ISO 9906 for the 3 %", SECOND_HAND))
K15_WATER = Topic("C-K15a", HAZARD, "Velocity of water in tubes",
                  "Slower water fouls, faster water erodes.", PRACTICE)
K15_GAS = Topic("C-K15b", HAZARD, "Velocity in the suction line",
                "Slower gas leaves the oil behind, faster gas costs pressure.", PRACTICE)
K15_STEAM = Topic("C-K15c", HAZARD, "Velocity in the steam main", "Faster steam erodes and is loud.", PRACTICE)
R11 = Topic("C-R11", HAZARD, "Water hammer",
            "A valve that shuts at once adds this pressure to that of the line; slugs of condensate and quick solenoid "
            "valves do the same.",
            Source("Joukowsky's formula; RD 552/2019 IF-06 3.3.2 asks that liquid hammer does no harm", MEMORY))


def hammer(rho: float, sound: float, change: float) -> Worked:
    """The rise of pressure [bar] by density [kg/m³], velocity of sound and change of velocity [m/s]."""
    return worked("dp", "rho * a * dv / 100000", "bar", rho=(rho, "kg/m³"), a=(sound, "m/s"), dv=(change, "m/s"))


def available_head(p: float, p_sat: float, rho: float, level: float, loss: float) -> Worked:
    """The head available at a pump [m] by pressures [bar], density [kg/m³], level and loss [m]."""
    return worked("NPSH_a", f"(p - p_sat) * 100000 / (rho * {GRAVITY}) + z - h_loss", "m", p=(p, "bar"),
                  p_sat=(p_sat, "bar"), rho=(rho, "kg/m³"), z=(level, "m"), h_loss=(loss, "m"))


def feed_pump(case: Case) -> Caution | None:
    """The head available at the feed pump against what it needs."""
    point = case.point("pump inlet")
    if case.working is None or point is None:
        return None
    head, loss, need = (case.given(name) for name in ("suction_head", "suction_loss", "NPSH_required"))
    if head is None or loss is None:
        return K12.not_evaluated(case.missing("suction_head", "suction_loss", "NPSH_required"))
    T, p = case.value(point.T), case.value(point.p)
    p_sat, rho = case.bubble_pressure(T), case.saturated("rho", T, 0.0)
    if p_sat is None or rho is None:
        return K12.not_evaluated("there is no saturation pressure at the pump inlet")
    found = available_head(p / 1e5, p_sat / 1e5, rho, head, loss)
    if need is None:
        return K12.not_evaluated(f"{case.missing('NPSH_required')}; {found.shown} are available", "", found.line)
    bubble = case.bubble_temperature(p)
    near = T > HOT_WATER if case.is_fluid("R-718") and T > HOT_WATER else bubble is not None and \
        bubble - T < NEAR_BUBBLE
    ratio = NPSH_RATIO_NEAR_BUBBLE if near else NPSH_RATIO
    least = worked("NPSH_min", f"max({ratio:g} * NPSH_r, NPSH_r + {NPSH_MARGIN})", "m", NPSH_r=(need, "m"))
    return K12.evaluated(found.value < least.value, _length(case, found.value), f"below {_length(case, least.value)}",
                         "near the bubble point" if near else "", lines(found, least))


def _length(case: Case, value: float) -> str:
    return printed(case.solution, value, unit("m").dimension, 3)


def _velocity(case: Case, topic: Topic, name: str, usual: tuple[float, float]) -> Caution | None:
    v = case.given(name)
    low, high = (printed(case.solution, one, unit("m/s").dimension, 2) for one in usual)
    if v is None:
        return topic.not_evaluated(case.missing(name), f"outside {low} to {high}")
    return topic.evaluated(not usual[0] <= v <= usual[1], printed(case.solution, v, unit("m/s").dimension, 3),
                           f"outside {low} to {high}")


def water_velocity(case: Case) -> Caution | None:
    """Water in tubes, on a sheet with a stream of it."""
    if case.working is None or not any(case.is_water(one) for one in case.streams):
        return None
    return _velocity(case, K15_WATER, "water_velocity", WATER_VELOCITY)


def suction_velocity(case: Case) -> Caution | None:
    """Gas in the suction line of a compressor."""
    return _velocity(case, K15_GAS, "suction_velocity", SUCTION_VELOCITY) if case.compresses else None


def steam_velocity(case: Case) -> Caution | None:
    """Steam in the main to a turbine."""
    if not case.is_fluid("R-718") or case.compresses:
        return None
    return _velocity(case, K15_STEAM, "steam_velocity", STEAM_VELOCITY)


def water_hammer(case: Case) -> Caution | None:
    """Water that is stopped at once, in the secondary circuit of the highest pressure."""
    water = [one for one in case.streams if case.is_water(one) and case.value(one.p) is not None]
    if case.working is None or not water:
        return None
    v, PS = case.given("water_velocity"), case.given("PS_secondary")
    if v is None:
        return R11.not_evaluated(case.missing("water_velocity", "PS_secondary"))
    stream = max(water, key=lambda one: case.value(one.p))
    state = _sound(case, stream)
    if state is None:
        return R11.not_evaluated("the model of the stream has no velocity of sound")
    rise = hammer(*state, v)
    p = case.value(stream.p) + rise.value * 1e5
    if PS is None:
        return R11.not_evaluated(f"{case.missing('PS_secondary')}; the rise is "
                                 f"{pressure(case.solution, rise.value * 1e5, 3)}", "", rise.line)
    return R11.evaluated(p > PS, f"{stream.name}: {gauge(case.solution, p)}", f"above {gauge(case.solution, PS)}",
                         "stopped at once, in a rigid pipe", rise.line)


def _sound(case: Case, stream: StreamLine) -> tuple[float, float] | None:
    """Density and velocity of sound of a stream at its inlet; None where its model has none."""
    fluid, T, p = case.fluid_of(stream), case.value(stream.T_in), case.value(stream.p)
    if "a" not in fluid.outputs or T is None:
        return None
    try:
        return fluid.reader("rho", ("p", "T"))(p, T), fluid.reader("a", ("p", "T"))(p, T)
    except CalcpackError:
        return None


CAUTIONS = (feed_pump, water_velocity, suction_velocity, steam_velocity, water_hammer)
