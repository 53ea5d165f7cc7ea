"""A leak into the room to cautions: oxygen, exposure limits, escape, solids in a cascade."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, SECOND_HAND, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.charge import MOLAR_VOLUME, OXYGEN_LIMIT, spread
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import density, percent
from calcpack.fluids.register import find

HAZARD = "Toxicity and oxygen"

OXYGEN_IN_AIR = 0.2095
OXYGEN_DEFICIENT = 0.195
AMMONIA_ESCAPE = 0.00022

C11 = Topic("C-C11", HAZARD, "Oxygen after a release",
            "A release into a closed room displaces oxygen; at most 140 000 ppm of refrigerant leave 18 % of it.",
            Source("RD 552/2019 IF-01 3.7.11", TEXT))
T7 = Topic("C-T7", HAZARD, "Oxygen deficiency",
           "Below this share of oxygen a room counts as a confined space with an atmosphere that endangers life.",
           Source("29 CFR 1910.146(b)", TEXT))
T1A = Topic("C-T1a", HAZARD, "Ammonia: limit of acute exposure",
            "Above this density people can no longer escape by themselves.",
            Source("EN 378-1 Annex E: 0.00022 kg/m³, 320 ppm", SECOND_HAND))
T2 = Topic("C-T2", HAZARD, "Ammonia: exposure at work",
           "Above 25 ppm over a shift and 35 ppm for a short time exposure exceeds the limits; the EU counts 20 ppm, "
           "the US authority 50 ppm.", Source("Ontario list of exposure limits", TEXT))
T3 = Topic("C-T3", HAZARD, "Ammonia: danger to life",
           "Above this share escape within half an hour is no longer sure.",
           Source("Minnesota Department of Agriculture page: 300 ppm", TEXT))
T4 = Topic("C-T4", HAZARD, "Carbon dioxide: exposure at work",
           "Above 5000 ppm over a shift and 30 000 ppm for a short time exposure exceeds the limits.",
           Source("Ontario list of exposure limits", TEXT))
T5 = Topic("C-T5", HAZARD, "Carbon dioxide in air",
           "Above 3 % by volume breathing becomes difficult, above 10 % consciousness is lost, above 30 % death is "
           "rapid.", Source("RD 552/2019 IF-04 5.2.3.1", TEXT))
T6 = Topic("C-T6", HAZARD, "Carbon dioxide: danger to life",
           "Above this share escape within half an hour is no longer sure.", Source("NIOSH: 40 000 ppm", MEMORY))
T9 = Topic("C-T9", HAZARD, "Carbon dioxide and ammonia",
           "Where the two meet, solid ammonium carbamate forms and blocks pipes; it breaks up above 60 °C.",
           Source("RD 552/2019 IF-04 5.2.3.1", TEXT))

SPREAD = "the whole charge, spread evenly at 25 °C and 1 atm"


def share_of(concentration: float, molar_mass: float) -> Worked:
    """The share by volume of a density [kg/m³] of vapour in air, by its molar mass [g/mol]."""
    return worked("y", f"c * {MOLAR_VOLUME} / M", "", c=(concentration, "kg/m³"), M=(molar_mass, "g/mol"))


def oxygen_left(share: float) -> Worked:
    """The share of oxygen where a share of the room is taken by a leak."""
    return worked("y_O2", f"{OXYGEN_IN_AIR} * (1 - min(y, 1))", "", y=share)


def _share(case: Case) -> tuple[float, str, str] | None:
    """The share of the fluid in the room's air, its working and where it is from; None where nothing gives it."""
    given, found = case.given("concentration"), spread(case)
    if given is not None:
        return given, "", "concentration as given"
    if found is None or case.molar_mass is None:
        return None
    share = share_of(found.value, case.molar_mass)
    return share.value, lines(found, share), SPREAD


def _against(case: Case, topic: Topic, limits: tuple[float, ...]) -> Caution:
    """The share in the room against limits of which the first triggers."""
    threshold = f"above {', '.join(percent(limit) for limit in limits)} by volume"
    found = _share(case)
    if found is None:
        return topic.not_evaluated(case.missing("charge", "room_volume"), threshold)
    share, working, where = found
    above = [percent(limit) for limit in limits if share > limit]
    note = f"; above {', '.join(above)}" if above and len(limits) > 1 else ""
    return topic.evaluated(bool(above), f"{percent(share)} by volume", threshold, where + note, working)


def displaced(case: Case) -> Caution | None:
    """Every fluid but water against 140 000 ppm."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    return _against(case, C11, (OXYGEN_LIMIT,))


def oxygen(case: Case) -> Caution | None:
    """The oxygen that a release leaves."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    found, threshold = _share(case), f"below {percent(OXYGEN_DEFICIENT)}"
    if found is None:
        return T7.not_evaluated(case.missing("charge", "room_volume"), threshold)
    left = oxygen_left(found[0])
    return T7.evaluated(left.value < OXYGEN_DEFICIENT, f"{percent(left.value)} of oxygen", threshold, found[2],
                        "\n".join(line for line in (found[1], left.line) if line))


def ammonia_escape(case: Case) -> Caution | None:
    """Ammonia over the room's volume against its acute limit."""
    if not case.is_fluid("R-717"):
        return None
    found, threshold = spread(case), f"above {density(case.solution, AMMONIA_ESCAPE)}"
    if found is None:
        return T1A.not_evaluated(case.missing("charge", "room_volume"), threshold)
    return T1A.evaluated(found.value > AMMONIA_ESCAPE, density(case.solution, found.value), threshold, SPREAD,
                         found.line)


def ammonia_at_work(case: Case) -> Caution | None:
    """Ammonia against the limits of exposure."""
    return _against(case, T2, (25e-6, 35e-6)) if case.is_fluid("R-717") else None


def ammonia_danger(case: Case) -> Caution | None:
    """Ammonia against the limit of danger to life."""
    return _against(case, T3, (300e-6,)) if case.is_fluid("R-717") else None


def carbon_dioxide_at_work(case: Case) -> Caution | None:
    """Carbon dioxide against the limits of exposure."""
    return _against(case, T4, (5000e-6, 30000e-6)) if case.is_fluid("R-744") else None


def carbon_dioxide(case: Case) -> Caution | None:
    """Carbon dioxide against its acute effects."""
    return _against(case, T5, (0.03, 0.10, 0.30)) if case.is_fluid("R-744") else None


def carbon_dioxide_danger(case: Case) -> Caution | None:
    """Carbon dioxide against the limit of danger to life."""
    return _against(case, T6, (40000e-6,)) if case.is_fluid("R-744") else None


def carbamate(case: Case) -> Caution | None:
    """A sheet with both fluids."""
    if case.working is None:
        return None
    entries = (find(fluid.designation) for fluid in case.solution.plan.fluids.values())
    both = {"R-717", "R-744"} <= {entry.designation for entry in entries if entry is not None}
    return T9.evaluated(True, "both on this sheet", "both fluids in one plant") if both else None


OF_CIRCUIT = (displaced, oxygen, ammonia_escape, ammonia_at_work, ammonia_danger, carbon_dioxide_at_work,
              carbon_dioxide, carbon_dioxide_danger)
"""Those that each circuit of a cascade has for itself."""

CAUTIONS = (*OF_CIRCUIT, carbamate)
