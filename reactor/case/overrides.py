"""Put `vessel.length=2 m` from the command line over what the case file says."""

import copy
import tomllib

_PAIRS = {
    "feed": ("flow", "ratio"),
    "lamp": ("kind", "spectrum"),
    "chemistry": ("wall_loss", "wall_sticking"),
}


def apply(tree, overrides, fault):
    """
    Return a changed copy of the tree, the keys that were set, and (key, old, new) of each change.

    Parameters
    ----------
    tree : dict
        The case file as read. [-]
    overrides : sequence of str
        `section.key=value`; entries of an array are counted from 1, without a number all are meant. [-]
    fault : callable
        Takes a key and a message. [-]
    """
    tree, keys, deviations = copy.deepcopy(tree), [], []
    for text in overrides:
        key, sign, value = text.partition("=")
        if not sign or not key.strip() or not value.strip():
            fault(text, 'write it like vessel.length="2 m"')
            continue
        try:
            places = _places(tree, key.strip().split("."), "")
        except ValueError as error:
            fault(key.strip(), str(error))
            continue
        for table, name, dotted in places:
            old = table.get(name)
            pair = _PAIRS.get(dotted.split(".")[0], ())
            for other in pair if name in pair else ():  # one replaces the other
                if other != name and other in table:
                    old = f"{other} = {table.pop(other)}"
            table[name] = _value(value.strip())
            keys.append(dotted)
            deviations.append((dotted, "not given" if old is None else str(old), str(table[name])))
    return tree, keys, tuple(deviations)


def _value(text):
    """Return the text as the TOML value it spells, else as it stands."""
    try:
        parsed = tomllib.loads(f"value = {text}")
    except tomllib.TOMLDecodeError:
        return text
    return parsed["value"] if set(parsed) == {"value"} else text


def _places(node, parts, dotted):
    """Return (table, key, dotted key) of every place that a dotted key means."""
    name, *rest = parts
    here = f"{dotted}.{name}" if dotted else name
    if isinstance(node, list):
        if name.isdigit():
            if not 1 <= int(name) <= len(node):
                raise ValueError(f"there is no entry {name}; entries run from 1 to {len(node)}")
            return _places(node[int(name) - 1], rest, here) if rest else _too_short()
        return [place for i, entry in enumerate(node, 1) for place in _places(entry, parts, f"{dotted}.{i}")]
    if not isinstance(node, dict):
        raise ValueError("a value stands there, not a section")
    if not rest:
        return [(node, name, here)]
    if name not in node and name in ("lamp", "inject"):
        raise ValueError(f"the case has no [[{name}]]; add one to the file")
    return _places(node.setdefault(name, {}), rest, here)


def _too_short():
    raise ValueError("name the key to set, like lamp.1.power")
