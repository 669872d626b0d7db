"""Rectangles packed into equal bins by the packing library. Sizes in mm; the library is given whole micrometres.

Rectangles are laid with `spacing_mm` between them and none needed towards the bin's edge: each is grown by one
spacing to the right and above, and so is the bin.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any

_UM = 1000  # micrometres in a mm
# Families of the library that are tried; which wins depends on the sizes. Guillotine layouts can be cut by
# shears, edge to edge.
_FREE = ("MaxRectsBssf", "MaxRectsBl", "SkylineBl", "SkylineMwf")
_SHEARED = ("GuillotineBssfSas", "GuillotineBafMinas", "GuillotineBafSas")


@dataclass(frozen=True, slots=True, kw_only=True)
class Laid:
    """One rectangle: its number in the order given, its lower left corner, whether it was turned by 90 deg."""

    number: int
    x_mm: float
    y_mm: float
    turned: bool


def most_equal(
    size_mm: tuple[float, float],
    bin_mm: tuple[float, float],
    spacing_mm: float,
    *,
    turns: Sequence[str],
    sheared: bool = False,
) -> tuple[Laid, ...]:
    """As many equal rectangles in one bin as any of the library's methods finds, in the order of their x, then y.

    turns: what may be done with them, of "none" (all as given), "all" (all turned by 90 deg), "any" (each as
    it fits). Empty when not one fits. Ties go to the first found, so the answer never varies.
    """
    gap = _up(spacing_mm)
    w, h = (_up(v) + gap for v in size_mm)
    room = tuple(_down(v) + gap for v in bin_mm)
    bound = (room[0] * room[1]) // (w * h)
    best: list[Laid] = []
    for turn in turns:
        given = (h, w) if turn == "all" else (w, h)
        if turn != "any" and (given[0] > room[0] or given[1] > room[1]):
            continue
        for method in _SHEARED if sheared else _FREE:
            if len(best) >= bound:
                break
            found = _pack([given] * bound, room, method, rotate=turn == "any", bins=1)
            laid = found[0] if found else []
            if len(laid) > len(best):
                best = [
                    Laid(
                        number=i,
                        x_mm=x / _UM,
                        y_mm=y / _UM,
                        turned=turn == "all" or (turn == "any" and turned),
                    )
                    for i, x, y, turned in laid
                ]
    return tuple(sorted(best, key=lambda p: (p.x_mm, p.y_mm)))


def bins_of(
    sizes_mm: Sequence[tuple[float, float]], bin_mm: tuple[float, float], spacing_mm: float
) -> tuple[tuple[Laid, ...], ...]:
    """Rectangles of any sizes in as few bins as the methods find, each turned as it fits.

    Raises ValueError naming the first that fits no bin.
    """
    if not sizes_mm:
        return ()
    gap = _up(spacing_mm)
    room = tuple(_down(v) + gap for v in bin_mm)
    grown = [tuple(_up(v) + gap for v in size) for size in sizes_mm]
    for size, (w, h) in zip(sizes_mm, grown, strict=True):
        if not ((w <= room[0] and h <= room[1]) or (h <= room[0] and w <= room[1])):
            raise ValueError(f"{size[0]:g} x {size[1]:g} mm: fits no bin of {bin_mm[0]:g} x {bin_mm[1]:g} mm")
    best: list[list[tuple[int, int, int, bool]]] | None = None
    for method in _FREE:
        found = _pack(grown, room, method, rotate=True, bins=len(grown))
        if sum(map(len, found)) == len(grown) and (best is None or len(found) < len(best)):
            best = found
    if best is None:  # each fits by itself, so one to a bin always does
        raise AssertionError("the packing library lost a rectangle")
    return tuple(
        tuple(Laid(number=i, x_mm=x / _UM, y_mm=y / _UM, turned=turned) for i, x, y, turned in sorted(one))
        for one in best
    )


def _pack(
    sizes: Sequence[Sequence[int]], room: Sequence[int], method: str, *, rotate: bool, bins: int
) -> list[list[tuple[int, int, int, bool]]]:
    """(number, x, y, turned) of what the library places, bin by bin."""
    import rectpack

    packer: Any = rectpack.newPacker(
        mode=rectpack.PackingMode.Offline,
        bin_algo=rectpack.PackingBin.BFF,
        pack_algo=getattr(rectpack, method),
        sort_algo=rectpack.SORT_AREA,
        rotation=rotate,
    )
    for number, (w, h) in enumerate(sizes):
        packer.add_rect(w, h, number)
    packer.add_bin(room[0], room[1], count=bins)
    packer.pack()
    return [
        [
            # a square's turn cannot be seen, and needs none
            (r.rid, r.x, r.y, (r.width, r.height) != tuple(sizes[r.rid]))
            for r in one
        ]
        for one in packer
    ]


def _up(mm: float) -> int:
    return math.ceil(mm * _UM - 1e-6)


def _down(mm: float) -> int:
    return math.floor(mm * _UM + 1e-6)
