"""Carnot's four reversible processes on an ideal gas, corner by corner, for a re-check wholly by hand."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods.method import Method, Option
from calcpack.plan.equipment import grounds
from calcpack.plan.facts import Again, Bound, Diagram, Equal, Path, StatePoint
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("amount", "How the amount of gas is given", {
        "substance": "amount of substance", "mass": "mass and molar mass"}),
    Option("corners", "Which corners of the hot isotherm are given", {
        "volumes": "the volumes before and after the isothermal expansion",
        "pressures": "the pressures before and after the isothermal expansion"}),
)

CORNERS = {"1": "start of the isothermal expansion", "2": "start of the adiabatic expansion",
           "3": "start of the isothermal compression", "4": "start of the adiabatic compression"}


def lay(plan: Plan) -> None:
    """Lay the plan: gas, corners, processes, efficiency by the processes and by Carnot's relation."""
    _inputs(plan)
    _gas(plan)
    _corners(plan)
    _processes(plan)
    _efficiency(plan)
    _slopes(plan)
    plan.facts.states += [StatePoint(n, label, "", "T_c" if n in "34" else "T_h", f"p_{n}", None, f"S_{n}", f"V_{n}")
                          for n, label in CORNERS.items()]
    paths = (Path("1", "2", "T"), Path("2", "3", "s"), Path("3", "4", "T"), Path("4", "1", "s"))
    plan.facts.diagrams += [Diagram("p-V", "", paths), Diagram("T-S", "", paths)]


def _inputs(plan: Plan) -> None:
    if plan.options["amount"] == "substance":
        plan.input("n", "amount of substance", "Amount of gas", "1 mol", low="0 mol", low_open=True)
    else:
        plan.input("m", "mass", "Mass of gas", "0.029 kg", low="0 kg", low_open=True)
        plan.input("M", "molar mass", "Molar mass of the gas", "28.97 g/mol", low="0 g/mol", low_open=True)
    plan.input("gamma", "number", "Heat capacity ratio of the gas", "1.4", low="1", low_open=True, high="2")
    plan.input("T_h", "temperature", "Temperature of the hot isotherm", "327 degC")
    plan.input("T_c", "temperature", "Temperature of the cold isotherm", "27 degC")
    if plan.options["corners"] == "volumes":
        plan.input("V_1", "volume", "Volume before the isothermal expansion", "2 L", low="0 L", low_open=True)
        plan.input("V_2", "volume", "Volume after the isothermal expansion", "5 L", low="0 L", low_open=True)
    else:
        plan.input("p_1", "pressure", "Pressure before the isothermal expansion", "25 bar", low="0 bar", low_open=True)
        plan.input("p_2", "pressure", "Pressure after the isothermal expansion", "10 bar", low="0 bar", low_open=True)


def _gas(plan: Plan) -> None:
    section = plan.section("The gas")
    plan.demand("T_h > T_c", "the hot isotherm is not above the cold one", "check the two temperatures")
    section.formula("R_m", "8.314462618 J/(mol·K)", "Molar gas constant", "J/(mol·K)",
                    reference="CODATA 2018, exact, to ten digits")
    if plan.options["amount"] == "mass":
        section.formula("n", "m / M", "Amount of gas", "mol", reference=grounds.AMOUNT)
    section.formula("C_v", "R_m / (gamma - 1)", "Molar heat capacity at constant volume", "J/(mol·K)",
                    reference="ideal gas: C_p - C_v = R_m")


def _corners(plan: Plan) -> None:
    section = plan.section("The four corners")
    law = "ideal-gas law"
    if plan.options["corners"] == "volumes":
        for corner in "12":
            section.formula(f"p_{corner}", f"n * R_m * T_h / V_{corner}", f"Pressure at corner {corner}", "bar",
                            reference=law)
    else:
        for corner in "12":
            section.formula(f"V_{corner}", f"n * R_m * T_h / p_{corner}", f"Volume at corner {corner}", "L",
                            reference=law)
    plan.demand("V_2 > V_1", "the gas does not expand along the hot isotherm",
                "the second corner must have the greater volume and the lower pressure")
    adiabat = "reversible adiabat of an ideal gas: T V^(γ-1) is constant"
    for corner, before in (("3", "2"), ("4", "1")):
        section.formula(f"V_{corner}", f"V_{before} * (T_h / T_c)^(1 / (gamma - 1))", f"Volume at corner {corner}", "L",
                        reference=adiabat)
        section.formula(f"p_{corner}", f"n * R_m * T_c / V_{corner}", f"Pressure at corner {corner}", "bar",
                        reference=law)
    section.formula("k_23", "(p_3 / p_2) * (V_3 / V_2)^gamma",
                    "Adiabat from 2 to 3: p V^γ at its end over that at its start",
                    note="must be 1", reference="reversible adiabat of an ideal gas: p V^γ is constant")
    section.formula("one", "1", "The value that the ratio must have",
                    reference="derived: p V^γ is constant, so that its ratio is one")
    plan.facts.equals.append(Equal("k_23", "one", "p V^γ is constant along the adiabat from 2 to 3", 1e-12))


def _processes(plan: Plan) -> None:
    section = plan.section("Heat and work of each process")
    section.formula("Q_12", "n * R_m * T_h * ln(V_2 / V_1)", "Heat taken on the hot isotherm", "J",
                    reference="isotherm of an ideal gas: U is constant, heat equals work")
    section.formula("W_12", "Q_12", "Work given on the hot isotherm", "J", reference="isotherm: U is constant")
    section.formula("W_23", "n * C_v * (T_h - T_c)", "Work given on the adiabat from 2 to 3", "J",
                    reference="adiabat: Q is zero, W is the fall of U")
    section.formula("Q_34", "n * R_m * T_c * ln(V_4 / V_3)", "Heat on the cold isotherm; below zero it is given", "J",
                    reference="isotherm of an ideal gas: U is constant, heat equals work")
    section.formula("W_34", "Q_34", "Work on the cold isotherm; below zero it is drawn", "J",
                    reference="isotherm: U is constant")
    section.formula("W_41", "n * C_v * (T_c - T_h)", "Work on the adiabat from 4 to 1; below zero it is drawn", "J",
                    reference="adiabat: Q is zero, W is the fall of U")
    plan.facts.again += [
        Again("W_23", "(p_2 * V_2 - p_3 * V_3) / (gamma - 1)", "from pressures and volumes at the ends of the adiabat"),
        Again("S_2", "n * R_m * ln(p_1 / p_2)", "from the pressures along the hot isotherm"),
        Again("S_4", "S_1", "the entropy comes back to where it began", scale="S_2")]
    section.formula("S_1", "0 J/K", "Entropy at corner 1, taken as the zero", "J/K",
                    reference="chosen zero; it cancels in every difference")
    section.formula("S_2", "S_1 + Q_12 / T_h", "Entropy at corner 2", "J/K",
                    reference="second law: reversible heat over absolute temperature")
    section.formula("S_3", "S_2", "Entropy at corner 3: the adiabat is reversible", "J/K",
                    reference="second law: a reversible adiabat keeps the entropy")
    section.formula("S_4", "S_3 + Q_34 / T_c", "Entropy at corner 4", "J/K", note="must return to that of corner 1",
                    reference="second law: reversible heat over absolute temperature")


def _efficiency(plan: Plan) -> None:
    section = plan.section("Efficiency from the processes and from Carnot's relation")
    section.formula("W_net", "W_12 + W_23 + W_34 + W_41", "Net work of the cycle", "J",
                    reference="sum over the four processes")
    section.formula("Q_net", "Q_12 + Q_34", "Net heat of the cycle", "J", note="equal to the net work",
                    reference="sum over the two isotherms; no heat on the adiabats")
    section.formula("eta", "W_net / Q_12", "Efficiency, from the four processes", reference=grounds.EFFICIENCY)
    section.formula("eta_C", "1 - T_c / T_h", "Efficiency, from the two temperatures",
                    reference="Carnot: absolute temperatures, whatever the gas and its amount")
    section.formula("r_h", "Q_12 / T_h", "Heat over temperature on the hot isotherm", "J/K",
                    reference="second law: reversible heat over absolute temperature")
    section.formula("r_c", "-Q_34 / T_c", "Heat over temperature on the cold isotherm", "J/K",
                    reference="second law: reversible heat over absolute temperature")
    plan.facts.equals += [Equal("eta", "eta_C", "efficiency from the processes and from 1 - T_c/T_h", 1e-12),
                          Equal("W_net", "Q_net", "net work equals net heat", 1e-12),
                          Equal("r_h", "r_c", "heat over temperature is the same on both isotherms", 1e-12)]
    plan.facts.bounds.append(Bound("eta", "eta_C", "the cycle reaches Carnot's efficiency and no more"))


def _slopes(plan: Plan) -> None:
    section = plan.section("Slopes through corner 2 in the p–V plane")
    section.formula("k_T", "-p_2 / V_2", "Slope of the isotherm", "bar/L", reference="p V is constant")
    section.formula("k_S", "-gamma * p_2 / V_2", "Slope of the adiabat", "bar/L", reference="p V^γ is constant")
    section.formula("r_k", "k_S / k_T", "How much steeper the adiabat is", note="equal to the heat capacity ratio",
                    reference="derived: slope of the adiabat over slope of the isotherm")
    plan.facts.equals.append(Equal("r_k", "gamma", "the adiabat is steeper by the heat capacity ratio", 1e-12))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    return ("eta", "W_net", "Q_12", "Q_34")


METHOD = Method(
    name="carnot-cycle",
    title="Carnot's cycle on an ideal gas",
    text="Isothermal expansion, adiabatic expansion, isothermal compression and adiabatic compression, all "
         "reversible. The efficiency is found from the heat and work of the four processes and shown equal to "
         "Carnot's relation.",
    options=OPTIONS, roles=lambda options: (), lay=lay,
    assumes=("ideal gas of constant heat capacity", "all four processes reversible", "closed system"),
    leaves_out=("friction, heat leaks and temperature differences of a real engine",),
    sketch="""
    p │ 1
      │  ╲ isotherm at T_h
      │   ╲
      │    ╲__ 2
      │ 4     ╲
      │  ╲__   ╲ adiabat
      │     ╲___╲ 3
      └──────────────── V
""",
    results=_results)
