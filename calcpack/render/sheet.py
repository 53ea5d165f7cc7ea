"""A record to its sheet: one HTML page, for the browser or for the PDF engine."""
from __future__ import annotations

import base64
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from functools import cache
from typing import TYPE_CHECKING, Any

from markupsafe import Markup

from calcpack.render import (
    basis,
    cautions,
    changes,
    evidence,
    formal,
    issues,
    linked,
    losses,
    outcome,
    review_part,
    tolerances,
    working,
)
from calcpack.render.assets import templates_folder
from calcpack.render.marking import SCRIPTS, boxes_of, no_boxes, review_data
from calcpack.render.pages import NO_EXTRAS, Extras, Ground, anchor, ground_of

if TYPE_CHECKING:
    from jinja2 import Environment

    from calcpack.record import Record

Data = Mapping[str, Any]
Build = Callable[[Ground], dict[str, Any] | None]


@dataclass(frozen=True, slots=True)
class Part:
    """A part of the sheet: its name, its heading, and what gathers its content; None leaves it out."""

    name: str
    title: str
    build: Build


PARTS = (
    Part("results", "Results and limits", outcome.results),
    Part("purpose", "Purpose and scope", basis.purpose),
    Part("changes", "Changes since the last revision", changes.changes),
    Part("inputs", "Design inputs", basis.inputs),
    Part("assumptions", "Assumptions", basis.assumptions),
    Part("references", "References", basis.references),
    Part("family", "Sheets before and after this one", linked.family),
    Part("method", "Method and arrangement", basis.method),
    Part("calculation", "Calculation", working.calculation),
    Part("fluids", "Fluids", basis.fluids),
    Part("states", "States and streams", evidence.states),
    Part("diagrams", "Diagrams", evidence.diagrams),
    Part("bound", "From the reversible bound to the net figure", losses.bound),
    Part("verification", "Verification", evidence.verification),
    Part("review", "Check by another person", review_part.check),
    Part("uncertainty", "Uncertainty and sensitivity", tolerances.uncertainty),
    Part("cautions", "Cautions", cautions.cautions),
    Part("nomenclature", "Nomenclature", evidence.nomenclature),
    Part("history", "Revision history", issues.history),
    Part("checklist", "Checklist", formal.checklist),
    Part("machine", "How it was computed", formal.machine),
)
"""The parts of a sheet in the order of print."""


def sheet_html(record: Record, *, comparison: Data | None = None, figures: Sequence[Any] = (),
               for_print: bool = False, pdf: bool = False, extras: Extras = NO_EXTRAS) -> str:
    """The sheet as one HTML page.

    ``figures`` are those of :mod:`calcpack.figures`. With ``for_print`` the
    page is what the PDF engine reads: figures inside it, no MathML, style
    sheets beside the templates. Without, figures lie in ``figures/`` and
    style sheets in ``assets/``, relative to the page, and ``pdf`` says
    whether the sheet's PDF lies beside it. ``extras`` are what the record does not hold.
    """
    ground = ground_of(record.data, comparison, figures, for_print, extras)
    parts = [{"name": part.name, "anchor": f"part-{part.name}", "title": part.title, "content": content}
             for part in PARTS if (content := part.build(ground)) is not None]
    stem = file_stem(record.number)
    pictures = {figure.id: picture_address(figure, stem, for_print) for figure in ground.figures}
    return environment().get_template("sheet.html").render(
        block=outcome.title_block(ground), parts=parts, page=page_rules(record.data), pictures=pictures, stem=stem,
        for_print=for_print, pdf=pdf, styles=style_addresses(for_print), **_desk(record, for_print, extras))


def _desk(record: Record, for_print: bool, extras: Extras) -> dict[str, Any]:
    """What the page needs so that a checker can mark it; paper is marked by hand."""
    if for_print:
        return {"box": no_boxes, "scripts": (), "review_data": ""}
    return {"box": boxes_of(record.data), "scripts": [f"assets/scripts/{name}" for name in SCRIPTS],
            "review_data": review_data(record.data, extras.review.review if extras.review else None)}


def style_addresses(for_print: bool) -> list[str]:
    """The addresses of the style sheets, in the order in which they overrule each other."""
    names = ["fonts", "equation", "sheet", *([] if for_print else ["screen", "review"])]
    return [f"{'' if for_print else 'assets/'}styles/{name}.css" for name in names]


@cache
def environment() -> Environment:
    """The templates, autoescaped, with faults for names that are not there."""
    from jinja2 import Environment, FileSystemLoader, StrictUndefined
    made = Environment(loader=FileSystemLoader(templates_folder()), autoescape=True, undefined=StrictUndefined,
                       trim_blocks=True, lstrip_blocks=True)
    made.globals["anchor"] = anchor
    return made


def file_stem(number: str) -> str:
    """The name of a sheet's files: its number, with other characters as hyphens; never 'index'."""
    stem = anchor("", number)[1:].lstrip(".") or "sheet"
    return f"sheet-{stem}" if stem.casefold() == "index" else stem


def picture_name(figure: Any, stem: str) -> str:
    """The address of a figure's file, relative to the page."""
    return f"figures/{stem}-{anchor('', figure.id)[1:]}.svg"


def picture_address(figure: Any, stem: str, for_print: bool) -> str:
    """Where the page finds a figure: its file, or the figure itself in the address."""
    if not for_print:
        return picture_name(figure, stem)
    return "data:image/svg+xml;base64," + base64.b64encode(figure.svg_text.encode()).decode()


GAP = "\u2002\u2002"
PAPER = {"A4": "A4", "Letter": "letter"}


def page_rules(record: Data) -> Markup:
    """The style rules with this sheet's own words: paper, running header and footer."""
    sheet = record["sheet"]
    boxes = {
        "top-left": css_text(f"{sheet['number']}{GAP}{sheet['title']}"),
        "top-right": css_text(f"Revision {sheet['revision']}{GAP}{outcome.status_words(record).upper()}"),
        "bottom-left": css_text(sheet["project"]),
        "bottom-center": '"Sheet " counter(page) " of " counter(pages)',
        "bottom-right": css_text(f"spec {record['spec_sha256'][:12]}{GAP}calcpack {record['engine']['calcpack']}"),
    }
    rules = " ".join(f"@{place} {{ content: {words}; }}" for place, words in boxes.items())
    return Markup(f"@page {{ size: {PAPER[sheet['page']]}; {rules} }}")


def css_text(text: str) -> str:
    """A text as a CSS string: whatever is not plain is written by its code point."""
    return '"' + "".join(char if char.isalnum() or char in " .,:-" else f"\\{ord(char):x} " for char in text) + '"'
