"""Keys of a recipe that contradict each other: each a Problem, all found at once."""

from __future__ import annotations

import math
from itertools import pairwise

from wavejig.design.model import own_inset_mm
from wavejig.recipe.errors import Problem, show
from wavejig.recipe.models import Recipe

_RIGHT_BACK = math.cos(math.radians(179.0))  # of a turn: no radius rounds such a corner
_LEAST_GAP_MM = 0.01  # between the terminals: as for the feed gap of the other families


def contradictions(recipe: Recipe) -> list[Problem]:
    """Every pair of keys that cannot stand together, and every key its family does not know."""
    return _Checker(recipe).run()


class _Checker:
    def __init__(self, recipe: Recipe) -> None:
        self.recipe = recipe
        self.problems: list[Problem] = []

    def run(self) -> list[Problem]:
        self._contradictions()
        return self.problems

    def _problem(self, key: str, read: str, allowed: str, fix: str) -> None:
        self.problems.append(Problem(key=key, read=read, allowed=allowed, fix=fix))

    def _contradictions(self) -> None:
        r = self.recipe
        low, high = r.target.band
        if low >= high:
            self._problem(
                "target.band",
                f"{low / 1e6:g} to {high / 1e6:g} MHz",
                "the lower frequency first",
                "Swap them.",
            )
        elif high / low > 2.0:
            self._problem(
                "target.band",
                f"{low / 1e6:g} to {high / 1e6:g} MHz",
                "bands of up to an octave",
                "One loop antenna covers some percent of its frequency; check the units.",
            )
        own = r.radiator.family == "path"
        if own and r.radiator.corners is None:
            self._problem(
                "radiator.corners",
                "nothing",
                "family path needs corners",
                'Write corners = [["0 mm", "2 mm"], ...] from the pin terminal on.',
            )
        for key, families in (
            ("corners", ("path",)),
            ("ground_corner", ("path",)),
            ("side", ("quad", "biquad", "double-biquad")),
            ("lobe_diameter", ("twin-loop",)),
            ("lobe_angle", ("quad", "biquad", "double-biquad", "twin-loop")),
            ("feed_gap", ("quad", "biquad", "double-biquad", "twin-loop")),
        ):
            value = getattr(r.radiator, key)
            if value not in (None, "auto") and r.radiator.family not in families:
                self._problem(
                    f"radiator.{key}",
                    show(value) if not isinstance(value, tuple) else "a list",
                    f"only for {', '.join(families)}",
                    f"Remove it, or change family from {r.radiator.family}.",
                )
        if own and r.radiator.corners is not None:
            self._own_path(r.radiator.corners, r.radiator.ground_corner)
        if r.radiator.insulation == "none" and r.radiator.insulation_thickness is not None:
            self._problem(
                "radiator.insulation_thickness",
                f"{r.radiator.insulation_thickness:g} mm",
                'only with insulation = "enamel" or "plastic"',
                "Say what the insulation is, or remove the thickness.",
            )
        self._own_dish()
        if r.reflector.k_factor != "auto" and r.reflector.bend_deduction != "auto":
            self._problem(
                "reflector.k_factor",
                f"{r.reflector.k_factor:g}",
                "one of k_factor and bend_deduction",
                "Both say the same; keep the shop's own figure.",
            )

    def _own_dish(self) -> None:
        """[reflector.own] against the rest of [reflector]."""
        ref = self.recipe.reflector
        own = ref.own
        if ref.kind != "own":
            if own.diameter is not None or own.size is not None or own.depth is not None:
                self._problem(
                    "reflector.kind",
                    ref.kind,
                    '"own" where [reflector.own] gives a dish',
                    'Write kind = "own", or remove [reflector.own].',
                )
            return
        round_one = own.shape == "round"
        wanted, other = ("diameter", "size") if round_one else ("size", "diameter")
        example = '"160 mm"' if round_one else '["200 mm", "150 mm"]'
        if getattr(own, wanted) is None:
            self._problem(
                f"reflector.own.{wanted}",
                "nothing",
                f"the floor's {wanted}, for shape {own.shape}",
                f"Measure it inside and write {wanted} = {example}.",
            )
        if getattr(own, other) is not None:
            self._problem(
                f"reflector.own.{other}",
                "a value",
                f"no {other} for shape {own.shape}",
                f"Remove it, or change shape from {own.shape}.",
            )
        if own.depth is None:
            self._problem(
                "reflector.own.depth",
                "nothing",
                "the height of the wall inside",
                'Measure from the floor to the rim and write depth = "45 mm".',
            )
        floor = (own.diameter,) if round_one else own.size
        shortest = min((f for f in floor or () if f is not None), default=None)
        inset = own_inset_mm(own.slope, own.radius)
        if shortest is not None and 2.0 * inset >= shortest / 2.0:
            self._problem(
                "reflector.own.radius",
                f"{own.radius:g} mm",
                f"below {own.radius * shortest / (4.0 * inset):.1f} mm for a floor of {shortest:g} mm",
                "Half of the floor at least must be flat.",
            )
        if own.depth is not None and own.depth < own.radius:
            self._problem(
                "reflector.own.radius",
                f"{own.radius:g} mm",
                f"at most the depth of {own.depth:g} mm",
                "Measure both again.",
            )
        usual = type(ref)()
        for key in ("base", "lips", "lip_height", "inside_bend_radius", "k_factor", "bend_deduction"):
            if getattr(ref, key) != getattr(usual, key):
                self._problem(
                    f"reflector.{key}",
                    show(getattr(ref, key)) if not isinstance(getattr(ref, key), tuple) else "a list",
                    'only for sheet that is cut and folded, not with kind = "own"',
                    "Remove it; [reflector.own] holds the dish's sizes.",
                )

    def _own_path(self, corners: tuple[tuple[float, ...], ...], ground: int | None) -> None:
        first, last = corners[0], corners[-1]
        closed = math.dist((*first, 0.0)[:3], (*last, 0.0)[:3]) < 1e-6
        if closed and ground is None:
            self._problem(
                "radiator.ground_corner",
                "nothing",
                f"2 to {len(corners) - 1} for a path that returns to its first corner",
                "Say which corner is the ground terminal.",
            )
        if closed and ground is not None and 2 <= ground <= len(corners) - 1:
            last = corners[ground - 1]
        if (not closed or ground is not None) and math.dist(first[:2], last[:2]) < _LEAST_GAP_MM:
            self._problem(
                "radiator.corners",
                f"both terminals at {first[0]:g}, {first[1]:g} mm",
                "a pin terminal and a ground terminal side by side, seen from the front",
                "The first corner is the pin terminal; the ground terminal is the last, or ground_corner.",
            )
        self._turns([(*c, 0.0)[:3] for c in corners])
        if ground is not None and (not closed or not 2 <= ground <= len(corners) - 1):
            self._problem(
                "radiator.ground_corner",
                str(ground),
                f"2 to {len(corners) - 1}, for a path whose last corner is its first again",
                "Without it the last corner is the ground terminal.",
            )

    def _turns(self, corners: list[tuple[float, ...]]) -> None:
        """Corners between which there is no side, or at which a side goes right back along the one before."""
        sides = [[b - a for a, b in zip(*pair, strict=True)] for pair in pairwise(corners)]
        for n, side in enumerate(sides, start=1):
            if math.hypot(*side) < _LEAST_GAP_MM:
                self._problem(
                    f"radiator.corners[{n}]",
                    f"the place of corner {n} again",
                    "corners in different places",
                    "Leave one of the two out.",
                )
        for n, (u, v) in enumerate(pairwise(sides), start=1):
            size = math.hypot(*u) * math.hypot(*v)
            if size > 0.0 and sum(a * b for a, b in zip(u, v, strict=True)) / size < _RIGHT_BACK:
                self._problem(
                    f"radiator.corners[{n}]",
                    "a corner where the wire goes right back",
                    "turns of less than half a circle",
                    "Move the next corner aside.",
                )
