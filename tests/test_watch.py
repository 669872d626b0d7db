"""`wavejig watch`: rebuilds, serves this machine only, keeps the last good pack, ends cleanly."""

from __future__ import annotations

import http.client
import json
import os
import re
import signal
import socket
import subprocess
import sys
from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import pytest

from tests.browser import browser, needs_browser, wait
from tests.yard import YARD
from wavejig.cli import main
from wavejig.commands.serving import Board, Server, listed
from wavejig.commands.watching import Watch


@dataclass
class Running:
    """A watch at work in a process of its own."""

    process: subprocess.Popen[str]
    recipe: Path
    out: Path
    port: int

    def get(
        self, path: str, host: str | None = None, method: str = "GET"
    ) -> tuple[int, dict[str, str], bytes]:
        return get(self.port, path, host, method)

    def state(self) -> dict[str, Any]:
        loaded: dict[str, Any] = json.loads(self.get("/state.json")[2])
        return loaded

    def until(self, phase: str, seconds: float = 120.0, above: int = -2) -> dict[str, Any]:
        def look() -> dict[str, Any] | None:
            state = self.state()
            return state if state["phase"] == phase and state["pack"] > above else None

        found: dict[str, Any] = wait(look, seconds, phase)
        return found


def get(
    port: int, path: str, host: str | None = None, method: str = "GET"
) -> tuple[int, dict[str, str], bytes]:
    link = http.client.HTTPConnection("127.0.0.1", port, timeout=20)
    link.putrequest(method, path, skip_host=True)
    if host != "":
        link.putheader("Host", host or f"127.0.0.1:{port}")
    link.endheaders()
    answer = link.getresponse()
    body = answer.read()
    link.close()
    return answer.status, {k.lower(): v for k, v in answer.getheaders()}, body


def start(recipe: Path, out: Path, cache: Path) -> Running:
    process = subprocess.Popen(
        [sys.executable, "-m", "wavejig", "watch", str(recipe), "--out", str(out), "--port", "0"],
        stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True,
        env={**os.environ, "WAVEJIG_CACHE": str(cache)},
    )  # fmt: skip
    assert process.stdout is not None
    said = process.stdout.readline()
    found = re.search(r"http://127\.0\.0\.1:(\d+)/", said)
    assert found, said
    return Running(process=process, recipe=recipe, out=out, port=int(found[1]))


@pytest.fixture(scope="module")
def running(tmp_path_factory: pytest.TempPathFactory) -> Iterator[Running]:
    folder = tmp_path_factory.mktemp("watch")
    recipe = folder / "yard.toml"
    recipe.write_text(YARD, encoding="utf-8")
    watch = start(recipe, folder / "packs", folder / "cache")
    try:
        watch.until("ready", 300.0)  # the first build loads and solves everything, on a busy machine too
        yield watch
    finally:
        watch.process.kill()
        watch.process.communicate(timeout=20)


# -- serving: without a build --------------------------------------------------------------------------


@pytest.fixture
def served(tmp_path: Path) -> Iterator[Server]:
    """A pack of three files, and beside it one that is nobody's business."""
    import threading

    pack = tmp_path / "pack"
    (pack / "field").mkdir(parents=True)
    (pack / "report.html").write_text("<!DOCTYPE html><title>r</title>")
    (pack / "field" / "match.s1p").write_text("! s1p")
    (pack / "hidden.txt").write_text("not in the manifest")
    (tmp_path / "secret.txt").write_text("secret")
    (pack / "leak").symlink_to(tmp_path / "secret.txt")
    names = ["report.html", "field/match.s1p", "../secret.txt", str(tmp_path / "secret.txt"), "leak"]
    (pack / "manifest.json").write_text(json.dumps({"files": [{"path": n} for n in names]}))
    board = Board("spare.toml")
    board.show(pack)
    server = Server(board, 0)
    thread = threading.Thread(target=server.serve_forever, kwargs={"poll_interval": 0.02}, daemon=True)
    thread.start()
    yield server
    server.shutdown()
    server.server_close()


def test_only_loopback_is_listened_on(served: Server) -> None:
    assert served.socket.getsockname()[0] == "127.0.0.1"
    others = {i[4][0] for i in socket.getaddrinfo(socket.gethostname(), None, socket.AF_INET)}
    for address in others - {"127.0.0.1"}:
        if address.startswith("127."):
            continue
        with pytest.raises(OSError):
            socket.create_connection((str(address), served.server_port), timeout=2).close()


def test_listed_files_are_served_with_safe_headers(served: Server) -> None:
    port = served.server_port
    for path in (
        "/",
        "/state.json",
        "/pack/report.html",
        "/pack/report.html?3",
        "/pack/field/match.s1p",
        "/pack/manifest.json",
    ):
        status, headers, body = get(port, path)
        assert status == 200 and body, path
        assert headers["x-content-type-options"] == "nosniff"
        assert headers["cache-control"] == "no-store"
        assert headers["cross-origin-resource-policy"] == "same-origin"
        assert "frame-ancestors" in headers["content-security-policy"]
        assert "access-control-allow-origin" not in headers
    assert "unsafe" not in get(port, "/")[1]["content-security-policy"]
    status, headers, body = get(port, "/pack/report.html", method="HEAD")
    assert status == 200 and not body and int(headers["content-length"]) > 0


@pytest.mark.parametrize(
    "path",
    [
        "/pack/", "/pack", "/pack/field", "/pack/field/", "/pack/hidden.txt", "/pack/leak", "/pack/../secret.txt",
        "/pack/%2e%2e/secret.txt", "/pack/..%2fsecret.txt", "/pack/field/../../secret.txt", "/pack//etc/passwd",
        "/pack/%2fetc%2fpasswd", "/../secret.txt", "/etc/passwd", "/pack/report.html%00",
        "/pack/..\\secret.txt", "/favicon.ico",
    ],
)  # fmt: skip
def test_nothing_else_is_served(served: Server, path: str) -> None:
    status, _, body = get(served.server_port, path)
    assert status == 404
    assert b"secret" not in body and b"not in the manifest" not in body and b"root:" not in body


@pytest.mark.parametrize(
    "host",
    [
        "", "evil.example", "evil.example:{port}", "127.0.0.1", "127.0.0.1:1", "127.0.0.1.evil.example:{port}",
        "0.0.0.0:{port}",
    ],
)  # fmt: skip
def test_other_hosts_are_refused(served: Server, host: str) -> None:
    assert get(served.server_port, "/state.json", host.format(port=served.server_port))[0] in (400, 403)


def test_both_loopback_names_are_taken(served: Server) -> None:
    for name in ("127.0.0.1", "localhost"):
        assert get(served.server_port, "/state.json", f"{name}:{served.server_port}")[0] == 200


@pytest.mark.parametrize("method", ["POST", "PUT", "DELETE", "OPTIONS"])
def test_nothing_can_be_sent(served: Server, method: str) -> None:
    assert get(served.server_port, "/state.json", method=method)[0] == 501


def test_a_manifest_cannot_lead_out_of_the_pack(served: Server, tmp_path: Path) -> None:
    assert set(listed(tmp_path / "pack")) == {"report.html", "field/match.s1p", "manifest.json"}


# -- refusals at the start -------------------------------------------------------------------------------


def test_a_missing_recipe_is_wrong_input(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    assert main(["watch", str(tmp_path / "none.toml")]) == 2
    assert "no such recipe" in capsys.readouterr().err


@pytest.mark.parametrize("port", ["-1", "65536"])
def test_a_port_that_is_none(port: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (tmp_path / "r.toml").write_text(YARD)
    assert main(["watch", str(tmp_path / "r.toml"), "--port", port]) == 2
    assert "allowed: 0 to 65535" in capsys.readouterr().err


def test_a_port_that_is_taken(tmp_path: Path, capsys: pytest.CaptureFixture[str]) -> None:
    (tmp_path / "r.toml").write_text(YARD)
    with socket.socket() as busy:
        busy.bind(("127.0.0.1", 0))
        busy.listen()
        assert main(["watch", str(tmp_path / "r.toml"), "--port", str(busy.getsockname()[1])]) == 3
    assert "try another --port" in capsys.readouterr().err


# -- one look ----------------------------------------------------------------------------------------------


def looked(tmp_path: Path, text: str) -> tuple[Watch, Board]:
    recipe = tmp_path / "yard.toml"
    recipe.write_text(text, encoding="utf-8")
    board = Board(recipe.name)
    watch = Watch(recipe, tmp_path / "out", board)
    assert watch.look()
    return watch, board


def test_faults_of_a_recipe_are_told_with_their_lines(tmp_path: Path) -> None:
    watch, board = looked(tmp_path, YARD.replace('"biquad"', '"biquat"').replace('"1.0 mm"', '"1.0 parsec"'))
    state = board.state()
    assert state["phase"] == "broken" and state["pack"] == -1
    assert [p["where"] for p in state["problems"]] == [
        "yard.toml:9: radiator.family",
        "yard.toml:10: radiator.wire",
    ]
    assert 'Did you mean "biquad"?' in state["problems"][0]["fix"]
    assert not watch.look()  # and not again until it is saved
    assert not (tmp_path / "out").exists()


def test_errors_of_a_design_are_told_with_their_remedy(tmp_path: Path) -> None:
    _, board = looked(tmp_path, YARD.replace('["52 mm", "52 mm"]', '["12 mm", "12 mm"]'))
    state = board.state()
    assert state["phase"] == "broken"
    assert state["problems"] and all(p["where"].startswith("error ") and p["fix"] for p in state["problems"])


def test_a_recipe_that_goes_away_is_told(tmp_path: Path) -> None:
    watch, board = looked(tmp_path, "name = 3\n")
    watch.path.unlink()
    assert watch.look()
    assert board.state()["problems"][0]["message"] == "cannot be read"


def test_a_fault_of_ours_does_not_end_the_watch(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    from wavejig import pack

    def broken(path: Path) -> None:
        raise ZeroDivisionError("planted")

    monkeypatch.setattr(pack, "inspect_recipe", broken)
    _, board = looked(tmp_path, YARD)
    assert "ZeroDivisionError: planted" in board.state()["problems"][0]["message"]
    assert "Traceback" in capsys.readouterr().err


# -- the whole, as a user has it ---------------------------------------------------------------------------


def test_saving_rebuilds_and_breaking_keeps_the_last_good_pack(running: Running) -> None:
    before = running.state()["pack"]
    first = running.get("/pack/report.html")[2]
    running.recipe.write_text(YARD.replace("quantity = 6", "quantity = 11"), encoding="utf-8")
    state = running.until("ready", above=before)
    assert "fixture" in state["text"] and "field solve" in state["text"]  # taken over
    page = running.get("/pack/report.html")[2]
    assert page != first and "11 \u00d7 two-lobe".encode() in page
    running.recipe.write_text(YARD.replace('"biquad"', '"biquat"'), encoding="utf-8")
    state = running.until("broken")
    assert state["problems"][0]["where"] == "yard.toml:9: radiator.family"
    assert running.get("/pack/report.html")[2] == page
    assert (running.out / "yard-5g8" / "report.html").read_bytes() == page
    running.recipe.write_text(
        YARD.replace("quantity = 6", "quantity = 11") + "# a remark\n", encoding="utf-8"
    )
    state = running.until("ready")
    assert "no number changed" in state["text"] and state["problems"] == []


# Turns the parts, leaves the reflector out, closes what is open and opens what is closed, and scrolls.
_FOLDS = "return [...document.getElementById('pack').contentDocument.querySelectorAll('details')].map((d) => d.open)"
_SEEN = """
const page = document.getElementById('pack').contentDocument, view = page.getElementById('stage')?.dataset.view;
const seen = view && { ...JSON.parse(view), folds: [...page.querySelectorAll('details')].map((d) => d.open) };
"""
_LOOK_AROUND = """
const inside = document.getElementById('pack').contentWindow, page = inside.document;
const canvas = page.getElementById('parts-canvas');
for (const key of ['ArrowLeft', 'ArrowLeft', 'ArrowUp', '+'])
  canvas.dispatchEvent(new inside.KeyboardEvent('keydown', { key, bubbles: true, cancelable: true }));
for (const label of page.querySelectorAll('#parts-boxes label'))
  if (label.textContent === 'reflector') label.querySelector('input').click();
for (const fold of page.querySelectorAll('details')) fold.open = !fold.open;
inside.scrollTo(0, 700);
return new Promise((done) => inside.requestAnimationFrame(() => inside.requestAnimationFrame(() => {
  const seen = JSON.parse(page.getElementById('stage').dataset.view);
  done({ ...seen, folds: [...page.querySelectorAll('details')].map((d) => d.open) });
})));
"""


@needs_browser
def test_the_page_follows_the_recipe(running: Running) -> None:
    counted = (
        "const f = document.getElementById('pack').contentDocument; "
        "return f && f.querySelector('header p')?.textContent.split(' ')[0]"
    )
    running.recipe.write_text(YARD, encoding="utf-8")
    with browser() as page:
        page.open(f"http://127.0.0.1:{running.port}/")
        page.until(f"return (() => {{ {counted} }})() === '6'", 60)
        looked_at = page.run(_LOOK_AROUND)
        assert (
            looked_at["yaw"] != pytest.approx(-0.56)
            and looked_at["off"] == ["reflector"]
            and looked_at["folds"]
        )
        running.recipe.write_text(YARD.replace("quantity = 6", "quantity = 7"), encoding="utf-8")
        page.until(f"return (() => {{ {counted} }})() === '7'", 60)
        page.until("return document.getElementById('pack').contentWindow.scrollY === 700")
        page.until(f"{_SEEN} return seen && seen.yaw !== -0.56")
        again = page.run(f"{_SEEN} return seen")
        assert again == looked_at
        assert page.run(_FOLDS) == looked_at["folds"]
        running.recipe.write_text(YARD.replace('name = "yard-5g8"', "name = 5"), encoding="utf-8")
        page.until("return document.body.className === 'broken'")
        told = page.run("return document.querySelector('header').innerText")
        assert "yard.toml:1: name" in told and "last good pack" in told
        assert page.run(counted) == "7"
        running.recipe.write_text(YARD, encoding="utf-8")
        page.until("return document.body.className === 'ready'", 60)
        assert page.run("return document.querySelectorAll('#problems li').length") == 0
        assert page.log() == []


def test_a_signal_to_stop_ends_it_as_ctrl_c_does(tmp_path: Path) -> None:
    """In the middle of a build that never comes to its end."""
    recipe = tmp_path / "yard.toml"
    recipe.write_text(YARD, encoding="utf-8")
    watch = start(recipe, tmp_path / "packs", tmp_path / "cache")
    try:
        watch.until("building")
        watch.process.send_signal(signal.SIGTERM)
        _, err = watch.process.communicate(timeout=30)
    finally:
        watch.process.kill()
    assert watch.process.returncode == 0
    assert "watch ended; no pack was built" in err and "Traceback" not in err
    assert not (tmp_path / "packs").exists() or not [*(tmp_path / "packs").iterdir()]
    with pytest.raises(OSError):
        get(watch.port, "/")


def test_ctrl_c_ends_it_with_exit_code_0(running: Running) -> None:
    """Last: it ends the watch of this module, in the middle of a build."""
    running.recipe.write_text(YARD.replace('"9.7 mm"', '"9.8 mm"'), encoding="utf-8")
    running.until("building")
    running.process.send_signal(signal.SIGINT)
    out, err = running.process.communicate(timeout=30)
    assert running.process.returncode == 0
    assert "watch ended; the last good pack is" in err and "Traceback" not in err
    assert "yard-5g8: " in out
    left = [p.name for p in running.out.iterdir()]
    assert left == ["yard-5g8"]  # nothing half built is left
    assert (running.out / "yard-5g8" / "manifest.json").is_file()
    with pytest.raises(OSError):
        get(running.port, "/")
