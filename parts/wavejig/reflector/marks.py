"""Lettering on the blank: name, which face is which, which edge hangs uppermost, each bend's angle.

Marks keep clear of holes, cut edges, bends and each other; one that finds no room at any allowed size is
reported, not squeezed in. Sizes and margins are common practice, no source. Lengths in mm.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from wavejig.geometry.lettering import strokes, text_width_mm
from wavejig.geometry.plane import Stroke
from wavejig.reflector.model import EDGES, Tray, TrayLip, outward, place
from wavejig.reflector.outline import inside

MARGIN_MM = 1.5
"""Least distance of a mark's box from anything cut or bent, and from other marks."""

_TOUCH_MM = 1e-6
"""A box whose margin just touches the cut edge is clear of it."""

_HEIGHTS_MM = (4.0, 3.0, 2.5, 2.0)
_READING_DEG = {"y+": 0.0, "x-": 90.0, "y-": 180.0, "x+": -90.0}
"""How text is turned so that it reads upright when that edge hangs uppermost."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Panel:
    """An axis-parallel rectangle of flat sheet and where in it a mark would best stand."""

    low: np.ndarray
    high: np.ndarray
    wish: np.ndarray


@dataclass(frozen=True, slots=True, kw_only=True)
class Mark:
    """A text that found its place: the middle of its line, and the strokes that go with it (an arrow)."""

    text: str
    height_mm: float
    at: tuple[float, float]
    rotation_deg: float
    beside: tuple[Stroke, ...] = ()

    def strokes(self, text: str | None = None) -> tuple[Stroke, ...]:
        """The mark drawn; with `text`, another text no wider in its place."""
        drawn = strokes(
            self.text if text is None else text, self.height_mm, *self.at, self.rotation_deg, "centre"
        )
        return (*drawn, *self.beside)


def place_marks(tray: Tray, name: str) -> tuple[tuple[Stroke, ...], tuple[str, ...]]:
    """All marks of a blank as strokes, and the texts for which there was no room."""
    placed, unplaced = find_marks(tray, (name,) if name else ())
    return tuple(stroke for mark in placed for stroke in mark.strokes()), unplaced


def find_marks(tray: Tray, names: tuple[str, ...]) -> tuple[tuple[Mark, ...], tuple[str, ...]]:
    """Where each mark of a blank stands, `names` last, and the texts for which there was no room."""
    out: list[Mark] = []
    unplaced: list[str] = []
    taken: list[tuple[np.ndarray, np.ndarray]] = []
    loop = tray.outline.points()
    upright = _READING_DEG[tray.up]
    base = _base(tray)
    top, bottom = outward(tray.up) * 1e3, outward(tray.up) * -1e3
    wanted: list[tuple[str, float, tuple[_Panel, ...], bool]] = [
        ("THIS EDGE UP", upright, (_towards(base, top),), True)
    ]
    for lip in tray.lips:
        along_edge = 0.0 if lip.edge[0] == "y" else 90.0
        panels = (_flange(lip), _towards(base, outward(lip.edge) * 1e3))
        wanted.append((f"BEND UP {lip.angle_deg:g}\u00b0", along_edge, panels, False))
    wanted.append(("THIS FACE TO RADIATOR", upright, (_towards(base, bottom),), False))
    wanted += [(name, upright, (_towards(base, bottom),), False) for name in names]
    for text, rotation, places, arrow in wanted:
        for height in _HEIGHTS_MM:
            mark = _try(tray, loop, taken, text, height, rotation, places, arrow)
            if mark is not None:
                out.append(mark)
                break
        else:
            unplaced.append(text)
    return tuple(out), tuple(unplaced)


def _try(
    tray: Tray,
    loop: np.ndarray,
    taken: list[tuple[np.ndarray, np.ndarray]],
    text: str,
    height: float,
    rotation: float,
    panels: tuple[_Panel, ...],
    arrow: bool,
) -> Mark | None:
    """The mark at the free place nearest to where it is wished, or none; notes the box taken."""
    lead = height if arrow else 0.0  # room for the arrow in front of the text
    size = np.array([text_width_mm(text, height) + lead, height])
    half = (size if rotation in (0.0, 180.0) else size[::-1]) / 2.0
    for panel in panels:
        spot = _free_spot(tray, loop, taken, panel, half + MARGIN_MM, height / 2.0)
        if spot is None:
            continue
        taken.append((spot - half, spot + half))
        turn = math.radians(rotation)
        right = np.array([math.cos(turn), math.sin(turn)])
        middle = spot + right * lead / 2.0
        return Mark(
            text=text,
            height_mm=height,
            at=(float(middle[0]), float(middle[1])),
            rotation_deg=rotation,
            beside=_arrow(spot + right * (0.3 * height - size[0] / 2.0), height, right) if arrow else (),
        )
    return None


def _free_spot(
    tray: Tray,
    loop: np.ndarray,
    taken: list[tuple[np.ndarray, np.ndarray]],
    panel: _Panel,
    half: np.ndarray,
    step: float,
) -> np.ndarray | None:
    """Centre of the free box of half-size `half` (margin included) nearest to the wish; None if none is."""
    low, high = panel.low + half, panel.high - half
    if np.any(low > high):
        return None
    xs, ys = (np.unique([*np.arange(a, b, step), b, (a + b) / 2.0]) for a, b in zip(low, high, strict=True))
    rim = _rim(half - _TOUCH_MM)
    done, reach = -1.0, 16.0 * step
    while done < math.inf:
        near = [c[np.abs(c - w) <= reach] for c, w in zip((xs, ys), panel.wish, strict=True)]
        spots = np.stack(np.meshgrid(*near, indexing="ij"), axis=-1).reshape(-1, 2)
        away = np.hypot(*(spots - panel.wish).T)
        ring = (away > done) & (away <= reach)
        spots, away = spots[ring], away[ring]
        free = _clear(tray, taken, spots, half)
        for spot in spots[free][np.argsort(away[free], kind="stable")]:
            if inside(spot + rim, loop).all():
                found: np.ndarray = spot
                return found
        # a large sheet has millions of spots, and the nearest few are free most often
        done, reach = (
            reach,
            (4.0 * reach if reach < float(np.hypot(*(high - low + 2.0 * half))) else math.inf),
        )
    return None


def _clear(
    tray: Tray, taken: list[tuple[np.ndarray, np.ndarray]], spots: np.ndarray, half: np.ndarray
) -> np.ndarray:
    """(n,) bool: about which spots (n, 2) the box meets no hole and no other mark."""
    free = np.ones(len(spots), dtype=bool)
    for hole in tray.holes:
        off = np.maximum(np.abs(spots - (hole.x_mm, hole.y_mm)) - half, 0.0)
        free &= np.hypot(off[:, 0], off[:, 1]) > hole.diameter_mm / 2.0
    for a, b in taken:
        free &= np.any((spots + half < a) | (spots - half > b), axis=1)
    return free


def _rim(half: np.ndarray) -> np.ndarray:
    """Points round a box, at most 1 mm apart."""
    n = math.ceil(float(half.max()) * 2.0) + 1
    t = np.linspace(-1.0, 1.0, n)
    one = np.ones(n)
    square = np.concatenate([np.column_stack(c) for c in ((t, one), (t, -one), (one, t), (-one, t))])
    rim: np.ndarray = square * half
    return rim


def _base(tray: Tray) -> _Panel:
    reach = {e: tray.base_reach_mm(e) for e in EDGES}
    high = np.array([reach["x+"], reach["y+"]])
    return _Panel(low=-np.array([reach["x-"], reach["y-"]]), high=high, wish=np.zeros(2))


def _flange(lip: TrayLip) -> _Panel:
    """The straight part of a lip; marks are wished beside the bend, in the middle."""
    edge = lip.edge
    wide = max(lip.left.reach_mm(lip.flange_mm), lip.right.reach_mm(lip.flange_mm))
    corners = np.array([place(edge, lip.bend_end_mm, -wide), place(edge, lip.tip_mm, wide)])
    return _Panel(low=corners.min(axis=0), high=corners.max(axis=0), wish=outward(edge) * lip.bend_end_mm)


def _towards(panel: _Panel, far: np.ndarray) -> _Panel:
    """The same panel with marks wished in the middle of its side towards `far`."""
    return _Panel(low=panel.low, high=panel.high, wish=np.clip(far, panel.low, panel.high))


def _arrow(centre: np.ndarray, height: float, right: np.ndarray) -> tuple[Stroke, ...]:
    """An arrow of that height pointing to the text's upper side."""
    up = np.array([-right[1], right[0]])
    tip, tail = centre + up * height / 2.0, centre - up * height / 2.0
    barbs = [centre + up * 0.15 * height + right * side * 0.3 * height for side in (-1.0, 1.0)]
    chains = ((tail, tip), (barbs[0], tip, barbs[1]))
    return tuple(Stroke(points=tuple((float(p[0]), float(p[1])) for p in chain)) for chain in chains)
