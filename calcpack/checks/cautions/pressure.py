"""Pressures to cautions on pressure equipment, standstill and relief."""
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
# EN 378-2 Table 2: reference temperature of an air-cooled high side, ambient up to 32 °C (from memory).
STANDSTILL_T = 273.15 + 55.0
# Relief by latent heat is invalid near the critical pressure (RD 552 IF-08 3.3.4.3 note, from the text); the 0.9 is
# a choice made here.
RELIEF_SHARE = 0.9

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
            Source("RD 552/2019 IF-06 1.2 (rule, from the text); 55 °C from EN 378-2 Table 2", MEMORY))
R5 = Topic("C-R5", HAZARD, "Relief near the critical pressure",
           "Near the critical pressure the heat of evaporation vanishes, and relief valves cannot be sized by it.",
           Source("RD 552/2019 IF-08 3.3.4.3 note; the share of 0.9 is calcpack's choice", TEXT))
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


def standstill(case: Case) -> Caution | None:
    """Saturation at 55 °C against the highest operating pressure."""
    if case.working is None:
        return None
    at = temperature(case.solution, STANDSTILL_T)
    T_crit = case.constant("T_crit")
    p = case.bubble_pressure(STANDSTILL_T)
    if p is None:
        why = "is above the critical temperature: the standstill pressure hangs on charge and volume" \
            if T_crit is not None and T_crit <= STANDSTILL_T else "has no saturation pressure on this equation"
        return P18.not_evaluated(f"{at} {why}")
    operating = max(case.of_points("p"))
    return P18.evaluated(p > operating, f"{pressure(case.solution, p)} at {at}",
                         f"above the highest operating pressure, {pressure(case.solution, operating)}",
                         "bubble point; the ambient temperature is not an input of this sheet")


def relief(case: Case) -> Caution | None:
    """The highest pressure against the critical one."""
    p_crit = case.constant("p_crit")
    if case.working is None or p_crit is None:
        return None
    share = max(case.of_points("p")) / p_crit
    return R5.evaluated(share > RELIEF_SHARE, f"{share:.3f} of the critical pressure", f"above {RELIEF_SHARE}",
                        "at the highest operating pressure; the relieving pressure lies above it")


def freezing_at_rest(case: Case) -> Caution | None:
    """A working fluid whose equation ends above 0 °C is solid not far below."""
    if case.working is None:
        return None
    return H11.evaluated(case.working.T_min >= 273.15, temperature(case.solution, case.working.T_min),
                         f"at or above {temperature(case.solution, 273.15)}")


def _highest(case: Case) -> float | None:
    if case.working is None and not case.streams:
        return None
    found = [*(case.of_points("p") if case.working is not None else ()), *case.of_streams("p")]
    return max(found, default=None)


def _group(case: Case) -> str:
    group = case.fact("PED fluid group")
    words = "volume and diameter are not inputs of this sheet"
    if group is None:
        return words
    return f"fluid group {group.value} ({group.source}); {words}"


def _absolute(case: Case, value: float) -> str:
    return f"above {pressure(case.solution, value)} absolute"


CAUTIONS = (europe, gas_or_liquid, united_states, standstill, relief, freezing_at_rest)
