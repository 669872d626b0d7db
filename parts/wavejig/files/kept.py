"""What one build leaves for the next of the same recipe: steps whose inputs are the same are not run again.

For `watch`, where a recipe is saved over and over. A step's inputs are the whole design but what is known not
to reach that step, and the plans of the parts; its files are copied from the earlier pack once their
checksums are right, so a pack touched by hand is made anew.
"""

from __future__ import annotations

import hashlib
import json
import shutil
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, fields, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any

from wavejig.design.model import Design, TargetDesign
from wavejig.files.manifest import Entry

if TYPE_CHECKING:
    from wavejig.field.model import Model
    from wavejig.field.prediction import Prediction

# Fields of a design that no part's files are made from.
_NEVER = {"quantity", "values", "conflicts", "station", "sheet", "wire_stock", "prices"}
_HUNG = {"polarisation", "pole_mm"}  # their holes and marks are in the plans
# And those that a step's own files are not made from. What is not named here counts.
_ASIDE = {
    "radiator": {"fixture", "spacer", "printer", "cutter", "folding", "tolerances", "target", *_HUNG},
    "reflector": {"fixture", "spacer", "printer", "folding", "tolerances", "target", *_HUNG},
    "spacer": {"fixture", "cutter", "folding", "tolerances", *_HUNG},
    "fixture": {"spacer", "folding", "target", *_HUNG},
    "assembly": {"fixture", "cutter", "folding", "tolerances", *_HUNG},
}


# The plans that a step draws from.
_PLANS = {
    "radiator": ("radiator",),
    "reflector": ("tray", "pattern"),
    "spacer": ("radiator", "spacer"),
    "fixture": ("radiator", "tray", "fixture"),
    "assembly": ("radiator", "tray", "spacer"),
}


def inputs(step: str, design: Design, plans: Mapping[str, object]) -> tuple[object, ...] | None:
    """What that step's files follow from, to be compared; None for a step that is always run."""
    if step not in _ASIDE:
        return None
    left_out = _NEVER | _ASIDE[step]
    asked = replace(design, target=_shape(design.target))
    return (
        *((f.name, getattr(asked, f.name)) for f in fields(design) if f.name not in left_out),
        *(plans[p] for p in _PLANS[step]),
    )


def _shape(target: TargetDesign) -> TargetDesign:
    """The target without the wanted return loss, which no shape and no solve follows from."""
    return replace(target, return_loss_db=0.0)


@dataclass(slots=True)
class _Done:
    """A step that was run: its inputs, its files with their checksums, and what it left in memory."""

    given: tuple[object, ...]
    files: tuple[tuple[Entry, str], ...]
    left: dict[str, Any]


@dataclass(slots=True)
class Kept:
    """Holds the last build's steps and its solves. `pack`: where their files lie by now."""

    pack: Path | None = None
    reused: list[str] = field(default_factory=list)  # steps of the last build that were not run again
    _steps: dict[str, _Done] = field(default_factory=dict)
    _solved: dict[str, Prediction] = field(default_factory=dict)

    def recall(self, step: str, given: tuple[object, ...] | None, root: Path) -> dict[str, Any] | None:
        """Put the step's files into `root` again and give what it left; None when it has to be run."""
        done = self._steps.get(step)
        if done is None or given is None or self.pack is None or done.given != given:
            return None
        if any(_sha256(self.pack / entry.path) != digest for entry, digest in done.files):
            return None
        for entry, _ in done.files:
            target = root / entry.path
            target.parent.mkdir(parents=True, exist_ok=True)
            shutil.copyfile(self.pack / entry.path, target)
        self.reused.append(step)
        return done.left

    def remember(
        self,
        step: str,
        given: tuple[object, ...] | None,
        root: Path,
        entries: list[Entry],
        left: dict[str, Any],
    ) -> None:
        """Note a step that was run just now."""
        if given is not None:
            files = tuple((entry, _sha256(root / entry.path)) for entry in entries)
            self._steps[step] = _Done(given=given, files=files, left=left)

    def solve(self, design: Design, model: Model, predict: Callable[[], Prediction]) -> Prediction:
        """The prediction of a model; solved once for all designs that come to the same model and target."""
        from wavejig.field.from_design import reference_plane

        told = json.dumps(
            [model.to_dict(), repr(_shape(design.target)), reference_plane(design)], sort_keys=True
        )
        key = hashlib.sha256(told.encode()).hexdigest()
        if key in self._solved:
            self.reused.append("field solve")
        else:
            self._solved = {key: predict()}  # the last one only: memory stays small over a day of saving
        return replace(self._solved[key], design_name=design.name, wanted_db=design.target.return_loss_db)


def _sha256(path: Path) -> str:
    try:
        return hashlib.sha256(path.read_bytes()).hexdigest()
    except OSError:
        return ""
