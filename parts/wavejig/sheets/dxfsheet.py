"""Drawings as DXF: true mm in model space for the main view, dimensions as DIMENSION entities.

The main view stands with its own origin at 0, 0 and at its true size; the paper round it (border, tables, text)
is blown up by the scale, so that printing at the stated scale gives the paper. A view at another scale is
drawn larger or smaller and its dimensions carry the factor (DIMLFAC), so that they still measure truly.

Each DIMENSION brings its drawn lines and text as a block, as the format wants, made by our own layout: what
shows is the same in every viewer and on every machine, whatever fonts it has.
Source of the group codes: DXF Reference, Autodesk 2012 (from memory).
"""

from __future__ import annotations

import io
import math
import re
from collections.abc import Iterable
from pathlib import Path
from typing import Any

import ezdxf
from ezdxf.document import Drawing as DxfDocument

from wavejig.files.dxf import fixed_metadata
from wavejig.files.errors import FileCheckError
from wavejig.files.names import clean_name
from wavejig.sheets.frame import everything
from wavejig.sheets.marks import ARROW_MM, GAP_MM, OVER_MM, TEXT_OFF_MM, DimGroup, Drawn, Head, Stroke, Word
from wavejig.sheets.model import DIM_TEXT_MM, Pen, Pt, Sheet

# layer name, DXF colour index, linetype of each pen; colours are taste, no source
_LAYERS: dict[Pen, tuple[str, int, str]] = {
    "outline": ("part-outline", 7, "CONTINUOUS"),
    "wire": ("part-outline", 7, "CONTINUOUS"),
    "thin": ("thin", 7, "CONTINUOUS"),
    "grey": ("thin-grey", 8, "CONTINUOUS"),
    "centre": ("centre-lines", 1, "CENTER"),
    "hidden": ("hidden", 8, "HIDDEN"),
    "bend": ("bend-lines", 5, "DIVIDE"),
    "mark": ("marks", 3, "CONTINUOUS"),
    "frame": ("frame", 7, "CONTINUOUS"),
}
# total, then dash and gap lengths in paper mm
_DASHES = {
    "CENTER": (9.0, 6.0, -1.0, 1.0, -1.0),
    "HIDDEN": (3.0, 2.0, -1.0),
    "DIVIDE": (10.0, 5.0, -1.0, 1.0, -1.0, 1.0, -1.0),
}
_TEXT_LAYER, _DIM_LAYER = "lettering", "dimensions"
_STYLE, _DIM_STYLE = "LETTERING", "WAVEJIG"
# paper mm; text above the line and along it, two decimals without trailing zeros
_DIM_SETTINGS: dict[str, float | int] = {
    "DIMTXT": DIM_TEXT_MM, "DIMASZ": ARROW_MM, "DIMEXO": GAP_MM, "DIMEXE": OVER_MM, "DIMGAP": TEXT_OFF_MM,
    "DIMTAD": 1, "DIMDEC": 2, "DIMZIN": 8, "DIMTIH": 0, "DIMTOH": 0,
}  # fmt: skip
_PLACES = 6


def write_sheet_dxf(sheet: Sheet, path: Path, recipe: str) -> None:
    """Write one drawing. Same sheet, same bytes. Raises OSError when it cannot be written."""
    main = sheet.views[0]
    writer = _Writer(origin=main.at, factor=1.0 / main.scale)
    with fixed_metadata():
        document = writer.document(f"{recipe} {sheet.block.title}")
        for thing in everything(sheet):
            writer.add(document.modelspace(), thing)
        writer.finish(document, sheet)
        stream = io.StringIO()
        document.write(stream)
    text = stream.getvalue().replace("\n", "\r\n")
    path.write_bytes(text.encode(document.output_encoding, errors="dxfreplace"))


def check_sheet_dxf(path: Path, sheet: Sheet) -> None:
    """Raise FileCheckError unless the file opens without a fault and every dimension measures what it says."""
    document = ezdxf.readfile(path)  # type: ignore[attr-defined]
    faults = document.audit()
    if faults.has_errors:
        raise FileCheckError(path, faults.errors[0].message, "a file without faults")
    if document.header.get("$INSUNITS") != 4:
        raise FileCheckError(path, f"units {document.header.get('$INSUNITS')}", "4 (mm)")
    wanted = [thing for thing in everything(sheet) if isinstance(thing, DimGroup)]
    found = list(document.modelspace().query("DIMENSION"))
    if len(found) != len(wanted):
        raise FileCheckError(path, f"{len(found)} dimensions", f"{len(wanted)}")
    for dimension, group in zip(found, wanted, strict=True):
        factor = dimension.override().get("dimlfac", 1.0) if group.kind != "angle" else 1.0
        measured = float(dimension.get_measurement()) * factor
        if abs(measured - group.value) > 1e-3:
            raise FileCheckError(path, f"a dimension of {measured:.4f}", f"{group.value:.4f}")


class _Writer:
    """Carries the transform from paper to model space."""

    def __init__(self, origin: Pt, factor: float) -> None:
        self.origin = origin
        self.factor = factor

    def document(self, title: str) -> DxfDocument:
        document: DxfDocument = ezdxf.new("R2010")  # type: ignore[attr-defined]
        document.header["$INSUNITS"] = 4
        document.header["$MEASUREMENT"] = 1
        document.header["$LTSCALE"] = self.factor
        document.header.custom_vars.append("Title", clean_name(title))
        for name, pattern in _DASHES.items():
            if name not in document.linetypes:
                document.linetypes.add(name, pattern=list(pattern), description=f"{name.lower()}, paper mm")
        for layer, colour, linetype in dict.fromkeys(_LAYERS.values()):
            document.layers.add(layer, color=colour, linetype=linetype)
        document.layers.add(_TEXT_LAYER, color=7)
        document.layers.add(_DIM_LAYER, color=4)
        document.styles.add(_STYLE, font="txt.shx")
        style = document.dimstyles.new(_DIM_STYLE)
        style.dxf.dimtxsty = _STYLE
        # some viewers draw dimensions anew, and by the header's settings instead of the style's
        document.header["$DIMSTYLE"] = _DIM_STYLE
        for name, value in {"DIMSCALE": self.factor, **_DIM_SETTINGS}.items():
            style.set_dxf_attrib(name.lower(), value)
            document.header[f"${name}"] = value
        return document

    def finish(self, document: DxfDocument, sheet: Sheet) -> None:
        low, high = self.put((0.0, 0.0)), self.put(sheet.paper_mm)
        modelspace = document.modelspace()
        modelspace.reset_extents((*low, 0.0), (*high, 0.0))
        modelspace.reset_limits(low, high)
        document.header["$EXTMIN"], document.header["$EXTMAX"] = (*low, 0.0), (*high, 0.0)
        centre = ((low[0] + high[0]) / 2.0, (low[1] + high[1]) / 2.0)
        document.set_modelspace_vport(1.05 * (high[1] - low[1]), centre)
        for kind in sorted(document.entitydb.dxf_types_in_use()):
            document.classes.add_class(kind)

    def put(self, p: Pt) -> Pt:
        """Paper to model space."""
        return (
            round((p[0] - self.origin[0]) * self.factor, _PLACES) + 0.0,
            round((p[1] - self.origin[1]) * self.factor, _PLACES) + 0.0,
        )

    def add(self, space: Any, thing: Drawn) -> None:
        match thing:
            case Stroke():
                self._stroke(space, thing, _LAYERS[thing.pen][0])
            case Head():
                self._head(space, thing, "thin")
            case Word():
                self._word(space, thing, _TEXT_LAYER)
            case DimGroup():
                self._dimension(space, thing)

    def _stroke(self, space: Any, stroke: Stroke, layer: str) -> None:
        attributes = {"layer": layer}
        if stroke.circle is not None:
            c = stroke.circle
            centre = self.put((c.x_mm, c.y_mm))
            space.add_circle(centre, round(c.diameter_mm / 2.0 * self.factor, _PLACES), dxfattribs=attributes)
        elif stroke.contour is not None:
            for contour in (stroke.contour, *stroke.holes):
                corners = [(*self.put((x, y)), round(b, 12)) for x, y, b in contour.vertices]
                space.add_lwpolyline(corners, format="xyb", close=True, dxfattribs=attributes)
        elif len(stroke.points) == 2:
            space.add_line(self.put(stroke.points[0]), self.put(stroke.points[1]), dxfattribs=attributes)
        else:
            space.add_lwpolyline([self.put(p) for p in stroke.points], dxfattribs=attributes)

    def _head(self, space: Any, head: Head, layer: str) -> None:
        corners = [self.put(head.tip), self.put(head.back[0]), self.put(head.back[1])]
        space.add_solid([*corners, corners[-1]], dxfattribs={"layer": layer})

    def _word(self, space: Any, word: Word, layer: str) -> None:
        if not word.text.strip():
            return
        align = {"left": 0, "centre": 1, "right": 2}[word.anchor]
        at = self.put(word.at)
        attributes = {
            "layer": layer,
            "style": _STYLE,
            "height": round(word.height_mm * self.factor, _PLACES),
            "rotation": round(word.rotation_deg, _PLACES),
            "insert": at,
            "halign": align,
        }
        if align:
            attributes["align_point"] = at
        space.add_text(coded(word.text), dxfattribs=attributes)

    def _dimension(self, space: Any, group: DimGroup) -> None:
        document = space.doc
        block = document.blocks.new_anonymous_block(type_char="D")
        for part in group.parts:
            match part:
                case Stroke():
                    self._stroke(block, part, "0")
                case Head():
                    self._head(block, part, "0")
                case Word():
                    self._word(block, part, "0")
        points = [self.put(p) for p in group.points]
        word = next(p for p in group.parts if isinstance(p, Word))
        turn, half = math.radians(word.rotation_deg), word.height_mm / 2.0
        middle = (word.at[0] - half * math.sin(turn), word.at[1] + half * math.cos(turn))
        attributes: dict[str, Any] = {
            "layer": _DIM_LAYER,
            "dimstyle": _DIM_STYLE,
            "geometry": block.name,
            "text": coded(group.text),
            "text_midpoint": self.put(middle),
            "attachment_point": 5,  # by its middle
        }
        # 32: the block is this dimension's alone; 128: the text stands where the user put it
        match group.kind:
            case "linear":
                a, b, on = points
                attributes |= {"dimtype": 0 | 32 | 128, "defpoint": on, "defpoint2": a, "defpoint3": b,
                               "angle": group.angle_deg}  # fmt: skip
            case "diameter":
                attributes |= {"dimtype": 3 | 32 | 128, "defpoint": points[0], "defpoint4": points[1]}
            case "radius":
                attributes |= {"dimtype": 4 | 32 | 128, "defpoint": points[0], "defpoint4": points[1]}
            case "angle":
                vertex, first, second, arc = points
                # between two lines: some viewers do not know the kind with three points
                attributes |= {"dimtype": 2 | 32 | 128, "defpoint2": vertex, "defpoint3": first,
                               "defpoint4": vertex, "defpoint": second, "defpoint5": arc}  # fmt: skip
        dimension = space.new_entity("DIMENSION", attributes)
        own = group.factor / self.factor
        if group.kind != "angle" and abs(own - 1.0) > 1e-9:
            override = dimension.override()
            override["dimlfac"] = own
            override.commit()


def coded(text: str) -> str:
    """Text as a TEXT entity carries it: the three signs every reader knows as codes, and no code by accident.

    Codes begin with "%%", with "^", or with a backslash and U+ or M+ (a character by its number).
    """
    plain = re.sub("%(?=%)", "% ", text)
    plain = re.sub(r"\\(?=[UuMm]\+)", r"\\ ", plain)
    for sign, code in (("\u00d8", "%%c"), ("\u00b0", "%%d"), ("\u00b1", "%%p")):
        plain = plain.replace(sign, code)
    return "".join(c if c.isprintable() else " " for c in plain).replace("^", "^ ")


def texts(drawn: Iterable[Drawn]) -> list[str]:
    """Every line of lettering on a sheet, for checks."""
    out: list[str] = []
    for thing in drawn:
        if isinstance(thing, Word | DimGroup):
            out.append(thing.text)
    return out
