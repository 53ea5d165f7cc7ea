"""A solution and its findings to the record, every part of the sheet in it."""
from __future__ import annotations

import hashlib
import platform
from dataclasses import asdict
from importlib.metadata import version
from typing import TYPE_CHECKING, Any

import calcpack
from calcpack.fluids.definition import FluidDefinition
from calcpack.record.constants import constant_entries, zero_words
from calcpack.record.identity import input_identity
from calcpack.record.record import FORMAT, Record
from calcpack.record.steps import step_entries
from calcpack.record.views import exchangers, sketch, states, streams
from calcpack.solving.curves import diagrams
from calcpack.solving.solution import Solution, celsius_twin
from calcpack.solving.tolerances import uncertainty
from calcpack.spec.safety import QUANTITIES
from calcpack.units import print_unit, read_quantity, shown_with_unit, unit
from calcpack.units.digits import decimals_for, number_text

if TYPE_CHECKING:
    from calcpack.checks import Findings
    from calcpack.spec import Spec

LIBRARIES = ("CoolProp", "pint", "numpy", "scipy", "PyYAML", "pydantic")


def build_record(solution: Solution) -> Record:
    """The record of a solution, with empty findings; :func:`with_findings` fills them in."""
    spec = solution.spec
    identities = {symbol: input_identity(symbol, solution.value(symbol), one.unit.symbol)
                  for symbol, one in solution.plan.inputs.items()}
    inputs = _inputs(solution, identities)
    steps = step_entries(solution, identities)
    used = _used_by(steps)
    for entry in inputs:
        entry["used_by"] = used.get(entry["symbol"], [])
    data = {
        "calcpack": FORMAT, "sheet": _sheet(solution), "signoff": _signoff(spec), "case": _case(solution),
        "inputs": inputs, "steps": steps, "sections": _sections(solution),
        "results": _results(solution, identities),
        "assumptions": [asdict(one) for one in spec.assumptions],
        "holds": [{"id": one.id, "text": one.text} for one in spec.assumptions if one.status == "open"],
        "references": [asdict(one) for one in spec.references],
        "revisions": [asdict(one) for one in spec.revisions],
        "states": states(solution), "streams": streams(solution), "exchangers": exchangers(solution),
        "diagrams": diagrams(solution), "sketch": sketch(solution),
        "uncertainty": uncertainty(solution), "limits": [], "usual_limits": [], "checks": [],
        "cautions": [], "exergy": None, "ladder": None,
        "engine": engine(solution), "spec_sha256": spec.sha256, "spec_file": spec.file.rsplit("/", 1)[-1],
        "spec_text": _spec_text(spec),
    }
    return Record(data)


def with_findings(record: Record, findings: Findings) -> Record:
    """The same record with limits, checks, cautions, exergy balance and ladder."""
    return Record({**record.data, "limits": list(findings.limits), "usual_limits": list(findings.usual_limits),
                   "checks": list(findings.checks),
                   "cautions": list(findings.cautions), "exergy": findings.exergy, "ladder": findings.ladder})


def _spec_text(spec: Spec) -> str:
    """The file's text, of which ``spec_sha256`` is the hash: the mark of order that it may begin with is put back."""
    whole = hashlib.sha256(spec.text.encode("utf-8")).hexdigest() == spec.sha256
    return spec.text if whole else "\ufeff" + spec.text


def _sheet(solution: Solution) -> dict[str, Any]:
    sheet = solution.spec.sheet
    pressure = unit("bar" if sheet.units == "si" else "psi")
    return {"number": sheet.number, "title": sheet.title, "project": sheet.project, "revision": sheet.revision,
            "status": sheet.status, "purpose": sheet.purpose, "scope": sheet.scope, "date": sheet.date,
            "grade": sheet.grade, "codes": list(sheet.codes), "units": sheet.units, "page": sheet.page,
            "p_atm": {"value": sheet.p_atm, "unit": pressure.symbol, "written": sheet.p_atm_text,
                      "shown": number_text(pressure.from_si(sheet.p_atm), 5 if sheet.units == "si" else 3)}}


def _signoff(spec: Any) -> dict[str, Any]:
    return {role: asdict(signature) if (signature := getattr(spec.signoff, role)) else None
            for role in ("prepared", "checked", "approved")}


def _case(solution: Solution) -> dict[str, Any]:
    method = solution.method
    options = {}
    for name, value in solution.options.items():
        option = method.option(name)
        options[name] = {"value": value, "title": option.title, "meaning": option.meaning(value),
                         "given": name in solution.spec.case.options}
    roles = {role.name: role.title for role in method.roles(solution.options)}
    return {"method": method.name, "method_title": method.title, "method_text": method.text, "options": options,
            "assumes": list(method.assumes), "leaves_out": list(method.leaves_out),
            "safety": _safety(solution),
            "fluids": {role: _fluid(fluid, roles.get(role, role), solution.spec.case.fluids.get(role),
                                    solution.system)
                       for role, fluid in solution.plan.fluids.items()}}


def _safety(solution: Solution) -> dict[str, Any]:
    """The safety quantities as they were written; cautions read them, no step does."""
    safety = solution.spec.case.safety
    return {"source": safety.source, "room_level": safety.room_level, "fluid_group": safety.fluid_group,
            "quantities": [{"name": one.name, "title": one.says, "written": safety.values[one.name],
                            "value": one.value(safety.values[one.name], solution.p_atm)}
                           for one in QUANTITIES if one.name in safety.values]}


def _fluid(fluid: Any, title: str, stated: FluidDefinition | None, system: str) -> dict[str, Any]:
    return {"title": title, "designation": fluid.designation, "stated": stated.words if stated else "",
            "model": fluid.model, "equation": fluid.equation, "reference_state": zero_words(fluid, system),
            "range": fluid.range_text, "identity": fluid.identity,
            "constants": constant_entries(fluid, system), "facts": [asdict(fact) for fact in fluid.facts]}


def _inputs(solution: Solution, identities: dict[str, str]) -> list[dict[str, Any]]:
    entries = []
    for symbol, one in solution.plan.inputs.items():
        given = solution.spec.case.inputs.get(symbol)
        by_default = given is None
        entries.append({
            "symbol": symbol, "title": given.title if given and given.title else one.title,
            "value": float(solution.value(symbol)), "unit": one.unit.symbol,
            "shown": solution.printing.shown(symbol), "also_shown": solution.also_shown(symbol),
            "written": solution.written[symbol], "tol": _tolerance(solution, symbol, given.tol if given else None),
            "source": "the method's default" if by_default else given.source, "note": given.note if given else None,
            "default": by_default, "identity": identities[symbol]})
    return entries


def _tolerance(solution: Solution, symbol: str, text: str | None) -> dict[str, Any] | None:
    if text is None:
        return None
    reading = read_quantity(text)
    laid = solution.plan.inputs[symbol]
    shown_in = print_unit(laid.measure.dimension, solution.system, None if reading.unit.level else reading.unit)
    number = shown_in.from_si(reading.value)
    forms = (number_text(number, decimals) for decimals in range(0, 12))
    plain = next((form for form in forms if abs(float(form) - number) <= 1e-4 * abs(number)),
                 number_text(number, decimals_for(number, 5)))
    return {"value": reading.value, "shown": plain, "unit": shown_in.symbol, "written": text}


def _sections(solution: Solution) -> list[dict[str, Any]]:
    return [{"id": str(index + 1), "title": title,
             "steps": [step.id for step in solution.plan.steps if step.step.section == index]}
            for index, title in enumerate(solution.plan.sections)]


def _results(solution: Solution, identities: dict[str, str]) -> dict[str, Any]:
    titles = {one.symbol: one.title for one in solution.spec.results}
    found = {}
    for symbol, title in titles.items():
        step = None if symbol in solution.plan.inputs else solution.step(symbol)
        found[symbol] = {
            "value": float(solution.value(symbol)), "unit": solution.unit(symbol).symbol,
            "shown": solution.printing.shown(symbol), "also_shown": solution.also_shown(symbol),
            "title": title or (step.step.title if step else solution.plan.inputs[symbol].title),
            "step": step.id if step else None, "order": len(found), "identity": identities[symbol]}
    return found


def _used_by(steps: list[dict[str, Any]]) -> dict[str, list[str]]:
    used: dict[str, list[str]] = {}
    for step in steps:
        for symbol in step["uses"]:
            used.setdefault(symbol, []).append(step["id"])
    return used


def engine(solution: Solution) -> dict[str, Any]:
    """What computed the record: versions, platform, tolerances."""
    from calcpack.solving.roots import RELATIVE
    return {"calcpack": calcpack.__version__, "python": platform.python_version(),
            "platform": f"{platform.system()} {platform.machine()}",
            "libraries": {name: version(name) for name in LIBRARIES},
            "root_tolerance": f"{RELATIVE:g} of the unknown",
            "command": f"calcpack solve {solution.spec.file.rsplit('/', 1)[-1]}"}


def printed_level(value: float, system: str) -> str:
    """A temperature level for a text: ``311.15 K (38.00 °C)``."""
    shown_in = unit("K" if system == "si" else "°R")
    return f"{shown_with_unit(number_text(shown_in.from_si(value), 2), shown_in)} ({celsius_twin(value, 2, system)})"
