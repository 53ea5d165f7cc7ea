"""A command's faults to the terminal, its result to the exit status."""
from __future__ import annotations

import shutil
import sys
from collections.abc import Callable, Sequence
from functools import wraps
from pathlib import Path
from typing import Any

import click

from calcpack.errors import CalcpackError, Fault, describe

CONTEXT = {"help_option_names": ["-h", "--help"], "max_content_width": 100}


def reported(command: Callable[..., int]) -> Callable[..., None]:
    """Print faults as a compiler does and leave with their status; else with the command's."""
    @wraps(command)
    def run(*arguments: Any, **options: Any) -> None:
        try:
            status = command(*arguments, **options)
        except CalcpackError as error:
            click.echo(describe(error.faults, _texts(error.faults), width=terminal_width()), err=True)
            status = error.exit_status
        except BrokenPipeError:
            # The reader of our output has gone, as 'head' does; nothing is wrong.
            sys.stderr.close()
            status = 0
        sys.exit(status)
    return run


def terminal_width() -> int:
    """Columns that sentences are wrapped to: the terminal's, 80 where there is none, within what reads well."""
    return min(max(shutil.get_terminal_size().columns, 60), 100)


def _texts(faults: Sequence[Fault]) -> dict[str, str]:
    """The texts of the files that faults point into, where they can be read."""
    texts = {}
    for name in {fault.place.file for fault in faults if fault.place}:
        try:
            texts[name] = Path(name).read_text("utf-8", errors="replace")
        except OSError:
            continue
    return texts
