"""Progress of a job, stage by stage, on stderr; and how long each stage took."""

from __future__ import annotations

import gc
import sys
import time
from collections.abc import Iterator
from contextlib import contextmanager
from typing import TextIO


class Progress:
    """Times the stages of a job and shows them where somebody is watching.

    Parameters
    ----------
    quiet : bool
        Show nothing.
    stream : file object, optional
        Where to show progress; stderr where left out. Nothing is shown unless it is a terminal.
    """

    def __init__(self, quiet: bool = False, stream: TextIO | None = None) -> None:
        self._stream = sys.stderr if stream is None else stream
        self._shown = not quiet and self._stream.isatty()
        self.timings: dict[str, float] = {}

    @contextmanager
    def stage(self, name: str, words: str) -> Iterator[None]:
        """Time what runs inside, and show it.

        Parameters
        ----------
        name : str
            Key in `timings`; stages of one name add up.
        words : str
            What the user reads.

        Yields
        ------
        None
        """
        self._show(f"{words} ...")
        began = time.perf_counter()
        ending = "stopped"
        try:
            yield
            ending = ""
        finally:
            took = time.perf_counter() - began
            self.timings[name] = self.timings.get(name, 0.0) + took
            self._show(f"\r{words} {ending or f'{took:.1f} s'}   \n")

    @contextmanager
    def loading(self, words: str) -> Iterator[None]:
        """Time the loading of libraries, as stage "imports", with the collector of cycles out of the way.

        Parameters
        ----------
        words : str
            What the user reads.

        Yields
        ------
        None

        Notes
        -----
        What a library brings stays for good: to go over it again and again as it grows finds nothing.
        """
        working = gc.isenabled()
        gc.disable()
        try:
            with self.stage("imports", words):
                yield
        finally:
            if working:
                gc.enable()

    def _show(self, text: str) -> None:
        if self._shown:
            self._stream.write(text)
            self._stream.flush()
