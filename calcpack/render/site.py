"""Solved sheets to a folder of static pages: the register, a page, a PDF and a record for each sheet.

Everything is written into a folder aside and moved into place when all of it
is there. A manifest names the files of the last build, so that the next one
can take away what no sheet needs any more, and nothing else.
"""
from __future__ import annotations

import json
import shutil
import tempfile
from collections.abc import Callable, Iterator, Mapping, Sequence
from concurrent.futures import ProcessPoolExecutor
from contextlib import contextmanager
from dataclasses import dataclass, replace
from pathlib import Path, PurePosixPath
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.points import Point, points, unmet
from calcpack.record import Record
from calcpack.render.assets import copy_assets
from calcpack.render.fluid_page import fluid_pages
from calcpack.render.pages import NO_EXTRAS, Extras
from calcpack.render.pdf import write_pdf
from calcpack.render.register import register_html
from calcpack.render.sheet import file_stem, picture_name, sheet_html
from calcpack.reread.from_print import require, require_same

MANIFEST = ".calcpack-site.json"
HALF_MM, WIDE_MM = 80.0, 165.0
CROWDED = 10
Data = Mapping[str, Any]
Item = tuple[Record, Data | None]
Progress = Callable[[str], None]


@dataclass(frozen=True, slots=True)
class Site:
    """What a build left: all files, sorted, and of each sheet the points that it does not meet."""

    files: tuple[Path, ...]
    unmet: Mapping[str, tuple[Point, ...]]


def build_site(items: Sequence[Item], folder: Path, *, pdf: bool = True, jobs: int = 1,
               progress: Progress | None = None, extras: Mapping[str, Extras] | None = None) -> Site:
    """Builds the site of the given records, each with its comparison or None.

    Every page is read again and done again from its print before anything is
    moved into place. ``extras`` gives what is known of a sheet beside its
    record, by the sheet's number.

    ``jobs`` processes share the sheets; what is written is the same for any
    number of them. ``progress`` is called with each sheet's number as it is
    done. Files of a former build that belong to no sheet now are removed.

    Raises
    ------
    CommandError
        For two sheets of one number, or a folder that cannot be written to.
    MissingPartError
        When the PDF engine is missing; with ``pdf=False`` it is not needed.
    BrokenPrintError
        For a page whose numbers cannot be had from what it prints.
    """
    stems = _stems(items)
    with _aside(folder) as aside:
        names = ["index.html", *(f"assets/{name.as_posix()}" for name in copy_assets(aside / "assets"))]
        open_points = {}
        for record, (written, points_open) in _sheets(items, aside, pdf, jobs, extras or {}):
            names += written
            open_points[record.number] = points_open
            if progress is not None:
                progress(record.number)
        names += _fluid_pages(items, stems, aside)
        index = register_html([record for record, _ in items], stems, pdf=pdf)
        (aside / "index.html").write_text(index, "utf-8", newline="\n")
        names = sorted(names)
        (aside / MANIFEST).write_text(json.dumps({"calcpack site": 1, "files": names}, indent=1) + "\n", "utf-8")
        former = _former(folder)
        _require_ours(folder, names, former)
        _move(aside, folder, names)
        _remove(folder, former - set(names))
    return Site(tuple(folder / name for name in names), open_points)


def _stems(items: Sequence[Item]) -> list[str]:
    """The file names of all sheets; two that differ in case alone would be one file on some disks."""
    seen: dict[str, str] = {}
    for record, _ in items:
        stem = file_stem(record.number)
        if stem.casefold() in seen:
            raise CommandError(Fault(f"two sheets would be written to the same file {stem}.html",
                                     found=f"numbers {seen[stem.casefold()]} and {record.number}",
                                     hint="give each sheet a number of its own"))
        seen[stem.casefold()] = record.number
    return [file_stem(record.number) for record, _ in items]


def _sheets(items: Sequence[Item], aside: Path, pdf: bool, jobs: int,
            extras: Mapping[str, Extras]) -> Iterator[tuple[Record, Written]]:
    """Writes the sheets, in order; gives each record with the names of its files and its open points."""
    tasks = [(record, comparison, aside, pdf, extras.get(record.number, NO_EXTRAS)) for record, comparison in items]
    if jobs <= 1 or len(tasks) <= 1:
        for task in tasks:
            yield task[0], write_sheet(task)
        return
    with ProcessPoolExecutor(min(jobs, len(tasks))) as pool:
        try:
            for task, written in zip(tasks, pool.map(write_sheet, tasks), strict=True):
                yield task[0], written
        except BaseException:
            pool.shutdown(cancel_futures=True)
            raise


Written = tuple[list[str], tuple[Point, ...]]
"""The names of a sheet's files, and the points that it does not meet."""


def write_sheet(task: tuple[Record, Data | None, Path, bool, Extras]) -> Written:
    """One sheet's page, record, figures and PDF into a folder; names are relative to it.

    Raises
    ------
    BrokenPrintError
        Where the page's numbers cannot be had from what it prints.
    """
    record, comparison, folder, pdf, extras = task
    stem, drawn = file_stem(record.number), draw(record)
    pages = judged_pages(record, comparison, drawn, pdf, extras)
    files = {f"{stem}.html": pages.screen, f"{stem}.json": record.to_json()}
    files |= {picture_name(figure, stem): figure.svg_text for figure in drawn}
    for name, text in files.items():
        (folder / name).parent.mkdir(parents=True, exist_ok=True)
        (folder / name).write_text(text, "utf-8", newline="\n")
    if pdf:
        write_pdf(pages.paper, folder / f"{stem}.pdf", record)
    return [*files, *([f"{stem}.pdf"] if pdf else [])], unmet(pages.points)


@dataclass(frozen=True, slots=True)
class Pages:
    """The page of a sheet for the screen and for the PDF engine (empty without one), and its points."""

    screen: str
    paper: str
    points: tuple[Point, ...]


def judged_pages(record: Record, comparison: Data | None, drawn: tuple[Any, ...], pdf: bool,
                 extras: Extras = NO_EXTRAS) -> Pages:
    """The finished pages: made once to be done again and judged, then with the list of points that came out."""
    first = sheet_html(record, comparison=comparison, figures=drawn, pdf=pdf, extras=extras)
    redone = require(first, record.number)
    listed = points(record.data, first, redone, comparison, extras)
    extras = replace(extras, checklist=listed, anew=redone.whole)
    screen = sheet_html(record, comparison=comparison, figures=drawn, pdf=pdf, extras=extras)
    paper = sheet_html(record, comparison=comparison, figures=drawn, for_print=True, extras=extras) if pdf else ""
    require_same(first, [page for page in (screen, paper) if page], record.number)
    return Pages(screen, paper, listed)


def _fluid_pages(items: Sequence[Item], stems: Sequence[str], aside: Path) -> list[str]:
    """Writes a page for each fluid of the sheets; their names."""
    pages = fluid_pages([record for record, _ in items], stems)
    for name, text in pages.items():
        (aside / name).parent.mkdir(parents=True, exist_ok=True)
        (aside / name).write_text(text, "utf-8", newline="\n")
    return list(pages)


def draw(record: Record) -> tuple[Any, ...]:
    """The figures of a record."""
    from calcpack.figures import figures
    # Many numbered states need the whole width of the page to keep apart.
    crowded = any(len(one["points"]) > CROWDED for one in record.data["diagrams"])
    return tuple(figures(record.data, WIDE_MM if crowded else HALF_MM))


@contextmanager
def _aside(folder: Path) -> Iterator[Path]:
    """A folder inside ``folder`` to build in; it is gone afterwards, and so is ``folder`` if it is empty."""
    made = [one for one in (folder, *folder.parents) if not one.exists()]
    try:
        folder.mkdir(parents=True, exist_ok=True)
        aside = Path(tempfile.mkdtemp(prefix=".calcpack-building-", dir=folder))
    except OSError as error:
        raise CommandError(Fault(f"cannot write into {folder}", detail=str(error))) from None
    try:
        yield aside
    finally:
        shutil.rmtree(aside, ignore_errors=True)
        for one in made:
            if one.is_dir() and not any(one.iterdir()):
                one.rmdir()


def _former(folder: Path) -> set[str]:
    """The files that the last build wrote, as its manifest says; names that lead elsewhere are left out."""
    try:
        data = json.loads((folder / MANIFEST).read_text("utf-8"))
    except (OSError, ValueError):
        return set()
    names = data.get("files") if isinstance(data, dict) else None
    return {name for name in names if isinstance(name, str) and _inside(name)} if isinstance(names, list) else set()


def _require_ours(folder: Path, names: Sequence[str], former: set[str]) -> None:
    """Refuse to write over a file that no former build wrote."""
    foreign = sorted(name for name in names if name not in former and (folder / name).is_file())
    if foreign:
        raise CommandError(Fault(f"{folder} holds files that calcpack did not write", found=", ".join(foreign[:3]),
                                 hint="name another folder with -o, or move them away"))


def _inside(name: str) -> bool:
    path = PurePosixPath(name)
    return not path.is_absolute() and ".." not in path.parts and "\\" not in name and bool(path.parts)


def _move(aside: Path, folder: Path, names: Sequence[str]) -> None:
    """Moves the files into place, the register last, so that it never names a page that is not there."""
    order = sorted(names, key=lambda name: name == "index.html")
    try:
        for name in [*order, MANIFEST]:
            (folder / name).parent.mkdir(parents=True, exist_ok=True)
            (aside / name).replace(folder / name)
    except OSError as error:
        raise CommandError(Fault(f"cannot write into {folder}", detail=str(error))) from None


def _remove(folder: Path, names: set[str]) -> None:
    """Takes away files of a former build, and folders that are empty then."""
    for name in sorted(names):
        path = folder / name
        if path.is_file() and path.resolve().is_relative_to(folder.resolve()):
            path.unlink()
            if path.parent != folder and path.parent.is_dir() and not any(path.parent.iterdir()):
                path.parent.rmdir()
