"""What a plan says beside its steps: the limits of an input, in words."""
from __future__ import annotations

import pytest

from calcpack.plan.facts import InputNeed


@pytest.mark.parametrize(("limits", "words"), [
    ({}, ""), ({"low": "0 K"}, "from 0 K"), ({"low": "0 K", "low_open": True}, "above 0 K"),
    ({"high": "1.1"}, "up to 1.1"), ({"low": "0", "high": "0.5"}, "from 0 to 0.5"),
    ({"low": "0", "low_open": True, "high": "1"}, "above 0 to 1")])
def test_the_limits_of_an_input_are_told_in_words(limits, words):
    assert InputNeed("a", "number", "Input", "0.5", **limits).bounds == words
