"""Imports point one way through the house, and the quick commands load nothing heavy."""

from __future__ import annotations

import ast
import subprocess
import sys
from pathlib import Path

import pytest

import wavejig

ROOT = Path(wavejig.__file__).parent
# The rooms in the order the data walks through them; a module may import from its own room and those above.
ROOMS = [
    "recipe", "stock", "geometry", "forming", "design", "radiator", "reflector", "spacer", "fixture",
    "field", "shop", "tuning", "batch", "files", "sheets", "progress", "pack", "commands", "cli", "__main__",
]  # fmt: skip
# The four parts stand side by side: none imports another but for the radiator's, which the others sit round.
PARTS = {"reflector", "spacer", "fixture"}
HEAVY = {
    "cadquery",
    "OCP",
    "vtk",
    "matplotlib",
    "numba",
    "llvmlite",
    "trimesh",
    "shapely",
    "ezdxf",
    "reportlab",
    "pypdf",
    "scipy",
    "skrf",
    "dask",
    "pint",  # some libraries bring it along
}
# Rooms that `check` walks through: no CAD kernel anywhere in them but in modules named `solid`
# and their helper that engraves.
KERNEL = {"cadquery", "OCP"}


def modules() -> list[Path]:
    return sorted(ROOT.rglob("*.py"))


def room_of(path: Path) -> str:
    first = path.relative_to(ROOT).parts[0]
    return first.removesuffix(".py")


def imports(path: Path) -> set[str]:
    """Every module named by an import statement anywhere in the file, functions included."""
    names: set[str] = set()
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            names |= {alias.name for alias in node.names}
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}: relative import"
            assert node.module
            names.add(node.module)
            names |= {f"{node.module}.{alias.name}" for alias in node.names}
    return names


@pytest.mark.parametrize("path", modules(), ids=lambda p: str(p.relative_to(ROOT)))
def test_imports_point_upwards_only(path: Path) -> None:
    room = room_of(path)
    if room == "__init__":
        assert not {n for n in imports(path) if n.startswith("wavejig")}
        return
    assert room in ROOMS, f"{room} has no place in the house"
    for name in imports(path):
        parts = name.split(".")
        if parts[0] != "wavejig" or len(parts) < 2:
            continue
        other = parts[1]
        if other not in ROOMS:
            continue  # wavejig.__version__
        assert ROOMS.index(other) <= ROOMS.index(room), f"{room} imports downwards from {other}"
        if room in PARTS and other in PARTS:
            assert other == room, f"{room} imports the part {other}"


@pytest.mark.parametrize("path", modules(), ids=lambda p: str(p.relative_to(ROOT)))
def test_the_kernel_stays_in_its_rooms(path: Path) -> None:
    loads = {n.split(".")[0] for n in imports(path)} & KERNEL
    if loads:
        assert path.name in ("solid.py", "engrave.py") or room_of(path) == "files", f"{path} loads {loads}"


def test_every_room_is_a_folder_or_module_of_the_package() -> None:
    found = {room_of(p) for p in modules()} - {"__init__"}
    assert found <= set(ROOMS)


@pytest.mark.parametrize(
    "arguments",
    [
        ["--help"],
        ["check", "recipes/saltmarsh-2g4.toml"],
        ["new", "--schema"],
        ["stock"],
        ["stock", "metals"],
    ],
    ids=lambda a: " ".join(a),
)
def test_quick_commands_load_nothing_heavy(arguments: list[str]) -> None:
    code = (
        "import sys, json\nfrom wavejig.cli import main\n"
        "try:\n    main(sys.argv[1:])\nexcept SystemExit:\n    pass\n"
        "print(json.dumps(sorted({*sys.modules, *(m.split('.')[0] for m in sys.modules)})), file=sys.stderr)\n"
    )
    done = subprocess.run(
        [sys.executable, "-c", code, *arguments],
        capture_output=True,
        text=True,
        check=True,
        cwd=ROOT.parents[1],
        env={"PYTHONPATH": str(ROOT.parent), "PATH": "/usr/bin:/bin"},
    )
    loaded = set(__import__("json").loads(done.stderr.strip().splitlines()[-1]))
    assert not loaded & HEAVY
    if arguments == ["--help"]:
        assert not loaded & {"numpy", "pydantic"}
