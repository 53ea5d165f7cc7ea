"""Gas turbine: compressors with intercoolers, regenerator, combustor, turbines with reheaters: options and inputs."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.errors import Fault, SpecError
from calcpack.methods import gas_turbine_parts as parts
from calcpack.methods.gas_turbine_facts import facts
from calcpack.methods.gas_turbine_train import Train, arrange, pressures
from calcpack.methods.method import Method, Option, Role
from calcpack.plan.equipment.gas import GAS_VALUES, Gas, gas_inputs, require_ideal, zeros
from calcpack.plan.plan import Plan

OPTIONS = (
    Option("gas", "How the gas is described", {
        **GAS_VALUES,
        "products": "air, and behind the combustor the products of a hydrocarbon fuel, as ideal gases"}),
    Option("compressors", "Compressors in line, with an intercooler between each two", {
        "1": "one, no intercooler", "2": "two, one intercooler", "3": "three, two intercoolers",
        "4": "four, three intercoolers"}),
    Option("reheats", "Reheaters, each with a turbine behind it", {
        "0": "none, one turbine", "1": "one, two turbines", "2": "two, three turbines",
        "3": "three, four turbines"}),
    Option("regenerator", "Heat passed from the exhaust to the compressed air", {
        "none": "no regenerator", "yes": "a regenerator of given effectiveness"}),
    Option("pressure_ratio", "What sets the pressure ratio", {
        "given": "an input", "most-work": "found for the greatest net work a kilogram of air"}),
    Option("split", "How the pressure ratio is split between the stages", {
        "equal": "every compressor, and every turbine, has the same ratio",
        "given": "the pressures behind the compressors and turbines but the last are inputs"}),
    Option("losses", "Pressure lost in the equipment", {
        "none": "none", "given": "as a share of the pressure at its inlet"}),
    Option("size", "What the plant's size is given by", {
        "mass-flow": "the mass flow of air", "volume-flow": "the volume flow at the compressor inlet",
        "power": "the net electrical power", "heat": "the heat given to the gas"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: pressures, machines, regenerator, heat or fuel, work, flow and power, exhaust."""
    _consistent(plan.options)
    air = gas_inputs(plan)
    products = plan.options["gas"] == "products"
    if products:
        require_ideal(plan, "gas")
    train = arrange(plan, air, Gas("gas") if products else air)
    _inputs(plan, train)
    if air.constant:
        zeros(plan.section("The gas"), air)
    if plan.options["pressure_ratio"] == "most-work":
        _most_work(plan, train)
    pressures(plan, train)
    parts.compression(plan, train)
    parts.expansion(plan, train)
    parts.regenerator(plan, train)
    parts.heat(plan, train)
    parts.specific(plan, train)
    parts.demands(plan, train)
    parts.power(plan, train)
    if train.regenerated or len(train.compressors) + len(train.turbines) > 2:
        parts.heats(plan, train)
    parts.exhaust(plan, train)
    facts(plan, train)


def _consistent(options: Mapping[str, str]) -> None:
    if options["gas"] == "products" and options["reheats"] != "0":
        raise SpecError(Fault("option gas: products needs option reheats: 0",
                              hint="a second fire changes the products once more: set gas to air-standard"))
    if options["pressure_ratio"] == "most-work" and options["split"] == "given":
        raise SpecError(Fault("option pressure_ratio: most-work needs option split: equal",
                              hint="set split to equal, or give the pressure ratio"))


def _most_work(plan: Plan, train: Train) -> None:
    """The ratio is the free value; its upper bound lies above the optimum of constant heat capacities."""
    exponent = 4.0 / (1.0 / len(train.compressors) + 1.0 / len(train.turbines))
    plan.section("Pressure ratio").optimum(
        "r_p", "w_net", ("1.01", f"min((T_t / T_1)^{exponent:.3g}, 300)"),
        "Pressure ratio of the greatest net work",
        note="at its upper bound it is the bound that sets it: give the pressure ratio instead",
        reference="condition of the greatest net work, found by search between the bounds")


def _inputs(plan: Plan, train: Train) -> None:
    plan.input("p_1", "pressure", "Pressure at the compressor inlet", "1.013 bar", low="0 bar", low_open=True)
    plan.input("T_1", "temperature", "Temperature at the compressor inlet", "15 degC")
    if len(train.compressors) > 1:
        plan.input("T_ic", "temperature", "Temperature behind each intercooler", "30 degC")
    if plan.options["pressure_ratio"] == "given":
        plan.input("r_p", "number", "Pressure ratio: behind the last compressor over the inlet", "12", low="1",
                   low_open=True)
    _split_inputs(plan, train)
    plan.input("T_t", "temperature", "Turbine inlet temperature", "1100 degC")
    if len(train.turbines) > 1:
        plan.input("T_rh", "temperature", "Temperature behind each reheater", "1100 degC")
    share = {"low": "0", "low_open": True, "high": "1"}
    plan.input("eta_c", "number", "Isentropic efficiency of each compressor", "0.86", **share)
    plan.input("eta_t", "number", "Isentropic efficiency of each turbine", "0.89", **share)
    if train.regenerated:
        plan.input("epsilon", "number",
                   "Effectiveness of the regenerator: heat passed on over the most that could be",
                   "0.85", low="0", high="1")
    plan.input("eta_cc", "number", "Combustion efficiency: heat given to the gas over the fuel's", "0.99",
               **share)
    plan.input("eta_gen", "number", "Efficiency of generator and gear", "0.97", **share)
    plan.input("T_0", "temperature", "Temperature of the dead state", "15 degC")
    if plan.options["gas"] == "products":
        _fuel_inputs(plan)
    if plan.options["losses"] == "given":
        _loss_inputs(plan, train)
    _size_input(plan)


def _split_inputs(plan: Plan, train: Train) -> None:
    if plan.options["split"] != "given":
        return
    stages = len(train.compressors)
    for k in range(1, stages):
        plan.input(f"p_ic{k}", "pressure", f"Pressure behind compressor {k}", f"{12 ** (k / stages):.2g} bar",
                   low="0 bar", low_open=True)
    stages = len(train.turbines)
    for k in range(1, stages):
        plan.input(f"p_rh{k}", "pressure", f"Pressure behind turbine {k}", f"{12 ** (1 - k / stages):.2g} bar",
                   low="0 bar", low_open=True)


def _fuel_inputs(plan: Plan) -> None:
    plan.input("LHV", "specific energy", "Lower heating value of the fuel at 25 °C", "50.0 MJ/kg",
               low="0 MJ/kg",
               low_open=True)
    plan.input("n_C", "number", "Carbon atoms of a molecule of the fuel", "1", low="0")
    plan.input("n_H", "number", "Hydrogen atoms of a molecule of the fuel", "4", low="0", low_open=True)


def _loss_inputs(plan: Plan, train: Train) -> None:
    rows = [("f_cc", "in the combustor, of that at its inlet", "0.04"),
            ("f_ex",
             "behind the last turbine, in regenerator, silencer and stack, of that at the turbine's outlet",
             "0.02")]
    if len(train.compressors) > 1:
        rows.append(("f_ic", "in each intercooler, of that at its inlet", "0.02"))
    if train.regenerated:
        rows.append(("f_rc", "by the air in the regenerator, of that at its inlet", "0.02"))
    if len(train.turbines) > 1:
        rows.append(("f_rh", "in each reheater, of that at its inlet", "0.03"))
    for symbol, where, typical in rows:
        plan.input(symbol, "number", f"Pressure lost {where}", typical, low="0", high="0.5")


def _size_input(plan: Plan) -> None:
    symbol, kind, title, typical = {
        "mass-flow": ("m_dot", "mass flow", "Mass flow of air", "20 kg/s"),
        "volume-flow": ("V_dot_1", "volume flow", "Volume flow at the compressor inlet", "16 m³/s"),
        "power": ("W_dot_net", "power", "Net electrical power", "5 MW"),
        "heat": ("Q_dot_in", "power", "Heat given to the gas", "15 MW")}[plan.options["size"]]
    plan.input(symbol, kind, title, typical, low=f"0 {typical.split()[1]}", low_open=True)


def _roles(options: Mapping[str, str]) -> tuple[Role, ...]:
    if options["gas"] == "cold-air":
        return ()
    air = Role("air", "Air, an ideal gas", "air")
    if options["gas"] == "air-standard":
        return (air,)
    return (air, Role("gas", "Products of combustion, by mole", _typical_products(options)))


def _typical_products(options: Mapping[str, str]) -> str:
    """Products of methane at the typical inputs: the colder the air before the fire, the more fuel in them."""
    several = options["compressors"] != "1"
    warm = options["regenerator"] == "yes" and not (several and options["pressure_ratio"] == "most-work")
    if warm:
        shares = "N2: 76.0 %, Ar: 0.9 %, O2: 15.1 %, CO2: 2.7 %, H2O: 5.3 %"
    elif several and options["regenerator"] == "none":
        shares = "N2: 75.0 %, Ar: 0.9 %, O2: 12.1 %, CO2: 4.0 %, H2O: 8.0 %"
    else:
        shares = "N2: 75.6 %, Ar: 0.9 %, O2: 13.8 %, CO2: 3.2 %, H2O: 6.5 %"
    return f"{{fluid: combustion products, composition: {{{shares}}}}}"


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    shown = ["W_dot_net", "eta_el", "eta", "w_net", "r_bw", "HR"]
    if options["pressure_ratio"] == "most-work":
        shown.append("r_p")
    return tuple(shown)


METHOD = Method(
    name="gas-turbine",
    title="Gas turbine with intercooling, reheat and regeneration",
    text="Air is compressed in one or more stages with cooling between them, heated by the exhaust "
         "where there is a regenerator, heated in a combustor, and expanded in one or more turbines "
         "with reheat between them. Heat capacities are constant or vary with temperature; with "
         "products of combustion the fuel-air ratio follows from the combustor's energy balance.",
    options=OPTIONS, roles=_roles, lay=lay,
    assumes=("steady state", "ideal gases", "machines adiabatic, with isentropic efficiencies",
             "in the balances of entropy the heat comes from a source as hot as the turbine inlet",
             "with products: complete combustion, fuel at 25 °C, composition as stated in the spec and checked against "
             "the fuel and the air ratio found"),
    leaves_out=("cooling air of the turbine, leakage, humidity of the air", "dissociation and emissions",
                "part load and changes of the surroundings", "kinetic energy"),
    sketch="""
   air ─►┌────────────┐ 2  ┌───────────┐ 3 ┌─────────┐
       1 │ Compressor ├───►│ Combustor ├──►│ Turbine ├─► generator
         └────────────┘    └─────▲─────┘   └────┬────┘
                               fuel             │ 4
                                                ▼ exhaust
   (compressors 2 to 4: an intercooler between each two; reheats 1 to 3:
    a reheater and one more turbine each; regenerator: the exhaust heats
    the air before the combustor)
""",
    results=_results)
