"""One build of a pack at a time: a lock beside the pack's place that ends with the process that holds it.

The operating system's own file lock, held on an open file: whatever ends the process, `kill -9` and a power
cut too, ends the lock, so nobody has to guess from a number or a clock whether an owner still lives. The
file itself means nothing; it names the owner for the message, and its last holder takes it away.
"""

from __future__ import annotations

import contextlib
import errno
import os
import socket
import sys
import time
from collections.abc import Callable, Iterator
from pathlib import Path

_LOOK_S = 0.1  # how often a waiting build looks again


class LockedError(OSError):
    """Another process builds the same pack, and we were told not to wait."""


@contextlib.contextmanager
def locked(
    out: Path, name: str, *, wait: bool = True, told: Callable[[str], None] = lambda _: None
) -> Iterator[bool]:
    """Hold the lock of the pack `out`/`name`; gives whether another build had to be waited for.

    The folder is made if it is not there, and taken away again if nothing was put into it. told: who is
    waited for, once. Raises LockedError where `wait` is false, OSError where no lock can be had.
    """
    made = _make(out)
    path = out / f".{name}.lock"
    waited = False
    try:
        while (handle := _take(path)) is None:
            owner = _owner(path)
            if not wait:
                raise LockedError(errno.EBUSY, f"{owner} is building this pack", str(out / name))
            if not waited:
                told(f"{out / name}: {owner} is building this pack; waiting for it (--no-wait: do not)")
            waited = True
            time.sleep(_LOOK_S)
        try:
            yield waited
        finally:
            _release(path, handle)
    finally:
        for folder in made:
            with contextlib.suppress(OSError):  # not empty: there is a pack in it now
                folder.rmdir()


def _make(folder: Path) -> list[Path]:
    """Make a folder and those above it; the ones that were not there, deepest first."""
    missing = [f for f in (folder, *folder.parents) if not f.exists()]
    folder.mkdir(parents=True, exist_ok=True)
    return missing


def _take(path: Path) -> int | None:
    """An open, locked file; None while another process holds it."""
    while True:
        try:
            handle = os.open(path, os.O_RDWR | os.O_CREAT, 0o666)
        except FileNotFoundError:  # so did a failed build of another with the folder it had made
            path.parent.mkdir(parents=True, exist_ok=True)
            continue
        try:
            if not _lock(handle):
                os.close(handle)
                return None
            if _same(handle, path):
                os.ftruncate(handle, 0)
                os.write(handle, f"process {os.getpid()} on {socket.gethostname()}".encode())
                return handle
        except BaseException:
            os.close(handle)
            raise
        os.close(handle)  # its last holder took it away between our opening and our locking it


def _same(handle: int, path: Path) -> bool:
    """The file that is open is the one that is there."""
    try:
        return os.path.samestat(os.fstat(handle), path.stat())
    except FileNotFoundError:
        return False


def _release(path: Path, handle: int) -> None:
    """Away with the file while it is still ours, then the lock."""
    with contextlib.suppress(OSError):  # some systems keep an open file; it means nothing
        path.unlink()
    os.close(handle)


def _owner(path: Path) -> str:
    """Who holds it, as far as its file says."""
    try:
        return path.read_text(encoding="utf-8", errors="replace")[:200].strip() or "another process"
    except OSError:
        return "another process"


if sys.platform == "win32":
    import msvcrt

    def _lock(handle: int) -> bool:
        os.lseek(handle, 1 << 20, os.SEEK_SET)  # past the text, which others may then still read
        try:
            msvcrt.locking(handle, msvcrt.LK_NBLCK, 1)
        except OSError as err:
            if err.errno in (errno.EACCES, errno.EDEADLK):
                return False
            raise
        finally:
            os.lseek(handle, 0, os.SEEK_SET)
        return True

else:
    import fcntl

    def _lock(handle: int) -> bool:
        try:
            fcntl.flock(handle, fcntl.LOCK_EX | fcntl.LOCK_NB)
        except BlockingIOError:
            return False
        return True
