"""A steam plant's extraction shares, heater by heater from the top, then works, heats, flows and powers."""
from __future__ import annotations

from dataclasses import dataclass, field

from calcpack.methods.steam_states import Water
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.machines import state
from calcpack.plan.facts import Equal
from calcpack.plan.plan import Plan, Section

ALL = "1"
"""The share of what passes the turbine inlet."""


@dataclass(slots=True)
class Shares:
    """Symbols of the flows, each a share of the steam at the turbine inlet.

    ``feed`` of heater i is the feedwater that leaves it, of the condenser
    (one more than the heaters) the condensate; ``drain`` what its drains carry
    in all; ``taken`` what a tap gives, by its pressure; ``part`` what passes
    each step of the expansion.
    """

    feed: dict[int, str] = field(default_factory=lambda: {1: ALL})
    drain: dict[int, str] = field(default_factory=dict)
    taken: dict[str, str] = field(default_factory=dict)
    part: list[str] = field(default_factory=list)

    @property
    def names(self) -> list[str]:
        """Every share that is not the whole, once, in order."""
        found = [*self.taken.values(), *self.part, *self.drain.values(), *self.feed.values()]
        return [name for name in dict.fromkeys(found) if name != ALL]

    def flow(self, share: str) -> str:
        """The symbol of the mass flow of a share."""
        return "m_dot_1" if share == ALL else f"m_dot_{share.replace('_', '')}"


def shares(plan: Plan, water: Water) -> Shares:
    """Lay the shares; each heater's energy balance gives its own, since all above it is known."""
    found = Shares()
    arranged = water.arranged
    if arranged.process:
        _process(plan, water, found)
    if arranged.heaters:
        section = plan.section("Extraction shares, from the highest pressure down")
        for heater in range(1, len(arranged.heaters) + 1):
            _heater(plan, section, water, found, heater)
    if arranged.stations:
        _turbine_parts(plan, water, found)
    else:
        found.part = [ALL]
    _condensate(plan, water, found)
    return found


def _process(plan: Plan, water: Water, found: Shares) -> None:
    section = plan.section("Process steam and the water that comes back")
    tap = water.taps["p_pr"]
    section.property("h_ret", "h(wf, p=p_ret, T=T_ret)", "Specific enthalpy of the returned condensate")
    section.property("s_ret", "s(wf, p=p_ret, T=T_ret)", "Specific entropy of the returned condensate")
    section.property("h_mu", "h(wf, p=p_ret, T=T_mu)", "Specific enthalpy of the make-up water")
    section.property("s_mu", "s(wf, p=p_ret, T=T_mu)", "Specific entropy of the make-up water")
    section.formula("h_back", "f_ret * h_ret + (1 - f_ret) * h_mu",
                    "Specific enthalpy of what comes back for the process steam",
                    "kJ/kg", reference="returned condensate and make-up water together")
    place = water.arranged.returns_to
    into = water.shell(place) if place else "p_c"
    plan.demand(f"p_ret >= {into}", "the returned water has not the pressure to enter the plant",
                "raise p_ret to at least the pressure of the " + (f"open heater {place}" if place else "condenser"))
    section.formula("q_pr", f"{tap.h} - h_back", "Heat that a kilogram of process steam leaves with the process",
                    "kJ/kg", reference="energy balance of the process: steam less what comes back")
    plan.demand("q_pr > 0 kJ/kg", "the process steam carries no heat to the process", "lower T_ret")
    if plan.options["process"] == "heat":
        section.formula("y_pr", "Q_dot_pr / (m_dot_1 * q_pr)", "Share of the steam that goes to the process",
                        reference="energy balance of the process, solved for the share")
    found.taken["p_pr"] = "y_pr"


def _heater(plan: Plan, section: Section, water: Water, found: Shares, heater: int) -> None:
    kind = water.arranged.kind(heater)
    if kind == "open":
        _open(section, water, found, heater)
    elif water.arranged.coupled(heater + 1):
        _coupled(section, water, found, heater)
    elif water.arranged.coupled(heater):
        _below_coupled(section, water, found, heater)
    elif kind == "closed-trap":
        _trap(section, water, found, heater)
    else:
        section.formula(f"y_{heater}", _times(found.feed[heater], f"z_{heater}"),
                        f"Share of the steam to heater {heater}", reference=f"energy balance of heater {heater}")
        found.drain[heater] = f"y_{heater}"
        _less(section, found, heater, f"y_{heater}")
    found.taken[f"p_x{heater}"] = f"y_{heater}"
    plan.demand(f"y_{heater} > 0", f"heater {heater} has nothing to heat: its feedwater or the drains it takes are "
                                   f"warm enough",
                "lower the extraction pressure below it, raise its own, or leave the heater out")


def _times(share: str, what: str) -> str:
    return what if share == ALL else f"{share} * {what}"


def _less(section: Section, found: Shares, heater: int, taken: str) -> None:
    """The feedwater that comes from below is less by what joins in this heater."""
    found.feed[heater + 1] = section.formula(
        f"f_w{heater + 1}", f"{found.feed[heater]} - {taken}",
        f"Share of the feedwater that enters heater {heater} from below",
        reference=f"mass balance of heater {heater}")


def _drained(water: Water, found: Shares, heater: int) -> tuple[str, str] | None:
    """Share and enthalpy of the drains that a heater takes from above, None where there are none."""
    if not water.arranged.drains_into(heater):
        return None
    return found.drain[heater - 1], water.drain[heater - 1].h


def _open(section: Section, water: Water, found: Shares, heater: int) -> None:
    into, out, tap = water.feed_in[heater].h, water.after[heater].h, water.taps[f"p_x{heater}"].h
    others = [one for one in (_drained(water, found, heater),) if one]
    if water.arranged.process and water.arranged.returns_to == heater:
        others.append(("y_pr", "h_back"))
    top = _times(found.feed[heater], f"({out} - {into})") + "".join(f" - {y} * ({h} - {into})" for y, h in others)
    section.formula(f"y_{heater}", f"({top}) / ({tap} - {into})", f"Share of the steam to open heater {heater}",
                    reference=f"energy balance of open heater {heater}, its mass balance put in")
    _less(section, found, heater, " - ".join([f"y_{heater}", *(y for y, _ in others)]))


def _trap(section: Section, water: Water, found: Shares, heater: int) -> None:
    """A closed heater whose drains go down through a trap."""
    above = _drained(water, found, heater)
    _trap_share(section, water, found, heater, water.feed_in[heater].h)
    found.feed[heater + 1] = found.feed[heater]
    _drains(section, found, heater, above)


def _trap_share(section: Section, water: Water, found: Shares, heater: int, into: str) -> None:
    out, drain, tap = water.feed_out[heater].h, water.drain[heater].h, water.taps[f"p_x{heater}"].h
    above = _drained(water, found, heater)
    top = _times(found.feed[heater], f"({out} - {into})") + (f" - {above[0]} * ({above[1]} - {drain})" if above else "")
    section.formula(f"y_{heater}", f"({top}) / ({tap} - {drain})", f"Share of the steam to heater {heater}",
                    reference=f"energy balance of heater {heater}")


def _drains(section: Section, found: Shares, heater: int, above: tuple[str, str] | None) -> None:
    found.drain[heater] = f"y_{heater}" if above is None else section.formula(
        f"f_d{heater}", f"y_{heater} + {above[0]}", f"Share of the drains of heater {heater}", reference=grounds.MASS)


def _coupled(section: Section, water: Water, found: Shares, heater: int) -> None:
    """Heater ``heater`` traps its drains into a heater that pumps all forward: both follow from two linear balances."""
    below = heater + 1
    out, drain, tap = water.feed_out[heater].h, water.drain[heater].h, water.taps[f"p_x{heater}"].h
    low_out, low_in, low_drain = water.feed_out[below].h, water.feed_in[below].h, water.drain[below].h
    low_tap, pumped = water.taps[f"p_x{below}"].h, water.drain_pumped[below].h
    share, above = found.feed[heater], _drained(water, found, heater)
    first = _times(share, f"({out} - {low_out})") + (f" - {above[0]} * ({above[1]} - {drain})" if above else "")
    section.formula(f"f_d{heater}0", f"({first}) / ({tap} - {drain})" + (f" + {above[0]}" if above else ""),
                    f"Share of the drains of heater {heater}, were the drains of heater {below} not mixed in before it",
                    reference=f"energy balance of heater {heater}")
    heated = f"({low_out} - {low_in})"
    section.formula(f"f_d{below}",
                    f"({_times(share, heated)} + ({low_tap} - {drain}) * f_d{heater}0) / (({low_tap} - {low_drain}) + "
                    f"{heated} + ({low_tap} - {drain}) * ({pumped} - {low_out}) / ({tap} - {drain}))",
                    f"Share of the drains that heater {below} pumps forward",
                    reference=f"energy balances of heaters {heater} and {below}, solved together")
    mixed = water.after[below]
    ratio = f"f_d{below}" if share == ALL else f"f_d{below} / {share}"
    section.formula(mixed.h, f"{low_out} + {ratio} * ({pumped} - {low_out})",
                    f"Specific enthalpy of the feedwater after the drains of heater {below}", "kJ/kg",
                    reference="energy balance of the mixing")
    state(section, mixed.number, "wf", f"after the drains of heater {below}", p=mixed.p, h=mixed.h)
    _trap_share(section, water, found, heater, mixed.h)
    found.feed[below] = share
    _drains(section, found, heater, above)


def _below_coupled(section: Section, water: Water, found: Shares, heater: int) -> None:
    above = _drained(water, found, heater)
    section.formula(f"y_{heater}", f"f_d{heater} - {above[0]}", f"Share of the steam to heater {heater}",
                    reference=f"mass balance of the drains of heater {heater}")
    found.drain[heater] = f"f_d{heater}"
    _less(section, found, heater, f"f_d{heater}")


def _turbine_parts(plan: Plan, water: Water, found: Shares) -> None:
    """What is left after each extraction must still be something."""
    section = plan.section("Shares along the turbine")
    found.part = [ALL]
    left = ALL
    for number, station in enumerate(water.arranged.stations, start=2):
        share = found.part[-1]
        if station.kind != "reheat":
            left += f" - {found.taken[station.pressure]}"
            share = section.formula(f"f_t{number}", left,
                                    f"Share of the steam that stays in the turbine behind {station.name}",
                                    reference="mass balance of the turbine")
            plan.demand(f"{share} > 0", f"the extractions take more steam than there is: nothing is left behind "
                                        f"{station.name}",
                        "take less steam for the process, lower extraction pressures, or leave a heater out")
        found.part.append(share)


def _condensate(plan: Plan, water: Water, found: Shares) -> None:
    """What comes from below the last heater must be something."""
    last = len(water.arranged.heaters) + 1
    if found.feed[last] != ALL:
        plan.demand(f"{found.feed[last]} > 0", "extractions and what comes back leave no condensate",
                    "take less steam for the process, or lower extraction pressures")


def specific(plan: Plan, water: Water, found: Shares) -> None:
    """Work and heat a kilogram of steam at the turbine inlet."""
    section = plan.section("Work and heat a kilogram of steam at the turbine inlet")
    works = [_times(share, one.work) for share, one in zip(found.part, water.expansions, strict=True)]
    section.formula("w_t", " + ".join(works), "Work of the turbine", "kJ/kg",
                    reference="fall of enthalpy of each part by what passes it")
    pumps = [_times(share, work) for work, share, _, _ in pumps_of(water, found)]
    if pumps != ["w_p"]:
        section.formula("w_p", " + ".join(pumps), "Work of the pumps", "kJ/kg", reference=grounds.SUM)
    name = "q_b" if water.cold else "q_in"
    heat = [section.formula(name, f"{water.boiler_out.h} - {water.feedwater.h}", "Heat taken in the boiler", "kJ/kg",
                            reference=grounds.HEAT_OF_KILOGRAM)]
    for number, cold in water.cold.items():
        share = found.part[_expansion_after(water, number)]
        reheat = f"({water.hot[number].h} - {cold.h}" + (" + q_l_rh)" if water.losses else ")")
        heat.append(section.formula(f"q_rh{number}", _times(share, reheat), f"Heat taken in reheater {number}",
                                    "kJ/kg", reference=grounds.HEAT_OF_KILOGRAM))
    if len(heat) > 1:
        section.formula("q_in", " + ".join(heat), "Heat taken in all", "kJ/kg", reference=grounds.SUM)
    section.formula("q_c", _condenser_heat(water, found), "Heat given up in the condenser", "kJ/kg",
                    reference="energy balance of the condenser")
    if water.losses:
        reheated = [_times(found.part[_expansion_after(water, number)], "q_l_rh") for number in water.cold]
        section.formula("q_l", " + ".join(["q_l_main", *reheated]), "Heat lost by the steam lines", "kJ/kg",
                        reference=grounds.SUM)
    section.formula("w_net", "w_t - w_p", "Net work at the shafts", "kJ/kg", reference=grounds.NET_WORK)
    plan.demand("w_net > 0 kJ/kg", "the plant gives no work", "pumps draw all that the turbine makes")


def _expansion_after(water: Water, reheat: int) -> int:
    """Which step of the expansion begins behind a reheater."""
    return next(i for i, one in enumerate(water.expansions) if one.inlet is water.hot[reheat])


def condenser_inflows(water: Water, found: Shares) -> list[tuple[str, str, str]]:
    """Share, enthalpy and entropy of all that enters the condenser; entropy '' where only parts of it have one."""
    flows = [(found.part[-1], water.exhaust.h, water.exhaust.s)]
    last = len(water.arranged.heaters)
    if last and water.arranged.kind(last) == "closed-trap":
        flows.append((found.drain[last], water.drain[last].h, water.drain[last].s))
    if water.arranged.process and not water.arranged.returns_to:
        flows.append(("y_pr", "h_back", ""))
    return flows


def _condenser_heat(water: Water, found: Shares) -> str:
    last, cold = len(water.arranged.heaters) + 1, water.condensate.h
    flows = condenser_inflows(water, found)
    if len(flows) == 1 and flows[0][0] == found.feed[last]:
        return _times(flows[0][0], f"({flows[0][1]} - {cold})")
    return " + ".join(_times(share, h) for share, h, _ in flows) + f" - {_times(found.feed[last], cold)}"


def pumps_of(water: Water, found: Shares) -> list[tuple[str, str, str, str]]:
    """Work, share, state before and after of every pump, the feedwater line's from the condenser up."""
    places = [len(water.arranged.heaters) + 1, *reversed(water.arranged.opens)]
    tags = [""] if water.arranged.only_pump else [str(number) for number in range(1, water.arranged.pumps + 1)]
    listed = [(f"w_p{tag}", found.feed[place], *(one.number for one in water.pumped[number]))
              for number, (tag, place) in enumerate(zip(tags, places, strict=True), start=1)]
    return listed + [(f"w_d{heater}", found.drain[heater], water.drain[heater].number, pumped.number)
                     for heater, pumped in water.drain_pumped.items()]


def power(plan: Plan, water: Water, found: Shares) -> None:
    """Flow from net power or the reverse, powers, heats and the figures of merit."""
    section = plan.section("Flow, powers and efficiency")
    if plan.options["size_by"] == "power":
        section.formula("w_el", "w_t * eta_gen - w_p / eta_pm",
                        "Electrical work a kilogram, generator less pump motors", "kJ/kg", reference=grounds.NET_POWER)
        plan.demand("w_el > 0 kJ/kg", "the plant gives no electrical work", "pumps draw all that the turbine makes")
        section.formula("m_dot_1", "(W_dot_net + W_dot_aux) / w_el", "Mass flow of steam at the turbine inlet", "kg/s",
                        reference=grounds.FLOW_FOR_WORK)
    section.formula("W_dot_t", "m_dot_1 * w_t", "Shaft power of the turbine", "kW", reference=grounds.POWER_OF_FLOW)
    section.formula("W_dot_p", "m_dot_1 * w_p", "Shaft power of the pumps", "kW", reference=grounds.POWER_OF_FLOW)
    if plan.options["size_by"] != "power":
        section.formula("W_dot_net", "W_dot_t * eta_gen - W_dot_p / eta_pm - W_dot_aux", "Net electrical power", "kW",
                        reference=grounds.NET_POWER)
        plan.demand("W_dot_net > 0 kW", "the net power is not above zero",
                    "pumps and auxiliaries draw all that is made")
    _merit(plan, section, water)
    _flows(plan, found, water)


def _merit(plan: Plan, section: Section, water: Water) -> None:
    """Heats, the figures of merit, and the balance of the whole plant."""
    section.formula("Q_dot_in", "m_dot_1 * q_in", "Heat taken by water and steam", "kW",
                    reference=grounds.HEAT_OF_SPECIFIC)
    section.formula("Q_dot_c", "m_dot_1 * q_c", "Heat given up in the condenser", "kW",
                    reference=grounds.HEAT_OF_SPECIFIC)
    section.formula("eta_th", "W_dot_net / Q_dot_in", "Thermal efficiency on the net power",
                    reference=grounds.EFFICIENCY)
    section.formula("Q_dot_fuel", "Q_dot_in / eta_b", "Heat of the fuel to the boiler", "kW",
                    reference="definition of the boiler's efficiency: heat to the steam over heat of the fuel")
    section.formula("HR", "Q_dot_fuel / W_dot_net", "Net heat rate on the heat of the fuel", "kJ/kWh",
                    reference="definition of the heat rate: heat of the fuel over net power")
    section.formula("r_bw", "w_p / w_t", "Back-work ratio: pumps over turbine, at the shafts",
                    reference=grounds.BACK_WORK)
    section.formula("b_st", "m_dot_1 / W_dot_net", "Steam rate: steam at the turbine inlet over net energy", "kg/kWh",
                    reference="definition of the steam rate")
    out = "Q_dot_c + W_dot_t - W_dot_p"
    if water.losses:
        section.formula("Q_dot_l", "m_dot_1 * q_l", "Heat lost by the steam lines", "kW",
                        reference=grounds.HEAT_OF_SPECIFIC)
        out += " + Q_dot_l"
    if water.arranged.process:
        if plan.options["process"] != "heat":
            section.formula("Q_dot_pr", "m_dot_1 * y_pr * q_pr", "Heat left with the process", "kW",
                            reference=grounds.HEAT_OF_SPECIFIC)
        section.formula("eps_u", "(W_dot_net + Q_dot_pr) / Q_dot_in",
                        "Utilisation factor: power and process heat over heat taken",
                        reference="definition of the utilisation factor")
        out += " + Q_dot_pr"
    section.formula("Q_dot_out_sum", out, "Heat and work that leave, for check", "kW", note="must equal the heat taken",
                    reference=grounds.WHOLE)
    plan.facts.equals.append(Equal("Q_dot_in", "Q_dot_out_sum", "heat taken equals heat and work that leave", 1e-9))


def _flows(plan: Plan, found: Shares, water: Water) -> None:
    if not found.names:
        return
    section = plan.section("Mass flows")
    words = {share: f"Mass flow of the steam to {station.name}" for station in water.arranged.stations
             for share in (found.taken.get(station.pressure),) if share}
    for name in found.names:
        title = words.get(name) or ("Mass flow in the turbine, behind an extraction" if name.startswith("f_t") else
                                    "Mass flow of drains" if name.startswith("f_d") else "Mass flow of feedwater")
        section.formula(found.flow(name), f"{name} * m_dot_1", title, "kg/s",
                        reference="share times flow at the turbine inlet")
    if water.arranged.process:
        pr = found.flow("y_pr")
        section.formula("m_dot_ret", f"f_ret * {pr}", "Mass flow of the returned condensate", "kg/s",
                        reference="definition of the returned share")
        section.formula("m_dot_mu", f"(1 - f_ret) * {pr}", "Mass flow of the make-up water", "kg/s",
                        reference=grounds.MASS)
