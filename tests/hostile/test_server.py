"""The page of `wavejig watch` under requests no browser makes: raw bytes over a socket, slow and many clients."""

from __future__ import annotations

import json
import os
import socket
import threading
import time
from collections.abc import Iterator
from pathlib import Path

import pytest

from wavejig.commands import serving
from wavejig.commands.serving import MOST_CONNECTIONS, Board, Server

SECRET = b"nobody's business"
HEADERS = {
    "x-content-type-options": "nosniff",
    "cache-control": "no-store",
    "referrer-policy": "no-referrer",
    "cross-origin-resource-policy": "same-origin",
    "cross-origin-opener-policy": "same-origin",
}


@pytest.fixture
def served(tmp_path: Path) -> Iterator[tuple[Server, Path]]:
    pack = tmp_path / "pack"
    (pack / "field").mkdir(parents=True)
    (tmp_path / "secret.txt").write_bytes(SECRET)
    (pack / "hidden.txt").write_bytes(SECRET)
    for name in ("report.html", "field/match.s1p", "odd %2e name.csv"):
        (pack / name).write_text(f"<!DOCTYPE html><title>{name}</title>")
    names = ["report.html", "field/match.s1p", "odd %2e name.csv"]
    (pack / "manifest.json").write_text(json.dumps({"files": [{"path": n} for n in names]}))
    board = Board("<b>.toml")
    board.show(pack)
    server = Server(board, 0)
    threading.Thread(target=server.serve_forever, kwargs={"poll_interval": 0.02}, daemon=True).start()
    yield server, pack
    server.shutdown()
    server.server_close()


def raw(server: Server, data: bytes, *, seconds: float = 10.0) -> bytes:
    """What comes back for these bytes, until the server closes or says no more."""
    with socket.create_connection(("127.0.0.1", server.server_port), timeout=seconds) as link:
        try:
            link.sendall(data)
            link.shutdown(socket.SHUT_WR)
        except OSError:
            pass  # it has hung up already, which is an answer
        out = b""
        try:
            while more := link.recv(65536):
                out += more
        except OSError:
            pass
        return out


def asked(
    server: Server, target: str, *, method: str = "GET", more: str = "", body: bytes = b""
) -> tuple[int, dict[str, str], bytes]:
    """One request with our own Host, its answer apart."""
    head = f"{method} {target} HTTP/1.1\r\nHost: 127.0.0.1:{server.server_port}\r\n{more}Connection: close\r\n\r\n"
    answer = raw(server, head.encode("latin-1") + body)
    top, _, content = answer.partition(b"\r\n\r\n")
    first, *rows = top.decode("latin-1").split("\r\n")
    return int(first.split()[1]), {k.lower(): v for k, v in (r.split(": ", 1) for r in rows)}, content


TRAVERSALS = [
    "/pack/%2e%2e/secret.txt", "/pack/%2E%2E%2fsecret.txt", "/pack/..%5csecret.txt", "/pack/%252e%252e/secret.txt",
    "/pack/....//secret.txt", "/pack//secret.txt", "/pack/./../secret.txt", "/pack/%c0%ae%c0%ae/secret.txt",
    "/pack/hidden.txt", "/pack/hidden.txt%00.html", "/pack/report.html/", "/pack/report.html/..", "/PACK/report.html",
    "/pack/field", "/pack/field/", "/pack/", "/pack", "//pack/report.html/../../secret.txt", "/pack/%", "/pack/%zz",
    "/pack/\\\\host\\share", "/pack/C:/secret.txt", "/pack/file:///etc/passwd", "http://127.0.0.1/pack/report.html",
    "*", "pack/report.html", "/.git/config", "/state.json/x", "/pack/report.html::$DATA", "/pack/report.html;x",
    "/pack/" + "a" * 5000, "/pack/" + "../" * 500 + "etc/passwd", "/pack/\xff\xfe", "/pack/odd%20%2e%20name.csv",
]  # fmt: skip


@pytest.mark.parametrize("target", TRAVERSALS, ids=lambda t: t[:40])
def test_only_listed_names_are_found(served: tuple[Server, Path], target: str) -> None:
    status, headers, content = asked(served[0], target)
    assert status == 404
    assert content == b"no such file in this pack\n"
    assert HEADERS.items() <= headers.items()


def test_a_listed_name_of_odd_letters_is_found(served: tuple[Server, Path]) -> None:
    status, headers, _ = asked(served[0], "/pack/odd%20%252e%20name.csv")
    assert status == 200 and headers["content-type"].startswith("text/csv")


METHODS = ["POST", "PUT", "DELETE", "OPTIONS", "PATCH", "TRACE", "CONNECT", "get", "<script>", "PROPFIND"]


@pytest.mark.parametrize("method", METHODS)
def test_other_methods_get_no_more_than_a_number(served: tuple[Server, Path], method: str) -> None:
    status, headers, content = asked(served[0], "/state.json", method=method)
    assert status == 501
    assert content == b"501: not something that is answered here\n"
    assert HEADERS.items() <= headers.items() and "default-src 'none'" in headers["content-security-policy"]
    assert headers["connection"] == "close" and headers["content-type"] == "text/plain; charset=utf-8"


@pytest.mark.parametrize(
    ("data", "status"),
    [
        (b"GET /" + b"a" * 70_000 + b" HTTP/1.1\r\n\r\n", b"414"),
        (b"GET / HTTP/1.1\r\n" + b"A: b\r\n" * 200 + b"\r\n", b"431"),
        (b"GET / HTTP/1.1\r\nA: " + b"b" * 70_000 + b"\r\n\r\n", b"431"),
        (b"GET / HTTP/9.9\r\n\r\n", b"505"),
        (b"GET / HTTP/1.1\r\n\r\n", b"403"),
        (b"GET / HTTP/1.1\r\nHost: 127.0.0.1:%d\r\nHost: evil.example\r\n\r\n", b"403"),
        (b"GET / HTTP/1.1\r\nHost: evil.example\r\nHost: 127.0.0.1:%d\r\n\r\n", b"403"),
        (b"GET / HTTP/1.1\r\nHost: 127.0.0.1:%d@evil.example\r\n\r\n", b"403"),
        (b"GET / HTTP/1.1\r\nHost: [::1]:%d\r\n\r\n", b"403"),
    ],
    ids=["line", "headers", "header", "version", "no-host", "two-hosts", "two-hosts-turned", "user", "six"],
)
def test_requests_that_are_none(served: tuple[Server, Path], data: bytes, status: bytes) -> None:
    answer = raw(served[0], data.replace(b"%d", str(served[0].server_port).encode()))
    assert answer.split(b"\r\n")[0].split()[1] == status
    assert b"<title>" not in answer and b"evil" not in answer and b"aaaa" not in answer
    assert asked(served[0], "/state.json")[0] == 200  # and it goes on serving


@pytest.mark.parametrize("data", [b"", b"\r\n\r\n", b"\0" * 1000, b"\xff\xfe\n\n", b"GET\r\n\r\n", b"GET / HTTP/1.1 x\r\n\r\n", b"\x16\x03\x01\x02\x00"])  # fmt: skip
def test_noise_gives_no_page(served: tuple[Server, Path], data: bytes) -> None:
    answer = raw(served[0], data)
    assert b"<" not in answer and b"Traceback" not in answer
    assert asked(served[0], "/state.json")[0] == 200


@pytest.mark.parametrize("how", ["Content-Length: {n}", "Transfer-Encoding: chunked"])
def test_a_body_is_no_second_request(served: tuple[Server, Path], how: str) -> None:
    inner = f"GET /pack/report.html HTTP/1.1\r\nHost: 127.0.0.1:{served[0].server_port}\r\n\r\n".encode()
    head = f"GET /state.json HTTP/1.1\r\nHost: 127.0.0.1:{served[0].server_port}\r\n{how.format(n=len(inner))}\r\n\r\n"
    answer = raw(served[0], head.encode() + inner)
    assert answer.count(b"HTTP/1.1 ") == 1 and b"report.html" not in answer


def test_a_file_exchanged_for_a_way_out_is_not_followed(served: tuple[Server, Path], tmp_path: Path) -> None:
    server, pack = served
    assert asked(server, "/pack/report.html")[0] == 200
    (pack / "report.html").unlink()
    (pack / "report.html").symlink_to(tmp_path / "secret.txt")
    (pack / "field" / "match.s1p").unlink()
    os.mkfifo(pack / "field" / "match.s1p")
    for target in ("/pack/report.html", "/pack/field/match.s1p"):
        status, _, content = asked(server, target)
        assert status == 404 and SECRET not in content


def test_a_recipe_named_like_markup_is_data(served: tuple[Server, Path]) -> None:
    _, headers, content = asked(served[0], "/state.json")
    assert headers["content-type"] == "application/json" and json.loads(content)["recipe"] == "<b>.toml"
    assert b"<b>" not in asked(served[0], "/")[2]


def test_silent_and_many_clients_are_let_go(
    served: tuple[Server, Path], monkeypatch: pytest.MonkeyPatch
) -> None:
    server, _ = served
    monkeypatch.setattr(serving._Handler, "timeout", 3.0)
    assert server.room._value == MOST_CONNECTIONS
    server.room = threading.BoundedSemaphore(5)
    began = time.monotonic()
    idle = [socket.create_connection(("127.0.0.1", server.server_port), timeout=10) for _ in range(5)]
    try:
        for link in idle[:3]:
            link.sendall(b"GET /state.js")  # and no more
        deadline = time.monotonic() + 5.0
        while server.room._value and time.monotonic() < deadline:
            time.sleep(0.01)
        assert raw(server, f"GET / HTTP/1.1\r\nHost: 127.0.0.1:{server.server_port}\r\n\r\n".encode()) == b""
        for link in idle:
            assert link.recv(1000) == b""  # each is closed by the server
        assert time.monotonic() - began < 30.0
        assert asked(server, "/state.json")[0] == 200
    finally:
        for link in idle:
            link.close()
