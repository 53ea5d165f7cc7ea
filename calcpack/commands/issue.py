"""The command that freezes a revision of a sheet."""
from __future__ import annotations

from pathlib import Path
from typing import Any

import click

from calcpack.commands.dates import day
from calcpack.commands.reporting import CONTEXT, reported
from calcpack.commands.sealing import seal_options, sealer


@click.command(context_settings=CONTEXT, short_help="Freeze a revision: one PDF with spec and record inside.")
@click.argument("spec", type=click.Path(path_type=Path))
@click.option("--for-information", is_flag=True,
              help="Issue what is not fit for use: stamped so on every page, with a list of what is open.")
@click.option("--date", help="Date of issue, year-month-day; today if left out.")
@click.option("--dry-run", is_flag=True, help="Say what would be issued, or why not; write nothing.")
@click.option("-q", "--quiet", is_flag=True, help="Print nothing but faults.")
@seal_options
@reported
def issue(spec: Path, for_information: bool, date: str | None, dry_run: bool, quiet: bool,
          **seal: Any) -> int:
    """Freeze the revision of SPEC: issued/NUMBER-REVISION.pdf beside it, with spec, record and review file inside.

    Refuses, with every reason at once and exit status 1, while a hold is open, a limit or check fails, something is
    not checked or signed, or a point of the checklist is not met. Never overwrites.
    """
    from calcpack.issuing.issue import issue as issued
    from calcpack.issuing.paper import FOR_INFORMATION, FOR_USE
    from calcpack.issuing.telling import told
    from calcpack.terminal import progress
    on, sealed = day(date), sealer(**seal)
    with progress(quiet) as tell:
        done = issued(spec, kind=FOR_INFORMATION if for_information else FOR_USE, date=on, dry_run=dry_run,
                      seal=sealed, tell=tell)
    if not quiet:
        click.echo("\n".join(told(done, dry_run)))
    return 0
