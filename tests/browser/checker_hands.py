"""What a checker's hands do at the page, and what the page shows of it."""
from __future__ import annotations

from chromium_client import ALT, CTRL, Tab
from mixers_sheet import STEPS

WORDS = """[...document.querySelectorAll("[data-kind]")].map((box) => [`${box.dataset.kind} ${box.dataset.name}`,
  document.getElementById(box.getAttribute("aria-describedby") ?? "")?.textContent ?? ""])"""
LETTERS = "jknacxwuslr?"


def words(tab: Tab) -> dict[str, str]:
    """The word beside each place."""
    return dict(tab.js(WORDS))


def told(tab: Tab) -> str:
    return tab.js("document.querySelector('.review-told').textContent")


def hand(tab: Tab) -> str:
    """The place that has the focus."""
    return tab.js("`${document.activeElement.dataset.kind} ${document.activeElement.dataset.name}`")


def begin(tab: Tab, name: str = "S. Virta") -> None:
    """Opens the desk and gives a name, by keys."""
    tab.press("r", modifiers=ALT)
    tab.write(name)
    tab.press("Enter")


def rename(tab: Tab, name: str) -> None:
    """Gives another name in the bar."""
    tab.js("document.querySelector('[name=by]').select()")
    tab.write(name)
    tab.press("Enter")


def go_to(tab: Tab, place: str) -> None:
    """Steps on to a place, by keys."""
    for _ in range(60):
        if hand(tab) == place:
            return
        tab.press("j")
    raise AssertionError(f"{place} is not reached")


def say(tab: Tab, key: str, text: str) -> None:
    """Opens the box for a text, writes it and keeps it."""
    tab.press(key)
    tab.write(text)
    tab.press("Enter", modifiers=CTRL)


def marked_steps(tab: Tab) -> None:
    """Ten steps marked, a comment and a correction among them."""
    go_to(tab, "step m_w")
    for symbol in STEPS[:10]:
        assert hand(tab) == f"step {symbol}"
        if symbol == "Q_l":
            say(tab, "c", "Is the lid counted?\nThe list: “8 %”, no reason.")
        elif symbol == "P_big":
            say(tab, "x", "The reserve was 15 K.")
        else:
            tab.press("a")
        tab.press("j")


EXPECTED = {f"step {symbol}": {"Q_l": "comment", "P_big": "corrected"}.get(symbol, "agreed") for symbol in STEPS[:10]}
