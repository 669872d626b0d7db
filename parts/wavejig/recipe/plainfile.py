"""Bytes of a file somebody named: an ordinary file and no more than a limit, or an OSError that says why.

A pipe without a writer would wait for ever and a device may never end, so neither is opened as a recipe,
a sweep or a model.
"""

from __future__ import annotations

import errno
import os
import stat
from pathlib import Path


def read_plain(path: Path, most_bytes: int) -> bytes:
    """At most `most_bytes` + 1 bytes of `path`: one more than the limit says that the file is longer.

    Raises OSError: not there, not allowed, a folder, or no ordinary file.
    """
    # os.open, since Path.open would already wait on a pipe; O_NONBLOCK is not known everywhere
    flags = (
        os.O_RDONLY | getattr(os, "O_NONBLOCK", 0) | getattr(os, "O_BINARY", 0) | getattr(os, "O_CLOEXEC", 0)
    )
    try:
        handle = os.open(path, flags)
    except ValueError as err:  # a nul in the name
        raise OSError(errno.EINVAL, "no file can have this name", str(path)) from err
    try:
        mode = os.fstat(handle).st_mode
        if stat.S_ISDIR(mode):
            raise IsADirectoryError(errno.EISDIR, os.strerror(errno.EISDIR), str(path))
        if not stat.S_ISREG(mode):
            raise OSError(errno.EINVAL, "a pipe or device, not an ordinary file", str(path))
    except BaseException:
        os.close(handle)
        raise
    with os.fdopen(handle, "rb") as stream:
        return stream.read(most_bytes + 1)
