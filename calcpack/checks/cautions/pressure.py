"""Pressures to cautions on the scope of pressure-equipment rules and on standstill."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import COMPUTED, MEMORY, TEXT, Caution, Source, Topic
from calcpack.checks.entries import gauge, pressure, temperature
from calcpack.units import unit

HAZARD = "Pressure"
NORMAL_ATMOSPHERE = 101325.0

# PED 2014/68/EU Art. 1: above 0.5 bar gauge (from the text).
EUROPE_FROM = 0.5e5
# ASME BPVC VIII-1, U-1: above 15 psi, internal or external (from memory).
UNITED_STATES_FROM = unit("psi").to_si(15.0)
# EN 378-2 Table 2: ambient up to, then the reference temperature of an air-cooled high side (°C, from memory); a low
# side outdoors has that of the ambient itself.
REFERENCE_T = ((32.0, 55.0), (38.0, 59.0), (43.0, 63.0), (55.0, 67.0))

P1 = Topic("C-P1", HAZARD, "Pressure equipment",
           "Equipment above this pressure falls under the European pressure equipment rules, which set its category, "
           "design and inspection by content, volume and pressure.",
           Source("PED 2014/68/EU Art. 1", TEXT))
P2 = Topic("C-P2", HAZARD, "Gas or liquid in the classification",
           "A fluid whose vapour pressure at the maximum allowable temperature exceeds this counts as a gas when its "
           "equipment is classified, also where it is liquid.",
           Source("French decree 99-1046 Art. 3, transposing the European figures", TEXT))
P16 = Topic("C-P16", HAZARD, "Pressure vessel code, United States",
            "Vessels above this pressure and over 6 in inside diameter come into the scope of the US vessel code.",
            Source("ASME BPVC VIII-1 U-1", MEMORY))
P18 = Topic("C-P18", HAZARD, "Standstill pressure",
            "At rest in warm surroundings the whole circuit comes to this saturation pressure, and the maximum "
            "allowable pressure must not be below it; the operating pressure alone does not set it.",
            Source("RD 552/2019 IF-06 1.2 (rule, from the text); temperatures from EN 378-2 Table 2", MEMORY))
H11 = Topic("C-H11", HAZARD, "Freezing at standstill",
            "A fluid that freezes near ambient temperature can block or burst pipes when the plant stands still.",
            Source("lowest temperature of the fluid's equation of state", COMPUTED))


def europe(case: Case) -> Caution | None:
    """Any pressure of fluid or streams above 0.5 bar gauge."""
    highest = _highest(case)
    if highest is None:
        return None
    solution = case.solution
    return P1.evaluated(highest - solution.p_atm > EUROPE_FROM, gauge(solution, highest),
                        f"above {gauge(solution, solution.p_atm + EUROPE_FROM, 2)}", _group(case))


def is_gas(case: Case) -> bool:
    """Whether the working fluid counts as a gas, by its vapour pressure at the highest temperature computed."""
    hottest, T_crit = max(case.of_points("T")), case.constant("T_crit")
    if T_crit is not None and hottest >= T_crit:
        return True
    p = case.bubble_pressure(hottest)
    return p is None or p > NORMAL_ATMOSPHERE + EUROPE_FROM


def gas_or_liquid(case: Case) -> Caution | None:
    """The saturation pressure at the highest temperature of the working fluid."""
    if case.working is None:
        return None
    hottest = max(case.of_points("T"))
    limit = NORMAL_ATMOSPHERE + EUROPE_FROM
    where = f"at {temperature(case.solution, hottest)}, the highest temperature computed; the maximum allowable " \
            "temperature is not an input of this sheet"
    T_crit = case.constant("T_crit")
    if T_crit is not None and hottest >= T_crit:
        return P2.evaluated(True, "above the critical temperature: gas", _absolute(case, limit), where)
    p = case.bubble_pressure(hottest)
    if p is None:
        return P2.not_evaluated(f"no saturation pressure {where}", _absolute(case, limit))
    return P2.evaluated(p > limit, f"{pressure(case.solution, p)}: {'gas' if p > limit else 'liquid'}",
                        _absolute(case, limit), where)


def united_states(case: Case) -> Caution | None:
    """Any pressure of fluid or streams above 15 psi gauge."""
    highest = _highest(case)
    if highest is None:
        return None
    solution = case.solution
    return P16.evaluated(highest - solution.p_atm > UNITED_STATES_FROM, gauge(solution, highest),
                         f"above {gauge(solution, solution.p_atm + UNITED_STATES_FROM, 3)}",
                         "the diameter is not an input of this sheet")


def reference_temperature(ambient: float | None) -> float | None:
    """The reference temperature [K] of an air-cooled high side by the highest ambient one; None beyond the table."""
    degrees = 0.0 if ambient is None else ambient - 273.15
    return next((273.15 + high for limit, high in REFERENCE_T if degrees <= limit + 1e-9), None)


def standstill(case: Case) -> Caution | None:
    """Saturation at the reference temperature against PS, or against the highest operating pressure."""
    if case.working is None:
        return None
    ambient, PS = case.given("ambient_max"), case.given("PS")
    T = reference_temperature(ambient)
    if T is None:
        return P18.not_evaluated("the table of reference temperatures ends at an ambient temperature of 55 °C")
    at = temperature(case.solution, T)
    T_crit, p = case.constant("T_crit"), case.bubble_pressure(T)
    if p is None:
        why = "is above the critical temperature: the standstill pressure hangs on charge and volume" \
            if T_crit is not None and T_crit <= T else "has no saturation pressure on this equation"
        return P18.not_evaluated(f"{at} {why}")
    operating = max(case.of_points("p"))
    least, name = (operating, "the highest operating pressure") if PS is None else (PS, "PS")
    note = "the ambient temperature is not given: up to 32 °C" if ambient is None else \
        f"air-cooled high side, ambient up to {temperature(case.solution, ambient)}"
    return P18.evaluated(p > least, f"{pressure(case.solution, p)} at {at}",
                         f"above {name}, {pressure(case.solution, least)}", f"bubble point; {note}")


def freezing_at_rest(case: Case) -> Caution | None:
    """A working fluid whose equation ends above the lowest ambient temperature is solid not far below."""
    if case.working is None:
        return None
    ambient = case.given("ambient_min")
    least = 273.15 if ambient is None else ambient
    return H11.evaluated(case.working.T_min >= least, temperature(case.solution, case.working.T_min),
                         f"at or above {temperature(case.solution, least)}",
                         "" if ambient is None else "the lowest temperature of the surroundings")


def _highest(case: Case) -> float | None:
    if case.working is None and not case.streams:
        return None
    found = [*(case.of_points("p") if case.working is not None else ()), *case.of_streams("p")]
    return max(found, default=None)


def _group(case: Case) -> str:
    group = case.fact("PED fluid group")
    words = "the category follows volume or nominal size"
    if group is None:
        return words
    return f"fluid group {group.value} ({group.source}); {words}"


def _absolute(case: Case, value: float) -> str:
    return f"above {pressure(case.solution, value)} absolute"


CAUTIONS = (europe, gas_or_liquid, united_states, standstill, freezing_at_rest)
