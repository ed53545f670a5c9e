"""
The study file: one SQLite file, one writer, a transaction a batch, readers at any time.

`study` holds what was asked (name, value as JSON), `columns` names and units, `points` a row a point keyed
by its number: what it overrides, done or failed with the reason, its inputs in SI, its results by their
names. The journal is SQLite's own (DELETE, FULL): what was committed is there after a kill or a power cut,
and the file is one file.
"""

import json
import sqlite3
from contextlib import closing, contextmanager, suppress
from pathlib import Path

from reactor.errors import CaseError, ReactorError

FORMAT = 1
PATIENCE = 30.0  # s that a reader or writer waits for the other
FIXED = ("number", "overrides", "state", "reason", "seconds", "more")


class StudyFile:
    """A study file that is open for writing; make one with `writing`."""

    def __init__(self, path, connection, about, names):
        self.path, self.connection, self.about, self.names = path, connection, about, names
        marks = ",".join("?" * (len(FIXED) + len(names)))
        listed = ",".join(map(_quoted, (*FIXED, *names)))
        self._insert = f"INSERT OR REPLACE INTO points ({listed}) VALUES ({marks})"

    def write(self, rows):
        """Write the rows of one batch in one transaction; all of them or none."""
        records = [self._record(row) for row in rows]
        with self._told():
            self.connection.execute("BEGIN IMMEDIATE")
            self.connection.executemany(self._insert, records)
            self.connection.execute("COMMIT")

    def note(self, name, value):
        """Keep one more fact about the study."""
        with self._told():
            self.connection.execute("INSERT OR REPLACE INTO study VALUES (?, ?)", (name, json.dumps(value)))
        self.about[name] = value

    def numbers(self):
        """Return the numbers of the points that are in the file, as a set."""
        return {number for (number,) in self.connection.execute("SELECT number FROM points")}

    def count(self):
        """Return {state: number of points} of what is in the file."""
        return dict(self.connection.execute("SELECT state, count(*) FROM points GROUP BY state"))

    def done(self, size, retry=False):
        """Return one byte a point: 1 where it is in the file (failed ones only without `retry`)."""
        found = bytearray(size)
        for number, state in self.connection.execute("SELECT number, state FROM points"):
            if number < size and not (retry and state == "failed"):
                found[number] = 1
        return found

    def _record(self, row):
        inputs = dict(zip(self.about["axes"], row.point.inputs, strict=True))
        values = {**inputs, **row.values}
        text = json.dumps(row.point.overrides), row.state, row.reason, row.seconds, json.dumps(row.more)
        return (row.point.number, *text, *(values.get(name) for name in self.names))

    @contextmanager
    def _told(self):
        """Turn a refusal of SQLite into a sentence; what was written before stands."""
        try:
            yield
        except sqlite3.OperationalError as error:
            if self.connection.in_transaction:
                self.connection.execute("ROLLBACK")
            raise ReactorError(
                f"{self.path}: cannot be written ({error}); the batches before this one are kept: make "
                "room or free the file, then run the same command again"
            ) from None


@contextmanager
def writing(path, about, columns, fresh=False):
    """
    Open a study file for writing: a new one, or the same study once more.

    Parameters
    ----------
    path : str or Path
        The file.
    about : dict
        What defines the study: `kind`, `case` (its TOML text), `identity`, `design`, `axes` {key: unit}.
    columns : dict
        {name: (unit, definition)} of the results.
    fresh : bool
        Replace a study that is there.

    Raises
    ------
    CaseError
        When the file holds another study, or another run is writing it.
    """
    path = Path(path)
    with _alone(path):
        if fresh:
            path.unlink(missing_ok=True)
        connection = _open(path)
        with closing(connection):
            if connection.execute("SELECT count(*) FROM sqlite_master").fetchone()[0] == 0:
                _make(connection, about, columns)
            found = facts(connection, path)
            _same(path, found, about)
            names = [name for (name,) in connection.execute("SELECT name FROM columns ORDER BY place")]
            yield StudyFile(path, connection, found, names)


@contextmanager
def _alone(path):
    """Hold the right to write: a lock that the system drops when the process ends, however it ends."""
    lock = path.with_name(path.name + ".lock")
    try:
        connection = sqlite3.connect(lock, timeout=0.0, isolation_level=None)
        connection.execute("BEGIN EXCLUSIVE")
    except sqlite3.OperationalError as error:
        words = "another run is writing it" if "locked" in str(error) else f"cannot be written ({error})"
        raise CaseError(f"{path}: {words}; wait for it, or choose another file with --out") from None
    try:
        yield
    finally:
        with suppress(OSError):  # where an open file cannot be removed it stays, empty and free
            lock.unlink()
        connection.close()


def _open(path):
    try:
        connection = sqlite3.connect(path, timeout=PATIENCE, isolation_level=None)
        connection.execute("PRAGMA journal_mode=DELETE")
        connection.execute("PRAGMA synchronous=FULL")
        return connection
    except sqlite3.DatabaseError as error:
        raise CaseError(f"{path}: is no study file ({error}); choose another file with --out") from None


def _make(connection, about, columns):
    """Lay out a new file in one transaction."""
    listed = [(key, unit, "input", "varied") for key, unit in about["axes"].items()]
    listed += [(name, unit, "result", words) for name, (unit, words) in columns.items()]
    kinds = ", ".join(
        f"{_quoted(name)} {'TEXT' if unit == 'word' else 'REAL'}" for name, unit, _, _ in listed
    )
    connection.execute("BEGIN IMMEDIATE")
    connection.execute("CREATE TABLE study (name TEXT PRIMARY KEY, value TEXT)")
    connection.execute(
        "CREATE TABLE columns (place INTEGER PRIMARY KEY, name TEXT UNIQUE, unit TEXT, role TEXT, words TEXT)"
    )
    connection.execute(
        "CREATE TABLE points (number INTEGER PRIMARY KEY, overrides TEXT, state TEXT, reason TEXT, "
        f"seconds REAL, more TEXT, {kinds})"
    )
    facts_ = {"format": FORMAT, **about}
    connection.executemany("INSERT INTO study VALUES (?, ?)", [(k, json.dumps(v)) for k, v in facts_.items()])
    connection.executemany(
        "INSERT INTO columns VALUES (?, ?, ?, ?, ?)", [(i, *row) for i, row in enumerate(listed)]
    )
    connection.execute("COMMIT")


def facts(connection, path):
    """Return what the file says about its study."""
    try:
        found = {
            name: json.loads(value) for name, value in connection.execute("SELECT name, value FROM study")
        }
    except (sqlite3.DatabaseError, ValueError):
        raise CaseError(f"{path}: is no study file; make one with: reactor sweep CASE --vary ...") from None
    if found.get("format") != FORMAT:
        raise CaseError(f"{path}: was written by another version of the program; run the study again")
    return found


DEFINING = ("kind", "design", "part", "settings")


def _same(path, found, about):
    """Refuse to go on with a study of another case, design, data or program."""
    differs = [name for name in DEFINING if found.get(name) != _plain(about.get(name))]
    differs += [
        name
        for name in ("case", "data", "code")
        if found["identity"].get(name) != about["identity"].get(name)
    ]
    if differs:
        raise CaseError(
            f"{path}: holds another study (differs in: {', '.join(differs)}); choose another file with "
            "--out, or replace it with --fresh"
        )


def _plain(value):
    return json.loads(json.dumps(value))


def _quoted(name):
    return '"' + name.replace('"', '""') + '"'


@contextmanager
def reading(path):
    """
    Open a study file for reading, also while it is written.

    What a killed run left half done is rolled back first.

    Raises
    ------
    CaseError
        When there is no such file or it is no study file.
    """
    path = Path(path)
    if not path.is_file():
        raise CaseError(f"{path}: there is no such study file")
    uri = path.resolve().as_uri()
    connection = sqlite3.connect(f"{uri}?mode=ro", uri=True, timeout=PATIENCE)
    try:
        try:
            connection.execute("SELECT count(*) FROM sqlite_master")
        except (
            sqlite3.OperationalError
        ):  # a half-written batch of a killed run: only a writer may roll it back
            connection.close()
            connection = sqlite3.connect(f"{uri}?mode=rw", uri=True, timeout=PATIENCE)
            connection.execute("SELECT count(*) FROM sqlite_master")
        yield connection
    except sqlite3.DatabaseError as error:
        raise CaseError(f"{path}: cannot be read as a study file ({error})") from None
    finally:
        connection.close()
