"""A comparison to the format that the command asks for."""
from __future__ import annotations

import json
from collections.abc import Callable, Mapping
from typing import Any

from calcpack.revisions.html import as_html
from calcpack.revisions.markdown import as_markdown
from calcpack.revisions.outline import outline
from calcpack.revisions.text import as_text


def rendered(comparison: Mapping[str, Any], shape: str) -> str:
    """The comparison as 'text', 'markdown', 'html' or 'json'; ends with a line end."""
    return FORMATS[shape](comparison)


def _json(comparison: Mapping[str, Any]) -> str:
    return json.dumps(comparison, ensure_ascii=False, indent=1, sort_keys=True, allow_nan=False) + "\n"


FORMATS: Mapping[str, Callable[[Mapping[str, Any]], str]] = {
    "text": lambda comparison: as_text(outline(comparison)),
    "markdown": lambda comparison: as_markdown(outline(comparison)),
    "html": lambda comparison: as_html(outline(comparison)),
    "json": _json,
}
