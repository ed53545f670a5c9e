"""From a feed to a pruned mechanism file: the one call behind the command and a case."""

from reactor.chemistry.network import cache, names, prune, small, write
from reactor.chemistry.network.enumerate import network
from reactor.chemistry.network.tree import molecule
from reactor.errors import CaseError

COLDEST, HOTTEST = 200.0, 700.0  # K; beyond, rules and mechanism say nothing


def structures(feed):
    """
    Return amounts by canonical code of amounts by key or name; other gases are left out.

    Parameters
    ----------
    feed : dict of float
        Amounts; any scale. [-]

    Raises
    ------
    CaseError
        When nothing in the feed is an alkane or chloroalkane of up to six carbons.

    Examples
    --------
    >>> structures({"propane": 0.9, "N2": 0.1})
    {'C(C)C': 0.9}
    """
    found: dict[str, float] = {}
    for word, amount in feed.items():
        code = names.find(word)
        if code is not None and amount > 0 and molecule(code).double is None:
            found[code] = found.get(code, 0.0) + amount
    if not found:
        raise CaseError(
            f"{', '.join(feed) or 'the feed'}: no alkane from C1 to C6 among these; write it like propane, n-butane, "
            "isobutane, 2-methylpentane or C3H8"
        )
    return found


def enough(codes):
    """Return the chlorine atoms to count to: 3, for one carbon 4, and one more than what is fed."""
    fed = max(sum(molecule(code).chlorine) for code in codes)
    return max(3, fed + 1, 4 if any(molecule(code).carbons == 1 for code in codes) else 0)


def beyond_small(feed):
    """
    Tell whether a feed holds what the small mechanism lets pass: an alkane, or oxygen with chloroform.

    Examples
    --------
    >>> beyond_small({"CH4": 0.99, "n-C4H10": 0.01}), beyond_small({"C3H8": 1.0, "N2": 0.1})
    (True, False)
    """
    attacked = {key for left, _ in small.reactions() if "Cl" in left for key in left}
    codes = [names.find(word) for word, amount in feed.items() if amount > 0]
    if feed.get("O2", 0.0) > 0 and {"CHCl3", "CCl4"} & {names.key(code) for code in codes if code}:
        return True  # phosgene, and a chain that goes on
    return any(
        molecule(code).double is None and molecule(code).sites() and names.key(code) not in attacked
        for code in codes if code and not sum(molecule(code).chlorine)
    )  # fmt: skip


def mechanism_file(feed, ratio, temperatures, chlorines=None, error=1e-3, couplings=True, most=None, vessels=prune.VESSELS):
    """
    Return the path of the pruned mechanism of a feed; made once, then taken from the cache.

    Parameters
    ----------
    feed : dict of float
        Amounts by key or name; any scale. [-]
    ratio : float
        Alkane per chlorine. [-]
    temperatures : pair of float
        Coldest and hottest gas. [K]
    chlorines : int or None
        Largest number of chlorine atoms in a product; None: as `enough` says. [-]
    error : float
        Organic chlorine that may be left out, of all. [-]
    couplings : bool
        Whether products of two radicals are told apart by position; else lumped by formula.
    most : int or None
        Species wanted at most: beyond it, couplings are lumped, then ten times the error is taken; the title says so.
        [-]
    vessels : sequence of str
        Where species are weighed: tube, tank or both.

    Returns
    -------
    pathlib.Path
        To be named as chemistry.mechanism.
    """
    codes = structures(feed)
    chlorines = chlorines or enough(codes)
    total = sum(codes.values())
    shares = {code: round(amount / total, 6) for code, amount in sorted(codes.items())}
    span = tuple(min(max(float(T), COLDEST), HOTTEST) for T in temperatures)
    request = {"feed": shares, "ratio": float(ratio), "temperatures": span, "chlorines": chlorines, "error": error,
               "couplings": couplings, "most": most, "vessels": list(vessels)}  # fmt: skip

    def make():
        whole = network(tuple(shares), chlorines)
        for tried in (request, request | {"couplings": False}, request | {"couplings": False, "error": 10 * error}):
            pruned = prune.prune(whole, shares, ratio, span, tried["error"], tried["couplings"], vessels)
            if most is None or write.size(pruned) <= most:
                break
        return write.text(pruned, title(shares, tried))

    return cache.kept(request, make)


def title(shares, request):
    """Return one line that says what a mechanism was made for."""
    fed = ", ".join(f"{names.name(code)} {100 * share:.4g} %" for code, share in shares.items())
    cold, hot = request["temperatures"]
    pairs = "couplings by position" if request["couplings"] else "couplings lumped by formula"
    return (
        f"Chlorination of {fed}: up to {request['chlorines']} Cl, {request['ratio']:.4g}:1, {cold:.0f} to {hot:.0f} K, "
        f"{pairs}, pruned at {100 * request['error']:.3g} % of the organic chlorine"
    )
