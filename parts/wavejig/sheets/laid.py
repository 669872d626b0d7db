"""Where a wire lies on the board while only some of its bends are made. Lengths in mm."""

from __future__ import annotations

import math

import numpy as np

from wavejig.geometry.path import Line as Straight
from wavejig.geometry.path import Path, PathBend, path_from_bends, tangent_at_end, tangent_at_start
from wavejig.radiator.model import Piece


def laid(piece: Piece, done: set[int], current: int, *, from_end: bool) -> np.ndarray:
    """(n, 2) plan of the wire with some bends formed, its held side lying in its finished place.

    The straight before the current bend (after it, from the end) lies where the finished wire's does. Bends not
    made yet are straight wire of their developed length; bends that leave the board point at the viewer.
    """
    arcs = piece.path.arcs
    k = next(i for i, b in enumerate(piece.bends) if b.number == current)
    table: list[PathBend] = []
    spare = 0.0
    index_of: dict[int, int] = {}
    rotation = 0.0
    for i, (bend, arc) in enumerate(zip(piece.bends, arcs, strict=True)):
        spare += bend.feed_mm
        rotation += bend.rotation_deg
        developed = math.radians(bend.angle_deg) * arc.radius_mm
        if bend.number in done:
            index_of[i] = len(table)
            table.append(
                PathBend(
                    feed_mm=spare, rotation_deg=rotation, angle_deg=bend.angle_deg, radius_mm=arc.radius_mm
                )
            )
            spare, rotation = 0.0, 0.0
        else:
            spare += developed
    spare += piece.path.tail_mm()
    # any start will do: the wire is moved into place afterwards
    formed = path_from_bends(
        table, spare, start=(0.0, 0.0, 0.0), direction=(1.0, 0.0, 0.0), normal=(0.0, 0.0, 1.0)
    )
    return _moved(formed, piece, k, index_of.get(k), done, from_end=from_end)


def _moved(
    formed: Path, piece: Piece, k: int, index: int | None, done: set[int], *, from_end: bool
) -> np.ndarray:
    """Bring a formed wire over the finished one at bend `k`'s held side, and look at it from above."""
    arc = piece.path.arcs[k]
    heading = np.array(tangent_at_start(arc))
    point = np.array(arc.start)
    if from_end:
        radial = np.array(arc.end) - np.array(arc.centre)
        heading = np.cross(np.array(arc.normal), radial) / arc.radius_mm
        point = np.array(arc.end)
    normal = np.array(arc.normal)
    # the same place on the formed wire: by length along it
    along = _length_to(piece, k, from_end=from_end)
    here, way, axis = _frame_at(formed, piece, k, along, done, index)
    source = np.column_stack([way, np.cross(axis, way), axis])
    target = np.column_stack([heading, np.cross(normal, heading), normal])
    turn = target @ source.T
    points = formed.sample(chord_error_mm=0.02, step_mm=2.0)
    moved = (points - here) @ turn.T + point
    return np.asarray(moved[:, :2])


def _length_to(piece: Piece, k: int, *, from_end: bool) -> float:
    """Centreline length from the start to bend k's begin (its end, from the end)."""
    total = 0.0
    for i, (bend, arc) in enumerate(zip(piece.bends, piece.path.arcs, strict=True)):
        total += bend.feed_mm
        if i == k:
            return total + (arc.length_mm if from_end else 0.0)
        total += arc.length_mm
    raise AssertionError("no such bend")


def _frame_at(
    formed: Path, piece: Piece, k: int, along: float, done: set[int], index: int | None
) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Position, direction and the bend plane's normal at a length along the formed wire."""
    walked = 0.0
    here, way = np.array(formed.segments[-1].end), np.array([1.0, 0.0, 0.0])
    for segment in formed.segments:
        length = segment.length_mm
        if walked + length >= along - 1e-7:
            part = (along - walked) / length
            if part > 1.0 - 1e-9:
                here, way = np.array(segment.end), np.array(tangent_at_end(segment))
            elif part < 1e-9 or isinstance(segment, Straight):
                here = np.array(segment.start) + (np.array(segment.end) - np.array(segment.start)) * part
                way = np.array(tangent_at_start(segment))
            else:
                raise AssertionError("a held side never ends inside a bend")
            break
        walked += length
    # the plane: of this bend where it is made, else turned on from the last one made before it
    arcs = formed.arcs
    made = [i for i in range(k) if piece.bends[i].number in done]
    if index is not None:
        axis = np.array(arcs[index].normal)
    else:
        rotation = 0.0
        last = made[-1] if made else None
        for i in range((last + 1) if last is not None else 0, k + 1):
            rotation += piece.bends[i].rotation_deg
        base = np.array(arcs[len(made) - 1].normal) if made else np.array([0.0, 0.0, 1.0])
        axis = _rotated(base, way, math.radians(rotation))
    axis = axis - way * float(axis @ way)
    return here, way, axis / np.linalg.norm(axis)


def _rotated(v: np.ndarray, axis: np.ndarray, angle: float) -> np.ndarray:
    c, s = math.cos(angle), math.sin(angle)
    turned: np.ndarray = v * c + np.cross(axis, v) * s + axis * float(axis @ v) * (1.0 - c)
    return turned
