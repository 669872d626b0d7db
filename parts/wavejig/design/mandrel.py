"""Which mandrel pin forms the corners: a stock dowel whose radius, after springback, is the inside radius."""

from __future__ import annotations

from dataclasses import dataclass

from wavejig.forming.wire import loaded_radius_mm, relaxed_radius_mm
from wavejig.stock.hardware import dowel_diameters_mm
from wavejig.stock.metals import Metal

# A pin this much off the wanted diameter moves a corner's tangent by less than what a bench can measure.
# Common practice, no source.
PIN_MATCH_MM = 0.1
# Mandrels of one and a half wire diameters in radius bend without marking or thinning the wire much.
# Common practice, no source.
USUAL_RADIUS_DIAMETERS = 1.5


@dataclass(frozen=True, slots=True, kw_only=True)
class Mandrel:
    """A pin and the inside radius it leaves once the wire has sprung back."""

    pin_diameter_mm: float
    is_dowel: bool
    loaded_inside_radius_mm: float
    inside_radius_mm: float


def mandrel_for(
    metal: Metal, wire_diameter_mm: float, inside_radius_mm: float | None, insulation_mm: float = 0.0
) -> Mandrel:
    """The pin for a wanted finished inside radius, or (None) the smallest usual dowel for this wire.

    insulation_mm: on one side, between metal and pin; radii are the metal's. A dowel within PIN_MATCH_MM
    of the wanted pin is taken, and the radius it leaves is the finished one.
    Raises ValueError when no pin gives the wanted radius (the wire would have to be bent tighter than it
    is thick).
    """
    if inside_radius_mm is None:
        least = wire_diameter_mm * max(USUAL_RADIUS_DIAMETERS, metal.min_inside_radius_factor)
        dowels = [d for d in dowel_diameters_mm() if d / 2.0 + insulation_mm >= least - 1e-9]
        pin = dowels[0] if dowels else 2.0 * least
        return _with_pin(metal, wire_diameter_mm, pin, insulation_mm, is_dowel=bool(dowels))
    half = wire_diameter_mm / 2.0
    loaded = loaded_radius_mm(inside_radius_mm + half, wire_diameter_mm, *_constants(metal)) - half
    pin = 2.0 * (loaded - insulation_mm)
    if pin <= 0.0:
        raise ValueError(
            f"a metal inside radius of {inside_radius_mm:g} mm leaves no pin inside insulation of "
            f"{insulation_mm:g} mm"
        )
    near = min(dowel_diameters_mm(), key=lambda d: abs(d - pin))
    if abs(near - pin) <= PIN_MATCH_MM:
        return _with_pin(metal, wire_diameter_mm, near, insulation_mm, is_dowel=True)
    return Mandrel(
        pin_diameter_mm=pin,
        is_dowel=False,
        loaded_inside_radius_mm=loaded,
        inside_radius_mm=inside_radius_mm,
    )


def _with_pin(
    metal: Metal, diameter_mm: float, pin_mm: float, insulation_mm: float, *, is_dowel: bool
) -> Mandrel:
    half = diameter_mm / 2.0
    loaded = pin_mm / 2.0 + insulation_mm
    finished = relaxed_radius_mm(loaded + half, diameter_mm, *_constants(metal)) - half
    return Mandrel(
        pin_diameter_mm=pin_mm,
        is_dowel=is_dowel,
        loaded_inside_radius_mm=loaded,
        inside_radius_mm=finished,
    )


def _constants(metal: Metal) -> tuple[float, float, float]:
    return (metal.youngs_modulus_gpa, metal.strength_coefficient_mpa, metal.hardening_exponent)
