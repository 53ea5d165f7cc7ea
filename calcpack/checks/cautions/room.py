"""Room and machine to cautions: ventilation, ignition, detection, leak checks, the warming a plant causes."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.charge import MOLAR_VOLUME, spread
from calcpack.checks.cautions.fluid_hazard import cited, flammable, halocarbon, unsaturated
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import air_flow, density, mass, percent, temperature
from calcpack.fluids.register import Fact

VENTILATION, FIRE, ENVIRONMENT = "Ventilation of the room", "Fire", "Leaks and environment"

AIR_MOLAR_MASS = 28.96
"""Of air [g/mol] (RD 552/2019 IF-07 5.1 compares with it, from the text)."""
GLOWING = 273.15 + 400.0
BUND_FROM = 2000.0
DETECTION_FROM = 500.0
LEAK_CHECKS = ((500.0, 3), (50.0, 6), (5.0, 12))
LEAK_CHECKS_BY_MASS = ((100.0, 3), (10.0, 6), (1.0, 12))
DEFAULT_RECOVERY = 0.95

M1 = Topic("C-M1", VENTILATION, "Emergency ventilation",
           "A machinery room is ventilated with this flow in an emergency, at least 6 and at most 15 air changes an "
           "hour.", Source("RD 552/2019 IF-07 5.2", TEXT))
M2 = Topic("C-M2", VENTILATION, "Room below ground",
           "A machinery room below ground has 6 air changes an hour while people are in it.",
           Source("RD 552/2019 IF-07 5.1", TEXT))
M3 = Topic("C-M3", VENTILATION, "Ventilation by the United States formula",
           "The alternative formula counts with the square root of the charge.", Source("ASHRAE 15", MEMORY))
M4 = Topic("C-M4", VENTILATION, "Height of the extract",
           "A vapour heavier than air gathers at the floor, and at least half of the extract is low; a lighter one is "
           "extracted high.", Source("RD 552/2019 IF-07 5.1", TEXT))
M6 = Topic("C-M6", FIRE, "Glowing surface in the plant room",
           "No surface above this temperature stands near a refrigerating plant.",
           Source("RD 552/2019 IF-04 4.2.2", TEXT))
M7 = Topic("C-M7", FIRE, "Set point of the detector",
           "A detector starts the fan before a quarter of the flammability limit; ventilated below half of it the "
           "plant is no source of ignition.", Source("RD 552/2019 IF-04 3.3", TEXT))
M9 = Topic("C-M9", FIRE, "Explosion vent",
           "Where a leak can reach the flammability limit the room has a vent panel of V/100 square metres, at least "
           "1 m².", Source("RD 552/2019 IF-07 7.2", TEXT))
M10 = Topic("C-M10", ENVIRONMENT, "Bund for ammonia", "Above this charge of ammonia the room holds a spill.",
            Source("RD 552/2019 IF-07 6.3", TEXT))
M11 = Topic("C-M11", ENVIRONMENT, "Automatic leak detection",
            "A fluorinated charge from this CO2 equivalent on has automatic leak detection.",
            Source("RD 552/2019 IF-06 4.3", TEXT))
M12 = Topic("C-M12", ENVIRONMENT, "Leak checks",
            "Fluorinated charges from 5, 50 and 500 t of CO2 equivalent are checked for leaks each 12, 6 and 3 months; "
            "unsaturated ones from 1, 10 and 100 kg.", Source("Regulation (EU) 2024/573", MEMORY))
M14 = Topic("C-M14", ENVIRONMENT, "Total equivalent warming",
            "Leaks, the loss at the end and the energy taken add up to the warming that the plant causes.",
            Source("RD 552/2019 IF-02 App. 2", TEXT))


def emergency_ventilation(charge: float, room: float | None = None) -> Worked:
    """The flow [L/s] by the charge [kg], kept between 6 and 15 changes an hour of the room [m³] where it is known."""
    if room is None:
        return worked("V_dot", "14 * m^(2/3)", "L/s", m=(charge, "kg"))
    return worked("V_dot", "min(max(14 * m^(2/3), 6 * V / 3.6), 15 * V / 3.6)", "L/s", m=(charge, "kg"),
                  V=(room, "m³"))


def american_ventilation(charge: float) -> Worked:
    """The flow [L/s] by the charge [kg], after 100·√G cfm with G in lb."""
    return worked("V_dot", "70 * sqrt(m)", "L/s", m=(charge, "kg"))


def annual_leak(charge: float) -> Worked:
    """The yearly leak [kg] by the charge [kg]."""
    return worked("L", "0.4 * m^(2/3)", "kg", m=(charge, "kg"))


def _poured(case: Case) -> bool:
    """Whether a leak of the working fluid is a matter at all."""
    return case.working is not None and not case.is_fluid("R-718")


def _flow(case: Case, topic: Topic, needed: Worked) -> Caution:
    """The given ventilation against a needed one [L/s]."""
    flow = case.given("ventilation")
    threshold = f"below {air_flow(case.solution, needed.value / 1000.0)} ({needed.shown})"
    if flow is None:
        return topic.not_evaluated(case.missing("ventilation"), threshold, needed.line)
    return topic.evaluated(flow * 1000.0 < needed.value, air_flow(case.solution, flow), threshold, "", needed.line)


def ventilation(case: Case) -> Caution | None:
    """The given ventilation against the emergency flow."""
    if not _poured(case):
        return None
    charge = case.given("charge")
    if charge is None:
        return M1.not_evaluated(case.missing("charge", "ventilation"))
    return _flow(case, M1, emergency_ventilation(charge, case.given("room_volume")))


def below_ground(case: Case) -> Caution | None:
    """The given ventilation against 6 changes an hour, where the room lies below ground."""
    if not _poured(case) or case.room_level == "above-ground":
        return None
    room = case.given("room_volume")
    if room is None:
        return M2.not_evaluated(case.missing("room_volume"))
    return _flow(case, M2, worked("V_dot", "6 * V / 3.6", "L/s", V=(room, "m³")))


def alternative_ventilation(case: Case) -> Caution | None:
    """The given ventilation against the American formula."""
    if not _poured(case):
        return None
    charge = case.given("charge")
    return M3.not_evaluated(case.missing("charge")) if charge is None else _flow(case, M3, american_ventilation(charge))


def extract(case: Case) -> Caution | None:
    """The molar mass against that of air."""
    if not _poured(case) or case.molar_mass is None:
        return None
    heavy = case.molar_mass > AIR_MOLAR_MASS
    return M4.evaluated(heavy, f"{case.molar_mass:.2f} g/mol", f"above {AIR_MOLAR_MASS} g/mol, air",
                        "heavier than air: low" if heavy else "lighter than air: high")


def hottest(case: Case) -> tuple[float, str]:
    """The hottest surface that can be reached, or the hottest fluid in its place, and which it is."""
    given = case.given("surface_temperature")
    if given is not None:
        return given, "the surface as given"
    return max([*case.of_points("T"), *case.of_streams("T_in", "T_out")]), \
        "a bare surface is taken as hot as the hottest fluid in it"


def glowing(case: Case) -> Caution | None:
    """The hottest surface against 400 °C."""
    if not _poured(case):
        return None
    T, which = hottest(case)
    return M6.evaluated(T > GLOWING, temperature(case.solution, T), f"above {temperature(case.solution, GLOWING)}",
                        which)


def detector(case: Case) -> Caution | None:
    """A quarter of the flammability limit, for fluids that burn."""
    LFL = case.number("LFL") if flammable(case) else None
    if LFL is None or case.molar_mass is None:
        return None
    point = worked("c_25", "0.25 * LFL", "kg/m³", LFL=(LFL, "kg/m³"))
    share = worked("y_25", f"c_25 * {MOLAR_VOLUME} / M", "", c_25=(point.value, "kg/m³"), M=(case.molar_mass, "g/mol"))
    return M7.evaluated(True, f"{density(case.solution, point.value)}, {percent(share.value)} by volume",
                        "any fluid with a flammability limit", "", lines(point, share))


def vent(case: Case) -> Caution | None:
    """The charge spread over the room against the flammability limit."""
    LFL = case.number("LFL") if flammable(case) else None
    if LFL is None:
        return None
    found = spread(case)
    threshold = f"at or above {density(case.solution, LFL)}"
    if found is None:
        return M9.not_evaluated(case.missing("charge", "room_volume"), threshold)
    area = worked("A", "max(V / 100, 1)", "m²", V=(case.given("room_volume"), "m³"))
    reached = found.value >= LFL
    return M9.evaluated(reached, density(case.solution, found.value), threshold,
                        "the charge spread evenly; a leak gathers before it spreads",
                        lines(found, area if reached else None))


def bund(case: Case) -> Caution | None:
    """For ammonia only."""
    if not case.is_fluid("R-717"):
        return None
    charge, threshold = case.given("charge"), f"above {mass(case.solution, BUND_FROM)}"
    if charge is None:
        return M10.not_evaluated(case.missing("charge"), threshold)
    return M10.evaluated(charge > BUND_FROM, mass(case.solution, charge), threshold)


def warming(case: Case) -> Fact | None:
    """The warming potential over 100 years, of the fourth report where the register has it, as the EU rules count."""
    for edition in ("GWP100 AR4", "GWP100 AR5", "GWP100 AR6", "GWP100 other"):
        found = case.fact(edition)
        if found is not None:
            return found
    return None


def _equivalent(case: Case) -> Worked | None:
    potential, charge = warming(case), case.given("charge")
    if potential is None or charge is None:
        return None
    return worked("m_CO2", "m * GWP / 1000", "t", m=(charge, "kg"), GWP=potential.number)


def detection(case: Case) -> Caution | None:
    """The CO2 equivalent of a fluorinated charge against 500 t."""
    if not halocarbon(case):
        return None
    found, threshold = _equivalent(case), f"at or above {DETECTION_FROM:g} t of CO2 equivalent"
    if found is None:
        return M11.not_evaluated(_why_no_equivalent(case), threshold)
    return M11.evaluated(found.value >= DETECTION_FROM, f"{found.shown} of CO2 equivalent", threshold,
                         _which_potential(case), found.line)


def leak_checks(case: Case) -> Caution | None:
    """By CO2 equivalent, or by mass for unsaturated fluids."""
    if not halocarbon(case):
        return None
    by_mass, charge = unsaturated(case), case.given("charge")
    threshold = "from 1, 10, 100 kg" if by_mass else "from 5, 50, 500 t of CO2 equivalent"
    found = _equivalent(case)
    if charge is None or (found is None and not by_mass):
        return M12.not_evaluated(_why_no_equivalent(case), threshold)
    amount = charge if by_mass else found.value
    months = next((each for limit, each in (LEAK_CHECKS_BY_MASS if by_mass else LEAK_CHECKS) if amount >= limit), None)
    value = mass(case.solution, charge) if by_mass else f"{found.shown} of CO2 equivalent"
    return M12.evaluated(months is not None, f"{value}: " + (f"each {months} months" if months else "none"), threshold,
                         "unsaturated: counted by mass" if by_mass else _which_potential(case),
                         "" if by_mass else found.line)


def _which_potential(case: Case) -> str:
    potential = warming(case)
    return f"{potential.quantity} {potential.value}: {cited(potential)}"


def _why_no_equivalent(case: Case) -> str:
    if warming(case) is None:
        return f"the register has no warming potential of {case.working.designation}"
    return case.missing("charge")


def total_warming(case: Case) -> Caution | None:
    """Information, once charge, energy, years and the energy's CO2 are given."""
    names = ("charge", "annual_energy", "years", "grid_emission")
    if case.working is None or all(case.given(name) is None for name in names):
        return None
    potential = warming(case)
    if potential is None:
        return M14.not_evaluated(_why_no_equivalent(case))
    if case.missing(*names):
        return M14.not_evaluated(case.missing(*names))
    recovery = case.given("recovery")
    year = 365.25 * 86400.0
    leak = annual_leak(case.given("charge"))
    total = worked("TEWI", "GWP * L * n + GWP * m * (1 - alpha) + n * E * beta", "kg", GWP=potential.number,
                   L=(leak.value, "kg/a"), n=(case.given("years") / year, "a"), m=(case.given("charge"), "kg"),
                   alpha=DEFAULT_RECOVERY if recovery is None else recovery,
                   E=(case.given("annual_energy") * year / 3.6e6, "kWh/a"),
                   beta=(case.given("grid_emission") * 3.6e6, "kg/kWh"))
    return M14.evaluated(False, f"{total.value / 1000.0:.4g} t of CO2 equivalent", "none: information",
                         _which_potential(case) + ("; recovery of 95 % is the rule's" if recovery is None else "")
                         + ("; the charge of the first circuit alone" if case.other_circuits else ""),
                         lines(leak, total))


CAUTIONS = (ventilation, below_ground, alternative_ventilation, extract, glowing, detector, vent, bund, detection,
            leak_checks, total_warming)

OF_CIRCUIT = (ventilation, alternative_ventilation, extract, detector, vent, bund, detection, leak_checks)
"""Those that each circuit of a cascade has for itself; the energy of the plant counts once."""
