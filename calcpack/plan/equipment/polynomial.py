"""A compressor described by ten-coefficient polynomials: power and mass flow at any level and suction state."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.plan.equipment.machines import discharge
from calcpack.plan.plan import Plan, Section

TERMS = ("", "t_S", "t_D", "t_S^2", "t_S * t_D", "t_D^2", "t_S^3", "t_D * t_S^2", "t_S * t_D^2", "t_D^3")
"""What each coefficient multiplies, in the order of both standards (the order is from memory)."""


@dataclass(frozen=True, slots=True)
class Form:
    """A standard's form of the polynomial: its temperature scale and the unit of the flow."""

    standard: str
    degrees: str
    celsius: bool
    flow_unit: str
    superheat: str


FORMS: Mapping[str, Form] = {
    "polynomial-en": Form("EN 12900 (form of the polynomial from memory)", "°C", True, "kg/h", "10 K"),
    "polynomial-ahri": Form("ANSI/AHRI 540 (form of the polynomial from memory)", "°F", False, "lb/h", "20 °R"),
}

TYPICAL: Mapping[str, tuple[tuple[str, ...], tuple[str, ...]]] = {
    "polynomial-en": (
        ("-12385", "-1633.4", "1696.3", "-56.401", "84.207",
         "-33.398", "-0.78029", "1.3341", "-0.89707", "0.25846"),
        ("2195.8", "79.757", "-3.1079", "1.0995", "0.00097003",
         "-0.033364", "0.0081426", "-0.00022583", "0.00015471", "-0.00036642")),
    "polynomial-ahri": (
        ("-14794", "-725.03", "825.79", "-11.884", "21.194",
         "-9.6405", "-0.1338", "0.22876", "-0.15382", "0.044318"),
        ("2484.9", "59.126", "-2.7678", "0.45535", "0.0023806",
         "-0.011276", "0.0030781", "-8.5367e-05", "5.8484e-05", "-0.00013852")),
}
"""Power and flow of each form, invented: fitted to a made-up machine of 200 m³/h swept volume with R-1234ze(E),
-10 to 20 °C evaporating, 20 to 70 °C condensing."""


def polynomial_inputs(plan: Plan, form: str) -> None:
    """Coefficients of power and flow, and the suction state that they were measured at."""
    of = FORMS[form]
    power, flow = TYPICAL[form]
    for letter, what, unit, values in (("W", "Power", "W", power), ("m", "Mass flow", of.flow_unit, flow)):
        for index, (term, value) in enumerate(zip(TERMS, values, strict=True), start=1):
            beside = term.replace(" * ", " ") or "1"
            plan.input(f"C_{letter}_{index}", "number",
                       f"{what} in {unit}, coefficient of {beside}, t in {of.degrees}",
                       value)
    plan.input("dT_sh_r", "temperature difference",
               "Superheat of the suction gas that the coefficients are for",
               of.superheat, low="0 K", low_open=True)
    plan.input("F_flow", "number", "How far the flow follows the suction density", "0.75", low="0", high="1",
               default="0.75")


def polynomial_compressor(section: Section, fluid: str, inlet: str, outlet: str, form: str, *,
                          dew: tuple[str, str],
                          saturated: str, pressures: tuple[str, str], loss: str) -> None:
    """Flow ``m_dot_one`` and power ``W_dot_one`` of one compressor, ``w_comp``, ``eta_is`` and the outlet state.

    ``dew`` are the temperatures that the polynomial takes, at suction and
    discharge; ``saturated`` is the dew point at the suction; ``pressures`` are
    those of the inlet and outlet state.
    """
    of = FORMS[form]
    for symbol, T, word in (("t_S", dew[0], "suction"), ("t_D", dew[1], "discharge")):
        number = f"({T} - 273.15 K) / 1 K" if of.celsius else f"1.8 * {T} / 1 K - 459.67"
        section.formula(symbol, number,
                        f"Saturation temperature at the {word} in {of.degrees}, as the polynomial takes it",
                        reference=of.standard)
    for symbol, letter, unit, title in (("W_dot_r", "W", "W", "Power of one compressor at the rated superheat"),
                                        ("m_dot_r", "m", of.flow_unit,
                                         "Flow of one compressor at the rated superheat")):
        section.formula(symbol, f"({_polynomial(letter)}) * 1 {unit}", title, "kW" if letter == "W" else unit,
                        reference=of.standard)
    _rated_suction(section, fluid, saturated, pressures)
    _corrected(section, fluid, inlet, outlet, pressures)
    discharge(section, fluid, inlet, outlet, pressures[1], loss)


def _polynomial(letter: str) -> str:
    terms = [f"C_{letter}_{index}" + (f" * {term}" if term else "")
             for index, term in enumerate(TERMS, start=1)]
    return " + ".join(terms)


def _rated_suction(section: Section, fluid: str, dew: str, pressures: tuple[str, str]) -> None:
    section.formula("T_r", f"{dew} + dT_sh_r", "Suction temperature that the coefficients are for", "degC",
                    reference="definition of superheat: temperature above the dew point, as rated")
    for letter, word in (("rho", "Density"), ("h", "Enthalpy"), ("s", "Entropy")):
        section.property(f"{letter}_r", f"{letter}({fluid}, p={pressures[0]}, T=T_r)",
                         f"{word} of the suction gas that the coefficients are for")
    section.property("h_rs", f"h({fluid}, p={pressures[1]}, s=s_r)",
                     "Its enthalpy after isentropic compression")


def _corrected(section: Section, fluid: str, inlet: str, outlet: str, pressures: tuple[str, str]) -> None:
    """Flow by the density's ratio, power by the flow's and the isentropic work's."""
    source = "Dabiri & Rice, ASHRAE Transactions 87 (1981), F = 0.75 (from memory)"
    section.formula("m_dot_one", f"m_dot_r * (1 + F_flow * (rho_{inlet} / rho_r - 1))",
                    "Flow of one compressor",
                    "kg/s",
                    reference=source)
    section.property(f"h_{outlet}s", f"h({fluid}, p={pressures[1]}, s=s_{inlet})",
                     "Enthalpy after isentropic compression")
    section.formula("W_dot_one", f"W_dot_r * (m_dot_one / m_dot_r) * (h_{outlet}s - h_{inlet}) / (h_rs - h_r)",
                    "Power of one compressor", "kW", reference=source)
    section.formula("w_comp", "W_dot_one / m_dot_one", "Specific work of compression", "kJ/kg",
                    reference="power is mass flow times specific work, solved for the work")
    section.formula("eta_is", f"(h_{outlet}s - h_{inlet}) / w_comp", "Isentropic efficiency by the polynomials",
                    reference="isentropic efficiency: isentropic work over work of compression")


def require_sound(plan: Plan) -> None:
    """Stop where the polynomials, outside what they were fitted to, give an impossible compressor."""
    plan.demand("m_dot_one > 0 kg/s and W_dot_one > 0 kW",
                "the polynomials give no flow or no power at these levels",
                "check the coefficients' order and units, and that the levels lie within the range they were fitted to")
    plan.demand("eta_is < 1", "the polynomials give an isentropic efficiency above one at these levels",
                "check the coefficients' order and units, and that the levels lie within the range they were fitted to")
