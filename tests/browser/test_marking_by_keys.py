"""The sheet's page at the hands of a checker: keys alone, in a real browser, from a file."""
from __future__ import annotations

import subprocess
from base64 import b64decode
from pathlib import Path

import pytest
from checker_hands import EXPECTED, LETTERS, begin, go_to, hand, marked_steps, rename, say, told, words
from chromium_client import ALT, Chromium, Profile, Tab
from mixers_sheet import STEPS

from calcpack.pipeline import solve_spec
from calcpack.review.reading import read_review
from calcpack.review.standing import standing
from calcpack.review.writing import review_text


def test_ten_steps_marked_by_keys_alone_outlive_a_reload_a_file_and_a_new_browser(
        spec: Path, page: Path, chromium: Chromium, browser: Profile, tmp_path: Path) -> None:
    tab = browser.open(page)
    begin(tab)
    marked_steps(tab)
    done = {place: "not checked" for place in words(tab)} | EXPECTED
    assert words(tab) == done
    assert "8 agreed · 1 corrected · 1 comment open · 0 moved since" in tab.js(
        "document.querySelector('.review-counts').textContent")
    tab.reload()
    assert "10 marks not saved" in tab.js("document.querySelector('.review-start').textContent")
    tab.press("r", modifiers=ALT)
    assert words(tab) == done
    assert "10 unsaved" in tab.js("document.querySelector('[data-act=save]').textContent")
    tab.press("Enter", "s")
    saved = tab.downloaded()
    assert saved.name == "mixers.review.yaml"
    assert "unsaved" not in tab.js("document.querySelector('[data-act=save]').textContent")
    assert tab.complaints() == []
    folder = page.parent.as_uri()
    assert {one for one in tab.addresses() if not one.startswith((folder, "blob:"))} == set()

    review = read_review(saved, number="MT-140")
    assert saved.read_text("utf-8") == review_text(review)
    assert [one.name for one in review.marks] == list(STEPS[:10]) and {one.by for one in review.marks} == {"S. Virta"}
    python = {f"{one.kind} {one.name}": one.state for one in standing(solve_spec(spec).data, review).items}
    assert {place: state for place, state in python.items() if state != "unmarked"} == EXPECTED

    with chromium.profile(tmp_path / "other") as other:
        new = other.open(page)
        begin(new, "S. Virta")
        assert set(words(new).values()) == {"not checked"}
        new.choose(saved, "l")
        assert "10 marks, 10 of them new here" in told(new)
        assert words(new) == done
        assert new.complaints() == []


def test_a_comment_gets_its_answer_from_the_author_and_stays_open(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    begin(tab)
    go_to(tab, "step Q_l")
    say(tab, "c", "Is the lid counted?")
    tab.press("w")
    assert "your own" in told(tab)
    rename(tab, "R. Aldane")
    say(tab, "w", "Yes, with the lid on.")
    assert words(tab)["step Q_l"] == "comment, answered"
    assert "Answer by R. Aldane" in tab.js("document.querySelector('[data-name=Q_l]').textContent")
    tab.press("s")
    [mark] = read_review(tab.downloaded()).marks
    assert (mark.verdict, mark.by, mark.answer.by, mark.answer.text) == (
        "comment", "S. Virta", "R. Aldane", "Yes, with the lid on.")
    tab.press("w")
    assert "has its answer" in told(tab)
    go_to(tab, "step Q_all")
    rename(tab, "S. Virta")
    say(tab, "c", "And the pipes?")
    rename(tab, "R. Aldane")
    say(tab, "w", "No.")
    assert words(tab)["step Q_all"] == "comment, answered"
    tab.press("u")
    assert words(tab)["step Q_all"] == "comment" and "Took back the answer" in told(tab)


@pytest.mark.parametrize("name", ["R. Aldane", "r aldane", "R.ALDANE"])
def test_the_author_checks_nothing(page: Path, browser: Profile, name: str) -> None:
    tab = browser.open(page)
    begin(tab, name)
    for key in "acx":
        go_to(tab, "limit L1")
        tab.press(key)
        assert "prepared this sheet; another person has to check it" in told(tab)
        assert tab.js("document.activeElement.name") == "by"
        tab.press("Enter")
    assert set(words(tab).values()) == {"not checked"}


def test_a_mark_needs_a_name(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    begin(tab, " . ")
    go_to(tab, "limit L1")
    tab.press("a")
    assert "Write your name first" in told(tab) and words(tab)["limit L1"] == "not checked"


def test_no_letter_is_a_key_until_the_desk_is_open_nor_while_a_text_is_written(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    before = tab.js("document.querySelector('main').outerHTML")
    tab.press(*LETTERS)
    assert tab.js("document.querySelector('main').outerHTML") == before
    assert not tab.js("document.body.classList.contains('reviewing')")
    begin(tab)
    go_to(tab, "step m_w")
    tab.press("c")
    tab.press(*LETTERS)
    assert tab.js("document.querySelector('#review-text').value") == LETTERS
    assert words(tab)["step m_w"] == "not checked"
    tab.press("Escape")
    assert hand(tab) == "step m_w" and words(tab)["step m_w"] == "not checked"
    tab.press("c")
    assert tab.js("document.querySelector('#review-text').value") == LETTERS, "the draft is kept"


def test_letters_can_be_switched_off_and_the_arrows_and_buttons_still_serve(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    begin(tab)
    go_to(tab, "step m_w")
    tab.press("?")
    assert tab.js("document.querySelector('dialog').open")
    tab.js("document.querySelector('[name=letters]').click()")
    tab.press("Escape")
    tab.press("a")
    assert words(tab)["step m_w"] == "not checked"
    tab.press("ArrowDown", modifiers=ALT)
    assert hand(tab) == "step dT_w"
    tab.press("ArrowUp", modifiers=ALT)
    assert hand(tab) == "step m_w"
    tab.js("document.querySelector('[data-act=agree]').focus()")
    tab.press("Enter")
    assert words(tab)["step m_w"] == "agreed"


def test_the_last_unsaved_mark_is_taken_back_and_a_saved_one_is_history(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    begin(tab)
    go_to(tab, "step m_w")
    tab.press("a", "s")
    tab.downloaded()
    tab.press("u")
    assert words(tab)["step m_w"] == "agreed" and "Nothing unsaved" in told(tab)
    say(tab, "c", "On second thoughts.")
    assert words(tab)["step m_w"] == "comment"
    tab.press("u")
    assert words(tab)["step m_w"] == "agreed" and "Took back your mark" in told(tab)


def test_next_open_goes_round_what_is_not_checked(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    begin(tab)
    go_to(tab, "input V_tank")
    tab.press("a", "j", "a", "k", "k")
    assert hand(tab) == "limit L1"
    tab.press("n")
    assert hand(tab) == "input T_warm"
    tab.js("document.querySelectorAll('[data-kind]')[document.querySelectorAll('[data-kind]').length - 1].focus()")
    tab.press("n")
    assert hand(tab) == "limit L1"


def test_every_place_at_hand_is_seen_above_the_bar(page: Path, browser: Profile) -> None:
    for width, height in ((1280, 800), (390, 844)):
        tab = browser.open(page, width, height)
        begin(tab)
        tab.js("document.querySelector('[data-kind]').focus()")
        for _ in range(len(words(tab)) - 1):
            top, bottom, bar = tab.js(
                "[document.activeElement.getBoundingClientRect().top, document.activeElement.getBoundingClientRect()."
                "bottom, document.querySelector('.review-bar').getBoundingClientRect().top]")
            assert top >= 0 and bottom <= bar, hand(tab)
            assert tab.js("getComputedStyle(document.activeElement).outlineStyle") == "solid"
            tab.press("j")


def test_the_desk_is_not_printed(page: Path, browser: Profile, tmp_path: Path) -> None:
    def paper(tab: Tab) -> list[bytes]:
        """The pages as pictures."""
        (tmp_path / "paper.pdf").write_bytes(b64decode(tab.send("Page.printToPDF")["data"]))
        subprocess.run(["pdftoppm", "-r", "50", "-png", str(tmp_path / "paper.pdf"), str(tmp_path / "paper")],
                       check=True)
        return [one.read_bytes() for one in sorted(tmp_path.glob("paper-*.png"))]

    tab = browser.open(page)
    paper(tab)  # fonts that print alone needs are read by now
    before = paper(tab)
    assert len(before) > 2
    begin(tab)
    marked_steps(tab)
    tab.press("c")
    assert "Is the lid counted" in tab.js("document.body.innerText")
    assert paper(tab) == before
    tab.press("Escape")
    assert hand(tab) == "step q_w" and paper(tab) == before


def test_two_windows_of_one_sheet_share_their_marks(page: Path, browser: Profile) -> None:
    one, other = browser.open(page), browser.open(page)
    begin(one)
    other.press("r", modifiers=ALT)
    go_to(one, "step m_w")
    one.press("a")
    other.await_true("document.querySelector('[data-name=m_w]').dataset.state === 'agreed'")
    go_to(other, "step Q_w")
    other.press("a", "s")
    assert [mark.name for mark in read_review(other.downloaded()).marks] == ["m_w", "Q_w"]
    one.await_true("!document.querySelector('[data-act=save]').textContent.includes('unsaved')")


def test_a_browser_that_keeps_nothing_says_so_and_saves_still(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    tab.send("Page.addScriptToEvaluateOnNewDocument",
             source="Storage.prototype.setItem = () => { throw new Error('full'); }")
    tab.reload()
    begin(tab)
    assert "This browser keeps no marks: save before you leave" in told(tab)
    go_to(tab, "step m_w")
    tab.press("a", "s")
    assert [mark.by for mark in read_review(tab.downloaded()).marks] == ["S. Virta"]


def test_marks_kept_by_the_browser_are_forgotten_on_demand(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    begin(tab)
    go_to(tab, "step m_w")
    tab.press("a", "?")
    tab.js("document.querySelector('.review-forget').click()")
    assert set(words(tab).values()) == {"not checked"}
    tab.press("s")
    assert "no mark to save" in told(tab)


def test_the_page_cannot_send_anything(page: Path, browser: Profile) -> None:
    tab = browser.open(page)
    assert tab.js("fetch('assets/styles/sheet.css').then(() => 'sent', () => 'refused')") == "refused"
    assert any("Content Security Policy" in str(one) for one in tab.complaints())
