"""How near the radiator's wires come to each other and to themselves, away from the joints."""

from __future__ import annotations

import itertools
from dataclasses import dataclass

import numpy as np

from wavejig.geometry.path import Point, closest_approach_mm
from wavejig.radiator.model import Piece, Radiator

_CHORD_MM = 0.02


@dataclass(frozen=True, slots=True, kw_only=True)
class Clearance:
    """Least air between two bare wire surfaces, and where; negative = they overlap."""

    pieces: tuple[str, str]
    air_mm: float
    at: Point


def clearances(radiator: Radiator, bend_radius_mm: float) -> tuple[Clearance, ...]:
    """Least air of the main wire to itself, and of each pair of pieces.

    Parts of one wire count as neighbours while less than a bend and its straights apart along the wire;
    whatever lies within reach of a soldered joint between the two is left out, since there they touch on
    purpose. A wire with nothing left to compare is left out.
    """
    chains = [_chain(p) for p in radiator.pieces]
    found: list[Clearance] = []
    for i, a in enumerate(radiator.pieces):
        for j in range(i, len(radiator.pieces)):
            b = radiator.pieces[j]
            if (i == j and len(a.bends) < 2) or (a.role, b.role) == ("tube", "inner"):
                continue  # a wire with one bend cannot meet itself; tube and conductor are coaxial
            joints = [
                (np.array(joint.at), joint.length_mm / 2.0 + bend_radius_mm + 0.6 * a.diameter_mm)
                for joint in radiator.joints
                if {a.role, b.role} <= set(joint.between) or (i == j and a.role in joint.between)
            ]
            best = _nearest(a, b, chains[i], chains[j], joints, same=i == j, bend_radius_mm=bend_radius_mm)
            if best is not None:
                found.append(best)
    return tuple(found)


def _chain(piece: Piece) -> np.ndarray:
    return piece.path.sample(chord_error_mm=_CHORD_MM, step_mm=max(piece.diameter_mm, 1.0) * 2.0)


def _nearest(
    a: Piece,
    b: Piece,
    pa: np.ndarray,
    pb: np.ndarray,
    joints: list[tuple[np.ndarray, float]],
    *,
    same: bool,
    bend_radius_mm: float,
) -> Clearance | None:
    radii = (a.diameter_mm + b.diameter_mm) / 2.0
    best: Clearance | None = None
    along = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(pa, axis=0), axis=1))])
    apart = np.pi * bend_radius_mm + 3.0 * a.diameter_mm
    keep = [_outside(pa, joints), _outside(pb, joints)]
    if not same:
        runs_a, runs_b = _runs(keep[0]), _runs(keep[1])
        pairs = [(pa[x], pb[y]) for x in runs_a for y in runs_b]
    else:
        # one against the rest of its own wire: chop into pieces and skip the neighbours
        pairs = []
        marks = np.searchsorted(along, np.arange(0.0, along[-1], max(apart / 2.0, 1.0)))
        edges = [int(m) for m in np.unique(np.append(marks, len(pa) - 1))]
        for lo, hi in itertools.pairwise(edges):
            start = int(np.searchsorted(along, along[hi] + apart))
            if start >= len(pa) - 1:
                break
            here = [slice(r.start + lo, r.stop + lo) for r in _runs(keep[0][lo : hi + 1])]
            rest = [slice(r.start + start, r.stop + start) for r in _runs(keep[0][start:])]
            pairs += [(pa[x], pa[y]) for x in here for y in rest]
    for x, y in pairs:
        distance, at, _ = closest_approach_mm(x, y)
        if best is None or distance - radii < best.air_mm:
            best = Clearance(pieces=(a.role, b.role), air_mm=distance - radii, at=at)
    return best


def _outside(points: np.ndarray, joints: list[tuple[np.ndarray, float]]) -> np.ndarray:
    keep = np.ones(len(points), dtype=bool)
    for at, reach in joints:
        keep &= np.linalg.norm(points - at, axis=1) > reach
    return keep


def _runs(keep: np.ndarray) -> list[slice]:
    """Stretches of at least two kept points in a row."""
    padded = np.concatenate([[False], keep, [False]])
    steps = np.flatnonzero(np.diff(padded.astype(int)))
    return [slice(int(lo), int(hi)) for lo, hi in zip(steps[::2], steps[1::2], strict=True) if hi - lo >= 2]
