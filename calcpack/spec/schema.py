"""The shape of a spec: which keys there are, what each holds, what it is for.

The models check shape only, all faults at once; what needs two keys to be seen
together stands in :mod:`rules`. The JSON Schema for editors comes from here.
"""
from __future__ import annotations

from typing import Annotated, Any, Literal

from pydantic import BaseModel, ConfigDict, Field, create_model

from calcpack.spec.safety import QUANTITIES, text_type
from calcpack.spec.words import (
    BoundText,
    Choice,
    ConditionText,
    Date,
    DensityText,
    FluidGroup,
    Format,
    FormulaText,
    HeatCapacityText,
    Identity,
    LevelText,
    Line,
    LinkText,
    PressureText,
    QuantityText,
    RevisionMark,
    ShareText,
    SheetNumber,
    ShortForm,
    Symbol,
    Text,
    UnitText,
)

MAX_ENTRIES = 1000          # of a list or mapping; no sheet that a person checks comes near


def _key(says: str, *examples: Any, default: Any = ...) -> Any:
    return Field(default, description=says, examples=list(examples) or None)


def _entries(says: str) -> Any:
    return Field(default_factory=list, description=says, max_length=MAX_ENTRIES)


def _named(says: str, **examples: Any) -> Any:
    return Field(default_factory=dict, description=says, max_length=MAX_ENTRIES, examples=[examples])


def _one_of(*keys: str) -> dict[str, Any]:
    return {"oneOf": [{"required": [key]} for key in keys]}


class Written(BaseModel):
    """Base of all parts of a spec: unknown keys are faults, nothing is converted."""

    model_config = ConfigDict(strict=True, extra="forbid", frozen=True)


class WrittenSheet(Written):
    """What the title block says."""

    number: SheetNumber = _key("The sheet's number in the register.", "HP-101")
    title: Line = _key("What the sheet calculates.", "Heat pump on laundry waste water")
    project: Line = _key("The project that the sheet belongs to.", "Laundry, heat recovery")
    revision: RevisionMark = _key("Revision: capital letters without I O Q S X Z, or digits.", "A", "B")
    status: Literal["draft", "for-review", "issued", "superseded", "void"] = _key(
        "Where the sheet stands. Purpose, scope and sources may be left out in a draft only.", "draft")
    purpose: Text | None = _key("What decision the result serves.", default=None)
    scope: Text | None = _key("What is calculated and what is not.", default=None)
    date: Date | None = _key("Date of this revision, year-month-day.", "2026-03-31", default=None)
    p_atm: PressureText = _key("Absolute pressure of the surroundings, added to gauge pressures.",
                               "1.01325 bar", "950 mbar", default="1.01325 bar")
    T_dead: LevelText | None = _key("Temperature of the dead state of the exergy balance, where the method asks for "
                                    "no T_0; 15 degC if left out.", "15 degC", "59 degF", default=None)
    units: Literal["si", "us"] = _key("Units of print.", "si", default="si")
    page: Literal["A4", "Letter"] = _key("Paper of the PDF.", "A4", default="A4")
    grade: Line | None = _key("Safety class or grade of verification.", default=None)
    codes: list[Line] = _entries("Codes and standards that the sheet must follow.")
    baseline: Line | None = _key("What this revision is compared with: a record, or REV:path in git.",
                                 "records/HP-101-A.json", "v1.0:specs/laundry.yaml", default=None)


class WrittenSignature(Written):
    """Who signed, and when."""

    name: Line = _key("Name of the person.", "A. Example")
    date: Date = _key("Date of signing, year-month-day.", "2026-03-31")


class WrittenSignoff(Written):
    """Three different people."""

    prepared: WrittenSignature | None = _key("Who prepared the sheet.", default=None)
    checked: WrittenSignature | None = _key("Who checked it; not who prepared it.", default=None)
    approved: WrittenSignature | None = _key("Who approved it; neither of the two.", default=None)


class WrittenFluid(Written):
    """A fluid by its designation, its composition or its constant heat capacity."""

    fluid: Line | None = _key("Designation of the fluid.", "R-1234ze(E)", "water", default=None)
    model: Literal["Helmholtz", "IAPWS-95", "IF97", "mixture", "ideal gas", "incompressible"] | None = _key(
        "Kind of equation for the properties; the usual one if left out.", "Helmholtz", default=None)
    reference: Literal["IIR", "ASHRAE", "NBP"] | None = _key(
        "Where enthalpy and entropy are zero; the equation's own if left out.", "IIR", default=None)
    mass_fraction: ShareText | None = _key("Mass fraction of the solute of a brine.", "30 %", default=None)
    composition: dict[Line, ShareText] | None = _key(
        "Shares of the components; they sum to 1.", {"nitrogen": "79 %", "oxygen": "21 %"}, default=None)
    basis: Literal["mole", "mass"] = _key("What the shares count.", "mole", default="mole")
    constant_cp: HeatCapacityText | None = _key("Constant specific heat capacity.", "4.19 kJ/(kg·K)",
                                                default=None)
    density: DensityText | None = _key("Density, beside a constant heat capacity.", "998 kg/m³", default=None)


class WrittenInput(Written):
    """A design input: its value, or the sheet and symbol that it is taken from. The short form is the value alone."""

    model_config = ConfigDict(json_schema_extra=_one_of("value", "from"))
    value: QuantityText | None = _key("The value with its unit.", "38 degC", "0.72", default=None)
    link: LinkText | None = Field(
        None, alias="from", examples=["MT-101.T_out"],
        description="In place of a value: an input or step of another sheet, as number of the sheet, point, symbol.")
    tol: QuantityText | None = _key("Tolerance, plus and minus.", "1.0 K", default=None)
    source: Line | None = _key("Where the value is from: the id of a reference or assumption, or words.",
                               "R1", default=None)
    title: Line | None = _key("What the input is, where the method does not say so.", default=None)
    note: Text | None = _key("A remark that is printed.", default=None)


class WrittenSafetyNotes(Written):
    """What the safety quantities share."""

    room_level: Literal["above-ground", "below-ground", "lowest-basement"] | None = _key(
        "Where the room lies; above ground if left out.", "above-ground", default=None)
    fluid_group: FluidGroup | None = _key("Group of the working fluid in pressure equipment, if not the register's: "
                                          "1 dangerous, 2 other.", "1", default=None)
    source: Line | None = _key("Where the safety quantities are from: ids of references, or words.", "R1",
                               default=None)


WrittenSafety = create_model(
    "WrittenSafety", __base__=WrittenSafetyNotes, __module__=__name__,
    __doc__="Quantities that cautions alone read; none is an input of the calculation.",
    **{one.name: (text_type(one) | None, _key(one.says, one.example, default=None)) for one in QUANTITIES})


class WrittenTotal(Written):
    """What a column of the rows comes to."""

    symbol: Symbol = _key("The total's symbol.", "T_2_max")
    title: Line = _key("What the total is.", "Hottest discharge of the season")
    of: Symbol = _key("The column.", "T_2")
    by: Literal["sum", "min", "max", "mean"] = _key("How the column is taken together.", "max", default="sum")


class WrittenSeries(Written):
    """The calculation solved for each row of a table: the bins of a season, or steps of load."""

    rows: Text = _key("A reference season (average, warmer, colder), a .csv file beside the spec, or the table "
                      "itself: a heading of symbols with units, then a line a row.", "average", "loads.csv",
                      "T_out [degC], t_bin [h]\n-5, 120\n5, 900\n")
    shown: Line = _key("The row whose steps are printed in full.", "2 °C")
    inputs: dict[Symbol, FormulaText] = _named(
        "Inputs of the method that differ from row to row, as formulas of the columns and the other inputs.",
        T_source_in="T_out")
    account: Literal["none", "heating", "output"] = _key(
        "What is summed up: nothing but the totals below, a heat pump's season against a heat load, or the yield "
        "of an engine.", "heating", default="none")
    heat: Symbol | None = _key("The heat that the machine gives (heating) or takes (output).", "Q_dot_sink",
                               default=None)
    power: Symbol | None = _key("The power that the machine draws (heating) or gives (output).", "W_dot_net",
                                default=None)
    cycling: Literal["none", "water", "air"] = _key(
        "Losses of a heat pump that switches on and off, in the form for heated water or for heated air.",
        default="none")
    backup: Literal["electric", "fuel"] = _key("What gives the heat that the heat pump lacks.", default="electric")
    emissions: Literal["no", "yes"] = _key("Whether carbon dioxide is counted, by factors among the inputs.",
                                           default="no")
    costs: Literal["no", "yes"] = _key("Whether running costs are counted, by prices among the inputs.", default="no")
    columns: list[Symbol] = _entries("Further symbols of the sheet that the table shows.")
    totals: list[WrittenTotal] = _entries("What columns come to.")


class WrittenCase(Written):
    """What is calculated."""

    method: Line = _key("The method that lays the steps, or 'none': only the steps below.",
                        "vapour-compression")
    options: dict[Line, Choice] = _named("What shapes the method's steps.", recuperator="yes")
    fluids: dict[Symbol, Annotated[WrittenFluid, ShortForm("fluid")]] = _named(
        "The fluid of each role.", wf="R-1234ze(E)", source="water")
    inputs: dict[Symbol, Annotated[WrittenInput, ShortForm("value", ("string", "number"))]] = _named(
        "The design inputs by symbol.", eta_is=0.72,
        T_source_in={"value": "38 degC", "tol": "1.0 K", "source": "R1"})
    series: WrittenSeries | None = _key("The rows that the calculation is solved for.", default=None)
    safety: WrittenSafety | None = _key("Quantities that cautions alone read, such as charge and room.",
                                        {"charge": "12 kg", "room_volume": "300 m³", "source": "R1"}, default=None)


class WrittenBranch(Written):
    """One branch of a choice: 'when' with 'value', or last of all 'otherwise'."""

    model_config = ConfigDict(json_schema_extra={"oneOf": [{"required": ["when", "value"]},
                                                           {"required": ["otherwise"]}]})
    when: ConditionText | None = _key("The condition.", "T_a < T_b and x_a <= 1", default=None)
    value: FormulaText | None = _key("The formula that holds under the condition.", "Q_dot_a", default=None)
    otherwise: FormulaText | None = _key("The formula where no condition held.", "Q_dot_b", default=None)
    label: Line | None = _key("The branch in words.", "pinch at the outlet", default=None)


class WrittenRoot(Written):
    """An unknown found where an equation is zero."""

    equation: FormulaText = _key("What must be zero, with the step's symbol as the unknown.",
                                 "Q_dot_a - Q_dot_b")
    between: Annotated[list[FormulaText], Field(min_length=2, max_length=2)] = _key(
        "The two ends of the bracket.", ["300 K", "T_sink_in"])


class WrittenLookup(Written):
    """A value interpolated in a table of points."""

    of: Symbol = _key("The symbol that the table is entered with.", "x_load")
    points: Annotated[list[Annotated[list[QuantityText], Field(min_length=2, max_length=2)]],
                      Field(min_length=2, max_length=500)] = _key(
        "Pairs of quantities, the first of each pair ascending.", [["0.5", "0.61"], ["1.0", "0.72"]])
    source: Line = _key("Where the table is from.", "R2")


class WrittenStep(Written):
    """A step of the engineer's own, after the method's."""

    model_config = ConfigDict(json_schema_extra=_one_of("formula", "choice", "root", "lookup"))
    symbol: Symbol = _key("The symbol that the step gives a value to.", "W_dot_fan")
    title: Line = _key("What the step computes.", "Power of the fan")
    formula: FormulaText | None = _key("The formula.", "V_dot_air * dp_fan / eta_fan", default=None)
    choice: Annotated[list[WrittenBranch], Field(min_length=2, max_length=20)] | None = _key(
        "Branches, the last one 'otherwise'.", default=None)
    root: WrittenRoot | None = _key("The equation that the symbol solves.", default=None)
    lookup: WrittenLookup | None = _key("The table that the value is read from.", default=None)
    unit: UnitText | None = _key("The unit to print in.", "kW", default=None)
    reference: Line | None = _key("Where the formula is from.", "R3", default=None)
    note: Text | None = _key("A remark that is printed.", default=None)


class WrittenWaiver(Written):
    """Who lets a limit fail, and why; the sheet prints it on its first page."""

    reason: Text = _key("Why the sheet may stand although the limit fails.", "The maker confirmed 125 °C in writing.")
    name: Line = _key("Who answers for it.", "A. Example")
    date: Date = _key("Since when, year-month-day.", "2026-03-31")


class WrittenLimit(Written):
    """What must hold, and why."""

    model_config = ConfigDict(json_schema_extra=_one_of("at_most", "at_least"))
    id: Identity = _key("The limit's id.", "L1")
    symbol: Symbol = _key("The quantity that is limited.", "T_2")
    at_most: BoundText | None = _key("Upper bound: a quantity or a symbol.", "120 degC", default=None)
    at_least: BoundText | None = _key("Lower bound: a quantity or a symbol.", "5 K", default=None)
    why: Text = _key("Why it must hold.", "Oil breaks down above this temperature.")
    source: Line | None = _key("Where the bound is from.", "R4", default=None)
    waiver: WrittenWaiver | None = _key("Who lets the limit fail, and why.", default=None)


class WrittenAssumption(Written):
    """What is taken as true. An open one is a hold."""

    id: Identity = _key("The assumption's id.", "A1")
    text: Text = _key("The assumption.", "Heat losses to the room are left out.")
    basis: Text = _key("Why it may be assumed.", "Surfaces are insulated.")
    effect: Text | None = _key("What changes if it does not hold.", default=None)
    status: Literal["confirmed", "open"] = _key("Whether it is confirmed.", "open")
    owner: Line | None = _key("Who confirms it.", default=None)
    due: Date | None = _key("By when, year-month-day.", default=None)


class WrittenReference(Written):
    """A document that values and formulas are taken from."""

    id: Identity = _key("The reference's id.", "R1")
    text: Text = _key("The document, so that another person finds it.")


class WrittenResult(Written):
    """A result on the title page. The short form is its symbol alone."""

    symbol: Symbol = _key("The result's symbol.", "COP")
    title: Line | None = _key("Its title, if not the step's.", default=None)


class WrittenRevision(Written):
    """One line of the revision history."""

    revision: RevisionMark = _key("The revision.", "A")
    date: Date = _key("Its date, year-month-day.", "2026-03-31")
    note: Text = _key("What changed and why.", "First issue.")
    by: Line | None = _key("Who made it.", default=None)
    checked: Line | None = _key("Who checked it, where no issue in 'issued' says so.", default=None)
    approved: Line | None = _key("Who approved it, where no issue in 'issued' says so.", default=None)


class Document(Written):
    """A calcpack spec: one calculation sheet."""

    calcpack: Format = _key("Version of this format.", 1)
    sheet: WrittenSheet = _key("The title block.")
    signoff: WrittenSignoff = Field(default_factory=WrittenSignoff, description="Who signed.")
    case: WrittenCase = _key("What is calculated, with which fluids and inputs.")
    steps: list[WrittenStep] = _entries("The engineer's own steps, after the method's.")
    limits: list[WrittenLimit] = _entries("What must hold, and why.")
    assumptions: list[WrittenAssumption] = _entries("What is taken as true.")
    references: list[WrittenReference] = _entries("Documents that values and formulas are taken from.")
    results: list[Annotated[WrittenResult, ShortForm("symbol")]] = _entries("What the title page shows.")
    revisions: list[WrittenRevision] = _entries("The revision history, the oldest first.")


def json_schema() -> dict[str, Any]:
    """The JSON Schema (draft 2020-12) of a spec, for editors that complete and check as one types."""
    made = _tidied(Document.model_json_schema())
    return {"$schema": "https://json-schema.org/draft/2020-12/schema", **made, "title": "calcpack spec"}


def _tidied(part: Any) -> Any:
    """What pydantic says, without null (a key is left out instead) and with no key beside the patterns."""
    if isinstance(part, list):
        return [_tidied(item) for item in part]
    if not isinstance(part, dict):
        return part
    kept = {name: _tidied(value) for name, value in part.items() if not (name == "default" and value is None)}
    if {"type": "null"} in kept.get("anyOf", []):
        others = [option for option in kept.pop("anyOf") if option != {"type": "null"}]
        kept = {**(others[0] if len(others) == 1 else {"anyOf": others}), **kept}
    if "patternProperties" in kept:
        kept["additionalProperties"] = False
    return kept
