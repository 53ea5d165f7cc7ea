"""New marks and answers to the review file that holds them, or to the reason why they cannot be taken."""
from __future__ import annotations

import unicodedata
from collections.abc import Sequence
from dataclasses import dataclass, replace

from calcpack.errors import CommandError, Fault
from calcpack.review.marks import GONE, Answer, Mark, ReviewFile, same_person
from calcpack.review.naming import called
from calcpack.review.reading import MAX_TEXT, is_date
from calcpack.review.standing import AGREED, COMMENT, CORRECTED, Item, Standing
from calcpack.spec.source import UNSEEN

Named = Sequence[tuple[Item, bool]]
"""Items, each with whether it was named by itself."""


@dataclass(frozen=True, slots=True)
class Words:
    """Who says it, when, and what; the text may be empty where none is needed.

    Raises
    ------
    CommandError
        For a name without a letter, a day that is none, a character that cannot be seen.
    """

    by: str
    date: str
    text: str = ""

    def __post_init__(self) -> None:
        faults = []
        if not any(letter.isalpha() for letter in self.by):
            faults.append(Fault("the name is missing", found=repr(self.by) if self.by.strip() else None,
                                expected="--by NAME, such as --by 'S. Virta'"))
        if not is_date(self.date):
            faults.append(Fault(f"{self.date!r} is not a day of the calendar",
                                expected="year-month-day, such as 2026-03-31"))
        for what, text, most in (("name", self.by, 200), ("text", self.text, MAX_TEXT)):
            if UNSEEN.search(text) or (what == "name" and _unseen_in_name(text)):
                faults.append(Fault(f"the {what} holds a character that cannot be seen"))
            if len(text.strip()) > most:
                faults.append(Fault(f"the {what} is too long", expected=f"at most {most} characters"))
        if faults:
            raise CommandError(faults)


def _unseen_in_name(text: str) -> bool:
    """Whether a name holds what makes it look like another: a new line, or a sign without a shape."""
    return any(letter in "\r\n" or unicodedata.category(letter) == "Cf" for letter in text)


def marked(standing: Standing, named: Named, verdict: str, words: Words) -> ReviewFile:
    """The review file with a mark of ``verdict`` on each item; one that stands so already by the same name is left.

    Raises
    ------
    CommandError
        For a mark by the author, a missing text, or a comment that a range would close.
    """
    _require_checker(standing, words.by)
    if verdict != AGREED and not words.text.strip():
        raise CommandError(Fault(f"a mark with the verdict {verdict} needs a text",
                                 expected="--text TEXT, that says " + ("what is wrong or asked" if verdict == COMMENT
                                                                      else "what was wrong and has been put right")))
    closing = [item for item, alone in named if verdict != COMMENT and item.state == COMMENT and not alone]
    if closing:
        raise CommandError([Fault(f"{called(item)} has an open comment, which a range does not close",
                                  hint="name it by itself") for item in closing])
    new = [_mark(standing, item, verdict, words) for item, _ in named if not _stands(item, verdict, words)]
    return replace(standing.review, marks=(*standing.review.marks, *new))


def _stands(item: Item, verdict: str, words: Words) -> bool:
    """Whether an agreement holds already, by the same name."""
    return verdict == AGREED and item.mark is not None and item.state in (AGREED, CORRECTED) and \
        same_person(item.mark.by, words.by)


def _mark(standing: Standing, item: Item, verdict: str, words: Words) -> Mark:
    seen = item.target.identity if item.target is not None else GONE
    return Mark(item.kind, item.name, standing.revision, seen, item.shown, verdict, words.by.strip(), words.date,
                words.text.strip() or None)


def _require_checker(standing: Standing, name: str) -> None:
    author = next((one for one in standing.authors if same_person(one, name)), None)
    if author is not None:
        raise CommandError(Fault(f"{author} prepared revision {standing.revision} and cannot check it",
                                 found=f"--by {name!r}", expected="the name of another person"))


def answered(standing: Standing, named: Named, words: Words) -> ReviewFile:
    """The review file with an answer to the open comment on each item.

    Raises
    ------
    CommandError
        Where there is no comment to answer, or it has an answer already.
    """
    if not words.text.strip():
        raise CommandError(Fault("an answer needs a text", expected="--text TEXT"))
    faults = [fault for item, _ in named if (fault := _unanswerable(item, words)) is not None]
    if faults:
        raise CommandError(faults)
    answer = Answer(words.by.strip(), words.date, words.text.strip())
    chosen = [item.mark for item, _ in named]
    return replace(standing.review, marks=tuple(replace(one, answer=answer) if any(one is it for it in chosen) else one
                                                for one in standing.review.marks))


def _unanswerable(item: Item, words: Words) -> Fault | None:
    if item.mark is None or item.state != COMMENT:
        return Fault(f"{called(item)} has no open comment to answer")
    if item.mark.answer is not None:
        return Fault(f"the comment on {called(item)} has an answer already",
                     found=f"by {item.mark.answer.by}, {item.mark.answer.date}",
                     hint="the checker answers with a new comment, or closes it")
    if same_person(item.mark.by, words.by):
        return Fault(f"the comment on {called(item)} is {item.mark.by}'s own",
                     hint="close it with --agree or --correct")
    return None


def taken(standing: Standing, other: ReviewFile) -> ReviewFile:
    """The review file with the marks and answers of another that it has not got yet.

    The marks of a target stay in the order of their dates: a mark that is
    older than one that stands here goes before it.

    Raises
    ------
    CommandError
        For a mark by the author, two answers to one comment, or a signature, which is only made by signing.
    """
    for mark in other.marks:
        if mark.revision == standing.revision:
            _require_checker(standing, mark.by)
    strange = [one for one in other.signatures if one not in standing.review.signatures]
    if strange:
        raise CommandError([Fault(f"the file holds a signature that is not taken: {one.role}, {one.by}, {one.date}",
                                  hint="sign with 'calcpack review SPEC --sign ROLE --by NAME'") for one in strange])
    marks = list(standing.review.marks)
    for mark in other.marks:
        _take(marks, mark)
    return replace(standing.review, marks=tuple(marks))


def _take(marks: list[Mark], mark: Mark) -> None:
    bare = replace(mark, answer=None)
    for index, one in enumerate(marks):
        if replace(one, answer=None) == bare:
            if one.answer is not None and mark.answer is not None and one.answer != mark.answer:
                raise CommandError(Fault(f"the comment of {mark.date} on {mark.name} has two answers",
                                         found=f"by {one.answer.by}: {one.answer.text}",
                                         expected=f"by {mark.answer.by}: {mark.answer.text}"))
            marks[index] = replace(one, answer=one.answer or mark.answer)
            return
    later = (index for index, one in enumerate(marks) if one.key == mark.key and one.date > mark.date)
    marks.insert(next(later, len(marks)), mark)
