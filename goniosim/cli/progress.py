"""A progress bar on stderr, only for work that lasts more than a second and only on a terminal."""

from __future__ import annotations

import sys
import time

SHOW_AFTER_S = 1.0
BAR = 24


class Progress:
    """Called with (step in words, steps done, steps in all); clears its line at the end."""

    def __init__(self, stream=None):
        self.stream = stream or sys.stderr
        self.begun = time.monotonic()
        self.shown = False

    def __call__(self, words: str, done: int, in_all: int) -> None:
        """Show where the work stands, once it has lasted long enough."""
        if not self.stream.isatty() or time.monotonic() - self.begun < SHOW_AFTER_S:
            return
        filled = BAR * done // in_all
        self.stream.write(f"\r[{'#' * filled}{'.' * (BAR - filled)}] {words:<28}")
        self.stream.flush()
        self.shown = True

    def close(self) -> None:
        """Take the bar away."""
        if self.shown:
            self.stream.write("\r" + " " * (BAR + 32) + "\r")
            self.stream.flush()
