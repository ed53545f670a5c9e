"""Read tables into values, one key after the other, and note every fault with its place."""

from dataclasses import MISSING, fields

from reactor.case.places import line_of
from reactor.case.schema import Assumed
from reactor.case.values import nearest
from reactor.units import Typed, show


class Draft:
    """The work of one reading: what was typed, assumed and looked up so far, and all faults."""

    def __init__(self, name, places=None, overridden=()):
        self.name, self.places, self.overridden = name, places or {}, set(overridden)
        self.typed: dict[str, Typed] = {}
        self.assumed: list[Assumed] = []
        self.looked_up: list[Assumed] = []
        self.files: dict[str, str] = {}
        self._faults: list[tuple[int, str]] = []

    def fault(self, key, message):
        """Note what is wrong with a key."""
        if any(key == other or key.startswith(other + ".") for other in self.overridden):
            self._faults.append((10**9, f"--set: {key}: {message}"))
            return
        line = line_of(self.places, key)
        place = f"{self.name}:{line}" if line else self.name
        self._faults.append((line, f"{place}: {key}: {message}"))

    @property
    def faults(self):
        """Return the finished sentences in the order of the lines."""
        return [text for _, text in sorted(self._faults, key=lambda fault: fault[0])]

    def is_table(self, raw, key):
        """Tell whether `raw` is a table, and note the fault when it is not."""
        if isinstance(raw, list) and raw and isinstance(raw[0], dict):
            self.fault(key, f"stands once: write [{key}] with single brackets")
        elif not isinstance(raw, dict):
            self.fault(key, f"a section is due: write [{key}] on a line of its own and its keys below")
        return isinstance(raw, dict)

    def take(self, key, kind, raw):
        """Return one typed value in SI, or None after noting the fault."""
        try:
            typed = kind.read(raw)
        except ValueError as error:
            self.fault(key, str(error))
            return None
        self.typed[key] = typed
        return typed.si

    def assume(self, key, value, why, unit=""):
        """Note a default that was taken, and return it."""
        text = show(value, unit) if isinstance(value, float) and unit else str(value)
        text = "not given" if value is None else text
        self.assumed.append(Assumed(key, text, why))
        return value

    def table(self, cls, raw, key, beside=()):
        """Return the values of one table as {name: SI value}; a faulty key is left out."""
        known = {item.name: item for item in fields(cls) if "kind" in item.metadata}
        for name in raw:
            if name not in known and name not in beside:
                self.fault(f"{key}.{name}", nearest(name, (*known, *beside)))
        values, faulty = {}, set()
        for name, item in known.items():
            if name in raw:
                value = self.take(f"{key}.{name}", item.metadata["kind"], raw[name])
                if value is None:
                    faulty.add(name)
                else:
                    values[name] = value
            elif item.default is MISSING:
                self.fault(f"{key}.{name}", f"missing; write {item.metadata['kind'].due}")
        self._fill(known, values, faulty, key)
        return values

    def _fill(self, known, values, faulty, key):
        """Take the defaults of the keys that were not typed."""
        for name, item in known.items():
            if name in values or name in faulty or item.default is MISSING:
                continue
            values[name], notes = item.default, item.metadata
            if "data" in notes:
                self.looked_up.append(Assumed(f"{key}.{name}", "from the data", notes["data"]))
            if "value" not in notes or (notes["when"] and not notes["when"](values)):
                continue
            if callable(notes["value"]):
                try:
                    values[name] = notes["value"](values)
                except KeyError:  # what it depends on is itself at fault
                    continue
            self.assume(f"{key}.{name}", values[name], notes["why"], getattr(notes["kind"], "si", ""))
