"""
Made mechanisms, kept in the user's cache folder by their content.

The name of a file is the hash of all that went into it: the request, the data, these modules. Its first line is the
hash of the rest; a file that does not agree with it is made again, never used.
"""

import hashlib
import json
import os
import sys
import tempfile
from functools import cache
from pathlib import Path

from reactor import library

LABEL = "# sha256 of the lines below: "
APPLICATION = "photochlorination-reactor"


def folder():
    """Return the cache folder of this program, by the custom of the system; it need not exist."""
    own = Path.home() / ("Library/Caches" if sys.platform == "darwin" else ".cache")
    home = os.environ.get("XDG_CACHE_HOME") or os.environ.get("LOCALAPPDATA")
    return (Path(home) if home else own) / APPLICATION / "networks"


def kept(request, make):
    """
    Return the path of a made text: from the cache when it is whole, else made now.

    Parameters
    ----------
    request : dict
        Plain values that say what is wanted.
    make : callable
        Returns the text.

    Returns
    -------
    path : pathlib.Path
        In the cache folder; in a temporary one where that cannot be written.
    """
    asked = json.dumps(request, sort_keys=True)
    name = hashlib.sha256((asked + ingredients()).encode()).hexdigest()[:32] + ".yaml"
    path = folder() / name
    if whole(path):
        return path
    text = make()
    sealed = LABEL + hashlib.sha256(text.encode()).hexdigest() + "\n" + text
    try:
        return _store(path, sealed)
    except OSError:
        return _store(Path(tempfile.mkdtemp(prefix=APPLICATION)) / name, sealed)


def whole(path):
    """Tell whether a cached file can be read and is what was once written."""
    try:
        first, _, rest = path.read_text(encoding="utf-8").partition("\n")
    except (OSError, UnicodeDecodeError):
        return False
    return first == LABEL + hashlib.sha256(rest.encode()).hexdigest()


def _store(path, text):
    """Write a file whole or not at all."""
    path.parent.mkdir(parents=True, exist_ok=True)
    handle, temporary = tempfile.mkstemp(dir=path.parent, suffix=".part")
    with os.fdopen(handle, "w", encoding="utf-8", newline="\n") as file:
        file.write(text)
    os.replace(temporary, path)
    return path


@cache
def ingredients():
    """Return the hash of the data and the modules that a network is made from."""
    found = hashlib.sha256()
    data = library.folder()
    files = [*sorted((data / "networks").iterdir()), data / "mechanism" / "light_alkanes.yaml", data / "species.csv"]
    for path in [*files, *sorted(Path(__file__).parent.glob("*.py"))]:
        found.update(path.name.encode() + b"\0" + path.read_bytes())
    return found.hexdigest()
