"""Relief devices and trapped liquid to cautions: settings, flows, losses, hammer."""
from __future__ import annotations

from calcpack.checks.cautions.case import Case
from calcpack.checks.cautions.caution import MEMORY, TEXT, Caution, Source, Topic
from calcpack.checks.cautions.worked import Worked, lines, worked
from calcpack.checks.entries import gauge, mass, pressure, temperature
from calcpack.errors import CalcpackError

HAZARD = "Relief and trapped liquid"

RELIEF_SHARE = 0.9
"""Of the critical pressure; the note of the decree names no figure, this one is calcpack's choice."""
COMPRESSOR_FROM = 25.0
DUAL_FROM = 100.0
DISCHARGE_LOSS, INLET_LOSS = 0.10, 0.03
SECONDARY_FROM = 500.0
SATURATION_T = 283.15

R1 = Topic("C-R1", HAZARD, "Setting of the relief device",
           "A relief device is set at or below the maximum allowable pressure, and while it relieves the pressure "
           "stays within 1.1 times of it.", Source("RD 552/2019 IF-08 1, 3.6", TEXT))
R2 = Topic("C-R2", HAZARD, "Relief of the compressor",
           "A positive-displacement compressor of this displacement has a relief device on its discharge.",
           Source("RD 552/2019 IF-08 3.3.2", TEXT))
R3 = Topic("C-R3", HAZARD, "Relief flow of the compressor",
           "The device passes what the compressor draws with vapour saturated at 10 °C.",
           Source("RD 552/2019, quoting EN 13136 6.3", TEXT))
R4 = Topic("C-R4", HAZARD, "Relief flow of the vessel",
           "The device of a vessel passes what 10 kW on each square metre of its outside evaporates.",
           Source("EN 13136 6.2", MEMORY))
R5 = Topic("C-R5", HAZARD, "Relief near the critical pressure",
           "Near the critical pressure the heat of evaporation vanishes, and relief valves cannot be sized by it.",
           Source("RD 552/2019 IF-08 3.3.4.3 note; the share of 0.9 is calcpack's choice", TEXT))
R6 = Topic("C-R6", HAZARD, "Two relief devices",
           "A vessel of this size that can be shut off full of liquid has two devices on a changeover valve.",
           Source("RD 552/2019 IF-08 3.3.4.1", TEXT))
R7 = Topic("C-R7", HAZARD, "Back pressure of the relief line",
           "The losses of the discharge line stay below a tenth of the absolute relieving pressure.",
           Source("RD 552/2019 IF-08 3.5, after EN 13136", TEXT))
R8 = Topic("C-R8", HAZARD, "Loss before the relief device",
           "A larger loss in the line to the device makes it chatter.", Source("API 520-II practice", MEMORY))
R9 = Topic("C-R9", HAZARD, "Working fluid in the secondary circuit",
           "A leak or heat can raise the pressure of a closed secondary circuit: it has a relief device where the "
           "exchanger can be shut off, and from 500 kg of charge a detector.",
           Source("RD 552/2019 IF-04 3.3.1.2", TEXT))
R10 = Topic("C-R10", HAZARD, "Trapped liquid",
            "A section that can be shut off full of liquid bursts when it warms: it has a relief device or stays open.",
            Source("RD 552/2019 IF-08 3.3.5", TEXT))


def compressor_flow(swept: float, speed: float, rho: float, efficiency: float) -> Worked:
    """The flow [kg/h] by swept volume [m³], speed [1/min], vapour density [kg/m³] and volumetric efficiency."""
    return worked("Q_m", "60 * V * n * rho_10 * eta_v", "kg/h", V=(swept, "m³"), n=(speed, "1/min"),
                  rho_10=(rho, "kg/m³"), eta_v=efficiency)


def vessel_flow(area: float, evaporation: float) -> Worked:
    """The flow [kg/h] by the outside area [m²] and the heat of evaporation [kJ/kg]."""
    return worked("Q_m", "3600 * 10 * A / h_fg", "kg/h", A=(area, "m²"), h_fg=(evaporation, "kJ/kg"))


def relieving(case: Case) -> Worked | None:
    """The absolute pressure while the device relieves [bar]: 1.1 times the set pressure, above the atmosphere."""
    found = case.given("relief_set")
    if found is None:
        return None
    return worked("p_rel", "1.1 * p_set + p_atm", "bar", p_set=(case.gauge_bar(found), "bar(g)"),
                  p_atm=(case.solution.p_atm / 1e5, "bar"))


def setting(case: Case) -> Caution | None:
    """The set pressure against the maximum allowable one."""
    if case.working is None:
        return None
    found, PS = case.given("relief_set"), case.given("PS")
    if found is None or PS is None:
        return R1.not_evaluated(case.missing("relief_set", "PS"))
    most = worked("p", "1.1 * PS", "bar(g)", PS=(case.gauge_bar(PS), "bar(g)"))
    return R1.evaluated(found > PS * (1 + 1e-9), gauge(case.solution, found), f"above {gauge(case.solution, PS)}",
                        "while relieving at most 1.1 of PS", most.line)


def compressor(case: Case) -> Caution | None:
    """The displacement of the compressor against 25 L/s."""
    if not case.compresses:
        return None
    swept, speed = case.given("swept_volume"), case.given("speed")
    threshold = f"above {COMPRESSOR_FROM:g} L/s"
    if swept is None or speed is None:
        return R2.not_evaluated(case.missing("swept_volume", "speed"), threshold)
    found = worked("V_dot", "V * n / 60", "L/s", V=(swept * 1000.0, "L"), n=(speed * 60.0, "1/min"))
    return R2.evaluated(found.value > COMPRESSOR_FROM, found.shown, threshold, "for positive displacement", found.line)


def compressor_relief(case: Case) -> Caution | None:
    """The flow that the compressor's device passes."""
    names = ("swept_volume", "speed", "volumetric_efficiency")
    if not case.compresses or all(case.given(name) is None for name in names):
        return None
    if case.missing(*names):
        return R3.not_evaluated(case.missing(*names))
    rho = case.saturated("rho", SATURATION_T, 1.0)
    if rho is None:
        return R3.not_evaluated("the vapour at 10 °C is outside the equation of state")
    flow = compressor_flow(case.given(names[0]), case.given(names[1]) * 60.0, rho, case.given(names[2]))
    return R3.evaluated(True, f"{mass(case.solution, flow.value)} an hour", "any compressor with a relief device",
                        f"vapour saturated at {temperature(case.solution, SATURATION_T)}", flow.line)


def vessel(case: Case) -> Caution | None:
    """The flow that the vessel's device passes."""
    area, found = case.given("vessel_area"), relieving(case)
    if case.working is None or (area is None and found is None):
        return None
    if area is None or found is None:
        return R4.not_evaluated(case.missing("vessel_area", "relief_set"))
    p_crit = case.constant("p_crit")
    if p_crit is not None and found.value * 1e5 > RELIEF_SHARE * p_crit:
        return R4.not_evaluated("the relieving pressure is near the critical one: special sizing", "", found.line)
    h_fg = _evaporation(case, found.value * 1e5)
    if h_fg is None:
        return R4.not_evaluated("no heat of evaporation at the relieving pressure", "", found.line)
    flow = vessel_flow(area, h_fg / 1000.0)
    return R4.evaluated(True, f"{mass(case.solution, flow.value)} an hour", "any vessel with a relief device",
                        f"at {pressure(case.solution, found.value * 1e5)} absolute", lines(found, flow))


def _evaporation(case: Case, p: float) -> float | None:
    try:
        read = case.working.reader("h", ("p", "x"))
        return read(p, 1.0) - read(p, 0.0)
    except CalcpackError:
        return None


def near_critical(case: Case) -> Caution | None:
    """The relieving pressure, or the highest operating one, against the critical one."""
    p_crit = case.constant("p_crit")
    if case.working is None or p_crit is None:
        return None
    found = relieving(case)
    p, which = (max(case.of_points("p")), "at the highest operating pressure; the relieving pressure lies above it") \
        if found is None else (found.value * 1e5, f"at {pressure(case.solution, found.value * 1e5)}, relieving")
    share = p / p_crit
    return R5.evaluated(share > RELIEF_SHARE, f"{share:.3f} of the critical pressure", f"above {RELIEF_SHARE}", which,
                        lines(found))


def two_devices(case: Case) -> Caution | None:
    """The volume of the vessel against 100 L."""
    volume = case.litres("vessel_volume")
    if case.working is None or volume is None:
        return None
    return R6.evaluated(volume >= DUAL_FROM, f"{volume:g} L", f"at or above {DUAL_FROM:g} L",
                        "for a vessel with liquid that can be shut off; below it one device")


def back_pressure(case: Case) -> Caution | None:
    """The losses of the discharge line against a tenth of the relieving pressure."""
    loss, found = case.given("relief_outlet_loss"), relieving(case)
    if case.working is None or loss is None:
        return None
    if found is None:
        return R7.not_evaluated(case.missing("relief_set"))
    share = worked("f", "dp / p_rel", "", dp=(loss / 1e5, "bar"), p_rel=(found.value, "bar"))
    return R7.evaluated(share.value >= DISCHARGE_LOSS, f"{100.0 * share.value:.1f} % of the relieving pressure",
                        f"at or above {100.0 * DISCHARGE_LOSS:g} %", "", lines(found, share))


def inlet_loss(case: Case) -> Caution | None:
    """The loss before the device against 3 % of the set pressure."""
    loss, found = case.given("relief_inlet_loss"), case.given("relief_set")
    if case.working is None or loss is None:
        return None
    if found is None:
        return R8.not_evaluated(case.missing("relief_set"))
    share = worked("f", "dp / p_set", "", dp=(loss / 1e5, "bar"), p_set=(case.gauge_bar(found), "bar(g)"))
    return R8.evaluated(share.value > INLET_LOSS, f"{100.0 * share.value:.1f} % of the set pressure",
                        f"above {100.0 * INLET_LOSS:g} %", "", share.line)


def secondary(case: Case) -> Caution | None:
    """The charge against 500 kg, on a sheet with liquid secondary streams."""
    liquid = [one for one in case.streams if not case.is_gas(case.fluid_of(one))]
    if not case.compresses or not liquid:
        return None
    charge, threshold = case.given("charge"), f"above {mass(case.solution, SECONDARY_FROM)}"
    if charge is None:
        return R9.not_evaluated(case.missing("charge"), threshold)
    return R9.evaluated(charge > SECONDARY_FROM, mass(case.solution, charge), threshold,
                        "relief wherever the exchanger can be shut off, whatever the charge")


def trapped(case: Case) -> Caution | None:
    """Liquid states of the working fluid."""
    if case.working is None:
        return None
    shares = {point.number: case.vapour_share(point) for point in case.points if point.h is not None}
    liquid = [number for number, share in shares.items() if share is not None and share <= 1e-6]
    return R10.evaluated(bool(liquid), f"liquid at state {', '.join(liquid)}" if liquid else "no liquid state",
                         "any section of liquid that can be shut off")


CAUTIONS = (setting, compressor, compressor_relief, vessel, near_critical, two_devices, back_pressure, inlet_loss,
            secondary, trapped)
