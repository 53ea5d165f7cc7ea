"""Ratios that must stay small: solving against a bare script, a season against its rows, help, PDF against the layout.

Run from the project's root: ``python tests/benchmarks/bench.py``. Each line
gives a ratio or a time and its target; times are of the processor, best of
several, so that other work on the machine does not count. Not collected by pytest.
"""
from __future__ import annotations

import os
import resource
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable
from pathlib import Path
from typing import Any

from bare_searches import Engine, HeatPump
from bare_sheets import CarbonDioxide, Cascade, SteamPlant

REPEATS = 15
SAME = 1e-6     # relative: what a script must agree to before it is timed
HEATERS = {"reheats": "2", "heaters": "closed-trap open closed-trap"}
SHEETS = (("steam-plant", HEATERS, SteamPlant), ("cascade", {}, Cascade), ("transcritical-co2", {}, CarbonDioxide))
ONE_BIN = "|\n      T_out [degC], t_bin [h]\n      {}, {}"
LOAD = {"Q_dot_sink": "20 kW - 5 kW/K * (T_out - 16 degC)"}
STREAMS = LOAD | {"T_source_in": "T_out", "T_source_out": "T_out - 4 K",
                  "T_sink_out": "35 degC - 0.6 * (T_out - 16 degC)", "T_sink_in": "T_sink_out - 5 K"}
LEVELS = LOAD | {"T_e": "T_out - 8 K", "T_c": "40 degC - 0.6 * (T_out - 16 degC)"}
GIVEN = {"evaporating": "temperature", "condensing": "temperature", "source_stream": "none", "sink_stream": "none"}


def in_turns(calls: list[Callable[[], Any]], repeats: int = REPEATS) -> list[float]:
    """The shortest run [s] of each call, run in turns so that a slower spell falls on all."""
    times: list[list[float]] = [[] for _ in calls]
    for _ in range(repeats):
        for call, found in zip(calls, times, strict=True):
            start = time.process_time()
            call()
            found.append(time.process_time() - start)
    return [min(found) for found in times]


def solution(method: str, options: dict[str, str] | None = None) -> Any:
    """The starter's case of a method, bound and solved."""
    from calcpack.methods.starter import starter
    return solution_of(starter(method, options or {}))


def solution_of(text: str) -> Any:
    """The case of a spec's text, bound and solved."""
    from calcpack.solving import solved
    from calcpack.solving.bind import bind
    from calcpack.spec import read_for_faults
    spec, faults = read_for_faults(Path("bench.yaml"), text=text, name="bench.yaml")
    return solved(bind(spec, None, faults))


def solving() -> None:
    """Ratio of a program's run to the bare script of the same case; both must give the same result."""
    for method, bare, symbol in (("vapour-compression", HeatPump, "COP"), ("organic-rankine", Engine, "W_dot_net")):
        case = solution(method)
        script = bare(inputs_of(case))
        against(method, case, lambda script=script, symbol=symbol: {symbol: script.solve()})
    for method, options, sheet in SHEETS:
        case = solution(method, options)
        against(" ".join((method, *options.values())), case, sheet(inputs_of(case)).solve)


def inputs_of(case: Any) -> dict[str, float]:
    """The inputs of a case [SI]."""
    return {name: case.values[name] for name in case.plan.inputs}


def against(what: str, case: Any, by_hand: Callable[[], dict[str, float]]) -> None:
    """The ratio of the program's run to the script's, once they agree."""
    inputs = inputs_of(case)
    require_same(what, by_hand(), case.program.run(inputs))
    ours, theirs = in_turns([lambda: case.program.run(inputs), by_hand])
    report(f"{what}: program {1e3 * ours:.2f} ms, bare script {1e3 * theirs:.2f} ms", ours / theirs, 1.5)


def require_same(what: str, expected: dict[str, float], found: dict[str, float]) -> None:
    """Stop where a value is not that of the other way."""
    for symbol, value in expected.items():
        if not abs(value - found[symbol]) <= SAME * abs(value):
            sys.exit(f"{what}: by hand {symbol} = {value:.9g}, by the program {found[symbol]:.9g}")


def season(what: str, options: dict[str, str], by_row: dict[str, str]) -> None:
    """Ratio of a season's 26 bins on one sheet to the same sheet with one bin, solved for each of the 26."""
    from calcpack.plan.seasons import SEASONS
    whole = solution_of(seasonal(options, by_row, "average", 2))
    singles = [solution_of(seasonal(options, by_row, ONE_BIN.format(*one), one[0])) for one in SEASONS["average"].bins]
    slots, rows = whole.program.slots, whole.program.cases["n_rows"]
    for single, row in zip(singles, rows, strict=True):
        require_same(f"{single.values['T_out']} K", {name: single.values[name] for name in ("T_out", "COP", "T_2")},
                     {name: row[slot] for name, slot in slots.items()})
    inputs = inputs_of(whole)

    def each() -> None:
        for single in singles:
            single.program.run(inputs)
    ours, theirs = in_turns([lambda: whole.program.run(inputs), each])
    report(f"a season of {len(rows)} bins, {what}: {1e3 * ours:.2f} ms, "
           f"{len(singles)} solves of one bin {1e3 * theirs:.2f} ms", ours / theirs, 1.0)


def seasonal(options: dict[str, str], by_row: dict[str, str], rows: str, shown: int) -> str:
    """The heat pump's starter with air as its source and inputs that follow from the outdoor temperature."""
    from calcpack.methods.starter import starter
    text = starter("vapour-compression", options).replace("wf: R-1234ze(E)", "wf: R-290").replace(
        "source: water", "source: air")
    given = "".join(line for line in text.splitlines(keepends=True)
                    if not line.strip().startswith(tuple(f"{name}:" for name in by_row)))
    formulas = "".join(f"      {name}: {formula}\n" for name, formula in by_row.items())
    series = f"  series:\n    rows: {rows}\n    shown: {shown} degC\n    inputs:\n{formulas}"
    return given.replace("  inputs:\n", series + "  inputs:\n", 1)


def help_time() -> None:
    """CPU time of ``calcpack --help`` in a process of its own, and that it imports no property library."""
    code = ("import sys\nfrom calcpack.cli import main\ntry:\n    main(['--help'])\nexcept SystemExit:\n"
            "    sys.exit('CoolProp' in sys.modules)")
    times = []
    for _ in range(REPEATS):
        before = resource.getrusage(resource.RUSAGE_CHILDREN)
        done = subprocess.run([sys.executable, "-c", code], stdout=subprocess.DEVNULL, env=os.environ, check=False)
        after = resource.getrusage(resource.RUSAGE_CHILDREN)
        times.append(after.ru_utime + after.ru_stime - before.ru_utime - before.ru_stime)
        if done.returncode:
            sys.exit("--help imports CoolProp")
    report("calcpack --help, CPU seconds", min(times), 0.25)


def pdf_time() -> None:
    """Ratio of the program's PDF of a sheet to WeasyPrint alone on the same HTML."""
    from weasyprint import HTML

    from calcpack.methods.starter import starter
    from calcpack.pipeline import solve_spec
    from calcpack.render.assets import templates_folder
    from calcpack.render.pdf import write_pdf
    from calcpack.render.sheet import sheet_html
    from calcpack.render.site import draw
    record = solve_spec(Path("bench.yaml"), text=starter("organic-rankine", {}), name="bench.yaml")
    figures = draw(record)
    html = sheet_html(record, figures=figures, for_print=True)
    base = templates_folder().as_uri() + "/"

    def ours() -> None:
        write_pdf(sheet_html(record, figures=figures, for_print=True), path, record)
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "bench.pdf"
        whole, alone = in_turns([ours, lambda: HTML(string=html, base_url=base).write_pdf(pdf_tags=True)], 3)
        report(f"PDF, {alone:.1f} s by the layout alone", whole / alone, 1.15)


def report(what: str, found: float, target: float) -> None:
    """A line: what, the figure to two decimals, its target, and whether it is kept."""
    print(f"{what}: {found:.2f}, target {target:g}: {'kept' if round(found, 2) <= target else 'MISSED'}")


if __name__ == "__main__":
    solving()
    season("pinches", {}, STREAMS)
    season("levels given", GIVEN, LEVELS)
    help_time()
    pdf_time()
