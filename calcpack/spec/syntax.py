"""Turn what the YAML library says of an unreadable text into one sentence and a place."""
from __future__ import annotations

import yaml

from calcpack.errors import Fault, Place
from calcpack.spec.source import Source

# (part of the library's text, our sentence, hint)
_SENTENCES: tuple[tuple[str, str, str | None], ...] = (
    ("mapping values are not allowed", "a colon does not belong here",
     "put a text that holds ': ' in quotes, and check the indentation"),
    ("could not find expected ':'", "a colon is missing after this key",
     "write 'key: value', with a space behind the colon"),
    ("did not find expected key", "a key does not stand where one is expected",
     "the keys of one mapping start in the same column"),
    ("did not find expected '-' indicator", "an entry does not stand where one is expected",
     "the entries of one list start with '- ' in the same column"),
    ("unknown escape character", "a backslash starts no known escape in double quotes",
     "use single quotes, or write the backslash twice"),
    ("invalid Unicode character escape", "an escape in double quotes gives no character", None),
    ("maximum nesting depth", "the text nests too deep", None),
    ("did not find expected node content", "a value is missing here", None),
    ("expected comment or line break", "nothing may follow the sign that starts a block of text",
     "start the text on the next line"),
    ("directive", "a line that starts with '%' has no meaning here", "leave it out"),
    ("while scanning an anchor", "an anchor is not allowed", "put a text that starts with '&' in quotes"),
    ("while scanning an alias", "an alias is not allowed", "put a text that starts with '*' in quotes"),
    ("while scanning a tag", "a tag is not allowed", "put a text that starts with '!' in quotes"),
    ("while parsing a tag", "a tag is not allowed", "put a text that starts with '!' in quotes"),
    ("did not find expected <document start>", "the text does not continue here",
     "the keys at the top start in the first column"),
)


def syntax_fault(error: yaml.YAMLError, source: Source) -> Fault:
    """The fault that ``error`` tells of; the library's text is its detail."""
    words = (getattr(error, "context", None), getattr(error, "problem", None))
    raw = ": ".join(part for part in words if part)
    problem = _place(getattr(error, "problem_mark", None), source)
    opening = _place(getattr(error, "context_mark", None), source)
    if "cannot start any token" in raw:
        return _bad_start(error, source, problem, raw)
    if "end of stream" in raw and "quoted" in raw:
        return Fault("the quote that opens here is never closed", opening, detail=raw)
    if "while parsing a flow" in raw and "node content" not in raw:
        return _open_bracket(problem, opening, raw)
    for part, what, hint in _SENTENCES:
        if part in raw:
            at = opening if part == "could not find expected ':'" else problem
            return Fault(what, at or opening, hint=hint, detail=raw)
    return Fault("the text cannot be read as YAML", problem or opening or Place(source.file, 1, 1),
                 detail=raw or str(error))


def _place(mark: yaml.Mark | None, source: Source) -> Place | None:
    return source.place(mark.index, mark.index + 1) if mark is not None else None


def _bad_start(error: yaml.MarkedYAMLError, source: Source, place: Place | None, raw: str) -> Fault:
    at = error.problem_mark.index
    letter = source.text[at:at + 1]
    if letter == "\t":
        return Fault("a tab stands where spaces must", place, hint="indent with spaces", detail=raw)
    return Fault(f"a value cannot start with {letter!r}", place, hint="put the value in quotes", detail=raw)


def _open_bracket(problem: Place | None, opening: Place | None, raw: str) -> Fault:
    sign = "}" if "mapping" in raw else "]"
    if problem is None or opening is None or problem.line != opening.line:
        return Fault("the bracket that opens here is never closed", opening, expected=repr(sign), detail=raw)
    return Fault(f"a comma or {sign!r} is missing here", problem, detail=raw)
