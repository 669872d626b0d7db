"""What the printed pages say, read back from the PDF by programs that had no part in setting them."""

from __future__ import annotations

import csv
import hashlib
import itertools
import os
import re
import shutil
import subprocess
import sys
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import ezdxf
import numpy as np
import pdfplumber
import pypdfium2
import pytest
from pypdf import PdfReader

import wavejig
from tests.designs import design
from tests.sheets.conftest import RECIPES, SAMPLED, inspected, pattern_of
from wavejig.files.errors import FileCheckError
from wavejig.files.tables import write_bend_table
from wavejig.sheets.buildsheet import BuildSheet, write_build_sheet
from wavejig.sheets.pdf import check_pdf
from wavejig.sheets.sheetfiles import drawings, write_sheets
from wavejig.shop import inspect

MM = 72.0 / 25.4
SALTMARSH = "saltmarsh-2g4"


def words(path: Path) -> str:
    """All text of a PDF, white space evened out."""
    return " ".join(" ".join(page.extract_text().split()) for page in PdfReader(path).pages)


@pytest.mark.parametrize("name", SAMPLED)
def test_every_character_found_its_glyph(name: str, written: Callable[[str], Path]) -> None:
    """A character the face lacks is printed as a question mark; our own sentences ask no questions."""
    for path in sorted(written(name).rglob("*.pdf")):
        assert "?" not in words(path), path.name
        assert "\ufffd" not in words(path)


@pytest.mark.parametrize("name", SAMPLED)
def test_pages_are_numbered_to_the_last(name: str, written: Callable[[str], Path]) -> None:
    pages = PdfReader(written(name) / "build-sheet.pdf").pages
    for i, page in enumerate(pages, start=1):
        text = " ".join(page.extract_text().split())
        assert f"page {i} of {len(pages)}" in text
        assert f"{name}: build sheet" in text


def test_the_bend_table_is_the_one_of_the_csv(tmp_path: Path, written: Callable[[str], Path]) -> None:
    """Each bend's numbers stand in a row of the sheet as the CSV has them, to the printed digits."""
    radiator = inspected(SALTMARSH).radiator
    assert radiator is not None
    write_bend_table(radiator, tmp_path / "bends.csv")
    with (tmp_path / "bends.csv").open(newline="") as stream:
        wanted = [r for r in csv.DictReader(stream) if r["piece"] in ("main", "ground-leg")]
    rows = []
    with pdfplumber.open(written(SALTMARSH) / "build-sheet.pdf") as pdf:
        for page in pdf.pages:
            for table in page.extract_tables():
                if table and table[0][1:2] == ["from start"]:
                    rows += table[1:]
    assert len(rows) == len(wanted) == 12
    for row, want in zip(rows, wanted, strict=True):
        numbers = [float(str(c).rstrip("\u00b0")) for c in row[:8]]
        keys = ("bend", "from_start_mm", "feed_mm", "rotation_deg", "angle_deg", "loaded_angle_deg", "inside_radius_mm",
                "loaded_inside_radius_mm")  # fmt: skip
        for got, key in zip(numbers, keys, strict=True):
            assert got == pytest.approx(float(want[key]), abs=0.0505 if "deg" in key else 0.00505), key


@pytest.mark.parametrize("name", SAMPLED)
def test_scale_bars_are_100_mm(name: str, written: Callable[[str], Path]) -> None:
    """On every template page one bar lies and one stands, each 100 mm within what the file's digits hold."""
    found = 0
    with pdfplumber.open(written(name) / "build-sheet.pdf") as pdf:
        for page in pdf.pages:
            if "TEMPLATE 1:1" not in page.extract_text():
                continue
            found += 1
            level = [
                ln
                for ln in page.lines
                if abs(ln["x1"] - ln["x0"] - 100.0 * MM) < 0.02 and ln["height"] < 1e-3
            ]
            upright = [
                ln for ln in page.lines if abs(ln["height"] - 100.0 * MM) < 0.02 and ln["width"] < 1e-3
            ]
            assert level, page.page_number
            assert upright, page.page_number
            standing = [ln for ln in page.lines if ln["width"] < 1e-3 and MM < ln["height"] < 3.1 * MM]
            on_bar = [ln for ln in standing if abs(ln["bottom"] - level[0]["bottom"]) < 0.05]
            ticks = sorted({round(ln["x0"], 2) for ln in on_bar})
            assert len(ticks) == 11
            assert all(abs(b - a - 10.0 * MM) < 0.02 for a, b in itertools.pairwise(ticks))
    assert found >= 2


def test_templates_are_true_to_size(written: Callable[[str], Path]) -> None:
    """The blank of the smallest antenna on its page: 52 mm wide and high, its tube hole 2.4 mm."""
    with pdfplumber.open(written("boatshed-5g8") / "build-sheet.pdf") as pdf:
        page = next(p for p in pdf.pages if "REFLECTOR BLANK" in p.extract_text())
        sizes = [(c["width"] / MM, c["height"] / MM) for c in page.curves]
    assert any(abs(w - 52.0) < 0.01 and abs(h - 52.0) < 0.01 for w, h in sizes)
    assert any(abs(w - 2.4) < 0.01 and abs(h - 2.4) < 0.01 for w, h in sizes)


def test_tiles_overlap_and_cover_the_whole(written: Callable[[str], Path]) -> None:
    """The large blank needs several pages, and says so on each."""
    text = words(written("ridge-868") / "build-sheet.pdf")
    grid = re.findall(r"tile (\d+)-(\d+) of (\d+) rows and (\d+) columns", text)
    assert len(grid) >= 4
    for rows, columns in {(r, c) for _, _, r, c in grid}:
        tiles = {(int(a), int(b)) for a, b, r, c in grid if (r, c) == (rows, columns)}
        assert tiles == {(i, j) for i in range(1, int(rows) + 1) for j in range(1, int(columns) + 1)}


def test_the_sheet_says_what_the_bench_must_know(written: Callable[[str], Path]) -> None:
    text = words(written(SALTMARSH) / "build-sheet.pdf")
    for needle in (
        "2400 to 2483.5 MHz", "Screw a mating plug onto the connector", "Clip a heat sink", "Wash the flux off",
        "it reads as a SHORT", "EIRP", "check the limits where you are", "overhead lines", "licensed", "THIS EDGE UP",
        "drip loop", "drain holes", "assumed: the recipe does not say", "not a rating",
        "seen from the radiator side",
        "starting-values", "15.95 to 16.55 mm",
    ):  # fmt: skip
        assert needle in text, needle


@pytest.mark.parametrize("name", SAMPLED)
def test_every_view_says_from_which_side(name: str) -> None:
    for _, sheet in drawings(inspected(name), pattern_of(inspected(name))):
        for view in sheet.views:
            assert re.search(r"seen from|from above|^[FK] \(", view.title), view.title


def test_recipe_text_is_never_markup(tmp_path: Path) -> None:
    """A name and a finding full of markup come out letter for letter, in PDF and DXF."""
    plain = inspected(SALTMARSH)
    nasty = "<b>a&amp;b</b> <para> %%u\\P{x}"
    finding = replace(plain.findings[0], message=nasty, severity="warning")
    spoilt = replace(plain, design=replace(plain.design, name=nasty), findings=(finding, *plain.findings[1:]))
    write_sheets(spoilt, pattern_of(plain), tmp_path)
    squeezed = "".join(nasty.split())
    for path in sorted(tmp_path.rglob("*.pdf")):
        assert squeezed in "".join(words(path).split()), path.name
    text = "".join(words(tmp_path / "build-sheet.pdf").split())
    pages = len(PdfReader(tmp_path / "build-sheet.pdf").pages)
    assert f"{finding.code}:{squeezed}." in text  # a paragraph's own words
    assert text.count(f"{squeezed}:buildsheet") == pages + 1  # every footer, and the title
    texts = [
        t.plain_text() for t in ezdxf.readfile(tmp_path / "drawings" / "blank.dxf").modelspace().query("TEXT")
    ]
    assert any("<b>a&amp;b</b> <para>" in t for t in texts)


@pytest.mark.parametrize(("paper", "size"), [("A4", (210.0, 297.0)), ("Letter", (215.9, 279.4))])
def test_paper_is_the_recipe_s(paper: str, size: tuple[float, float], tmp_path: Path) -> None:
    made = inspect(design(reflector={"lips": "four"}, sheet={"paper": paper}))
    write_sheets(made, pattern_of(made), tmp_path)
    for path in sorted(tmp_path.rglob("*.pdf")):
        for page in PdfReader(path).pages:
            box = (float(page.mediabox.width) / MM, float(page.mediabox.height) / MM)
            want = size if path.name == "build-sheet.pdf" else size[::-1]
            assert box == pytest.approx(want, abs=0.01)


@pytest.mark.parametrize("name", SAMPLED)
def test_nothing_is_printed_at_the_paper_s_edge(name: str, written: Callable[[str], Path]) -> None:
    """Every page rendered has 5 mm of white all round: printers cannot print there."""
    dots_per_mm = 3.0
    edge = int(5.0 * dots_per_mm)
    for path in sorted(written(name).rglob("*.pdf")):
        document = pypdfium2.PdfDocument(path)
        for i, page in enumerate(document, start=1):
            grey = page.render(scale=dots_per_mm / MM, grayscale=True).to_numpy().squeeze()
            assert grey[edge:-edge, edge:-edge].min() < 128, f"{path.name} page {i} is empty"
            white = np.ones_like(grey, dtype=bool)
            white[edge:-edge, edge:-edge] = False
            assert grey[white].min() > 250, f"{path.name} page {i}"
        document.close()


def test_same_bytes_in_two_processes(tmp_path: Path) -> None:
    code = (
        "import sys\nfrom pathlib import Path\nfrom wavejig.pack import inspect_recipe\n"
        "from wavejig.reflector.flat import flat_pattern\nfrom wavejig.sheets.sheetfiles import "
        "write_sheets\n"
        "i = inspect_recipe(Path(sys.argv[1]))[1]\n"
        "write_sheets(i, flat_pattern(i.tray, i.design.name), Path(sys.argv[2]))\n"
    )
    sums = []
    for seed, zone in (("1", "UTC"), ("2", "Pacific/Kiritimati")):
        folder = tmp_path / f"run-{seed}"
        folder.mkdir()
        subprocess.run(
            [sys.executable, "-c", code, str(RECIPES / "boatshed-5g8.toml"), str(folder)],
            check=True,
            env={
                "PYTHONHASHSEED": seed,
                "TZ": zone,
                "PATH": "/usr/bin:/bin",
                "PYTHONPATH": str(Path(wavejig.__file__).parents[1]),
            },
        )
        sums.append(
            {
                p.relative_to(folder).as_posix(): hashlib.sha256(p.read_bytes()).hexdigest()
                for p in sorted(folder.rglob("*.*"))
            }
        )
    assert sums[0] == sums[1]
    assert len(sums[0]) == 7


def test_same_bytes_twice_in_one_process(tmp_path: Path) -> None:
    sheet = BuildSheet(inspection=inspected(SALTMARSH), pattern=pattern_of(inspected(SALTMARSH)))
    write_build_sheet(sheet, tmp_path / "a.pdf")
    write_build_sheet(sheet, tmp_path / "b.pdf")
    assert (tmp_path / "a.pdf").read_bytes() == (tmp_path / "b.pdf").read_bytes()


def test_no_date_gets_into_a_file(written: Callable[[str], Path]) -> None:
    """The one date there is, is the library's fixed one."""
    for path in sorted(written(SALTMARSH).rglob("*.pdf")):
        info = PdfReader(path).metadata
        assert info is not None
        assert str(info.get("/CreationDate", "")).startswith("D:2000")


def test_a_spoilt_sheet_is_refused(tmp_path: Path, written: Callable[[str], Path]) -> None:
    good = written(SALTMARSH) / "build-sheet.pdf"
    assert check_pdf(good, SALTMARSH, (210.0, 297.0)) >= 5
    with pytest.raises(FileCheckError, match="paper"):
        check_pdf(good, SALTMARSH, (215.9, 279.4))
    with pytest.raises(FileCheckError, match="name"):
        check_pdf(good, "another-recipe", (210.0, 297.0))
    cut = tmp_path / "cut.pdf"
    cut.write_bytes(good.read_bytes()[:2000])
    with pytest.raises(FileCheckError):
        check_pdf(cut, SALTMARSH, (210.0, 297.0))


def test_fonts_are_embedded_and_text_can_be_selected(written: Callable[[str], Path]) -> None:
    """Looked up in the raw file: every font is a subset with its TrueType data and its table of characters."""
    for path in sorted(written(SALTMARSH).rglob("*.pdf")):
        fonts = {
            str(f.get_object()["/BaseFont"]): f.get_object()
            for page in PdfReader(path).pages
            for f in page["/Resources"]["/Font"].values()  # type: ignore[index]
        }
        assert 1 <= len(fonts) <= 6
        for name, font in fonts.items():
            assert re.match(r"/[A-Z0-9]{6}\+BitstreamVeraSans", name), name
            assert "/FontFile2" in font["/FontDescriptor"].get_object()
            assert "/ToUnicode" in font


def test_a_plane_cad_viewer_draws_the_dimensions(tmp_path: Path, written: Callable[[str], Path]) -> None:
    """The viewer makes dimensions anew from their definition points: much more ink than without them."""
    if shutil.which("librecad") is None:
        pytest.skip("librecad is not installed")
    whole, bare = tmp_path / "whole.dxf", tmp_path / "bare.dxf"
    shutil.copy(written(SALTMARSH) / "drawings" / "blank.dxf", whole)
    document = ezdxf.readfile(whole)
    for dimension in list(document.modelspace().query("DIMENSION")):
        document.modelspace().delete_entity(dimension)
    document.saveas(bare)
    ink = []
    for path in (whole, bare):
        subprocess.run(
            ["librecad", "dxf2pdf", "-a", "-p", "420x297", str(path)],
            check=True, capture_output=True, cwd=tmp_path, timeout=240,
            env={**os.environ, "QT_QPA_PLATFORM": "offscreen", "XDG_RUNTIME_DIR": str(tmp_path), "HOME": str(tmp_path)},
        )  # fmt: skip
        page = pypdfium2.PdfDocument(path.with_suffix(".pdf"))[0]
        ink.append(int((page.render(scale=2.0, grayscale=True).to_numpy() < 250).sum()))
    assert ink[0] > 1.1 * ink[1]
