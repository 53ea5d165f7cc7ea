"""``calcpack review``: how a sheet's check stands, and marks and signatures taken into its review file."""
from __future__ import annotations

import datetime
import json
import os
from collections.abc import Callable
from contextlib import nullcontext
from pathlib import Path
from typing import TYPE_CHECKING, Any

import click

from calcpack.commands.reporting import reported
from calcpack.errors import CommandError, Fault, SpecError

if TYPE_CHECKING:
    from calcpack.record import Record
    from calcpack.review.marks import ReviewFile
    from calcpack.review.standing import Standing

ROLES = ("prepared", "checked", "approved")


@click.command(short_help="How a sheet's check stands; take marks and signatures.")
@click.argument("spec", type=click.Path(path_type=Path))
@click.option("--all", "every", is_flag=True, help="List all marks, not only what is open.")
@click.option("--json", "as_json", is_flag=True, help="Print how the check stands as JSON.")
@click.option("--agree", multiple=True, metavar="TARGET", help="Mark as checked and agreed.")
@click.option("--comment", multiple=True, metavar="TARGET", help="Comment on it, with --text.")
@click.option("--correct", multiple=True, metavar="TARGET",
              help="Mark as put right and agreed as it is now; --text says what was wrong.")
@click.option("--answer", multiple=True, metavar="TARGET", help="Answer its open comment, with --text.")
@click.option("--sign", type=click.Choice(ROLES), help="Sign the sheet as it is.")
@click.option("--take", type=click.Path(path_type=Path), metavar="FILE",
              help="Take the marks of a review file that the sheet's page saved.")
@click.option("--by", metavar="NAME", help="Whose mark, answer or signature it is.")
@click.option("--text", metavar="TEXT", help="What a comment, a correction or an answer says.")
@click.option("--date", metavar="DATE", help="ISO date; today if left out.")
@reported
def review(spec: Path, every: bool, as_json: bool, **options: Any) -> int:
    """Show how the check of SPEC's sheet stands, or take marks into the review file beside it.

    A TARGET is a symbol (T_2), a step number (3.4), a range (3.1-3.9), the id of a limit or an assumption
    (L1, A1), figure:NAME, or kind:NAME where a name means two things. Several are parted by commas.

    Exit status 1 if anything is open: a comment, an item not checked or moved since, a signature.
    """
    from calcpack.issuing.placing import alone
    from calcpack.pipeline import solve_spec
    from calcpack.review.beside import standing_beside
    from calcpack.review.standing import standing
    action = _action(options)
    record = solve_spec(spec)
    # What stands is read and written in one hold: a mark that somebody else makes meanwhile is not lost.
    with alone(spec.parent, _tell) if action is not None else nullcontext():
        found = standing_beside(spec, record) or standing(record.data, None)
        if action is not None:
            _write(spec, record, found, action(record, found))
            return 0
    _print(spec, record, found, every, as_json)
    return 0 if found.complete else 1


def _tell(words: str) -> None:
    click.echo(words, err=True)


def _print(spec: Path, record: Record, found: Standing, every: bool, as_json: bool) -> None:
    from calcpack.review.telling import standing_data, standing_text
    from calcpack.review.writing import review_path
    path = review_path(spec)
    if as_json:
        click.echo(json.dumps(standing_data(found), indent=1, ensure_ascii=False))
    else:
        place = f"marks in {path}" if path.exists() else "no review file yet"
        click.echo(standing_text(found, record.data["sheet"]["title"], place, every=every), nl=False)


Action = Callable[["Record", "Standing"], "ReviewFile"]
_ACTIONS = ("agree", "comment", "correct", "answer", "sign", "take")
_NEEDS = {"agree": ("by",), "comment": ("by", "text"), "correct": ("by", "text"), "answer": ("by", "text"),
          "sign": ("by",), "take": ()}
_MAY = {"agree": ("text", "date"), "comment": ("date",), "correct": ("date",), "answer": ("date",),
        "sign": ("date",), "take": ()}


def _action(options: dict[str, Any]) -> Action | None:
    """What the options ask for; None where they only ask to see how the check stands.

    Raises
    ------
    CommandError
        For two things at once, and for options that are missing or mean nothing.
    """
    asked = [name for name in _ACTIONS if options[name]]
    given = [name for name in ("by", "text", "date") if options[name] is not None]
    if len(asked) > 1:
        raise CommandError(Fault("one thing at a time is taken", found=" and ".join(f"--{one}" for one in asked),
                                 hint="call it once for each"))
    if not asked:
        if given:
            raise CommandError(Fault(f"--{given[0]} says nothing without a mark",
                                     expected=", ".join(f"--{one}" for one in _ACTIONS)))
        return None
    name = asked[0]
    lacking = [one for one in _NEEDS[name] if one not in given]
    spare = [one for one in given if one not in (*_NEEDS[name], *_MAY[name])]
    if lacking or spare:
        raise CommandError([*(Fault(f"--{name} needs --{one}", expected=f"--{one} {one.upper()}") for one in lacking),
                            *(Fault(f"--{one} says nothing with --{name}") for one in spare)])
    return lambda record, found: _taken(name, options, record, found)


def _taken(name: str, options: dict[str, Any], record: Record, found: Standing) -> ReviewFile:
    from calcpack.review.naming import items_named
    from calcpack.review.reading import read_review
    from calcpack.review.signing import signed
    from calcpack.review.taking import Words, answered, marked, taken
    if name == "take":
        return taken(found, read_review(options["take"], number=record.number))
    text = (options["text"] or "").replace("\r\n", "\n").replace("\r", "\n")
    words = Words(options["by"], _day(options["date"]), text)
    if name == "sign":
        return signed(record.data, found, options["sign"], words)
    named = items_named(found, options[name])
    if name == "answer":
        return answered(found, named, words)
    return marked(found, named, {"agree": "agreed", "correct": "corrected"}.get(name, name), words)


def _day(text: str | None) -> str:
    """The day of a mark: today where none is given; not one to come, but for the clocks of other places."""
    today = datetime.date.today()
    if text is not None and text > (today + datetime.timedelta(days=1)).isoformat() and text[:1].isdigit():
        raise CommandError(Fault(f"{text!r} is a day to come", expected="the day on which the mark is made"))
    return text or today.isoformat()


def _write(spec: Path, record: Record, found: Standing, new: ReviewFile) -> None:
    """The review file whole, and a line on what was taken and what is open now."""
    from calcpack.review.reading import own_comments
    from calcpack.review.standing import standing
    from calcpack.review.telling import open_words
    from calcpack.review.writing import review_path, review_text
    from calcpack.writing import write_whole
    path = review_path(spec)
    if new == found.review:
        click.echo(f"nothing new for {path}. {open_words(found)}")
        return
    if path.exists() and not os.access(path, os.W_OK):
        raise CommandError(Fault(f"{path} is read-only", hint="its owner may have closed it: ask first"))
    if path.exists() and (lost := own_comments(path)):
        raise SpecError(lost)
    write_whole(path, review_text(new))
    click.echo(f"wrote {path}: {_difference(found.review, new)}. {open_words(standing(record.data, new))}")


def _difference(old: ReviewFile, new: ReviewFile) -> str:
    counts = ((len(new.marks) - len(old.marks), "mark", "marks"),
              (sum(one.answer is not None for one in new.marks) - sum(one.answer is not None for one in old.marks),
               "answer", "answers"),
              (len(new.signatures) - len(old.signatures), "signature", "signatures"))
    return ", ".join(f"{count} new {one if count == 1 else several}" for count, one, several in counts if count)
