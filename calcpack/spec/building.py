"""Turn a document without faults into the frozen parts of a Spec."""
from __future__ import annotations

from typing import Any

from calcpack.fluids.definition import FluidDefinition
from calcpack.spec import model, schema
from calcpack.spec.drafts import Draft
from calcpack.spec.formulas import kinds_of
from calcpack.spec.nodes import Mapping
from calcpack.spec.safety import QUANTITIES
from calcpack.spec.scalars import quantity
from calcpack.spec.source import Source

_ROUNDING = 1e-12


def built(draft: Draft, source: Source, tree: Mapping, dropped: frozenset[str]) -> model.Spec:
    """The Spec that a draft means."""
    document = draft.document
    return model.Spec(
        sheet=_sheet(document.sheet, draft.p_atm),
        signoff=_signoff(document.signoff),
        case=_case(document.case),
        steps=tuple(_step(step) for step in document.steps),
        limits=tuple(_limit(limit) for limit in document.limits),
        assumptions=tuple(model.Assumption(**_fields(entry)) for entry in document.assumptions),
        references=tuple(model.Reference(**_fields(entry)) for entry in document.references),
        results=tuple(model.Result(**_fields(entry)) for entry in document.results),
        revisions=tuple(model.Revision(**_fields(entry)) for entry in document.revisions),
        source=source, tree=tree, dropped=dropped)


def _fields(written: schema.Written) -> dict[str, Any]:
    return {name: getattr(written, name) for name in type(written).model_fields}


def _sheet(written: schema.WrittenSheet, p_atm: float) -> model.Sheet:
    fields = {**_fields(written), "codes": tuple(written.codes), "p_atm": p_atm, "p_atm_text": written.p_atm}
    return model.Sheet(**fields)


def _signoff(written: schema.WrittenSignoff) -> model.Signoff:
    return model.Signoff(**{role: model.Signature(**_fields(signature))
                            for role, signature in _fields(written).items() if signature is not None})


def _case(written: schema.WrittenCase) -> model.Case:
    return model.Case(
        method=written.method, options=dict(written.options),
        fluids={role: _fluid(fluid) for role, fluid in written.fluids.items()},
        inputs={symbol: _input(symbol, entry) for symbol, entry in written.inputs.items()},
        safety=_safety(written.safety), series=_series(written.series))


def _input(symbol: str, written: schema.WrittenInput) -> model.Input:
    number, _, name = (written.link or "").rpartition(".")
    link = model.Link(number, name) if written.link else None
    return model.Input(**{**_fields(written), "symbol": symbol, "value": written.value or "", "link": link})


def _series(written: schema.WrittenSeries | None) -> model.Series | None:
    if written is None:
        return None
    totals = tuple(model.Total(**_fields(one)) for one in written.totals)
    return model.Series(**{**_fields(written), "inputs": dict(written.inputs), "columns": tuple(written.columns),
                           "totals": totals})


def _safety(written: schema.WrittenSafetyNotes | None) -> model.Safety:
    if written is None:
        return model.Safety()
    values = {one.name: text for one in QUANTITIES if (text := getattr(written, one.name)) is not None}
    return model.Safety(values, written.room_level, written.source, written.fluid_group)


def _fluid(written: schema.WrittenFluid) -> FluidDefinition:
    shares = [(name, quantity(text, "number").value) for name, text in (written.composition or {}).items()]
    total = sum(share for _, share in shares)
    if abs(total - 1.0) < _ROUNDING:          # 0.21 stays 0.21
        total = 1.0
    return FluidDefinition(
        name=written.fluid or "", model=written.model or "", reference=written.reference or "",
        mass_fraction=_value(written.mass_fraction, "number"),
        composition=tuple((name, share / total) for name, share in shares), basis=written.basis,
        constant_cp=_value(written.constant_cp, "specific entropy"),      # J/(kg·K), as an entropy
        density=_value(written.density, "density"))


def _value(text: str | None, kind: str) -> float | None:
    return None if text is None else quantity(text, kind).value


def _step(written: schema.WrittenStep) -> model.Step:
    kind: Any = kinds_of(written)[0]
    content = {"formula": written.formula, "choice": _choice(written.choice), "root": _root(written.root),
               "lookup": _lookup(written.lookup)}
    others = {name: value for name, value in _fields(written).items() if name not in content}
    return model.Step(**others, kind=kind, **content)


def _choice(written: list[schema.WrittenBranch] | None) -> tuple[model.Branch, ...] | None:
    if written is None:
        return None
    return tuple(model.Branch(branch.when, branch.value or branch.otherwise or "", branch.label)
                 for branch in written)


def _root(written: schema.WrittenRoot | None) -> model.Root | None:
    return None if written is None else model.Root(written.equation, *written.between)


def _lookup(written: schema.WrittenLookup | None) -> model.Lookup | None:
    if written is None:
        return None
    return model.Lookup(written.of, tuple((x, y) for x, y in written.points), written.source)


def _limit(written: schema.WrittenLimit) -> model.Limit:
    sense: Any = "at least" if written.at_most is None else "at most"
    bound = written.at_most or written.at_least or ""
    waiver = None if written.waiver is None else model.Waiver(**_fields(written.waiver))
    return model.Limit(written.id, written.symbol, sense, bound, written.why, written.source, waiver)
