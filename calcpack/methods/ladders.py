"""For each kind of machine, what lies between its reversible figure and its net one besides its equipment."""
from __future__ import annotations

from collections.abc import Iterable

from calcpack.plan.facts import Again, Flow, Ladder, Rung, Volume
from calcpack.plan.plan import Plan

AUXILIARIES = Rung("auxiliaries", "W_dot_aux")


def heat_pump(plan: Plan, *, hot: bool = False) -> None:
    """The power that a reversible machine draws for the same heat between the same streams, up to the power drawn.

    With losses the machine takes less heat from its source than the
    reversible one (serving cold: gives more to its sinks). ``hot`` says that
    there is a second sink.
    """
    heat, mean = ("Q_dot_heat", "T_m_heat") if hot else ("Q_dot_sink", "T_m_sink")
    if plan.options["serves"] == "heating":
        start, other = f"{heat} / COP_rev", Rung(
            "less heat taken from the source than by the reversible machine",
            f"({heat} * T_m_source / {mean} - Q_dot_source) * (1 - T_dead / T_m_source)", either=True)
    else:
        start, other = "Q_dot_source / COP_rev", Rung(
            "more heat given off than by the reversible machine",
            f"({heat} - Q_dot_source * {mean} / T_m_source) * (1 - T_dead / {mean})", either=True)
    plan.facts.ladder = Ladder(
        "From the reversible power to the power drawn", start, "Reversible power for the same heat, same streams",
        "W_dot_net", "Electrical power drawn in all", before=(other,),
        after=(Rung("motor and drive", "W_dot_el - W_dot_shaft"), AUXILIARIES), upward=True,
        room=("Q_dot_loss", "Q_dot_line"))
    plan.facts.again.append(Again("W_dot_net", "W_dot_aux + (Q_dot_loss - Q_dot_source + " + heat + " - " + (
        "Q_dot_line" if plan.options.get("suction_line") == "warmed" else "0 kW") + ") * W_dot_el / W_dot_shaft",
        "from the heats that the machine takes and gives, by the ratio of motor to shaft power"))


def recompression(plan: Plan, equipment: Iterable[Volume]) -> None:
    """The power of a reversible machine that lifts the vapour's own heat, up to the power drawn.

    The machine's cold side is the condensate, flashed and evaporated again at
    the compressor's inlet; of the plant's equipment only the compressor counts.
    """
    flash = Rung("condensate flashed to the compressor's inlet pressure", "T_dead * m_dot_v * (s_6 - s_4)")
    plan.facts.ladder = Ladder(
        "From the reversible power to the power drawn", "Q_dot_hs / COP_rev", "Reversible power for the same heat",
        "W_dot_net", "Electrical power drawn in all",
        before=(Rung("less heat taken up again than by the reversible machine",
                     "(Q_dot_hs * T_m_cold / T_m_warm - m_dot_v * (h_1 - h_4)) * (1 - T_dead / T_m_cold)", either=True),
                flash),
        after=(Rung("motor and drive", "W_dot_el - W_dot_shaft"), AUXILIARIES), upward=True, room=("Q_dot_loss",),
        skip=tuple(volume.name for volume in equipment if volume.name != "compressor"))


def rankine(plan: Plan, *, sink: bool) -> None:
    """The power of the source stream cooled reversibly to the dead state, down to the net power."""
    plan.facts.ladder = Ladder(
        "From the reversible power of the source to the net power", "W_dot_rev",
        "Reversible power of the source, cooled to the dead state", "W_dot_net", "Net electrical power",
        before=(_left("source"),), after=(*_warmer(sink), Rung("generator and gear", "W_dot_t - W_dot_gen"),
                                          Rung("motor of the pump", "W_dot_pm - W_dot_p"), AUXILIARIES),
        room=() if sink else ("Q_dot_c",))
    net = "(Q_dot_h - Q_dot_c) * eta_gen - W_dot_p * (1 / eta_pm - eta_gen) - W_dot_aux"
    plan.facts.again.append(Again("W_dot_net", net, "from heat taken less heat given, and the pump's share"))
    plan.facts.again.append(Again("W_dot_rev_taken", "Q_dot_h * eta_rev",
                                  "heat taken by Carnot's relation with the entropic mean temperature"))


def combined(plan: Plan, *, cycle: bool, sink: bool) -> None:
    """The power of the exhaust cooled reversibly to the dead state, down to the electrical power of the steam side.

    With a gas turbine's own ``cycle`` on the sheet the ladder ends at the
    steam side's power; without it, at the plant's.
    """
    plan.facts.ladder = Ladder(
        "From the reversible power of the exhaust to the power of the steam side", "W_dot_rev",
        "Reversible power of the gas, cooled to the dead state", "W_dot_snet" if cycle else "W_dot_net",
        "Electrical power of the steam side" if cycle else "Net electrical power", before=(_left("gas"),),
        after=(*_warmer(sink), Rung("generator", "W_dot_st * (1 - eta_gen)"),
               Rung("motors of the pumps", "W_dot_p * (1 / eta_pm - 1)"), *(() if cycle else (AUXILIARIES,))),
        room=() if sink else ("Q_dot_c",), skip=("gas turbine",) if cycle else ())
    plan.facts.again += [
        Again("W_dot_rev_taken", "Q_dot_hr * eta_rev",
              "heat taken by Carnot's relation with the entropic mean temperature"),
        Again("eta_hr", "Q_dot_hr / (m_dot_gas * (h_gas_in - h_gas_0))", "from the heat taken and the gas flow")]
    known = {step.symbol for step in plan.steps}
    for tag, rest in (("hp", "h_gas_in - m_dot_hp * (h_4 - h_ec_hp) / m_dot_gas"),
                      ("lp", "h_pp_hp - (m_dot_hp * (h_ec_hp - h_em_hp) + m_dot_lp * (h_5 - h_ec_lp)) / m_dot_gas")):
        if f"h_pp_{tag}" in known:
            plan.facts.again += [Again(f"h_pp_{tag}", rest, "from the gas's side, down to the pinch"),
                                 Again(f"dT_pinch_{tag}", f"T_pp_{tag} - T_s_{tag}", "the pinch, found back")]
    if cycle:
        plan.facts.again += [
            Again("W_dot_net", "W_dot_gt * eta_gen_g + W_dot_st * eta_gen - W_dot_p / eta_pm - W_dot_aux",
                  "from shaft powers, machine by machine"),
            Again("eta_C", "(T_g3 - T_0) / T_g3", "from the span of temperature over the highest")]


def _left(role: str) -> Rung:
    """What a stream still could give when it leaves, cooled to the dead state at its own pressure."""
    return Rung(f"{role} leaves at its outlet temperature",
                f"m_dot_{role} * ((h_{role}_out - h_{role}_0) - T_dead * (s_{role}_out - s_{role}_0))")


def _warmer(sink: bool) -> tuple[Rung, ...]:
    return (Rung("sink leaves warmer than it came",
                 "m_dot_sink * ((h_sink_out - h_sink_in) - T_dead * (s_sink_out - s_sink_in))"),) if sink else ()


def steam(plan: Plan, boiler: Volume, *, sink: bool, process: Iterable[Flow] = (),
          returned: Iterable[Flow] = ()) -> None:
    """The exergy that water and steam take up in the boiler, down to the net power.

    Fuel, combustion and the way of heat to the water lie before the start.
    """
    process, returned = tuple(process), tuple(returned)
    unused = list(_warmer(sink))
    if process:
        unused.append(Rung("given to the process, less what comes back", exergy_rise(returned, process)))
    plan.facts.ladder = Ladder(
        "From the exergy given to the steam to the net power", exergy_rise(boiler.flows_in, boiler.flows_out),
        "Exergy that water and steam take up in the boiler", "W_dot_net", "Net electrical power",
        after=(*unused, Rung("generator", "W_dot_t * (1 - eta_gen)"),
               Rung("motors of the pumps", "W_dot_p * (1 / eta_pm - 1)"), AUXILIARIES),
        room=("Q_dot_l",) if sink else ("Q_dot_c", "Q_dot_l"), skip=(boiler.name,))
    plan.facts.again += [
        Again("w_net", "(W_dot_t - W_dot_p) / m_dot_1", "from the shaft powers and the flow"),
        Again("eta_C", "(T_max - T_c) / T_max", "from the span of temperature over the highest")]
    if not process:
        gained = "Q_dot_in - Q_dot_l" if any(name == "Q_dot_l" for name, _ in boiler.heat_out) else "Q_dot_in"
        plan.facts.again += [
            Again("eta_m", "(T_m_in - T_c) / T_m_in", "from the span of temperature over the mean"),
            Again("T_m_in", f"Q_dot_in * T_dead / ({gained} - ({plan.facts.ladder.start}))",
                  "from heat and exergy taken up in the boiler")]


def exergy_rise(flows_in: Iterable[Flow], flows_out: Iterable[Flow]) -> str:
    """The exergy of what leaves less that of what enters, as a formula; the flows' masses must balance."""
    leaving = " + ".join(f"{flow.m_dot} * ({flow.h} - T_dead * {flow.s})" for flow in flows_out)
    entering = "".join(f" - {flow.m_dot} * ({flow.h} - T_dead * {flow.s})" for flow in flows_in)
    return leaving + entering


def bound(plan: Plan, *, engine: bool) -> None:
    """The reversible power to that of a real machine, whose losses are known in sum only."""
    word = "given" if engine else "drawn"
    plan.facts.ladder = Ladder(
        f"From the reversible power to the power {word}", "W_dot_rev", "Reversible power", "W_dot_real",
        f"Power {word} by the real machine", after=(Rung("real machine, all its losses together", "W_dot_lost"),),
        upward=not engine)
    plan.facts.again.append(Again("W_dot_lost", "W_dot_rev * (1 - g_rev)" if engine else "W_dot_rev * (1 / g_rev - 1)",
                                  "from the share of the bound that is reached"))


def carnot(plan: Plan, hot: str, cold: str) -> None:
    """The reversible power again: the area between two levels in the T-S plane."""
    plan.facts.again.append(Again("W_dot_rev", f"({hot} - {cold}) * S_dot_h",
                                  "area between the two levels in the T-S plane"))
