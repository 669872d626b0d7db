"""What posts that stay do to the antenna: a bound on their detuning and loss.

A post stands at the corner opposite the feed, where the current has its maximum and the voltage against the
sheet its node: along the wire V = Vmax sin(k s) from there. Material perturbation (from memory: Harrington,
Time-Harmonic Electromagnetic Fields; Pozar, Microwave Engineering): df/f = -1/2 (er - 1) times the share of
the electric energy that the plastic fills. The share is taken as if the wire's whole field over the post's
length ran in plastic, which it does not: the figure is an upper bound on the line's own field, and says
nothing about fields of the rest of the antenna at the post, which are smaller there. Dissipated over radiated
power = loss tangent x er x share x Q (same source).
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from wavejig.design.model import Design
from wavejig.radiator.model import Radiator
from wavejig.spacer.model import Post
from wavejig.stock.processes import Plastic, plastic

# Loops a fraction of a wavelength over a sheet have a loaded Q of 5 to 12; from memory, taken high.
ASSUMED_Q = 12.0


@dataclass(frozen=True, slots=True, kw_only=True)
class PostEffect:
    """Of all posts together. shift: df/f, at most (down); loss: dissipated over radiated power, at most.

    shift_at_side_corner: the same posts at voltage maxima, for comparison: why they do not stand there.
    """

    permittivity: tuple[float, float]
    loss_tangent: float
    energy_share: float
    shift: float
    shift_hz: float
    loss: float
    shift_at_side_corner: float
    assumed_q: float
    source: str


def post_effect(design: Design, radiator: Radiator, posts: tuple[Post, ...]) -> PostEffect | None:
    """The bound for a design's posts; None without any."""
    if not posts:
        return None
    material: Plastic = plastic(design.spacer.plastic)
    wave = design.target.wavelength_mm
    length = sum(s.length_mm for s in radiator.main.path.segments)
    share = sum(filled_share(_along_mm(p), wave, length) for p in posts)
    worst = sum(filled_share(_along_mm(p), wave, length, from_maximum=True) for p in posts)
    high = material.permittivity_high
    middle = (design.target.band_low_hz + design.target.band_high_hz) / 2.0
    shift = 0.5 * (high - 1.0) * share
    return PostEffect(
        permittivity=(material.permittivity_low, high),
        loss_tangent=material.loss_tangent,
        energy_share=share,
        shift=shift,
        shift_hz=shift * middle,
        loss=material.loss_tangent * high * share * ASSUMED_Q,
        shift_at_side_corner=0.5 * (high - 1.0) * worst,
        assumed_q=ASSUMED_Q,
        source=material.source,
    )


def filled_share(
    post_mm: float, wavelength_mm: float, wire_mm: float, *, from_maximum: bool = False
) -> float:
    """Share of a standing wave's electric energy within `post_mm` about its voltage node (or maximum).

    The wave fills wire_mm of wire: the integral of sin^2(k s) over the post, over wire_mm/2.
    """
    k = 2.0 * math.pi / wavelength_mm
    swing = math.sin(k * post_mm) / (2.0 * k)
    inside = post_mm / 2.0 + swing if from_maximum else post_mm / 2.0 - swing
    return inside / (wire_mm / 2.0)


def _along_mm(post: Post) -> float:
    """Length of wire over a post: across its corners, at most."""
    corners = post.outline.vertices
    return max(math.dist(a[:2], b[:2]) for a in corners for b in corners)
