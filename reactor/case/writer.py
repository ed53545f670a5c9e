"""Write a case as TOML text that reads back equal."""

import datetime
import json
import re

from reactor.case.reader import build


def dump(case):
    """
    Return the TOML text of a case, overrides included.

    A case that was changed by hand, not read or made by `changed`, cannot be written: it has no typed text.
    """
    if build(case.tree, case.folder, (), False, case.name, {}).hash() != case.hash():
        raise ValueError("this case differs from its typed text; change cases with `changed`, then dump")
    return "\n".join(_table(case.tree, "")).strip() + "\n"


def _table(tree, prefix):
    """Return the lines of a table: its plain keys first, then the tables below it."""
    below = [key for key, value in tree.items() if _is_section(value) and _key(key) != "composition"]
    lines = [f"{_key(key)} = {_value(value)}" for key, value in tree.items() if key not in below]
    for key in below:
        name = f"{prefix}.{_key(key)}" if prefix else _key(key)
        value = tree[key]
        for entry in value if isinstance(value, list) else [value]:
            inner = _table(entry, name)
            if not inner or not inner[0].startswith("\n"):
                lines.append(f"\n[[{name}]]" if isinstance(value, list) else f"\n[{name}]")
            lines += inner
    return lines


def _is_section(value):
    """Tell whether a value is written as a table or array of tables of its own."""
    return isinstance(value, dict) or (isinstance(value, list) and value and isinstance(value[0], dict))


def _key(key):
    """Return a key, in quotes where TOML wants them."""
    return key if re.fullmatch(r"[A-Za-z0-9_-]+", key) else json.dumps(key, ensure_ascii=False)


def _value(value):
    """Return one value as TOML."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return json.dumps(value, ensure_ascii=False).replace("\x7f", "\\u007f")
    if isinstance(value, datetime.date):
        return value.isoformat()
    if isinstance(value, dict):
        return "{ " + ", ".join(f"{_key(key)} = {_value(item)}" for key, item in value.items()) + " }"
    if isinstance(value, list):
        return "[" + ", ".join(map(_value, value)) + "]"
    return repr(value)
