"""The register's facts on the working fluid to cautions on fire, toxicity and decomposition."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import OF_FACT, TEXT, Caution, Source, Topic
from calcpack.checks.entries import temperature
from calcpack.fluids.register import Fact

FIRE, TOXIC = "Fire", "Toxicity and oxygen"

# RD 552/2019 IF-04 3.3.1.1: surfaces at most 100 K below autoignition (from the text).
IGNITION_MARGIN = 100.0

SAFETY_GROUPS = {"A1": "L1", "A2L": "L2", "A2": "L2", "B1": "L2", "B2L": "L2", "B2": "L2", "A3": "L3", "B3": "L3"}
"""The decree's groups of safety classes (RD 552/2019 IF-02 4.1.3, from the text)."""

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
def flammable(case: Case) -> bool | None:
    """Whether the working fluid burns: by class, else by a flammability limit or flash point; None if unknown."""
    safety = safety_class(case)
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
    return C14.evaluated(burns, _class_words(case), "any class but 1, no flame propagation",
                         "; ".join(part for part in (_class_source(case), _limit_words(case)) if part))


def ignition(case: Case) -> Caution | None:
    """The hottest temperature of the sheet against autoignition less 100 K."""
    if not flammable(case):
        return None
    autoignition = case.fact("autoignition temperature")
    if autoignition is None:
        return M5.not_evaluated(f"the register has no autoignition temperature of {case.working.designation}")
    limit = autoignition.number + 273.15 - IGNITION_MARGIN
    given = case.given("surface_temperature")
    hottest = given or max([*case.of_points("T"), *case.of_streams("T_in", "T_out")])
    which = "the surface as given" if given else "hottest of fluid and streams"
    return M5.evaluated(hottest > limit, temperature(case.solution, hottest),
                        f"above {temperature(case.solution, limit)}",
                        f"{which}; autoignition at {autoignition.value} °C: {cited(autoignition)}")


def area(case: Case) -> Caution | None:
    """Flammable fluids call for an area assessment."""
    if not flammable(case):
        return None
    own = "ammonia has rules of its own" if case.is_fluid("R-717") else ""
    return M8.evaluated(True, _class_words(case), "any flammable class",
                        "; ".join(part for part in (_class_source(case), own) if part))


def toxic(case: Case) -> Caution | None:
    """Classes that begin with B."""
    if case.working is None or case.is_fluid("R-718"):
        return None
    safety = safety_class(case)
    if safety is None:
        return T1.not_evaluated(f"the register has no safety class of {case.working.designation}")
    limits = [f"{name} {one.value} kg/m³: {cited(one)}" for name in ("ATEL/ODL", "practical limit")
              if (one := case.fact(name)) is not None]
    is_toxic = safety.value.startswith("B")
    return T1.evaluated(is_toxic, _class_words(case), "class B",
                        "; ".join([_class_source(case), *(limits if is_toxic else ())]))


def decomposition(case: Case) -> Caution | None:
    """The hottest state of a halocarbon against its stability guide."""
    if not halocarbon(case):
        return None
    guide = case.fact("thermal-stability guide temperature")
    if guide is None:
        return T10.not_evaluated(f"the register has no stability limit of {case.working.designation}; a flame or a "
                                 "glowing surface is enough whatever the cycle does")
    hottest = max(case.of_points("T"))
    limit = guide.number + 273.15
    return T10.evaluated(hottest >= limit, temperature(case.solution, hottest),
                         f"at or above {temperature(case.solution, limit)}", cited(guide))


def safety_class(case: Case) -> Fact | None:
    """The register's safety class of the working fluid."""
    return case.fact("safety class")


def is_2L(case: Case) -> bool:
    """Whether the working fluid burns slowly: class A2L or B2L."""
    safety = safety_class(case)
    return safety is not None and safety.value.endswith("2L")


def _class_words(case: Case) -> str:
    safety = safety_class(case)
    return f"{case.working.designation}: {safety.value if safety else 'no class, but it burns'}"


def _class_source(case: Case) -> str:
    safety = safety_class(case)
    if safety is None:
        return ""
    return f"group {SAFETY_GROUPS.get(safety.value, 'unknown')}; class: {cited(safety)}"


def _limit_words(case: Case) -> str:
    found = case.fact("LFL")
    if found is not None:
        return f"lower flammability limit {found.value} kg/m³: {cited(found)}"
    flash = case.fact("flash point")
    return f"flash point {flash.value} °C: {cited(flash)}" if flash is not None else ""


def cited(one: Fact) -> str:
    """A fact's source, and how far it has been confirmed."""
    return f"{one.source} [{OF_FACT[one.confirmed]}]"


def halocarbon(case: Case) -> bool:
    """Whether the register's chemical name speaks of a halogen; every blend it lists is fluorinated."""
    entry = case.registered
    if entry is None:
        return False
    return any(word in entry.chemical_name.lower() for word in ("fluor", "chlor", "iodo", "blend ", "azeotrope "))


def unsaturated(case: Case) -> bool:
    """Whether the working fluid is one halocarbon with a double bond, by its chemical name."""
    entry = case.registered
    return entry is not None and halocarbon(case) and entry.chemical_name.lower().endswith("ene")


CAUTIONS = (fire, ignition, area, toxic, decomposition)
