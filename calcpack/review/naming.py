"""What an engineer writes for a target, such as ``T_2``, ``3.4``, ``3.1-3.9``, ``figure:t-s``, to the items meant."""
from __future__ import annotations

from collections.abc import Sequence

from calcpack.errors import CommandError, Fault, nearest
from calcpack.review.standing import Item, Standing
from calcpack.review.targets import KINDS

EXAMPLES = "a symbol, a step number, a range such as 3.1-3.9, or an id, such as L1"


def items_named(standing: Standing, texts: Sequence[str]) -> tuple[tuple[Item, bool], ...]:
    """The items that the texts mean, each once, in the order written, and whether it was named by itself.

    A text may hold several targets with commas between them.

    Raises
    ------
    CommandError
        With a fault for each text that means nothing, or more than one thing.
    """
    found: dict[tuple[str, str], tuple[Item, bool]] = {}
    faults: list[Fault] = []
    for text in (part.strip() for one in texts for part in one.split(",")):
        try:
            items = _meant(standing, text)
        except CommandError as error:
            faults += error.faults
            continue
        for one in items:
            alone = len(items) == 1 or found.get((one.kind, one.name), (one, False))[1]
            found[one.kind, one.name] = one, alone
    if faults:
        raise CommandError(faults)
    return tuple(found.values())


def called(item: Item) -> str:
    """What an item is called in a sentence: step number and symbol, or the name."""
    return f"{item.target.number} {item.name}" if item.target is not None and item.target.number else item.name


def _meant(standing: Standing, text: str) -> tuple[Item, ...]:
    kind, colon, name = text.partition(":")
    if colon and kind not in KINDS:
        raise CommandError(Fault(f"{kind!r} in {text!r} is no kind of target", expected="one of " + ", ".join(KINDS),
                                 hint=nearest(kind, KINDS)))
    sought = [one for one in (*standing.items, *standing.gone) if not colon or one.kind == kind]
    wanted = name.strip() if colon else text
    exact = [one for one in sought if _is_called(one, wanted)]
    if len(exact) > 1:
        forms = " or ".join(f"{one.kind}:{one.name}" for one in exact)
        raise CommandError(Fault(f"{wanted!r} means more than one thing on the sheet", expected=forms))
    return tuple(exact) or _range(sought, wanted) or _unknown(sought, text, wanted)


def _is_called(item: Item, name: str) -> bool:
    return bool(name) and (item.name == name or (item.target is not None and item.target.number == name))


def _range(sought: Sequence[Item], text: str) -> tuple[Item, ...]:
    """The items from one to another of the same kind; an id may hold a hyphen itself, so each is tried."""
    for at in (index for index, letter in enumerate(text) if letter in "-–"):
        first, last = text[:at].strip(), text[at + 1:].strip()
        for kind in KINDS:
            row = [one for one in sought if one.kind == kind and one.target is not None]
            ends = [[index for index, one in enumerate(row) if _is_called(one, name)] for name in (first, last)]
            if all(ends):
                if ends[0][0] > ends[1][0]:
                    raise CommandError(Fault(f"the range {text!r} ends before it begins", expected=f"{last}-{first}"))
                return tuple(row[ends[0][0]:ends[1][0] + 1])
    return ()


def _unknown(sought: Sequence[Item], text: str, name: str) -> tuple[Item, ...]:
    known = [one.name for one in sought] + [one.target.number for one in sought if one.target and one.target.number]
    raise CommandError(Fault(f"there is nothing called {text!r} on the sheet", expected=EXAMPLES,
                             hint=nearest(name, known)))
