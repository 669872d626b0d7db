"""A headless Chromium over its WebDriver (W3C WebDriver, Recommendation 2018, from memory), standard library only."""

from __future__ import annotations

import base64
import json
import shutil
import subprocess
import tempfile
import time
import urllib.error
import urllib.request
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import Any

import pytest

BROWSER, DRIVER = "chromium", "chromedriver"
HAS_BROWSER = bool(shutil.which(BROWSER) and shutil.which(DRIVER))
needs_browser = pytest.mark.skipif(not HAS_BROWSER, reason="needs chromium and chromedriver")


class Browser:
    """One page at a time."""

    def __init__(self, address: str, session: str) -> None:
        self.address, self.session = address, session

    def ask(self, path: str, body: Any = None, method: str | None = None) -> Any:
        """One command of the protocol; its value."""
        return _ask(f"{self.address}/session/{self.session}{path}", body, method)

    def tools(self, command: str, **params: Any) -> Any:
        """A command of the browser's own tools."""
        return self.ask("/goog/cdp/execute", {"cmd": command, "params": params})

    def open(
        self, url: str, *, wide: int = 1280, high: int = 900, dark: bool = False, touch: bool = False
    ) -> None:
        """Open a page as a screen of that size and scheme shows it."""
        size = {"width": wide, "height": high, "deviceScaleFactor": 1, "mobile": touch}
        self.tools("Emulation.setDeviceMetricsOverride", **size)
        self.tools("Emulation.setTouchEmulationEnabled", enabled=touch)
        self.tools("Emulation.setScrollbarsHidden", hidden=True)  # a picture must not change its size
        scheme = [{"name": "prefers-color-scheme", "value": "dark" if dark else "light"}]
        self.tools("Emulation.setEmulatedMedia", features=scheme)
        self.ask("/url", {"url": url})

    def run(self, script: str, *args: Any) -> Any:
        """What a script returns."""
        return self.ask("/execute/sync", {"script": script, "args": list(args)})

    def until(self, script: str, seconds: float = 10.0) -> Any:
        """What a script returns once that is true. Raises AssertionError when it never is."""
        return wait(lambda: self.run(script), seconds, script)

    def log(self) -> list[str]:
        """Console messages and failed loads since the last look, warnings and worse."""
        entries = self.ask("/se/log", {"type": "browser"})
        return [e["message"] for e in entries if e["level"] in ("WARNING", "SEVERE")]

    def picture(self, path: Path, *, whole: bool = True) -> None:
        """The page as PNG; whole: all of it, not the window alone."""
        found = self.tools("Page.captureScreenshot", format="png", captureBeyondViewport=whole)
        path.write_bytes(base64.b64decode(found["data"]))


def wait(look: Callable[[], Any], seconds: float, what: str) -> Any:
    """The first true answer. Raises AssertionError when none comes in time."""
    end = time.monotonic() + seconds
    while time.monotonic() < end:
        found = look()
        if found:
            return found
        time.sleep(0.1)
    raise AssertionError(f"not within {seconds:g} s: {what}")


def _ask(url: str, body: Any = None, method: str | None = None) -> Any:
    data = None if body is None else json.dumps(body).encode()
    request = urllib.request.Request(
        url, data=data, method=method, headers={"Content-Type": "application/json"}
    )
    try:
        with urllib.request.urlopen(request, timeout=60) as answer:
            return json.load(answer)["value"]
    except urllib.error.HTTPError as err:
        raise AssertionError(f"{url}: {err.read().decode(errors='replace')[:600]}") from err


@contextmanager
def browser(*switches: str) -> Iterator[Browser]:
    """A browser of its own; software drawing, so that it looks alike everywhere."""
    with tempfile.TemporaryDirectory() as home:
        log = Path(home) / "driver.log"
        with log.open("wb") as stream:
            driver = subprocess.Popen([DRIVER, "--port=0"], stdout=stream, stderr=subprocess.STDOUT)
        try:
            address = f"http://127.0.0.1:{wait(lambda: _port(log), 20.0, 'the driver')}"
            options = {
                "binary": shutil.which(BROWSER),
                "args": [
                    "--headless=new", "--no-sandbox", "--disable-dev-shm-usage", "--use-gl=angle",
                    "--use-angle=swiftshader", "--enable-unsafe-swiftshader", "--ignore-gpu-blocklist",
                    f"--user-data-dir={home}/profile", *switches,
                ],
            }  # fmt: skip
            wanted = {"goog:chromeOptions": options, "goog:loggingPrefs": {"browser": "ALL"}}
            made = _ask(f"{address}/session", {"capabilities": {"alwaysMatch": wanted}})
            page = Browser(address, made["sessionId"])
            try:
                yield page
            finally:
                page.ask("", method="DELETE")
        finally:
            driver.terminate()
            driver.wait(10)


def _port(log: Path) -> str:
    for line in log.read_text(errors="replace").splitlines():
        if "started successfully on port" in line:
            return line.rsplit(" ", 1)[1].strip(".")
    return ""
