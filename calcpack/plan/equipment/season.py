"""A season's account: heat load, part load, back-up and energies of each row, and what they come to."""
from __future__ import annotations

from dataclasses import dataclass

from calcpack.plan.equipment import grounds
from calcpack.plan.plan import Plan, Section
from calcpack.plan.seasons import SOURCE, Season

PART_LOAD = "EN 14825, part-load ratio against the design temperature (formula from memory)"
CYCLING = {
    "water": ("{COP} * CR / (Cdh * CR + 1 - Cdh)", "0.9",
              "EN 14825, degradation of units that heat water (formula and usual Cdh from memory)"),
    "air": ("{COP} * (1 - Cdh * (1 - CR))", "0.25",
            "EN 14825, degradation of units that heat air (formula and usual Cdh from memory)"),
    "none": ("{COP}", "", "while it runs and while it stands the same: no loss by on and off")}
"""The coefficient of performance of a machine that switches on and off: formula, usual coefficient, source."""


@dataclass(frozen=True, slots=True)
class Account:
    """What is summed up of the rows; the fields are those of a spec's series."""

    kind: str
    heat: str = ""
    power: str = ""
    cycling: str = "none"
    backup: str = "electric"
    emissions: bool = False
    costs: bool = False
    season: Season | None = None


def account_needs(plan: Plan, account: Account) -> None:
    """Declare the inputs of an account: load, limits, factors and prices, each with its source in the spec."""
    positive = {"low": "0", "low_open": True}
    if account.kind == "heating":
        plan.input("Q_dot_design", "power", "Heat load at the design temperature", "10 kW", low="0 kW", low_open=True)
        if account.season is None:
            plan.input("T_design", "temperature", "Outdoor design temperature", "-10 degC")
            plan.input("T_limit", "temperature", "Outdoor temperature above which nothing is heated", "16 degC",
                       default="16 degC")
        if account.cycling != "none":
            usual = CYCLING[account.cycling][1]
            plan.input("Cdh", "number", "Degradation coefficient for on and off", usual, low="0", high="1",
                       default=usual)
        if account.backup == "fuel":
            plan.input("eta_boiler", "number", "Efficiency of the back-up boiler", "0.90", high="1.1", **positive)
    fuel = account.kind == "output" or account.backup == "fuel"
    _factor_needs(plan, account, fuel)


def _factor_needs(plan: Plan, account: Account, fuel: bool) -> None:
    if account.emissions:
        plan.input("f_CO2_el", "emission factor", "Carbon dioxide of a kilowatt-hour of electricity", "0.30 kg/kWh",
                   low="0 kg/kWh")
        if fuel:
            plan.input("f_CO2_fuel", "emission factor", "Carbon dioxide of a kilowatt-hour of fuel or heat taken",
                       "0.20 kg/kWh", low="0 kg/kWh")
    if account.costs:
        plan.input("c_el", "number", "Price of a kilowatt-hour of electricity, in the sheet's currency", "0.25",
                   low="0")
        if fuel:
            plan.input("c_fuel", "number", "Price of a kilowatt-hour of fuel or heat taken, in the sheet's currency",
                       "0.10", low="0")


def account_rows(plan: Plan, account: Account) -> tuple[str, ...]:
    """Add the steps of each row in a section of their own; gives the symbols that the table shows."""
    if account.kind == "none":
        return ()
    section = plan.section("Load and energy of the row")
    if account.kind == "output":
        return _output_rows(section, account)
    return _load(plan, section, account) + _machine(section, account)


def _output_rows(section: Section, account: Account) -> tuple[str, ...]:
    section.formula("E_out_row", f"{account.power} * t_bin", "Work given in the row", "kWh", reference=grounds.ENERGY)
    section.formula("E_in_row", f"{account.heat} * t_bin", "Heat taken in the row", "kWh", reference=grounds.ENERGY)
    return account.power, account.heat, "E_out_row", "E_in_row"


def _load(plan: Plan, section: Section, account: Account) -> tuple[str, ...]:
    if account.season is not None:
        for symbol, celsius, title in (("T_design", account.season.design, "Outdoor design temperature of the season"),
                                       ("T_limit", account.season.limit,
                                        "Outdoor temperature above which nothing is heated")):
            section.formula(symbol, f"{celsius + 273.15:.12g} K", title, "degC", reference=SOURCE)
    plan.demand("T_out < T_limit", "there is no heat load in a row", "leave rows at the heating limit and above it out")
    plan.demand("T_design < T_limit", "the design temperature is not below the heating limit",
                "check the two temperatures")
    section.formula("x_load", "(T_limit - T_out) / (T_limit - T_design)",
                    "Part-load ratio: heat load over that at the design",
                    reference=PART_LOAD)
    section.formula("Q_dot_load", "Q_dot_design * x_load", "Heat load", "kW",
                    reference="definition of the part-load ratio, solved for the load")
    section.formula("t_eq", "x_load * t_bin", "Hours at the design load that need the same heat", "h",
                    reference="derived: heat of the row over load at the design")
    return "x_load", "Q_dot_load"


def _machine(section: Section, account: Account) -> tuple[str, ...]:
    heat = account.heat
    section.plan.demand(f"{heat} > 0 kW and {account.power} > 0 kW",
                        "the machine gives no heat or draws no power in a row",
                        "look at the symbols under series.heat and series.power")
    section.formula("CR", f"min(1, Q_dot_load / {heat})", "Share of the time that the machine runs",
                    reference="heat load over heating capacity, at most 1")
    section.formula("COP_full", f"{heat} / {account.power}", "Coefficient of performance while it runs",
                    reference=grounds.COP)
    formula, _, source = CYCLING[account.cycling]
    section.formula("COP_row", formula.format(COP="COP_full"), "Coefficient of performance with on and off",
                    reference=source)
    section.formula("Q_dot_backup", f"max(0 kW, Q_dot_load - {heat})", "Heat that the machine lacks", "kW",
                    reference="energy balance of the building: load less heat of the machine")
    section.formula("E_heat_row", "Q_dot_load * t_bin", "Heat of the row", "kWh", reference=grounds.ENERGY)
    section.formula("E_hp_row", "(Q_dot_load - Q_dot_backup) * t_bin / COP_row",
                    "Electricity of the machine in the row", "kWh",
                    reference="definition of the coefficient of performance, times hours of the row")
    section.formula("E_backup_row", "Q_dot_backup * t_bin", "Back-up heat of the row", "kWh", reference=grounds.ENERGY)
    section.formula("t_run_row", "CR * t_bin", "Running hours of the row", "h",
                    reference="share of the time times hours of the row")
    shown = (heat, "COP_full", "CR", "COP_row", "Q_dot_backup", "E_heat_row", "E_hp_row", "E_backup_row")
    if account.cycling == "none":
        return tuple(name for name in shown if name != "COP_row")
    section.formula("E_cycling_row", "E_hp_row * (1 - COP_row / COP_full)",
                    "Electricity lost by on and off in the row", "kWh",
                    reference="derived: electricity less that at the full coefficient of performance")
    return shown


def account_sums(account: Account) -> tuple[tuple[str, str, str], ...]:
    """Totals of an account: symbol, column, title."""
    if account.kind == "output":
        return (("t_year", "t_bin", "Hours of all rows"), ("E_out_year", "E_out_row", "Work given"),
                ("E_in_year", "E_in_row", "Heat taken"))
    if account.kind == "none":
        return ()
    cycling = (("E_cycling_season", "E_cycling_row", "Electricity lost by on and off"),)
    return (("t_season", "t_bin", "Hours of the season"), ("t_full", "t_eq", "Equivalent hours at the design load"),
            ("t_run", "t_run_row", "Running hours of the machine"), ("E_heat", "E_heat_row", "Heat of the season"),
            ("E_hp", "E_hp_row", "Electricity of the machine"), ("E_backup", "E_backup_row", "Back-up heat"),
            *(cycling if account.cycling != "none" else ()))


def account_figures(section: Section, account: Account) -> tuple[str, ...]:
    """Seasonal figures, carbon dioxide and costs from the totals; gives their symbols."""
    if account.kind == "none":
        return ()
    figures = _yield(section) if account.kind == "output" else _seasonal(section, account)
    return figures + _factors(section, account)


def _yield(section: Section) -> tuple[str, ...]:
    section.plan.demand("E_in_year > 0 kWh", "no heat is taken in any row", "look at the symbol under series.heat")
    return (section.formula("eta_year", "E_out_year / E_in_year",
                            "Efficiency of the whole: work given over heat taken", reference=grounds.EFFICIENCY),)


def _seasonal(section: Section, account: Account) -> tuple[str, ...]:
    figures = [section.formula("SCOP_net", "(E_heat - E_backup) / E_hp",
                               "Seasonal coefficient of performance of the machine alone",
                               reference="heat of the machine over its electricity, summed over the rows")]
    if account.backup == "electric":
        section.formula("E_el", "E_hp + E_backup", "Electricity of the season", "kWh", reference=grounds.SUM)
        figures.append(section.formula("SCOP_on", "E_heat / E_el",
                                       "Seasonal coefficient of performance with electric back-up",
                                       reference="EN 14825, SCOPon: heat over electricity while there is a load"))
    else:
        section.formula("E_el", "E_hp", "Electricity of the season", "kWh",
                        reference="the back-up takes fuel, so that only the machine draws electricity")
        figures.append(section.formula("E_fuel", "E_backup / eta_boiler", "Fuel of the back-up boiler", "kWh",
                                       reference="definition of the boiler's efficiency: heat over energy of the fuel"))
    figures.append(section.formula("f_backup", "E_backup / E_heat", "Share of the heat that the back-up gives",
                                   reference="derived: heat of the back-up over heat of the season"))
    return tuple(figures)


def _factors(section: Section, account: Account) -> tuple[str, ...]:
    """Carbon dioxide and money: factor times energy, by carrier."""
    if account.kind == "output":
        carriers = (("E_in_year", "fuel"),)
    else:
        carriers = (("E_el", "el"), ("E_fuel", "fuel")) if account.backup == "fuel" else (("E_el", "el"),)
    figures = []
    if account.emissions:
        sums = " + ".join(f"{energy} * f_CO2_{tag}" for energy, tag in carriers)
        figures.append(section.formula("m_CO2", sums, "Carbon dioxide of the energy used", "kg",
                                       reference=grounds.EMISSIONS))
    if account.costs:
        sums = " + ".join(f"{energy} / 1 kWh * c_{tag}" for energy, tag in carriers)
        figures.append(section.formula("C_run", sums, "Cost of the energy used, in the sheet's currency",
                                       reference=grounds.COSTS))
    if account.kind == "output":
        if account.emissions:
            figures.append(section.formula("m_CO2_saved", "E_out_year * f_CO2_el",
                                           "Carbon dioxide of the electricity that need not be bought", "kg",
                                           reference=grounds.EMISSIONS))
        if account.costs:
            figures.append(section.formula("C_saved", "E_out_year / 1 kWh * c_el",
                                           "Value of the electricity given, in the sheet's currency",
                                           reference=grounds.COSTS))
    return tuple(figures)
