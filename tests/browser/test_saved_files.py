"""Review files at the page: built with one, loaded one, and a sheet that has moved since its marks."""
from __future__ import annotations

from pathlib import Path

from checker_hands import EXPECTED, begin, go_to, marked_steps, told, words
from chromium_client import ALT, Profile
from mixers_sheet import SPEC, build

from calcpack.pipeline import solve_spec
from calcpack.review.reading import read_review
from calcpack.review.writing import review_text


def test_marks_kept_by_the_browser_lapse_on_a_page_built_anew(
        tmp_path: Path, browser: Profile) -> None:
    spec = tmp_path / "mixers.yaml"
    spec.write_text(SPEC, "utf-8")
    tab = browser.open(build(spec, tmp_path / "site"))
    begin(tab)
    marked_steps(tab)
    spec.write_text(SPEC.replace("f_loss: {value: 0.08,", "f_loss: {value: 0.09,"), "utf-8")
    build(spec, tmp_path / "site")
    tab.reload()
    tab.press("r", modifiers=ALT)
    moved = {place: word for place, word in words(tab).items() if place in EXPECTED}
    behind_the_loss = {"step Q_all", "step P_mean", "step P_big", "step n_el", "step Q_day"}
    assert moved == EXPECTED | dict.fromkeys(behind_the_loss, "moved since")
    tab.js("window.scrollTo(0, 0)")
    go_to(tab, "step Q_all")
    seen = solve_spec(spec, {"f_loss": "0.08"}).data
    shown = next(one["shown"] for one in seen["steps"] if one["symbol"] == "Q_all")
    assert f"at {shown}" in tab.js("document.querySelector('[data-name=Q_all] .review-notes').textContent")


def test_marks_of_the_review_file_are_on_the_page_that_is_built_with_it(
        tmp_path: Path, browser: Profile) -> None:
    spec = tmp_path / "mixers.yaml"
    spec.write_text(SPEC, "utf-8")
    tab = browser.open(build(spec, tmp_path / "site"))
    begin(tab)
    marked_steps(tab)
    tab.press("s")
    saved = tab.downloaded().rename(tmp_path / "mixers.review.yaml")
    build(spec, tmp_path / "site")
    tab.reload()
    tab.press("r", modifiers=ALT)
    assert {place: word for place, word in words(tab).items() if word != "not checked"} == EXPECTED
    tab.press("Enter", "?")
    assert "keeps 0 marks beyond" in tab.js("document.querySelector('.review-kept').textContent")
    tab.press("Escape")
    go_to(tab, "step q_w")
    tab.press("a", "s")
    text = tab.downloaded().read_text("utf-8")
    assert text.startswith(saved.read_text("utf-8")) and "step: q_w" in text.removeprefix(saved.read_text("utf-8"))


BROKEN = {
    "not YAML": ("review: 1\nsheet: [", "it is not YAML"), "no review": ("a: 1\n", "no line 'review: 1'"),
    "another sheet": ("review: 1\nsheet: MT-141\n", "it is of sheet MT-141, this is MT-140"),
    "unknown key": ("review: 1\nsheet: MT-140\nmark: []\n", "unknown key 'mark'"),
    "the author's": ("review: 1\nsheet: MT-140\nmarks: [{step: m_w, revision: A, seen: x, verdict: agreed, "
                     "by: R Aldane, date: 2026-11-03}]\n", "a mark by R Aldane, who prepared revision A"),
    "no text": ("review: 1\nsheet: MT-140\nmarks: [{step: m_w, revision: A, seen: x, verdict: comment, by: S. Virta, "
                "date: 2026-11-03}]\n", "mark 1 has no text"),
    "no day": ("review: 1\nsheet: MT-140\nmarks: [{step: m_w, revision: A, seen: x, verdict: agreed, by: S. Virta, "
               "date: 2026-02-30}]\n", "2026-02-30"),
}


def test_a_file_that_is_no_review_of_this_sheet_changes_nothing(page: Path, browser: Profile, tmp_path: Path) -> None:
    tab = browser.open(page)
    begin(tab)
    for name, (text, why) in BROKEN.items():
        file = tmp_path / f"{name}.yaml"
        file.write_text(text, "utf-8")
        tab.choose(file, "l")
        assert "was not read" in told(tab) and why in told(tab), name
    assert set(words(tab).values()) == {"not checked"} and tab.complaints() == []


def test_a_file_edited_by_hand_is_read_as_the_command_reads_it(page: Path, browser: Profile, tmp_path: Path) -> None:
    seen = browser.open(page).js("document.querySelector('[data-name=m_w]').dataset.seen")
    file = tmp_path / "mixers.review.yaml"
    file.write_text(f"""\
review: 1
sheet: 'MT-140'
marks:
- {{step: m_w, revision: A, seen: '{seen}', shown: "1791 kg", verdict: agreed, by: S. Virta, date: 2026-11-03}}
- assumption: A1
  revision: A
  seen: yes
  verdict: comment
  by: S. Virta
  date: 2026-11-03
  text: |
    Is it full?
    It drips.
""", "utf-8")
    tab = browser.open(page)
    begin(tab)
    tab.choose(file, "l")
    tab.press("s")
    assert tab.downloaded().read_text("utf-8") == review_text(read_review(file))
