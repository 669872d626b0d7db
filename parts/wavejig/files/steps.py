"""fixture/steps.svg: the bending steps as pictures, and its check with an XML parser."""

from __future__ import annotations

import re
from pathlib import Path
from xml.etree import ElementTree

from wavejig.files.errors import FileCheckError
from wavejig.fixture.bending.model import BendOrder

_SVG = "{http://www.w3.org/2000/svg}"
_NUMBER = re.compile(r"-?\d+\.?\d*")


def write_steps(text: str, path: Path) -> None:
    """Write the strip."""
    path.write_text(text, encoding="utf-8", newline="\n")


def check_steps(path: Path, order: BendOrder) -> None:
    """Raise FileCheckError unless the file is SVG with a frame for each step, in order, all of it on the page."""
    try:
        root = ElementTree.fromstring(path.read_bytes())
    except ElementTree.ParseError as err:
        raise FileCheckError(path, f"no XML: {err}", "an SVG picture") from err
    if root.tag != f"{_SVG}svg":
        raise FileCheckError(path, root.tag, "an SVG picture")
    frames = [g for g in root.iter(f"{_SVG}g") if g.get("class") == "step"]
    steps = [s for piece in order.pieces for s in piece.steps]
    if len(frames) != len(steps):
        raise FileCheckError(path, f"{len(frames)} frames", f"{len(steps)}")
    _, _, width, height = (float(v) for v in (root.get("viewBox") or "0 0 0 0").split())
    for frame, step in zip(frames, steps, strict=True):
        words = " ".join(t.text or "" for t in frame.iter(f"{_SVG}text"))
        if f"Bend {step.number}." not in words or f"{step.loaded_angle_deg:.1f}" not in words:
            raise FileCheckError(path, words[:60], f"the step of bend {step.number}")
        picture = next(frame.iter(f"{_SVG}svg"))
        x, y, w, h = (float(picture.get(k) or "nan") for k in ("x", "y", "width", "height"))
        if not (x >= 0.0 and y >= 0.0 and x + w <= width + 1e-6 and y + h <= height + 1e-6):
            raise FileCheckError(path, f"a frame at {x:g}, {y:g}", f"within {width:g} x {height:g}")
        drawn = [p.get("d") or "" for p in picture.iter(f"{_SVG}path")]
        if not drawn or any(len(_NUMBER.findall(d)) < 4 or "nan" in d or "inf" in d for d in drawn):
            raise FileCheckError(path, "an empty or broken line", f"the wire at bend {step.number}")
