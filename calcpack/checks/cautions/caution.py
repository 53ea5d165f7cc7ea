"""The shape of a caution, and how far its threshold's source has been confirmed, in words."""
from __future__ import annotations

from dataclasses import asdict, dataclass
from typing import Any

DEFER = ("A reminder for the designer, not a design rule: the local codes in force and a licensed practitioner "
         "decide.")

TEXT = "from the text of the source"
SECOND_HAND = "second-hand, confirm against the edition in force"
MEMORY = "from memory, confirm against the edition in force"
COMPUTED = "computed with CoolProp"

OF_FACT = {"yes": TEXT, "derived": "derived from the source, confirm against the edition in force",
           "second-hand": SECOND_HAND, "no": MEMORY}
"""The register's marks in words."""

TRIGGERED, NOT_TRIGGERED, NOT_EVALUATED = "triggered", "not triggered", "not evaluated"


@dataclass(frozen=True, slots=True)
class Source:
    """Where a threshold is from, and how far that has been confirmed."""

    text: str
    confirmed: str


PRACTICE = Source("engineering practice", MEMORY)


@dataclass(frozen=True, slots=True)
class Caution:
    """One caution of the record; ``value`` and ``threshold`` are printed texts.

    ``working`` holds the formulas evaluated for it, a line each.
    """

    id: str
    hazard: str
    topic: str
    text: str
    value: str
    threshold: str
    source: str
    confirmed: str
    status: str
    reason: str
    working: str = ""
    defer: str = DEFER

    def entry(self) -> dict[str, Any]:
        """The caution as the record keeps it."""
        return asdict(self)


@dataclass(frozen=True, slots=True)
class Topic:
    """What a caution says whatever the numbers are."""

    id: str
    hazard: str
    topic: str
    text: str
    source: Source

    def evaluated(self, triggered: bool, value: str, threshold: str, reason: str = "", working: str = "") -> Caution:
        """The caution with its computed value beside its threshold."""
        return self._caution(value, threshold, TRIGGERED if triggered else NOT_TRIGGERED, reason, working)

    def not_evaluated(self, reason: str, threshold: str = "", working: str = "") -> Caution:
        """The caution where something that it needs is not on the sheet."""
        return self._caution("", threshold, NOT_EVALUATED, reason, working)

    def _caution(self, value: str, threshold: str, status: str, reason: str, working: str) -> Caution:
        return Caution(self.id, self.hazard, self.topic, self.text, value, threshold, self.source.text,
                       self.source.confirmed, status, reason, working)
