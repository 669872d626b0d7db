"""design.json's section on the batch."""

from __future__ import annotations

from typing import Any

from wavejig.batch.model import Batch, Bill, Nest, PrintPlan, WirePlan

_DIGITS = 6


def batch_data(batch: Batch) -> dict[str, Any]:
    """Counts, utilisation and plans as plain data; lengths in mm, masses in g."""
    return {
        "quantity": batch.quantity,
        "nest": None if batch.nest is None else _nest(batch.nest, batch.unmarked),
        "wire": [_wire(plan) for plan in batch.wires],
        "prints": None if batch.prints is None else _prints(batch.prints),
        "bill": _bill(batch.bill),
    }


def _nest(nest: Nest, unmarked: tuple[int, ...]) -> dict[str, Any]:
    return {
        "stock_sheet": [_n(v) for v in nest.stock_mm],
        "margin": _n(nest.margin_mm),
        "spacing": _n(nest.spacing_mm),
        "grain": nest.grain,
        "blank_grain": nest.blank_grain,
        "bends_along_grain": list(nest.bends_along_grain),
        "blanks": sum(len(sheet.placements) for sheet in nest.sheets),
        "unnumbered": len(unmarked),
        "blanks_per_sheet": nest.per_sheet,
        "sheets": len(nest.sheets),
        "fewest_sheets_by_area": nest.fewest_sheets,
        "utilisation": _n(nest.utilisation),
        "sheet_utilisation": [_n(sheet.utilisation) for sheet in nest.sheets],
        "last_offcut": [_n(v) for v in nest.offcut_mm],
    }


def _wire(plan: WirePlan) -> dict[str, Any]:
    return {
        "stock": plan.kind,
        "material": plan.material,
        "diameter": _n(plan.diameter_mm),
        "pieces": [
            {"role": role, "length": _n(length), "count": count} for role, length, count in plan.pieces
        ],
        "stock_length": None if plan.stock_mm is None else _n(plan.stock_mm),
        "cut_loss": _n(plan.cut_loss_mm),
        "end_waste": _n(plan.end_waste_mm),
        "needed": _n(plan.needed_mm),
        "lengths": plan.lengths,
        "fewest_lengths": plan.fewest,
        "waste": _n(plan.waste),
        "patterns": [{"cut": dict(p.pieces), "times": p.times, "rest": _n(p.rest_mm)} for p in plan.patterns],
    }


def _prints(plan: PrintPlan) -> dict[str, Any]:
    return {
        "bed": [_n(v) for v in plan.bed_mm],
        "margin": _n(plan.margin_mm),
        "spacing": _n(plan.spacing_mm),
        "spacer_sets": plan.spacer_sets,
        "pieces": [
            {"part": p.part, "name": p.name, "plastic": p.plastic, "count": p.count} for p in plan.pieces
        ],
        "plates": [
            {
                "file": f"print/plate-{number}.3mf",
                "plastic": plate.plastic,
                "times": plate.times,
                "pieces": len(plate.spots),
            }
            for number, plate in enumerate(plan.plates, start=1)
        ],
        "prints": plan.prints,
        "mass_g_at_most": {kind: round(grams, 1) for kind, grams in plan.mass_g},
    }


def _bill(bill: Bill) -> dict[str, Any]:
    return {
        "currency": bill.currency,
        "total": bill.total,
        "lines_without_price": bill.unpriced,
        "lines": [
            {
                "key": line.key,
                "item": line.item,
                "material": line.material,
                "size": line.size,
                "each": line.each,
                "count": line.count,
                "unit": line.unit,
                "price": line.price,
                "cost": line.cost,
            }
            for line in bill.lines
        ],
    }


def _n(value: float) -> float:
    return round(float(value), _DIGITS) + 0.0
