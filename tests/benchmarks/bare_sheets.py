"""Sheets without a search as bare scripts: one library state a fluid, each state found once, values read from it.

Each ``solve`` gives values under the symbols of the sheet, to be compared with the program's before anything is timed.
"""
from __future__ import annotations

import math
from itertools import pairwise
from typing import Any

PIECES = 4


class Sheet:
    """What the scripts share: the library, the inputs [SI], and a state for each fluid."""

    fluids: tuple[str, ...]

    def __init__(self, values: dict[str, float]) -> None:
        import CoolProp
        self.CP, self.v = CoolProp, values
        self.states = tuple(CoolProp.AbstractState("HEOS", name) for name in self.fluids)

    def at_ph(self, fluid: Any, p: float, h: float) -> tuple[float, float]:
        """T and s of a state that is known by pressure and enthalpy."""
        fluid.update(self.CP.HmassP_INPUTS, h, p)
        return fluid.T(), fluid.smass()

    def at_pT(self, fluid: Any, p: float, T: float) -> tuple[float, float, float]:
        """h, s and rho of a state that is known by pressure and temperature."""
        fluid.update(self.CP.PT_INPUTS, p, T)
        return fluid.hmass(), fluid.smass(), fluid.rhomass()

    def saturated(self, fluid: Any, p: float, x: float) -> tuple[float, float, float]:
        """T, h and s of saturated liquid or vapour of a pressure."""
        fluid.update(self.CP.PQ_INPUTS, p, x)
        return fluid.T(), fluid.hmass(), fluid.smass()

    def isentropic(self, fluid: Any, p: float, s: float) -> float:
        """The enthalpy of a pressure and an entropy."""
        fluid.update(self.CP.PSmass_INPUTS, p, s)
        return fluid.hmass()

    def temperature(self, fluid: Any, p: float, h: float) -> float:
        """The temperature of a pressure and an enthalpy."""
        fluid.update(self.CP.HmassP_INPUTS, h, p)
        return fluid.T()

    def profile(self, first: tuple[Any, float, list[tuple[float, float]]], second: tuple[Any, float],
                ends: tuple[tuple[float, float], tuple[float, float]], ratio: float, sign: float
                ) -> tuple[float, list[float]]:
        """Smallest difference along an exchanger, and that at each end of a zone.

        ``first`` is a fluid, its pressure and the (h, T) at the ends of its zones,
        ``second`` the other fluid and its pressure, ``ends`` its (h, T) at the cold
        and the hot end. What is known at an end is not asked for again.
        """
        fluid, p, zones = first
        h_start, (h_cold, T_cold), (_, T_hot) = zones[0][0], *ends
        gaps, at_ends = [sign * (T_cold - zones[0][1])], [sign * (T_cold - zones[0][1])]
        for (low, _), (high, T_high) in pairwise(zones):
            for piece in range(1, PIECES + 1):
                h = low + piece / PIECES * (high - low)
                T = T_high if piece == PIECES else self.temperature(fluid, p, h)
                last = piece == PIECES and high == zones[-1][0]
                T_other = T_hot if last else self.temperature(*second, h_cold + (h - h_start) * ratio)
                gaps.append(sign * (T_other - T))
            at_ends.append(gaps[-1])
        return min(gaps), at_ends


def conductance(m_dot: float, zones: list[tuple[float, float]], gaps: list[float]) -> float:
    """UA of all zones, each by the logarithmic mean of the differences at its ends."""
    total = 0.0
    for (low, high), (one, other) in zip(pairwise(zones), pairwise(gaps), strict=True):
        mean = (one + other) / 2 if abs(one - other) < 0.001 * other else (one - other) / math.log(one / other)
        total += m_dot * (high[0] - low[0]) / mean
    return total


class Machine(Sheet):
    """What both refrigerating machines do."""

    def compressed(self, fluid: Any, suction: tuple[float, float, float], p: float, eta: float
                   ) -> tuple[float, float, float, float]:
        """Work, and h, T, s behind the compressor."""
        h, s, _ = suction
        work = (self.isentropic(fluid, p, s) - h) / eta
        h_out = h + (1 - self.v["f_loss"]) * work
        return work, h_out, *self.at_ph(fluid, p, h_out)

    def evaporator(self, fluid: Any, levels: tuple[float, float, float], inlet: tuple[float, float],
                   outlet: tuple[float, float], flow: float, source: tuple[Any, tuple, tuple]
                   ) -> tuple[float, float]:
        """Smallest difference and UA; ``levels`` are p, and T and h of the dry vapour."""
        p, T_g, h_g = levels
        stream, cold, hot = source
        m_stream = flow * (outlet[0] - inlet[0]) / (hot[0] - cold[0])
        zones = [inlet, (h_g, T_g), outlet]
        least, gaps = self.profile((fluid, p, zones), (stream, self.v["p_source"]),
                                   ((cold[0], self.v["T_source_out"]), (hot[0], self.v["T_source_in"])),
                                   flow / m_stream, 1.0)
        return least, conductance(flow, zones, gaps)

    def ends(self, stream: Any, name: str) -> tuple[tuple, tuple, float]:
        """(h, s, rho) of a stream at its inlet and outlet, and its mean temperature of heat exchange."""
        v = self.v
        here, there = (self.at_pT(stream, v[f"p_{name}"], v[f"T_{name}_{end}"]) for end in ("in", "out"))
        return here, there, (here[0] - there[0]) / (here[1] - there[1])

    def dry(self, fluid: Any, T: float) -> tuple[float, float]:
        """p and h of dry saturated vapour of a temperature."""
        fluid.update(self.CP.QT_INPUTS, 1.0, T)
        return fluid.p(), fluid.hmass()

    def electrical(self, shaft: float) -> float:
        """Electrical power of a shaft's power and the auxiliaries."""
        v = self.v
        return shaft / (v["eta_drive"] * v["eta_motor"]) + v["W_dot_aux"]


class Air:
    """Thin air as an ideal gas with today's gas constant, asked like a library state."""

    def __init__(self, CP: Any, state: Any) -> None:
        self.CP, self.state, self.last = CP, state, 250.0
        self.R = 8.31446261815324 / state.molar_mass()
        self.scale = 8.31446261815324 / state.gas_constant()

    def at(self, T: float) -> float:
        """Enthalpy at a temperature."""
        self.state.update(self.CP.DmolarT_INPUTS, 1e-9, T)
        return self.state.hmass() * self.scale

    def update(self, pair: Any, first: float, second: float) -> None:
        """By p and T, or by h and p with Newton's steps on the heat capacity."""
        if pair == self.CP.PT_INPUTS:
            self.p, self.last = first, second
            self.h = self.at(second)
            return
        self.p, T = second, self.last
        for _ in range(20):
            self.h = self.at(T)
            step = (first - self.h) / (self.state.cpmass() * self.scale)
            T += step
            if abs(step) <= 1e-13 * T:
                break
        self.last = T

    def T(self) -> float:
        return self.last

    def hmass(self) -> float:
        return self.h

    def smass(self) -> float:
        return self.state.smass() * self.scale - self.R * math.log(self.p / self.last)

    def rhomass(self) -> float:
        return self.p / (self.R * self.last)


class Cascade(Machine):
    """The cascade starter: two circuits, three exchangers with their profiles."""

    fluids = ("CarbonDioxide", "Ammonia", "Water", "Air")

    def solve(self) -> dict[str, float]:
        """The low circuit, the high circuit, what they exchange, power and bound."""
        v, (low, high, water, air) = self.v, self.states
        source = Air(self.CP, air)
        source_in, source_out, T_m_source = self.ends(source, "source")
        sink_in, sink_out, T_m_sink = self.ends(water, "sink")
        p_e, h_g_e = self.dry(low, v["T_e"])
        p_cl, h_g_cl = self.dry(low, v["T_cl"])
        p_c, h_g_c = self.dry(high, v["T_c"])
        p_eh, _ = self.dry(high, v["T_cl"] - v["dT_cas"])
        T_1, T_5 = v["T_e"] + v["dT_sh"], v["T_cl"] - v["dT_cas"] + v["dT_sh_high"]
        suction = self.at_pT(low, p_e, T_1)
        w_low, h_2, T_2, s_2 = self.compressed(low, suction, p_cl, v["eta_low"])
        T_3, h_3, s_3 = self.saturated(low, p_cl, 0.0)
        T_4, s_4 = self.at_ph(low, p_e, h_3)
        upper = self.at_pT(high, p_eh, T_5)
        w_high, h_6, T_6, s_6 = self.compressed(high, upper, p_c, v["eta_high"])
        T_bub, h_f_c, _ = self.saturated(high, p_c, 0.0)
        T_7 = T_bub - v["dT_sc"]
        h_7, s_7, _ = self.at_pT(high, p_c, T_7)
        T_8, s_8 = self.at_ph(high, p_eh, h_7)
        m_high = v["Q_dot_sink"] / (h_6 - h_7)
        r_m = (h_2 - h_3) / (upper[0] - h_7)
        m_low = m_high / r_m
        zones = [(h_7, T_7), (h_f_c, T_bub), (h_g_c, v["T_c"]), (h_6, T_6)]
        ratio = (sink_out[0] - sink_in[0]) / (h_6 - h_7)
        dT_c, gaps = self.profile((high, p_c, zones), (water, v["p_sink"]),
                                  ((sink_in[0], v["T_sink_in"]), (sink_out[0], v["T_sink_out"])), ratio, -1.0)
        dT_e, UA_e = self.evaporator(low, (p_e, v["T_e"], h_g_e), (h_3, T_4), (suction[0], T_1), m_low,
                                     (source, source_out, source_in))
        dT_x, _ = self.profile((low, p_cl, [(h_3, T_3), (h_g_cl, v["T_cl"]), (h_2, T_2)]), (high, p_eh),
                               ((h_7, T_8), (upper[0], T_5)), 1 / r_m, -1.0)
        Q_source, shaft = m_low * (suction[0] - h_3), m_low * w_low + m_high * w_high
        COP = Q_source / self.electrical(shaft)
        return {"COP": COP, "Q_dot_source": Q_source, "T_2": T_2, "s_2": s_2, "s_3": s_3, "s_4": s_4, "T_6": T_6,
                "s_6": s_6, "s_7": s_7, "T_8": T_8, "s_8": s_8, "dT_min_c": dT_c, "dT_min_e": dT_e,
                "dT_min_x": dT_x, "UA_c": conductance(m_high, zones, gaps), "UA_e": UA_e,
                "V_dot_1": m_low / suction[2], "V_dot_5": m_high / upper[2],
                "g_rev": COP * (T_m_sink - T_m_source) / T_m_source}


class CarbonDioxide(Machine):
    """The transcritical starter: a given high side, the gas cooler's profile in four quarters."""

    fluids = ("CarbonDioxide", "Water")

    def solve(self) -> dict[str, float]:
        """The cycle, both exchangers, power, bound and the published pressures."""
        v, (wf, water) = self.v, self.states
        source_in, source_out, T_m_source = self.ends(water, "source")
        sink_in, sink_out, T_m_sink = self.ends(water, "sink")
        p_e, h_g_e = self.dry(wf, v["T_e"])
        p_2, T_1, T_3 = v["p_2"], v["T_e"] + v["dT_sh"], v["T_sink_in"] + v["dT_app"]
        suction = self.at_pT(wf, p_e, T_1)
        h_3, s_3, _ = self.at_pT(wf, p_2, T_3)
        work, h_2, T_2, s_2 = self.compressed(wf, suction, p_2, v["eta_is"])
        T_4, s_4 = self.at_ph(wf, p_e, h_3)
        flow = v["Q_dot_sink"] / (h_2 - h_3)
        inner = [h_3 + share * (h_2 - h_3) for share in (0.25, 0.5, 0.75)]
        zones = [(h_3, T_3), *((h, self.temperature(wf, p_2, h)) for h in inner), (h_2, T_2)]
        dT_g, gaps = self.profile((wf, p_2, zones), (water, v["p_sink"]),
                                  ((sink_in[0], v["T_sink_in"]), (sink_out[0], v["T_sink_out"])),
                                  (sink_out[0] - sink_in[0]) / (h_2 - h_3), -1.0)
        dT_e, UA_e = self.evaporator(wf, (p_e, v["T_e"], h_g_e), (h_3, T_4), (suction[0], T_1), flow,
                                     (water, source_out, source_in))
        COP = v["Q_dot_sink"] / self.electrical(flow * work)
        t_e, t_gc = v["T_e"] - 273.15, T_3 - 273.15
        return {"COP": COP, "T_2": T_2, "s_2": s_2, "s_3": s_3, "T_4": T_4, "s_4": s_4, "dT_min_g": dT_g,
                "dT_min_e": dT_e, "UA_g": conductance(flow, zones, gaps), "UA_e": UA_e,
                "V_dot_1": flow / suction[2], "g_rev": COP * (T_m_sink - T_m_source) / T_m_sink,
                "r_crit": p_2 / wf.p_critical(),
                "p_Liao": ((2.778 - 0.0157 * t_e) * t_gc + (0.381 * t_e - 9.34)) * 1e5,
                "p_Chen": (2.68 * t_gc - 6.797) * 1e5, "p_Kauf": (2.6 * (t_gc - 2.9) + 7.54) * 1e5,
                "p_Sarkar": (4.9 + 2.256 * t_gc - 0.17 * t_e + 0.002 * t_gc**2) * 1e5}


class SteamPlant(Sheet):
    """Two reheats and three heaters (trapped, open, trapped): the expansion, the feedwater, the balances."""

    fluids = ("Water",)

    def solve(self) -> dict[str, float]:
        """States along turbine and feedwater, extraction shares, works, heats and bound."""
        v, (wf,) = self.v, self.states
        h_1, s_1, rho_1 = self.at_pT(wf, v["p_1"], v["T_1"])
        h_2, T_2, s_2 = self.expanded((h_1, s_1), v["p_x1"], v["eta_t1"])
        h_3, _, s_3 = self.expanded((h_2, s_2), v["p_rh1"], v["eta_t1"])
        h_4, s_4, _ = self.at_pT(wf, v["p_rh1"], v["T_rh1"])
        h_5, T_5, s_5 = self.expanded((h_4, s_4), v["p_x2"], v["eta_t2"])
        h_6, _, s_6 = self.expanded((h_5, s_5), v["p_rh2"], v["eta_t2"])
        h_7, s_7, _ = self.at_pT(wf, v["p_rh2"], v["T_rh2"])
        h_8, T_8, s_8 = self.expanded((h_7, s_7), v["p_x3"], v["eta_t3"])
        h_9, T_9, s_9 = self.expanded((h_8, s_8), v["p_c"], v["eta_t3"])
        wet = {"x_ex1": self.equilibrium(v["p_rh1"], h_3), "x_ex2": self.equilibrium(v["p_rh2"], h_6)}
        T_g, h_g, _ = self.saturated(wf, v["p_c"], 1.0)
        _, h_10, s_10 = self.saturated(wf, v["p_c"], 0.0)
        w_p1, h_11, T_11, s_11 = self.pumped((h_10, s_10), v["p_x2"], v["eta_p1"])
        T_12, h_12, s_12 = self.saturated(wf, v["p_x3"], 0.0)
        h_13, s_13, _ = self.at_pT(wf, v["p_x2"], T_12 - v["dT_ttd_3"])
        _, h_14, s_14 = self.saturated(wf, v["p_x2"], 0.0)
        w_p2, h_15, T_15, s_15 = self.pumped((h_14, s_14), v["p_1"], v["eta_p2"])
        T_16, h_16, s_16 = self.saturated(wf, v["p_x1"], 0.0)
        h_17, s_17, _ = self.at_pT(wf, v["p_1"], T_16 - v["dT_ttd_1"])
        y_1 = (h_17 - h_15) / (h_2 - h_16)
        y_2 = ((h_14 - h_13) - y_1 * (h_16 - h_13)) / (h_5 - h_13)
        f_w = 1 - y_1 - y_2
        y_3 = f_w * (h_13 - h_11) / (h_8 - h_12)
        f_2, f_6 = 1 - y_1, f_w - y_3
        w_t = (h_1 - h_2) + f_2 * (h_2 - h_3 + h_4 - h_5) + f_w * (h_5 - h_6 + h_7 - h_8) + f_6 * (h_8 - h_9)
        w_p = f_w * w_p1 + w_p2
        q_in = h_1 - h_17 + f_2 * (h_4 - h_3) + f_w * (h_7 - h_6)
        m_dot = (v["W_dot_net"] + v["W_dot_aux"]) / (w_t * v["eta_gen"] - w_p / v["eta_pm"])
        eta_th = v["W_dot_net"] / (m_dot * q_in)
        T_m = q_in / ((s_1 - s_17) + f_2 * (s_4 - s_3) + f_w * (s_7 - s_6))
        return wet | {
            "x_ex3": (h_9 - h_10) / (h_g - h_10), "v_1": 1 / rho_1, "T_2": T_2, "T_5": T_5, "T_8": T_8, "T_9": T_9,
            "s_9": s_9, "T_11": T_11, "s_11": s_11, "s_12": s_12, "s_13": s_13, "T_15": T_15, "s_15": s_15,
            "s_16": s_16, "y_1": y_1, "y_2": y_2, "y_3": y_3, "m_dot_1": m_dot, "eta_th": eta_th, "T_m_in": T_m,
            "HR": m_dot * q_in / v["eta_b"] / v["W_dot_net"], "r_bw": w_p / w_t,
            "q_c": f_6 * h_9 + y_3 * h_12 - f_w * h_10, "g_rev": eta_th / (1 - T_g / T_m)}

    def expanded(self, inlet: tuple[float, float], p: float, eta: float) -> tuple[float, float, float]:
        """h, T, s behind a part of the turbine."""
        h, s = inlet
        h_out = h - eta * (h - self.isentropic(self.states[0], p, s))
        return h_out, *self.at_ph(self.states[0], p, h_out)

    def pumped(self, inlet: tuple[float, float], p: float, eta: float) -> tuple[float, float, float, float]:
        """Work, and h, T, s behind a pump."""
        h, s = inlet
        work = (self.isentropic(self.states[0], p, s) - h) / eta
        return work, h + work, *self.at_ph(self.states[0], p, h + work)

    def equilibrium(self, p: float, h: float) -> float:
        """(h - h_f)/(h_g - h_f)."""
        h_f, h_g = (self.saturated(self.states[0], p, x)[1] for x in (0.0, 1.0))
        return (h - h_f) / (h_g - h_f)
