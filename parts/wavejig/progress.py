"""One line of progress on a terminal, rewritten step by step; silent when piped."""

from __future__ import annotations

import shutil
import time
from typing import TextIO

from wavejig.recipe.errors import visible


class Meter:
    """Shows which step a long job is at, and for how long it has been running."""

    def __init__(self, title: str, stream: TextIO, *, quiet: bool = False) -> None:
        self.title = title
        self.stream = stream
        self.shown = not quiet and stream.isatty()
        self.began = time.monotonic()
        self.width = 0

    def step(self, name: str) -> None:
        """Say what happens next."""
        if not self.shown:
            return
        text = f"{visible(self.title)}: {visible(name)} ({time.monotonic() - self.began:.0f} s)"
        room = shutil.get_terminal_size().columns - 1  # a line that wraps could not be rewritten
        text = text if len(text) <= room else text[: room - 3] + "..."
        self.stream.write("\r" + text.ljust(self.width))
        self.stream.flush()
        self.width = len(text)

    def end(self) -> None:
        """Wipe the line."""
        if self.shown and self.width:
            self.stream.write("\r" + " " * self.width + "\r")
            self.stream.flush()
