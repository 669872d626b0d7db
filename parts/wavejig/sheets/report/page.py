"""report.html as a whole: head, answers in short, the questions one by one, the files."""

from __future__ import annotations

from collections.abc import Callable, Iterable
from importlib.resources import files
from pathlib import Path
from urllib.parse import quote

from wavejig.files.manifest import Entry
from wavejig.files.origin import RECIPE
from wavejig.sheets.making import FAMILY_WORDS
from wavejig.sheets.model import number
from wavejig.sheets.report.check import check_report
from wavejig.sheets.report.madesection import made_answer, made_section
from wavejig.sheets.report.markup import Child, Element, Own, el, policy_hash, write
from wavejig.sheets.report.matchsection import match_answer, match_section
from wavejig.sheets.report.model import Report
from wavejig.sheets.report.proofsection import change_answer, change_section, measure_answer, measure_section
from wavejig.sheets.report.tables import size_text, table
from wavejig.sheets.report.yieldsection import yield_answer, yield_section

NAME = "report.html"

_KINDS = {
    "3mf": "print, with units", "csv": "table", "dxf": "drawing or cut (CAD)", "glb": "to look at in 3D",
    "html": "page", "json": "data for programs", "pdf": "paper", "step": "solid (CAD)", "stl": "print",
    "svg": "picture", "toml": "the recipe, to build it again", "touchstone": "sweep, for analysers",
}  # fmt: skip
_PARTS = {"design": "the design", "assembly": "the antenna put together", "field": "the field model"}

Section = tuple[str, str, Callable[[Report], str], Callable[[Report], Iterable[Child]]]
_SECTIONS: tuple[Section, ...] = (
    ("made", "Can it be made?", made_answer, made_section),
    ("match", "Will it match, and where does it point?", match_answer, match_section),
    ("yield", "How many will pass?", yield_answer, yield_section),
    ("measure", "What do I measure?", measure_answer, measure_section),
    ("change", "What do I change?", change_answer, change_section),
)

_ON_SWEEPS = ("match", "yield", "change")


def write_report(report: Report, root: Path) -> tuple[Entry, ...]:
    """Write report.html into a pack's folder and read it back; the manifest's entries.

    Same report, same bytes. Raises FileCheckError, and OSError when it cannot be written.
    """
    path = root / NAME
    path.write_text(page(report), encoding="utf-8", newline="\n")
    check_report(path, report.design.name)
    return (Entry(path=NAME, kind="html", part="design", units=""),)


def write_sweeps(report: Report, path: Path) -> None:
    """A page of measured sweeps alone, standing where the user wants it, with no pack round it.

    Raises FileCheckError, and OSError when it cannot be written.
    """
    path.write_text(page(report, _ON_SWEEPS), encoding="utf-8", newline="\n")
    check_report(path, report.design.name)


def page(r: Report, keys: tuple[str, ...] | None = None) -> str:
    """The page as text; keys: of the only sections it is to have, without the pack's files."""
    style, script = _own("report.css"), _own("viewer.js")
    # nothing is fetched and no other script runs, wherever the page is opened
    policy = (
        f"default-src 'none'; img-src data:; style-src {policy_hash(style)}; script-src {policy_hash(script)}; "
        "base-uri 'none'; form-action 'none'"
    )
    head = el(
        "head",
        el("meta", charset="utf-8"),
        el("meta", http_equiv="Content-Security-Policy", content=policy),
        el("meta", name="viewport", content="width=device-width, initial-scale=1"),
        el("meta", name="generator", content="wavejig"),
        el("meta", name="referrer", content="no-referrer"),
        el("title", f"{r.design.name}: report"),
        el("link", rel="icon", href="data:,"),
        el("style", style),
    )
    body = el("body", _body(r, keys), el("script", script))
    return "<!DOCTYPE html>\n" + write(el("html", head, body, lang="en")) + "\n"


def _body(r: Report, keys: tuple[str, ...] | None) -> Iterable[Element]:
    sections = [s for s in _SECTIONS if keys is None or s[0] in keys]
    yield el("a", "To the answers", href="#main", class_="skip")
    d, t = r.design, r.design.target
    yield el(
        "header",
        el("h1", d.name),
        el(
            "p",
            f"{d.quantity} \u00d7 {FAMILY_WORDS[d.radiator.family]} before a "
            f"{_behind(r)}, {number(t.band_low_hz / 1e6)} to "
            f"{number(t.band_high_hz / 1e6)} MHz, {d.polarisation} polarisation; return loss of "
            f"{number(t.return_loss_db)} dB or more in {number(t.reference_ohm)} \u03a9 wanted over the whole band.",
        ),
        el(
            "nav",
            el("ul", [el("li", el("a", title, href=f"#{key}")) for key, title, _, _ in sections],
               el("li", el("a", "Files", href="#files")) if keys is None else []),
            aria_label="questions",
        ),
    )  # fmt: skip
    yield el(
        "main",
        el("h2", "In short"),
        el(
            "ul",
            [
                el("li", el("a", title, href=f"#{key}"), el("span", answer(r)), class_=_tone(key, r))
                for key, title, answer, _ in sections
            ],
            class_="answers",
        ),
        [
            el("section", el("h2", title, id=f"{key}-head"), inside(r), id=key, aria_labelledby=f"{key}-head")
            for key, title, _, inside in sections
        ],
        el("section", el("h2", "Files", id="files-head"), _files(r), id="files", aria_labelledby="files-head")
        if keys is None
        else [],
        id="main",
    )
    yield el(
        "footer",
        el(
            "p",
            "Cut sheet is sharp, bent wire is springy, solder burns and its fumes harm: read the cautions on the build "
            "sheet. Keep the distance it states while the antenna transmits. Work on masts is for people licensed for "
            "it, under the codes in force where you are.",
        ),
        class_="soft",
    )  # fmt: skip


def _behind(r: Report) -> str:
    if r.design.reflector.kind == "own":
        return "metal reflector that is there already"
    return "folded tray" if r.design.reflector.lips else "flat reflector"


def _tone(key: str, r: Report) -> str | None:
    """How an answer is set off; the words say it too."""
    if key == "made":
        if not r.inspection.can_be_made:
            return "error"
        return "warning" if any(f.severity == "warning" for f in r.inspection.findings) else "good"
    if key == "match" and r.prediction is not None:
        return "good" if r.prediction.meets_target else "error"
    return None


def _files(r: Report) -> Iterable[Element]:
    yield el(
        "p", "Links work where this page lies in its pack's folder. Sizes are of this build; checksums are in ",
        el("a", "manifest.json", href="manifest.json"), ".",
    )  # fmt: skip
    rows = [
        (
            el("a", e.path, href=quote(e.path)),
            _PARTS.get(e.part, e.part),
            _KINDS.get(e.kind, e.kind),
            e.units or "-",
            "-" if e.path == RECIPE else size_text(size),
        )
        for e, size in sorted(r.files, key=lambda f: f[0].path)
    ]
    # remarks may change in the recipe without a new page: its size is no part of this one
    total = size_text(sum(size for e, size in r.files if e.path != RECIPE))
    yield table(
        f"{len(rows)} files, {total}, and this page",
        ("file", "of", "what", "unit", "size"),
        rows,
        numbers=(4,),
    )


def _own(name: str) -> Own:
    return Own((files("wavejig.sheets.report") / name).read_text(encoding="utf-8"))
