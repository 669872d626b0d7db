"""Wires that touch, cross or run over each other or through a sheet, where the model has no joint."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from wavejig.field.errors import ModelError
from wavejig.field.model import Model
from wavejig.field.unknowns import Nodes

Array = NDArray[np.float64]
Index = NDArray[np.int64]


def check_crossings(model: Model, nodes: Nodes, ends: Array) -> None:
    """Wires that meet or come within their radii of each other, but not at a common end."""
    n = len(ends)
    if n < 2:
        return
    middle = ends.mean(axis=1)
    reach = 0.5 * np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1)
    radius = np.array([w.radius_m for w in model.wires])
    gap2 = np.sum((middle[:, None] - middle[None]) ** 2, axis=2)
    first, second = np.nonzero(np.triu(gap2 < (reach[:, None] + reach + radius[:, None] + radius) ** 2, 1))
    a, b = nodes.wire_ends[first], nodes.wire_ends[second]
    shared = (a[:, :, None] == b[:, None, :]).any(axis=(1, 2))
    folded = np.flatnonzero(shared)
    if folded.size:
        _folded_back(nodes, ends, first[folded], second[folded], radius)
    apart = np.flatnonzero(~shared)
    i, j = first[apart], second[apart]
    distance = segment_distance(ends[i], ends[j])
    for k in np.argsort(distance).tolist():
        thick = radius[i[k]] + radius[j[k]]
        if distance[k] >= thick:
            break
        if _neighbourly(nodes, ends, int(i[k]), int(j[k]), thick):
            continue
        if distance[k] <= max(nodes.tolerance_m, 1e-3 * thick) and not _parallel(ends[i[k]], ends[j[k]]):
            raise ModelError(
                "wires crossing without a joint",
                f"wires {i[k]} and {j[k]} meet away from a common end; split them there, or move them apart",
            )
        raise ModelError(
            "overlapping wires",
            f"wires {i[k]} and {j[k]} run within their radii of each other ({distance[k] * 1e3:.3f} mm apart, "
            f"{thick * 1e3:.3f} mm thick together); join them or move them apart",
        )


def _parallel(a: Array, b: Array) -> bool:
    u, v = a[1] - a[0], b[1] - b[0]
    return bool(np.linalg.norm(np.cross(u, v)) < 1e-3 * np.linalg.norm(u) * np.linalg.norm(v))


def _neighbourly(nodes: Nodes, ends: Array, i: int, j: int, thick: float) -> bool:
    """Wires of one chain whose links are shorter than they are thick: near each other, and rightly so."""
    a, b = set(nodes.wire_ends[i].tolist()), set(nodes.wire_ends[j].tolist())
    frontier, walked = a, {n: 0.0 for n in a}
    limit = 4.0 * thick
    lengths = np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1)
    while frontier:
        reached: set[int] = set()
        for wire in np.flatnonzero(np.isin(nodes.wire_ends, list(frontier)).any(axis=1)).tolist():
            one, two = nodes.wire_ends[wire].tolist()
            for here, there in ((one, two), (two, one)):
                if here in walked and walked[here] + lengths[wire] < min(limit, walked.get(there, np.inf)):
                    walked[there] = walked[here] + float(lengths[wire])
                    reached.add(there)
        frontier = reached
    return bool(b & walked.keys())


def _folded_back(nodes: Nodes, ends: Array, first: Index, second: Index, radius: Array) -> None:
    """Wires that share an end and run back over each other."""
    shared_b = nodes.wire_ends[first][:, :, None] == nodes.wire_ends[second][:, None, :]
    ia = np.argmax(shared_b.any(axis=2), axis=1)
    ib = np.argmax(shared_b.any(axis=1), axis=1)
    row = np.arange(len(first))
    u = ends[first][row, 1 - ia] - ends[first][row, ia]
    v = ends[second][row, 1 - ib] - ends[second][row, ib]
    cosine = np.sum(u * v, axis=1) / (np.linalg.norm(u, axis=1) * np.linalg.norm(v, axis=1))
    for k in np.flatnonzero(cosine > 1.0 - 1e-6).tolist():
        raise ModelError(
            "overlapping wires", f"wires {first[k]} and {second[k]} run over each other from their common end"
        )


def segment_distance(a: Array, b: Array) -> Array:
    """(n,) least distances of segments (n, 2, 3): the closest approach, or an end to the other segment."""

    def to_segment(p: Array, s: Array) -> Array:
        u = s[:, 1] - s[:, 0]
        t = np.clip(np.sum((p - s[:, 0]) * u, axis=1) / np.sum(u * u, axis=1), 0.0, 1.0)
        return np.asarray(np.linalg.norm(p - s[:, 0] - t[:, None] * u, axis=1))

    best = np.minimum.reduce(
        [to_segment(a[:, 0], b), to_segment(a[:, 1], b), to_segment(b[:, 0], a), to_segment(b[:, 1], a)]
    )
    u, v, w = a[:, 1] - a[:, 0], b[:, 1] - b[:, 0], a[:, 0] - b[:, 0]
    uu, uv, vv = np.sum(u * u, axis=1), np.sum(u * v, axis=1), np.sum(v * v, axis=1)
    uw, vw = np.sum(u * w, axis=1), np.sum(v * w, axis=1)
    det = uu * vv - uv * uv
    skew = det > 1e-12 * uu * vv
    safe = np.where(skew, det, 1.0)
    s, t = (uv * vw - vv * uw) / safe, (uu * vw - uv * uw) / safe
    inside = skew & (s > 0.0) & (s < 1.0) & (t > 0.0) & (t < 1.0)
    across = np.linalg.norm(w + s[:, None] * u - t[:, None] * v, axis=1)
    return np.asarray(np.where(inside, np.minimum(best, across), best))


def check_through_sheet(model: Model, nodes: Nodes, ends: Array) -> None:
    """Wires that pierce a triangle, or end on one away from its corners."""
    corner = model.triangles[:, 0]
    normal = np.cross(model.triangles[:, 1] - corner, model.triangles[:, 2] - corner)
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    offset = np.sum(normal * corner, axis=1)
    tolerance = nodes.tolerance_m
    height = ends @ normal.T - offset
    low, high = height.min(axis=1), height.max(axis=1)
    wire, triangle = np.nonzero((low <= tolerance) & (high >= -tolerance))
    if not wire.size:
        return
    centre = model.triangles.mean(axis=1)
    size = np.linalg.norm(model.triangles - centre[:, None], axis=2).max(axis=1)
    u = ends[:, 1] - ends[:, 0]
    t = np.sum((centre[triangle] - ends[wire, 0]) * u[wire], axis=1) / np.sum(u * u, axis=1)[wire]
    foot = ends[wire, 0] + np.clip(t, 0.0, 1.0)[:, None] * u[wire]
    near = np.linalg.norm(foot - centre[triangle], axis=1) <= size[triangle] + tolerance
    wire, triangle = wire[near], triangle[near]
    attached = (nodes.wire_ends[wire][:, :, None] == nodes.corners[triangle][:, None, :]).any(axis=2)
    for k in range(len(wire)):
        w, f = int(wire[k]), int(triangle[k])
        heights = ends[w] @ normal[f] - offset[f]
        if np.abs(heights).max() <= tolerance:
            inside = [
                p for p in (0.1, 0.5, 0.9) if _inside(ends[w, 0] + p * u[w], model.triangles[f], tolerance)
            ]
            if inside:
                raise ModelError(
                    "wire in a sheet", f"wire {w} lies in triangle {f}; leave it out or lift it off"
                )
            continue
        if attached[k].any() and (heights.min() >= -tolerance or heights.max() <= tolerance):
            continue
        at = ends[w, 0] + np.clip(-heights[0] / (heights[1] - heights[0]), 0.0, 1.0) * u[w]
        if _inside(at, model.triangles[f], tolerance):
            ended = np.abs(heights).min() <= tolerance
            if ended:
                raise ModelError(
                    "wire end on a sheet without a corner",
                    f"wire {w} ends on triangle {f} away from its corners; give the sheet a corner there",
                )
            raise ModelError(
                "wire through a sheet",
                f"wire {w} passes through triangle {f}; end it on a corner, or cut a hole",
            )


def _inside(point: Array, triangle: Array, tolerance: float) -> bool:
    """Whether a point of the triangle's plane lies within it, its rim included."""
    a, b, c = triangle
    normal = np.cross(b - a, c - a)
    size = np.linalg.norm(normal)
    for p, q in ((a, b), (b, c), (c, a)):
        side = np.linalg.norm(q - p)
        if float(np.dot(np.cross(q - p, point - p), normal)) < -tolerance * size * side:
            return False
    return True
