"""Join the parts of a study that an array job made into one file."""

from reactor.errors import CaseError
from reactor.study.file import FIXED, facts, reading, writing
from reactor.study.run import Tally


def merge(out, parts, fresh=False):
    """
    Join study files of one study and return the `Tally`; a point that stands twice is kept once.

    Parameters
    ----------
    out : str or Path
        The file to write; it may hold the same study already.
    parts : sequence of str or Path
        Files that `--part` made.
    fresh : bool
        Replace `out`.

    Raises
    ------
    CaseError
        When the parts are not of one study.
    """
    with reading(parts[0]) as connection:
        first = facts(connection, parts[0])
        columns = {
            name: (unit, words)
            for name, unit, role, words in connection.execute(
                "SELECT name, unit, role, words FROM columns ORDER BY place"
            )
            if role == "result"
        }
    about = {key: value for key, value in first.items() if key != "format"} | {
        "part": None,
        "due": first["size"],
    }
    with writing(out, about, columns, fresh) as file:
        names = [*FIXED, *file.names]
        listed = ",".join('"' + name.replace('"', '""') + '"' for name in names)
        marks = ",".join("?" * len(names))
        for path in parts:
            with reading(path) as connection:
                _belongs(path, facts(connection, path), about)
                rows = connection.execute(f"SELECT {listed} FROM points")
                with file._told():
                    file.connection.execute("BEGIN IMMEDIATE")
                    keep = (
                        f"INSERT INTO points ({listed}) VALUES ({marks}) ON CONFLICT(number) DO UPDATE SET "
                        + ",".join(f'"{n}"=excluded."{n}"' for n in names[1:])
                        + " WHERE points.state='failed'"
                    )
                    file.connection.executemany(keep, rows)
                    file.connection.execute("COMMIT")
        count = file.count()
    return Tally(first["size"], finished=sum(count.values()), failed=count.get("failed", 0))


def _belongs(path, found, about):
    differs = [name for name in ("kind", "design", "settings") if found.get(name) != about.get(name)]
    differs += [
        name
        for name in ("case", "data", "code")
        if found["identity"].get(name) != about["identity"].get(name)
    ]
    if differs:
        raise CaseError(f"{path}: is a part of another study (differs in: {', '.join(differs)})")
