"""Progress on standard error: a bar on a terminal; in a pipe or a log one line a minute, nothing before."""

import time

BAR, EVERY, LOG_EVERY = 24, 0.2, 60.0


class Progress:
    """
    Show how far a study is; call it with its tally.

    Parameters
    ----------
    stream : text file
        Where to show it.
    terminal : bool
        Draw a bar that is overwritten, else write lines.
    clock : Clock
        Says the seconds left.
    """

    def __init__(self, stream, terminal, clock, now=time.monotonic):
        self.stream, self.terminal, self.clock, self.now = stream, terminal, clock, now
        self.last = now() if not terminal else -1e9
        self.drawn = False

    def __call__(self, tally):
        """Show the tally, when it is time."""
        left = self.clock.left(tally)
        if self.now() - self.last < (EVERY if self.terminal else LOG_EVERY):
            return
        self.last = self.now()
        self._write(tally, left)

    def _write(self, tally, left):
        done = tally.skipped + tally.finished
        failed = f", {tally.failed} failed" if tally.failed else ""
        rest = "" if left is None else f", about {duration(left)} left"
        words = f"{done} of {tally.size}{failed}{rest}"
        if self.terminal:
            filled = int(BAR * done / max(tally.size, 1))
            self.stream.write(f"\r[{'#' * filled}{'.' * (BAR - filled)}] {words}\x1b[K")
            self.drawn = True
        else:
            self.stream.write(words + "\n")
        self.stream.flush()

    def end(self, tally):
        """Leave the bar in its last state."""
        if self.drawn:
            self._write(tally, None)
            self.stream.write("\n")


def duration(seconds):
    """
    Return a time in words.

    Examples
    --------
    >>> duration(8), duration(200), duration(9000)
    ('8 s', '3 min 20 s', '2 h 30 min')
    """
    seconds = round(seconds)
    if seconds < 60:
        return f"{seconds} s"
    if seconds < 3600:
        return f"{seconds // 60} min {seconds % 60} s"
    return f"{seconds // 3600} h {seconds % 3600 // 60} min"
