"""Charge and room to cautions: caps by flammability and toxicity, room rules, measures.

The rules are those of refrigerating plants and heat pumps; on a sheet of
another machine they stand as a guide, and say so.
"""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.fluid_hazard import cited, flammable, is_2L, safety_class
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import air_flow, density, mass
from calcpack.fluids.register import Fact

HAZARD = "Charge and room"

MOLAR_VOLUME = 24.465
"""Of an ideal gas at 25 °C and 101 325 Pa [L/mol]."""
OXYGEN_LIMIT = 0.14
"""Share of refrigerant that leaves 18.0 % of oxygen: 140 000 ppm (RD 552/2019 IF-01 3.7.11, from the text)."""
CO2_LIMIT = 0.10
SEALED_FLOOR = 0.150
ALTERNATIVE_CAP = 150.0
COMFORT_MOLAR_MASS = 42.0

APP2 = Source("RD 552/2019 IF-04 App. 2", TEXT)
APP3 = Source("RD 552/2019 IF-04 App. 3", TEXT)
APP4 = Source("RD 552/2019 IF-04 App. 4", TEXT)

C1 = Topic("C-C1", HAZARD, "Charge caps by flammability",
           "Charges are capped by multiples of the lower flammability limit: above the first cap rules on the room "
           "begin, above the third the plant stands in a machinery room or in the open. Class 2L counts 1.5 times.",
           APP2)
C3 = Topic("C-C3", HAZARD, "Allowance of sealed units",
           "A hermetically sealed unit up to this charge may stand in any room; above it the room decides.", APP2)
C4 = Topic("C-C4", HAZARD, "Charge by toxicity or suffocation",
           "The charge over the room's volume must keep the larger of practical limit and acute exposure limit.", APP2)
C5 = Topic("C-C5", HAZARD, "Governing charge of an occupied room",
           "The allowed charge is the smaller of the results for toxicity and for flammability.", APP2)
C6 = Topic("C-C6", HAZARD, "Room of a unit for people's comfort",
           "A flammable charge in a room that it heats or cools for people needs this floor area; the factor 2.5 is "
           "that of the rule.", APP3)
C7 = Topic("C-C7", HAZARD, "Movable factory-sealed unit",
           "A factory-sealed movable unit with this charge needs this floor area.", APP3)
C8 = Topic("C-C8", HAZARD, "Alternative provisions",
           "The route by RCL, QLMV and QLAV is open to classes A1 and A2L up to this charge; at most 250 m² of floor "
           "are counted and the leak is taken as 10 kg/h.", APP4)
C9 = Topic("C-C9", HAZARD, "Measures by concentration",
           "Up to QLMV no measure is needed, up to QLAV one, above it two (ventilation, shut-off valve, alarm). In the "
           "lowest basement RCL stands for QLMV, and QLAV is never exceeded.", APP4)
C10 = Topic("C-C10", HAZARD, "Instant hazard density",
            "QLAV is the least of the oxygen limit, half of the lower flammability limit for class 2L, and 10 % by "
            "volume for carbon dioxide.", APP4)
C12 = Topic("C-C12", HAZARD, "Share of the flammability limit",
            "A leak of the whole charge must keep to 20 % of the lower flammability limit by the European rule; the "
            "American concentration limit is 25 % of it.",
            Source("RD 552/2019 IF-01 3.7.14 (20 %, from the text); ASHRAE 34 (25 %)", MEMORY))
C13 = Topic("C-C13", HAZARD, "Ventilation to the concentration limit",
            "A steady flow of air keeps a leak of 10 kg/h below RCL.",
            Source("RD 552/2019 IF-04 App. 4 (condition, from the text); the flow 10/RCL", MEMORY))
C15 = Topic("C-C15", HAZARD, "Ventilated enclosure",
            "An enclosure round a flammable charge is kept 20 Pa below the room and drawn with this flow; the room is "
            "at least ten times as large.", Source("RD 552/2019 IF-04 3.3.3, 4.3", TEXT))
C16 = Topic("C-C16", HAZARD, "United States route for class A2L",
            "The charge is measured against half of the lower flammability limit in the volume that a leak disperses "
            "in.", Source("ASHRAE 15-2022", MEMORY))


def caps(LFL: float, two_L: bool) -> tuple[Worked, Worked, Worked]:
    """m₁, m₂ and m₃ [kg] of a lower flammability limit [kg/m³]."""
    formula = "1.5 * {} * LFL" if two_L else "{} * LFL"
    return tuple(worked(f"m_{index}", formula.format(factor), "kg", LFL=(LFL, "kg/m³"))
                 for index, factor in enumerate((4, 26, 130), start=1))


def comfort_charge(LFL: float, height: float, area: float) -> Worked:
    """The largest charge [kg] of a room for people's comfort, by its area [m²] and the unit's height [m]."""
    return worked("m_max", "2.5 * LFL^1.25 * h_0 * sqrt(A)", "kg", LFL=(LFL, "kg/m³"), h_0=(height, "m"),
                  A=(area, "m²"))


def comfort_area(LFL: float, height: float, charge: float) -> Worked:
    """The least area [m²] of such a room, by the charge [kg]."""
    return worked("A_min", "(m / (2.5 * LFL^1.25 * h_0))^2", "m²", m=(charge, "kg"), LFL=(LFL, "kg/m³"),
                  h_0=(height, "m"))


def instant_hazard(molar_mass: float, LFL: float | None, carbon_dioxide: bool) -> tuple[Worked, str]:
    """QLAV [kg/m³] and what governs it; ``LFL`` of a class-2L fluid only."""
    found = [(worked("QLAV", f"{OXYGEN_LIMIT} * M / {MOLAR_VOLUME}", "kg/m³", M=(molar_mass, "g/mol")),
              "the oxygen limit of 140 000 ppm")]
    if LFL is not None:
        found.append((worked("QLAV", "0.5 * LFL", "kg/m³", LFL=(LFL, "kg/m³")), "half of the flammability limit"))
    if carbon_dioxide:
        found.append((worked("QLAV", f"{CO2_LIMIT} * M / {MOLAR_VOLUME}", "kg/m³", M=(molar_mass, "g/mol")),
                      "10 % by volume"))
    return min(found, key=lambda one: one[0].value)


def measures(concentration: float, least: float, hazard: float) -> int:
    """0, 1 or 2 measures for a charge over room volume, all in kg/m³."""
    return 0 if concentration <= least else 1 if concentration <= hazard else 2


def ventilated_enclosure(charge: float, vapour_density: float) -> Worked:
    """The flow [m³/h] drawn from an enclosure, by the charge [kg] and the vapour's density at 25 °C and 1 atm."""
    return worked("V_dot", "max(15 * 4 * m / rho, 2)", "m³/h", m=(charge, "kg"), rho=(vapour_density, "kg/m³"))


def spread(case: Case) -> Worked | None:
    """The whole charge over the room's volume [kg/m³]; None where one of the two is not given."""
    charge, volume = case.given("charge"), case.given("room_volume")
    if charge is None or volume is None:
        return None
    return worked("c", "m / V", "kg/m³", m=(charge, "kg"), V=(volume, "m³"))


def _burning(case: Case) -> float | None:
    """The flammability limit of a fluid that burns [kg/m³]; None for others."""
    return case.number("LFL") if flammable(case) else None


def _no_limit(case: Case) -> str:
    return f"the register has no lower flammability limit of {case.working.designation}"


def charge_caps(case: Case) -> Caution | None:
    """The charge against the three caps."""
    if not flammable(case):
        return None
    LFL, charge = _burning(case), case.given("charge")
    if LFL is None:
        return C1.not_evaluated(_no_limit(case))
    found = caps(LFL, is_2L(case))
    shown = ", ".join(mass(case.solution, one.value) for one in found)
    if charge is None:
        return C1.not_evaluated(case.missing("charge"), f"m₁, m₂, m₃: {shown}", lines(*found))
    above = sum(charge > one.value for one in found)
    words = ("above none of the caps", "above m₁", "above m₁ and m₂", "above m₁, m₂ and m₃")[above]
    return C1.evaluated(above > 0, mass(case.solution, charge), f"above m₁ = {mass(case.solution, found[0].value)}",
                        f"{words} ({shown}); {_guide(case)}", lines(*found))


def sealed(case: Case) -> Caution | None:
    """The charge against the allowance of sealed units."""
    if not flammable(case):
        return None
    LFL, charge = _burning(case), case.given("charge")
    if LFL is None:
        return C3.not_evaluated(_no_limit(case))
    allowance = worked("m", f"max({'1.5 * 4' if is_2L(case) else '4'} * LFL, {SEALED_FLOOR})", "kg", LFL=(LFL, "kg/m³"))
    shown = f"above {mass(case.solution, allowance.value)}"
    if charge is None:
        return C3.not_evaluated(case.missing("charge"), shown, allowance.line)
    return C3.evaluated(charge > allowance.value, mass(case.solution, charge), shown,
                        "whether the unit is sealed is not on this sheet", allowance.line)


def _toxic_limit(case: Case) -> Fact | None:
    limits = [one for name in ("practical limit", "ATEL/ODL") if (one := case.fact(name)) is not None]
    return max(limits, key=lambda one: one.number, default=None)


def charge_by_room(case: Case) -> Caution | None:
    """Toxicity or suffocation, for every fluid with a limit in the register."""
    limit = _toxic_limit(case) if case.working is not None else None
    if limit is None:
        return None
    where = f"above {density(case.solution, limit.number)} ({limit.quantity})"
    found = spread(case)
    if found is None:
        return C4.not_evaluated(f"{case.missing('charge', 'room_volume')}; {cited(limit)}", where)
    allowed = worked("m", "c_lim * V", "kg", c_lim=(limit.number, "kg/m³"), V=(case.given("room_volume"), "m³"))
    return C4.evaluated(found.value > limit.number, density(case.solution, found.value), where,
                        f"{cited(limit)}; {_guide(case)}", lines(found, allowed))


def governing(case: Case) -> Caution | None:
    """The smaller of the two allowed charges, and which it is."""
    limit = _toxic_limit(case) if case.working is not None else None
    if limit is None or not flammable(case):
        return None
    LFL, volume, charge = _burning(case), case.given("room_volume"), case.given("charge")
    if LFL is None:
        return C5.not_evaluated(_no_limit(case))
    if volume is None or charge is None:
        return C5.not_evaluated(case.missing("charge", "room_volume"))
    by_toxicity = worked("m_tox", "c_lim * V", "kg", c_lim=(limit.number, "kg/m³"), V=(volume, "m³"))
    by_fire = worked("m_flam", "0.2 * LFL * V", "kg", LFL=(LFL, "kg/m³"), V=(volume, "m³"))
    allowed, name = min((by_toxicity, "toxicity"), (by_fire, "flammability"), key=lambda one: one[0].value)
    return C5.evaluated(charge > allowed.value, mass(case.solution, charge),
                        f"above {mass(case.solution, allowed.value)}", f"{name} governs; {_guide(case)}",
                        lines(by_toxicity, by_fire))


def comfort(case: Case) -> Caution | None:
    """The least floor area of a room for people's comfort."""
    LFL = _burning(case)
    if LFL is None:
        return None
    charge, area, height = (case.given(name) for name in ("charge", "room_area", "mounting_height"))
    if charge is None or area is None or height is None:
        return C6.not_evaluated(case.missing("charge", "room_area", "mounting_height"))
    if case.molar_mass is not None and case.molar_mass <= COMFORT_MOLAR_MASS:
        return C6.not_evaluated(f"the rule is for molar masses above {COMFORT_MOLAR_MASS:g} g/mol")
    first = caps(LFL, is_2L(case))[0]
    if charge <= first.value:
        return C6.evaluated(False, mass(case.solution, charge), f"above m₁ = {mass(case.solution, first.value)}",
                            "the rule begins above m₁", first.line)
    largest, least = comfort_charge(LFL, height, area), comfort_area(LFL, height, charge)
    return C6.evaluated(charge > largest.value, mass(case.solution, charge),
                        f"above {mass(case.solution, largest.value)}", "for rooms that serve people's comfort",
                        lines(largest, least))


def movable(case: Case) -> Caution | None:
    """Charges between four and eight times the flammability limit."""
    LFL, charge, area = _burning(case), case.given("charge"), case.given("room_area")
    if LFL is None or charge is None or not 4 * LFL < charge <= 8 * LFL:
        return None
    if area is None:
        return C7.not_evaluated(case.missing("room_area"))
    largest = worked("m_max", "0.25 * A * LFL * 2.2", "kg", A=(area, "m²"), LFL=(LFL, "kg/m³"))
    return C7.evaluated(charge > largest.value, mass(case.solution, charge),
                        f"above {mass(case.solution, largest.value)}", "for factory-sealed movable units", largest.line)


def alternative(case: Case) -> Caution | None:
    """Whether the route by RCL, QLMV and QLAV is open."""
    safety, charge = safety_class(case), case.given("charge")
    if safety is None:
        return None
    if safety.value not in ("A1", "A2L"):
        return C8.evaluated(True, f"class {safety.value}", "any class but A1 and A2L", "the route is closed")
    LFL = _burning(case)
    cap = worked("m", f"min({ALTERNATIVE_CAP:g}, 1.5 * 130 * LFL)", "kg", LFL=(LFL, "kg/m³")) if LFL else None
    limit = cap.value if cap else ALTERNATIVE_CAP
    if charge is None:
        return C8.not_evaluated(case.missing("charge"), f"above {mass(case.solution, limit)}", lines(cap))
    return C8.evaluated(charge > limit, mass(case.solution, charge), f"above {mass(case.solution, limit)}", "",
                        lines(cap))


def needed_measures(case: Case) -> Caution | None:
    """The charge over the room's volume against QLMV (RCL in the lowest basement) and QLAV."""
    safety = safety_class(case)
    if safety is None or safety.value not in ("A1", "A2L") or case.molar_mass is None:
        return None
    name = "RCL" if case.room_level == "lowest-basement" else "QLMV"
    least, found = case.fact(name), spread(case)
    if least is None:
        return C9.not_evaluated(f"the register has no {name} of {case.working.designation}")
    if found is None:
        return C9.not_evaluated(case.missing("charge", "room_volume"),
                                f"above {density(case.solution, least.number)} ({name})")
    hazard, _ = _hazard(case)
    count = measures(found.value, least.number, hazard.value)
    words = ("no measure", "one measure", "two measures")[count]
    if name == "RCL" and count == 2:
        words = "not allowed in the lowest basement"
    return C9.evaluated(count > 0, f"{density(case.solution, found.value)}: {words}",
                        f"above {density(case.solution, least.number)} ({name})",
                        f"QLAV {density(case.solution, hazard.value)}; {name}: {cited(least)}", found.line)


def _hazard(case: Case) -> tuple[Worked, str]:
    return instant_hazard(case.molar_mass, _burning(case) if is_2L(case) else None, case.is_fluid("R-744"))


def hazard_density(case: Case) -> Caution | None:
    """The charge over the room's volume against QLAV."""
    if safety_class(case) is None or case.is_fluid("R-718") or case.molar_mass is None:
        return None
    hazard, governs = _hazard(case)
    threshold = f"above {density(case.solution, hazard.value)}"
    found = spread(case)
    if found is None:
        return C10.not_evaluated(case.missing("charge", "room_volume"), threshold, hazard.line)
    return C10.evaluated(found.value > hazard.value, density(case.solution, found.value), threshold,
                         f"{governs} governs", lines(found, hazard))


def share_of_limit(case: Case) -> Caution | None:
    """The charge over the room's volume against 20 % of the flammability limit."""
    LFL, found = _burning(case), spread(case)
    if LFL is None:
        return None
    limit = worked("c_20", "0.2 * LFL", "kg/m³", LFL=(LFL, "kg/m³"))
    threshold = f"above {density(case.solution, limit.value)} (20 %)"
    if found is None:
        return C12.not_evaluated(case.missing("charge", "room_volume"), threshold, limit.line)
    return C12.evaluated(found.value > limit.value, density(case.solution, found.value), threshold,
                         f"25 % is {density(case.solution, 0.25 * LFL)}", lines(found, limit))


def dilution(case: Case) -> Caution | None:
    """The ventilation against the steady flow that keeps RCL."""
    RCL, flow = case.number("RCL") if case.working is not None else None, case.given("ventilation")
    if RCL is None or case.is_fluid("R-718"):
        return None
    needed = worked("Q", "10 / RCL", "m³/h", RCL=(RCL, "kg/m³"))
    threshold = f"below {air_flow(case.solution, needed.value / 3600.0)}"
    if flow is None:
        return C13.not_evaluated(case.missing("ventilation"), threshold, needed.line)
    return C13.evaluated(flow * 3600.0 < needed.value, air_flow(case.solution, flow), threshold,
                         f"RCL: {cited(case.fact('RCL'))}", needed.line)


def enclosure(case: Case) -> Caution | None:
    """The flow drawn from a ventilated enclosure, where there is one."""
    volume, drawn, charge = (case.given(name) for name in ("enclosure_volume", "enclosure_ventilation", "charge"))
    if not flammable(case) or (volume is None and drawn is None) or case.molar_mass is None:
        return None
    if charge is None or drawn is None:
        return C15.not_evaluated(case.missing("charge", "enclosure_ventilation"))
    rho = worked("rho", f"M / {MOLAR_VOLUME}", "kg/m³", M=(case.molar_mass, "g/mol"))
    needed = ventilated_enclosure(charge, rho.value)
    room = case.given("room_volume")
    small = volume is not None and room is not None and room < 10.0 * volume
    return C15.evaluated(drawn * 3600.0 < needed.value or small, air_flow(case.solution, drawn),
                         f"below {air_flow(case.solution, needed.value / 3600.0)}",
                         "the room is less than ten times the enclosure" if small else "", lines(rho, needed))


def american(case: Case) -> Caution | None:
    """Class A2L against half of the flammability limit in the room's volume."""
    safety, LFL = safety_class(case), _burning(case)
    if safety is None or safety.value != "A2L" or LFL is None:
        return None
    charge, volume = case.given("charge"), case.given("room_volume")
    if charge is None or volume is None:
        return C16.not_evaluated(case.missing("charge", "room_volume"))
    limit = worked("m", "0.5 * LFL * V", "kg", LFL=(LFL, "kg/m³"), V=(volume, "m³"))
    return C16.evaluated(charge > limit.value, mass(case.solution, charge), f"above {mass(case.solution, limit.value)}",
                         "the room's volume is taken as the volume of dispersal", limit.line)


def _guide(case: Case) -> str:
    return "a rule for refrigerating plants and heat pumps" + ("" if case.compresses else ", here a guide only")


CAUTIONS = (charge_caps, sealed, charge_by_room, governing, comfort, movable, alternative, needed_measures,
            hazard_density, share_of_limit, dilution, enclosure, american)
