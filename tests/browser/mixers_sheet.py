"""A small sheet to be checked, of the engineer's own steps."""
from __future__ import annotations

from pathlib import Path

from calcpack.building import build_package

SPEC = """\
calcpack: 1
sheet:
  number: MT-140
  title: Warm water for the glaze mixers
  project: Marrowfield tile works
  revision: A
  status: for-review
  date: 2026-11-02
  purpose: Size the heater of the glaze mixers.
  scope: The heater alone.
signoff: {prepared: {name: R. Aldane, date: 2026-11-02}}
case:
  method: none
  inputs:
    V_tank: {value: 1.8 m3, title: Volume of the tank, source: R1}
    T_cold: {value: 12 degC, title: Cold water, source: R1}
    T_warm: {value: 48 degC, title: Warm water, source: R1}
    t_heat: {value: 1.5 h, title: Time to heat it, source: A1}
    rho: {value: 995 kg/m3, title: Density of water, source: R1}
    c_w: {value: 4.18 kJ/(kg·K), title: Specific heat of water, source: R1}
    f_loss: {value: 0.08, title: Share lost to the hall, source: A1}
steps:
  - {symbol: m_w, title: Mass of the water, formula: V_tank * rho}
  - {symbol: dT_w, title: Warming, formula: T_warm - T_cold}
  - {symbol: Q_w, title: Heat taken up, formula: m_w * c_w * dT_w}
  - {symbol: Q_l, title: Heat lost, formula: Q_w * f_loss}
  - {symbol: Q_all, title: Heat in all, formula: Q_w + Q_l}
  - {symbol: P_mean, title: Mean power, formula: Q_all / t_heat}
  - {symbol: P_big, title: Power with a reserve, formula: P_mean * 1.15}
  - {symbol: n_el, title: Elements of 12 kW, formula: P_big / (12 kW)}
  - {symbol: m_h, title: Flow while it heats, formula: m_w / t_heat}
  - {symbol: Q_day, title: Heat of a day, formula: 3 * Q_all}
  - {symbol: q_w, title: Heat for each litre, formula: Q_all / V_tank}
limits:
  - {id: L1, symbol: P_big, at_most: 80 kW, why: the switchboard, source: R1}
assumptions:
  - {id: A1, text: The tank is full when it is heated., basis: rule of the hall, status: confirmed}
references:
  - {id: R1, text: List of the mixers}
results: [P_big, n_el]
revisions:
  - {revision: A, date: 2026-11-02, note: First issue}
"""
STEPS = ("m_w", "dT_w", "Q_w", "Q_l", "Q_all", "P_mean", "P_big", "n_el", "m_h", "Q_day", "q_w")


def build(spec: Path, folder: Path) -> Path:
    """The page of a spec, built as the command builds it."""
    build_package([spec], folder, pdf=False, jobs=1, tell=lambda words: None)
    return folder / "MT-140.html"
