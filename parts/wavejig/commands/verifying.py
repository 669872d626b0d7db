"""`wavejig build --verify`: is a pack on disk what its recipe gives?

First its files against its manifest, which takes a blink. Then the recipe inside it is built again, from
nothing but what tuning has kept (--from-scratch: not even that), and the two are compared byte by byte.
"""

from __future__ import annotations

import argparse
import json
import sys
import tempfile
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from wavejig.commands.telling import CANNOT_BE_MADE, MACHINE, OK, WRONG_INPUT, announce, say
from wavejig.progress import Meter

Differing = list[tuple[str, str]]  # (path in the pack, what is wrong with it)


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """Of one pack. code: as an exit code. differing: its files that are not as they should be."""

    code: int
    message: str
    differing: Differing
    versions: dict[str, tuple[str, str]]  # of what differs: the pack's, and here

    def data(self, pack: Path) -> dict[str, Any]:
        """For programs."""
        words = {OK: "as its recipe gives", CANNOT_BE_MADE: "differs", WRONG_INPUT: "no pack to verify"}
        return {
            "pack": str(pack),
            "verdict": words.get(self.code, "not verified"),
            "message": self.message,
            "differing": [{"path": path, "how": how} for path, how in self.differing],
            "versions": {name: {"pack": a, "here": b} for name, (a, b) in self.versions.items()},
        }


def run(args: argparse.Namespace) -> int:
    """Verify each pack; the exit code is the worst of theirs."""
    code, data = OK, []
    for pack in args.verify:
        meter = Meter(str(pack), sys.stderr, quiet=args.json)
        try:
            verdict = verify(pack, meter, anew=args.from_scratch)
        except OSError as err:
            where = f" ({err.filename})" if err.filename else ""
            verdict = _verdict(MACHINE, f"not verified: {err.strerror or err}{where}")
        finally:
            meter.end()
        code = max(code, verdict.code)
        data.append(verdict.data(pack))
        if args.json:
            continue
        text = "\n".join(
            [
                f"{pack}: {verdict.message}",
                *(f"  {how:<8} {path}" for path, how in verdict.differing),
                *(f"  {name}: {a} made it, {b} is here" for name, (a, b) in verdict.versions.items()),
            ]
        )
        if verdict.code == OK:
            say(text)
        else:
            announce(f"{text}")
    if args.json:
        say(json.dumps(data, indent=1))
    return code


def verify(pack: Path, meter: Meter, *, anew: bool = False) -> Verdict:
    """Look at a pack, build its recipe again elsewhere, compare. Raises OSError where that cannot be done."""
    from wavejig.files.origin import MANIFEST, RECIPE, differing, program, versions

    try:
        manifest = json.loads((pack / MANIFEST).read_bytes())
        made, there = manifest["made"], dict(manifest["versions"])
        field, free, its_program = bool(made["field"]), str(made["free"]), str(made["program"])
        wrong = differing(pack, manifest)
    except (FileNotFoundError, NotADirectoryError):
        return _verdict(WRONG_INPUT, f"no pack: no {MANIFEST} in it. Allowed: the folder of a pack")
    except (ValueError, KeyError, TypeError, AttributeError, RecursionError):
        return _verdict(
            WRONG_INPUT,
            f"{MANIFEST} cannot be read as a manifest, or is of a version that does not say what the pack was "
            "made from. Build the pack again",
        )
    if wrong:
        return _verdict(CANNOT_BE_MADE, "differs from its manifest; its recipe was not built again", wrong)
    here = versions() | {"program": program()[:12]}
    there["program"] = its_program[:12]
    other = {
        name: (there.get(name, "absent"), here.get(name, "absent"))
        for name in sorted(there.keys() | here.keys())
        if there.get(name) != here.get(name)
    }
    if not (pack / RECIPE).is_file():
        return _verdict(WRONG_INPUT, f"holds no {RECIPE}, so that it cannot be built again", other=other)
    with tempfile.TemporaryDirectory(prefix="wavejig-verify-") as folder:
        again, fault = _again(pack / RECIPE, Path(folder), meter, field=field, free=free, anew=anew)
        if again is None:
            return _verdict(CANNOT_BE_MADE, f"its recipe gives no pack here: {fault}", other=other)
        wrong = _compared(manifest, json.loads((again / MANIFEST).read_bytes()))
    kept = " (with tuned values kept on this machine)" if free == "tuned" and not anew else ""
    if not wrong:
        told = f"is what its recipe gives{kept}: {len(manifest['files'])} files built again to the same bytes"
        return _verdict(OK, told, other=other)
    why = "; it was made by other versions, which may be why" if other else ""
    return _verdict(CANNOT_BE_MADE, f"is not what its recipe gives{kept}{why}", wrong, other)


def _again(
    recipe: Path, out: Path, meter: Meter, *, field: bool, free: str, anew: bool
) -> tuple[Path | None, str]:
    """The folder of the recipe's pack built under `out`; None and why where it gives none."""
    from wavejig.pack import CannotBeMadeError, build
    from wavejig.recipe import RecipeError

    try:
        built = build(
            recipe, out, meter.step, predict=field, announce=announce, anew=anew,
            free="start" if free == "start" else "tuned",
        )  # fmt: skip
    except RecipeError as err:
        return None, str(err)
    except CannotBeMadeError as err:
        return None, str(err)
    return built.folder, ""


def _compared(one: dict[str, Any], other: dict[str, Any]) -> Differing:
    """Files of a manifest that another has not, or not so, and files that only the other has."""
    ours, theirs = ({f["path"]: f["sha256"] for f in m["files"]} for m in (one, other))
    return sorted(
        (path, "extra" if path not in theirs else "missing" if path not in ours else "changed")
        for path in ours.keys() | theirs.keys()
        if ours.get(path) != theirs.get(path)
    )


def _verdict(
    code: int, message: str, differing: Differing | None = None, other: dict[str, tuple[str, str]] | None = None
) -> Verdict:  # fmt: skip
    return Verdict(code=code, message=message, differing=differing or [], versions=other or {})
