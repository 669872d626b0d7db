"""Text of a recipe, of a file's name or of a sweep comes out of every format as text, and as nothing else.

First: which keys of a recipe take free text at all. Then each writer is given hostile texts, whether a recipe could
hold them or not, and the file is read back by that format's own reader.
"""

from __future__ import annotations

import csv
import io
import json
import os
import re
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from dataclasses import replace
from pathlib import Path, PurePosixPath, PureWindowsPath
from typing import Any

import ezdxf
import lxml.etree
import lxml.html
import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import BaseModel, TypeAdapter, ValidationError

from tests.recipe.bad_recipes import GOOD
from wavejig.batch.model import Bill, BillLine
from wavejig.cli import main
from wavejig.files.billfile import check_bill, write_bill
from wavejig.recipe import Recipe, RecipeError, read_recipe
from wavejig.recipe.cells import FORMULA, safe_cell
from wavejig.recipe.errors import visible
from wavejig.recipe.fields import Name

MARKUP = [
    "<script>alert(1)</script>",
    "</title><b>",
    "<!--",
    "]]>",
    "&lt;&amp;&#60;",
    "\" onload='x",
    "</script>",
    "<img src=x>",
]
FORMULAS = [
    "=1+1",
    "+1",
    "-1",
    "@SUM(A1)",
    "\t=1",
    "  =1",
    "=cmd|' /C calc'!A0",
    "\uff1d1",
    "\r=1",
    ";=1",
    ",=1",
    '",=1',
]
CODES = [
    "%%d", "%%%d", "%%%%c", "%%u", "%%065", r"\P", r"{\fArial;x}", "^J", "^ ", r"\U+2205", r"\M+1A4A1", "\\", "{}", "<>", "%",
    "%%" * 5, "^", r"\S1/2;",
]  # fmt: skip
PATHS = [
    "../x",
    "/etc/passwd",
    "a/b",
    r"..\x",
    "C:x",
    "CON",
    "con.txt",
    "a.",
    " a",
    "-rf",
    "x" * 400,
    "🛰️",
    "a:b",
    "~",
    "$HOME",
    "a*",
]
STRINGS = [
    "it's",
    "''",
    "'; DROP",
    r"\X2\03A9\X0\ ",
    r"\S\d",
    "\\N\\",
    "a#b",
    "$(reboot)",
    "`reboot`",
    "$\\frac{1}{$",
    "a\\",
    "END-ISO;",
]
SIGNS = ["\u202egnp", "\u2028", "Ωµ°Ø±", "é", "\ufeff", "🛰", "\u0000", "\u001b[31m", "\ud800", "\x7f", "\x85"]
HOSTILE = [*MARKUP, *FORMULAS, *CODES, *PATHS, *STRINGS, *SIGNS]
CURRENCY_MOST = 12


# -- which keys ----------------------------------------------------------------------------------------------


def leaves(model: type[BaseModel], above: str = "") -> Iterator[tuple[str, Any]]:
    """Every key that is no table, with what reads it."""
    for key, field in model.model_fields.items():
        inner = [
            a for a in (field.annotation, *getattr(field.annotation, "__args__", ())) if isinstance(a, type)
        ]
        tables = [a for a in inner if issubclass(a, BaseModel)]
        if tables:
            yield from leaves(tables[0], f"{above}{key}.")
        else:
            yield f"{above}{key}", TypeAdapter(model.__annotations__ and _annotated(model, key))


def _annotated(model: type[BaseModel], key: str) -> Any:
    from typing import get_type_hints

    return get_type_hints(model, include_extras=True)[key]


def test_two_keys_take_free_text_and_no_more() -> None:
    """A new key that takes any text must be added here, and to the tests below."""
    free: dict[str, list[str]] = {}
    looked = 0
    for key, adapter in leaves(Recipe):
        looked += 1
        for text in HOSTILE:
            try:
                adapter.validate_python(text)
            except (ValidationError, ValueError):
                continue
            free.setdefault(key, []).append(text)
    assert looked > 120
    # words that are looked up in a stock table later take letters and digits: "CON" is one
    looked_up = {
        k for k, taken in free.items() if all(re.fullmatch("[A-Za-z0-9][A-Za-z0-9 ._+-]*", t) for t in taken)
    }
    assert {k.split(".")[-1] for k in looked_up} <= {
        "material",
        "metal",
        "temper",
        "process",
        "connector",
        "tube",
    }
    free = {k: taken for k, taken in free.items() if k not in looked_up}
    assert set(free) == {"prices.currency", "measured.sweep"}
    for taken in free.values():  # and those are one line that shows, whatever else
        assert all(text.isprintable() for text in taken)


@given(st.text(max_size=60) | st.from_regex(r"[A-Za-z0-9._-]{1,50}", fullmatch=True))
def test_a_name_that_is_taken_is_a_folder_of_its_own_everywhere(name: str) -> None:
    try:
        TypeAdapter(Name).validate_python(name)
    except ValidationError:
        return
    assert name.isascii() and name.isprintable() and 1 <= len(name) <= 48
    for kind in (PurePosixPath, PureWindowsPath):
        path = kind("out") / name
        assert path.parent == kind("out") and path.name == name
    assert name[0] not in ".-~" and name[-1] not in ". "
    assert not PureWindowsPath(name).is_reserved()
    assert safe_cell(name) == name


@pytest.mark.parametrize("text", HOSTILE)
def test_no_hostile_text_is_a_name(text: str) -> None:
    with pytest.raises(ValidationError):
        TypeAdapter(Name).validate_python(text)


@pytest.mark.parametrize(
    "text", [t for t in HOSTILE if "/" not in t and "\0" not in t and len(t) < 200 and "\ud800" not in t]
)
def test_new_makes_a_sound_recipe_whatever_the_file_is_called(text: str, tmp_path: Path) -> None:
    path = tmp_path / f"{text}.toml"
    assert main(["new", str(path)]) == 0
    assert TypeAdapter(Name).validate_python(read_recipe(path).recipe.name)
    assert [p.name for p in tmp_path.iterdir()] == [path.name]


# -- tables -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("text", [t for t in HOSTILE if len(t) <= CURRENCY_MOST and t.isprintable()])
def test_the_bill_keeps_a_currency_as_text(text: str, tmp_path: Path) -> None:
    recipe = read(tmp_path, f"[prices]\ncurrency = {json.dumps(text, ensure_ascii=False)}\nwire = 1.5\n")
    assert recipe.prices.currency == text
    line = BillLine(
        key="wire", item="wire", material="copper", size="1.8 mm", each=1.0, count=2.0, unit="m", price=1.5,
        remark=text,
    )  # fmt: skip
    bill = Bill(lines=(line,), currency=text)
    write_bill(bill, tmp_path / "bill.csv")
    check_bill(tmp_path / "bill.csv", bill)
    with (tmp_path / "bill.csv").open(newline="", encoding="utf-8") as stream:
        rows = list(csv.reader(stream))
    assert len(rows) == 3 and {len(row) for row in rows} == {12}
    for row in rows:
        assert not any(cell.startswith(FORMULA) or cell.lstrip().startswith(FORMULA) for cell in row)
    assert rows[1][10].removeprefix("'" if text.lstrip(" ").startswith(FORMULA) else "") == text


def test_every_cell_of_every_table_goes_through_one_door() -> None:
    """Hostile cells in all columns that can hold words."""
    for text in HOSTILE:
        out = io.StringIO()
        csv.writer(out).writerow([safe_cell(text), "end"])
        cell, end = next(iter(csv.reader(io.StringIO(out.getvalue(), newline=""))))
        assert end == "end" and cell.lstrip("'") == text.lstrip("'")
        assert not cell.lstrip(" ").startswith(FORMULA)


# -- drawings and models ------------------------------------------------------------------------------------------


def test_lettering_in_dxf_is_read_as_it_was_written(tmp_path: Path) -> None:
    from tests.sheets.conftest import inspected
    from wavejig.sheets.dxfsheet import write_sheet_dxf
    from wavejig.sheets.model import Text
    from wavejig.sheets.radiator import radiator_drawing

    inspection = inspected("boatshed-5g8")
    assert inspection.radiator is not None
    sheet = radiator_drawing(inspection.design, inspection.radiator)
    texts = [t for t in HOSTILE if "\ud800" not in t]
    words = tuple(Text(at=(0.0, float(i)), text=f"<{t}>") for i, t in enumerate(texts))
    view = sheet.views[0]
    marked = replace(sheet, views=(replace(view, items=(*view.items, *words)), *sheet.views[1:]))
    write_sheet_dxf(marked, tmp_path / "r.dxf", 'na"me\n  0\nEOF')
    document = ezdxf.readfile(tmp_path / "r.dxf")
    assert not document.audit().has_errors
    got = [t.plain_text() for t in document.modelspace().query("TEXT") if t.plain_text().startswith("<")]

    def shown(text: str) -> str:
        """Without what is spaced out on purpose, and without what has no picture."""
        return "".join(c for c in text if c not in " ^" and c.isprintable())

    assert sorted(shown(t) for t in got) == sorted(shown(f"<{t}>") for t in texts)
    assert len(document.modelspace().query("MTEXT")) == 0


@pytest.mark.parametrize("text", HOSTILE)
def test_titles_and_names_in_3mf_are_text(text: str, tmp_path: Path) -> None:
    import zipfile

    import numpy as np
    import trimesh

    from wavejig.files.mesh import Mesh
    from wavejig.files.names import clean_name
    from wavejig.files.stl import read_stl, write_stl
    from wavejig.files.threemf import write_3mf

    box = trimesh.creation.box((1.0, 1.0, 1.0))
    mesh = Mesh(name=text, vertices=np.asarray(box.vertices), faces=np.asarray(box.faces))
    write_3mf([mesh], tmp_path / "a.3mf", text)
    with zipfile.ZipFile(tmp_path / "a.3mf") as archive:
        root = lxml.etree.fromstring(archive.read("3D/3dmodel.model"))
    space = {"m": root.nsmap[None]}
    assert root.find("m:metadata[@name='Title']", space).text == clean_name(text)
    assert [o.get("name") for o in root.iterfind(".//m:object", space)] == [clean_name(text)]
    assert len(list(root.iter())) == 3 + 1 + 4 + 8 + 12 + 2  # nothing was added by the text
    write_stl(mesh, tmp_path / "a.stl", text)
    header, corners = read_stl(tmp_path / "a.stl")
    assert len(corners) == 12 and header.isascii() and header.isprintable()
    assert "=" not in header and not header.lower().startswith("solid")


def test_titles_and_names_in_step_are_text(tmp_path: Path) -> None:
    import cadquery as cq

    from wavejig.files.step import NamedSolid, step_name, write_step
    from wavejig.files.stepcheck import check_step

    shape = cq.Workplane().box(1, 1, 1).val()
    for i, text in enumerate(HOSTILE):
        path = tmp_path / f"{i}.step"
        write_step([NamedSolid(name=text, shape=shape, colour=(0.5, 0.5, 0.5))], path, text)
        raw = path.read_bytes()
        assert raw.isascii() and raw.startswith(b"ISO-10303-21;") and raw.count(b"END-ISO-10303-21;") == 1
        assert raw.count(b"'") % 2 == 0
        if i % 6 == 0:  # the kernel's reader is slow
            assert step_name(text).isascii()
            check_step(path, [NamedSolid(name=step_name(text), shape=shape, colour=(0.5, 0.5, 0.5))])


# -- pages ----------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("text", HOSTILE)
def test_html_and_svg_hold_it_as_text(text: str) -> None:
    from wavejig.fixture.bending.pen import text_element
    from wavejig.sheets.report.markup import data, el, fit, write

    page = el("html", el("head", el("title", text), el("script", data({"t": fit(text)}), type="application/json", id="d")),
              el("body", el("p", text, title=text, id="p")))  # fmt: skip
    tree = lxml.html.document_fromstring("<!DOCTYPE html>\n" + write(page))
    assert sorted(e.tag for e in tree.iter() if isinstance(e.tag, str)) == [
        "body",
        "head",
        "html",
        "p",
        "script",
        "title",
    ]
    same = fit(text).replace("\r", "\n")
    assert tree.get_element_by_id("p").text_content().replace("\r", "\n") == same
    assert tree.get_element_by_id("p").get("title").replace("\r", "\n") == same
    assert json.loads(tree.get_element_by_id("d").text)["t"] == fit(text)
    svg = lxml.etree.fromstring(text_element(text, 0.0, 0.0, 3.0))
    assert svg.text == visible(text) and len(svg) == 0


def test_the_pdf_shows_it_as_text(tmp_path: Path) -> None:
    from pypdf import PdfReader
    from reportlab.platypus import SimpleDocTemplate

    from wavejig.sheets.flow import heading, lead, para, table
    from wavejig.sheets.fonts import printable

    flow = []
    for i, text in enumerate(HOSTILE):
        flow += [
            para(f"p{i}[{text}]"),
            lead(f"l{i}[{text}]", text),
            table(["h", text], [[f"c{i}", text]], [40.0, 100.0]),
        ]
    flow.append(heading(HOSTILE[0]))
    SimpleDocTemplate(str(tmp_path / "a.pdf"), invariant=1).build(flow)
    reader = PdfReader(tmp_path / "a.pdf")
    told = "".join("".join(page.extract_text() for page in reader.pages).split())
    for i, text in enumerate(HOSTILE):
        want = "".join(printable(f"p{i}[{text}]".replace("\n", " ")).split())
        assert want in told, (text, want)
    root = reader.trailer["/Root"]
    assert "/OpenAction" not in root and "/AA" not in root
    assert all("/Annots" not in page for page in reader.pages)  # no link came of it


def test_a_sweep_file_of_any_name_is_told_as_text(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """Serial number, plot label and the recipe's own note of it."""
    pytest.importorskip("matplotlib")
    import matplotlib

    matplotlib.use("Agg")
    from matplotlib.figure import Figure

    from wavejig.recipe.edit import Put, edited
    from wavejig.tuning.correction import _text
    from wavejig.tuning.sweepfile import serial_number

    for text in HOSTILE:
        name = PurePosixPath(f"{text.replace('/', '_')}.s1p")
        serial = serial_number(Path(name), f"serial: {text}")
        assert serial.isprintable() and len(serial) <= 40
        written = edited(GOOD, [Put(table="measured", key="sweep", value=_text(name.name), remark="r")])
        assert set(tomllib.loads(written)) == {*tomllib.loads(GOOD), "measured"}
        figure = Figure()
        axes = figure.subplots()
        axes.plot([0, 1], label="serial " + serial.replace("$", r"\$"))
        axes.legend()
        figure.canvas.draw()


# -- the terminal -----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize("command", ["check", "build", "match", "tune", "yield", "watch"])
def test_a_file_name_cannot_give_orders_to_the_terminal(
    command: str, tmp_path: Path, capsys: pytest.CaptureFixture[str]
) -> None:
    name = tmp_path / "a\x1b[31m\u202e.toml"
    name.write_text(GOOD.replace('"biquad"', r'"\u001b[2Jbiquat"'), encoding="utf-8")
    missing = tmp_path / "b\x1b]0;t\x07.toml"
    for path in (missing,) if command == "watch" else (name, missing):
        assert main([command, str(path)]) == 2
    told = capsys.readouterr()
    for stream in (told.out, told.err):
        assert visible(stream, keep="\n") == stream


@pytest.mark.parametrize(
    "arguments", [["chek\x1b[31m"], ["check", "--x\x1b]0;t\x07"], ["stock", "\u202emetals"]]
)
def test_a_misspelt_word_is_written_out(arguments: list[str], capsys: pytest.CaptureFixture[str]) -> None:
    try:
        assert main(arguments) == 2
    except SystemExit as stop:
        assert stop.code == 2
    told = capsys.readouterr().err
    assert told and visible(told, keep="\n") == told


def test_a_terminal_of_few_letters_is_no_fault(tmp_path: Path) -> None:
    """ASCII alone, and a file's name that is no text at all."""
    name = os.fsencode(tmp_path) + b"/y\xff\xc3\xa9.toml"
    Path(os.fsdecode(name)).write_text(GOOD)
    for command in ([b"check", name], [b"stock", b"awg"], [b"check", name + b"x"], [b"new", name + b".toml"]):
        done = subprocess.run(
            [sys.executable.encode(), b"-m", b"wavejig", *command], capture_output=True, check=False,
            env={**os.environ, "PYTHONIOENCODING": "ascii"}, cwd=tmp_path,
        )  # fmt: skip
        assert done.returncode in (0, 2), done.stderr
        assert b"Traceback" not in done.stderr and (done.stdout + done.stderr).isascii()


def read(folder: Path, more: str) -> Recipe:
    """The good recipe with more lines."""
    path = folder / "r.toml"
    path.write_text(GOOD + more, encoding="utf-8")
    try:
        return read_recipe(path).recipe
    except RecipeError as err:
        raise AssertionError(str(err)) from err
