"""What every drawing of a design shares: title block texts, tolerances."""

from __future__ import annotations

from wavejig.design.model import Design
from wavejig.sheets.model import TitleBlock, number, scale_text
from wavejig.stock.errors import StockError
from wavejig.stock.processes import iso2768_angle_deg, iso2768_linear_mm

SMALLEST_GENERAL_MM = 0.5


def block(
    design: Design, *, title: str, part: str, material: str, scale: float, note: str, per: int = 1
) -> TitleBlock:
    """The title block of one drawing. per: pieces for each antenna."""
    return TitleBlock(
        recipe=design.name,
        title=title,
        part=part,
        material=material,
        quantity=f"{design.quantity * per}" if per else "1",
        scale=scale_text(scale),
        tolerance=f"ISO 2768-{design.tolerances.grade}",
        projection="first" if design.sheet.projection == "first" else "third",
        note=note,
    )


def general_mm(design: Design, size_mm: float) -> float:
    """General tolerance on a length, plus or minus; its nearest range for lengths the standard leaves out."""
    grade = design.tolerances.grade
    try:
        return iso2768_linear_mm(max(size_mm, SMALLEST_GENERAL_MM), grade)  # type: ignore[arg-type]
    except StockError:
        return iso2768_linear_mm(1000.0, grade)  # type: ignore[arg-type]


def general_deg(design: Design, leg_mm: float) -> float:
    """General tolerance on an angle whose shorter leg is that long."""
    grade = design.tolerances.grade
    try:
        return iso2768_angle_deg(leg_mm, grade)  # type: ignore[arg-type]
    except StockError:
        return iso2768_angle_deg(400.0, grade)  # type: ignore[arg-type]


def plus_minus(value: float) -> str:
    """ " \u00b10.3"."""
    return f" \u00b1{number(value)}"


def sheet_text(design: Design) -> str:
    """Metal, temper and thickness of the reflector in words."""
    r = design.reflector
    return f"{r.metal.name}, {r.metal.temper}, {number(r.thickness_mm, 3)} mm"


def wire_text(design: Design) -> str:
    """Metal, temper and diameter of the wire in words."""
    r = design.radiator
    size = f"\u00d8{number(r.wire_diameter_mm, 3)} mm"
    asked = (
        "" if r.wire_text.replace(" ", "") == f"{number(r.wire_diameter_mm, 3)}mm" else f" ({r.wire_text})"
    )
    return f"{r.metal.name}, {r.metal.temper}, {size}{asked}"
