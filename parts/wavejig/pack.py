"""Runs the walk from recipe to pack, and writes a pack whole or not at all.

A pack is built in a hidden folder beside its place, every file read back with a second reader, and only
then swapped in. Whatever fails before the swap leaves the earlier pack as it was.
"""

from __future__ import annotations

import errno
import shutil
from collections.abc import Callable
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Literal

from wavejig.design import resolve
from wavejig.files.lock import locked
from wavejig.files.manifest import Entry, check_manifest, write_manifest
from wavejig.files.origin import RECIPE, Found, made_from, versions
from wavejig.files.staging import staging
from wavejig.recipe import RecipeError, RecipeFile, read_recipe
from wavejig.shop import Inspection, inspect
from wavejig.tuning.settle import Settled, kept, settle

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction
    from wavejig.files.kept import Kept
    from wavejig.recipe.models import Recipe
    from wavejig.tuning.yields import Yield

Progress = Callable[[str], None]
Free = Literal["tuned", "start", "kept"]  # what becomes of values left "auto"
_FREE = {"kept": "tuned"}  # in the manifest: where the answer came from is no matter


@dataclass(frozen=True, slots=True, kw_only=True)
class Built:
    """A pack on disk."""

    folder: Path
    files: int
    bytes: int
    inspection: Inspection
    prediction: Prediction | None  # None where the build was told to leave it out

    @property
    def keeps_its_promise(self) -> bool:
        """Nothing predicted misses a figure the recipe states."""
        return self.prediction is None or self.prediction.meets_target


class CannotBeMadeError(Exception):
    """The design has error findings; no pack was written."""

    def __init__(self, inspection: Inspection) -> None:
        self.inspection = inspection
        super().__init__(f"{inspection.design.name} cannot be made")


class BuiltMeanwhileError(Exception):
    """The build that was waited for made the very pack that was wanted."""


def inspect_recipe(path: Path) -> tuple[RecipeFile, Inspection]:
    """Read, resolve and judge a recipe, without a solve: tuned values where they are kept from before.

    Raises RecipeError with lines; OSError when unreadable.
    """
    recipe_file = read_recipe(path)
    try:
        design = kept(recipe_file.recipe).design
    except RecipeError as err:
        raise recipe_file.error(err.problems) from err
    return recipe_file, inspect(design)


def settle_recipe(
    path: Path, progress: Progress = lambda _: None, announce: Progress = lambda _: None
) -> tuple[RecipeFile, Inspection, Settled]:
    """As inspect_recipe, but what the recipe leaves free is worked out with the field solver."""
    recipe_file = read_recipe(path)
    try:
        settled = settle(recipe_file.recipe, lambda step: progress(f"tuning, {step}"), announce)
    except RecipeError as err:
        raise recipe_file.error(err.problems) from err
    return recipe_file, inspect(settled.design), settled


def build(
    path: Path,
    out: Path,
    progress: Progress = lambda _: None,
    *,
    predict: bool = True,
    announce: Progress = lambda _: None,
    memory: Kept | None = None,
    wait: bool = True,
    free: Free | None = None,
    anew: bool = False,
    done: Callable[[], bool] = lambda: False,
) -> Built:
    """Build the pack of a recipe into `out`/<name>/.

    predict: work out what is left free, solve the field and write field/; without it free values are what is
    kept from before, or starting values. announce: told once if the solver has to be compiled, or another
    build of the same pack has to be waited for (wait: or be refused with LockedError). memory: of earlier
    builds, to run only the steps that a change touches. free: "tuned" or "start" in spite of `predict`.
    anew: tune in spite of a kept answer. done: asked after another build has been waited for: is nothing left to do?
    Raises BuiltMeanwhileError where `done` says so; RecipeError (exit 2), CannotBeMadeError (exit 1), OSError
    (exit 3); FileCheckError or a kernel
    error when a file does not come back as it was written, which is a fault of ours.
    """
    progress("reading the recipe")
    recipe_file, text = _read(path)
    with locked(out, recipe_file.recipe.name, wait=wait, told=announce) as waited:
        if waited and done():
            raise BuiltMeanwhileError(path)
        settled = _settled(recipe_file, free or ("tuned" if predict else "kept"), progress, announce, anew)
        inspection = inspect(settled.design)
        if not inspection.can_be_made:
            raise CannotBeMadeError(inspection)
        yields = _yields(recipe_file.recipe, inspection, progress, announce) if predict else None
        progress("loading the CAD kernel")
        from wavejig.files.beside import Beside
        from wavejig.files.fingerprint import fingerprint
        from wavejig.files.packfiles import PackFiles

        with staging(out, inspection.design.name) as stage, Beside() as beside:
            files = PackFiles(
                inspection, stage, predict=predict, announce=announce, kept=memory, beside=beside
            )
            for step in files.steps():
                progress(step.title)
                files.do(step)
            progress("drawings and build sheet")
            from wavejig.sheets.sheetfiles import write_sheets

            files.entries += write_sheets(
                files.inspection,
                files.pattern,
                stage,
                prediction=files.prediction,
                order=files.bend_order,
                batch=files.batch,
            )
            files.write_recipe(text)
            progress("report")
            from wavejig.sheets.report.frompack import write_pack_report

            files.entries += write_pack_report(
                files.inspection,
                files.pattern,
                stage,
                pictured=files.pictured,
                prints=files.prints,
                entries=files.entries,
                batch=files.batch,
                prediction=files.prediction,
                yields=yields,
            )
            progress("checking the pack")
            origin = made_from(
                fingerprint(recipe_file.recipe), field=predict, free=_FREE.get(settled.how, settled.how)
            )
            files.finish(versions(), origin)
            count, size = files.totals()
        if memory is not None:
            memory.pack = out / inspection.design.name
    return Built(
        folder=out / inspection.design.name,
        files=count,
        bytes=size,
        inspection=files.inspection,
        prediction=files.prediction,
    )


def _read(path: Path) -> tuple[RecipeFile, bytes]:
    """A recipe and its very text, even while an editor is saving it."""
    while True:
        recipe_file, text = read_recipe(path), path.read_bytes()
        if read_recipe(path) == recipe_file:
            return recipe_file, text


def _yields(recipe: Recipe, inspection: Inspection, progress: Progress, announce: Progress) -> Yield | None:
    """Where the recipe asks for it: a page follows from its recipe, not from what happens to be kept."""
    if recipe.sheet.expected_yield != "yes" or inspection.radiator is None or inspection.tray is None:
        return None
    from wavejig.field.errors import ModelError
    from wavejig.tuning.asbuilt import ArticleError
    from wavejig.tuning.asked import yield_of
    from wavejig.tuning.solving import workers

    try:
        with workers() as executor:
            return yield_of(recipe, inspection, executor, lambda step: progress(f"yield, {step}"))
    except (ArticleError, ModelError) as err:
        announce(f"{inspection.design.name}: its spread cannot be predicted: {err}")
        return None


def _settled(
    recipe_file: RecipeFile, free: Free, progress: Progress, announce: Progress, anew: bool
) -> Settled:
    recipe = recipe_file.recipe
    try:
        if free == "start":
            return Settled(design=resolve(recipe), how="start")
        if free == "kept":
            return kept(recipe)
        return settle(recipe, lambda step: progress(f"tuning, {step}"), announce, anew=anew)
    except RecipeError as err:
        raise recipe_file.error(err.problems) from err


def retell(path: Path, found: Found, *, wait: bool = True, announce: Progress = lambda _: None) -> None:
    """Put another text of the same numbers into a pack: remarks and spelling, which reach no other file.

    found: that pack, just looked at. Raises OSError.
    """
    out, name = found.folder.parent, found.folder.name
    _, text = _read(path)
    with locked(out, name, wait=wait, told=announce), staging(out, name) as stage:
        entries = [
            Entry(path=f["path"], kind=f["kind"], part=f["part"], units=f["units"])
            for f in found.manifest["files"]
        ]
        for entry in entries:
            target = stage / entry.path
            target.parent.mkdir(parents=True, exist_ok=True)
            if entry.path == RECIPE:
                target.write_bytes(text)
            else:
                shutil.copyfile(found.folder / entry.path, target)
        write_manifest(stage, entries, versions(), found.manifest["made"])
        was = {f["path"]: f["sha256"] for f in found.manifest["files"] if f["path"] != RECIPE}
        for entry in check_manifest(stage)["files"]:
            if was.get(entry["path"], entry["sha256"]) != entry["sha256"]:
                raise OSError(errno.EBUSY, "this file changed under our hands", str(stage / entry["path"]))
