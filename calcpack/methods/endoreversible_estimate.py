"""The endoreversible engine at maximum power (Curzon and Ahlborn) beside Carnot's bound: an estimate."""
from __future__ import annotations

from collections.abc import Mapping

from calcpack.methods.gas_engine_parts import engine_sketch
from calcpack.methods.method import Method, Option
from calcpack.plan.equipment import grounds
from calcpack.plan.facts import Again, Bound, Equal, Volume
from calcpack.plan.plan import Plan, Section

SOURCE = "Curzon and Ahlborn, Am. J. Phys. 43 (1975) 22"

OPTIONS = (
    Option("conductances", "What is known of the heat exchangers", {
        "none": "nothing: the efficiency at maximum power alone",
        "given": "the conductance of both; power and temperatures at maximum power follow"}),
    Option("observed", "A plant's observed efficiency set beside", {
        "none": "no plant", "efficiency": "the observed efficiency is an input"}),
)


def lay(plan: Plan) -> None:
    """Lay the plan: bound and estimate, the engine at maximum power, the plant observed."""
    plan.input("T_h", "temperature", "Temperature of the heat source", "565 degC")
    plan.input("T_c", "temperature", "Temperature of the heat sink", "25 degC")
    section = plan.section("Bound and estimate")
    plan.demand("T_h > T_c", "the source is not warmer than the sink", "check the two temperatures")
    section.formula("eta_C", "1 - T_c / T_h", "Carnot's efficiency: the bound",
                    reference="absolute temperatures, whatever the working fluid")
    section.formula("eta_CA", "1 - sqrt(T_c / T_h)",
                    "Efficiency of the endoreversible engine at maximum power: an estimate",
                    reference=SOURCE,
                    note="no bound: an engine run for efficiency rather than power can pass it")
    section.formula("g_CA", "eta_CA / eta_C", "Share of Carnot's efficiency at maximum power",
                    reference=grounds.SHARE_OF_CARNOT)
    plan.facts.bounds.append(Bound("eta_CA", "eta_C", "the estimate stays below Carnot's efficiency"))
    if plan.options["conductances"] == "given":
        _at_maximum_power(plan)
    if plan.options["observed"] == "efficiency":
        _observed(plan)
    plan.facts.sketch = engine_sketch("Q_dot_h", "Q_dot_c")


def _at_maximum_power(plan: Plan) -> None:
    plan.input("UA_h", "entropy flow", "Conductance between source and engine", "100 kW/K", low="0 kW/K",
               low_open=True)
    plan.input("UA_c", "entropy flow", "Conductance between engine and sink", "100 kW/K", low="0 kW/K",
               low_open=True)
    section = plan.section("The engine at maximum power")
    section.formula("T_direct", "(UA_h * T_h + UA_c * T_c) / (UA_h + UA_c)",
                    "Temperature between the exchangers if heat ran straight through", "degC",
                    note="here the power is zero, as it is where the engine takes no heat",
                    reference="energy balance without work: heat from the source equals heat to the sink")
    section.optimum("T_hw", "W_dot", ("T_direct", "T_h"),
                    "Upper temperature of the engine, for the greatest power",
                    "degC", reference="condition of the greatest power, found by search between the bounds")
    section.formula("Q_dot_h", "UA_h * (T_h - T_hw)", "Heat taken from the source", "kW",
                    reference="heat transfer proportional to the temperature difference")
    section.formula("S_dot", "Q_dot_h / T_hw", "Entropy that passes through the engine", "kW/K",
                    reference="the engine itself is reversible")
    section.formula("T_cw", "T_c / (1 - S_dot / UA_c)", "Lower temperature of the engine", "degC",
                    note="at which the entropy passes on: UA_c (T_cw - T_c) = T_cw S_dot",
                    reference="entropy balance of the reversible engine")
    section.formula("Q_dot_c", "UA_c * (T_cw - T_c)", "Heat given to the sink", "kW",
                    reference="heat transfer proportional to the temperature difference")
    section.formula("W_dot", "Q_dot_h - Q_dot_c", "Power", "kW", reference=grounds.FIRST_LAW_OF_CYCLE)
    plan.close("T_hw")
    _closed_forms(section)
    plan.facts.volumes.append(Volume("engine and both exchangers", work_out=("W_dot",),
                                     heat_in=(("Q_dot_h", "T_h"),),
                                     heat_out=(("Q_dot_c", "T_c"),), scale="Q_dot_h", cycle=True))


def _closed_forms(section: Section) -> None:
    section.formula("eta_W", "W_dot / Q_dot_h", "Efficiency at the greatest power, as found",
                    reference=grounds.EFFICIENCY)
    section.formula("UA", "UA_h * UA_c / (UA_h + UA_c)", "Conductance of both exchangers in series", "kW/K",
                    reference="resistances in series add")
    section.formula("W_dot_most", "UA * (sqrt(T_h) - sqrt(T_c))^2", "Greatest power by its closed form", "kW",
                    reference="both exchangers in contact all the time")
    section.formula("S_dot_gen", "Q_dot_c / T_c - Q_dot_h / T_h",
                    "Entropy generated, all of it in the exchangers", "kW/K",
                    reference="second law: entropy given to the sink less entropy taken from the source")
    section.plan.facts.equals += [
        Equal("W_dot", "W_dot_most", "greatest power by search and by its closed form", 1e-8),
        # The power is flat at its greatest, so that the temperatures there are found less finely than the power.
        Equal("eta_W", "eta_CA", "efficiency at the greatest power, by search and by Curzon and Ahlborn", 1e-5)]


def _observed(plan: Plan) -> None:
    plan.input("eta_obs", "number", "Observed efficiency of the plant", "0.36", low="0", low_open=True,
               high="1")
    section = plan.section("The plant observed")
    section.formula("g_obs", "eta_obs / eta_C", "Share of Carnot's efficiency that the plant reaches",
                    reference=grounds.SHARE_OF_CARNOT)
    section.formula("r_obs", "eta_obs / eta_CA", "Observed efficiency over the estimate",
                    note="may lie above 1: the estimate is no bound", reference="derived: observed value over estimate")
    plan.facts.bounds.append(Bound("eta_obs", "eta_C", "no plant passes Carnot's efficiency"))
    plan.facts.again.append(Again("g_obs", "r_obs * g_CA", "from the two other shares"))


def _results(options: Mapping[str, str]) -> tuple[str, ...]:
    more = ("W_dot",) if options["conductances"] == "given" else ()
    return ("eta_C", "eta_CA", *more, *(("g_obs",) if options["observed"] == "efficiency" else ()))


METHOD = Method(
    name="endoreversible-estimate",
    title="Efficiency at maximum power of an endoreversible engine, beside Carnot's bound",
    text="A reversible engine between two heat exchangers of finite conductance gives the most power "
         "at an efficiency of one less the root of the temperature ratio. It is an estimate: it "
         "misleads where a plant is not run for the most power from given exchangers (fuel is dear, "
         "exchangers can be made larger), where source or sink is a stream whose temperature changes, "
         "where heat does not flow in proportion to the temperature difference, and where the losses "
         "inside the engine count. Only Carnot's figure is a bound.",
    options=OPTIONS, roles=lambda options: (), lay=lay,
    assumes=("the engine runs at maximum power", "heat transfer proportional to the temperature difference",
             "the engine itself is reversible: all entropy is generated in the exchangers",
             "source and sink at constant temperature"),
    leaves_out=("friction, throttling and every loss inside the engine",
                "the cost of heat and of exchangers, which "
                "decide how a real plant is run"),
    sketch="""
      ┌────────────┐
      │   source   │ T_h
      └─────┬──────┘
         UA_h (heat exchanger)
      ┌─────┴──────┐ T_hw
      │ reversible ├── W_dot
      └─────┬──────┘ T_cw
         UA_c (heat exchanger)
      ┌─────┴──────┐
      │    sink    │ T_c
      └────────────┘
""",
    results=_results)
