"""Pressures, phases and differences to cautions on what the machine can bear."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import (
    COMPUTED,
    MEMORY,
    OF_FACT,
    PRACTICE,
    SECOND_HAND,
    TEXT,
    Caution,
    Source,
    Topic,
)
from calcpack.checks.cautions.fluid_hazard import flammable
from calcpack.checks.entries import difference, pressure, temperature
from calcpack.formula.tree import PropertyCall
from calcpack.plan.facts import ExchangerView

HAZARD = "Cycle and machine"

# All from practice, from memory: single-stage reciprocating compressors to a ratio of 8 to 10; condensing 10 to 15 K
# below the critical temperature; dry expansion with 5 K of superheat; steam exhaust with at most 12 % of moisture.
PRESSURE_RATIO = 8.0
CRITICAL_MARGIN = 15.0
LEAST_SUPERHEAT = 5.0
LEAST_DRYNESS = 0.88
# Smallest differences of practice (from memory): liquid to liquid, evaporator or condenser, gas.
PINCH_LIQUID, PINCH_PHASE_CHANGE, PINCH_GAS = 3.0, 5.0, 10.0
# Steam at most at 565 to 600 °C; gas at a turbine's inlet 1100 °C without cooling (practice, from memory).
HOTTEST_STEAM, UNCOOLED_GAS = 273.15 + 565.0, 273.15 + 1100.0
# Triple point of carbon dioxide (computed; RD 552/2019 IF-04 5.2.3.2 says 5.2 bar).
DRY_ICE = 5.18e5
# A state within rounding of the dew line is dry.
_ROUNDING = 1e-6

K4 = Topic("C-K4", HAZARD, "Pressure ratio",
           "A single-stage reciprocating compressor loses volumetric efficiency and runs hot above this ratio; scroll "
           "and screw machines are bound by their built-in ratio.", PRACTICE)
K5 = Topic("C-K5", HAZARD, "Condensing near the critical point",
           "Near the critical point properties change steeply, the heat of condensation fades and the coefficient of "
           "performance with it.", PRACTICE)
K6 = Topic("C-K6", HAZARD, "Thermal stability of the working fluid",
           "A fluid held near this temperature decomposes; the film at a hot wall is hotter than the state computed.",
           Source("the register's stability limit", MEMORY))
K8 = Topic("C-K8", HAZARD, "Pressure below atmospheric",
           "Air and moisture leak in: non-condensables raise the condensing pressure, and a purge is needed.",
           Source("CoolProp; engineering practice", COMPUTED))
K9 = Topic("C-K9", HAZARD, "Wet steam at the exhaust",
           "Droplets erode the last blades and each percent of mean moisture costs about a percent of efficiency.",
           Source("a study page and textbooks, 10 to 12 % of moisture", SECOND_HAND))
K10_EXPANDER = Topic("C-K10a", HAZARD, "Droplets in the expander",
                     "An expansion that ends in the wet region carries droplets through the expander.",
                     Source("engineering practice; RD 552/2019 IF-04 5.2.3.2 on liquid in machines", TEXT))
K10_COMPRESSOR = Topic("C-K10b", HAZARD, "Liquid to the compressor",
                       "Liquid at the suction washes out the oil and breaks valves.",
                       Source("engineering practice; RD 552/2019 IF-04 5.2.3.2 on liquid in compressors", TEXT))
K11 = Topic("C-K11", HAZARD, "Small superheat",
            "A dry-expansion evaporator needs this superheat to keep liquid from the compressor at part load.",
            PRACTICE)
K14 = Topic("C-K14", HAZARD, "Small pinch",
            "A smaller difference than this calls for an area that is seldom built.", PRACTICE)
K16_STEAM = Topic("C-K16a", HAZARD, "Steam temperature",
                  "Above this steam temperature metal creeps and another class of material is needed.", PRACTICE)
K16_GAS = Topic("C-K16b", HAZARD, "Turbine inlet temperature",
                "Above this gas temperature metal that is not cooled creeps.", PRACTICE)
T8 = Topic("C-T8", HAZARD, "Dry ice",
           "Carbon dioxide below this pressure turns solid and blocks vents and relief outlets.",
           Source("RD 552/2019 IF-04 5.2.3.2; triple point computed", TEXT))


def pressure_ratio(case: Case) -> Caution | None:
    """Of a compressor."""
    ratio = case.part("pressure ratio")
    if ratio is None or case.part("discharge") is None or case.working is None:
        return None
    return K4.evaluated(ratio > PRESSURE_RATIO, f"{ratio:.3f}", f"above {PRESSURE_RATIO:g}",
                        "the kind of compressor is not an input of this sheet")


def near_critical(case: Case) -> Caution | None:
    """The condensing temperature below the critical one."""
    T, T_crit = case.part("condensing"), case.constant("T_crit")
    if T is None or T_crit is None:
        return None
    return K5.evaluated(T_crit - T < CRITICAL_MARGIN, f"{difference(case.solution, T_crit - T)} below",
                        f"less than {difference(case.solution, CRITICAL_MARGIN)} below",
                        f"condensing {temperature(case.solution, T)}, critical {temperature(case.solution, T_crit)}")


def stability(case: Case) -> Caution | None:
    """The hottest state, and the hottest stream against it, against the register's guide."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    guide = case.fact("thermal-stability guide temperature")
    if guide is None:
        return K6.not_evaluated(f"the register has no stability limit of {case.working.designation}")
    hottest = max(case.of_points("T"))
    limit = guide.number + 273.15
    film = max(case.of_streams("T_in", "T_out"), default=hottest)
    note = f"; the hottest stream is at {temperature(case.solution, film)}" if film > hottest else ""
    return K6.evaluated(hottest >= limit, temperature(case.solution, hottest),
                        f"at or above {temperature(case.solution, limit)}",
                        f"{guide.source} [{OF_FACT[guide.confirmed]}]{note}")


def below_atmosphere(case: Case) -> Caution | None:
    """The lowest pressure against the sheet's atmosphere."""
    if case.working is None:
        return None
    lowest = min(case.of_points("p"))
    below = lowest < case.solution.p_atm
    note = "the fluid is flammable: air inside can form a mixture that burns" if below and flammable(case) else ""
    return K8.evaluated(below, pressure(case.solution, lowest),
                        f"below {pressure(case.solution, case.solution.p_atm)}", note)


def exhaust(case: Case) -> Caution | None:
    """The vapour share where an expander ends: steam to its moisture limit, other fluids to the dew line."""
    point = case.point("expander outlet")
    if point is None or case.working is None:
        return None
    topic, limit = (K9, LEAST_DRYNESS) if case.is_fluid("R-718") else (K10_EXPANDER, 1.0)
    share = case.vapour_share(point)
    if share is None:
        return topic.not_evaluated("there is no dew line at this pressure")
    return topic.evaluated(share < limit - _ROUNDING, _dryness(share), f"vapour fraction below {limit:g}")


def suction(case: Case) -> Caution | None:
    """The vapour share where a compressor begins."""
    point = case.point("suction")
    if point is None or case.working is None:
        return None
    share = case.vapour_share(point)
    if share is None:
        return K10_COMPRESSOR.not_evaluated("there is no dew line at this pressure")
    return K10_COMPRESSOR.evaluated(share < 1.0 - _ROUNDING, _dryness(share), "vapour fraction below 1")


def superheat(case: Case) -> Caution | None:
    """The suction temperature above the evaporating one."""
    point, T = case.point("suction"), case.part("evaporating")
    if point is None or T is None or case.working is None:
        return None
    found = case.value(point.T) - T
    # A root leaves a superheat of exactly 5 K a hair below it.
    return K11.evaluated(found < LEAST_SUPERHEAT - _ROUNDING, difference(case.solution, found),
                         f"less than {difference(case.solution, LEAST_SUPERHEAT)}",
                         "the kind of evaporator is not an input of this sheet")


def small_pinch(case: Case) -> Caution | None:
    """The exchanger whose smallest difference is farthest below practice."""
    found = [(case.solution.value(view.series) / _usual_pinch(case, view), view)
             for view in case.solution.plan.facts.exchangers]
    if not found:
        return None
    share, view = min(found, key=lambda one: one[0])
    value = f"{view.name}: {difference(case.solution, case.solution.value(view.series))}"
    return K14.evaluated(share < 1.0 - _ROUNDING, value,
                         f"less than {difference(case.solution, _usual_pinch(case, view))}",
                         "5 K with evaporation or condensation, 3 K liquid to liquid, 10 K with a gas")


def hottest_metal(case: Case) -> Caution | None:
    """Steam, or the gas at a turbine's inlet, against what metal bears."""
    gas = case.part("gas turbine inlet")
    if gas is None and case.working is None:
        # A gas machine names its hottest gas; the machines of steam name their hottest steam by the same word.
        gas = case.part("hottest")
    if gas is not None:
        return K16_GAS.evaluated(gas > UNCOOLED_GAS, temperature(case.solution, gas),
                                 f"above {temperature(case.solution, UNCOOLED_GAS)}")
    if not case.is_fluid("R-718") or case.compresses:
        return None
    hottest = max(case.of_points("T"))
    return K16_STEAM.evaluated(hottest > HOTTEST_STEAM, temperature(case.solution, hottest),
                               f"above {temperature(case.solution, HOTTEST_STEAM)}", "practice is 565 to 600 °C")


def dry_ice(case: Case) -> Caution | None:
    """For carbon dioxide only."""
    if not case.is_fluid("R-744"):
        return None
    lowest = min(case.of_points("p"))
    return T8.evaluated(lowest < DRY_ICE, pressure(case.solution, lowest),
                        f"below {pressure(case.solution, DRY_ICE, 3)}",
                        "a vent to the atmosphere passes this pressure whatever the cycle does")


def _usual_pinch(case: Case, view: ExchangerView) -> float:
    roles = {column.tree.fluid for column in case.solution.step(view.series).columns
             if isinstance(column.tree, PropertyCall)}
    fluids = [case.solution.plan.fluids[role] for role in roles]
    if any(case.is_gas(fluid) for fluid in fluids):
        return PINCH_GAS
    return PINCH_PHASE_CHANGE if "wf" in roles else PINCH_LIQUID


def _dryness(share: float) -> str:
    if share > 1.0 + _ROUNDING:
        return "superheated"
    return "dry vapour" if share > 1.0 - _ROUNDING else f"vapour fraction {share:.4f}"


CAUTIONS = (pressure_ratio, near_critical, stability, below_atmosphere, exhaust, suction, superheat,
            small_pinch, hottest_metal, dry_ice)
