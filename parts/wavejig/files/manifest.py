"""manifest.json: every file of a pack with its size and checksum, and the versions that made it."""

from __future__ import annotations

import hashlib
import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from wavejig.files.errors import FileCheckError


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One file of a pack. path: relative, with forward slashes. units: "mm", "m" or ""."""

    path: str
    kind: str
    part: str
    units: str


def write_manifest(root: Path, entries: list[Entry], versions: dict[str, str]) -> None:
    """Write manifest.json over the given files of `root`, sorted by path."""
    files = [
        {
            "path": e.path,
            "kind": e.kind,
            "part": e.part,
            "units": e.units,
            "bytes": (root / e.path).stat().st_size,
            "sha256": _sha256(root / e.path),
        }
        for e in sorted(entries, key=lambda e: e.path)
    ]
    text = json.dumps({"files": files, "versions": versions}, indent=1)
    (root / "manifest.json").write_text(text + "\n", encoding="utf-8", newline="\n")


def check_manifest(root: Path) -> dict[str, Any]:
    """The manifest, once every file it lists is there as listed and no other is.

    Raises FileCheckError naming the first file that is missing, changed or extra.
    """
    path = root / "manifest.json"
    data: dict[str, Any] = json.loads(path.read_text(encoding="utf-8"))
    listed = {f["path"] for f in data["files"]}
    found = {p.relative_to(root).as_posix() for p in root.rglob("*") if p.is_file()} - {"manifest.json"}
    for extra in sorted(found - listed):
        raise FileCheckError(root / extra, "a file the manifest does not list", "only listed files")
    for entry in data["files"]:
        file = root / entry["path"]
        if not file.is_file():
            raise FileCheckError(file, "nothing", "a file the manifest lists")
        if file.stat().st_size != entry["bytes"] or _sha256(file) != entry["sha256"]:
            raise FileCheckError(file, "other bytes", f"sha256 {entry['sha256']}")
    return data


def _sha256(path: Path) -> str:
    with path.open("rb") as stream:
        return hashlib.file_digest(stream, "sha256").hexdigest()
