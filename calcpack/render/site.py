"""Solved sheets to a folder of static pages: the register, a page, a PDF and a record for each sheet.

Everything is written into a folder aside and moved into place when all of it
is there. A manifest names the files of the last build, so that the next one
can leave alone what has not changed, and take away what no sheet needs any
more, and nothing else.
"""
from __future__ import annotations

import json
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

from calcpack.errors import CommandError, Fault
from calcpack.points import Point, points, unmet
from calcpack.record import Record
from calcpack.render.assets import copy_assets
from calcpack.render.fluid_page import fluid_pages
from calcpack.render.manifest import SheetEntry
from calcpack.render.pages import NO_EXTRAS, Extras
from calcpack.render.pdf import pdf_bytes
from calcpack.render.register import register_html
from calcpack.render.sheet import file_stem, picture_name, sheet_html
from calcpack.render.site_folder import SiteFolder, site_folder
from calcpack.reread.from_print import require, require_same
from calcpack.workers import workers

HALF_MM, WIDE_MM = 80.0, 165.0
CROWDED = 10
Data = Mapping[str, Any]
Item = tuple[Record, Data | None]
Progress = Callable[[str], None]


@dataclass(frozen=True, slots=True)
class Site:
    """What a build left: all files, sorted, of each sheet the points that it does not meet, and whose files are new."""

    files: tuple[Path, ...]
    unmet: Mapping[str, tuple[Point, ...]]
    written: tuple[str, ...]


def build_site(items: Sequence[Item], folder: Path, *, pdf: bool = True, jobs: int = 1,
               progress: Progress | None = None, extras: Mapping[str, Extras] | None = None) -> Site:
    """Builds the site of the given records, each with its comparison or None, all of it anew.

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
    with site_folder(folder) as place:
        return write_site(items, place, pdf=pdf, jobs=jobs, progress=progress, extras=extras)


def write_site(items: Sequence[Item], place: SiteFolder, *, pdf: bool = True, jobs: int = 1,
               progress: Progress | None = None, extras: Mapping[str, Extras] | None = None,
               entries: Mapping[str, SheetEntry] | None = None, files: Mapping[str, bytes] | None = None) -> Site:
    """The same into a folder that is held: sheets whose key is that of the former build are left as they are.

    ``entries`` has each sheet's keys by its number, ``files`` further files of the site by name.
    """
    entries, extras = dict(entries or {}), extras or {}
    stems = _stems(items)
    copy_assets(place.aside / "assets")
    kept: list[str] = []
    todo, done = [], {}
    for item in items:
        former = _standing(place, entries.get(item[0].number))
        if former is None:
            todo.append(item)
        else:
            kept += former.files
            done[item[0].number] = former
    for number, entry in _sheets(todo, place, pdf, jobs, extras, entries):
        done[number] = entry
        if progress is not None:
            progress(number)
    pages = fluid_pages([record for record, _ in items], stems)
    pages["index.html"] = register_html([record for record, _ in items], stems, pdf=pdf, extras=extras)
    for name, content in {**pages, **(files or {})}.items():
        place.write(name, content)
    names = place.finish(kept, {number: entry for number, entry in done.items() if number in entries})
    return Site(tuple(place.folder / name for name in names),
                {record.number: done[record.number].unmet for record, _ in items},
                tuple(record.number for record, _ in todo))


def _standing(place: SiteFolder, entry: SheetEntry | None) -> SheetEntry | None:
    """A sheet's entry of the former build, where its files are still what they would become."""
    if entry is None:
        return None
    former = place.former.sheets.get(entry.number)
    if former is None or former.page != entry.page or not place.former.whole(place.folder, former.files):
        return None
    return former


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


def _sheets(items: Sequence[Item], place: SiteFolder, pdf: bool, jobs: int, extras: Mapping[str, Extras],
            entries: Mapping[str, SheetEntry]) -> Iterator[tuple[str, SheetEntry]]:
    """Writes the sheets, in order; gives the number of each with its entry."""
    tasks = [(record, comparison, pdf, extras.get(record.number, NO_EXTRAS)) for record, comparison in items]
    with workers(jobs) as run:
        for (record, _), (files, points_open) in zip(items, run(sheet_files, tasks), strict=True):
            for name, content in files.items():
                place.write(name, content)
            entry = entries.get(record.number, SheetEntry(record.number))
            yield record.number, replace(entry, files=tuple(files), unmet=points_open)


SheetFiles = tuple[dict[str, bytes], tuple[Point, ...]]
"""The contents of a sheet's files by name, and the points that it does not meet."""

KEPT = ".calcpack-kept"
"""Folder of the site for what the next build can use again and no page shows."""


def sheet_files(task: tuple[Record, Data | None, bool, Extras]) -> SheetFiles:
    """One sheet's page, record, figures and PDF; names are relative to the site.

    Raises
    ------
    BrokenPrintError
        Where the page's numbers cannot be had from what it prints.
    """
    record, comparison, pdf, extras = task
    stem, drawn = file_stem(record.number), draw(record, comparison)
    pages = judged_pages(record, comparison, drawn, pdf, extras)
    texts = {f"{stem}.html": pages.screen, f"{stem}.json": record.to_json()}
    texts |= {picture_name(figure, stem): figure.svg_text for figure in drawn}
    if comparison is not None:
        texts[kept_name(record.number)] = json.dumps(comparison, ensure_ascii=False, indent=1) + "\n"
    files = {name: text.encode() for name, text in texts.items()}
    if pdf:
        files[f"{stem}.pdf"] = pdf_bytes(pages.paper, record.number)[0]
    return files, unmet(pages.points)


def kept_name(number: str) -> str:
    """The name of the file that keeps a sheet's comparison for the next build."""
    return f"{KEPT}/{file_stem(number)}.json"


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


def draw(record: Record, comparison: Data | None = None) -> tuple[Any, ...]:
    """The figures of a record, and of its comparison with the revision before."""
    from calcpack.figures import figures
    # Many numbered states need the whole width of the page to keep apart.
    crowded = any(len(one["points"]) > CROWDED for one in record.data["diagrams"])
    return tuple(figures(record.data, WIDE_MM if crowded else HALF_MM, comparison))
