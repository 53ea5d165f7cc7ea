"""The commands: parse, call, print. No engineering here.

Exit status: 0 solved and every limit holds or is waived; 1 a limit fails, a comparison
differs, a published check is off, or a point is unmet where that is asked;
2 the spec or the command is wrong; 3 the numbers have no answer; 4 a part of
the machine is missing.
"""
from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path
from typing import Any

import click

from calcpack import __version__
from calcpack.commands.compare import compare
from calcpack.commands.issue import issue
from calcpack.commands.package import package
from calcpack.commands.reporting import CONTEXT, reported
from calcpack.commands.review import review
from calcpack.commands.verify import verify
from calcpack.errors import CommandError, Fault


def _overrides(pairs: Sequence[str], option: str = "--set", example: str = "--set T_e='2 degC'") -> dict[str, str]:
    """``NAME=VALUE`` pairs of a repeated option."""
    found: dict[str, str] = {}
    for pair in pairs:
        symbol, sign, value = pair.partition("=")
        if not sign or not symbol.strip() or not value.strip():
            raise CommandError(Fault(f"{option} {pair}: a name and a value are meant", expected=example))
        if symbol.strip() in found:
            raise CommandError(Fault(f"{option} gives {symbol.strip()} twice", expected="each name once"))
        found[symbol.strip()] = value.strip()
    return found


@click.group(context_settings=CONTEXT)
@click.version_option(__version__, "--version", message="calcpack %(version)s")
def main() -> None:
    """Engineering calculation packages for heat engines and heat pumps.

    Specs in YAML are solved with real-fluid properties; every equation and value is printed in a sheet
    that another engineer can check.
    """


@main.command()
@click.argument("method")
@click.option("-o", "--output", type=click.Path(path_type=Path), help="File to write; else printed.")
@click.option("--option", "options", multiple=True, metavar="NAME=VALUE", help="An option of the method.")
@reported
def new(method: str, output: Path | None, options: tuple[str, ...]) -> int:
    """Write a commented spec with every input that METHOD takes."""
    from calcpack.methods.starter import starter
    from calcpack.writing import write_new
    text = starter(method, _overrides(options, "--option", "NAME=VALUE, as 'calcpack methods METHOD' lists them"))
    if output is None:
        click.echo(text, nl=False)
    else:
        write_new(output, text)
        click.echo(f"wrote {output}")
    return 0


@main.command()
@click.argument("specs", nargs=-1, required=True, type=click.Path(path_type=Path))
@click.option("--json", "as_json", is_flag=True, help="Print the record (a list for several specs).")
@click.option("--set", "pairs", multiple=True, metavar="SYMBOL=VALUE", help="Replace an input's value.")
@click.option("--steps", is_flag=True, help="Print every step too.")
@click.option("-q", "--quiet", is_flag=True, help="Print results and failed limits only.")
@reported
def solve(specs: tuple[Path, ...], as_json: bool, pairs: tuple[str, ...], steps: bool, quiet: bool) -> int:
    """Solve SPECS; print results, limits, checks and cautions."""
    from calcpack.pipeline import solve_all
    records = solve_all(specs, _overrides(pairs))
    if as_json:
        click.echo(_json(records), nl=False)
    else:
        from calcpack.terminal import print_record
        for record in records:
            print_record(record, steps=steps, quiet=quiet)
    return 1 if any(record.failed_limits for record in records) else 0


def _json(records: Sequence[Any]) -> str:
    if len(records) == 1:
        return records[0].to_json()
    return "[\n" + ",\n".join(record.to_json().rstrip("\n") for record in records) + "\n]\n"


@main.command()
@click.argument("sources", nargs=-1, type=click.Path(path_type=Path))
@click.option("-o", "--output", type=click.Path(path_type=Path), default=Path("site"), show_default=True,
              help="Folder of the site.")
@click.option("--no-pdf", is_flag=True, help="Leave the PDFs out.")
@click.option("--jobs", type=click.IntRange(1, 64), default=None, help="Processes; as many as cores if left out.")
@click.option("--verification", type=click.Path(path_type=Path),
              help="Record of 'calcpack self-check'; verification.json beside a spec if left out.")
@click.option("--fresh", is_flag=True, help="Take nothing over from the last build.")
@click.option("--strict", is_flag=True, help="Exit status 1 if a sheet leaves a point of its checklist unmet.")
@click.option("-q", "--quiet", is_flag=True, help="Print nothing but faults.")
@reported
def build(sources: tuple[Path, ...], output: Path, no_pdf: bool, jobs: int | None, verification: Path | None,
          fresh: bool, strict: bool, quiet: bool) -> int:
    """Build the site: register, a page and a PDF a sheet, records. SOURCES are specs or folders (default: specs)."""
    from calcpack.building import build_package
    from calcpack.terminal import print_built, print_unmet, progress
    with progress(quiet) as tell:
        package = build_package(sources or (Path("specs"),), output, pdf=not no_pdf, jobs=jobs, tell=tell,
                                verification=verification, fresh=fresh)
    if not quiet:
        print_built(package, output)
    if strict:
        print_unmet(package)
    failed = any(record.failed_limits for record in package.records)
    return 1 if failed or (strict and any(package.unmet.values())) else 0


@main.command(name="methods")
@click.argument("method", required=False)
@click.option("--units", is_flag=True, help="List the units that can be written instead.")
@reported
def methods_command(method: str | None, units: bool) -> int:
    """List the methods, or show METHOD in detail."""
    from calcpack.terminal import print_method, print_methods, print_units
    if units:
        print_units()
    elif method is None:
        print_methods()
    else:
        print_method(method)
    return 0


@main.command()
@click.argument("fluid", required=False)
@reported
def fluids(fluid: str | None) -> int:
    """List the fluids of the register, or show FLUID in detail."""
    from calcpack.terminal import print_fluid, print_fluids
    if fluid is None:
        print_fluids()
    else:
        print_fluid(fluid)
    return 0


@main.command(name="self-check")
@click.argument("method", required=False)
@click.option("--json", "as_json", is_flag=True, help="Print the verification record.")
@click.option("-o", "--output", type=click.Path(path_type=Path),
              help="File for the verification record, such as verification.json beside the specs.")
@click.option("-q", "--quiet", is_flag=True, help="Print what fails only.")
@reported
def self_check(method: str | None, as_json: bool, output: Path | None, quiet: bool) -> int:
    """Run the published checks on this machine, all or those solved by METHOD.

    Each is an example from the literature, solved as a spec, with the published values beside the computed
    ones. Exit status 1 if one is off by more than is allowed for it.
    """
    from calcpack.terminal import print_verification, progress
    from calcpack.verification.run import self_check as run
    from calcpack.verification.run import to_json
    from calcpack.writing import spare_sources, write_whole
    if output is not None:
        spare_sources(output)
    with progress(quiet or as_json) as tell:
        verification = run(method, tell)
    if output is not None:
        write_whole(output, to_json(verification))
    if as_json:
        click.echo(to_json(verification), nl=False)
    else:
        print_verification(verification, quiet=quiet, written=output)
    return 0 if verification["pass"] else 1


@main.command()
@reported
def schema() -> int:
    """Print the JSON Schema of a spec, for editors."""
    import json

    from calcpack.spec import json_schema
    click.echo(json.dumps(json_schema(), indent=2, ensure_ascii=False))
    return 0


main.add_command(issue)
main.add_command(compare)
main.add_command(review)
main.add_command(package)
main.add_command(verify)
