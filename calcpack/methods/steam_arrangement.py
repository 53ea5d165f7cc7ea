"""A steam plant's options to its arrangement: what follows what along the turbine and along the feedwater."""
from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from calcpack.errors import Fault, SpecError

WORD = r"(?:(?:open|closed-trap|closed-pump|process)(?:\+reheat)?|reheat)"
PATTERN = rf"none|{WORD}(?: {WORD})*"
PATTERN_TEXT = (
    "words from the highest pressure down, parted by blanks: open, closed-trap, closed-pump (one a heater), "
    "process, reheat; +reheat behind a word takes its steam from the line to that reheater; reheats that are not "
    "placed follow the first heaters, one each")


@dataclass(frozen=True, slots=True)
class Station:
    """A place along the expansion: steam is taken (``kind`` heater or process), or goes to a reheater, or both.

    ``index`` counts stations of a kind from 1, from the highest pressure down;
    ``reheat`` is the number of the reheat that follows here, or 0.
    """

    kind: str
    index: int
    reheat: int = 0

    @property
    def pressure(self) -> str:
        """The symbol of the pressure at the turbine."""
        return {"heater": f"p_x{self.index}", "process": "p_pr", "reheat": f"p_rh{self.index}"}[self.kind]

    @property
    def name(self) -> str:
        """What is fed here, in words."""
        return {"heater": f"heater {self.index}", "process": "the process",
                "reheat": f"reheater {self.index}"}[self.kind]


@dataclass(frozen=True, slots=True)
class Arrangement:
    """Stations along the turbine and the kinds of heater, both from the highest pressure down."""

    stations: tuple[Station, ...]
    heaters: tuple[str, ...]
    reheats: int
    process: bool

    def kind(self, heater: int) -> str:
        """The kind of heater ``heater``, counted from 1; 'condenser' below the last."""
        return self.heaters[heater - 1] if heater <= len(self.heaters) else "condenser"

    @property
    def opens(self) -> tuple[int, ...]:
        """The numbers of the open heaters."""
        return tuple(i for i, kind in enumerate(self.heaters, start=1) if kind == "open")

    @property
    def returns_to(self) -> int:
        """The open heater that takes the water returned by the process; 0 for the condenser's hotwell."""
        return self.opens[-1] if self.opens else 0

    def pump_above(self, place: int) -> int:
        """The number of the pump above open heater ``place`` (0: condenser), counted from the condenser up."""
        return 1 + sum(1 for heater in self.opens if heater >= place) if place else 1

    @property
    def pumps(self) -> int:
        """How many pumps stand in the feedwater line."""
        return 1 + len(self.opens)

    @property
    def only_pump(self) -> bool:
        """Whether the feed pump is the plant's only pump."""
        return not self.opens and "closed-pump" not in self.heaters

    def drains_into(self, heater: int) -> bool:
        """Whether the heater above traps its drains into this one (or into the condenser below the last)."""
        return heater > 1 and self.kind(heater - 1) == "closed-trap"

    def coupled(self, heater: int) -> bool:
        """Whether a heater pumps forward drains that it gets from above, so that both are found together."""
        return self.kind(heater) == "closed-pump" and self.drains_into(heater)


def arrangement(options: Mapping[str, str]) -> Arrangement:
    """The arrangement that ``options`` ask for.

    Where the words place no reheat, the first reheat follows the first heater,
    the second the second, and so on; where they do not place the process, it
    is fed behind the last reheat.

    Raises
    ------
    SpecError
        Where the words and the options ``reheats`` and ``process`` disagree.
    """
    words = [] if options["heaters"] == "none" else options["heaters"].split()
    reheats, process = int(options["reheats"]), options["process"] != "none"
    words = _placed(words, reheats, process)
    stations: list[Station] = []
    heaters: list[str] = []
    reheat = 0
    for word in words:
        taker, _, joined = word.partition("+")
        if word == "reheat" or joined:
            reheat += 1
        if taker == "reheat":
            stations.append(Station("reheat", reheat, reheat))
        elif taker == "process":
            stations.append(Station("process", 1, reheat if joined else 0))
        else:
            heaters.append(taker)
            stations.append(Station("heater", len(heaters), reheat if joined else 0))
    return Arrangement(tuple(stations), tuple(heaters), reheats, process)


def _placed(words: list[str], reheats: int, process: bool) -> list[str]:
    """The words with every reheat and the process at a place."""
    given = sum(word.endswith("reheat") for word in words)
    if given not in (0, reheats):
        raise SpecError(Fault(f"option heaters places {given} reheats, and option reheats asks for {reheats}",
                              hint="give the word reheat as often as there are reheats, or not at all"))
    fed = sum(word.startswith("process") for word in words)
    if fed > 1 or (fed and not process):
        raise SpecError(Fault(f"option heaters feeds a process {fed} times, and option process asks for "
                              f"{'one' if process else 'none'}",
                              hint="give the word process once, with option process"))
    if not given:
        for number in range(reheats):
            words = [*words[:2 * number + 1], "reheat", *words[2 * number + 1:]]
    if process and not fed:
        at = max((index for index, word in enumerate(words, start=1) if word.endswith("reheat")), default=0)
        words = [*words[:at], "process", *words[at:]]
    return words
