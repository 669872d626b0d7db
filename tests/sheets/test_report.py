"""The page: stands alone, tells what the rooms found, draws every picture, and takes no text for markup."""

from __future__ import annotations

import base64
import io
import json
import re
from collections.abc import Iterator
from dataclasses import replace
from functools import cache
from itertools import pairwise
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from lxml import html
from PIL import Image

from tests.browser import Browser, browser, needs_browser
from tests.sheets.conftest import inspected, pattern_of
from tests.tuning import resonator
from tests.tuning.articles import near
from tests.tuning.test_found import swept
from wavejig.field.pattern import Cut, Pattern
from wavejig.field.prediction import Prediction, match_point
from wavejig.files.errors import FileCheckError
from wavejig.files.glb import ColouredMesh
from wavejig.files.manifest import Entry
from wavejig.files.mesh import Mesh
from wavejig.files.printable import Printability
from wavejig.sheets.report.axes import ticks
from wavejig.sheets.report.check import check_report
from wavejig.sheets.report.frompack import write_sweeps_report
from wavejig.sheets.report.markup import Own, data, el, write
from wavejig.sheets.report.meshes import Shown, chosen, packed
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.page import page, write_report
from wavejig.sheets.report.polarplot import hung
from wavejig.shop.finding import Finding
from wavejig.tuning.measured import measure

NASTY = '</script><img src=x onerror="window.hacked=1"><!-- &amp; ]]> \'\u202e\x00\ud800\n'
LOOKS = ((360, False), (390, True), (1280, False), (1280, True))  # width of the window, dark scheme
ENTRIES = (("build-sheet.pdf", "pdf"), ("radiator/radiator.step", "step"))


# -- makings -------------------------------------------------------------------------------------------


def cube(name: str = "cube", size: float = 20.0) -> Mesh:
    corners = size * np.array([[x, y, z] for x in (0, 1) for y in (0, 1) for z in (0, 1)], dtype=float)
    faces = [
        (0, 1, 3), (0, 3, 2), (4, 6, 7), (4, 7, 5), (0, 4, 5), (0, 5, 1), (2, 3, 7), (2, 7, 6), (0, 2, 6), (0, 6, 4),
        (1, 5, 7), (1, 7, 3),
    ]  # fmt: skip
    return Mesh(name=name, vertices=corners, faces=np.array(faces))


def shown(name: str = "cube", group: str = "antenna") -> Shown:
    return Shown(piece=ColouredMesh(mesh=cube(name), colour=(0.8, 0.4, 0.2)), group=group)


def prediction(e_peak: float = 0.0, h_peak: float = 0.0) -> Prediction:
    """A made-up one: a series resonance, and cuts that peak at given angles."""
    f = np.linspace(5.5e9, 6.1e9, 401)
    z = 45.0 + 1j * 120.0 * (f / 5.8e9 - 5.8e9 / f)
    points = tuple(
        match_point(hz, complex(np.interp(hz, f, z.real) + 1j * np.interp(hz, f, z.imag)), 50.0)
        for hz in (5.725e9, 5.8e9, 5.875e9)
    )
    angles = np.linspace(-180.0, 180.0, 361)

    def cut(peak: float) -> Cut:
        co = 10.0 - 0.004 * (angles - peak) ** 2
        return Cut(angles_deg=angles, total_dbi=co, co_dbi=co, cross_dbi=co - 17.0)

    pattern = Pattern(
        frequency_hz=5.8e9, e_plane=cut(e_peak), h_plane=cut(h_peak), axial_dbi=10.0, front_to_back_db=20.0,
        cross_db=-30.0, efficiency=0.99,
    )  # fmt: skip
    worst = min(points, key=lambda p: p.return_loss_db)
    return Prediction(
        design_name="spare", reference_ohm=50.0, reference_plane="at the tube's end", wanted_db=10.0, low_hz=5.725e9,
        high_hz=5.875e9, points=points, worst=worst, best=points[1], resonance_hz=5.8e9, frequencies_hz=f,
        s11=(z - 50.0) / (z + 50.0), pattern=pattern, gain_dbi=9.9, solves=5, sweep_error=1e-4, unknowns=400,
        power_balance=(1.0,), remarks=(),
    )  # type: ignore[arg-type]  # fmt: skip


def report(name: str = "boatshed-5g8", **more: Any) -> Report:
    inspection = inspected(name)
    given = {
        "inspection": inspection,
        "pattern": pattern_of(inspection),
        "pieces": (shown("radiator main"), shown("board", "fixture")),
        "prints": (("fixture", 1, _print("board")),),
        "files": tuple((Entry(path=p, kind=k, part="design", units=""), 1234) for p, k in ENTRIES),
        "prediction": prediction(),
    }
    return Report(**{**given, **more})


def _print(name: str) -> Printability:
    return Printability(
        name=name, size_mm=(60.0, 36.5, 8.2), overhang_deg=3.0, bridge_mm=2.4, ledge_mm=0.0, bodies=1
    )


@cache
def proven() -> dict[str, Any]:
    """Three measured articles and the yield they were expected to have, on a circuit in place of the solver."""
    explored = resonator.explored(wide=True)[0]
    recipe, article = near("boatshed-5g8")
    sides = {"5": 0.42, "6": 0.02, "7": 0.4}
    sweeps = [
        replace(swept(explored, {"side": s}, seed=i), serial=n) for i, (n, s) in enumerate(sides.items())
    ]
    found = measure(recipe, article, sweeps, {}, resonator.Bench())
    return {"yields": found.predicted, "measured": found}


def written(r: Report, folder: Path) -> Path:
    for path, _ in ENTRIES:
        (folder / path).parent.mkdir(exist_ok=True)
        (folder / path).write_bytes(b"x")
    write_report(r, folder)
    return folder / "report.html"


def parsed(text: str) -> Any:
    return html.document_fromstring(text)


# -- what it says --------------------------------------------------------------------------------------


def test_a_pack_s_page_answers_in_the_order_of_the_bench(yard: tuple[Path, Any]) -> None:
    raw = (yard[0] / "report.html").read_text(encoding="utf-8")
    tree = parsed(raw)
    assert [h.text_content() for h in tree.iter("h2")] == [
        "In short", "Can it be made?", "Will it match, and where does it point?", "How many will pass?",
        "What do I measure?", "What do I change?", "Files",
    ]  # fmt: skip
    assert (
        "http:" not in raw and "https:" not in raw and "//" not in raw.split("<script>")[0].split("data:,")[0]
    )
    assert len(raw.encode()) < 1_000_000
    found = json.loads((yard[0] / "design.json").read_text())["findings"]
    words = " ".join(tree.text_content().split())
    for finding in found:
        assert " ".join(finding["message"].split()) in words and finding["code"] in words
    field = json.loads((yard[0] / "field" / "field.json").read_text())
    assert f"{field['worst_return_loss_db']:.1f} dB" in words
    assert f"{field['gain_dbi']:.1f} dBi straight ahead" in words


def test_every_file_is_listed_with_its_size_and_linked(yard: tuple[Path, Any]) -> None:
    tree = parsed((yard[0] / "report.html").read_text(encoding="utf-8"))
    manifest = json.loads((yard[0] / "manifest.json").read_text())
    assert {"path": "report.html", "kind": "html"}.items() <= next(
        f for f in manifest["files"] if f["path"] == "report.html"
    ).items()
    rows = {r[0].text_content(): r[-1].text_content() for r in tree.xpath("//*[@id='files']//tbody/tr")}
    assert set(rows) == {f["path"] for f in manifest["files"]} - {"report.html"}
    for f in manifest["files"]:
        if f["path"] == "recipe.toml":
            assert rows[f["path"]] == "-"  # its remarks may change without a new page
        elif f["path"] in rows:
            number, unit = rows[f["path"]].split()
            size = float(number) * {"B": 1.0, "kB": 1e3, "MB": 1e6}[unit]
            assert size == pytest.approx(f["bytes"], rel=0.02)
            assert (yard[0] / tree.xpath(f"//*[@id='files']//a[text()='{f['path']}']/@href")[0]).is_file()


def test_the_batch_is_laid_out(yard: tuple[Path, Any]) -> None:
    tree = parsed((yard[0] / "report.html").read_text(encoding="utf-8"))
    numbers = tree.xpath("//*[@id='sheet-plot']//text[@class='t small']/text()")
    assert numbers == ["1", "2", "3", "4", "5", "6"]
    assert tree.xpath("//*[@id='made']//a/@href")[:1] == ["reflector/nest-1.dxf"]
    plan = json.loads((yard[0] / "design.json").read_text())["batch"]["prints"]["plates"][0]
    boxes = tree.xpath("//*[@id='bed-plot']//rect[@class='part']")
    assert len(boxes) == plan["pieces"]


def test_a_page_without_prediction_or_batch_says_so(tmp_path: Path) -> None:
    words = parsed(written(report(prediction=None), tmp_path).read_text()).text_content()
    assert "Not predicted" in words and "wavejig yield boatshed-5g8.toml" in words
    assert "wavejig measured boatshed-5g8.toml first.s1p" in words


def test_yield_and_measured_sweeps_are_told_and_drawn(tmp_path: Path) -> None:
    r = report(**proven())
    tree = parsed(written(r, tmp_path).read_text(encoding="utf-8"))
    words = " ".join(tree.text_content().split())
    y, m = proven()["yields"], proven()["measured"]
    assert f"About {y.expected:.1f} of 3" in words
    assert "serial 5, worst" in words and "serial 6" in words and "fails by" in words and "passes" in words
    change = m.changes[0]
    assert f"{change.now:.2f} to {change.new:.2f} mm" in words
    curves = tree.xpath("//*[@id='match-plot']//*[contains(@class,'curve')]/@class")
    assert curves == ["curve m1", "curve m2", "curve m3", "curve predicted"]
    bars = tree.xpath("//*[@id='yield-plot']//*[@class='bar' or @class='barfail']")
    assert len(bars) == len(y.counts)


def test_sweeps_have_a_page_of_their_own_with_no_pack_round_it(tmp_path: Path) -> None:
    path = tmp_path / "spare.html"
    m = proven()["measured"]
    write_sweeps_report(inspected("boatshed-5g8"), path, prediction(), m)
    tree = parsed(path.read_text(encoding="utf-8"))
    assert [h.text_content() for h in tree.iter("h2")] == [
        "In short", "Will it match, and where does it point?", "How many will pass?", "What do I change?",
    ]  # fmt: skip
    assert not tree.xpath("//*[@id='files']") and not tree.xpath("//canvas")
    words = " ".join(tree.text_content().split())
    assert "serial 5, worst" in words and "fails by" in words
    assert f"About {m.predicted.expected:.1f} of 3" in words
    side = m.articles[0].findings.right.get("side")
    assert "What came out differently on serial 5" in words
    rows = [[c.text_content() for c in row] for row in tree.xpath("//*[@id='change']//tr")]
    wanted = ["side", f"{side.value:+.2f} mm", f"{side.interval[0]:+.2f} to {side.interval[1]:+.2f} mm"]
    assert wanted in [row[:3] for row in rows]
    curves = tree.xpath("//*[@id='match-plot']//*[contains(@class,'curve')]/@class")
    assert curves == ["curve m1", "curve m2", "curve m3", "curve predicted"]


def test_the_same_bytes_twice() -> None:
    assert page(report()) == page(report())


# -- text is text --------------------------------------------------------------------------------------


def hostile() -> Report:
    finding = Finding(code=NASTY, severity="warning", message=NASTY, remedy=NASTY, where=NASTY, source=NASTY)
    inspection = replace(inspected("boatshed-5g8"), findings=(finding,))
    inspection = replace(inspection, design=replace(inspection.design, name="a<b>&\"c'"))
    return report(inspection=inspection, pieces=(shown(NASTY),), prints=(("fixture", 1, _print(NASTY)),))


def test_text_of_a_recipe_is_never_markup(tmp_path: Path) -> None:
    raw = written(hostile(), tmp_path).read_text(encoding="utf-8")
    tree = parsed(raw)
    assert tree.findtext(".//h1") == "a<b>&\"c'"
    assert not list(tree.iter("img")) and not tree.xpath("//@onerror")
    assert len(list(tree.iter("script"))) == 2
    told = tree.xpath("//*[@class='findings']//p[2]")[0].text_content()
    assert told == NASTY.replace("\x00", "\ufffd").replace("\ud800", "\ufffd")
    assert json.loads(tree.get_element_by_id("parts-data").text)[0]["name"] == NASTY


@given(st.text())
def test_any_text_and_attribute_comes_back(text: str) -> None:
    clean = re.sub("[\x00-\x08\x0b-\x1f\x7f-\x9f\ufdd0-\ufdef\ufffe\uffff]", "\ufffd", text)
    made = write(el("p", "x" + text, title="x" + text))
    read = html.fragment_fromstring(made)
    assert read.tag == "p" and not len(read)
    assert read.text == "x" + clean and read.get("title") == "x" + clean
    script = html.fragment_fromstring(write(el("script", data([text]), type="application/json")))
    assert json.loads(script.text) == [text]


@pytest.mark.parametrize("text", ["a</script>", "<!-- a"])
def test_own_scripts_cannot_end_early(text: str) -> None:
    with pytest.raises(ValueError, match="neither"):
        Own(text)


# -- the second reading finds faults -------------------------------------------------------------------


@pytest.mark.parametrize(
    ("old", "new", "found"),
    [
        ("<h1>", "<h1>x", "heading"),
        ('id="match"', 'id="made"', "twice"),
        ('href="#yield"', 'href="#yeild"', "a link to"),
        ('href="build-sheet.pdf"', 'href="https:&#47;&#47;example.org/x"', "a link to"),
        ('href="build-sheet.pdf"', 'href="../x.pdf"', "a link to"),
        ('href="build-sheet.pdf"', 'href="javascript:alert(1)"', "a link to"),
        ('href="radiator/radiator.step"', 'href="radiator/none.step"', "a link to"),
        ("<h2>", '<h2 onclick="x()">', "onclick"),
        ("<h2>", '<h2 style="color: red">', "style"),
        ("<main", '<img src="x.png"><main', "nothing to fetch"),
        ('<link rel="icon" href="data:,">', '<link rel="stylesheet" href="x.css">', "links only"),
        ('"use strict"', '"use strict" ', "policy does not name"),
        ("* { box-sizing", "*  { box-sizing", "policy does not name"),
        ('aria-labelledby="made-head"', 'aria-labelledby="none"', "ids that are there"),
        ('"faces":"', '"faces:"', "no JSON"),
        ("url(#match-band)", "url(#none)", "an id that is there"),
        ("<desc ", "<dsc ", "without words"),
        ('class="wanted"', 'class="wanted" x="nan"', "no number"),
    ],
)
def test_a_faulty_page_is_refused(old: str, new: str, found: str, tmp_path: Path) -> None:
    path = written(report(), tmp_path)
    text = path.read_text(encoding="utf-8")
    check_report(path, "boatshed-5g8")
    assert old in text
    path.write_text(text.replace(old, new, 1), encoding="utf-8")
    with pytest.raises(FileCheckError, match=found):
        check_report(path, "boatshed-5g8")


# -- pictures ------------------------------------------------------------------------------------------


@given(st.floats(-1e6, 1e6), st.floats(1e-3, 1e6), st.integers(2, 12))
def test_ticks_are_round_and_inside(low: float, span: float, about: int) -> None:
    found = ticks(low, low + span, about)
    assert all(
        low - 1e-6 * span - 1e-9 * abs(low) <= t <= low + span * (1 + 1e-6) + 1e-9 * abs(low) for t in found
    )
    assert len(found) <= about + 1
    if len(found) > 1:
        step = float(np.mean(np.diff(found)))
        assert f"{step:.1e}"[:3] in ("1.0", "2.0", "5.0")


@pytest.mark.parametrize(
    ("up", "e_peak", "h_peak", "compass", "height"),
    [
        # The field lies along y, the H cut leans towards -x (z cross y). Looking along +z with y up, +x is on the left
        # (east, north, up: beam north, y up, so x = y cross z points west).
        ("y+", 20.0, 10.0, 10.0, 20.0),
        ("y+", -20.0, -10.0, -10.0, -20.0),
        ("y-", 20.0, 10.0, -10.0, -20.0),
        # x up, looking along +z: right is z cross x = +y, the E cut's side; the H cut leans downwards
        ("x+", 20.0, 10.0, 20.0, -10.0),
        ("x-", 20.0, 10.0, -20.0, 10.0),
    ],
)  # fmt: skip
def test_cuts_are_hung_the_right_way(
    up: str, e_peak: float, h_peak: float, compass: float, height: float
) -> None:
    seen = hung(prediction(e_peak, h_peak), up)
    for cut, wanted in zip(seen, (compass, height), strict=True):
        assert cut.angles_deg[int(np.argmax(cut.gain_dbi))] == wanted
        assert (np.diff(cut.angles_deg) > 0).all()
        assert float(cut.gain_dbi.max()) == pytest.approx(9.9)  # losses taken off


def test_the_chart_s_markers_stand_at_their_reflection(tmp_path: Path) -> None:
    """A reflection g stands at (210 + 178 Re g, 210 - 178 Im g) of the picture: right is open, up is inductive."""
    r = report()
    tree = parsed(written(r, tmp_path).read_text(encoding="utf-8"))
    (circle,) = tree.xpath("//*[@id='impedance-plot']//circle[@class='mark']")
    assert r.prediction is not None
    z = r.prediction.points[1].impedance_ohm
    g = (z - 50.0) / (z + 50.0)
    assert float(circle.get("cx")) == pytest.approx(210.0 + 178.0 * g.real, abs=0.01)
    assert float(circle.get("cy")) == pytest.approx(210.0 - 178.0 * g.imag, abs=0.01)
    low, high = tree.xpath("//*[@id='impedance-plot']//path[@class='mark']/@d")
    assert _middle(low)[1] > _middle(high)[1]  # below resonance it is capacitive, which is below


def _middle(path: str) -> np.ndarray:
    numbers = [float(v) for v in re.findall(r"-?[\d.]+", path)]
    middle: np.ndarray = np.array(numbers).reshape(-1, 2).mean(axis=0)
    return middle


def test_the_curve_passes_through_the_worst_point(tmp_path: Path) -> None:
    tree = parsed(written(report(), tmp_path).read_text(encoding="utf-8"))
    cross = tree.xpath("//*[@id='match-plot']//path[@class='cross']/@d")[0]
    x, y = (float(v) + 5.0 for v in re.findall(r"-?[\d.]+", cross)[:2])
    curve = tree.xpath("//*[@id='match-plot']//path[@class='curve predicted']/@d")[0]
    points = np.array([float(v) for v in re.findall(r"-?[\d.]+", curve)]).reshape(-1, 2)
    assert float(np.interp(x, points[:, 0], points[:, 1])) == pytest.approx(y, abs=0.3)


def test_meshes_come_back_whole() -> None:
    one = packed(shown("piece"))
    steps = np.frombuffer(base64.b64decode(one["corners"]), dtype="<u2").reshape(-1, 3)
    faces = np.frombuffer(base64.b64decode(one["faces"]), dtype="<u2").reshape(-1, 3)
    mesh = cube("piece")
    assert np.abs(np.array(one["origin"]) + steps * one["step"] - mesh.vertices).max() <= one["step"]
    assert (faces == mesh.faces).all()


def test_the_antenna_goes_first_when_room_is_short() -> None:
    pieces = (shown("tool", "fixture"), shown("wire"), shown("sheet"))
    size = len(packed(pieces[0])["corners"]) + len(packed(pieces[0])["faces"])
    kept, left_out = chosen(pieces, 2 * size)
    assert [p["name"] for p in kept] == ["wire", "sheet"] and left_out == ("tool",)
    assert len(chosen(pieces, 3 * size)[0]) == 3


# -- in a browser --------------------------------------------------------------------------------------


@pytest.fixture(scope="module")
def chromium() -> Iterator[Browser]:
    with browser() as page_:
        yield page_


def picture_of(page_: Browser, name: str) -> np.ndarray:
    """(h, w, 3) pixels of one element as the screen shows them."""
    box = page_.run(
        "const e = document.getElementById(arguments[0]); e.scrollIntoView({block: 'center'});"
        "const b = e.getBoundingClientRect(); return [b.x, b.y, b.width, b.height]",
        name,
    )
    clip = dict(zip(("x", "y", "width", "height"), box, strict=True)) | {"scale": 1}
    offset = page_.run("return [scrollX, scrollY]")
    clip["x"], clip["y"] = clip["x"] + offset[0], clip["y"] + offset[1]
    shot = page_.tools("Page.captureScreenshot", format="png", clip=clip, captureBeyondViewport=True)
    pixels: np.ndarray = np.asarray(Image.open(io.BytesIO(base64.b64decode(shot["data"]))).convert("RGB"))
    return pixels


def drawn(pixels: np.ndarray) -> float:
    """Share of pixels unlike the commonest colour."""
    flat = pixels.reshape(-1, 3).astype(int) @ np.array([65536, 256, 1])
    return 1.0 - float(np.bincount(flat).max()) / flat.size


@needs_browser
@pytest.mark.parametrize(("wide", "dark"), LOOKS)
def test_the_page_is_drawn(chromium: Browser, yard: tuple[Path, Any], wide: int, dark: bool) -> None:
    chromium.log()
    chromium.open((yard[0] / "report.html").as_uri(), wide=wide, high=800, dark=dark, touch=wide < 500)
    assert chromium.log() == []
    assert chromium.run("return performance.getEntriesByType('resource').length") == 0
    assert chromium.run("return document.documentElement.scrollWidth") <= wide
    names = chromium.run("return [...document.querySelectorAll('svg[id]')].map(s => s.id)")
    assert set(names) >= {
        "match-plot",
        "impedance-plot",
        "compass-plot",
        "height-plot",
        "sheet-plot",
        "bed-plot",
    }
    for name in [*(n for n in names if n != "parts-lines"), "parts-canvas"]:
        pixels = picture_of(chromium, name)
        assert pixels.shape[1] > 0.6 * min(wide, 560) - 40
        assert drawn(pixels) > 0.015, name
    ground = chromium.run("return getComputedStyle(document.body).backgroundColor")
    assert (sum(int(v) for v in re.findall(r"\d+", ground)[:3]) < 200) == dark


@needs_browser
def test_letters_in_pictures_can_be_read_on_a_phone(chromium: Browser, yard: tuple[Path, Any]) -> None:
    chromium.open((yard[0] / "report.html").as_uri(), wide=360, high=740, touch=True)
    sizes = chromium.run(
        "return [...document.querySelectorAll('figure svg[id] text')].map(t => parseFloat(getComputedStyle(t).fontSize)"
        " * Math.hypot(t.getScreenCTM().a, t.getScreenCTM().b))"
    )
    assert len(sizes) > 50 and min(sizes) >= 8.5


@needs_browser
def test_parts_turn_by_mouse_touch_and_keys(chromium: Browser, yard: tuple[Path, Any]) -> None:
    chromium.open((yard[0] / "report.html").as_uri(), wide=800, high=900)
    first = picture_of(chromium, "parts-canvas")
    box = chromium.run(
        "const b = document.getElementById('parts-canvas').getBoundingClientRect();"
        "return [b.x, b.y, b.width, b.height]"
    )
    x, y = box[0] + box[2] / 2, box[1] + box[3] / 2

    def look() -> np.ndarray:
        chromium.ask(
            "/execute/async",
            {"script": "requestAnimationFrame(() => setTimeout(arguments[0], 60))", "args": []},
        )
        return picture_of(chromium, "parts-canvas")

    def differs(a: np.ndarray, b: np.ndarray) -> float:
        return float((np.abs(a.astype(int) - b.astype(int)).max(axis=2) > 24).mean())

    def press(text: str) -> None:
        chromium.run(
            f"[...document.querySelectorAll('#parts-buttons button')].find(b => b.textContent === '{text}').click()"
        )

    for kind, at, held in (("mousePressed", x, 1), ("mouseMoved", x + 90, 1), ("mouseReleased", x + 90, 0)):
        chromium.tools(
            "Input.dispatchMouseEvent", type=kind, x=at, y=y + 20, button="left", buttons=held, clickCount=1
        )
    turned = look()
    assert differs(first, turned) > 0.02
    press("First view")
    assert differs(first, look()) < 0.005
    chromium.run("document.getElementById('parts-canvas').focus()")
    for key in ("ArrowLeft", "ArrowUp", "+"):
        before = look()
        chromium.tools("Input.dispatchKeyEvent", type="keyDown", key=key)
        assert differs(before, look()) > 0.01, key
    press("First view")
    chromium.tools("Emulation.setTouchEmulationEnabled", enabled=True)
    for kind, spread in (("touchStart", 30), ("touchMove", 60), ("touchMove", 100), ("touchEnd", None)):
        points = (
            [] if spread is None else [{"x": x - spread, "y": y, "id": 1}, {"x": x + spread, "y": y, "id": 2}]
        )
        chromium.tools("Input.dispatchTouchEvent", type=kind, touchPoints=points)
    pinched = look()
    assert drawn(pinched) > 1.5 * drawn(first)  # nearer
    press("First view")
    for kind, moved in (("touchStart", 0), ("touchMove", 40), ("touchMove", 80), ("touchEnd", None)):
        points = [] if moved is None else [{"x": x + moved, "y": y, "id": 1}]
        chromium.tools("Input.dispatchTouchEvent", type=kind, touchPoints=points)
    assert differs(first, look()) > 0.02
    chromium.tools("Emulation.setTouchEmulationEnabled", enabled=False)
    for view in ("From the front", "From the side", "From behind"):
        press(view)
        assert drawn(look()) > 0.02, view
    assert chromium.log() == []


@needs_browser
def test_every_part_can_be_seen_alone(chromium: Browser, yard: tuple[Path, Any]) -> None:
    chromium.open((yard[0] / "report.html").as_uri(), wide=800, high=900)
    script = (
        "const c = document.getElementById('parts-choice'); return [...c.options].map(o => o.textContent)"
    )
    names = chromium.run(script)
    assert {"radiator main", "reflector", "spacer-a", "board", "nest"} <= set(names)
    for number, name in enumerate(names):
        chromium.run(
            "const c = document.getElementById('parts-choice'); c.selectedIndex = arguments[0];"
            "c.dispatchEvent(new Event('change'))",
            number,
        )
        chromium.ask(
            "/execute/async",
            {"script": "requestAnimationFrame(() => setTimeout(arguments[0], 30))", "args": []},
        )
        assert drawn(picture_of(chromium, "parts-canvas")) > 0.004, name
    assert chromium.log() == []


@needs_browser
def test_the_page_can_be_walked_by_keys(chromium: Browser, yard: tuple[Path, Any]) -> None:
    chromium.open((yard[0] / "report.html").as_uri(), wide=800, high=900)
    walked = []
    for _ in range(24):
        for kind in ("keyDown", "keyUp"):
            chromium.tools(
                "Input.dispatchKeyEvent", type=kind, key="Tab", code="Tab", windowsVirtualKeyCode=9
            )
        walked.append(
            chromium.run("const e = document.activeElement; return e.id || e.textContent.slice(0, 40)")
        )
    assert walked[0] == "To the answers" and walked[1] == "Can it be made?"
    assert {"parts-canvas", "parts-choice", "First view"} <= set(walked)
    heads = chromium.run("return [...document.querySelectorAll('h1,h2,h3')].map(h => Number(h.tagName[1]))")
    assert heads[0] == 1 and heads.count(1) == 1
    assert all(b - a <= 1 for a, b in pairwise(heads))


@needs_browser
def test_hostile_text_does_nothing_in_a_browser(chromium: Browser, tmp_path: Path) -> None:
    chromium.open(written(hostile(), tmp_path).as_uri())
    assert chromium.run("return window.hacked") is None
    assert chromium.run("return document.querySelectorAll('img').length") == 0
    assert chromium.log() == []


@needs_browser
def test_yield_and_measured_pictures_are_drawn(chromium: Browser, tmp_path: Path) -> None:
    chromium.open(written(report(**proven()), tmp_path).as_uri(), wide=390, high=844, touch=True)
    for name in ("yield-plot", "match-plot", "impedance-plot"):
        assert drawn(picture_of(chromium, name)) > 0.02
    assert chromium.run("return document.documentElement.scrollWidth") <= 390
    assert chromium.log() == []


@needs_browser
@pytest.mark.parametrize("without", ["webgl", "scripts"])
def test_a_line_drawing_stands_in(without: str, yard: tuple[Path, Any]) -> None:
    with browser(*(["--disable-3d-apis"] if without == "webgl" else [])) as page_:
        if without == "scripts":
            page_.tools("Emulation.setScriptExecutionDisabled", value=True)
        page_.open((yard[0] / "report.html").as_uri(), wide=800, high=900)
        page_.tools("Emulation.setScriptExecutionDisabled", value=False)
        assert page_.run("return document.getElementById('parts-canvas').hidden")
        assert drawn(picture_of(page_, "parts-lines")) > 0.01
        assert "line drawing" in page_.run("return document.getElementById('parts-told').textContent")
        assert page_.run("return document.getElementById('parts-controls').hidden")
