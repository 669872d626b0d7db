"""The page of `wavejig watch`, on the loopback address only: the pack's own files, and how the build stands.

What is served is looked up by name in a list: no folder is listed and no path is put together from what was
asked for. Pages of other sites cannot read it: the Host header must be a loopback name (which keeps out a
name of theirs that resolves here), nothing allows another origin, and nobody else may frame it.
"""

from __future__ import annotations

import json
import threading
from collections.abc import Iterable, Mapping
from dataclasses import asdict, dataclass
from http.server import BaseHTTPRequestHandler, ThreadingHTTPServer
from importlib.resources import files
from pathlib import Path, PurePosixPath
from typing import Any
from urllib.parse import unquote

from wavejig.recipe.plainfile import read_plain
from wavejig.sheets.report.markup import Own, el, policy_hash, write

LOOPBACK = "127.0.0.1"
MOST_CONNECTIONS = (
    48  # a browser opens six; more at once are turned away, so that none can use up the machine
)
_LARGEST_FILE = 1 << 30
_WORDS = "text/plain; charset=utf-8"
_NAMES = (LOOPBACK, "localhost")
_KINDS = {
    ".html": "text/html; charset=utf-8", ".json": "application/json", ".pdf": "application/pdf",
    ".svg": "image/svg+xml", ".csv": "text/csv; charset=utf-8", ".glb": "model/gltf-binary",
    ".stl": "model/stl", ".3mf": "model/3mf", ".dxf": "image/vnd.dxf", ".step": "model/step",
}  # fmt: skip


@dataclass(frozen=True, slots=True, kw_only=True)
class Trouble:
    """Something that keeps the recipe from being built."""

    where: str
    message: str
    fix: str = ""


class Board:
    """How the build stands, told by the watching thread and read by the serving ones."""

    def __init__(self, recipe: str) -> None:
        self._lock = threading.Lock()
        self._recipe = recipe
        self._phase, self._text = "building", "starting"
        self._troubles: tuple[Trouble, ...] = ()
        self._number = -1  # of packs shown so far; -1: none yet
        self._files: Mapping[str, Path] = {}

    def tell(self, phase: str, text: str, troubles: Iterable[Trouble] | None = None) -> None:
        """phase: "building", "ready" or "broken". troubles: None leaves those that stand."""
        with self._lock:
            self._phase, self._text = phase, text
            if troubles is not None:
                self._troubles = tuple(troubles)

    def show(self, pack: Path) -> None:
        """Serve another pack, by its manifest. Raises OSError or ValueError when that cannot be read."""
        found = listed(pack)
        with self._lock:
            self._files, self._number = found, self._number + 1

    @property
    def has_pack(self) -> bool:
        """Whether there is a pack to look at."""
        return self._number >= 0

    def state(self) -> dict[str, Any]:
        """For the page."""
        with self._lock:
            return {
                "recipe": self._recipe,
                "phase": self._phase,
                "text": self._text,
                "pack": self._number,
                "problems": [asdict(t) for t in self._troubles],
            }

    def file(self, name: str) -> Path | None:
        """The pack's file of that name, None when it lists none."""
        with self._lock:
            return self._files.get(name)


def listed(pack: Path) -> dict[str, Path]:
    """The files of a pack's manifest, those that truly lie inside it. Raises OSError, ValueError."""
    root = pack.resolve()
    manifest = json.loads((root / "manifest.json").read_text(encoding="utf-8"))
    names = ["manifest.json", *(str(entry["path"]) for entry in manifest["files"])]
    found = {}
    for name in names:
        path = (root / PurePosixPath(name)).resolve()
        if path.is_relative_to(root) and path.is_file():
            found[name] = path
    return found


class Server(ThreadingHTTPServer):
    """Serves one board. Raises OSError when the port is taken."""

    daemon_threads = True

    def __init__(self, board: Board, port: int) -> None:
        self.board = board
        self.shell, self.policy = _shell()
        self.room = threading.BoundedSemaphore(MOST_CONNECTIONS)
        super().__init__((LOOPBACK, port), _Handler)
        self.hosts = {f"{name}:{self.server_port}" for name in _NAMES}
        if self.server_port == 80:  # then a browser leaves it out
            self.hosts |= set(_NAMES)

    def process_request(self, request: Any, client_address: Any) -> None:
        """A thread a connection, while there is room."""
        if not self.room.acquire(blocking=False):
            self.shutdown_request(request)
            return
        super().process_request(request, client_address)

    def process_request_thread(self, request: Any, client_address: Any) -> None:
        """Answer one connection, and make room again."""
        try:
            super().process_request_thread(request, client_address)
        finally:
            self.room.release()

    def handle_error(self, request: Any, client_address: Any) -> None:
        """Quiet: a browser that goes away in the middle of an answer is no fault."""

    @property
    def address(self) -> str:
        """For the browser."""
        return f"http://{LOOPBACK}:{self.server_port}/"


class _Handler(BaseHTTPRequestHandler):
    server: Server
    protocol_version = "HTTP/1.1"
    timeout = 20.0  # a connection that says nothing is let go
    server_version, sys_version = "wavejig", ""

    def do_GET(self) -> None:
        self._answer()

    def do_HEAD(self) -> None:
        self._answer()

    def log_message(self, format: str, *args: object) -> None:
        """Quiet: the terminal is for the builds."""

    def send_error(self, code: int, message: str | None = None, explain: str | None = None) -> None:
        """Of requests that cannot be answered: the code in words, none of what was asked, and no more requests."""
        del message, explain
        self.close_connection = True
        self.request_version = "HTTP/1.1"  # else nothing but the words would go out for a line that is none
        self._send(code, _WORDS, f"{int(code)}: not something that is answered here\n".encode())

    def _answer(self) -> None:
        # a body is never read: what follows it must not be taken for a request
        if self.headers.get("Content-Length") or self.headers.get("Transfer-Encoding"):
            self.close_connection = True
        hosts = self.headers.get_all("Host", [])
        if len(hosts) != 1 or hosts[0] not in self.server.hosts:
            self._send(403, _WORDS, b"only for this machine, under a loopback name\n")
            return
        name = self.path.split("?", 1)[0].split("#", 1)[0]
        if name == "/":
            self._send(200, _KINDS[".html"], self.server.shell, self.server.policy)
            return
        if name == "/state.json":
            self._send(200, _KINDS[".json"], json.dumps(self.server.board.state()).encode())
            return
        path = (
            self.server.board.file(unquote(name.removeprefix("/pack/")))
            if name.startswith("/pack/")
            else None
        )
        data = None if path is None else _content(path)
        if path is None or data is None:
            self._send(404, _WORDS, b"no such file in this pack\n")
            return
        kind = _KINDS.get(path.suffix.lower(), "application/octet-stream")
        # the report brings its own, stricter policy; nothing else may run or fetch anything
        own = path.suffix == ".html"
        policy = (
            "frame-ancestors 'self'"
            if own
            else "default-src 'none'; style-src 'unsafe-inline'; frame-ancestors 'self'"
        )
        self._send(200, kind, data, policy)

    def _send(
        self, status: int, kind: str, body: bytes, policy: str = "default-src 'none'; frame-ancestors 'self'"
    ) -> None:
        self.send_response(status)
        self.send_header("Content-Type", kind)
        self.send_header("Content-Length", str(len(body)))
        self.send_header("Content-Security-Policy", policy)
        self.send_header("X-Content-Type-Options", "nosniff")
        self.send_header("Cross-Origin-Resource-Policy", "same-origin")
        self.send_header("Cross-Origin-Opener-Policy", "same-origin")
        self.send_header("Referrer-Policy", "no-referrer")
        self.send_header("Cache-Control", "no-store")
        if self.close_connection:
            self.send_header("Connection", "close")
        self.end_headers()
        if self.command != "HEAD":
            self.wfile.write(body)


def _content(path: Path) -> bytes | None:
    """What a listed file holds; None between two packs, or when something else stands in its place by now."""
    try:
        if path.resolve() != path:  # it was, when it was listed: now it leads elsewhere
            return None
        return read_plain(path, _LARGEST_FILE)
    except (OSError, RuntimeError):
        return None


def _shell() -> tuple[bytes, str]:
    """The page round the pack's report, and its policy."""
    here = files("wavejig.commands")
    style, script = (Own((here / name).read_text(encoding="utf-8")) for name in ("watch.css", "watch.js"))
    page = el(
        "html",
        el(
            "head",
            el("meta", charset="utf-8"),
            el("meta", name="viewport", content="width=device-width, initial-scale=1"),
            el("title", "wavejig watch"),
            el("link", rel="icon", href="data:,"),
            el("style", style),
        ),
        el(
            "body",
            el(
                "header", el("h1", "wavejig watch: "), el("span", "starting", id="phase"), el("ul", id="problems"),
                role="status", aria_live="polite",
            ),
            el("iframe", id="pack", title="report of the last good pack", hidden=True),
            el("script", script),
        ),
        lang="en",
    )  # fmt: skip
    policy = (
        f"default-src 'none'; style-src {policy_hash(style)}; script-src {policy_hash(script)}; connect-src 'self'; "
        "frame-src 'self'; img-src data:; base-uri 'none'; form-action 'none'; frame-ancestors 'none'"
    )
    return ("<!DOCTYPE html>\n" + write(page) + "\n").encode(), policy
