"""No method: only the engineer's own inputs and steps, so that any calculation can join a package."""
from __future__ import annotations

from calcpack.methods.method import Method
from calcpack.plan.plan import Plan


def lay(plan: Plan) -> None:
    """Nothing: the engineer's steps follow."""


METHOD = Method(
    name="none",
    title="The engineer's own steps",
    text="No arrangement is laid down; the steps are those that the spec states.",
    options=(), roles=lambda options: (), lay=lay, assumes=(), leaves_out=(), sketch="", results=lambda options: ())
