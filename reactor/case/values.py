"""What a key may hold when it is no quantity: a choice, a count, words, a date, a file."""

import datetime
import difflib
from dataclasses import dataclass

from reactor import library
from reactor.units import Typed


def nearest(word, known, limit=12, guesses=1):
    """Return `unknown; did you mean ...?`, or the list of what is known."""
    near = difflib.get_close_matches(word, known, guesses)
    if near:
        return f"unknown; did you mean {' or '.join(repr(name) for name in near)}?"
    listed = ", ".join(f"'{name}'" for name in list(known)[:limit])
    return f"unknown; known here: {listed}{' ...' if len(known) > limit else ''}"


def quote(value):
    """Return a value the way it stands in the file."""
    return (
        f'"{value}"'
        if isinstance(value, str)
        else str(value).lower()
        if isinstance(value, bool)
        else f"{value}"
    )


@dataclass(frozen=True)
class Choice:
    """One of a few words."""

    words: tuple[str, ...]

    @property
    def due(self):
        """Return what is due, as an error says it."""
        return " or ".join(f'"{word}"' for word in self.words)

    def read(self, value):
        """Return the word as `Typed`; raise a ValueError with the sentence for the user."""
        if value not in self.words:
            near = difflib.get_close_matches(str(value), self.words, 1)
            ask = f'did you mean "{near[0]}"? ' if near and len(self.words) > 1 else ""
            raise ValueError(f"{quote(value)}: {ask}write {self.due}")
        return Typed(value, value, "")


@dataclass(frozen=True)
class Text:
    """Free words."""

    due: str = 'words in quotes, like "as built"'

    def read(self, value):
        """Return the words as `Typed`; raise a ValueError with the sentence for the user."""
        if not isinstance(value, str) or not value.strip():
            raise ValueError(f"{quote(value)}: write {self.due}")
        return Typed(value, value, "")


@dataclass(frozen=True)
class File(Text):
    """The path of a file, taken from the folder of the case."""

    due: str = 'a file name in quotes, like "mine.csv"; paths start at the case file'


@dataclass(frozen=True)
class Count:
    """A whole number."""

    least: int = 1
    most: int = 100_000

    @property
    def due(self):
        """Return what is due, as an error says it."""
        return f"a whole number from {self.least} to {self.most}, without quotes"

    def read(self, value):
        """Return the number as `Typed`; raise a ValueError with the sentence for the user."""
        if isinstance(value, bool) or not isinstance(value, int) or not self.least <= value <= self.most:
            raise ValueError(f"{quote(value)}: write {self.due}")
        return Typed(str(value), value, "")


@dataclass(frozen=True)
class Day:
    """A date."""

    due: str = "a date without quotes, like 2026-12-01"

    def read(self, value):
        """Return the date as `Typed`; raise a ValueError with the sentence for the user."""
        if not isinstance(value, datetime.date) or isinstance(value, datetime.datetime):
            raise ValueError(f"{quote(value)}: write {self.due}")
        return Typed(value.isoformat(), value, "")


@dataclass(frozen=True)
class Listed(Text):
    """A name out of a data file."""

    table: str = ""
    column: str = ""

    def read(self, value):
        """Return the name as `Typed`; raise a ValueError with the nearest name that the data know."""
        words = super().read(value)
        known = tuple(dict.fromkeys(library.table(self.table).text(self.column)))
        if value not in known:
            raise ValueError(f"{quote(value)}: {nearest(value, known, 20, guesses=3)}")
        return words
