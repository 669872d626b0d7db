"""A pack's folder is whole or absent: filled beside its place, then exchanged with what is there.

Where the system can exchange two folders in one step (Linux, `renameat2`), whoever reads the pack sees the
old one or the new one at any moment. Elsewhere the old one is set aside first; a kill between those two
steps leaves no pack in its place, and the next build puts the old one back. The caller holds the pack's
lock, so whatever is found half done is nobody's any more.
"""

from __future__ import annotations

import contextlib
import ctypes
import errno
import functools
import os
import re
import shutil
import sys
from collections.abc import Callable, Iterator
from concurrent.futures import ThreadPoolExecutor
from pathlib import Path

_STAGE, _OLD = ".building-", ".replaced-"
_AT_FDCWD, _RENAME_EXCHANGE = -100, 2  # linux/fcntl.h, linux/fs.h
_FLUSHES = 4  # at once: the disk writes one journal for several; measured, a third of the time of one by one
_CANNOT = {errno.ENOSYS, errno.EINVAL, errno.EPERM, errno.ENOTSUP}


@contextlib.contextmanager
def staging(out: Path, name: str) -> Iterator[Path]:
    """A fresh folder beside the pack's place; put in that place when the block ends well, removed otherwise."""
    out.mkdir(parents=True, exist_ok=True)
    final = out / name
    _recover(out, name)
    if final.is_symlink() or (
        final.exists() and not (final / "manifest.json").is_file() and not _empty(final)
    ):
        raise FileExistsError(
            errno.EEXIST,
            "this folder exists and is not a pack of ours; move it away or use --out",
            str(final),
        )
    stage = out / f".{name}{_STAGE}{os.getpid()}"
    stage.mkdir()
    try:
        yield stage
        _settle(stage)
        _swap(stage, final)
    except BaseException:  # ctrl-C too: nothing may be left behind
        shutil.rmtree(stage, ignore_errors=True)
        raise
    _flush(out)


def _recover(out: Path, name: str) -> None:
    """Undo what a killed build left: bring back a pack caught between two renames, drop the rest."""
    for old in _left(out, name, _OLD):
        if not (out / name).exists():
            old.rename(out / name)
        else:
            _remove(old)
    for stage in _left(out, name, _STAGE):
        _remove(stage)


def _left(out: Path, name: str, kind: str) -> list[Path]:
    """Folders of that kind of this very pack; another's name may begin like this one's."""
    pattern = re.compile(rf"\.{re.escape(name + kind)}\d+")
    return sorted(path for path in out.iterdir() if pattern.fullmatch(path.name))


def _swap(stage: Path, final: Path) -> None:
    """Put the new pack in the old one's place."""
    if not final.exists():
        stage.rename(final)
        return
    exchange = _exchange()
    if exchange is not None:
        try:
            exchange(stage, final)
        except OSError as err:
            if err.errno not in _CANNOT:
                raise
        else:
            _remove(stage)  # the old one by now
            return
    old = final.with_name(f".{final.name}{_OLD}{os.getpid()}")
    final.rename(old)
    try:
        stage.rename(final)
    except BaseException:
        old.rename(final)
        raise
    _remove(old)


@functools.cache
def _exchange() -> Callable[[Path, Path], None] | None:
    """Exchanges two folders in one step; None where the system has no such call."""
    if sys.platform != "linux":
        return None
    try:
        call = ctypes.CDLL(None, use_errno=True).renameat2
    except (OSError, AttributeError):  # a C library older than 2018
        return None

    def exchange(one: Path, other: Path) -> None:
        if call(_AT_FDCWD, os.fsencode(one), _AT_FDCWD, os.fsencode(other), _RENAME_EXCHANGE):
            code = ctypes.get_errno()
            raise OSError(code, os.strerror(code), str(other))

    return exchange


def _settle(stage: Path) -> None:
    """Everything on the disk itself before it takes the old pack's place: a power cut must not empty it."""
    there = [stage, *stage.rglob("*")]
    with ThreadPoolExecutor(_FLUSHES) as pool:
        list(pool.map(_flush, (path for path in there if not path.is_dir())))
    for folder in (path for path in there if path.is_dir()):
        _flush(folder)


def _flush(path: Path) -> None:
    """fsync; folders only where the system lets them be opened."""
    try:
        handle = os.open(path, os.O_RDONLY)
    except (PermissionError, IsADirectoryError):
        return
    try:
        os.fsync(handle)
    except OSError as err:
        if err.errno not in (errno.EINVAL, errno.ENOTSUP, errno.EBADF):  # not on this kind of disk, or folder
            raise
    finally:
        os.close(handle)


def _empty(folder: Path) -> bool:
    return folder.is_dir() and not any(folder.iterdir())


def _remove(folder: Path) -> None:
    shutil.rmtree(folder, ignore_errors=True)
