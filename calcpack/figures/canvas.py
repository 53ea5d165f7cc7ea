"""Sizes, inks and fonts of the figures, and a drawn page to SVG text.

Lengths on a page are points (1/72 inch): the page's resolution is 72 dots an
inch, so matplotlib's display coordinates are points too.
"""

from __future__ import annotations

import io
from collections.abc import Iterator
from contextlib import contextmanager
from dataclasses import replace
from functools import lru_cache
from pathlib import Path

import matplotlib
from matplotlib import font_manager
from matplotlib.figure import Figure as Page

from calcpack.errors import Fault, MissingPartError

POINTS_PER_MM = 72.0 / 25.4
INK = "#000000"
ACCENT = "#12304f"  # as dark as black on a grey printer
SOFT = "#6e6e6e"
FAINT = "#dcdcdc"
LETTERS = 8.5
SMALL = 8.0
STREAM_DASHES = (0, (6.0, 1.6, 1.2, 1.6))
JOIN_DASHES = (0, (3.2, 1.8))
FAMILY = "calcpack text"

_SETTINGS = {
    # The stamp of a draft lies behind the page and must show through.
    "axes.facecolor": "none",
    "font.family": FAMILY,
    "font.size": LETTERS,
    "axes.labelsize": LETTERS,
    "xtick.labelsize": SMALL,
    "ytick.labelsize": SMALL,
    "mathtext.fontset": "custom",
    "mathtext.rm": FAMILY,
    "mathtext.it": f"{FAMILY}:italic",
    "mathtext.bf": f"{FAMILY}:bold",
    "mathtext.cal": FAMILY,
    "mathtext.sf": FAMILY,
    "mathtext.tt": FAMILY,
    # The text font has no dot for a dotted Q; STIX, the same design, comes with matplotlib.
    "mathtext.fallback": "stix",
    "svg.fonttype": "path",
    "svg.hashsalt": "calcpack",
    "text.hinting": "none",
    "axes.linewidth": 0.6,
    "axes.formatter.useoffset": False,
    "axes.unicode_minus": True,
    "xtick.direction": "in",
    "ytick.direction": "in",
    "xtick.top": True,
    "ytick.right": True,
    "xtick.major.size": 3.2,
    "ytick.major.size": 3.2,
    "xtick.minor.size": 1.8,
    "ytick.minor.size": 1.8,
    "xtick.major.width": 0.6,
    "ytick.major.width": 0.6,
    "xtick.minor.width": 0.4,
    "ytick.minor.width": 0.4,
    "grid.color": FAINT,
    "grid.linewidth": 0.4,
    "axes.axisbelow": True,
    "figure.constrained_layout.h_pad": 0.02,
    "figure.constrained_layout.w_pad": 0.02,
    "path.simplify": False,
}


def fonts_folder() -> Path:
    """Where the fonts lie: beside the package's modules in a wheel, at the root in the source tree."""
    package = Path(__file__).parents[1]
    for root in (package, package.parent):
        if (root / "templates" / "fonts").is_dir():
            return root / "templates" / "fonts"
    raise MissingPartError(
        Fault(
            "the fonts of the figures are not there",
            expected="templates/fonts",
            hint="install calcpack again",
        )
    )


@lru_cache(maxsize=1)
def _load_fonts() -> None:
    """Make the project's fonts known under a name of their own, so that no installed font stands in."""
    manager = font_manager.fontManager
    for style in ("Regular", "Italic", "Bold", "BoldItalic"):
        manager.addfont(fonts_folder() / f"STIXTwoText-{style}.ttf")
        manager.ttflist.append(replace(manager.ttflist[-1], name=FAMILY))


@contextmanager
def settings() -> Iterator[None]:
    """The figures' matplotlib settings, for the time of one drawing."""
    _load_fonts()
    with matplotlib.rc_context(_SETTINGS):
        yield


def page(width_mm: float, height_mm: float, layout: str = "none") -> Page:
    """An empty page of the printed size."""
    inches = (width_mm / 25.4, height_mm / 25.4)
    return Page(figsize=inches, dpi=72, layout=layout, facecolor="none")


def settle_layout(drawn: Page) -> None:
    """Fix where the axes lie, so that labels can be placed by points of the page."""
    engine = drawn.get_layout_engine()
    if engine is not None:
        engine.execute(drawn)
    drawn.set_layout_engine("none")


def svg_text(drawn: Page, title: str) -> str:
    """The page as SVG; no date, no random names, so equal pages give equal text."""
    buffer = io.StringIO()
    drawn.savefig(buffer, format="svg", metadata={"Date": None, "Creator": "calcpack", "Title": title})
    return buffer.getvalue()
