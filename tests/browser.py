"""A small driver of headless Chromium over its DevTools protocol, for pages on disk with no network."""

from __future__ import annotations

import base64
import json
import shutil
import subprocess
import tempfile
import time
import urllib.request
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import pytest

NAMES = ("chromium", "chromium-browser", "google-chrome")
FLAGS = (
    "--headless",
    "--no-sandbox",
    "--disable-gpu",
    "--disable-quic",
    "--no-first-run",
    "--disable-background-networking",
    "--disable-component-update",
    "--disable-sync",
    "--disable-dev-shm-usage",
    "--host-resolver-rules=MAP * ~NOTFOUND",
    "--remote-debugging-port=0",
)
START_S = 40.0
ANSWER_S = 60.0
KEY_CODES = {
    "Backspace": 8,
    "Tab": 9,
    "Enter": 13,
    "Escape": 27,
    "ArrowLeft": 37,
    "ArrowUp": 38,
    "ArrowRight": 39,
    "ArrowDown": 40,
}


class PageError(Exception):
    """The page, or the browser, answered with an error."""


class Page:
    """One tab: opens files, runs expressions in them, and keeps every event that the browser tells of."""

    def __init__(self, socket: Any) -> None:
        self._socket = socket
        self._number = 0
        self.events: list[dict[str, Any]] = []
        for domain in ("Page", "Runtime", "Network", "Log"):
            self.command(f"{domain}.enable")

    def command(self, method: str, **params: Any) -> dict[str, Any]:
        """Send one command and return its result; events that come before it are kept."""
        self._number += 1
        self._socket.send(json.dumps({"id": self._number, "method": method, "params": params}))
        while True:
            message = json.loads(self._socket.recv())
            if message.get("id") == self._number:
                if "error" in message:
                    raise PageError(f"{method}: {message['error']}")
                result: dict[str, Any] = message["result"]
                return result
            if "method" in message:
                self.events.append(message)

    def open(
        self, path: Path, *, width: int = 1400, height: int = 900, dark: bool = False, mobile: bool = False
    ) -> None:
        """Open a file from disk in a window of this size [px] and wait until it is loaded."""
        self.size(width, height, mobile=mobile)
        scheme = [{"name": "prefers-color-scheme", "value": "dark" if dark else "light"}]
        self.command("Emulation.setEmulatedMedia", features=scheme)
        self.events.clear()
        self.command("Page.navigate", url=path.resolve().as_uri())
        self.wait_for("document.readyState === 'complete' && location.protocol === 'file:'")

    def size(self, width: int, height: int, *, mobile: bool = False) -> None:
        """Set the size of the window. [px]"""
        self.command(
            "Emulation.setDeviceMetricsOverride",
            width=width,
            height=height,
            deviceScaleFactor=1,
            mobile=mobile,
        )

    def evaluate(self, expression: str) -> Any:
        """Return the value of a JavaScript expression, awaited where it is a promise."""
        answer = self.command(
            "Runtime.evaluate", expression=expression, returnByValue=True, awaitPromise=True
        )
        if "exceptionDetails" in answer:
            raise PageError(f"{expression}: {answer['exceptionDetails']}")
        return answer["result"].get("value")

    def wait_for(self, expression: str, seconds: float = 20.0) -> None:
        """Wait until an expression is true."""
        end = time.monotonic() + seconds
        while not self.evaluate(expression):
            if time.monotonic() > end:
                raise PageError(f"not true within {seconds} s: {expression}")
            time.sleep(0.02)

    def click(self, x: float, y: float) -> None:
        """Press and release the left button at a point of the window. [px]"""
        for kind in ("mousePressed", "mouseReleased"):
            self.command("Input.dispatchMouseEvent", type=kind, x=x, y=y, button="left", clickCount=1)

    def key(self, name: str) -> None:
        """Press and release a key that is named, such as Enter, or one character."""
        code = KEY_CODES.get(name)
        press: dict[str, Any] = {"key": name, "code": name}
        if code is None:
            press["text"] = name
        else:
            press["windowsVirtualKeyCode"] = code
            if name == "Enter":
                press["text"] = "\r"
        self.command("Input.dispatchKeyEvent", type="keyDown", **press)
        self.command("Input.dispatchKeyEvent", type="keyUp", key=name, code=name)

    def screenshot(self, path: Path) -> None:
        """Write what the window shows as a PNG."""
        path.write_bytes(base64.b64decode(self.command("Page.captureScreenshot", format="png")["data"]))

    def requests(self) -> list[str]:
        """Return the addresses asked for since the page was opened."""
        self.evaluate("0")
        return [
            e["params"]["request"]["url"] for e in self.events if e["method"] == "Network.requestWillBeSent"
        ]

    def faults(self) -> list[str]:
        """Return the errors and exceptions that the page put on its console."""
        self.evaluate("0")
        found = []
        for event in self.events:
            params = event["params"]
            if event["method"] == "Runtime.exceptionThrown":
                found.append(json.dumps(params["exceptionDetails"]))
            elif event["method"] == "Runtime.consoleAPICalled" and params["type"] in {
                "error",
                "warning",
                "assert",
            }:
                found.append(json.dumps(params["args"]))
            elif event["method"] == "Log.entryAdded" and params["entry"]["level"] in {"error", "warning"}:
                found.append(params["entry"]["text"])
        return found


@contextmanager
def browser_page() -> Iterator[Page]:
    """Start Chromium with an empty profile and every host blocked, and give its tab."""
    program = next((found for found in map(shutil.which, NAMES) if found), None)
    if program is None:
        pytest.skip(f"no browser on PATH: none of {', '.join(NAMES)}")
    import websocket

    with tempfile.TemporaryDirectory(ignore_cleanup_errors=True) as profile:
        process = subprocess.Popen(
            [program, *FLAGS, f"--user-data-dir={profile}", "about:blank"],
            stdout=subprocess.DEVNULL,
            stderr=subprocess.DEVNULL,
        )
        try:
            address = _tab_address(Path(profile) / "DevToolsActivePort", process)
            socket = websocket.create_connection(address, timeout=ANSWER_S, suppress_origin=True)
            try:
                yield Page(socket)
            finally:
                socket.close()
        finally:
            process.terminate()
            process.wait(timeout=START_S)


def _tab_address(port_file: Path, process: subprocess.Popen[bytes]) -> str:
    end = time.monotonic() + START_S
    while time.monotonic() < end:
        if process.poll() is not None:
            raise PageError(f"the browser ended with status {process.returncode} before it listened")
        if port_file.exists() and (text := port_file.read_text()).count("\n"):
            with urllib.request.urlopen(
                f"http://127.0.0.1:{text.splitlines()[0]}/json", timeout=ANSWER_S
            ) as answer:
                tabs = [tab for tab in json.load(answer) if tab["type"] == "page"]
            if tabs:
                return str(tabs[0]["webSocketDebuggerUrl"])
        time.sleep(0.05)
    raise PageError(f"the browser did not listen within {START_S} s")
