"""The parts of a gas turbine's plan: machines, regenerator, heat or fuel, specific work, size and power, exhaust."""
from __future__ import annotations

from itertools import pairwise

from calcpack.methods.gas_turbine_train import Train
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.gas import GasState, at_enthalpy, caloric, compress, expand, specific_volume
from calcpack.plan.facts import Again, Bound, Equal
from calcpack.plan.plan import Plan, Section


def compression(plan: Plan, train: Train) -> None:
    """Compressors in line, each with an intercooler before the next."""
    section = plan.section("Compression")
    names, tags = train.names("compressor"), train.tags("c")
    for k, (inlet, outlet) in enumerate(train.compressors):
        caloric(section, inlet)
        compress(section, inlet, outlet, f"w_{tags[k]}", names[k])
    for k, ((_, warm), (cool, _)) in enumerate(pairwise(train.compressors), start=1):
        section.formula(f"q_ic{k}", f"{warm.h} - {cool.h}", f"Heat given away in intercooler {k}", "kJ/kg",
                        reference=grounds.HEAT_OF_KILOGRAM)
    _sum(section, "w_c", tags, "Specific work of all compressors")


def expansion(plan: Plan, train: Train) -> None:
    """Turbines in line, each but the last with a reheater behind it."""
    section = plan.section("Expansion")
    names, tags = train.names("turbine"), train.tags("t")
    products = plan.options["gas"] == "products"
    for k, (inlet, outlet) in enumerate(train.turbines):
        caloric(section, inlet)
        expand(section, inlet, outlet, "w_g" if products else f"w_{tags[k]}", names[k])
    if not products:
        _sum(section, "w_t", tags, "Specific work of all turbines")


def _sum(section: Section, symbol: str, tags: list[str], title: str) -> None:
    if len(tags) > 1:
        section.formula(symbol, " + ".join(f"w_{tag}" for tag in tags), title, "kJ/kg", reference=grounds.SUM)


def regenerator(plan: Plan, train: Train) -> None:
    """The air heated by the exhaust, by an effectiveness on the heat that could be passed on at most."""
    air = train.regenerated
    if air is None:
        return
    section = plan.section("Regenerator, cold side")
    cold, hot = train.compressed, train.expanded
    most = hot.h
    if plan.options["gas"] == "products":
        most = section.property("h_am", f"h({air.gas.role}, p={air.p}, T={hot.T})",
                                "Enthalpy of the air if it came to the temperature of the exhaust")
    section.formula(air.h, f"{cold.h} + epsilon * ({most} - {cold.h})", f"Specific enthalpy {air.label}",
                    "kJ/kg",
                    reference="effectiveness: heat passed on over the most that could be")
    section.formula("q_reg", f"{air.h} - {cold.h}", "Heat passed on by the regenerator", "kJ/kg",
                    reference=grounds.HEAT_OF_KILOGRAM)
    at_enthalpy(section, air)


def heat(plan: Plan, train: Train) -> None:
    """Heat of combustor and reheaters a kilogram of air; with products the fuel that gives it."""
    start, end = train.to_combustor, train.turbines[0][0]
    if plan.options["gas"] == "products":
        _fuel(plan, start, end)
        return
    section = plan.section("Heat taken")
    several = len(train.turbines) > 1
    first = "q_cc" if several else "q_in"
    section.formula(first, f"{end.h} - {start.h}", "Heat taken in the combustor", "kJ/kg",
                    reference="energy balance; the fuel counts as heat")
    parts = [first]
    for k, ((_, cold), (hot, _)) in enumerate(pairwise(train.turbines), start=1):
        parts.append(section.formula(f"q_rh{k}", f"{hot.h} - {cold.h}", f"Heat taken in reheater {k}", "kJ/kg",
                                     reference=grounds.HEAT_OF_KILOGRAM))
    if several:
        section.formula("q_in", " + ".join(parts), "Heat taken in all", "kJ/kg", reference=grounds.SUM)


def _fuel(plan: Plan, start: GasState, end: GasState) -> None:
    """Fuel a kilogram of air: air and products have their zero of enthalpy at 25 °C, where the heating value holds."""
    section = plan.section("Fuel")
    section.formula("h_f", "0 kJ/kg", "Specific enthalpy of the fuel at 25 °C, where enthalpies are zero",
                    "kJ/kg", reference="chosen zero: fuel enters at 25 °C, where the heating value is stated")
    section.formula("f", f"({end.h} - {start.h}) / (eta_cc * LHV + h_f - {end.h})", "Fuel over air, by mass",
                    reference="energy balance of the combustor; enthalpies are zero at 25 °C, as for the heating value")
    section.formula("q_in", "f * eta_cc * LHV", "Heat of the fuel given to the gas, a kilogram of air", "kJ/kg",
                    reference="definition of the combustor's efficiency: heat given over heating value")
    _composition(plan)


def _composition(plan: Plan) -> None:
    """The shares of the products that belong to the fuel found, to be set against those that the spec states."""
    section = plan.section("Composition of the products")
    section.formula("M_f", "n_C * 12.011 g/mol + n_H * 1.008 g/mol", "Molar mass of the fuel", "g/mol",
                    reference="molar masses of carbon and hydrogen (IUPAC, conventional, from memory)")
    section.property("M_a", "M(air)", "Molar mass of the air")
    section.formula("n_a", "M_f / (f * M_a)", "Air for each mole of fuel, in moles",
                    reference="definition of the fuel-air ratio by mass, put into moles")
    section.formula("n_O", "n_C + n_H / 4", "Oxygen burnt for each mole of fuel, in moles",
                    reference="complete combustion to CO2 and H2O")
    section.formula("x_a", "0.2095", "Oxygen in dry air, by mole",
                    reference="dry air: 20.95 % oxygen, the rest counted as nitrogen (from memory)")
    section.formula("lambda", "n_a * x_a / n_O", "Air ratio: air given over air needed",
                    reference="definition of the air ratio: oxygen given over oxygen needed")
    section.formula("n_g", "n_a + n_H / 4", "Products for each mole of fuel, in moles",
                    reference="C_x H_y + (x + y/4) O2 = x CO2 + y/2 H2O: moles grow by y/4")
    section.formula("x_CO2", "n_C / n_g", "Carbon dioxide in the products, by mole", reference="balance of carbon")
    section.formula("x_H2O", "n_H / 2 / n_g", "Water in the products, by mole", reference="balance of hydrogen")
    section.formula("x_O2", "(n_a * x_a - n_O) / n_g", "Oxygen in the products, by mole", reference="balance of oxygen")
    section.formula("x_N2", "n_a * (1 - x_a) / n_g", "Nitrogen and argon in the products, by mole",
                    reference="balance of nitrogen, argon counted with it")
    section.property("M_g", "M(gas)", "Molar mass of the products as stated in the spec")


def require_products(plan: Plan) -> None:
    """Stop where the stated products are not those of the fuel and the air ratio found."""
    plan.demand("lambda > 1", "there is not enough air to burn the fuel", "lower the turbine inlet temperature")
    # 28.15 g/mol: nitrogen of the air with its argon.
    plan.demand("abs(M_g - x_CO2 * 44.01 g/mol - x_H2O * 18.015 g/mol - x_O2 * 31.998 g/mol - x_N2 * 28.15 g/mol) "
                "< 0.05 g/mol", "the composition stated for the gas is not that of the products",
                "state the shares x_CO2, x_H2O, x_O2 and x_N2 found here as the composition of the fluid gas")


def specific(plan: Plan, train: Train) -> None:
    """Net work, efficiency, back-work ratio, and Carnot's bound."""
    section = plan.section("Specific work and efficiency")
    if plan.options["gas"] == "products":
        section.formula("w_t", "(1 + f) * w_g", "Specific work of the turbine, a kilogram of air", "kJ/kg",
                        reference="mass balance: 1 + f kilograms of products a kilogram of air")
    section.formula("w_net", "w_t - w_c", "Specific net work", "kJ/kg", reference=grounds.NET_WORK)
    if plan.options["pressure_ratio"] == "most-work":
        plan.close("r_p")
    section.formula("eta", "w_net / q_in", "Thermal efficiency on the heat given to the gas",
                    reference=grounds.EFFICIENCY)
    section.formula("r_bw", "w_c / w_t", "Back-work ratio: compressors over turbines", reference=grounds.BACK_WORK)
    section.formula("r_w", "w_net / w_t", "Work ratio: net work over that of the turbines",
                    reference=grounds.WORK_RATIO)
    if plan.options["gas"] != "products":
        _carnot(plan, section, train)


def _carnot(plan: Plan, section: Section, train: Train) -> None:
    cold = "min(T_1, T_ic)" if len(train.compressors) > 1 else "T_1"
    hot = "max(T_t, T_rh)" if len(train.turbines) > 1 else "T_t"
    section.formula("eta_C", f"1 - {cold} / {hot}", "Carnot's efficiency between the extreme temperatures",
                    reference=grounds.CARNOT)
    plan.facts.bounds.append(Bound("eta", "eta_C",
                                   "the efficiency stays below Carnot's between the extreme temperatures"))


def demands(plan: Plan, train: Train) -> None:
    """What must hold of the solution, each with what the engineer must change."""
    plan.demand("w_net > 0 kJ/kg", "the plant gives no work: the compressors take all that the turbines give",
                "raise T_t or the efficiencies, or lower r_p")
    plan.demand(f"{train.to_combustor.h} < {train.turbines[0][0].h}" if plan.options["gas"] != "products" else
                f"{train.to_combustor.T} < {train.turbines[0][0].T}",
                "the air is hotter than the turbine inlet before any heat is given", "raise T_t or lower r_p")
    for (_, warm), (cool, _) in pairwise(train.compressors):
        plan.demand(f"{cool.T} < {warm.T}", "an intercooler would have to heat the air", "lower T_ic")
    for (_, cold), (hot, _) in pairwise(train.turbines):
        plan.demand(f"{hot.T} > {cold.T}", "a reheater would have to cool the gas", "raise T_rh")
    if plan.options["split"] == "given":
        for inlet, outlet in train.compressors:
            plan.demand(f"{outlet.p} > {inlet.p}", "the pressures do not rise from compressor to compressor",
                        "check the pressures behind the compressors against r_p")
        for inlet, outlet in train.turbines:
            plan.demand(f"{outlet.p} < {inlet.p}", "the pressures do not fall from turbine to turbine",
                        "check the pressures behind the turbines")
    if train.regenerated:
        plan.demand(f"{train.expanded.T} > {train.compressed.T}",
                    "the exhaust is colder than the air: a regenerator would cool the air",
                    "leave the regenerator out, or lower r_p")
    if plan.options["gas"] == "products":
        require_products(plan)
    elif len(train.compressors) > 1:
        plan.demand("T_0 <= T_ic", "the intercoolers cool below the surroundings", "lower T_0 or raise T_ic")


def power(plan: Plan, train: Train) -> None:
    """Flow, powers, heat, fuel and heat rate from the size given."""
    section = plan.section("Flow and power")
    _flow(plan, section, train)
    products = plan.options["gas"] == "products"
    for tag, name in zip(train.tags("c"), train.names("compressor"), strict=True):
        section.formula(f"W_dot_{tag}", f"m_dot * w_{tag}", f"Power of the {name}", "kW",
                        reference=grounds.POWER_OF_FLOW)
    for tag, name in zip(train.tags("t"), train.names("turbine"), strict=True):
        section.formula(f"W_dot_{tag}", f"m_dot * w_{tag}", f"Power of the {name}", "kW",
                        reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_s", "m_dot * w_net", "Net power at the shaft", "kW", reference=grounds.POWER_OF_FLOW)
    size = plan.options["size"]
    if size != "power":
        section.formula("W_dot_net", "eta_gen * W_dot_s", "Net electrical power", "kW", reference=grounds.GENERATOR)
    if size != "heat":
        section.formula("Q_dot_in", "m_dot * q_in", "Heat given to the gas", "kW", reference=grounds.HEAT_OF_SPECIFIC)
    section.formula("Q_dot_f", "Q_dot_in / eta_cc", "Energy of the fuel by its lower heating value", "kW",
                    reference="definition of the combustor's efficiency: heat given over heating value")
    if products:
        section.formula("m_dot_f", "f * m_dot", "Mass flow of the fuel", "kg/s",
                        reference="definition of the fuel-air ratio by mass")
        section.formula("m_dot_g", "m_dot + m_dot_f", "Mass flow of the products", "kg/s", reference=grounds.MASS)
    section.formula("eta_el", "W_dot_net / Q_dot_f", "Electrical efficiency on the fuel's lower heating value",
                    reference="definition of the electrical efficiency: net electrical power over energy of the fuel")
    section.formula("HR", "1 / eta_el", "Heat rate", "kJ/kWh",
                    reference="energy of the fuel for a unit of electrical work")
    plan.facts.again.append(Again("W_dot_net", "eta_gen * eta * Q_dot_in", "from the heat given to the gas"))


def _flow(plan: Plan, section: Section, train: Train) -> None:
    match plan.options["size"]:
        case "volume-flow":
            v = specific_volume(section, train.compressors[0][0])
            section.formula("m_dot", f"V_dot_1 / {v}", "Mass flow of air", "kg/s",
                            reference="definition of the specific volume: volume flow over mass flow")
        case "power":
            section.formula("m_dot", "W_dot_net / (eta_gen * w_net)", "Mass flow of air", "kg/s",
                            reference=grounds.FLOW_FOR_WORK)
        case "heat":
            section.formula("m_dot", "Q_dot_in / q_in", "Mass flow of air", "kg/s", reference=grounds.FLOW_FOR_HEAT)


def heats(plan: Plan, train: Train) -> None:
    """Heat flows of each exchanger, for the balances."""
    section = plan.section("Heat flows")
    for k in range(1, len(train.compressors)):
        section.formula(f"Q_dot_ic{k}", f"m_dot * q_ic{k}", f"Heat given away in intercooler {k}", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)
    if len(train.turbines) > 1:
        section.formula("Q_dot_cc", "m_dot * q_cc", "Heat taken in the combustor", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)
        for k in range(1, len(train.turbines)):
            section.formula(f"Q_dot_rh{k}", f"m_dot * q_rh{k}", f"Heat taken in reheater {k}", "kW",
                            reference=grounds.HEAT_OF_SPECIFIC)
    if train.regenerated:
        section.formula("Q_dot_reg", "m_dot * q_reg", "Heat passed on by the regenerator", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)


def exhaust(plan: Plan, train: Train) -> None:
    """State of the exhaust, the heat and the exergy that leave with it."""
    section = plan.section("Exhaust")
    it, flow = train.exhaust, train.exhaust.m_dot
    if train.regenerated:
        given = "q_reg / (1 + f)" if plan.options["gas"] == "products" else "q_reg"
        section.formula(it.h, f"{train.expanded.h} - {given}", f"Specific enthalpy {it.label}", "kJ/kg",
                        reference="energy balance of the regenerator")
        at_enthalpy(section, it)
    dead = GasState("0", "of the exhaust gas at the dead state", it.gas, "p_1", "T_0")
    caloric(section, dead)
    section.formula("Q_dot_ex", f"{flow} * ({it.h} - {dead.h})",
                    "Heat leaving with the exhaust, down to the dead state",
                    "kW", note="sensible heat: water in the exhaust, if any, stays vapour",
                    reference=grounds.HEAT_OF_FLOW)
    section.formula("e_ex", f"({it.h} - {dead.h}) - T_0 * ({it.s} - {dead.s})",
                    "Specific flow exergy of the exhaust",
                    "kJ/kg", reference="flow exergy without kinetic, potential and chemical parts")
    section.formula("E_dot_ex", f"{flow} * e_ex", "Exergy leaving with the exhaust", "kW",
                    reference=grounds.EXERGY_OF_FLOW)
    if plan.options["gas"] != "products":
        _balance(plan, section, train)


def _balance(plan: Plan, section: Section, train: Train) -> None:
    """The first law of the whole plant, a kilogram of air."""
    cooled = "".join(f" + q_ic{k}" for k in range(1, len(train.compressors)))
    section.formula("q_out", f"{train.exhaust.h} - {train.compressors[0][0].h}{cooled}",
                    "Heat given away, in the exhaust and the intercoolers", "kJ/kg", reference=grounds.HEAT_OF_KILOGRAM)
    section.formula("w_bal", "q_in - q_out", "Net work from heat taken and given away", "kJ/kg",
                    note="equal to the net work of the machines", reference=grounds.FIRST_LAW_OF_CYCLE)
    plan.facts.equals.append(Equal("w_net", "w_bal", "net work by the machines and by the heats", 1e-9))
