"""Which stock a piece of the radiator is cut from: the radiator's wire, another wire of the legs, tube."""

from __future__ import annotations

import math
from dataclasses import dataclass

from wavejig.design.model import Design
from wavejig.radiator.model import Piece, Radiator

SAME_MM = 0.005
"""Diameters this near are one wire."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Stock:
    """kind: "wire", "leg-wire" or "tube"; key: of [wire_stock]; length_mm: None is long enough for all."""

    kind: str
    key: str
    length_mm: float | None


def bought_length_mm(radiator: Radiator, piece: Piece) -> float:
    """Length to cut of its stock: a tube is longer than its wall by the inner conductor that is bared."""
    if piece.role != "tube":
        return piece.cut_length_mm
    return piece.cut_length_mm + sum(p.cut_length_mm for p in radiator.pieces if p.role == "inner")


def part_of(piece: Piece) -> str | None:
    """The role of the piece whose cut length holds this one's; None where it is cut by itself."""
    return "tube" if piece.role == "inner" else None


def stock_of(design: Design, piece: Piece) -> Stock | None:
    """The stock of a piece; None for a tube's inner conductor, which comes with the tube."""
    w = design.wire_stock
    if piece.role == "inner":
        return None
    if piece.role == "tube":
        return Stock(kind="tube", key="tube_length", length_mm=w.tube_length_mm)
    if math.isclose(piece.diameter_mm, design.radiator.wire_diameter_mm, abs_tol=SAME_MM):
        return Stock(kind="wire", key="length", length_mm=w.length_mm)
    return Stock(kind="leg-wire", key="leg_length", length_mm=w.leg_length_mm)
