"""Words, arrow heads, lines and numbered circles to ink at points of a page, and the room that words take."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from matplotlib.figure import Figure as Page
from matplotlib.font_manager import FontProperties
from matplotlib.lines import Line2D
from matplotlib.patches import Ellipse, Polygon
from matplotlib.text import Text
from matplotlib.textpath import TextPath
from matplotlib.transforms import IdentityTransform

from calcpack.figures.canvas import FAMILY, INK, SMALL

ROUND = 5.0
"""Radius of a state's circle [pt]."""


@dataclass(frozen=True, slots=True)
class Extent:
    """A text's ink box: width, and height above and depth below the baseline [pt]."""

    width: float
    height: float
    depth: float


@lru_cache(maxsize=2048)
def extent(text: str, size: float = SMALL) -> Extent:
    """How much room ``text`` (plain or mathtext) takes at ``size`` points; fonts as in :mod:`canvas`."""
    if not text.strip():
        return Extent(0.0, 0.0, 0.0)
    box = TextPath((0.0, 0.0), text, size=size, prop=FontProperties(family=FAMILY)).get_extents()
    return Extent(box.x1, box.y1, -box.y0)


def write(
    drawn: Page,
    x: float,
    y: float,
    text: str,
    *,
    size: float = SMALL,
    gid: str | None = None,
    turned: bool = False,
    ink: str = INK,
) -> Text:
    """``text`` with the middle of its letters at (x, y) [pt]; ``turned`` reads upwards."""
    # Centred by the height of a capital, not by each text's own ink, so that labels share a line.
    cap = extent("E", size).height
    across, along = (cap / 2.0, 0.0) if turned else (0.0, -cap / 2.0)
    made = drawn.text(
        x + across,
        y + along,
        text,
        size=size,
        ha="center",
        va="baseline",
        color=ink,
        transform=IdentityTransform(),
        rotation=90.0 if turned else 0.0,
        rotation_mode="anchor",
        zorder=6,
        gid=gid,
    )
    made.set_in_layout(False)
    return made


def arrow_head(
    drawn: Page, tip: Sequence[float], direction: Sequence[float], *, length: float = 5.0, ink: str = INK
) -> None:
    """A filled head with its point at ``tip`` [pt], along ``direction``."""
    way = np.asarray(direction, dtype=float)
    way = way / np.hypot(*way)
    back = np.asarray(tip, dtype=float) - way * length
    side = np.array([-way[1], way[0]]) * length * 0.36
    drawn.add_artist(
        Polygon(
            [tip, back + side, back + way * length * 0.18, back - side],
            closed=True,
            facecolor=ink,
            edgecolor="none",
            transform=IdentityTransform(),
            zorder=5,
        )
    )


def thin_line(drawn: Page, start: Sequence[float], end: Sequence[float], width: float) -> None:
    """A straight line of ``width`` points."""
    drawn.add_artist(
        Line2D(
            [start[0], end[0]],
            [start[1], end[1]],
            color=INK,
            linewidth=width,
            transform=IdentityTransform(),
            zorder=4,
        )
    )


def half_width(label: str) -> float:
    """Half the width of the circle that ``label`` needs [pt]."""
    return max(ROUND, extent(label).width / 2.0 + 2.0)


def circle(drawn: Page, x: float, y: float, label: str) -> None:
    """A white circle with a black rim, drawn out to an ellipse for a wide label, and the label in it."""
    drawn.add_artist(
        Ellipse(
            (x, y),
            2 * half_width(label),
            2 * ROUND,
            facecolor="white",
            edgecolor=INK,
            linewidth=0.6,
            transform=IdentityTransform(),
            zorder=5,
        )
    )
    write(drawn, x, y, label, gid=f"state-{label}")
