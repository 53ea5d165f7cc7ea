"""Every step that a method lays says what it stands on: a law, a definition, a document or a derivation."""
from __future__ import annotations

import re

from calcpack.methods.starter import chosen_options, method_named
from calcpack.plan.equipment import grounds
from calcpack.plan.plan import Plan

PAGE = re.compile(r"\b(pages?|pp?\.|clause|chapter|eq\.|equation \d)", re.IGNORECASE)


def steps_of(method, options):
    """The steps that a method lays; a plan hangs on options alone, so that no fluid is opened."""
    chosen = method_named(method)
    plan = Plan(chosen_options(chosen, options), {})
    chosen.lay(plan)
    return plan.steps


def test_each_step_but_a_property_names_its_ground(method, options):
    bare = [f"{step.symbol}: {step.title}" for step in steps_of(method, options)
            if step.kind != "property" and not step.reference]
    assert bare == []


def test_no_ground_repeats_the_title_or_recalls_a_page_unsaid(method, options):
    for step in steps_of(method, options):
        assert step.reference.strip().lower() != step.title.strip().lower(), step.symbol
        assert not PAGE.search(step.reference) or "from memory" in step.reference, step.reference


def test_the_shared_grounds_are_worded_once():
    texts = [text for name, text in vars(grounds).items() if name.isupper()]
    assert len(texts) == len(set(texts)) > 40
    assert all(text == text.strip() and not text.endswith(".") for text in texts)
