"""Runs the walk from recipe to pack, and writes a pack whole or not at all.

A pack is built in a hidden folder beside its place, every file read back with a second reader, and only
then swapped in. Whatever fails before the swap leaves the earlier pack as it was.
"""

from __future__ import annotations

import contextlib
import os
import shutil
import tempfile
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import wavejig
from wavejig.recipe import RecipeError, RecipeFile, read_recipe
from wavejig.shop import Inspection, inspect
from wavejig.tuning.settle import Settled, kept, settle

if TYPE_CHECKING:
    from wavejig.field.prediction import Prediction
    from wavejig.files.kept import Kept

Progress = Callable[[str], None]
_STAGE, _OLD = ".building-", ".replaced-"


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
) -> Built:
    """Build the pack of a recipe into `out`/<name>/.

    predict: work out what is left free, solve the field and write field/; without it free values are what is
    kept from before, or starting values. announce: told once if the solver has to be compiled. memory: of earlier
    builds in this process, to run only the steps that a change touches.
    Raises RecipeError (exit 2), CannotBeMadeError (exit 1), OSError (exit 3); FileCheckError or a kernel
    error when a file does not come back as it was written, which is a fault of ours.
    """
    progress("reading the recipe")
    if predict:
        _, inspection, _ = settle_recipe(path, progress, announce)
    else:
        _, inspection = inspect_recipe(path)
    if not inspection.can_be_made:
        raise CannotBeMadeError(inspection)
    progress("loading the CAD kernel")
    from wavejig.files.packfiles import PackFiles

    with staging(out, inspection.design.name) as stage:
        files = PackFiles(inspection, stage, predict=predict, announce=announce, kept=memory)
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
        )
        progress("checking the pack")
        files.finish(_versions())
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


@contextlib.contextmanager
def staging(out: Path, name: str) -> Iterator[Path]:
    """A fresh folder beside the pack's place; swapped in when the block ends well, removed otherwise."""
    out.mkdir(parents=True, exist_ok=True)
    final = out / name
    if final.exists() and not (final / "manifest.json").is_file() and any(final.iterdir()):
        raise FileExistsError(
            17, "this folder exists and is not a pack of ours; move it away or use --out", str(final)
        )
    _clear_leftovers(out, name)
    stage = Path(tempfile.mkdtemp(prefix=f".{name}{_STAGE}", dir=out))
    try:
        yield stage
        _swap(stage, final)
    except BaseException:  # ctrl-C too: nothing may be left behind
        shutil.rmtree(stage, ignore_errors=True)
        raise


def _swap(stage: Path, final: Path) -> None:
    """Put the new pack in the old one's place; the old one comes back if the second step fails."""
    stage.chmod(0o755)  # mkdtemp's folders are private; a pack is to be shared
    if not final.exists():
        stage.rename(final)
        return
    old = final.with_name(f".{final.name}{_OLD}{os.getpid()}")
    final.rename(old)
    try:
        stage.rename(final)
    except BaseException:
        old.rename(final)
        raise
    shutil.rmtree(old, ignore_errors=True)


def _clear_leftovers(out: Path, name: str) -> None:
    """Undo what a killed build left: bring back a pack caught between the two renames, drop the rest."""
    for old in sorted(out.glob(f".{name}{_OLD}*")):
        if not (out / name).exists():
            old.rename(out / name)
        else:
            shutil.rmtree(old, ignore_errors=True)
    for stage in out.glob(f".{name}{_STAGE}*"):
        shutil.rmtree(stage, ignore_errors=True)


def _versions() -> dict[str, str]:
    from importlib.metadata import version

    libraries = (
        "cadquery",
        "cadquery-ocp",
        "ezdxf",
        "numpy",
        "rectpack",
        "reportlab",
        "scipy",
        "numba",
        "trimesh",
        "shapely",
    )
    return {"wavejig": wavejig.__version__, **{name: version(name) for name in libraries}}
