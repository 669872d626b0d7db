"""A bend on the stop block as the build sheet draws it: from above, with its own three pins. Lengths in mm."""

from __future__ import annotations

import itertools
import math
from collections.abc import Iterator

import numpy as np

from wavejig.fixture.bending.frames import Pose
from wavejig.fixture.bending.stopview import stop_name, stop_window
from wavejig.fixture.model import StopBlock, StopPlace
from wavejig.geometry.plane import Circle
from wavejig.sheets.bendframe import Frame, cut_off, wire_shapes
from wavejig.sheets.model import SMALL_TEXT_MM, Arrow, Item, Line, Ring, Shape, Text

_SWING_MM = 12.0  # how far from the mandrel the swing's arrow runs; taste, no source


def stop_picture(pose: Pose, block: StopBlock, diameter_mm: float, title: str, text: str) -> Frame:
    """One step's picture; pose: of a bend on this block, diameter_mm: of the wire with its cover."""
    place = next(p for p in block.places if p.bend == pose.step.number)
    box = stop_window(block, place.bend)
    items: list[Item] = [Shape(contour=block.plate.outline, pen="grey")]
    items += [
        Ring(circle=Circle(x_mm=h.at[0], y_mm=h.at[1], diameter_mm=h.diameter_mm), pen="grey")
        for h in block.plate.holes
        if box[1] <= h.at[1] - h.diameter_mm / 2.0 and h.at[1] + h.diameter_mm / 2.0 <= box[3]
    ]
    held = pose.held[::-1, :2]
    items += wire_shapes(_clean(np.vstack([held, pose.before[:, :2]])), diameter_mm, "grey")
    items += wire_shapes(_clean(np.vstack([held, pose.after[:, :2]])), diameter_mm, "wire")
    items += [
        Ring(circle=Circle(x_mm=at[0], y_mm=at[1], diameter_mm=diameter))
        for at, diameter in (
            (place.mandrel_at, block.mandrel_mm),
            (place.fence_at, block.pin_mm),
            (place.stop_at, place.stop_mm),
        )
    ]
    # names stand on the side the wire does not swing to
    up = 1.0 if place.turn == "right" else -1.0
    names = (
        (str(place.bend), place.mandrel_at, block.mandrel_mm, -up),
        ("fence", place.fence_at, block.pin_mm, up),
        (stop_name(block, place.bend), place.stop_at, place.stop_mm, up),
    )
    for word, at, diameter, side in names:
        shift = 0.8 if side > 0.0 else -0.8 - SMALL_TEXT_MM
        items.append(
            Text(
                at=(at[0], at[1] + side * (diameter / 2.0 + 1.6 * diameter_mm)),
                text=word,
                anchor="centre",
                shift=(0.0, shift),
            )
        )
    items += _swing(pose, place)
    return Frame(
        title=title, text=text, items=tuple(cut_off(items, box)), box=box, seen="from above the stop block"
    )


def _clean(points: np.ndarray) -> np.ndarray:
    """Without points that repeat."""
    step = np.linalg.norm(np.diff(points, axis=0), axis=1) > 1e-6
    kept: np.ndarray = points[np.concatenate([[True], step])]
    return kept


def _swing(pose: Pose, place: StopPlace) -> Iterator[Item]:
    """An arrow about the mandrel, from where the straight wire runs to where it is pulled."""
    at = pose.pivot[:2]
    sign = 1.0 if place.turn == "left" else -1.0
    reach = max(_SWING_MM, 2.0 * abs(float(at[1]) - place.lane_y_mm))
    first = -math.asin(
        abs(float(at[1]) - place.lane_y_mm) / reach
    )  # the wire passes beside the mandrel's middle
    angles = sign * (first + np.linspace(0.0, math.radians(pose.step.loaded_angle_deg), 25))
    points = [(float(x), float(y)) for x, y in at + reach * np.column_stack([np.cos(angles), np.sin(angles)])]
    for a, b in itertools.pairwise(points[:-1]):
        yield Line(a=a, b=b)
    yield Arrow(tail=points[-3], tip=points[-1])
