"""Sheets with searches as bare scripts: a heat pump's two pinches, an engine's condenser and its flow.

What does not hang on a search's unknown is found ahead of it. Brackets and
tolerances are the program's.
"""
from __future__ import annotations

import math
from collections.abc import Callable
from itertools import pairwise
from typing import Any

from bare_sheets import PIECES


class Bare:
    """The same cases by hand: one library state a fluid, no checks of range, no names, no printing."""

    fluid: str

    def __init__(self, values: dict[str, float]) -> None:
        import CoolProp
        from scipy.optimize import brentq
        self.CP, self.brentq, self.v = CoolProp, brentq, values
        self.wf, self.water, self.air = (CoolProp.AbstractState("HEOS", name) for name in (self.fluid, "Water", "Air"))

    def root(self, residual: Callable[[float], float], low: float, high: float) -> float:
        """The root to 1e-11 of the bracket; once more at the root where the search did not end there."""
        last = math.nan

        def tried(x: float) -> float:
            nonlocal last
            last = x
            return residual(x)
        found = self.brentq(tried, low, high, xtol=1e-11 * max(abs(low), abs(high)), rtol=1e-13)
        if last != found:
            residual(found)
        return found

    def smallest(self, fluid: Any, p: float, ends: list[float], stream: Any, p_stream: float, h_cold: float,
                 ratio: float, sign: float) -> float:
        """The smallest difference along an exchanger, each zone in equal steps of enthalpy."""
        inputs = self.CP.HmassP_INPUTS
        gaps = []
        for at, (low, high) in enumerate(pairwise(ends)):
            for piece in range(0 if at == 0 else 1, PIECES + 1):
                h = low + piece / PIECES * (high - low)
                fluid.update(inputs, h, p)
                T = fluid.T()
                gaps.append(sign * (stream(h_cold + (h - ends[0]) * ratio, p_stream) - T))
        return min(gaps)


class HeatPump(Bare):
    """The vapour-compression starter: nested roots on the evaporating and condensing temperature."""

    fluid = "R1234ze(E)"

    def solve(self) -> float:
        CP, v = self.CP, self.v
        water = self.water

        def water_T(h: float, p: float) -> float:
            water.update(CP.HmassP_INPUTS, h, p)
            return water.T()
        self.water_T = water_T

        def end(T: str, p: str) -> tuple[float, float]:
            water.update(CP.PT_INPUTS, v[p], v[T])
            return water.hmass(), water.smass()
        self.source_in, self.source_out = end("T_source_in", "p_source"), end("T_source_out", "p_source")
        self.sink_in, self.sink_out = end("T_sink_in", "p_sink"), end("T_sink_out", "p_sink")
        T_crit = self.wf.T_critical()
        self.root(lambda T: self.evaporator(T, T_crit), v["T_source_in"] - 90.0, min(v["T_source_in"], T_crit - 5.0))
        return self.v_cop

    def evaporator(self, T_e: float, T_crit: float) -> float:
        CP, wf, v = self.CP, self.wf, self.v
        wf.update(CP.QT_INPUTS, 1.0, T_e)
        self.p_e, h_g = wf.p(), wf.hmass()
        wf.update(CP.PT_INPUTS, self.p_e, T_e + v["dT_sh"])
        self.h_1, self.s_1 = wf.hmass(), wf.smass()
        wf.rhomass()
        self.root(self.condenser, v["T_sink_in"], T_crit - 2.0)
        m_source = self.m * (self.h_1 - self.h_4) / (self.source_in[0] - self.source_out[0])
        return self.smallest(wf, self.p_e, [self.h_4, h_g, self.h_1], self.water_T, v["p_source"],
                             self.source_out[0], self.m / m_source, 1.0) - v["dT_pinch_e"]

    def condenser(self, T_c: float) -> float:
        CP, wf, v = self.CP, self.wf, self.v
        p_e, h_1 = self.p_e, self.h_1
        wf.update(CP.QT_INPUTS, 1.0, T_c)
        p_c, h_g = wf.p(), wf.hmass()
        wf.update(CP.PSmass_INPUTS, p_c, self.s_1)
        work = (wf.hmass() - h_1) / v["eta_is"]
        h_2 = h_1 + (1 - v["f_loss"]) * work
        wf.update(CP.HmassP_INPUTS, h_2, p_c)
        wf.T(), wf.smass()
        wf.update(CP.PQ_INPUTS, p_c, 0.0)
        h_f, T_bub = wf.hmass(), wf.T()
        wf.update(CP.PT_INPUTS, p_c, T_bub - v["dT_sc"])
        h_3 = wf.hmass()
        wf.smass()
        wf.update(CP.HmassP_INPUTS, h_3, p_e)
        wf.T(), wf.smass()
        self.m, self.h_4 = v["Q_dot_sink"] / (h_2 - h_3), h_3
        m_sink = v["Q_dot_sink"] / (self.sink_out[0] - self.sink_in[0])
        self.v_cop = v["Q_dot_sink"] / (self.m * work / (v["eta_drive"] * v["eta_motor"]) + v["W_dot_aux"])
        return self.smallest(wf, p_c, [h_3, h_f, h_g, h_2], self.water_T, v["p_sink"], self.sink_in[0],
                             self.m / m_sink, -1.0) - v["dT_pinch_c"]


class Engine(Bare):
    """The organic-Rankine starter: a root on the condensing temperature, within it one on the flow."""

    fluid = "CycloPentane"

    def solve(self) -> float:
        CP, v = self.CP, self.v
        water = self.water

        def water_T(h: float, p: float) -> float:
            water.update(CP.HmassP_INPUTS, h, p)
            return water.T()
        self.water_T, self.last_T = water_T, 400.0
        self.scale = 8.31446261815324 / self.air.gas_constant()

        def end(T: str) -> float:
            water.update(CP.PT_INPUTS, v["p_sink"], v[T])
            return water.hmass()
        self.sink_in, self.sink_out = end("T_sink_in"), end("T_sink_out")
        self.h_source_in = self.air_h(v["T_source_in"])
        self.wf.update(CP.QT_INPUTS, 1.0, v["T_e"])
        self.p_e, self.h_3, self.s_3 = self.wf.p(), self.wf.hmass(), self.wf.smass()
        self.wf.update(CP.PQ_INPUTS, self.p_e, 0.0)
        self.h_f = self.wf.hmass()
        self.root(self.condenser, v["T_sink_in"], self.wf.T_critical() - 20.0)
        return self.net

    def air_h(self, T: float) -> float:
        """Enthalpy of thin air: the ideal gas, with the gas constant of today."""
        self.air.update(self.CP.DmolarT_INPUTS, 1e-9, T)
        return self.air.hmass() * self.scale

    def air_T(self, h: float, _: float) -> float:
        """The temperature of thin air of that enthalpy, by Newton's steps on its heat capacity."""
        T = self.last_T
        for _ in range(20):
            step = (h - self.air_h(T)) / (self.air.cpmass() * self.scale)
            T += step
            if abs(step) < 1e-9:
                break
        self.last_T = T
        return T

    def condenser(self, T_c: float) -> float:
        CP, wf, v = self.CP, self.wf, self.v
        p_e = self.p_e
        wf.update(CP.QT_INPUTS, 1.0, T_c)
        p_c, h_g = wf.p(), wf.hmass()
        wf.update(CP.PQ_INPUTS, p_c, 0.0)
        h_1, s_1 = wf.hmass(), wf.smass()
        wf.update(CP.PSmass_INPUTS, p_e, s_1)
        w_p = (wf.hmass() - h_1) / v["eta_p"]
        self.h_2 = h_1 + w_p
        wf.update(CP.HmassP_INPUTS, self.h_2, p_e)
        T_2 = wf.T()
        wf.smass()
        wf.update(CP.PSmass_INPUTS, p_c, self.s_3)
        w_t = (self.h_3 - wf.hmass()) * v["eta_t"]
        h_4 = self.h_3 - w_t
        wf.update(CP.HmassP_INPUTS, h_4, p_c)
        wf.T(), wf.smass()
        most = v["m_dot_source"] * (self.h_source_in - self.air_h(T_2)) / (self.h_3 - self.h_2)
        m = self.root(self.heater, 0.01 * most, most)
        h_cv = min(h_4, h_g)
        wf.update(CP.HmassP_INPUTS, h_cv, p_c)
        m_sink = m * (h_4 - h_1) / (self.sink_out - self.sink_in)
        self.net = m * (w_t * v["eta_gen"] - w_p / v["eta_pm"]) - v["W_dot_aux"]
        return self.smallest(wf, p_c, [h_1, h_cv, h_4], self.water_T, v["p_sink"], self.sink_in, m / m_sink,
                             -1.0) - v["dT_pinch_c"]

    def heater(self, m: float) -> float:
        v = self.v
        h_out = self.h_source_in - m * (self.h_3 - self.h_2) / v["m_dot_source"]
        T_out = self.air_T(h_out, 0.0)
        gap = self.smallest(self.wf, self.p_e, [self.h_2, self.h_f, self.h_3], self.air_T, 0.0, h_out,
                            m / v["m_dot_source"], 1.0)
        return min(gap - v["dT_pinch_h"], T_out - v["T_source_min"])
