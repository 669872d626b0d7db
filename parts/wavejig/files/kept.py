"""What one build leaves for the next of the same pack: steps whose inputs are the same are not run again.

A step's inputs are the whole design but what is known not to reach that step, and the plans of the parts,
compared by content. Its files are copied from the pack on disk once their checksums are right, so a pack
touched by hand is made anew; what else it gave (solids, meshes, findings) is held here, and from process to
process by `wavejig.files.record`.
"""

from __future__ import annotations

import json
import shutil
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, fields, replace
from pathlib import Path
from typing import TYPE_CHECKING, Any, Protocol

from wavejig.design.model import Design, TargetDesign
from wavejig.files.fingerprint import fingerprint
from wavejig.files.manifest import Entry
from wavejig.files.origin import sha256

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


def inputs(step: str, design: Design, plans: Mapping[str, object]) -> str | None:
    """Fingerprint of what that step's files follow from; None for a step that is always run."""
    if step not in _ASIDE:
        return None
    left_out = _NEVER | _ASIDE[step]
    asked = replace(design, target=_shape(design.target))
    return fingerprint(
        [
            step,
            {f.name: getattr(asked, f.name) for f in fields(design) if f.name not in left_out},
            [plans[p] for p in _PLANS[step]],
        ]
    )


def _shape(target: TargetDesign) -> TargetDesign:
    """The target without the wanted return loss, which no shape and no solve follows from."""
    return replace(target, return_loss_db=0.0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Done:
    """A step that was run: its inputs, its files with their checksums, and what else it gave."""

    given: str
    files: tuple[tuple[Entry, str], ...]
    left: dict[str, Any]


class Shelf(Protocol):
    """Where solves are kept from process to process, by the fingerprint of what was solved."""

    def solved(self, key: str) -> Prediction | None: ...

    def keep_solved(self, key: str, prediction: Prediction) -> None: ...


@dataclass(slots=True)
class Kept:
    """The steps and the solve of the last build. pack: where their files lie by now."""

    pack: Path | None = None
    reused: list[str] = field(default_factory=list)  # steps of the last build that were not run again
    steps: dict[str, Done] = field(default_factory=dict)
    solves: dict[str, Prediction] = field(default_factory=dict)
    shelf: Shelf | None = None

    def recall(self, step: str, given: str | None, root: Path) -> dict[str, Any] | None:
        """Put the step's files into `root` again and give what it left; None when it has to be run."""
        done = self.steps.get(step)
        if done is None or given is None or self.pack is None or done.given != given:
            return None
        if any(_digest(self.pack / entry.path) != digest for entry, digest in done.files):
            return None
        for entry, _ in done.files:
            target = root / entry.path
            target.parent.mkdir(parents=True, exist_ok=True)
            shutil.copyfile(self.pack / entry.path, target)
        self.reused.append(step)
        return done.left

    def remember(
        self, step: str, given: str | None, root: Path, entries: list[Entry], left: dict[str, Any]
    ) -> None:
        """Note a step that was run just now."""
        if given is not None:
            files = tuple((entry, sha256(root / entry.path)) for entry in entries)
            self.steps[step] = Done(given=given, files=files, left=left)

    def solve(self, design: Design, model: Model, predict: Callable[[], Prediction]) -> Prediction:
        """The prediction of a model; solved once for all designs that come to the same model and target."""
        from wavejig.field.from_design import reference_plane

        told = json.dumps(model.to_dict(), sort_keys=True)
        key = fingerprint([told, _shape(design.target), reference_plane(design)])
        found = self.solves.get(key)
        if found is None and self.shelf is not None:
            found = self.shelf.solved(key)
        if found is not None:
            self.reused.append("field solve")
        else:
            found = predict()
            if self.shelf is not None:
                self.shelf.keep_solved(key, found)
        self.solves = {key: found}  # the last one only: memory stays small over a day of saving
        return replace(found, design_name=design.name, wanted_db=design.target.return_loss_db)


def _digest(path: Path) -> str:
    try:
        return sha256(path)
    except OSError:
        return ""
