"""The wire of a batch cut from spools or bars: one-dimensional bin packing, first-fit decreasing.

First-fit decreasing needs at most 11/9 of the fewest lengths and 6/9 more (G. Dosa, LNCS 4614 (2007), from
memory); `fewest` says what no plan can beat, so the gap that is left can be read off.
"""

from __future__ import annotations

import math
from collections import Counter
from collections.abc import Sequence

from wavejig.batch.model import CutPattern, WirePlan
from wavejig.design.model import Design
from wavejig.radiator.model import Piece, Radiator
from wavejig.radiator.stock import Stock, bought_length_mm, stock_of

_DUST_MM = 1e-9
_ROUND_MM = 10.0  # a total is told to the centimetre, upwards


class StockTooShortError(ValueError):
    """A piece is longer than the stock gives."""


def wire_plans(design: Design, radiator: Radiator) -> tuple[WirePlan, ...]:
    """A plan for each stock the radiator's pieces come from. Raises StockTooShortError naming the piece."""
    groups: dict[tuple[str, float], tuple[Stock, list[Piece]]] = {}
    for piece in radiator.pieces:
        stock = stock_of(design, piece)
        if stock is not None:
            groups.setdefault((stock.kind, round(piece.diameter_mm, 3)), (stock, []))[1].append(piece)
    return tuple(_plan(design, radiator, stock, pieces) for stock, pieces in groups.values())


def _plan(design: Design, radiator: Radiator, stock: Stock, pieces: list[Piece]) -> WirePlan:
    w = design.wire_stock
    wanted = [(p.role, bought_length_mm(radiator, p), design.quantity) for p in pieces]
    total = sum((length + w.cut_loss_mm) * count for _, length, count in wanted) + w.end_waste_mm
    needed = math.ceil(total / _ROUND_MM - 1e-9) * _ROUND_MM
    tube = design.feed.tube
    material = tube.name if stock.kind == "tube" and tube else design.radiator.metal.name
    room = (needed if stock.length_mm is None else stock.length_mm) - w.end_waste_mm
    patterns = cut_patterns(wanted, room, w.cut_loss_mm)
    return WirePlan(
        kind=stock.kind,
        material=material,
        diameter_mm=pieces[0].diameter_mm,
        pieces=tuple(wanted),
        stock_mm=stock.length_mm,
        cut_loss_mm=w.cut_loss_mm,
        end_waste_mm=w.end_waste_mm,
        needed_mm=needed,
        patterns=patterns,
        lengths=sum(p.times for p in patterns),
        fewest=fewest_lengths([(length + w.cut_loss_mm, count) for _, length, count in wanted], room),
    )


def cut_patterns(
    wanted: Sequence[tuple[str, float, int]], room_mm: float, cut_loss_mm: float
) -> tuple[CutPattern, ...]:
    """First-fit decreasing over (role, length_mm, how many), equal lengths filled at once.

    room_mm: of each stock length, end waste taken off. After each piece comes one cut, also after the last.
    Raises StockTooShortError.
    """
    rests: list[float] = []
    bins: list[Counter[str]] = []
    for role, length, count in sorted(wanted, key=lambda w: -w[1]):
        step = length + cut_loss_mm
        if step > room_mm + _DUST_MM:
            raise StockTooShortError(
                f"{role}: {length:.1f} mm and its cut of {cut_loss_mm:g} mm; a length gives {room_mm:.1f} mm"
            )
        left = count
        start = 0
        while left:
            if start == len(bins):
                rests.append(room_mm)
                bins.append(Counter())
            take = min(left, math.floor((rests[start] + 1e-6) / step))
            if take:
                bins[start][role] += take
                rests[start] -= take * step
                left -= take
            start += 1
    alike: dict[tuple[tuple[str, int], ...], list[float]] = {}
    for made, rest in zip(bins, rests, strict=True):
        alike.setdefault(tuple(made.items()), []).append(rest)
    return tuple(
        CutPattern(pieces=pieces, times=len(left_over), rest_mm=max(0.0, left_over[0]))
        for pieces, left_over in alike.items()
    )


def fewest_lengths(steps: Sequence[tuple[float, int]], room_mm: float) -> int:
    """What no plan can beat: the larger of two bounds over (length with its cut, how many).

    By total length; and by S. Martello and P. Toth's L2 (Discrete Applied Mathematics 28 (1990), from memory):
    pieces above half the room share with none of their kind, those that fill too much share with nobody.
    """
    eps = 1e-6
    best = math.ceil(sum(step * n for step, n in steps) / (room_mm + eps) - eps)
    for limit in {step for step, _ in steps if step <= room_mm / 2.0} | {0.0}:
        alone = sum(n for s, n in steps if s > room_mm - limit + eps)
        half = [(s, n) for s, n in steps if room_mm / 2.0 + eps < s <= room_mm - limit + eps]
        small = sum(s * n for s, n in steps if limit - eps <= s <= room_mm / 2.0 + eps)
        count = sum(n for _, n in half)
        spare = count * room_mm - sum(s * n for s, n in half)
        more = max(0, math.ceil((small - spare) / (room_mm + eps) - eps))
        best = max(best, alone + count + more)
    return best
