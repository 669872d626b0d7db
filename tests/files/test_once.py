"""What costs most in a build is done once a piece: meshing, measuring, asking the kernel whether it is valid.

Times are no test; what they come from is counted here, on the spacer of a demo recipe.
"""

from __future__ import annotations

from collections import Counter
from collections.abc import Callable
from pathlib import Path
from typing import Any

import cadquery
import pytest

import wavejig
from wavejig.files import packfiles, step, stepcheck
from wavejig.files.packfiles import PackFiles
from wavejig.pack import inspect_recipe

RECIPE = Path(wavejig.__file__).parents[2] / "recipes" / "saltmarsh-2g4.toml"


def test_each_printed_piece_is_meshed_measured_and_judged_once(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    counts: Counter[str] = Counter()

    def counted(name: str, plain: Callable[..., Any]) -> Callable[..., Any]:
        def call(*arguments: Any, **named: Any) -> Any:
            counts[name] += 1
            return plain(*arguments, **named)

        return call

    for module, name in (
        (packfiles, "tessellate"),
        (packfiles, "measure"),
        (packfiles, "require_printable"),
        (stepcheck, "_read_parts"),
        (stepcheck, "_check_structure"),
        (step, "BRepCheck_Analyzer"),
        (stepcheck, "BRepCheck_Analyzer"),
    ):
        place = module.__name__.rsplit(".", 1)[1]
        monkeypatch.setattr(module, name, counted(f"{place}.{name}", getattr(module, name)))
    monkeypatch.setattr(stepcheck, "measure", counted("measured again", stepcheck.measure))
    monkeypatch.setattr(cadquery.Shape, "isValid", counted("judged while it is made", cadquery.Shape.isValid))
    files = PackFiles(inspect_recipe(RECIPE)[1], tmp_path)
    files.write_spacer()
    pieces = len(list(tmp_path.glob("spacer/*.step")))
    assert pieces >= 2
    assert set(counts) == {
        "packfiles.tessellate",
        "packfiles.measure",
        "packfiles.require_printable",
        "stepcheck._read_parts",
        "stepcheck._check_structure",
        "step.BRepCheck_Analyzer",  # as it is written
        "stepcheck.BRepCheck_Analyzer",  # as it came back
    }
    assert set(counts.values()) == {pieces}, counts
