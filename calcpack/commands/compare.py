"""'calcpack compare': two revisions of a sheet, or all sheets since a revision, to what changed and why."""
from __future__ import annotations

from pathlib import Path

import click

from calcpack.commands.reporting import reported
from calcpack.errors import CommandError, Fault

SHAPES = ["text", "markdown", "html", "json"]


@click.command(short_help="What changed between two revisions, and why results moved.")
@click.argument("names", nargs=-1, metavar="OLD NEW | [SPEC or FOLDER]...")
@click.option("--since", "revision", metavar="REV", help="Compare every sheet that changed since this git revision.")
@click.option("--format", "shape", type=click.Choice(SHAPES), default="text", show_default=True)
@click.option("-o", "--output", type=click.Path(path_type=Path), help="File to write; else printed.")
@reported
def compare(names: tuple[str, ...], revision: str | None, shape: str, output: Path | None) -> int:
    """Show what changed between two revisions of a sheet, and why its results moved.

    OLD and NEW are each a spec, a record, a PDF that carries one, or REV:path in git. With --since, every spec
    named, or in the folders named (default: specs), is compared with itself at REV; renamed specs are followed, new and
    removed sheets listed. Exit status 1 if anything differs.
    """
    text, differs = _of_two(names, shape) if revision is None else _since(names, revision, shape)
    if output is None:
        click.echo(text, nl=False)
    else:
        from calcpack.writing import spare_sources, write_whole
        spare_sources(output)
        write_whole(output, text)
    return 1 if differs else 0


def _of_two(names: tuple[str, ...], shape: str) -> tuple[str, bool]:
    from calcpack.revisions import differs, folder_of, load, rendered
    from calcpack.revisions.compare import compare as compared
    if len(names) != 2:
        raise CommandError(Fault("two revisions of a sheet are compared", found=", ".join(names) or "none",
                                 expected="OLD and NEW, or --since REV",
                                 hint="'calcpack compare --since main specs' compares every sheet with itself at main"))
    old, new = names
    comparison = compared(load(old), load(new), folder=folder_of(new))
    return rendered(comparison, shape), differs(comparison)


def _since(names: tuple[str, ...], revision: str, shape: str) -> tuple[str, bool]:
    from calcpack.package.since import since
    from calcpack.package.since_report import report
    found = since(revision, [Path(name) for name in names] or [Path("specs")])
    return report(found, shape), found.differs
