"""The single-stage machine's options to its states: who feeds whom, at which pressure, and each state's steps."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.machines import compressor, state, valve
from calcpack.plan.equipment.polynomial import polynomial_compressor
from calcpack.plan.plan import Plan, Section


@dataclass(frozen=True, slots=True)
class Route:
    """The way of the refrigerant by the numbers of its states; numbers name places, whatever is left out.

    1 and 2 are the compressor's ends, 3 the condenser outlet, 4 the evaporator
    inlet, 5 the evaporator outlet, 6 and 7 vapour and liquid after the internal
    exchanger, 8 the vapour after the desuperheater, 9 after the discharge line.
    """

    losses: bool
    exchanger: bool
    warmed: bool
    hot: bool

    @property
    def line(self) -> bool:
        """Whether the suction line changes the state."""
        return self.losses or self.warmed

    @property
    def evaporator_outlet(self) -> str:
        return "5" if self.exchanger or self.line else "1"

    @property
    def line_inlet(self) -> str:
        """The vapour before the suction line, after an internal exchanger."""
        if self.exchanger:
            return "6" if self.line else "1"
        return self.evaporator_outlet

    @property
    def valve_inlet(self) -> str:
        return "7" if self.exchanger else "3"

    @property
    def discharge(self) -> str:
        """The hot gas after the discharge line."""
        return "9" if self.losses else "2"

    @property
    def condenser_inlet(self) -> str:
        return "8" if self.hot else self.discharge

    def p(self, number: str) -> str:
        """The symbol of a state's pressure."""
        high = number in "23789"
        if self.losses and number in "1234":
            return f"p_{number}"
        if self.losses and number == "7":
            return "p_3"
        return "p_c" if high else "p_e"

    def labels(self) -> dict[str, str]:
        """What each state that there is stands for, in the order of the numbers."""
        all_labels = {"1": "compressor inlet", "2": "compressor outlet", "3": "condenser outlet",
                      "4": "evaporator inlet", "5": "evaporator outlet",
                      "6": "vapour after the internal exchanger",
                      "7": "liquid after the internal exchanger", "8": "vapour after the desuperheater",
                      "9": "gas after the discharge line"}
        present = {"1", "2", "3", "4", self.evaporator_outlet, self.line_inlet, self.valve_inlet,
                   self.discharge,
                   self.condenser_inlet}
        return {number: label for number, label in all_labels.items() if number in present}


def route(options: Mapping[str, str]) -> Route:
    """The way of the refrigerant for a machine's options."""
    return Route(options["pressure_losses"] == "given", options["internal_exchanger"] != "none",
                 options["suction_line"] == "warmed", options["desuperheater"] != "none")


def state_inputs(plan: Plan, way: Route) -> None:
    """Inputs of the pieces between the exchangers and the compressor."""
    if way.losses:
        for tag, word, typical in (("e", "evaporator", "0.1 bar"), ("c", "condenser", "0.15 bar"),
                                   ("suc", "suction line", "0.04 bar"), ("dis", "discharge line", "0.1 bar")):
            plan.input(f"dp_{tag}", "pressure", f"Pressure drop in the {word}", typical, low="0 bar")
    if way.exchanger:
        plan.input("epsilon_ihx", "number", "Effectiveness of the internal exchanger, by temperatures", "0.5",
                   low="0", low_open=True, high="1")
    if way.warmed:
        plan.input("dT_line", "temperature difference", "Warming of the vapour in the suction line, of no use",
                   "4 K",
                   low="0 K", low_open=True, note="for none, set the option suction_line to adiabatic")
    if way.hot:
        plan.input("dT_left", "temperature difference", "Superheat left after the desuperheater", "5 K",
                   low="0 K",
                   low_open=True)


def pressures(section: Section, way: Route) -> None:
    """Pressures beside the levels, where there are losses."""
    if not way.losses:
        return
    for symbol, formula, title in (
            ("p_1", "p_e - dp_suc", "Pressure at the compressor inlet"),
            ("p_4", "p_e + dp_e", "Pressure at the evaporator inlet"),
            ("p_2", "p_c + dp_dis", "Pressure at the compressor outlet"),
            ("p_3", "p_c - dp_c", "Pressure at the condenser outlet")):
        section.formula(symbol, formula, title, "bar", reference=grounds.DROP)


def states(plan: Plan, section: Section, way: Route) -> None:
    """Every state of the refrigerant; with polynomials the compressor comes last, since they may need all levels."""
    polynomial = plan.options["compressor"] != "efficiency"
    _evaporator_outlet(plan, section, way)
    if way.exchanger:
        _condenser_outlet(plan, section, way)
        _internal_exchanger(section, way)
    if way.line:
        _suction_line(section, way)
    section.property("rho_1", f"rho(wf, p={way.p('1')}, h=h_1)", "Density at the compressor inlet")
    if not polynomial:
        compressor(section, "wf", "1", "2", way.p("2"), "f_loss")
    if not way.exchanger:
        _condenser_outlet(plan, section, way)
    valve(section, "wf", way.valve_inlet, "4", way.p("4"))
    if polynomial:
        _polynomial(plan, way)
        section = plan.section("Discharge") if way.losses or way.hot else section
    if way.losses:
        valve(section, "wf", "2", "9", "p_c", "after the discharge line", "energy balance of an adiabatic line")
    if way.hot:
        section.formula("T_8", "T_c + dT_left", "Temperature after the desuperheater", "degC",
                        reference=grounds.SUPERHEAT)
        state(section, "8", "wf", "after the desuperheater", p="p_c", T="T_8")


def _evaporator_outlet(plan: Plan, section: Section, way: Route) -> None:
    number = way.evaporator_outlet
    where = "at the compressor inlet" if number == "1" else "at the evaporator outlet"
    if plan.options["suction"] == "superheated":
        section.formula(f"T_{number}", "T_e + dT_sh", f"Temperature {where}", "degC", reference=grounds.SUPERHEAT)
        state(section, number, "wf", where, p="p_e", T=f"T_{number}")
    else:
        state(section, number, "wf", where, p="p_e", x="1")


def _condenser_outlet(plan: Plan, section: Section, way: Route) -> None:
    p = way.p("3")
    section.property("T_bub", f"T(wf, p={p}, x=0)", "Bubble-point temperature at the condensing pressure")
    if plan.options["liquid"] == "subcooled":
        section.formula("T_3", "T_bub - dT_sc", "Temperature at the condenser outlet", "degC",
                        reference=grounds.SUBCOOLING)
        state(section, "3", "wf", "at the condenser outlet", p=p, T="T_3")
    else:
        state(section, "3", "wf", "at the condenser outlet", p=p, x="0")


def _internal_exchanger(section: Section, way: Route) -> None:
    internal_exchanger(section, "wf", vapour=(way.evaporator_outlet, way.line_inlet), liquid=("3", "7"),
                       p_vapour="p_e", p_liquid=way.p("7"))


def internal_exchanger(section: Section, fluid: str, *, vapour: tuple[str, str], liquid: tuple[str, str],
                       p_vapour: str, p_liquid: str, word: str = "liquid") -> None:
    """Vapour on its way to the compressor, warmed by the ``word`` on its way to the valve, to ``epsilon_ihx``."""
    (cold, warmed), (warm, cooled) = vapour, liquid
    section.formula(f"T_{warmed}", f"T_{cold} + epsilon_ihx * (T_{warm} - T_{cold})",
                    "Temperature of the vapour after the internal exchanger", "degC",
                    reference="effectiveness: rise of the vapour over the greatest rise that there could be")
    state(section, warmed, fluid, "of the vapour after the internal exchanger", p=p_vapour, T=f"T_{warmed}")
    section.formula(f"h_{cooled}", f"h_{warm} - (h_{warmed} - h_{cold})",
                    f"Specific enthalpy of the {word} after the internal exchanger", "kJ/kg",
                    reference="energy balance of the internal exchanger, equal flows")
    state(section, cooled, fluid, f"of the {word} after the internal exchanger", p=p_liquid, h=f"h_{cooled}")
    section.formula("dT_ihx_hot", f"T_{warm} - T_{warmed}",
                    "Temperature difference at the exchanger's warm end", "K", reference=grounds.TWO_SIDES)
    section.formula("dT_ihx_cold", f"T_{cooled} - T_{cold}",
                    "Temperature difference at the exchanger's cold end", "K", reference=grounds.TWO_SIDES)


def require_exchange(plan: Plan) -> None:
    """Stop where the internal exchanger has nothing to give, or temperatures cross at an end."""
    plan.demand("dT_ihx_hot >= 0 K and dT_ihx_cold > 0 K",
                "the internal exchanger has no temperature difference left",
                "the liquid must be warmer than the vapour: take a smaller effectiveness, less superheat or "
                "subcooling, or set internal_exchanger to none")


def _suction_line(section: Section, way: Route) -> None:
    before, p = way.line_inlet, way.p("1")
    if way.warmed:
        section.formula("T_1", f"T_{before} + dT_line", "Temperature at the compressor inlet", "degC",
                        reference="definition of dT_line: temperature behind the line less that before it")
        state(section, "1", "wf", "at the compressor inlet", p=p, T="T_1")
    else:
        valve(section, "wf", before, "1", p, "at the compressor inlet", "energy balance of an adiabatic line")


def _polynomial(plan: Plan, way: Route) -> None:
    """The compressor by its polynomials; the levels are dew points, or the means of the two-phase zones."""
    section = plan.section("Compressor by its polynomials")
    levels = ["T_e", "T_c"]
    if way.losses:
        for index, (number, word) in enumerate((("1", "inlet"), ("2", "outlet"))):
            levels[index] = section.property(f"T_dew_{number}", f"T(wf, p=p_{number}, x=1)",
                                             f"Dew-point temperature at the compressor {word}")
    saturated = levels[0]
    if plan.options["polynomial_levels"] == "mid":
        levels = [section.formula("T_mid_e", "(T_4 + T_e) / 2", "Mean temperature of evaporation", "degC",
                                  reference=grounds.MIDDLE),
                  section.formula("T_mid_c", "(T_bub + T_c) / 2", "Mean temperature of condensation", "degC",
                                  reference=grounds.MIDDLE)]
    polynomial_compressor(section, "wf", "1", "2", plan.options["compressor"], dew=(levels[0], levels[1]),
                          saturated=saturated,
                          pressures=(way.p("1"), way.p("2")), loss="f_loss")
