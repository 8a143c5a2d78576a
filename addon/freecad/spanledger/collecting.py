"""Keeps Python's garbage collector out of threads that are not the window's.

The collector runs in whichever thread happens to make the object that is one too many, and
destroys there what it finds.  Qt's objects and Coin's nodes may only be destroyed in the thread
that paints them: PySide destroys a widget at once, wherever the last reference goes, and while
the window's thread is inside Qt or Coin it does not hold Python's lock.  So the window may be
painting, or its list of what to paint may be in use, at the moment in which a thread of ours
takes a widget out of it; the program ends there, rarely and never twice at the same place.
The rubbish need not be ours: a dialog of any other workbench is enough.
"""

from __future__ import annotations

import gc


class CollectorPause:
    """Switches the collector off while at least one thread of ours runs.

    Begin and end are called in the window's thread: before the thread starts, and after it
    ended.  What became rubbish meanwhile is collected afterwards, in the course of things.
    """

    def __init__(self) -> None:
        self._running = 0
        self._was_on = False

    def begin(self) -> None:
        """A thread is about to start."""
        if self._running == 0:
            self._was_on = gc.isenabled()
            gc.disable()
        self._running += 1

    def end(self) -> None:
        """A thread has ended."""
        self._running -= 1
        if self._running == 0 and self._was_on:
            gc.enable()
