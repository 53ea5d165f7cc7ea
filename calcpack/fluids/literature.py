"""Turn a key of the property library's bibliography into a full citation.

The library ships its bibliography as BibTeX; the keys that it gives for each
equation of state resolve there.
"""
from __future__ import annotations

import re
import unicodedata
from functools import cache
from importlib.util import find_spec
from pathlib import Path

from calcpack.errors import Fault, MissingPartError

IF97 = ("IAPWS: Revised Release on the IAPWS Industrial Formulation 1997 for the Thermodynamic "
        "Properties of Water and Steam, IAPWS R7-97(2012)")
_BIBLIOGRAPHY = "CoolPropBibTeXLibrary.bib"
_COMBINING = {"`": "\u0300", "'": "\u0301", "^": "\u0302", "~": "\u0303", '"': "\u0308",
              "c": "\u0327", "r": "\u030a", "v": "\u030c"}
_LETTERS = {r"\AA": "Å", r"\aa": "å", r"\ss": "ß", r"\o": "ø", r"\O": "Ø", r"\ae": "æ", r"\l": "ł",
            r"\i": "ı", r"\&": "&", "~": " ", "---": "–", "--": "–"}
_ACCENT = re.compile(r"""\{?\\(?:([`'^~"])\s*\{?(\\?[A-Za-z])\}?|([crv])\s*\{(\\?[A-Za-z])\})\}?""")


def citation(keys: str) -> str:
    """The full citation of one key, or of several separated by commas.

    A key that the bibliography lacks is named as it is, so that nothing is
    passed over in silence; an empty text gives an empty text.
    """
    return "; ".join(_one(key.strip()) for key in keys.split(",") if key.strip())


def _one(key: str) -> str:
    entry = _entries().get(key)
    if entry is None:
        return f"{key} (key of the property library, no entry in its bibliography)"
    return _formatted(entry)


def _formatted(entry: dict[str, str]) -> str:
    authors = re.sub(r"\s+and\s+", ", ", entry.get("author", "")) or entry.get("organization", "")
    text = f"{authors}: {entry.get('title', '')}".rstrip(".") + "."
    where = next((entry[name] for name in ("journal", "booktitle", "publisher", "school",
                                           "institution", "note") if entry.get(name)), "")
    volume, year, pages = (entry.get(name, "") for name in ("volume", "year", "pages"))
    rest = " ".join(part for part in (where, volume, f"({year})" if year else "", pages) if part)
    doi = entry.get("doi", "").removeprefix("https://doi.org/").removeprefix("http://dx.doi.org/")
    parts = (text, rest + "." if rest else "", f"doi:{doi}" if doi else "")
    return " ".join(part for part in parts if part)


@cache
def _entries() -> dict[str, dict[str, str]]:
    text = _path().read_text(encoding="utf-8", errors="replace")
    found: dict[str, dict[str, str]] = {}
    for head in re.finditer(r"^@(\w+)\s*\{\s*([^,\s]+)\s*,", text, re.MULTILINE):
        body = _braced(text, text.index("{", head.start()))
        found[head[2]] = _fields(body[body.index(",") + 1:])
    return found


def _path() -> Path:
    library = find_spec("CoolProp")
    if library is None or library.origin is None:
        raise MissingPartError(Fault("the property library CoolProp is not installed",
                                     hint="python -m pip install CoolProp"))
    return Path(library.origin).parent / _BIBLIOGRAPHY


def _braced(text: str, start: int) -> str:
    """What stands between the brace at ``start`` and its partner."""
    depth = 0
    for position in range(start, len(text)):
        if text[position] == "{" and text[position - 1] != "\\":
            depth += 1
        elif text[position] == "}" and text[position - 1] != "\\":
            depth -= 1
            if depth == 0:
                return text[start + 1:position]
    return text[start + 1:]


def _fields(body: str) -> dict[str, str]:
    fields: dict[str, str] = {}
    position = 0
    while match := re.compile(r"\s*,?\s*(\w+)\s*=\s*").match(body, position):
        value, position = _value(body, match.end())
        fields[match[1].lower()] = _plain(value)
    return fields


def _value(body: str, start: int) -> tuple[str, int]:
    if body[start:start + 1] == "{":
        value = _braced(body, start)
        return value, start + len(value) + 2
    bare = re.compile(r'"([^"]*)"|([^,\s]*)').match(body, start)
    return bare[1] if bare[1] is not None else bare[2], bare.end()


def _plain(text: str) -> str:
    """BibTeX text without its braces and commands."""
    text = _ACCENT.sub(_accented, " ".join(text.split()))
    for command, letter in _LETTERS.items():
        ending = r"(?![A-Za-z])\s*" if command[-1].isalpha() else ""
        text = re.sub(re.escape(command) + ending, letter, text)
    text = re.sub(r"\\[A-Za-z]+\s*", "", text)
    return re.sub(r"[{}$\\]", "", text).strip()


def _accented(match: re.Match[str]) -> str:
    mark, letter = (match[1], match[2]) if match[1] else (match[3], match[4])
    return unicodedata.normalize("NFC", letter.lstrip("\\") + _COMBINING[mark])
