"""What a pack was made from, as its manifest says it; and whether the pack on disk is still that.

A pack follows from the numbers of its recipe, from this program's own sources and tables, and from what
computes and writes: Python, the libraries, the kind of processor (whose arithmetic units decide the last
bits of a solve). All of it is compared by content. Nothing heavy is imported here: that nothing has to be
done is found out long before the CAD kernel would be loaded.
"""

from __future__ import annotations

import hashlib
import json
import platform
import re
import sys
import zlib
from dataclasses import dataclass
from functools import cache
from pathlib import Path, PurePosixPath
from typing import Any

import wavejig

RECIPE, MANIFEST, DESIGN = "recipe.toml", "manifest.json", "design.json"
_LIBRARIES = (
    "cadquery", "cadquery-ocp", "ezdxf", "lxml", "networkx", "numba", "numpy", "pypdf", "rectpack", "reportlab",
    "scipy", "shapely", "trimesh",
)  # fmt: skip
_MOST_BYTES = 1 << 20  # far more than any recipe has
_NAME_LINE = re.compile(r"""name[ \t]*=[ \t]*["']([A-Za-z0-9][A-Za-z0-9._-]*)["'][ \t]*(?:#|$)""")
_SOURCES = (".py", ".toml", ".css", ".js")
# Which of these a processor has decides which loops the numeric libraries and the compiler choose.
_UNITS = ("avx512f", "avx2", "fma", "avx", "sse4_2", "asimd", "sve")


@dataclass(frozen=True, slots=True, kw_only=True)
class Found:
    """A pack on disk, whole by its manifest. design: its design.json. same_text: its recipe's text too."""

    folder: Path
    manifest: dict[str, Any]
    design: dict[str, Any]
    same_text: bool

    @property
    def files(self) -> int:
        """Number of files, the manifest included."""
        return len(self.manifest["files"]) + 1

    @property
    def bytes(self) -> int:
        """Of all files, the manifest included."""
        listed = sum(int(f["bytes"]) for f in self.manifest["files"])
        return listed + (self.folder / MANIFEST).stat().st_size


def made_from(numbers: str, *, field: bool, free: str) -> dict[str, Any]:
    """For the manifest. numbers: fingerprint of the recipe. field: whether the field was solved.

    free: what became of values left "auto": "tuned", "start" (starting values), or "given" (there are none).
    """
    return {"recipe": RECIPE, "numbers": numbers, "program": program(), "field": field, "free": free}


@cache
def versions() -> dict[str, str]:
    """Of all that has a say in a pack's bytes, the processor included."""
    from importlib.metadata import PackageNotFoundError, version

    out = {
        "wavejig": wavejig.__version__,
        "python": platform.python_version(),
        "zlib": zlib.ZLIB_RUNTIME_VERSION,
        "processor": _processor(),
    }
    for name in _LIBRARIES:
        try:
            out[name] = version(name)
        except PackageNotFoundError:
            out[name] = "absent"
    return out


@cache
def program() -> str:
    """Digest of this package's own sources, tables and page parts."""
    root = Path(wavejig.__file__).parent
    digest = hashlib.sha256()
    for path in sorted(root.rglob("*"), key=lambda p: p.relative_to(root).as_posix()):
        if path.suffix in _SOURCES and path.is_file():
            data = path.read_bytes()
            digest.update(f"{path.relative_to(root).as_posix()} {len(data)}:".encode())
            digest.update(data)
    return digest.hexdigest()


def look(path: Path, out: Path, *, field: bool) -> Found | None:
    """The pack of the recipe at `path` under `out`, if a build would write it again as it is.

    None when there is none, it is not whole, or it was made from anything else. A recipe that cannot be
    read gives None too: those who read it to build it tell its faults.
    """
    recipe = text_of(path)
    if recipe is None:
        return None
    name = seeming_name(recipe)
    if name is None:
        return None
    folder = out / name
    try:
        manifest = whole(folder)
        made, texts = manifest["made"], {f["path"]: f["sha256"] for f in manifest["files"]}
        if (
            made["field"] is not field
            or made["program"] != program()
            or manifest["versions"] != versions()
            or json.loads((folder / DESIGN).read_bytes())["name"] != name
        ):
            return None
        same_text = texts[RECIPE] == hashlib.sha256(recipe).hexdigest()
        if not same_text or (not field and made["free"] != "given"):
            kept = _kept(path)
            if kept is None or kept[0] != made["numbers"]:
                return None
            if not field and made["free"] != "given" and (made["free"] == "tuned") is not kept[1]:
                return None  # there were starting values then and is a tuned answer now, or the other way
        return Found(
            folder=folder,
            manifest=manifest,
            design=json.loads((folder / DESIGN).read_bytes()),
            same_text=same_text,
        )
    except (OSError, ValueError, KeyError, TypeError, AttributeError, RecursionError):
        return None


def whole(folder: Path) -> dict[str, Any]:
    """The manifest of a folder whose files are all as it lists them. Raises ValueError, OSError otherwise."""
    manifest: dict[str, Any] = json.loads((folder / MANIFEST).read_bytes())
    wrong = differing(folder, manifest)
    if wrong:
        raise ValueError(f"{folder / wrong[0][0]}: {wrong[0][1]}")
    return manifest


def differing(folder: Path, manifest: dict[str, Any]) -> list[tuple[str, str]]:
    """(path, "missing", "changed" or "extra") of every file that is not as the manifest lists it, by path."""
    listed = {str(f["path"]): (f["bytes"], f["sha256"]) for f in manifest["files"]}
    out = []
    for name, (size, digest) in listed.items():
        path = folder / name
        if not _inside(name) or not path.is_file():
            out.append((name, "missing"))
        elif path.is_symlink() or path.stat().st_size != size or sha256(path) != digest:
            out.append((name, "changed"))
    for path in folder.rglob("*"):
        name = path.relative_to(folder).as_posix()
        if name not in listed and name != MANIFEST and (path.is_symlink() or not path.is_dir()):
            out.append((name, "extra"))
    return sorted(out)


def sha256(path: Path) -> str:
    """Of a file's content."""
    with path.open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()


def _inside(name: str) -> bool:
    path = PurePosixPath(name)
    return not path.is_absolute() and ".." not in path.parts and "\\" not in name and ":" not in name


def text_of(path: Path) -> bytes | None:
    """The start of an ordinary file, more than any recipe has; None where there is none. Loads no recipe room."""
    try:
        if not path.is_file():  # a pipe would be waited on
            return None
        with path.open("rb") as stream:
            return stream.read(_MOST_BYTES)
    except (OSError, ValueError):
        return None


def seeming_name(recipe: bytes) -> str | None:
    """The name a recipe's text seems to give its pack: where to look. Nothing is concluded from it alone."""
    for line in recipe.decode("utf-8-sig", errors="replace").splitlines():
        if line.lstrip().startswith("["):
            return None
        found = _NAME_LINE.match(line)
        if found:
            return found[1]
    return None


def _kept(path: Path) -> tuple[str, bool] | None:
    """Fingerprint of a recipe's numbers, and whether a tuned answer is kept for it."""
    from wavejig.files.fingerprint import fingerprint
    from wavejig.recipe import RecipeError, read_recipe
    from wavejig.tuning.cache import load
    from wavejig.tuning.freedom import GRID_MM
    from wavejig.tuning.settle import AIM

    try:
        recipe = read_recipe(path).recipe
    except RecipeError:
        return None
    return fingerprint(recipe), load(recipe, AIM, GRID_MM) is not None


def _processor() -> str:
    """Its family and the arithmetic units it says it has, where the system tells."""
    if sys.platform == "linux":
        try:
            text = Path("/proc/cpuinfo").read_text(encoding="ascii", errors="replace")
        except OSError:
            text = ""
        line = next((t for t in text.splitlines() if t.startswith(("flags", "Features"))), "")
        has = set(line.partition(":")[2].split())
        return " ".join((platform.machine(), *(u for u in _UNITS if u in has)))
    return platform.machine()
