"""Pressure, volume and size to the indicative category of pressure equipment, and to its tests.

The directive counts gauge pressures in bar, volumes in litres, pipes by DN.
A category found here is indicative: the maker declares it.
"""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.pressure import is_gas
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import gauge, mass, temperature
from calcpack.units import unit

HAZARD = "Pressure equipment category"

STEAM_FROM = 273.15 + 110.0
STEAM_BOILER, HOT_WATER = unit("psi").to_si(15.0), unit("psi").to_si(160.0)
HOT_WATER_T = unit("degF").to_si(250.0)
EVACUATE_FROM = 20.0
OPERATING_SHARE = 0.9

SCOPE = Source("French decree 99-1046 Art. 3, transposing the European figures", TEXT)
ANNEX = Source("PED 2014/68/EU Annex II", MEMORY)

P3 = Topic("C-P3", HAZARD, "Vessel: beyond sound engineering practice",
           "Above these figures of pressure times volume a vessel has a category; at or below, sound engineering "
           "practice is enough.", SCOPE)
P9 = Topic("C-P9", HAZARD, "Vessel: indicative category",
           "The category decides on the modules by which a vessel is assessed; the maker declares it.", ANNEX)
P6 = Topic("C-P6", HAZARD, "Piping: beyond sound engineering practice",
           "Above these figures of nominal size and pressure piping has a category.", SCOPE)
P12 = Topic("C-P12", HAZARD, "Piping: indicative category",
            "The category decides on the modules by which piping is assessed; the maker declares it.", ANNEX)
P8 = Topic("C-P8", HAZARD, "Steam generator",
           "Heated equipment that makes steam or superheated water above 110 °C in more than 2 L is classified by the "
           "table of steam generators.", SCOPE)
P11 = Topic("C-P11", HAZARD, "Steam generator: indicative category",
            "The category of a steam generator follows pressure times volume, pressure and volume.", ANNEX)
P14 = Topic("C-P14", HAZARD, "Inspection in service",
            "Equipment of this size is inspected at intervals; the French order is an example of such rules.",
            Source("French order of 15 March 2000", TEXT))
P15 = Topic("C-P15", HAZARD, "Coil made of pipes",
            "A finned coil made of pipes, for air, counts as piping and is classified by its DN.",
            Source("PED 2014/68/EU, page of definitions", TEXT))
P17 = Topic("C-P17", HAZARD, "Boiler code, United States",
            "Steam above 15 psi gauge, and hot water above 160 psi gauge or 250 °F, come into the scope of the US code "
            "for power boilers.", Source("ASME BPVC I", MEMORY))
P20 = Topic("C-P20", HAZARD, "Operating near the maximum allowable pressure",
            "The operating pressure keeps below the maximum allowable one with a margin for fouling, inert gas and "
            "the setting of devices; without it machines trip and relief devices weep.",
            Source("RD 552/2019 IF-06 1.2 (rule, from the text); the share of 0.9 is practice", MEMORY))
P21 = Topic("C-P21", HAZARD, "Strength test", "Connecting pipes are tested with gas at this pressure.",
            Source("RD 552/2019 IF-09 1.3", TEXT))
P22 = Topic("C-P22", HAZARD, "Evacuation before charging",
            "Above this charge the circuit is evacuated to less than 270 Pa absolute and held for 30 minutes.",
            Source("RD 552/2019 IF-09 1.6.2", TEXT))

PRACTICE_ONLY = "sound engineering practice"
ABOVE_PRACTICE = "category I or higher"


def vessel_in_scope(PS: float, V: float, group: int, gas: bool) -> bool:
    """Whether a vessel [bar gauge, L] has a category (rows of Art. 4)."""
    product = PS * V
    if gas and group == 1:
        return (V > 1.0 and product > 25.0) or PS > 200.0
    if gas:
        return (V > 1.0 and product > 50.0) or PS > 1000.0
    if group == 1:
        return (V > 1.0 and product > 200.0) or PS > 500.0
    return (PS > 10.0 and product > 10000.0) or PS > 1000.0


def vessel_category(PS: float, V: float, group: int) -> str:
    """The indicative category of a vessel for gas [bar gauge, L] (tables 1 and 2)."""
    if not vessel_in_scope(PS, V, group, gas=True):
        return PRACTICE_ONLY
    if V <= 1.0:
        return ("III" if PS <= 1000.0 else "IV") if group == 1 else "III or higher"
    product = PS * V
    if group == 1:
        return next((name for limit, name in ((50.0, "I"), (200.0, "II"), (1000.0, "III")) if product <= limit), "IV")
    if PS <= 4.0 and product > 1000.0:
        return "III"
    return next((name for limit, name in ((200.0, "I"), (1000.0, "II"), (3000.0, "III")) if product <= limit), "IV")


def steam_category(PS: float, V: float) -> str:
    """The indicative category of a steam generator [bar gauge, L] (table 5)."""
    PSV = PS * V
    if V <= 2.0:
        return PRACTICE_ONLY
    if PSV <= 200.0:
        return "I" if PSV <= 50.0 else "II"
    return "III" if PSV <= 3000.0 and PS <= 32.0 and V <= 1000.0 else "IV"


def pipe_in_scope(PS: float, DN: float, group: int, gas: bool) -> bool:
    """Whether piping [bar gauge, DN] has a category (rows of Art. 4)."""
    PSDN = PS * DN
    if gas:
        return DN > 25.0 if group == 1 else DN > 32.0 and PSDN > 1000.0
    if group == 1:
        return DN > 25.0 and PSDN > 2000.0
    return PS > 10.0 and DN > 200.0 and PSDN > 5000.0


def pipe_category(PS: float, DN: float, group: int) -> str:
    """The indicative category of piping for gas [bar gauge, DN] (tables 6 and 7)."""
    PSDN = PS * DN
    if not pipe_in_scope(PS, DN, group, gas=True):
        return PRACTICE_ONLY
    if group == 1:
        if DN <= 100.0 and PSDN <= 1000.0:
            return "I"
        return "II" if DN <= 350.0 and PSDN <= 3500.0 else "III"
    if DN <= 100.0 or PSDN <= 3500.0:
        return "I"
    return "II" if DN <= 250.0 or PSDN <= 5000.0 else "III"


def inspected_vessel(PS: float, V: float, group: int, steam: bool) -> bool:
    """Whether a vessel [bar gauge, L] is inspected in service by the order."""
    PSV = PS * V
    if steam:
        return PSV > 200.0
    return PSV > 50.0 if group == 1 else PSV > 200.0 and PS > 4.0


def inspected_pipe(PS: float, DN: float, group: int) -> bool:
    """Whether piping for gas [bar gauge, DN] is inspected in service by the order."""
    PSDN = PS * DN
    return DN > 100.0 or PSDN > 1000.0 if group == 1 else DN > 100.0 and PSDN > 3500.0


def _group(case: Case) -> int | None:
    given, found = case.solution.spec.case.safety.fluid_group, case.fact("PED fluid group")
    if given is not None:
        return int(given)
    return None if found is None else int(found.value)


def _vessel(case: Case) -> tuple[float, float, Worked] | None:
    """PS [bar gauge], V [L] and their product, as worked."""
    PS, V = case.given("PS"), case.litres("vessel_volume")
    if PS is None or V is None:
        return None
    bar = case.gauge_bar(PS)
    return bar, V, worked("PSV", "PS * V", "bar·L", PS=(bar, "bar(g)"), V=(V, "L"))


def _pipe(case: Case) -> tuple[float, float, Worked] | None:
    """PS [bar gauge], DN and their product, as worked."""
    PS, DN = case.given("PS"), case.given("pipe_DN")
    if PS is None or DN is None:
        return None
    bar = case.gauge_bar(PS)
    return bar, DN, worked("PSDN", "PS * DN", "bar", PS=(bar, "bar(g)"), DN=DN)


def _unknown(case: Case, topic: Topic, *names: str) -> Caution | None:
    """Why a category cannot be found; None where it can."""
    if _group(case) is None:
        return topic.not_evaluated(f"the register has no fluid group of {case.working.designation}, and none is given")
    gone = case.missing(*names)
    return topic.not_evaluated(gone) if gone else None


def _which(case: Case) -> str:
    return f"{'gas' if is_gas(case) else 'liquid'} of group {_group(case)}"


def vessel(case: Case) -> Caution | None:
    """The largest vessel against the figures of Art. 4."""
    if case.working is None:
        return None
    unknown = _unknown(case, P3, "PS", "vessel_volume")
    if unknown is not None:
        return unknown
    PS, V, product = _vessel(case)
    group, gas = _group(case), is_gas(case)
    threshold = {(1, True): "V > 1 L and PS·V > 25 bar·L, or PS > 200 bar",
                 (2, True): "V > 1 L and PS·V > 50 bar·L, or PS > 1000 bar",
                 (1, False): "V > 1 L and PS·V > 200 bar·L, or PS > 500 bar",
                 (2, False): "PS > 10 bar and PS·V > 10 000 bar·L, or PS > 1000 bar"}[group, gas]
    above = vessel_in_scope(PS, V, group, gas)
    return P3.evaluated(above, f"{product.shown}: {ABOVE_PRACTICE if above else PRACTICE_ONLY}", threshold,
                        f"{_which(case)}; PS gauge", product.line)


def vessel_table(case: Case) -> Caution | None:
    """The indicative category of the largest vessel for gas."""
    found = _vessel(case)
    if case.working is None or found is None or _group(case) is None:
        return None
    if not is_gas(case):
        return P9.not_evaluated("the tables of vessels for liquid are not held here")
    category = vessel_category(found[0], found[1], _group(case))
    return P9.evaluated(category != PRACTICE_ONLY, _category(category), "any category",
                        f"{_which(case)}, table {_group(case)}; indicative", found[2].line)


def _category(name: str) -> str:
    return name if name == PRACTICE_ONLY else f"category {name}"


def piping(case: Case) -> Caution | None:
    """The largest pipe against the figures of Art. 4."""
    if case.working is None:
        return None
    unknown = _unknown(case, P6, "PS", "pipe_DN")
    if unknown is not None:
        return unknown
    PS, DN, product = _pipe(case)
    group, gas = _group(case), is_gas(case)
    threshold = {(1, True): "DN > 25", (2, True): "DN > 32 and PS·DN > 1000 bar",
                 (1, False): "DN > 25 and PS·DN > 2000 bar",
                 (2, False): "PS > 10 bar, DN > 200 and PS·DN > 5000 bar"}[group, gas]
    above = pipe_in_scope(PS, DN, group, gas)
    return P6.evaluated(above, f"DN {DN:g}: {ABOVE_PRACTICE if above else PRACTICE_ONLY}", threshold,
                        f"{_which(case)}; PS gauge", product.line)


def piping_table(case: Case) -> Caution | None:
    """The indicative category of the largest pipe for gas."""
    found = _pipe(case)
    if case.working is None or found is None or _group(case) is None:
        return None
    if not is_gas(case):
        return P12.not_evaluated("the tables of piping for liquid are not held here")
    category = pipe_category(found[0], found[1], _group(case))
    return P12.evaluated(category != PRACTICE_ONLY, _category(category), "any category",
                         f"{_which(case)}, table {_group(case) + 5}; indicative", found[2].line)


def _makes_steam(case: Case) -> bool:
    return case.is_fluid("R-718") and not case.compresses and max(case.of_points("T")) > STEAM_FROM


def steam_generator(case: Case) -> Caution | None:
    """Water heated above 110 °C as the working fluid of an engine."""
    if not _makes_steam(case):
        return None
    T, V = max(case.of_points("T")), case.litres("vessel_volume")
    threshold = f"above {temperature(case.solution, STEAM_FROM)} and 2 L"
    if V is None:
        return P8.not_evaluated(case.missing("vessel_volume"), threshold)
    return P8.evaluated(V > 2.0, f"{temperature(case.solution, T)}, {V:g} L", threshold)


def steam_table(case: Case) -> Caution | None:
    """The indicative category of the steam generator."""
    found = _vessel(case) if _makes_steam(case) else None
    if found is None:
        return None
    category = steam_category(found[0], found[1])
    return P11.evaluated(category != PRACTICE_ONLY, _category(category), "any category", "table 5; indicative",
                         found[2].line)


def inspection(case: Case) -> Caution | None:
    """Vessel and pipe against the order on inspection."""
    group = _group(case) if case.working is not None else None
    found = {"vessel": _vessel(case), "piping": _pipe(case)}
    if group is None or not any(found.values()):
        return None
    vessel_found, pipe_found = found["vessel"], found["piping"]
    inspected = []
    if vessel_found and inspected_vessel(vessel_found[0], vessel_found[1], group, case.is_fluid("R-718")):
        inspected.append("vessel")
    if pipe_found and is_gas(case) and inspected_pipe(pipe_found[0], pipe_found[1], group):
        inspected.append("piping")
    threshold = "vessel PS·V > 50 bar·L, pipe DN > 100 or PS·DN > 1000 bar" if group == 1 else \
        "vessel PS·V > 200 bar·L and PS > 4 bar, pipe DN > 100 and PS·DN > 3500 bar"
    return P14.evaluated(bool(inspected), " and ".join(inspected) or "none", threshold, f"{_which(case)}",
                         lines(*(one[2] for one in found.values() if one)))


def coil(case: Case) -> Caution | None:
    """A stream of gas against the working fluid."""
    gas = next((one for one in case.streams if case.is_gas(case.fluid_of(one))), None)
    if case.working is None or gas is None:
        return None
    return P15.evaluated(True, f"{gas.name}: a gas", "an exchanger between working fluid and air")


def boiler(case: Case) -> Caution | None:
    """Steam and hot water against the figures of the US code."""
    if case.working is None:
        return None
    if _makes_steam(case):
        p = max(case.of_points("p"))
        return P17.evaluated(p - case.solution.p_atm > STEAM_BOILER, gauge(case.solution, p),
                             f"steam above {gauge(case.solution, case.solution.p_atm + STEAM_BOILER)}")
    hot = [(case.value(one.T_out) or 0.0, case.value(one.p) or 0.0) for one in case.streams if case.is_water(one)]
    if not hot:
        return None
    T, p = max(T for T, _ in hot), max(p for _, p in hot)
    shown = temperature(case.solution, T) + (f", {gauge(case.solution, p)}" if p else "")
    return P17.evaluated(T > HOT_WATER_T or p - case.solution.p_atm > HOT_WATER, shown,
                         f"hot water above {gauge(case.solution, case.solution.p_atm + HOT_WATER)} or "
                         f"{temperature(case.solution, HOT_WATER_T)}")


def margin(case: Case) -> Caution | None:
    """The highest operating pressure against the maximum allowable one."""
    if case.working is None:
        return None
    PS = case.given("PS")
    if PS is None:
        return P20.not_evaluated(case.missing("PS"), f"above {OPERATING_SHARE:g} of PS")
    highest = max(case.of_points("p"))
    share = worked("f", "p_max / PS", "", p_max=(case.gauge_bar(highest), "bar(g)"), PS=(case.gauge_bar(PS), "bar(g)"))
    return P20.evaluated(share.value > OPERATING_SHARE, f"{share.shown} of PS", f"above {OPERATING_SHARE:g} of PS",
                         "", share.line)


def strength_test(case: Case) -> Caution | None:
    """The pressure of the test, once the maximum allowable one is given."""
    PS = case.given("PS")
    if case.working is None or PS is None:
        return None
    test = worked("p_test", "1.1 * PS", "bar(g)", PS=(case.gauge_bar(PS), "bar(g)"))
    return P21.evaluated(True, gauge(case.solution, case.solution.p_atm + test.value * 1e5),
                         "any circuit with connecting pipes", "", test.line)


def evacuation(case: Case) -> Caution | None:
    """The charge against 20 kg, for compressors' fluids other than ammonia."""
    if not case.compresses or case.is_fluid("R-717") or case.is_fluid("R-718"):
        return None
    charge, threshold = case.given("charge"), f"above {mass(case.solution, EVACUATE_FROM)}"
    if charge is None:
        return P22.not_evaluated(case.missing("charge"), threshold)
    return P22.evaluated(charge > EVACUATE_FROM, mass(case.solution, charge), threshold,
                         "held below 270 Pa absolute")


CAUTIONS = (vessel, vessel_table, piping, piping_table, steam_generator, steam_table, inspection, coil, boiler, margin,
            strength_test, evacuation)
