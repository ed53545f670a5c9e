"""Keeps what is costly to make in the user's cache folder. What is found there is checked, never trusted."""

import hashlib
import os
import sys
from pathlib import Path


def folder():
    """Return the folder: REACTOR_CACHE, or this program's part of the user's own cache folder."""
    if "REACTOR_CACHE" in os.environ:
        return Path(os.environ["REACTOR_CACHE"])
    if sys.platform == "win32":
        base = os.environ.get("LOCALAPPDATA", "~")
    elif sys.platform == "darwin":
        base = "~/Library/Caches"
    else:
        base = os.environ.get("XDG_CACHE_HOME", "~/.cache")
    return Path(base).expanduser() / "photochlorination-reactor"


def find(kind, key):
    """
    Return the bytes kept under a key, or None where they are missing, stale, broken or not ours.

    Parameters
    ----------
    kind : str
        What is kept; the ending of the file.
    key : str
        SHA-256, in hexadecimal, of all that the bytes were made from.
    """
    try:
        data = _place(kind, key).read_bytes()
    except (OSError, RuntimeError):
        return None
    body = data[64:]
    return body if data[:32] == bytes.fromhex(key) and data[32:64] == hashlib.sha256(body).digest() else None


def keep(kind, key, body):
    """Keep bytes under a key; a folder that cannot be written to is no reason to stop."""
    try:
        path = _place(kind, key)
        mine = path.with_suffix(f".{os.getpid()}")
        path.parent.mkdir(parents=True, exist_ok=True)
        mine.write_bytes(bytes.fromhex(key) + hashlib.sha256(body).digest() + body)
        mine.replace(path)
    except (OSError, RuntimeError):  # RuntimeError: this user has no home
        return


def _place(kind, key):
    return folder() / f"{key[:32]}.{kind}"


def version(package):
    """
    Return the version of an installed package.

    Read off the name of its record beside it: `importlib.metadata` takes as long to import as a small case to solve.
    """
    start = package.replace("-", "_") + "-"
    for place in sys.path:
        try:
            names = os.listdir(place or ".")
        except OSError:
            continue
        for name in names:
            if name.startswith(start) and name.endswith(".dist-info"):
                return name.removesuffix(".dist-info").removeprefix(start)
    from importlib.metadata import version as stated

    return stated(package)
