"""The register's facts on the working fluid to cautions on fire, toxicity and charge."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, OF_FACT, TEXT, Caution, Source, Topic
from calcpack.checks.entries import temperature
from calcpack.fluids.register import Fact

FIRE, TOXIC, CHARGE = "Fire", "Toxicity", "Charge and room"

# RD 552/2019 IF-04 3.3.1.1: surfaces at most 100 K below autoignition (from the text).
IGNITION_MARGIN = 100.0

NO_CHARGE = "charge and room volume are not inputs of this sheet"

C14 = Topic("C-C14", FIRE, "Flammable working fluid",
            "A leak can form a mixture that burns: charge, ventilation, detection and electrical equipment follow the "
            "flammability class.",
            Source("RD 552/2019 IF-02 4.1.3 (groups of safety classes)", TEXT))
M5 = Topic("C-M5", FIRE, "Hot surface as ignition source",
           "A surface that a leak can reach must stay this far below the fluid's autoignition temperature.",
           Source("RD 552/2019 IF-04 3.3.1.1", TEXT))
M8 = Topic("C-M8", FIRE, "Hazardous area",
           "With a flammable fluid the surroundings of the plant are assessed for explosive atmospheres.",
           Source("RD 552/2019 IF-07 7.1, naming IEC/EN 60079-10-1", TEXT))
T1 = Topic("C-T1", TOXIC, "Toxic working fluid",
           "A leak can injure at concentrations far below those that burn or suffocate: detection, alarm, escape and "
           "breathing protection follow the toxicity class.",
           Source("RD 552/2019 IF-02 4.1.3 (groups of safety classes)", TEXT))
T10 = Topic("C-T10", TOXIC, "Decomposition products",
            "In a flame, at a hot surface or above its stability limit a halocarbon forms acids such as HF and HCl.",
            Source("RD 552/2019 IF-02 4.1.2", TEXT))
T5 = Topic("C-T5", TOXIC, "Carbon dioxide in air",
           "Above 3 % by volume breathing becomes difficult, above 10 % consciousness is lost.",
           Source("RD 552/2019 IF-04 5.2.3.1", TEXT))
C1 = Topic("C-C1", CHARGE, "Charge caps by flammability",
           "Charges are capped by multiples of the lower flammability limit and by the room.",
           Source("RD 552/2019 IF-04 App. 2", TEXT))
C4 = Topic("C-C4", CHARGE, "Charge by toxicity or suffocation",
           "The charge over the room's volume must keep the larger of practical limit and acute exposure limit.",
           Source("RD 552/2019 IF-04 App. 2", TEXT))
C11 = Topic("C-C11", CHARGE, "Oxygen after a release",
            "A release into a closed room displaces oxygen; at most 140 000 ppm of refrigerant leave 18 % of it.",
            Source("RD 552/2019 IF-01 3.7.11", TEXT))
M12 = Topic("C-M12", CHARGE, "Leak checks",
            "Fluorinated charges from 5, 50 and 500 t of CO2 equivalent are checked for leaks each 12, 6 and 3 months.",
            Source("Regulation (EU) 2024/573", MEMORY))


def flammable(case: Case) -> bool | None:
    """Whether the working fluid burns: by class, else by a flammability limit or flash point; None if unknown."""
    safety = _class(case)
    if safety is not None:
        return safety.value[1:] != "1"
    if case.fact("LFL") is not None or case.fact("flash point") is not None:
        return True
    return None


def fire(case: Case) -> Caution | None:
    """The safety class, or a flammability limit."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    burns = flammable(case)
    if burns is None:
        return C14.not_evaluated(f"the register has no safety class and no flammability limit of "
                                 f"{case.working.designation}")
    return C14.evaluated(burns, _class_words(case), "any class but 1, no flame propagation", _limit_words(case))


def ignition(case: Case) -> Caution | None:
    """The hottest temperature of the sheet against autoignition less 100 K."""
    if not flammable(case):
        return None
    autoignition = case.fact("autoignition temperature")
    if autoignition is None:
        return M5.not_evaluated(f"the register has no autoignition temperature of {case.working.designation}")
    limit = autoignition.number + 273.15 - IGNITION_MARGIN
    hottest = max([*case.of_points("T"), *case.of_streams("T_in", "T_out")])
    return M5.evaluated(hottest > limit, temperature(case.solution, hottest),
                        f"above {temperature(case.solution, limit)}",
                        f"hottest of fluid and streams; autoignition at {autoignition.value} °C: "
                        f"{_cited(autoignition)}")


def area(case: Case) -> Caution | None:
    """Flammable fluids call for an area assessment."""
    if not flammable(case):
        return None
    return M8.evaluated(True, _class_words(case), "any flammable class")


def toxic(case: Case) -> Caution | None:
    """Classes that begin with B."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    safety = _class(case)
    if safety is None:
        return T1.not_evaluated(f"the register has no safety class of {case.working.designation}")
    limits = [f"{name} {one.value} kg/m³: {_cited(one)}" for name in ("ATEL/ODL", "practical limit")
              if (one := case.fact(name)) is not None]
    is_toxic = safety.value.startswith("B")
    return T1.evaluated(is_toxic, _class_words(case), "class B", "; ".join(limits) if is_toxic else "")


def decomposition(case: Case) -> Caution | None:
    """The hottest state of a halocarbon against its stability guide."""
    if not _halocarbon(case):
        return None
    guide = case.fact("thermal-stability guide temperature")
    if guide is None:
        return T10.not_evaluated(f"the register has no stability limit of {case.working.designation}; a flame or a "
                                 "glowing surface is enough whatever the cycle does")
    hottest = max(case.of_points("T"))
    limit = guide.number + 273.15
    return T10.evaluated(hottest >= limit, temperature(case.solution, hottest),
                         f"at or above {temperature(case.solution, limit)}", _cited(guide))


def carbon_dioxide(case: Case) -> Caution | None:
    """What a release does hangs on charge and room."""
    if not case.is_fluid("R-744"):
        return None
    return T5.not_evaluated(NO_CHARGE, "3 %, 10 % by volume")


def charge_caps(case: Case) -> Caution | None:
    """Caps by flammability, for fluids that burn."""
    if not flammable(case):
        return None
    return C1.not_evaluated(NO_CHARGE, _limit_words(case))


def charge_by_room(case: Case) -> Caution | None:
    """Toxicity or suffocation, for every refrigerant with a limit in the register."""
    limits = [one for name in ("practical limit", "ATEL/ODL") if (one := case.fact(name)) is not None]
    if not limits:
        return None
    largest = max(limits, key=lambda one: one.number)
    return C4.not_evaluated(NO_CHARGE, f"{largest.value} kg/m³ ({largest.quantity}; {_cited(largest)})")


def oxygen(case: Case) -> Caution | None:
    """Displaced oxygen, for every fluid but water."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    return C11.not_evaluated(NO_CHARGE, "140 000 ppm")


def leak_checks(case: Case) -> Caution | None:
    """By CO2 equivalent, for fluorinated fluids."""
    if not _halocarbon(case):
        return None
    return M12.not_evaluated("the charge is not an input of this sheet", "5, 50, 500 t of CO2 equivalent")


def _class(case: Case) -> Fact | None:
    return case.fact("safety class")


def _class_words(case: Case) -> str:
    safety = _class(case)
    if safety is not None:
        return f"{case.working.designation}: {safety.value} ({_cited(safety)})"
    return f"{case.working.designation}: no class, but it burns"


def _limit_words(case: Case) -> str:
    found = case.fact("LFL")
    if found is not None:
        return f"lower flammability limit {found.value} kg/m³: {_cited(found)}"
    flash = case.fact("flash point")
    return f"flash point {flash.value} °C: {_cited(flash)}" if flash is not None else ""


def _cited(one: Fact) -> str:
    return f"{one.source} [{OF_FACT[one.confirmed]}]"


def _halocarbon(case: Case) -> bool:
    """Whether the register's chemical name speaks of a halogen; every blend it lists is fluorinated."""
    entry = case.registered
    if entry is None:
        return False
    return any(word in entry.chemical_name.lower() for word in ("fluor", "chlor", "iodo", "blend ", "azeotrope "))


CAUTIONS = (fire, ignition, area, toxic, decomposition, carbon_dioxide, charge_caps, charge_by_room, oxygen,
            leak_checks)
