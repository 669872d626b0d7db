"""manifest.json: every file of a pack with its size and checksum, and what the pack was made from."""

from __future__ import annotations

import json
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from wavejig.files.errors import FileCheckError
from wavejig.files.origin import MANIFEST, differing, sha256


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One file of a pack. path: relative, with forward slashes. units: "mm", "m" or ""."""

    path: str
    kind: str
    part: str
    units: str


def write_manifest(
    root: Path, entries: list[Entry], versions: dict[str, str], made: dict[str, Any] | None = None
) -> None:
    """Write manifest.json over the given files of `root`, sorted by path. made: as of `origin.made_from`."""
    files = [
        {
            "path": e.path,
            "kind": e.kind,
            "part": e.part,
            "units": e.units,
            "bytes": (root / e.path).stat().st_size,
            "sha256": sha256(root / e.path),
        }
        for e in sorted(entries, key=lambda e: e.path)
    ]
    data: dict[str, Any] = {"files": files, "versions": versions}
    if made is not None:
        data["made"] = made
    (root / MANIFEST).write_text(json.dumps(data, indent=1) + "\n", encoding="utf-8", newline="\n")


def check_manifest(root: Path) -> dict[str, Any]:
    """The manifest, once every file it lists is there as listed and no other is.

    Raises FileCheckError naming the first file that is missing, changed or extra.
    """
    data: dict[str, Any] = json.loads((root / MANIFEST).read_text(encoding="utf-8"))
    digests = {f["path"]: f["sha256"] for f in data["files"]}
    for name, what in differing(root, data):
        if what == "extra":
            raise FileCheckError(root / name, "a file the manifest does not list", "only listed files")
        if what == "missing":
            raise FileCheckError(root / name, "nothing", "a file the manifest lists")
        raise FileCheckError(root / name, "other bytes", f"sha256 {digests[name]}")
    return data
