"""An issued PDF to a verdict: what it prints is what calcpack gives for the spec inside it, or where it is not.

The order: the file is whole; the files inside agree with each other; the
record's hash stands on the pages; the spec, solved again, gives the record;
the record, printed again, gives the pages; the seal is whole.
"""
from __future__ import annotations

import hashlib
from collections.abc import Callable, Sequence
from pathlib import Path

from calcpack.errors import CalcpackError
from calcpack.issuing.carried import CarriedSheet, NotVerifiableError, opened, read_carried
from calcpack.issuing.overlay import STAMP
from calcpack.issuing.paper import print_engine
from calcpack.issuing.seal_reading import Seal, read_seal
from calcpack.issuing.verify_again import AGAIN, Again
from calcpack.issuing.verify_against import against_stage
from calcpack.issuing.verify_check import check_stage
from calcpack.issuing.verify_drawings import drawings_stage
from calcpack.issuing.verify_objects import ATTACHED, active
from calcpack.issuing.verify_pages import compare_flow, compare_pages, counts, page_texts
from calcpack.issuing.verify_records import compare_records, made_with
from calcpack.issuing.verify_report import Difference, Report, Stage
from calcpack.record import Record

PACKER = "zlib"
"""The library that packs the parts of a PDF; another version gives other bytes for the same content."""


def verify(content: bytes, name: str, *, again: Again = AGAIN, against: str | None = None,
           trust: Sequence[Path] = ()) -> Report:
    """Verify an issued PDF.

    Parameters
    ----------
    content : bytes
        The PDF.
    name : str
        What the report calls it.
    again : Again
        How the spec is solved and the pages are made again.
    against : str, optional
        A spec's path, or ``REV:path`` in git, that the carried spec should be.
    trust : sequence of Path
        Certificates (PEM) whose seals are trusted.

    Raises
    ------
    CommandError
        For something wrong with ``against`` or ``trust``.
    MissingPartError
        Where the PDF engine, git or the library for seals is needed and missing.
    """
    try:
        carried = read_carried(content)
        texts = page_texts(content)
    except NotVerifiableError as error:
        return Report(name, "", (Stage("file", "cannot be verified", blocked=_words(error)),))
    seal = read_seal(content, trust)
    stages = [_file(content, carried), _attachments(carried), _printed_hashes(carried, texts)]
    stages += [] if carried.wrongs else [check_stage(carried)]
    stages += _again(content, carried, texts, seal, again)
    stages.append(seal.stage())
    if against is not None:
        stages.append(against_stage(carried, against))
    return Report(name, _title(carried.record), tuple(stages), carried.record)


def _title(record: Record) -> str:
    sheet, issue = record.data["sheet"], record.data["issue"]
    return f"{sheet['number']} revision {sheet['revision']}, issued {issue['kind']} {issue['date']}: {sheet['title']}"


def _words(error: CalcpackError) -> str:
    """The faults in one sentence each, without a full stop."""
    told = []
    for one in error.faults:
        found = f" (found {one.found})" if one.found else ""
        expected = f"; expected {one.expected}" if one.expected else ""
        told.append(f"{one.what}{found}{expected}" + (f"; {one.hint}" if one.hint else ""))
    return "; ".join(told)


def _file(content: bytes, carried: CarriedSheet) -> Stage:
    found = tuple(active(opened(content)))
    state = "IT HOLDS MORE THAN A SHEET DOES" if found else "nothing in it runs or lies over a page"
    return Stage("file", f"opens without repair: {_many(carried.pages, 'page')}, {_size(len(content))}; {state}", found)


def _attachments(carried: CarriedSheet) -> Stage:
    names = ", ".join(one.name for one in carried.files)
    state = "NOT AS LISTED" if carried.wrongs else "as the record lists them, by hash and checksum"
    return Stage("inside", f"{_many(len(carried.files), 'file')}, {state}: {names}", carried.wrongs)


def _printed_hashes(carried: CarriedSheet, texts: Sequence[str]) -> Stage:
    """Whether the pages print the hashes of the record and the spec that lie inside."""
    whole = "".join("".join(text.split()) for text in texts)
    record = hashlib.sha256(carried.content(carried.record_name)).hexdigest()
    hashes = {"record": record, "spec": carried.record.data["spec_sha256"]}
    wrongs = tuple(Difference("pages", f"the hash of the {name} inside is not printed on any page",
                              "another hash, or none", value)
                   for name, value in hashes.items() if value not in whole)
    return Stage("hashes", "those of record and spec " + ("stand on the pages" if not wrongs else
                                                          "DO NOT both stand on the pages"), wrongs)


def _again(content: bytes, carried: CarriedSheet, texts: Sequence[str], seal: Seal, again: Again) -> list[Stage]:
    """The spec solved again, the pages made again, and what they show."""
    if carried.wrongs:
        # Which of the files is the right one cannot be told, so there is nothing to set the pages against.
        return [Stage("solved again", "not done: the files inside do not agree with each other"),
                Stage("pages", "not made again, for the same reason")]
    try:
        here = again.solve(carried)
    except NotVerifiableError as error:
        return [Stage("solved again", "NO ANSWER", blocked=_words(error)),
                Stage("pages", "not made again: there is no record to make them from")]
    solved = _solved(carried, here)
    # Where only the last binary digits differ, the carried record is what was printed.
    record = here if solved.differences else carried.record
    try:
        made = again.make(record, carried.attachments())
    except NotVerifiableError as error:
        return [solved, Stage("pages", "COULD NOT BE MADE AGAIN", blocked=_words(error))]
    return [solved, *_pages(content, carried, texts, seal, made, bool(solved.differences))]


def _solved(carried: CarriedSheet, here: Record) -> Stage:
    compared = compare_records(carried.record.data, here.data)
    data = carried.record.data
    outcome = _outcome(len(compared.differences))
    words = (f"{_many(len(data['steps']), 'step')} from {_many(len(data['inputs']), 'input')}: "
             f"{_many(compared.numbers, 'number')} and {_many(compared.texts, 'text')}, {outcome}")
    return Stage("solved again", words, compared.differences, remarks=(*made_with(data, here.data), *_taken(data)))


def _taken(data: dict) -> list[str]:
    """What the record states and a single file cannot show again."""
    issue = data["issue"]
    named = {"comparison": "the comparison with the revision before", "verification": "the run of the published checks",
             "family": "what is said of other sheets and issues"}
    taken = [words for key, words in named.items() if issue.get(key)]
    told = [f"{'; '.join(taken)}: as the record states, not worked out again"] if taken else []
    return [*told, *(f"{one.get('symbol')} = {one.get('shown')} {one.get('unit')}: as the record states, taken from "
                     f"{one.get('source')}" for one in data["inputs"] if one.get("from"))]


def _pages(content: bytes, carried: CarriedSheet, texts: Sequence[str], seal: Seal, made: bytes,
           record_told: bool) -> list[Stage]:
    record = carried.record
    if words := _stamped(record, texts):
        return [Stage("pages", "NOT COMPARED: they carry the stamp of a superseded issue", blocked=words)]
    here = page_texts(made)
    words, numbers = counts(texts)
    figures = f"{_many(len(texts), 'page')} made again: {_many(words, 'word')}, {_spaced(numbers)} of them with digits"
    engines = _engines(record)
    found = compare_flow(texts, here) if engines else compare_pages(texts, here)
    if engines and found and _program_differs(record):
        version = record.data["engine"]["calcpack"]
        return [Stage("pages", f"{figures}; {len(found)} places are worded or laid out otherwise", remarks=engines,
                      blocked=f"the pages were made by calcpack {version}, which prints otherwise; "
                              "install that version to compare them")]
    pages = Stage("pages", f"{figures}, {_outcome(len(found))}", found)
    if engines:
        return [pages, Stage("drawings", "not compared: made by other versions than those here", remarks=(
            *engines, "with other versions of what makes the pages, text is compared and drawings are not"))]
    told = {one.where for one in found} | ({ATTACHED} if record_told else set())
    packed = _versions(record, lambda name: name == PACKER)
    return [pages, drawings_stage(content, seal, made, told, packed[0] if packed else "")]


def _stamped(record: Record, texts: Sequence[str]) -> str:
    """What to do about a copy that was stamped when a later revision was issued; empty for an issue itself."""
    if not all(STAMP in " ".join(text.split()) for text in texts):
        return ""
    return (f"this is the stamped copy of a superseded issue; the issue itself, {record.data['issue'].get('file')}, "
            "lies in the folder above and can be verified")


def _outcome(count: int) -> str:
    return "all the same" if not count else "1 PLACE DIFFERS" if count == 1 else f"{count} PLACES DIFFER"


def _engines(record: Record) -> tuple[str, ...]:
    """Which versions of what makes the pages were others at issue, as sentences."""
    told = _versions(record, lambda name: name != PACKER)
    return told or (("printed by another version of calcpack",) if _program_differs(record) else ())


def _versions(record: Record, wanted: Callable[[str], bool]) -> tuple[str, ...]:
    then, now = record.data["issue"].get("print") or {}, print_engine()
    return tuple(f"printed with {name} {then.get(name, '(not told)')}, here {now.get(name, '(not there)')}"
                 for name in sorted({*then, *now}) if wanted(name) and then.get(name) != now.get(name))


def _program_differs(record: Record) -> bool:
    from calcpack import __version__
    return record.data["engine"]["calcpack"] != __version__


def _many(count: int, noun: str) -> str:
    return f"{_spaced(count)} {noun}{'' if count == 1 else 's'}"


def _spaced(count: int) -> str:
    return f"{count:,}".replace(",", " ")


def _size(count: int) -> str:
    return f"{_spaced(round(count / 1000))} kB"
