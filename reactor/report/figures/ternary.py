"""The triangle of fuel, chlorine and inert gas: class of every mixture, feed, corners, operating path."""

import numpy as np

CLASSES = (
    ("OUTSIDE (estimate)", "#f2f2f2", ""),
    ("MARGIN", "#d9c27a", "..."),
    ("UNKNOWN", "#b0a8c9", "xxx"),
    ("INSIDE", "#c4806e", "///"),
)
HEIGHT = np.sqrt(3) / 2


def place(fuel, chlorine):
    """Return x and y of a mixture: chlorine at the right corner, fuel at the top, inert gas at the left."""
    fuel, chlorine = np.asarray(fuel, dtype=float), np.asarray(chlorine, dtype=float)
    return chlorine + fuel / 2, HEIGHT * fuel


def ternary(data, axes):
    """
    Draw the triangle.

    Parameters
    ----------
    data : dict
        As from `hazards.ternary.ternary`: grid, window, widened, feed, corners, path, lines.
    axes : matplotlib.axes.Axes
        To draw on.

    Returns
    -------
    axes : matplotlib.axes.Axes
    """
    _classes(data["grid"], axes)
    _frame(axes)
    for name, ratios, style in (
        ("range in chlorine", data["window"], "-"),
        ("widened", data["widened"], "--"),
    ):
        for number, ratio in enumerate(ratios):
            axes.plot(
                *place([0, ratio], [0, 1 - ratio]),
                style,
                color="black",
                linewidth=0.8,
                label=name if number == 0 else None,
            )
    for line in data["lines"]:
        axes.plot(*place(line["fuel"], line["chlorine"]), color="#4a6b8a", linewidth=1.0, linestyle=":")
    if data["lines"]:
        axes.plot([], [], color="#4a6b8a", linestyle=":", label="filling and purging")
    if data["path"]:
        axes.plot(
            *place(data["path"]["fuel"], data["path"]["chlorine"]),
            color="#1f5c2e",
            linewidth=2.0,
            label="along the reactor",
        )
    if data["corners"]:
        axes.plot(
            *place(data["corners"]["fuel"], data["corners"]["chlorine"]),
            "+",
            color="black",
            label="meter corners",
        )
    axes.plot(
        *place(data["feed"]["fuel"], data["feed"]["chlorine"]),
        "o",
        color="black",
        markersize=5,
        label="mixed feed",
    )
    axes.legend(loc="upper left", fontsize=8, frameon=False)
    words = f"{data['temperature'] - 273.15:.0f} degC, {data['pressure'] / 1e5:.2f} bar absolute"
    axes.set_title(f"{words}; premixed gas, an estimate", fontsize=9, pad=22)
    return axes


def _classes(grid, axes):
    """Fill the triangle by class, with a pattern for print without colour."""
    x, y = place(grid["fuel"], grid["chlorine"])
    rank = {name: number for number, (name, _, _) in enumerate(CLASSES)}
    levels = np.array([rank[word] for word in grid["class"]])
    for number in sorted(set(levels)):
        name, colour, hatch = CLASSES[number]
        reached = (levels >= number).astype(float)
        axes.tricontourf(x, y, reached, levels=[0.5, 1.5], colors=[colour], hatches=[hatch])
        axes.fill([], [], facecolor=colour, edgecolor="#666666", hatch=hatch, linewidth=0.5, label=name)


def _frame(axes):
    """Draw the sides with their scales in mol%."""
    axes.plot([0, 1, 0.5, 0], [0, 0, HEIGHT, 0], color="black", linewidth=1.0)
    small = {"textcoords": "offset points", "fontsize": 7}
    for share in np.linspace(0.2, 0.8, 4):
        rest = 1 - share
        for start, stop in (
            ((share, 0), (share, rest)),
            ((0, share), (rest, share)),
            ((share, rest), (0, rest)),
        ):
            axes.plot(*place([start[0], stop[0]], [start[1], stop[1]]), color="#999999", linewidth=0.3)
        axes.annotate(f"{100 * share:.0f}", place(0, share), (0, -11), ha="center", **small)
        axes.annotate(f"{100 * share:.0f}", place(share, rest), (6, 0), **small)
    names = (("inert gas", (0, 0), -24), ("chlorine [mol%]", (0, 1), -24), ("fuel [mol%]", (1, 0), 6))
    for text, corner, shift in names:
        axes.annotate(text, place(*corner), (0, shift), textcoords="offset points", ha="center")
    axes.set_aspect("equal")
    axes.set_axis_off()


def save(data, path, title=""):
    """
    Write the triangle as a figure file; its ending says the format.

    Parameters
    ----------
    data : dict
        As for `ternary`.
    path : str
        Such as `triangle.png` or `triangle.svg`.
    title : str
        Printed above.
    """
    from matplotlib.figure import Figure

    figure = Figure(figsize=(7.0, 6.8), layout="constrained")
    ternary(data, figure.add_subplot())
    if title:
        figure.suptitle(title, fontsize=10)
    figure.savefig(path, dpi=150)
