"""Read a case: TOML text in, a checked `Case` out, or one `CaseError` with every fault of the file."""

import hashlib
import re
import tomllib
from dataclasses import replace
from pathlib import Path
from typing import Any

from reactor.case import feeds, loops, overrides, rules, schema, species, targets
from reactor.case.draft import Draft
from reactor.case.places import lines
from reactor.case.values import nearest
from reactor.errors import CaseError

SINGLE = {
    "case": schema.About,
    "vessel": schema.Vessel,
    "sleeve": schema.Sleeve,
    "cooling": schema.Cooling,
    "chemistry": schema.Chemistry,
    "limits": schema.Limits,
    "meters": schema.Meters,
    "uncertainty": schema.Uncertainty,
    "upsets": schema.Upsets,
    "solver": schema.Solver,
}
MANY = {"lamp": schema.Lamp, "inject": schema.Inject}
KNOWN = (*SINGLE, *MANY, "feed", "targets", "recycle")
LATER = ("print", "signoff")
FEED_KEYS = ("flow", "ratio", "temperature")
NO_COOLING = "no [cooling] section: no heat is taken out through the shell"


def load(path, overrides=(), strict=False):
    """
    Read a case file.

    Parameters
    ----------
    path : str or Path
        The TOML file. [-]
    overrides : sequence of str
        Such as `vessel.length=2 m`; kept as deviations. [-]
    strict : bool
        Refuse defaults: every one of them becomes a fault that names its key. [-]

    Raises
    ------
    CaseError
        With all faults of the file at once.
    """
    path = Path(path)
    try:
        text = path.read_text(encoding="utf-8-sig")
    except UnicodeDecodeError as error:
        raise CaseError(f"{path.name}: is not UTF-8 text (byte {error.start}); save it as UTF-8") from None
    except OSError as error:
        raise CaseError(f"{path}: cannot be read ({error.strerror}); check the path") from None
    return loads(text, path.parent, overrides, strict, path.name)


def loads(text, folder=".", overrides=(), strict=False, name="case.toml"):
    """Read a case from TOML text; named files are looked for in `folder`."""
    try:
        tree = tomllib.loads(text)
    except tomllib.TOMLDecodeError as error:
        raise CaseError(_syntax(name, text, str(error))) from None
    return build(tree, folder, overrides, strict, name, lines(text))


def changed(case, overrides, strict=False):
    """Return a case with further overrides, as `--set` would make it."""
    new = build(case.tree, case.folder, overrides, strict, case.name, {})
    kept = tuple(item for item in case.deviations if item[0] not in {key for key, _, _ in new.deviations})
    return replace(new, deviations=kept + new.deviations)


def build(tree, folder, changes, strict, name, places):
    """Return the case that a tree of TOML values stands for."""
    draft = Draft(name, places)
    spoilt = Draft("--set")
    tree, draft.overridden, deviations = overrides.apply(tree, changes, spoilt.fault)
    parts: dict[str, Any] = {"faulty": set()}
    _sections(draft, tree, parts)
    feed = feeds.read(draft, parts["feed"])
    parts["limits"]["window"] = _windows(draft, tree.get("limits", {}))
    rules.apply(draft, parts, feed)
    wanted = targets.read(draft, tree.get("targets", {}))
    recycle = loops.read(draft, tree.get("recycle"), feed)
    _files(draft, parts, Path(folder))
    if strict:
        for key, value, why in draft.assumed:
            draft.fault(key, f"missing; strict reading takes no default ({value}: {why})")
    if draft.faults or spoilt.faults:
        raise CaseError(draft.faults + spoilt.faults)
    made: dict[str, Any] = {key: tuple(cls(**values) for values in parts[key]) for key, cls in MANY.items()}
    made |= {key: cls(**parts[key]) for key, cls in SINGLE.items() if key != "sleeve"}
    return schema.Case(
        about=made.pop("case"),
        sleeve=schema.Sleeve(**parts["sleeve"]) if parts["sleeve"] is not None else None,
        feed=feed,
        targets=wanted,
        recycle=recycle,
        typed=draft.typed,
        assumed=tuple(draft.assumed),
        looked_up=tuple(draft.looked_up),
        files=draft.files,
        deviations=deviations,
        tree=tree,
        folder=Path(folder),
        name=name,
        **made,
    )


def _syntax(name, text, message):
    """Return the one fault of a text that is not TOML."""
    found = re.search(r" \(at (?:line (\d+), column (\d+)|end of document)\)", message)
    line = (found and found[1]) or max(1, len(text.splitlines()))
    words = message[: found.start()] if found else message
    twice = "overwrite" in words or "twice" in words or "Cannot declare" in words
    hint = "a key or section stands twice" if twice else 'quantities stand in quotes, like length = "3 m"'
    return f"{name}:{line}: not readable as TOML: {words}; {hint}"


def _sections(draft, tree, parts):
    """Read every section but the compositions."""
    for key in tree:
        if key in LATER:
            draft.fault(key, "not read by this version; take the section out")
        elif key not in KNOWN:
            draft.fault(key, nearest(key, KNOWN))
    for key, cls in SINGLE.items():
        raw = tree.get(key)
        if raw is None and key in ("case", "vessel"):
            draft.fault(key, f"this section is missing; write [{key}] and its keys")
            parts[key] = {}
        elif raw is None and key == "cooling":
            parts[key] = {"mode": draft.assume("cooling.mode", "none", NO_COOLING)}
        elif raw is None and key == "sleeve":
            parts[key] = None
        elif raw is None or draft.is_table(raw, key):
            parts[key] = draft.table(cls, raw or {}, key, beside=("window",) if key == "limits" else ())
        else:
            parts[key] = None if key == "sleeve" else {}
            parts["faulty"].add(key)
    for key, cls in MANY.items():
        parts[key] = _many(draft, tree.get(key, []), key, cls)
    parts["feed"] = _feed(draft, tree.get("feed"))


def _many(draft, raw, key, cls):
    """Return the values of an array of tables, one dictionary an entry."""
    if not isinstance(raw, list) or not all(isinstance(entry, dict) for entry in raw):
        draft.fault(key, f"may stand several times: write [[{key}]] with two brackets")
        return []
    return [draft.table(cls, entry, f"{key}.{number}") for number, entry in enumerate(raw, start=1)]


def _feed(draft, raw):
    """Return the raw tables of the streams, or none after noting the fault."""
    if raw is None or raw == {}:
        draft.fault("feed", "this section is missing; write [feed.alkane] and [feed.chlorine]")
    elif not isinstance(raw, dict) or not all(isinstance(raw.get(key, {}), dict) for key in FEED_KEYS):
        draft.fault("feed", "streams have names: write [feed.alkane] and [feed.chlorine]")
    else:
        return raw
    return {}


def _windows(draft, limits):
    """Return the user's own explosion limits {species: Window}."""
    found = {}
    raw = limits.get("window", {}) if isinstance(limits, dict) else {}
    if not isinstance(raw, dict):
        draft.fault("limits.window", "limits have species: write [limits.window.CH4]")
        raw = {}
    for name, table in raw.items():
        key = f"limits.window.{name}"
        try:
            known = species.find(name)
        except ValueError as error:
            draft.fault(key, str(error))
            continue
        if not draft.is_table(table, key):
            continue
        values = draft.table(schema.Window, table, key)
        if len(values) < 3:
            continue
        if values["lel"] >= values["uel"]:
            draft.fault(f"{key}.lel", "is not below uel")
        found[known] = schema.Window(**values)
    return found


def _files(draft, parts, folder):
    """Note files that are missing, and the content of those that are there."""
    named = {"chemistry.mechanism": parts["chemistry"].get("mechanism")}
    named["sleeve.transmission"] = (parts["sleeve"] or {}).get("transmission")
    named |= {f"lamp.{i}.spectrum": lamp.get("spectrum") for i, lamp in enumerate(parts["lamp"], start=1)}
    for key, typed in named.items():
        if typed is None:
            continue
        try:
            draft.files[key] = hashlib.sha256((folder / typed).read_bytes()).hexdigest()
        except OSError as error:
            draft.fault(key, f'"{typed}": cannot be read ({error.strerror}); paths start at the case file')
