"""A bar on standard error for long streams."""

from __future__ import annotations

import sys
import time
from typing import Final, TextIO

__all__ = ["Bar"]

_WIDTH: Final = 30
_INTERVAL: Final = 0.1


class Bar:
    """Shows how many of a number of events are done; without a total, how many and how fast.

    >>> import io
    >>> out = io.StringIO()
    >>> bar = Bar(2000, file=out)
    >>> bar.add(2000)
    >>> bar.close()
    >>> "2000 of 2000 events" in out.getvalue()
    True
    """

    def __init__(self, total: int | None, file: TextIO | None = None) -> None:
        self._total = total
        self._done = 0
        self._file = file or sys.stderr
        self._start = time.monotonic()
        self._shown = 0.0

    def add(self, events: int) -> None:
        """Count events that are done."""
        self._done += events
        now = time.monotonic()
        if now - self._shown >= _INTERVAL:
            self._shown = now
            self._show()

    def close(self) -> None:
        """Show the last state and end the line."""
        self._show()
        self._file.write("\n")
        self._file.flush()

    def _show(self) -> None:
        rate = self._done / max(time.monotonic() - self._start, 1e-9)
        if self._total:
            filled = min(_WIDTH * self._done // self._total, _WIDTH)
            bar = "#" * filled + "." * (_WIDTH - filled)
            text = f"[{bar}] {self._done} of {self._total} events, {rate:,.0f}/s"
        else:
            text = f"{self._done} events, {rate:,.0f}/s"
        self._file.write(f"\r{text}   ")
        self._file.flush()
