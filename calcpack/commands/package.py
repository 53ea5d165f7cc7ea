"""'calcpack package': sheets to one PDF with cover, register, contents and transmittal list."""
from __future__ import annotations

import hashlib
from pathlib import Path

import click

from calcpack.commands.dates import day
from calcpack.commands.reporting import reported
from calcpack.errors import CommandError, Fault


@click.command(short_help="One PDF of all sheets, with register and transmittal list.")
@click.argument("sources", nargs=-1, type=click.Path(path_type=Path))
@click.option("-o", "--output", type=click.Path(path_type=Path), default=Path("package.pdf"), show_default=True,
              help="The PDF to write.")
@click.option("--issued", is_flag=True, help="Bind the last PDF of each sheet that was issued for use.")
@click.option("--to", metavar="NAME", default="", help="Whom the package goes to.")
@click.option("--purpose", metavar="TEXT", default="", help="What it is handed over for.")
@click.option("--date", metavar="DATE", help="Date of the package, year-month-day; today if left out.")
@click.option("--list", "listed", type=click.Path(path_type=Path), metavar="FILE",
              help="Write the transmittal list as comma-separated values too.")
@click.option("--jobs", type=click.IntRange(1, 64), default=None, help="Processes; as many as cores if left out.")
@click.option("-q", "--quiet", is_flag=True, help="Print nothing but faults.")
@reported
def package(sources: tuple[Path, ...], output: Path, issued: bool, to: str, purpose: str, date: str | None,
            listed: Path | None, jobs: int | None, quiet: bool) -> int:
    """Bind sheets to one PDF: cover, register, contents, transmittal list, then every sheet, counted through.

    SOURCES are specs or folders (default: specs). The sheets are bound as their specs stand, each stamped by its
    status; with --issued as they were last issued for use. Exit status 1 if a sheet fails a limit.
    """
    from calcpack.package.binding import bind
    from calcpack.package.bound_sheets import sheets_issued, sheets_now
    from calcpack.package.transmittal import Transmittal, as_csv
    from calcpack.terminal import progress
    from calcpack.writing import write_whole
    transmittal = Transmittal(day(date), " ".join(to.split()), " ".join(purpose.split()))
    targets = [output] if listed is None else [output, listed]
    _require_free(targets)
    with progress(quiet) as tell:
        chosen = sources or (Path("specs"),)
        sheets = sheets_issued(chosen) if issued else sheets_now(chosen, jobs=jobs, tell=tell)
        tell("binding")
        made = bind(sheets, transmittal, issued=issued)
    if listed is not None:
        write_whole(listed, as_csv(made.rows))
    write_whole(output, made.content)
    if not quiet:
        digits = hashlib.sha256(made.content).hexdigest()[:12]
        click.echo(f"wrote {output}: {len(sheets)} {'sheet' if len(sheets) == 1 else 'sheets'}, {made.pages} pages, "
                   f"SHA-256 {digits}")
    return 1 if any(sheet.record.failed_limits for sheet in sheets) else 0


def _require_free(targets: list[Path]) -> None:
    """Refuse what would change the folder of issued sheets, or write two things to one file."""
    from calcpack.revisions.sources import ISSUED_IN
    for target in targets:
        if ISSUED_IN in target.resolve().parent.parts[-2:]:
            raise CommandError(Fault(f"{target} lies in the folder of what was issued", expected="a file elsewhere",
                                     hint="name another with -o"))
        if not target.resolve().parent.is_dir():
            raise CommandError(Fault(f"there is no folder {target.parent}", hint="make it first"))
        _require_earlier(target, "PDF" if target is targets[0] else "list")
    if len({target.resolve() for target in targets}) < len(targets):
        raise CommandError(Fault("the list and the PDF cannot be one file", found=str(targets[0])))


def _require_earlier(target: Path, kind: str) -> None:
    """Refuse to overwrite anything but an earlier file of the same kind: a spec is soon named by mistake."""
    from calcpack.package.transmittal import HEADS
    opening = b"%PDF-" if kind == "PDF" else ",".join(HEADS).encode()
    if not target.exists():
        return
    try:
        with target.open("rb") as file:
            same = file.read(len(opening)) == opening
    except OSError as error:
        raise CommandError(Fault(f"cannot write {target}", detail=str(error))) from None
    if not same:
        raise CommandError(Fault(f"{target} is there already, and is no {kind} of a package",
                                 hint="name another file; nothing else is overwritten"))
