"""A fluid's designation to the address of its page."""
from __future__ import annotations

import hashlib
import re
from collections.abc import Sequence

from calcpack.record import Record

FOLDER = "fluids"
PLAIN = re.compile(r"[A-Za-z0-9.()-]{1,40}")
NOT_PLAIN = re.compile(r"[^A-Za-z0-9.-]+")


def fluid_page_name(designation: str) -> str:
    """The address of a fluid's page, relative to the site: 'R-1234ze(E)' is fluids/R-1234ze-E.html.

    A designation in other characters than those of the register has the
    beginning of its hash behind, so that no two share a page.
    """
    stem = NOT_PLAIN.sub("-", designation)[:40].strip("-.") or "fluid"
    if not PLAIN.fullmatch(designation):
        stem += "-" + hashlib.sha256(designation.encode()).hexdigest()[:8]
    return f"{FOLDER}/{stem}.html"


def register_fluids(records: Sequence[Record]) -> list[dict[str, str]]:
    """The fluids of a package with the addresses of their pages, for the register."""
    found = {one["designation"]: fluid_page_name(one["designation"])
             for record in records for one in (record.data["case"].get("fluids") or {}).values()}
    return [{"designation": name, "page": page}
            for name, page in sorted(found.items(), key=lambda one: one[0].casefold())]
