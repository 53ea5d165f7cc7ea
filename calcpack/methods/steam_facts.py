"""What is said of a steam plant's steps: condenser, bound, balances, states, diagrams, arrangement sketch."""
from __future__ import annotations

from calcpack.methods import ladders
from calcpack.methods.steam_flows import ALL, Shares, condenser_inflows, pumps_of
from calcpack.methods.steam_states import Water
from calcpack.plan.equipment import grounds
from calcpack.plan.equipment.exchanger import Exchanger, Zone, conductance, profile, require_pinch
from calcpack.plan.equipment.streams import Stream, balance, line
from calcpack.plan.facts import Again, Bound, Box, Diagram, Flow, Link, Sketch, Volume
from calcpack.plan.plan import Plan


def condenser(plan: Plan, water: Water, found: Shares, sink: Stream) -> None:
    """Cooling water, temperature profile and conductance of the condenser."""
    section = plan.section("Condenser: balance and profile")
    last, cold = len(water.arranged.heaters) + 1, water.condensate
    inflows = condenser_inflows(water, found)
    into, T_into = water.exhaust.h, water.exhaust.T
    if len(inflows) > 1:
        share = "" if found.feed[last] == ALL else f" / {found.feed[last]}"
        into = section.formula("h_ci", f"{cold.h} + q_c{share}", "Mean enthalpy of all that enters the condenser",
                               "kJ/kg", reference="energy balance of the condenser, heat over the condensate's flow")
        T_into = section.property("T_ci", "T(wf, p=p_c, h=h_ci)", "Temperature of all that enters the condenser, mixed")
    section.property("h_g_c", "h(wf, p=p_c, x=1)", "Enthalpy of the dry vapour at the condensing pressure")
    section.formula("h_cv", f"min({into}, h_g_c)", "Enthalpy at which condensation begins", "kJ/kg",
                    reference=grounds.ONSET)
    section.property("T_cv", "T(wf, p=p_c, h=h_cv)", "Temperature at which condensation begins")
    balance(section, sink, "Q_dot_c")
    it = Exchanger("Condenser", "c", "wf", "p_c", found.flow(found.feed[last]), "Q_dot_c", sink, (
        Zone("condensing", "cc", cold.h, "h_cv", cold.T, "T_cv"),
        Zone("desuperheating", "cd", "h_cv", into, "T_cv", T_into)))
    profile(plan, section, it)
    require_pinch(plan, it)
    conductance(plan.section("Condenser: conductance"), it)
    plan.facts.streams.append(line(sink, "Cooling water", "Q_dot_c"))


def bound(plan: Plan, water: Water, found: Shares) -> None:
    """Carnot's relation with the hottest steam, and with the mean temperature at which heat is taken."""
    section = plan.section("Reversible bound")
    hottest = ", ".join([water.boiler_out.T, *(hot.T for hot in water.hot.values())])
    section.formula("T_max", f"max({hottest})" if water.hot else hottest, "Highest temperature of the steam", "degC",
                    reference="derived: the hottest of the states at the turbine inlets")
    section.formula("eta_C", "1 - T_c / T_max",
                    "Efficiency of a reversible engine between highest and condensing temperature",
                    reference="Carnot: absolute temperatures")
    plan.facts.bounds.append(Bound("eta_th", "eta_C", "the thermal efficiency stays below Carnot's"))
    if water.arranged.process:
        return
    gains = [f"({water.inlet.s} - {water.feedwater.s})"]
    starts = [one.inlet for one in water.expansions]
    for number, hot in water.hot.items():
        share = found.part[starts.index(hot)]
        gain = f"({hot.s} - {water.cold[number].s})"
        gains.append(gain if share == ALL else f"{share} * {gain}")
    section.formula("T_m_in", f"q_in / ({' + '.join(gains)})", "Entropic mean temperature of the heat taken", "degC",
                    reference="heat taken over the entropy that it brings up to the turbine inlets")
    section.formula("eta_m", "1 - T_c / T_m_in",
                    "Efficiency of a reversible engine between this mean and the condensing temperature",
                    reference="Carnot's relation with the entropic mean temperature")
    section.formula("g_rev", "eta_th / eta_m", "Share of that efficiency which the plant reaches",
                    note="1 for a plant without losses and with saturated or wet exhaust",
                    reference=grounds.SHARE_OF_BOUND)


def facts(plan: Plan, water: Water, found: Shares, sink: Stream | None) -> None:
    """States, balances, diagrams, parts and the sketch."""
    plan.facts.states += water.points
    plan.facts.volumes += [_turbine(water, found), _boiler(water, found), _pumps(water, found),
                           *_heaters(water, found), _condenser(water, found, sink), _whole(water, found)]
    ladders.steam(plan, _boiler(water, found), sink=sink is not None, returned=_returned(water),
                  process=(water.taps["p_pr"].flow(found.flow("y_pr")),) if water.arranged.process else ())
    paths = tuple(water.paths)
    plan.facts.diagrams += [Diagram("T-s", "wf", paths), Diagram("log p-h", "wf", paths)]
    plan.facts.roles.update({
        "expander inlet": water.inlet.number, "expander outlet": water.exhaust.number, "condensing": "T_c",
        "low pressure": "p_c", "high pressure": water.boiler_pressure, "pump inlet": water.condensate.number,
        "hottest": "T_max"})
    away = "Q_dot_c" + (" - Q_dot_l" if water.losses else "") + (" - Q_dot_pr" if water.arranged.process else "")
    plan.facts.again.append(Again(
        "W_dot_net", f"(Q_dot_in - {away}) * eta_gen - W_dot_p * (1 / eta_pm - eta_gen) - W_dot_aux",
        "from heat taken less heat given, and the pumps' share"))
    plan.facts.sketch = _sketch(water, found, sink)


def _turbine(water: Water, found: Shares) -> Volume:
    m = found.flow
    flows_in, flows_out = [water.inlet.flow("m_dot_1")], [water.exhaust.flow(m(found.part[-1]))]
    for station, share in zip(water.arranged.stations, found.part[1:], strict=True):
        if station.kind != "reheat":
            flows_out.append(water.taps[station.pressure].flow(m(found.taken[station.pressure])))
        if station.reheat:
            flows_out.append(water.cold[station.reheat].flow(m(share)))
            flows_in.append(water.hot[station.reheat].flow(m(share)))
    return Volume("turbine", tuple(flows_in), tuple(flows_out), work_out=("W_dot_t",), scale="W_dot_t")


def _boiler(water: Water, found: Shares) -> Volume:
    flows_in, flows_out = [water.feedwater.flow("m_dot_1")], [water.inlet.flow("m_dot_1")]
    for station, share in zip(water.arranged.stations, found.part[1:], strict=True):
        if station.reheat:
            flows_in.append(water.cold[station.reheat].flow(found.flow(share)))
            flows_out.append(water.hot[station.reheat].flow(found.flow(share)))
    lost = (("Q_dot_l", None),) if water.losses else ()
    return Volume("boiler with its steam lines", tuple(flows_in), tuple(flows_out), heat_in=(("Q_dot_in", None),),
                  heat_out=lost, scale="Q_dot_in")


def _pumps(water: Water, found: Shares) -> Volume:
    pumps = pumps_of(water, found)
    sides = [tuple(Flow(found.flow(share), f"h_{ends[at]}", f"s_{ends[at]}") for _, share,
                   *ends in pumps) for at in (0, 1)]
    return Volume("pumps", *sides, work_in=("W_dot_p",), scale="W_dot_p")


def _returned(water: Water) -> tuple[Flow, ...]:
    return (Flow("m_dot_ret", "h_ret", "s_ret"), Flow("m_dot_mu", "h_mu", "s_mu")) if water.arranged.process else ()


def _heaters(water: Water, found: Shares) -> list[Volume]:
    volumes = []
    for heater, kind in enumerate(water.arranged.heaters, start=1):
        m = found.flow
        flows_in = [water.taps[f"p_x{heater}"].flow(m(f"y_{heater}")),
                    water.feed_in[heater].flow(m(found.feed[heater + 1]))]
        if water.arranged.drains_into(heater):
            flows_in.append(water.drain[heater - 1].flow(m(found.drain[heater - 1])))
        if kind == "open":
            flows_in += _returned(water) if water.arranged.returns_to == heater else ()
            flows_out = [water.after[heater].flow(m(found.feed[heater]))]
        else:
            flows_out = [water.feed_out[heater].flow(m(found.feed[heater + 1])),
                         water.drain[heater].flow(m(found.drain[heater]))]
        volumes.append(Volume(f"heater {heater}", tuple(flows_in), tuple(flows_out), scale="Q_dot_in"))
        if kind == "closed-pump":
            volumes.append(Volume(
                f"mixing behind heater {heater}",
                (water.feed_out[heater].flow(m(found.feed[heater + 1])),
                 water.drain_pumped[heater].flow(m(found.drain[heater]))),
                (water.after[heater].flow(m(found.feed[heater])),), scale="Q_dot_in"))
    return volumes


def _condenser(water: Water, found: Shares, sink: Stream | None) -> Volume:
    flows_in = [Flow(found.flow(share), h, s) for share, h, s in condenser_inflows(water, found) if s]
    if water.arranged.process and not water.arranged.returns_to:
        flows_in += _returned(water)
    flows_out = [water.condensate.flow(found.flow(found.feed[len(water.arranged.heaters) + 1]))]
    if sink:
        return Volume("condenser", (*flows_in, sink.flow_in), (*flows_out, sink.flow_out), scale="Q_dot_c")
    return Volume("condenser", tuple(flows_in), tuple(flows_out), heat_out=(("Q_dot_c", None),), scale="Q_dot_c")


def _whole(water: Water, found: Shares) -> Volume:
    lost = (("Q_dot_l", None),) if water.losses else ()
    out = (water.taps["p_pr"].flow(found.flow("y_pr")),) if water.arranged.process else ()
    return Volume("whole plant", _returned(water), out, work_in=("W_dot_p",), work_out=("W_dot_t",),
                  heat_in=(("Q_dot_in", None),), heat_out=(("Q_dot_c", None), *lost), scale="Q_dot_in", cycle=True)


def _sketch(water: Water, found: Shares, sink: Stream | None) -> Sketch:
    """Turbine sections above, the feedwater line below from the condenser on the right to the boiler on the left."""
    boxes, links = [], []
    row: list[tuple[str, str]] = []
    for heater, kind in enumerate(water.arranged.heaters, start=1):
        if kind == "open":
            row.append((f"Pump {water.arranged.pump_above(heater)}", "pump"))
        row.append((f"Heater {heater}", "mixer" if kind == "open" else "heater"))
    row.append(("Pump 1" if water.arranged.opens else "Pump", "pump"))
    sections = water.arranged.reheats + 1
    columns = _section_columns(water, [name for name, _ in row])
    width = max(len(row), columns[-1])
    boxes += [Box(name, shape, float(at), 2.0) for at, (name, shape) in enumerate(row, start=1)]
    boxes += [Box("Boiler", "boiler", 0.0, 1.0), Box("Condenser", "exchanger", float(width + 1), 1.0),
              Box("Generator", "generator", float(width + 1), 0.0)]
    boxes += [Box(_section(water, part), "turbine", float(at), 0.0) for part, at in enumerate(columns, start=1)]
    links += _steam_links(water)
    chain = ["Boiler", *(name for name, _ in row), "Condenser"]
    labels = [water.feedwater.number, *_feed_labels(water), water.condensate.number]
    links += [Link(start, end, label) for end, start, label in zip(chain[:-1], chain[1:], labels, strict=True)]
    for heater in range(1, len(water.arranged.heaters) + 1):
        if water.arranged.kind(heater) == "closed-trap":
            below = heater + 1
            links.append(Link(f"Heater {heater}",
                              f"Heater {below}" if below <= len(water.arranged.heaters) else "Condenser",
                              water.drain[heater].number))
    links.append(Link(_section(water, sections), "Generator", "", "power"))
    if sink:
        links += [Link("Water in", "Condenser", "water in", "stream"),
                  Link("Condenser", "Water out", "water out", "stream")]
    return Sketch(tuple(boxes), tuple(links))


def _section_columns(water: Water, row: list[str]) -> list[int]:
    """Each turbine section above the middle of the heaters that it feeds, and right of the section before."""
    fed: list[list[int]] = [[]]
    for station in water.arranged.stations:
        if station.kind == "heater":
            fed[-1].append(row.index(f"Heater {station.index}") + 1)
        if station.reheat:
            fed.append([])
    columns: list[int] = []
    for heaters in fed:
        least = columns[-1] + 1 if columns else 1
        columns.append(max(least, round(sum(heaters) / len(heaters)) if heaters else least))
    return columns


def _section(water: Water, part: int) -> str:
    return f"Turbine {part}" if water.arranged.reheats else "Turbine"


def _feed_labels(water: Water) -> list[str]:
    """The states between the pieces of the feedwater line, from the boiler's side."""
    labels = []
    for heater, kind in enumerate(water.arranged.heaters, start=1):
        if kind == "open":
            labels.append(water.after[heater].number)
        labels.append(water.feed_in[heater].number)
    return labels


def _steam_links(water: Water) -> list[Link]:
    links = [Link("Boiler", _section(water, 1), water.inlet.number)]
    part = 1
    for station in water.arranged.stations:
        here = _section(water, part)
        if station.kind == "heater":
            links.append(Link(here, f"Heater {station.index}", water.taps[station.pressure].number))
        elif station.kind == "process":
            links.append(Link(here, "Process", water.taps[station.pressure].number, "stream"))
        if station.reheat:
            part += 1
            links += [Link(here, "Boiler", water.cold[station.reheat].number),
                      Link("Boiler", _section(water, part), water.hot[station.reheat].number)]
    return [*links, Link(_section(water, part), "Condenser", water.exhaust.number)]
