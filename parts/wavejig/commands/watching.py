"""`wavejig watch`: rebuilds the pack when the recipe is saved, and serves its page on this machine only."""

from __future__ import annotations

import argparse
import hashlib
import threading
import time
import traceback
from pathlib import Path
from typing import TYPE_CHECKING

from wavejig.commands.serving import Board, Server, Trouble
from wavejig.commands.stopping import stoppable
from wavejig.commands.telling import MACHINE, OK, WRONG_INPUT, announce, say, stop

if TYPE_CHECKING:
    from wavejig.files.kept import Kept
    from wavejig.recipe.models import Recipe
    from wavejig.shop import Inspection

POLL_S = 0.5
SETTLE_S = 0.15  # an editor that writes in pieces is done by then; common practice, no source
USUAL_PORT = 8710  # no source: any free one; the same each day, so that a bookmark holds


def run(args: argparse.Namespace) -> int:
    """Watch until ctrl-C or a signal to stop, which are the ways to end it and no fault: exit code 0."""
    path: Path = args.recipe
    if not path.is_file():
        return stop(WRONG_INPUT, f"watch: {path}: no such recipe; `wavejig new FILE` writes one")
    if args.port is not None and not 0 <= args.port <= 65535:
        return stop(WRONG_INPUT, f"watch: --port: read {args.port}; allowed: 0 to 65535, 0 for any free one")
    board = Board(path.name)
    try:
        server = _server(board, args.port)
    except OSError as err:
        return stop(
            MACHINE, f"watch: port {args.port} cannot be used: {err.strerror or err}; try another --port"
        )
    serving = threading.Thread(target=server.serve_forever, kwargs={"poll_interval": 0.1}, daemon=True)
    watch = Watch(path, args.out, board)
    try:
        with stoppable():
            serving.start()
            say(f"watching {path}: see {server.address} on this machine; ctrl-C ends it")
            while True:
                watch.look()
                time.sleep(POLL_S)
    except KeyboardInterrupt:
        last = f"the last good pack is {watch.pack}" if watch.pack else "no pack was built"
        announce(f"\nwatch ended; {last}")
        return OK
    finally:
        if serving.is_alive():
            server.shutdown()
        server.server_close()


def _server(board: Board, port: int | None) -> Server:
    """On the port asked for; where none was, on the usual one or any that is free."""
    if port is not None:
        return Server(board, port)
    try:
        return Server(board, USUAL_PORT)
    except OSError:
        return Server(board, 0)


class Watch:
    """Looks at one recipe, and builds it when its content has changed."""

    def __init__(self, path: Path, out: Path, board: Board) -> None:
        self.path, self.out, self.board = path, out, board
        self.pack: Path | None = None  # the last good one of ours
        self._seen: bytes | None = None
        self._built: Recipe | None = None
        self._memory: Kept | None = None

    def look(self) -> bool:
        """One look; whether there was something to do."""
        content = self._content()
        if content == self._seen:
            return False
        time.sleep(SETTLE_S)
        self._seen = self._content()
        if self._seen is None:
            self._broken(
                [Trouble(where=self.path.name, message="cannot be read", fix="Save it there again.")]
            )
            return True
        began = time.monotonic()
        try:
            self._build(began)
        except Exception as err:  # a fault of ours must not end the watch: the next save may avoid it
            traceback.print_exc()
            told = f"{type(err).__name__}: {err}"
            self._broken([Trouble(where="a fault of wavejig", message=told, fix="Undo the last change.")])
        return True

    def _content(self) -> bytes | None:
        """Fingerprint of the recipe's content; None while it cannot be read."""
        from wavejig.recipe.plainfile import read_plain
        from wavejig.recipe.reader import MOST_BYTES

        try:
            return hashlib.sha256(read_plain(self.path, MOST_BYTES)).digest()
        except OSError:
            return None

    def _build(self, began: float) -> None:
        from wavejig.pack import CannotBeMadeError, build, inspect_recipe
        from wavejig.recipe import RecipeError

        self.board.tell("building", "checking the recipe")
        try:
            recipe_file, inspection = inspect_recipe(self.path)
            if not inspection.can_be_made:
                raise CannotBeMadeError(inspection)
            self._adopt(inspection.design.name)
            if (
                recipe_file.recipe == self._built
                and self.pack is not None
                and (self.pack / "manifest.json").is_file()
            ):
                self.board.tell("ready", f"{inspection.design.name}: up to date; no number changed", ())
                say(f"{self.path}: no number changed")
                return
            from wavejig.files.kept import Kept

            self._memory = Kept() if self._memory is None else self._memory
            self._memory.reused.clear()
            built = build(self.path, self.out, self._step, announce=announce, memory=self._memory)
        except RecipeError as err:
            self._broken(
                [
                    Trouble(
                        where=f"{self.path.name}:{p.line}: {p.key}"
                        if p.line
                        else f"{self.path.name}: {p.key}",
                        message=f"read {p.read}; allowed: {p.allowed}" if p.read else f"allowed: {p.allowed}",
                        fix=p.fix,
                    )
                    for p in err.problems
                ]
            )
            return
        except CannotBeMadeError as err:
            self._broken(_errors(err.inspection))
            return
        except OSError as err:
            where = str(err.filename or self.path)
            self._broken(
                [Trouble(where=where, message=err.strerror or str(err), fix="See to the disk, save again.")]
            )
            return
        self._built, self.pack = recipe_file.recipe, built.folder
        self.board.show(built.folder)
        taken = f"; unchanged: {', '.join(self._memory.reused)}" if self._memory.reused else ""
        took = time.monotonic() - began
        self.board.tell(
            "ready", f"{built.inspection.design.name}: up to date, built in {took:.1f} s{taken}", ()
        )
        say(f"{built.folder}: {built.files} files in {took:.1f} s{taken}")

    def _adopt(self, name: str) -> None:
        """Until the first build is done, show the pack an earlier day left."""
        folder = self.out / name
        if not self.board.has_pack and (folder / "report.html").is_file():
            try:
                self.board.show(folder)
            except (OSError, ValueError, KeyError, TypeError):
                return

    def _step(self, name: str) -> None:
        self.board.tell("building", f"building: {name}")

    def _broken(self, troubles: list[Trouble]) -> None:
        kept = "; below is the last good pack" if self.board.has_pack else ""
        count = f"{len(troubles)} thing{'' if len(troubles) == 1 else 's'} to mend"
        self.board.tell("broken", f"not built, {count}{kept}", troubles)
        for t in troubles:
            announce(f"{t.where}: {t.message} {t.fix}")


def _errors(inspection: Inspection) -> list[Trouble]:
    return [
        Trouble(where=f"{f.severity} {f.code} ({f.where})", message=f.message, fix=f.remedy)
        for f in inspection.findings
        if f.severity == "error"
    ]
