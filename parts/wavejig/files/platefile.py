"""print/plate-N.3mf: several printed pieces placed on the bed, to print in one go; and its reading back."""

from __future__ import annotations

from collections import Counter
from collections.abc import Mapping
from pathlib import Path

import numpy as np
import shapely

from wavejig.batch.model import Plate, PrintPlan
from wavejig.files.errors import FileCheckError
from wavejig.files.mesh import CHORD_ERROR_MM, Measure, Mesh
from wavejig.files.reread import check_piece, load_meshes
from wavejig.files.threemf import Item, write_3mf


def write_plate(plate: Plate, meshes: Mapping[str, Mesh], path: Path, title: str) -> None:
    """Write one plate; each kind of piece is one object, placed as often as it stands there.

    meshes: by the pieces' names, each with the middle of its box over the origin. Raises OSError.
    """
    names = list(dict.fromkeys(spot.name for spot in plate.spots))
    number = {name: i for i, name in enumerate(names)}
    items = [Item(mesh=number[s.name], x_mm=s.x_mm, y_mm=s.y_mm, turn_deg=s.turn_deg) for s in plate.spots]
    write_3mf([meshes[name] for name in names], path, title, items)


def check_plate(path: Path, plate: Plate, plan: PrintPlan, figures: Mapping[str, Measure]) -> None:
    """Raise FileCheckError unless the file, read by trimesh, holds the plate's pieces and can be printed.

    Each piece closed, of its solid's volume, standing on z = 0 where the plate says; all within the bed less
    its margin; their shadows (convex hulls in plan) apart by the spacing.
    """
    pieces, metadata = load_meshes(path, "3mf")
    if metadata.get("units") != "millimeter":
        raise FileCheckError(path, f"the unit {metadata.get('units')!r}", "'millimeter'")
    if len(pieces) != len(plate.spots):
        raise FileCheckError(path, f"{len(pieces)} pieces", f"{len(plate.spots)}")
    left = Counter((s.name, round(s.x_mm, 2), round(s.y_mm, 2)) for s in plate.spots)
    turned = {(round(s.x_mm, 2), round(s.y_mm, 2)): s for s in plate.spots}
    shadows = []
    for mesh in pieces.values():
        low, high = np.asarray(mesh.bounds, dtype=float)
        middle = (low + high) / 2.0
        near = min(turned, key=lambda at: float(np.hypot(*(middle[:2] - at))))
        spot = turned[near]
        left[(spot.name, *near)] -= 1
        check_piece(path, spot.name, mesh, _moved(figures[spot.name], spot.x_mm, spot.y_mm, spot.turn_deg),
                    2.0 * CHORD_ERROR_MM)  # fmt: skip
        if abs(low[2]) > 1e-3:
            raise FileCheckError(
                path, f"{spot.name} with its lowest point at {low[2]:.3f} mm", "0, on the bed"
            )
        shadows.append(shapely.MultiPoint(np.asarray(mesh.vertices)[:, :2]).convex_hull)
    if any(left.values()):
        raise FileCheckError(path, "pieces in other places", "each where the plate has it")
    m = plan.margin_mm - CHORD_ERROR_MM
    bed = shapely.box(m, m, plan.bed_mm[0] - m, plan.bed_mm[1] - m)
    for shadow in shadows:
        if not bed.covers(shadow):
            raise FileCheckError(path, f"a piece in {shadow.bounds}", f"all within {bed.bounds}")
    apart = plan.spacing_mm - 2.0 * CHORD_ERROR_MM
    pairs = shapely.STRtree(shadows).query(shadows, predicate="dwithin", distance=apart)
    if any(i < j for i, j in pairs.T.tolist()):
        raise FileCheckError(path, "two pieces nearer than that", f"{plan.spacing_mm:g} mm between any two")


def _moved(figures: Measure, x_mm: float, y_mm: float, turn_deg: float) -> Measure:
    """A piece's figures once turned about the origin and moved."""
    x0, y0, z0, x1, y1, z1 = figures.bounds_mm
    if turn_deg:
        x0, y0, x1, y1 = -y1, x0, -y0, x1
    return Measure(
        volume_mm3=figures.volume_mm3,
        area_mm2=figures.area_mm2,
        bounds_mm=(x0 + x_mm, y0 + y_mm, z0, x1 + x_mm, y1 + y_mm, z1),
    )
