"""Headless Chromium driven over its debugging pipe: pages opened, keys pressed, what came of it read back."""
from __future__ import annotations

import base64
import fcntl
import json
import os
import selectors
import shutil
import subprocess
import sys
import time
from pathlib import Path
from types import TracebackType
from typing import Any

FLAGS = ("--headless=new", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-sync",
         "--disable-background-networking", "--disable-component-update", "--disable-default-apps",
         "--disable-extensions", "--no-default-browser-check", "--password-store=basic", "--remote-debugging-pipe")
# Chromium reads from file descriptor 3 and writes to 4; a child of ours may have other numbers free.
LAUNCH = """import os, sys
os.dup2(int(sys.argv[1]), 3)
os.dup2(int(sys.argv[2]), 4)
os.execvp(sys.argv[3], sys.argv[3:])"""
PATIENCE_S = 60.0
CODES = {"Enter": 13, "Escape": 27, "Tab": 9, "ArrowUp": 38, "ArrowDown": 40, " ": 32}
ALT, CTRL, SHIFT = 1, 2, 8


class Chromium:
    """A browser process; ended at the end of a ``with``."""

    def __init__(self, folder: Path) -> None:
        program = shutil.which("chromium")
        assert program is not None, "chromium is not installed; '.ci/prepare test' installs it"
        folder.mkdir(parents=True, exist_ok=True)
        theirs_in, ours_out = _high_pipe()
        ours_in, theirs_out = _high_pipe()
        self._log = (folder / "chromium.log").open("ab")
        self._process = subprocess.Popen(
            [sys.executable, "-c", LAUNCH, str(theirs_in), str(theirs_out), program, *FLAGS,
             f"--user-data-dir={folder / 'profile'}", "about:blank"],
            pass_fds=(theirs_in, theirs_out), stdin=subprocess.DEVNULL, stdout=self._log, stderr=self._log)
        os.close(theirs_in)
        os.close(theirs_out)
        self._in, self._out = ours_in, ours_out
        self._selector = selectors.DefaultSelector()
        self._selector.register(self._in, selectors.EVENT_READ)
        self._rest, self._number = b"", 0
        self.events: list[dict[str, Any]] = []

    def __enter__(self) -> Chromium:
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None,
                 where: TracebackType | None) -> None:
        self.close()

    def close(self) -> None:
        """Ends the browser that was started here, and it alone."""
        try:
            self.send("Browser.close")
            self._process.wait(15)
        except (OSError, AssertionError, subprocess.TimeoutExpired):
            self._process.kill()
            self._process.wait()
        self._selector.close()
        for end in (self._in, self._out):
            os.close(end)
        self._log.close()

    def send(self, method: str, session: str | None = None, **params: Any) -> dict[str, Any]:
        """The result of a command; events that come meanwhile are kept."""
        self._number += 1
        message = {"id": self._number, "method": method, "params": params} | ({"sessionId": session} if session else {})
        os.write(self._out, json.dumps(message).encode() + b"\0")
        while True:
            got = self._next()
            if got.get("id") == self._number:
                assert "error" not in got, f"{method}: {got['error']}"
                return got["result"]
            self.events.append(got)

    def await_event(self, method: str, session: str | None = None, **wanted: Any) -> dict[str, Any]:
        """The first event of a kind with these parameters, come or yet to come; it is taken."""
        while True:
            for index, one in enumerate(self.events):
                if (one.get("method"), one.get("sessionId")) == (method, session) and \
                        wanted.items() <= one["params"].items():
                    return self.events.pop(index)["params"]
            self.events.append(self._next())

    def _next(self) -> dict[str, Any]:
        end = time.monotonic() + PATIENCE_S
        while b"\0" not in self._rest:
            assert self._selector.select(max(0.0, end - time.monotonic())), "chromium does not answer"
            read = os.read(self._in, 1 << 20)
            assert read, "chromium has gone"
            self._rest += read
        first, self._rest = self._rest.split(b"\0", 1)
        return json.loads(first)

    def profile(self, downloads: Path) -> Profile:
        """A profile that nobody has used; what it saves goes to a folder."""
        return Profile(self, downloads)


class Profile:
    """A browser's storage and windows, apart from those of other profiles; gone at the end of a ``with``."""

    def __init__(self, browser: Chromium, downloads: Path) -> None:
        self.browser, self.downloads = browser, downloads
        downloads.mkdir(parents=True, exist_ok=True)
        self._context = browser.send("Target.createBrowserContext")["browserContextId"]
        browser.send("Browser.setDownloadBehavior", behavior="allow", browserContextId=self._context,
                     downloadPath=str(downloads), eventsEnabled=True)

    def __enter__(self) -> Profile:
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None,
                 where: TracebackType | None) -> None:
        self.browser.send("Target.disposeBrowserContext", browserContextId=self._context)
        self.browser.events.clear()

    def open(self, page: Path, width: int = 1280, height: int = 900) -> Tab:
        """A tab with a page from a file, once it has loaded."""
        target = self.browser.send("Target.createTarget", url="about:blank", browserContextId=self._context)["targetId"]
        return Tab(self, target, page.resolve().as_uri(), width, height)


def _high_pipe() -> tuple[int, int]:
    """A pipe whose ends have numbers that no launch gives away."""
    low = os.pipe()
    high = tuple(fcntl.fcntl(one, fcntl.F_DUPFD_CLOEXEC, 20) for one in low)
    for one in low:
        os.close(one)
    return high


class Tab:
    """A page in the browser; what it asks of the network and complains of is kept by the browser's events."""

    def __init__(self, profile: Profile, target: str, address: str, width: int, height: int) -> None:
        self.browser, self.profile = profile.browser, profile
        self._session = self.browser.send("Target.attachToTarget", targetId=target, flatten=True)["sessionId"]
        for domain in ("Page", "Runtime", "Network", "Log"):
            self.send(f"{domain}.enable")
        self.send("Emulation.setDeviceMetricsOverride", width=width, height=height, deviceScaleFactor=1, mobile=False)
        # Keys reach a window that is not in front too, whichever was opened last.
        self.send("Emulation.setFocusEmulationEnabled", enabled=True)
        self.send("Page.navigate", url=address)
        self._await("Page.loadEventFired")

    def send(self, method: str, **params: Any) -> dict[str, Any]:
        """A command to this page."""
        return self.browser.send(method, self._session, **params)

    def _await(self, method: str) -> dict[str, Any]:
        return self.browser.await_event(method, self._session)

    def reload(self) -> None:
        """Loads the page again, from the file as it is now."""
        self.send("Page.reload")
        self._await("Page.loadEventFired")

    def js(self, expression: str) -> Any:
        """The value of an expression in the page; a promise is awaited."""
        got = self.send("Runtime.evaluate", expression=expression, returnByValue=True, awaitPromise=True)
        assert "exceptionDetails" not in got, got["exceptionDetails"]
        return got["result"].get("value")

    def await_true(self, expression: str) -> None:
        """Waits until an expression holds in the page."""
        assert self.js(f"""new Promise((done) => {{
          const end = Date.now() + {PATIENCE_S * 500};
          const look = () => ({expression}) ? done(true) : Date.now() > end ? done(false) : setTimeout(look, 20);
          look();
        }})"""), f"never true: {expression}"

    def press(self, *keys: str, modifiers: int = 0) -> None:
        """Presses keys one by one: letters, or names such as 'Enter'."""
        for key in keys:
            letter = len(key) == 1
            code = CODES.get(key) or ord(key.upper())
            given = {"key": key, "windowsVirtualKeyCode": code, "modifiers": modifiers,
                     "code": f"Key{key.upper()}" if key.isalpha() and letter else key}
            text = {"text": "\r" if key == "Enter" else key} if (letter or key == "Enter") and not modifiers else {}
            self.send("Input.dispatchKeyEvent", type="keyDown" if text else "rawKeyDown", **given, **text)
            self.send("Input.dispatchKeyEvent", type="keyUp", **given)

    def write(self, text: str) -> None:
        """Writes a text where the caret is."""
        self.send("Input.insertText", text=text)

    def downloaded(self) -> Path:
        """The file that the page has just saved, once it is whole."""
        name = self.browser.await_event("Browser.downloadWillBegin")["suggestedFilename"]
        self.browser.await_event("Browser.downloadProgress", state="completed")
        return self.profile.downloads / name

    def choose(self, file: Path, *keys: str) -> None:
        """Presses keys that open the choice of a file, and chooses one."""
        self.send("Page.setInterceptFileChooserDialog", enabled=True)
        self.press(*keys)
        node = self._await("Page.fileChooserOpened")["backendNodeId"]
        self.send("DOM.setFileInputFiles", files=[str(file)], backendNodeId=node)
        self.await_true(f"document.querySelector('.review-told').textContent.includes({json.dumps(file.name)})")

    def picture(self, path: Path) -> None:
        """A picture of the window."""
        path.write_bytes(base64.b64decode(self.send("Page.captureScreenshot")["data"]))

    def complaints(self) -> list[Any]:
        """Exceptions, console errors and log entries of level error so far."""
        found = []
        for one in self._events():
            method, params = one["method"], one["params"]
            if method == "Runtime.exceptionThrown" or \
                    (method == "Runtime.consoleAPICalled" and params["type"] in ("error", "warning", "assert")) or \
                    (method == "Log.entryAdded" and params["entry"]["level"] in ("error", "warning")):
                found.append(params)
        return found

    def addresses(self) -> set[str]:
        """What the page has asked for so far."""
        return {one["params"]["request"]["url"] for one in self._events()
                if one["method"] == "Network.requestWillBeSent"}

    def _events(self) -> list[dict[str, Any]]:
        """The events of this page, up to now."""
        self.js("0")
        return [one for one in self.browser.events if one.get("sessionId") == self._session]
