"""The photon figure: lamp over gas, absorbed share by gap, light along the tube, ledger by band."""

from pathlib import Path

from reactor.errors import CaseError

ENDINGS = (".svg", ".png", ".pdf")
FATE = (("absorbed", "#1b6e4f"), ("outer wall", "#c9a13b"), ("ends", "#8a8a8a"), ("lost in window", "#b5533c"))


def draw(record, path):
    """
    Draw the photon figure into a file.

    Parameters
    ----------
    record : dict
        From `rating.photonic`. [-]
    path : str or Path
        Ends in .svg, .png or .pdf. [-]

    Raises
    ------
    CaseError
        Another ending, no matplotlib, or a place that cannot be written.
    """
    if Path(path).suffix.lower() not in ENDINGS:
        raise CaseError(f"--figure {path}: write a name that ends in {', '.join(ENDINGS)}")
    try:
        from matplotlib.figure import Figure
    except ImportError:
        how = "pip install 'photochlorination-reactor[figures]'"
        raise CaseError(f"--figure needs matplotlib; install it with: {how}") from None
    picture = Figure(figsize=(10, 7.4), layout="constrained")
    if record["along"]["z"]:
        panels, places = [spectrum, shares, along, bands], "ab;cd"
    else:
        panels, places = [spectrum, shares, bands], "ab;cc"
    axes = picture.subplot_mosaic(places)
    for panel, ax in zip(panels, axes.values(), strict=True):
        panel(record, ax)
        ax.spines[["top", "right"]].set_visible(False)
    picture.suptitle(f"{record['title']}: light ({record['geometry']['name']}, {record['geometry']['law']})")
    try:
        picture.savefig(path, dpi=150)
    except OSError as error:
        raise CaseError(f"--figure {path}: cannot be written ({error.strerror}); choose another place") from None


def spectrum(record, ax):
    """Draw the lines of the lamp over the cross-section of chlorine."""
    rows, o = record["lines"], record["overlay"]
    nm = [r["wavelength"] * 1e9 for r in rows]
    ax.vlines(nm, 0, [r["photons"] * 1e6 for r in rows], color="#3a5f9a", lw=2.5 if len(nm) < 40 else 1.2)
    ax.set(xlabel="wavelength [nm]", ylabel="photons at the window [umol/s]", title="Lamp over gas", xlim=(260, 460))
    ax.set_ylim(bottom=0)
    twin = ax.twinx()
    reach = [w * 1e9 for w in o["wavelength"]]
    twin.fill_between(reach, [s * 1e24 for s in o["cross_section"]], color="#9bbf85", alpha=0.35)
    twin.set_ylabel("cross-section of Cl2 [1e-24 m2]", color="#4d7a35")
    twin.set_ylim(bottom=0)
    twin.spines["top"].set_visible(False)


def shares(record, ax):
    """Draw the absorbed share against wavelength for a row of gaps."""
    o, own = record["overlay"], record["geometry"]["gap"]
    nm = [w * 1e9 for w in o["wavelength"]]
    greys = iter(("#c7c7c7", "#a5a5a5", "#828282", "#606060", "#3d3d3d"))
    for gap, share in o["absorbed"].items():
        if abs(float(gap) / own - 1) < 0.15 and abs(float(gap) - own) > 1e-6:
            continue  # too near to the gap of the case
        mine = abs(float(gap) - own) < 1e-6
        ax.plot(nm, [100 * f for f in share], color="#c2410c" if mine else next(greys),
                lw=2.2 if mine else 1.3, label=f"{float(gap) * 1e3:.3g} mm{' (this case)' if mine else ''}")
    ax.axvline(o["best"] * 1e9, color="#c2410c", ls=":", lw=1, label=f"best here: {o['best'] * 1e9:.0f} nm")
    ax.legend(frameon=False, fontsize=8)
    ax.set(xlabel="wavelength [nm]", ylabel="absorbed, inlet gas [%]", ylim=(0, 102), xlim=(260, 460),
           title=f"Absorbed by gap (long lamp, {o['law']})")  # fmt: skip


def along(record, ax):
    """Draw where light enters the tube and what it does to chlorine."""
    a = record["along"]
    ax.plot(a["z"], [s * 1e6 for s in a["entering"]], color="#3a5f9a")
    ax.set(xlabel="position from the inlet [m]", title="Along one tube", xlim=(0, a["z"][-1]))
    ax.set_ylabel("light entering the gas [umol/s/m]", color="#3a5f9a")
    ax.set_ylim(bottom=0)
    twin = ax.twinx()
    twin.plot(a["z"], [j * 1e3 for j in a["J"]], color="#c2410c")
    twin.set_ylabel("photolysis rate J [1e-3 1/s]", color="#c2410c")
    twin.set_ylim(bottom=0)
    twin.spines["top"].set_visible(False)


def bands(record, ax):
    """Draw the fate of the photons of each spectral band."""
    rows = [dict(r) for r in record["bands"]]
    for r in rows:
        r["lost in window"] = r["at window"] - r["passed"]
    names = [f"{r['band'][0]}-{r['band'][1]}" for r in rows]
    base = [0.0] * len(rows)
    for name, colour in FATE:
        height = [r[name] * 1e6 for r in rows]
        ax.bar(names, height, bottom=base, color=colour, label=name)
        base = [x + y for x, y in zip(base, height, strict=True)]
    ax.set(xlabel="band [nm]", ylabel="photons [umol/s], all tubes", title="Ledger by band")
    ax.tick_params(axis="x", rotation=30)
    ax.legend(frameon=False, fontsize=8)
