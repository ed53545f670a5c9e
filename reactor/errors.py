"""
The few kinds of error a user can meet.

ReactorError            everything below; the command line prints it without a traceback
├── CaseError           the case file, an option or a data file holds something that cannot be used
├── RangeError          a correlation was asked for a value outside the range of its source
└── ConvergenceError    a solver stopped before it was done, and says where and why

A programming mistake stays a plain `ValueError` or `TypeError`.
"""


class ReactorError(Exception):
    """Tell the user what is wrong, where, and what to write or try instead."""


class CaseError(ReactorError):
    """
    Report every fault of a case at once.

    Parameters
    ----------
    faults : list of str
        One finished sentence each: file, line, key, what was typed, what is accepted.
    """

    def __init__(self, faults):
        self.faults = [faults] if isinstance(faults, str) else list(faults)
        super().__init__("\n".join(self.faults))


class RangeError(ReactorError):
    """Report a value outside the fitted range of a correlation, with the range and its source."""


class ConvergenceError(ReactorError):
    """Report why a solver stopped: the place, the state it had reached, and one thing to try."""
