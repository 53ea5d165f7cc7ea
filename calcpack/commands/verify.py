"""The command that tells whether an issued PDF is what calcpack gives for the spec inside it."""
from __future__ import annotations

from pathlib import Path

import click

from calcpack.commands.reporting import CONTEXT, reported
from calcpack.errors import CommandError, Fault


@click.command(context_settings=CONTEXT, short_help="Tell whether an issued PDF is what its spec gives.")
@click.argument("pdf", type=click.Path(path_type=Path))
@click.option("--against", metavar="SPEC", help="A spec, or REV:path in git, that the one inside should be.")
@click.option("--trust", multiple=True, type=click.Path(path_type=Path), metavar="CERT.pem",
              help="A certificate that the seal should rest on; may be repeated.")
@click.option("--json", "as_json", is_flag=True, help="Print the report as JSON, every difference in it.")
@reported
def verify(pdf: Path, against: str | None, trust: tuple[Path, ...], as_json: bool) -> int:
    """Solve again what an issued PDF carries, print it again, and compare every number, text and drawing.

    Exit status 0: the same; 1: it differs, with each place, or cannot be verified, with the reason. Nothing is
    written and nothing is fetched.
    """
    from calcpack.issuing.verify import verify as verified
    from calcpack.issuing.verify_report import SAME, report_json, report_text
    from calcpack.terminal import progress
    content = _content(pdf)
    with progress(as_json) as tell:
        tell(f"solving and printing again what {pdf.name} carries")
        report = verified(content, str(pdf), against=against, trust=trust)
    click.echo(report_json(report) if as_json else report_text(report), nl=False)
    return 0 if report.status == SAME else 1


def _content(path: Path) -> bytes:
    try:
        return path.read_bytes()
    except OSError as error:
        what = f"cannot read {path}" if path.exists() else f"there is no file {path}"
        raise CommandError(Fault(what, expected="a PDF written by 'calcpack issue'", detail=str(error))) from None
