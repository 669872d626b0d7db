"""Keys of a recipe that contradict each other: each a Problem, all found at once."""

from __future__ import annotations

import math

from wavejig.recipe.errors import Problem, show
from wavejig.recipe.models import Recipe


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
        if r.reflector.k_factor != "auto" and r.reflector.bend_deduction != "auto":
            self._problem(
                "reflector.k_factor",
                f"{r.reflector.k_factor:g}",
                "one of k_factor and bend_deduction",
                "Both say the same; keep the shop's own figure.",
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
        if ground is not None and (not closed or not 2 <= ground <= len(corners) - 1):
            self._problem(
                "radiator.ground_corner",
                str(ground),
                f"2 to {len(corners) - 1}, for a path whose last corner is its first again",
                "Without it the last corner is the ground terminal.",
            )
