"""Findings about what the numbers do to the radio: prints too coarse for them, a sheet too small."""

from __future__ import annotations

from collections.abc import Iterator

from wavejig.design.model import Design
from wavejig.radiator.model import Radiator
from wavejig.shop.finding import NOTE, WARNING, Finding
from wavejig.stock.processes import printers

# Share of standoff and of feed gap that a print may be off before articles differ audibly; common practice,
# no source. The gap matters less: its capacitance is a small part of the whole.
STANDOFF_SHARE, GAP_SHARE = 0.05, 0.10
# Sheet beyond the radiator, in wavelengths, below which power goes round its edge; common practice, no source.
LEAST_MARGIN_WAVES = 0.125


def electrical_findings(design: Design, radiator: Radiator | None) -> Iterator[Finding]:
    """Standoff and gap against the printer, base against the radiator."""
    yield from _prints(design)
    if radiator is not None and design.reflector.own is None:  # a dish's wall ends what a margin is for
        yield from _margins(design, radiator)


def _prints(design: Design) -> Iterator[Finding]:
    holds = max(p.tolerance_mm for p in printers())
    r = design.radiator
    for code, key, value, share in (
        ("standoff-too-fine", "standoff", r.standoff_mm, STANDOFF_SHARE),
        ("feed-gap-too-fine", "feed_gap", r.feed_gap_mm, GAP_SHARE),
    ):
        if holds > share * value + 1e-9:
            yield Finding(
                code=code,
                severity=WARNING,
                message=f"a {key.replace('_', ' ')} of {value:g} mm; prints hold +-{holds:g} mm, more than "
                f"{100.0 * share:g} % of it, so articles will differ",
                remedy="Measure each article, shim to size, or make the spacer by machining.",
                where=f"radiator.{key}",
                source="print tolerance from table printers; share common practice, no source",
            )
    asked = design.tolerances.standoff_mm
    if asked < holds - 1e-9:
        yield Finding(
            code="tolerance-below-print",
            severity=NOTE,
            message=f"the recipe counts on a standoff within +-{asked:g} mm; prints hold +-{holds:g} mm",
            remedy="Measure the first prints and correct the slicer's scale, or allow more.",
            where="tolerances.standoff",
            source="table printers",
        )


def _margins(design: Design, radiator: Radiator) -> Iterator[Finding]:
    boxes = [p.path.bounds() for p in radiator.pieces]
    half_wire = design.radiator.wire_diameter_mm / 2.0
    least = LEAST_MARGIN_WAVES * design.target.wavelength_mm
    for i, (axis, base) in enumerate((("x", design.reflector.base_x_mm), ("y", design.reflector.base_y_mm))):
        reach = max(max(-low[i], high[i]) for low, high in boxes) + half_wire
        margin = base / 2.0 - reach
        if margin < least - 0.5:  # bases are whole millimetres
            yield Finding(
                code="base-small",
                severity=WARNING,
                message=f"the base reaches {margin:.1f} mm beyond the radiator along {axis}; below {least:.1f} mm (an "
                "eighth of a wavelength) power goes round the edge, to the back",
                remedy=f'Write base = "auto", or at least {2.0 * (reach + least):.0f} mm along {axis}.',
                where="reflector.base",
            )
