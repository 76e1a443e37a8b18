"""Ctrl-C that waits for the end of what is in hand."""

import signal
import threading


class Patience:
    """Lets the first Ctrl-C wait for the end of the step in hand, so that what is kept is whole; the second does not wait.

    One that comes when the last step is done changes nothing: the run is complete and is written.
    """

    def __init__(self) -> None:
        self.pressed = False

    def __enter__(self) -> "Patience":
        ignored = signal.getsignal(signal.SIGINT) is signal.SIG_IGN  # as in the background of a script
        self._governs = threading.current_thread() is threading.main_thread() and not ignored
        if self._governs:
            self._former = signal.signal(signal.SIGINT, self._press)
        return self

    def __exit__(self, *exception: object) -> None:
        if self._governs:
            signal.signal(signal.SIGINT, self._former)

    def _press(self, *unused: object) -> None:
        self.check()
        self.pressed = True

    def check(self) -> None:
        """Ends the run here if Ctrl-C was pressed."""
        if self.pressed:
            raise KeyboardInterrupt
