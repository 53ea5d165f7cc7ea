"""What a method is: options, fluids it needs, and a function that lays its plan."""
from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass

from calcpack.plan.plan import Plan


@dataclass(frozen=True, slots=True)
class Option:
    """A choice that shapes the plan; ``values`` maps each value to its meaning, the first is the default.

    Where the values cannot all be listed, ``pattern`` is a regular expression
    for the further ones and ``pattern_text`` says in words what they are.
    """

    name: str
    title: str
    values: Mapping[str, str]
    pattern: str = ""
    pattern_text: str = ""

    @property
    def default(self) -> str:
        return next(iter(self.values))

    @property
    def expected(self) -> str:
        """What can be given, in words."""
        return "one of " + ", ".join(self.values) + (f"; or {self.pattern_text}" if self.pattern else "")

    def accepts(self, value: str) -> bool:
        """Whether ``value`` can be given."""
        return value in self.values or bool(self.pattern and re.fullmatch(self.pattern, value))

    def meaning(self, value: str) -> str:
        """What an accepted value means; the words of ``pattern_text`` for one that is not listed."""
        return self.values.get(value, self.pattern_text)


@dataclass(frozen=True, slots=True)
class Role:
    """A fluid that the method needs; ``typical`` is what `calcpack new` writes."""

    name: str
    title: str
    typical: str


@dataclass(frozen=True, slots=True)
class Method:
    """An arrangement that a spec can name.

    ``roles`` gives the fluids for given options; ``lay`` adds inputs, steps
    and facts to an empty plan, from its options alone. ``text``, ``assumes``
    and ``leaves_out`` are printed; ``sketch`` draws the arrangement in text.
    ``results`` are the symbols that `calcpack new` puts on the title page.
    """

    name: str
    title: str
    text: str
    options: tuple[Option, ...]
    roles: Callable[[Mapping[str, str]], tuple[Role, ...]]
    lay: Callable[[Plan], None]
    assumes: tuple[str, ...]
    leaves_out: tuple[str, ...]
    sketch: str
    results: Callable[[Mapping[str, str]], tuple[str, ...]]

    def option(self, name: str) -> Option | None:
        """The option of that name, or None."""
        return next((one for one in self.options if one.name == name), None)

    def complete(self, chosen: Mapping[str, str]) -> dict[str, str]:
        """Every option with its chosen value or its default."""
        return {one.name: chosen.get(one.name, one.default) for one in self.options}
