"""Small invented specs, and the tools to spoil what they gave."""
from __future__ import annotations

import copy
import dataclasses
from pathlib import Path
from typing import Any

from calcpack.record.build import build_record
from calcpack.record.record import Record
from calcpack.solving import solved
from calcpack.solving.bind import bind
from calcpack.solving.solution import Solution
from calcpack.spec import read_for_faults

HEAD = """\
calcpack: 1
sheet:
  number: CK-001
  title: Heat pump for the wash water of a dye house
  project: Dye house
  revision: A
  status: draft
  purpose: Find the coefficient of performance.
  scope: One machine at one point.
  units: {units}
"""

HEAT_PUMP = HEAD + """\
case:
  method: vapour-compression
  options: {{evaporating: pinch, condensing: pinch, source_stream: outlet, sink_stream: outlet}}
  fluids: {{wf: {wf}, source: {source}, sink: water}}
  inputs:
    T_source_in: {T_source_in}
    T_source_out: {T_source_out}
    p_source: 2 bar(g)
    T_sink_in: {T_sink_in}
    T_sink_out: {T_sink_out}
    p_sink: 3 bar(g)
    dT_pinch_e: {dT_pinch_e}
    dT_pinch_c: 3 K
    dT_sh: {dT_sh}
    dT_sc: 5 K
    eta_is: 0.70
    eta_drive: 1.0
    eta_motor: 0.93
    f_loss: 0.02
    Q_dot_sink: 300 kW
    tariff: 0.20
steps:
  - {{symbol: share, title: Share of power, formula: tariff * W_dot_net / Q_dot_sink}}
  - symbol: band
    title: Band of the share
    choice:
      - {{when: share < 0.5 and tariff > 0, value: share * 2, label: small}}
      - {{otherwise: share}}
  - symbol: fouling
    title: Share lost by fouling
    lookup: {{of: share, points: [[0.0, 0.01], [0.03, 0.02], [0.2, 0.04]], source: Maker's table}}
limits:
{limits}
references:
  - {{id: R1, text: Log of the works}}
results: [COP, T_2]
"""

LIMITS = """\
  - {id: L1, symbol: T_2, at_most: 110 degC, why: oil, source: R1}
  - {id: L2, symbol: COP, at_least: 3.50, why: the decision paper, source: R1}
  - {id: L3, symbol: dT_min_c, at_least: 3 K, why: area, source: R1}
  - {id: L4, symbol: p_c, at_most: 2 bar, why: a design pressure that is far too low, source: R1}
  - {id: L5, symbol: COP, at_most: COP_rev, why: no machine is better, source: R1}"""

USUAL = {"wf": "R-1234ze(E)", "source": "water", "T_source_in": "38 degC", "T_source_out": "30 degC",
         "T_sink_in": "55 degC", "T_sink_out": "70 degC", "dT_pinch_e": "4 K", "dT_sh": "6 K", "units": "si",
         "limits": LIMITS}

ENGINE = HEAD + """\
case:
  method: organic-rankine
  options: {{evaporating: temperature, condensing: temperature, source_stream: flow, sink_stream: none}}
  fluids: {{wf: {wf}, source: {{composition: {{N2: 75 %, CO2: 15 %, H2O: 10 %}}, basis: mole}}}}
  inputs:
    T_source_in: {T_source_in}
    m_dot_source: 12 kg/s
    p_source: 1.013 bar
    T_source_min: {T_source_min}
    T_e: {T_e}
    T_c: {T_c}
    dT_pinch_h: 15 K
    T_0: 15 degC
    eta_t: 0.80
    eta_p: 0.65
    eta_gen: 0.95
    eta_pm: 0.90
{extra}
results: [eta_th]
"""

HOT_SOURCE = {"wf": "cyclopentane", "T_source_in": "280 degC", "T_source_min": "120 degC", "T_e": "140 degC",
              "T_c": "35 degC", "extra": "", "units": "si"}


def engine_text(**changed: str) -> str:
    """The spec of an engine on a flue gas, with some of its values changed."""
    return ENGINE.format(**HOT_SOURCE | changed)


def heat_pump_text(**changed: str) -> str:
    """The heat-pump spec with some of its values changed."""
    return HEAT_PUMP.format(**USUAL | changed)


def solve_text(text: str) -> tuple[Solution, Record]:
    """A spec's text to its solution and the record before its findings."""
    spec, faults = read_for_faults(Path("case.yaml"), text=text, name="case.yaml")
    assert spec is not None, faults
    solution = solved(bind(spec, None, faults))
    return solution, build_record(solution)


Solved = tuple[Solution, Record]


def with_value(solution: Solution, **changed: float) -> Solution:
    """A solution in which some symbols have another SI value, as a fault in the program would give."""
    return dataclasses.replace(solution, values={**solution.values, **changed})


def with_step(record: Record, symbol: str, **changed: Any) -> Record:
    """A record in which a step's entries have been changed."""
    data = copy.deepcopy(dict(record.data))
    for step in data["steps"]:
        if step["symbol"] == symbol:
            step.update(changed)
    return Record(data)


def by_id(entries: tuple[dict[str, Any], ...]) -> dict[str, dict[str, Any]]:
    """Entries by their id."""
    return {entry["id"]: entry for entry in entries}
