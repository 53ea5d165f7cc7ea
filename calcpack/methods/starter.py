"""A method to a commented spec that solves as it stands: every option, fluid and input, with typical values."""
from __future__ import annotations

from collections.abc import Mapping
from textwrap import wrap

from calcpack.errors import CommandError, Fault, nearest
from calcpack.methods import Method, methods
from calcpack.plan.facts import InputNeed
from calcpack.plan.plan import Plan

HEAD = """\
# A spec for calcpack. Every value below is typical practice, there to be replaced. As soon as the status is
# no longer draft, each value needs its source: {{value: 12 degC, source: R1}}; with a tolerance, tol: 1 K, the
# sheet works out the uncertainty of its results.
calcpack: 1
sheet:
  number: XX-001                 # unique in the package
  title: {title}
  project: Name of the works
  revision: A
  status: draft                  # draft, for-review, issued, superseded or void
  purpose: What the result is needed for.
  scope: What is calculated, and what is left out.
  p_atm: 1.01325 bar             # added to gauge pressures such as 7.5 bar(g)
  units: si                      # si or us
  page: A4                       # A4 or Letter
  # An issue also needs these:
  # date: 2026-03-31             # of this revision
  # grade: "2: independent check by a second engineer"
  # codes: ["Code and year, title"]
case:
  method: {name}
"""

TAIL = """\
assumptions:
  - id: A1
    text: The plant runs in steady state at the inputs above.
    basis: Engineering judgement.
    status: open                 # an open assumption is a hold, confirmed is none
    # effect: What changes if it does not hold.
    # owner: Who confirms it
    # due: 2026-03-31
# An issue also needs what follows; who checked and approved comes from the review file.
# references:
#   - {id: R1, text: "Title of the document, its revision or date, page"}
# revisions:
#   - {revision: A, date: 2026-03-31, note: First issue, by: A. Example}
# A limit of your own, as many as the case has:
# limits:
#   - {id: L1, symbol: SYMBOL, at_most: 90 degC, why: What happens beyond it., source: R1}
"""

OWN_STEPS = """\
  inputs:
    m_dot_water: 2.5 kg/s        # typical
    T_in: 15 degC                # typical
    T_out: 60 degC               # typical
    cp_water: 4.18 kJ/(kg·K)     # typical
steps:
  - symbol: Q_dot_water
    title: Heat to the water
    formula: m_dot_water * cp_water * (T_out - T_in)
    unit: kW
results: [Q_dot_water]
"""


def method_named(name: str) -> Method:
    """The method of that name.

    Raises
    ------
    CommandError
        With the nearest name.
    """
    known = methods()
    if name not in known:
        raise CommandError(Fault(f"there is no method {name!r}", expected="one of " + ", ".join(known),
                                 hint=nearest(name, known)))
    return known[name]


def chosen_options(method: Method, given: Mapping[str, str]) -> dict[str, str]:
    """All options, those of ``given`` checked."""
    for name, value in given.items():
        option = method.option(name)
        if option is None or not option.accepts(value):
            names = [one.name for one in method.options] if option is None else list(option.values)
            raise CommandError(Fault(f"{method.name} has no option {name}={value}",
                                     expected="one of " + ", ".join(names) if option is None else option.expected,
                                     hint=nearest(name if option is None else value, names)))
    return method.complete(given)


def needs_of(method: Method, options: Mapping[str, str]) -> dict[str, InputNeed]:
    """The inputs that a method takes with these options; no fluid is opened for that."""
    plan = Plan(options, {})
    method.lay(plan)
    return plan.needs


def starter(name: str, given: Mapping[str, str]) -> str:
    """The spec's text for the method ``name`` with the options ``given``."""
    method = method_named(name)
    options = chosen_options(method, given)
    text = HEAD.format(title=_scalar(method.title), name=method.name)
    if not method.options:
        return text + OWN_STEPS + TAIL
    text += "  options:\n" + "".join(_option(method, one, value) for one, value in options.items())
    roles = method.roles(options)
    if roles:
        text += "  fluids:\n" + "".join(_line(f"    {role.name}: {role.typical}", role.title) for role in roles)
    text += "  inputs:\n" + "".join(_input(need) for need in needs_of(method, options).values())
    return text + f"results: [{', '.join(method.results(options))}]\n" + TAIL


def _scalar(text: str) -> str:
    """A text as YAML reads it back: quoted where a colon would start a mapping."""
    return f'"{text}"' if ": " in text else text


def _line(text: str, comment: str) -> str:
    return f"{text:<34} # {comment}\n"


def _option(method: Method, name: str, value: str) -> str:
    option = method.option(name)
    others = ", ".join(one for one in option.values if one != value)
    more = "".join(f"    # {line}\n" for line in wrap(f"{name} takes one of the values below, or {option.pattern_text}",
                                                     width=100)) if option.pattern else ""
    return more + _line(f"    {name}: {value}", f"{option.title}; or {others}")


def _input(need: InputNeed) -> str:
    comment = f"{need.title}; typical" + (f", {need.default} if left out" if need.default else "")
    return _line(f"    {need.symbol}: {need.typical}", comment)
