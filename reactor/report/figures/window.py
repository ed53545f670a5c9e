"""The operating window as a figure: forbidden zones hatched, boundaries named, the allowed region white."""

from reactor import units

HATCHES = ("////", "\\\\\\\\", "....", "xxxx", "----", "oooo", "||||", "++++")
GREYS = ("0.15", "0.35", "0.25", "0.45")
COLOURS = ("#0b4f8a", "#a3420b", "#3c6e1f", "#6b2c7a", "#7a5a00", "#00696b", "#8a0b3c", "#444444")
WIDTH, HEIGHT = 7.2, 5.4  # inch


def draw(block, title, path=None):
    """
    Return the Matplotlib figure of a map; write it where a path is given (the ending says the format).

    Parameters
    ----------
    block : dict
        The block `window` of a study file.
    title : str
        Of the case.
    path : str or Path
        A .png, .svg or .pdf file.
    """
    import matplotlib

    with matplotlib.rc_context({"svg.hashsalt": "window", "font.size": 9, "hatch.linewidth": 0.5}):
        from matplotlib.figure import Figure

        figure = Figure((WIDTH, HEIGHT), layout="constrained")
        axes = figure.add_subplot()
        handles = _zones(axes, block) + _lines(axes, block)
        handles += _case(axes, block)
        _frame(axes, block)
        figure.suptitle(title, x=0.02, ha="left", fontsize=10, weight="bold")
        axes.set_title(
            f"allowed: {100 * block['free_share']:.0f} % of the map (white); a scoping estimate",
            loc="left",
            fontsize=8,
        )
        if handles:
            figure.legend(handles=handles, loc="outside lower left", ncols=2, frameon=False, fontsize=8)
        if path is not None:
            ending = str(path).rpartition(".")[2]
            metadata = {"svg": {"Date": None}, "pdf": {"CreationDate": None}}.get(ending, {})
            figure.savefig(path, dpi=150, metadata=metadata)
    return figure


def _shown(axis, value):
    """Return an SI value in the unit that was typed."""
    return units.from_si(value, axis["typed"]) if axis["typed"] else value


def _zones(axes, block):
    """Hatch where each limit forbids, and return what the legend shows."""
    from matplotlib.patches import Patch, PathPatch
    from matplotlib.path import Path

    handles = []
    places = [tuple(_across(block[k], node[n]) for n, k in enumerate("xy")) for node in block["nodes"]]
    for place, rule in enumerate(rule for rule in block["rules"] if rule["forbids"] and rule["share"] > 0):
        colour, hatch = COLOURS[place % len(COLOURS)], HATCHES[place % len(HATCHES)]
        parts = [
            _outside([places[i] for i in cell], [rule["values"][i] for i in cell], rule["smooth"])
            for cell in block["cells"]
        ]
        closed = [Path([*part, part[0]], closed=True) for part in parts if part]
        axes.add_patch(
            PathPatch(
                Path.make_compound_path(*closed),
                facecolor=colour + "1a",
                edgecolor=colour,
                hatch=hatch,
                linewidth=0,
            )
        )
        handles.append(
            Patch(
                facecolor=colour + "1a",
                edgecolor=colour,
                hatch=hatch,
                label=f"forbidden: {rule['name']} ({100 * rule['share']:.0f} %)",
            )
        )
    return handles


def _outside(corners, values, smooth):
    """
    Return the part of a cell where a limit forbids, as corners of a polygon; cut as the boundaries are.

    Examples
    --------
    >>> _outside([(0, 0), (1, 0), (1, 1), (0, 1)], [-1.0, 1.0, 1.0, -1.0], True)
    [(0, 0), (0.5, 0.0), (0.5, 1.0), (0, 1)]
    """
    if any(value is None for value in values):
        return []
    found = []
    for i in range(4):
        here, there, a, b = corners[i], corners[(i + 1) % 4], values[i], values[(i + 1) % 4]
        if a < 0:
            found.append(here)
        if (a < 0) != (b < 0):
            share = a / (a - b) if smooth else 0.5
            found.append(tuple(p + share * (q - p) for p, q in zip(here, there, strict=True)))
    return found


def _lines(axes, block):
    """Draw the boundaries and the lines asked for, and return what the legend shows of the latter."""
    from matplotlib.lines import Line2D

    handles, place = [], 0
    for rule in block["rules"]:
        colour = "black"
        if rule["forbids"]:
            colour = COLOURS[place % len(COLOURS)]
            place += rule["share"] > 0
        for line in rule["lines"]:
            x, y = ([_across(block[k], p[n]) for p in line] for n, k in enumerate("xy"))
            axes.plot(
                x, y, color=colour, lw=1.4 if rule["forbids"] else 0.9, ls="-" if rule["forbids"] else "--"
            )
        if rule["lines"] and not rule["forbids"]:
            x, y = x[len(x) // 2], y[len(y) // 2]
            axes.text(
                x,
                y,
                rule["name"],
                fontsize=7,
                ha="center",
                va="center",
                bbox={"facecolor": "white", "edgecolor": "none", "pad": 1, "alpha": 0.85},
            )
            handles.append(Line2D([], [], color="black", lw=0.9, ls="--", label=rule["name"]))
    return handles


def _case(axes, block):
    """Mark the case as it stands, where it lies in the map."""
    if not block.get("case"):
        return []
    place = [_across(block[k], value) for k, value in zip("xy", block["case"], strict=True)]
    return axes.plot(
        *place,
        marker="o",
        color="black",
        ls="none",
        ms=7,
        mfc="white",
        mew=1.5,
        label="the case as it stands",
    )


def _across(axis, value):
    """Return where a value lies across the figure: the logarithm on a logarithmic axis."""
    from math import log10

    shown = _shown(axis, value)
    return log10(shown) if axis["log"] else shown


def _frame(axes, block):
    """Set limits, ticks and labels."""
    for key, set_limits, ticks, label in (
        ("x", axes.set_xlim, axes.xaxis, axes.set_xlabel),
        ("y", axes.set_ylim, axes.yaxis, axes.set_ylabel),
    ):
        axis = block[key]
        low, high = _across(axis, axis["low"]), _across(axis, axis["high"])
        set_limits(low, high)
        unit = f" [{axis['typed']}]" if axis["typed"] else ""
        label(axis["key"] + unit)
        if axis["log"]:
            marks = _marks(low, high)
            ticks.set_ticks([m for m, _ in marks], [text for _, text in marks])


def _marks(low, high):
    """Return (place, label) of 1, 2, 5 and their decades between two logarithms, fewer where they crowd."""
    from math import floor, log10

    steps: tuple = (1, 1.5, 2, 3, 4, 5, 6, 8) if high - low < 1.0 else (1, 2, 5) if high - low < 2.5 else (1,)
    found = [(log10(s) + d, f"{s * 10.0**d:g}") for d in range(floor(low), floor(high) + 1) for s in steps]
    return [(place, text) for place, text in found if low - 1e-9 <= place <= high + 1e-9]
