"""What a trial bend and a trial length tell about the wire in hand.

A reading is one bend: held at a loaded angle on a former, let go, measured. The arc keeps its length, so
loaded angle / relaxed angle = relaxed radius / loaded radius, and 1/R_loaded - 1/R_relaxed = M/(E I) gives
the moment the wire was held by. From it the strength coefficient K of the flow stress K*strain^n follows,
exactly, with the table's n; n itself only shows between formers of clearly different radius, where the
strain differs. K and n carry over to other radii as `forming.wire` says; scaling the springback itself would
not, since it grows with the radius.

Lengths in mm, angles in deg, stress in MPa.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from wavejig.forming.wire import relaxed_radius_mm

# Radii this many times apart tell n; nearer ones tell only the reading error. Our own choice.
TELLING_RATIO = 2.0
MOST_N = 0.8
# No wire's flow stress at the bend's outer fibre is above this share of its modulus (spring wire: about 1 %).
# From memory.
STRONGEST_SHARE = 0.03
_MPA_PER_GPA = 1000.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Reading:
    """One trial bend: loaded radius to the wire's centreline, angle while held, angle when let go."""

    loaded_radius_mm: float
    bent_deg: float
    relaxed_deg: float

    @property
    def share(self) -> float:
        """Springback as a share of the loaded angle."""
        return 1.0 - self.relaxed_deg / self.bent_deg


@dataclass(frozen=True, slots=True, kw_only=True)
class Fitted:
    """Flow stress that explains the readings: K*strain^n. largest_error_deg: of the readings explained by it."""

    strength_coefficient_mpa: float
    hardening_exponent: float
    exponent_fitted: bool
    largest_error_deg: float


def fit_flow_stress(
    readings: Sequence[Reading], diameter_mm: float, youngs_modulus_gpa: float, hardening_exponent: float
) -> Fitted:
    """K from the readings with the n given; n too when their radii are far enough apart.

    Several readings: least squares of the logarithm of the springback, so that each counts by its share.
    Raises ValueError for readings no wire can give: no springback, or more than an elastic wire's.
    """
    if not readings:
        raise ValueError("no readings")
    for r in readings:
        if not 0.0 < r.relaxed_deg < r.bent_deg:
            raise ValueError(
                f"bent to {r.bent_deg:g} deg, relaxed to {r.relaxed_deg:g} deg: a bend opens when let go, and "
                "something of it is left"
            )
    radii = [r.loaded_radius_mm for r in readings]
    telling = max(radii) >= TELLING_RATIO * min(radii)
    n = hardening_exponent
    if telling:

        def misfit(x: float) -> float:
            try:
                return _misfit(readings, diameter_mm, youngs_modulus_gpa, x)[0]
            except ValueError:  # this n would need a wire stronger than there is
                return math.inf

        n = _least(misfit, 0.0, MOST_N)
    _, k = _misfit(readings, diameter_mm, youngs_modulus_gpa, n)
    errors = [r.bent_deg * (_share(r, diameter_mm, youngs_modulus_gpa, k, n) - r.share) for r in readings]
    return Fitted(
        strength_coefficient_mpa=k,
        hardening_exponent=n,
        exponent_fitted=telling,
        largest_error_deg=max(abs(e) for e in errors),
    )


def neutral_axis_factor(
    cut_mm: float,
    outside_mm: float,
    bends: int,
    angle_deg: float,
    inside_radius_mm: float,
    diameter_mm: float,
) -> float:
    """Depth of the unstretched line / diameter, from a wire of known cut length bent `bends` times alike.

    outside_mm: sum of all straights, each measured over the outside of the wire to the corners of its outer
    faces; angle and inside radius finished. From cut = outside - bends * (2 (r + d) tan(a/2) - a (r + n d)).
    Raises ValueError for angles of 180 deg and more, where outer faces do not meet.
    """
    if not 0.0 < angle_deg < 180.0 or bends < 1:
        raise ValueError(f"{bends} bends of {angle_deg:g} deg: need at least one, above 0 and below 180 deg")
    angle = math.radians(angle_deg)
    setback = (inside_radius_mm + diameter_mm) * math.tan(angle / 2.0)
    arc_mm = (cut_mm - outside_mm) / bends + 2.0 * setback
    return (arc_mm / angle - inside_radius_mm) / diameter_mm


def _share(
    reading: Reading, diameter_mm: float, modulus_gpa: float, coefficient_mpa: float, exponent: float
) -> float:
    """Springback as a share of the loaded angle, by the model."""
    relaxed = relaxed_radius_mm(reading.loaded_radius_mm, diameter_mm, modulus_gpa, coefficient_mpa, exponent)
    return 1.0 - reading.loaded_radius_mm / relaxed  # 1 where it springs back straight


def _misfit(
    readings: Sequence[Reading], diameter_mm: float, modulus_gpa: float, exponent: float
) -> tuple[float, float]:
    """Sum of squares of the springback's logarithms, and the K that makes it least."""

    def wanted(reading: Reading) -> float:
        strain = diameter_mm / 2.0 / reading.loaded_radius_mm
        strongest = STRONGEST_SHARE * modulus_gpa * _MPA_PER_GPA / strain**exponent
        low, high = 1e-3, min(strongest, 0.5 * modulus_gpa * _MPA_PER_GPA)
        if _share(reading, diameter_mm, modulus_gpa, high, exponent) < reading.share:
            raise ValueError(
                f"bent to {reading.bent_deg:g} deg, relaxed to {reading.relaxed_deg:g} deg: more springback than "
                "wire of this metal and thickness can have; check former and angles"
            )

        def miss(log_k: float) -> float:
            share = _share(reading, diameter_mm, modulus_gpa, math.exp(log_k), exponent)
            return math.log(max(share, 1e-300)) - math.log(reading.share)

        # regula falsi of Illinois in logarithms, where the springback is nearly a straight line of slope one
        x0, x1 = math.log(low), math.log(high)
        y0, y1 = miss(x0), miss(x1)
        side = 0
        for _ in range(80):
            x = (x0 * y1 - x1 * y0) / (y1 - y0)
            y = miss(x)
            if abs(y) < 1e-11 or x1 - x0 < 1e-13:
                break
            if y < 0.0:
                x0, y0 = x, y
                y1, side = (y1 / 2.0 if side < 0 else y1), -1
            else:
                x1, y1 = x, y
                y0, side = (y0 / 2.0 if side > 0 else y0), 1
        return math.exp(x)

    each = [wanted(r) for r in readings]
    k = math.exp(sum(math.log(x) for x in each) / len(each))
    total = 0.0
    for r in readings:
        share = max(_share(r, diameter_mm, modulus_gpa, k, exponent), 1e-12)
        total += (math.log(share) - math.log(r.share)) ** 2
    return total, k


def _least(f: Callable[[float], float], low: float, high: float) -> float:
    """Where f is least between low and high: a coarse look, then golden sections."""
    steps = 16
    places = [low + (high - low) * i / steps for i in range(steps + 1)]
    best = min(range(len(places)), key=lambda i: f(places[i]))
    a, b = places[max(best - 1, 0)], places[min(best + 1, steps)]
    golden = (math.sqrt(5.0) - 1.0) / 2.0
    c, d = b - golden * (b - a), a + golden * (b - a)
    at_c, at_d = f(c), f(d)
    for _ in range(26):  # to a millionth
        if at_c < at_d:
            b, d, at_d = d, c, at_c
            c = b - golden * (b - a)
            at_c = f(c)
        else:
            a, c, at_c = c, d, at_d
            d = a + golden * (b - a)
            at_d = f(d)
    return (a + b) / 2.0
