"""A page done again from its print: a wrong digit is found wherever a result stands."""
from __future__ import annotations

import random
import re
from collections import Counter

import pytest
from mutations import KINDS, Place, changed, places

from calcpack.reread.from_print import BrokenPrintError, redo, require, require_same

SEED = 20261201
COUNT = 200


def test_every_example_page_agrees_with_itself(example_pages: dict[str, str]) -> None:
    for name, html in example_pages.items():
        done = redo(html)
        assert done.steps > 5 and len(done.findings) >= done.steps, name
        assert not done.wrong, f"{name}: {done.wrong[0]}"
        assert not done.not_followed, name
        # Each result is found anew from the printed inputs alone, in the printed digits.
        assert len(done.whole) >= done.steps
        assert max(one.places for one in done.whole) <= 1.0


def test_a_changed_digit_of_a_printed_result_is_found_in_each_of_200_places(example_pages: dict[str, str]) -> None:
    chance = random.Random(SEED)
    by_kind: dict[str, list] = {kind: [] for kind in KINDS}
    for name, html in example_pages.items():
        for place in places(html):
            by_kind[place.kind].append((name, place))
    assert all(by_kind.values()), {kind: len(found) for kind, found in by_kind.items()}
    # Some of every kind, however rare; the rest wherever results stand.
    chosen = [one for found in by_kind.values() for one in chance.sample(found, min(12, len(found)))]
    rest = [one for found in by_kind.values() for one in found if one not in chosen]
    chosen += chance.sample(rest, COUNT - len(chosen))
    missed, kinds = [], Counter()
    for name, place in chosen:
        html = example_pages[name]
        digit = chance.choice([one for one in "0123456789" if one != html[place.at]])
        if redo(changed(html, place, digit)).wrong:
            kinds[place.kind] += 1
        else:
            missed.append((name, place, html[place.at - 60:place.at + 20], digit))
    assert len(chosen) == COUNT
    assert not missed, f"{len(missed)} of {COUNT} not found: {missed[:5]}"
    assert set(kinds) == set(KINDS)


def test_a_changed_operand_is_found_even_where_the_result_does_not_feel_it(example_pages: dict[str, str]) -> None:
    page = example_pages["kiln-exhaust-engine"]
    row = re.search(r"<div>= min\((\d)[\d.]+\u202fkJ/kg, (\d)[\d.]+\u202fkJ/kg\)</div>", page)
    assert row is not None
    first, second = (float(number) for number in re.findall(r"[\d.]+(?=\u202f)", row[0]))
    # The greater operand of a minimum, made greater still.
    at = row.start(1) if first > second else row.start(2)
    wrong = redo(changed(page, Place("operand", at), "9")).wrong
    assert [one.what for one in wrong] == ["the numbers of h_cv"]


def test_the_step_is_named(example_pages: dict[str, str]) -> None:
    html = example_pages["process-water-heat-pump"]
    at = html.index("<b>", html.index('class="equation"', html.index('id="step-1.1"'))) + 3
    with pytest.raises(BrokenPrintError) as caught:
        require(changed(html, Place("result", at), "7"), "MT-103")
    assert caught.value.exit_status == 3
    assert "MT-103: step 1.1: h_source,in" in caught.value.faults[0].what


@pytest.mark.parametrize(("old", "new"), [
    ("<dd>IAPWS-95,", "<dd>IAPWS-94,"),                              # the model printed of a fluid
    ("(38.00 °C)", "(83.00 °C)"),                                    # a temperature in brackets
    ("38 degC", "37 degC"),                                          # an input as written
    ('<span class="holds">holds</span>', '<span class="holds">fails</span>'),    # the verdict of a limit
    ("221.15\u202fK", "231.15\u202fK"),                              # an end of a bracket
])
def test_other_print_is_looked_at_too(example_pages: dict[str, str], old: str, new: str) -> None:
    html = example_pages["process-water-heat-pump"]
    assert old in html
    assert redo(html.replace(old, new)).wrong


def test_the_reader_knows_no_record() -> None:
    """Nothing of the room reads a record, a plan or a solution."""
    from pathlib import Path

    import calcpack.reread
    for path in Path(calcpack.reread.__file__).parent.glob("*.py"):
        text = path.read_text("utf-8")
        assert not re.search(r"calcpack\.(record|plan|solving|checks|methods|formula\.(parse|evaluate|tree))", text)


def test_two_pages_of_one_sheet_must_print_the_same(example_pages: dict[str, str]) -> None:
    html = example_pages["process-water-heat-pump"]
    require_same(html, [html], "MT-103")
    with pytest.raises(BrokenPrintError):
        require_same(html, [changed(html, places(html)[0], "0" if html[places(html)[0].at] != "0" else "1")], "MT-103")
