"""Records, methods and fluids to terminal text that fits 80 columns."""
from __future__ import annotations

import sys
from collections.abc import Callable, Iterable, Iterator, Mapping, Sequence
from contextlib import contextmanager
from dataclasses import asdict
from pathlib import Path
from typing import TYPE_CHECKING, Any

from rich.console import Console
from rich.padding import Padding
from rich.table import Table
from rich.text import Text

from calcpack.errors import CommandError, Fault, nearest
from calcpack.units import shown_with_unit, unit

if TYPE_CHECKING:
    from calcpack.building import Package
    from calcpack.record import Record

WIDTH = 80


def console() -> Console:
    """Standard output; 80 columns where it is no terminal, so that files and pipes look the same."""
    plain = not sys.stdout.isatty()
    return Console(file=sys.stdout, width=WIDTH if plain else None, highlight=False, emoji=False, markup=False,
                   soft_wrap=False)


def _rows(out: Console, title: str, rows: Iterable[Sequence[str]], last_wraps: bool = True) -> None:
    """A heading and a table without rules; the last column takes the room that is left."""
    rows = list(rows)
    if not rows:
        return
    out.print(Text(title, style="bold"))
    table = Table(box=None, show_header=False, pad_edge=False, padding=(0, 2, 0, 0))
    for index in range(len(rows[0])):
        table.add_column(overflow="fold", no_wrap=last_wraps and index < len(rows[0]) - 1)
    for row in rows:
        table.add_row(*(Text(cell) for cell in row))
    out.print(Padding(table, (0, 0, 1, 2)))


def print_record(record: Record, *, steps: bool, quiet: bool) -> None:
    """Results, limits, holds, checks and cautions of a solved sheet."""
    out, data = console(), record.data
    sheet = data["sheet"]
    out.print(Text(f"{sheet['number']}  {sheet['title']}", style="bold"))
    out.print(Text(f"revision {sheet['revision']}, {sheet['status']}; {data['case']['method_title']}\n"))
    if steps:
        for section in data["sections"]:
            inside = [step for step in data["steps"] if step["section"] == section["id"]]
            _rows(out, f"{section['id']} {section['title']}", (_step_row(step) for step in inside))
    _rows(out, "Results", ((symbol, with_twin(one), one["title"]) for symbol, one in in_order(data["results"])))
    limits = data["limits"] if not quiet else (*record.failed_limits, *record.waived_limits)
    _rows(out, "Limits", ((one["id"], _verdict(one.get("verdict", one["status"])), _limit_words(one))
                          for one in limits))
    if quiet:
        return
    _rows(out, "Holds", ((one["id"], one["text"]) for one in data["holds"]))
    _rows(out, "Checks", _check_rows(data["checks"]))
    triggered = [one for one in data["cautions"] if one["status"] == "triggered"]
    _rows(out, "Cautions", ((one["id"], f"{one['topic']}: {one['value']}, threshold {one['threshold']}")
                            for one in triggered))
    if triggered:
        out.print("Cautions are given in full on the sheet; local codes and licensed practice\ntake precedence.\n")


def _step_row(step: Mapping[str, Any]) -> tuple[str, str, str]:
    numbers = f" = {step['numbers']}" if step["numbers"] and step["numbers"] != step["formula"] else ""
    return step["id"], step["symbol"], f"= {step['formula']}{numbers} = {with_twin(step)}"


def with_twin(item: Mapping[str, Any]) -> str:
    """A printed value with its unit, and the Celsius twin of a temperature level."""
    text = shown_with_unit(item["shown"], item["unit"])
    return f"{text} ({item['also_shown']})" if item.get("also_shown") else text


def in_order(results: Mapping[str, Any]) -> list[tuple[str, Any]]:
    """Results in the order in which the spec asks for them."""
    return sorted(results.items(), key=lambda pair: pair[1]["order"])


def _verdict(status: str) -> str:
    return {"holds": "holds", "fails": "FAILS", "waived": "FAILS, waived"}.get(status, status)


def _limit_words(limit: Mapping[str, Any]) -> str:
    """A limit's text and margin; where it is waived, who answers for it and why."""
    waiver = limit.get("waiver")
    if limit.get("verdict") != "waived" or not waiver:
        return f"{limit['text']}; margin {limit['margin']}"
    return f"{limit['text']}. Waived by {waiver['name']}, {waiver['date']}: {waiver['reason']}"


def _check_rows(checks: Sequence[Mapping[str, Any]]) -> list[tuple[str, str]]:
    """A line a group: how many hold; a failed check in full."""
    groups: dict[str, list[Mapping[str, Any]]] = {}
    for check in checks:
        groups.setdefault(check["group"], []).append(check)
    rows = []
    for group, inside in groups.items():
        good = sum(check["status"] == "ok" for check in inside)
        rows.append((group, f"{good} of {len(inside)} hold"))
        rows += [("  FAILS", f"{check['text']}: {check['value']}, allowed {check['allowed']}")
                 for check in inside if check["status"] == "fails"]
    return rows


@contextmanager
def progress(quiet: bool) -> Iterator[Callable[[str], None]]:
    """What is being done, on standard error: a live line on a terminal, else plain lines."""
    err = Console(stderr=True, highlight=False, markup=False)
    if quiet:
        yield lambda text: None
    elif err.is_terminal:
        with err.status("starting") as status:
            yield status.update
    else:
        yield err.print


def print_built(package: Package, folder: Path) -> None:
    """The register as the build leaves it."""
    out = console()
    rows = []
    for record in package.records:
        sheet, failed = record.data["sheet"], len(record.failed_limits)
        state = f"{failed} limit{'s' if failed > 1 else ''} FAILS" if failed == 1 else \
            f"{failed} limits FAIL" if failed else "limits hold"
        holds = len(record.data["holds"])
        waived = len(record.waived_limits)
        state += f", {waived} waived" if waived else ""
        rows.append((sheet["number"], sheet["revision"], sheet["status"],
                     state + (f", {holds} hold{'s' if holds > 1 else ''} open" if holds else ""), sheet["title"]))
    _rows(out, f"{len(rows)} sheets in {folder}" if len(rows) != 1 else f"1 sheet in {folder}", rows)
    out.print(f"open {folder / 'index.html'}")


def print_unmet(package: Package) -> None:
    """The points of the checklists that are not met, sheet by sheet."""
    out = console()
    for number, points in package.unmet.items():
        _rows(out, f"{number}: {len(points)} points of the checklist are not met",
              ((str(one.number), f"{one.text}: {one.where}") for one in points))


def print_verification(verification: Mapping[str, Any], *, quiet: bool, written: Path | None) -> None:
    """The worst value of each published example, what failed, and the sum by method."""
    out, results = console(), verification["results"]
    if not quiet:
        out.print(Text("Published examples: the value that is farthest off in each", style="bold"))
        out.print(Text(f"{'row':<6}{'symbol':<12}{'published':<20} {'computed':>12} {'off':>10} {'allowed':>9}",
                       style="bold"))
        for one in results:
            _print_worst(out, one)
        out.print("")
    failed = [one for one in results if one["failure"] or not all(value["holds"] for value in one["values"])]
    _rows(out, "FAILS", ((one["row"], f"{one['case']}: {one['failure'] or _beyond(one)}") for one in failed))
    rows = []
    for name, done in verification["methods"].items():
        rows.append((name, f"{done['cases']} {'case' if done['cases'] == 1 else 'cases'}", f"{done['values']} values",
                     f"{'within' if done['pass'] else 'NOT within'} what is allowed"))
    _rows(out, f"{verification['date']}, set {verification['test_set']}, calcpack "
          f"{verification['engine']['calcpack']}, CoolProp {verification['engine']['libraries']['CoolProp']}", rows)
    if written is not None:
        out.print(f"wrote {written}; a build with it beside the specs prints it on the sheets")


def _print_worst(out: Console, result: Mapping[str, Any]) -> None:
    """One line, at most as wide as the table; a case of several is told by its number in the set."""
    from calcpack.verification.published import relative
    worst = max(result["values"], key=lambda one: one["share"], default=None)
    if worst is None:
        out.print(f"{result['row']:<6}no value: see below")
        return
    mark = "ok" if result["failure"] is None and worst["holds"] else "FAILS"
    out.print(f"{result['row']:<6}{worst['symbol'][:11]:<12}{worst['published'][:20]:<20} {worst['computed']:>12.8g} "
              f"{relative(worst['deviation'], worst['scale']):>10} "
              f"{relative(worst['allowed'], worst['scale']):>9} {mark}")


def _beyond(result: Mapping[str, Any]) -> str:
    return "; ".join(f"{one['symbol']} is {one['computed']:.6g}, published {one['published']}"
                     for one in result["values"] if not one["holds"])


def print_methods() -> None:
    """Every method with its title."""
    from calcpack.methods import methods
    out = console()
    _rows(out, "Methods", ((one.name, one.title) for one in methods().values()))
    out.print("'calcpack methods METHOD' shows one in detail, 'calcpack new METHOD' writes a spec.")


def print_method(name: str) -> None:
    """A method: arrangement, options, fluids, inputs, what it assumes and leaves out."""
    from calcpack.methods.starter import method_named, needs_of
    out, method = console(), method_named(name)
    options = method.complete({})
    out.print(Text(f"{method.name}: {method.title}\n", style="bold"))
    out.print(method.text + "\n")
    if method.sketch:
        out.print(method.sketch.strip("\n") + "\n")
    for option in method.options:
        rows = [(value + (" *" if value == option.default else ""), meaning)
                for value, meaning in option.values.items()]
        if option.pattern:
            rows.append(("or others", option.pattern_text))
        _rows(out, f"Option {option.name}: {option.title.lower()}", rows)
    if method.options:
        out.print("* taken where the spec is silent\n")
    _rows(out, "Fluids", ((role.name, f"{role.title}, such as {role.typical}") for role in method.roles(options)))
    base = needs_of(method, options)
    _rows(out, "Inputs with these options (value of common practice, limits where set)",
          ((need.symbol, need.typical, need.bounds, need.title) for need in base.values()))
    _rows(out, "Further inputs with other options", _further(method, options, base))
    _rows(out, "Assumes", (("-", text) for text in method.assumes))
    _rows(out, "Leaves out", (("-", text) for text in method.leaves_out))


def _further(method: Any, options: Mapping[str, str], base: Mapping[str, Any]) -> list[tuple[str, str, str, str]]:
    """Inputs that appear when one option is set otherwise."""
    from calcpack.errors import SpecError
    from calcpack.methods.starter import needs_of
    rows: dict[str, tuple[str, str, str, str]] = {}
    for option in method.options:
        for value in option.values:
            try:
                needs = needs_of(method, {**options, option.name: value})
            except SpecError:
                # This value asks for another option to change with it.
                continue
            for symbol, need in needs.items():
                if symbol not in base:
                    title = f"{need.title} ({option.name}: {value})"
                    rows.setdefault(symbol, (symbol, need.typical, need.bounds, title))
    return list(rows.values())


def print_units() -> None:
    """Every unit that can be written, by kind of quantity."""
    from calcpack.units import KINDS, unit
    from calcpack.units.spellings import GAUGE, UNITS
    out = console()
    rows = []
    for kind in KINDS.values():
        known = [symbol for symbol in UNITS if unit(symbol).dimension == kind.dimension
                 and (unit(symbol).level <= kind.level)]
        if known and kind.dimension:
            rows.append((kind.name, "  ".join(known)))
    _rows(out, "Units by kind of quantity", rows)
    out.print(Padding(Text("Gauge pressures, as inputs: " + "  ".join(GAUGE)), (0, 0, 1, 0)))
    out.print("Spellings such as kJ/kg/K, kJ/(kg K) and kJ/(kg·K), m3 and m³, degC and °C\nare the same.")


def print_fluids() -> None:
    """The register of fluids: designation, safety class, critical point."""
    from calcpack.fluids.register import designations, facts_for
    out = console()
    rows = []
    for designation in designations():
        safety = [fact.value for fact in facts_for(designation) if fact.quantity.startswith("safety class")]
        rows.append((designation, safety[0] if safety else "-"))
    half = (len(rows) + 1) // 2
    pairs = [(*rows[i], *(rows[half + i] if half + i < len(rows) else ("", ""))) for i in range(half)]
    _rows(out, "Register: designation, safety class (ISO 817 / ASHRAE 34; see each fluid for its source)", pairs)
    out.print("'calcpack fluids FLUID' shows one with its sources. Other fluids of CoolProp,\n"
              "brines, gas mixtures and streams of constant heat capacity can be used too.")


def _opened(name: str) -> Any:
    """A fluid by its name; a brine, which needs a share of its solute, at 30 % by mass."""
    from calcpack.errors import CalcpackError
    from calcpack.fluids import open_fluid
    from calcpack.fluids.definition import FluidDefinition
    from calcpack.fluids.register import designations
    try:
        return open_fluid(FluidDefinition(name))
    except CalcpackError as error:
        hint = error.faults[0].hint or ""
        if hint.startswith("mass_fraction"):
            return open_fluid(FluidDefinition(name, mass_fraction=0.30))
        raise CommandError(Fault(f"there is no fluid {name!r}", hint=hint or nearest(name, designations()))) from None


def print_fluid(name: str) -> None:
    """A fluid: model, equation of state with its literature, range, facts with source."""
    from calcpack.fluids.register.groups import absent, grouped
    from calcpack.record.constants import constant_entries
    out, fluid = console(), _opened(name)
    out.print(Text(f"{fluid.designation}\n", style="bold"))
    _rows(out, "Properties", (("model", fluid.model), ("equation", fluid.equation), ("range", fluid.range_text),
                              ("h, s zero", fluid.reference_state)))
    _rows(out, "Constants", ((one["symbol"], with_twin(one), one["title"]) for one in constant_entries(fluid, "si")))
    found = [asdict(fact) for fact in fluid.facts]
    for title, facts in grouped(found):
        _rows(out, title, (_fact_row(fact) for fact in facts))
    if gone := absent(found):
        _rows(out, "Not in the register", [(", ".join(title.lower() for title in gone),)])
    out.print("Each fact with its source; the edition in force at the place of use holds.")


def _fact_row(fact: Mapping[str, Any]) -> tuple[str, str, str]:
    """A fact: quantity, value with its unit, source with how far it is confirmed and what is to be noted."""
    written = unit(fact["unit"]).symbol if fact["unit"] else ""
    note = f" ({fact['note']})" if fact["note"] else ""
    short = fact["quantity"].partition(" (")[0].removesuffix(" temperature").replace("thermal-stability guide", "guide")
    return short, shown_with_unit(fact["value"], written), confirmed_words(fact) + note


def confirmed_words(fact: Mapping[str, Any]) -> str:
    """A fact's source, and how far it has been confirmed."""
    known = {"yes": "confirmed", "no": "not confirmed", "second-hand": "second-hand", "derived": "derived"}
    return f"{fact['source']}; {known.get(fact['confirmed'], fact['confirmed'])}"
