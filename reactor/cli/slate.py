"""The command `slate`: the product map of a feed, and the mechanism made for it."""

import click

from reactor.cli.common import OVERRIDE, emphasis, show, write
from reactor.errors import CaseError

SPAN = 150.0  # K; how much hotter than the feed a made mechanism is weighed where the case states no limit


@click.command()
@click.argument("case", required=False)
@click.option("--feed", "feeds", metavar="ALKANE[=SHARE]", multiple=True,
              help="A feed in place of a case, like --feed isobutane, or --feed methane=95 --feed ethane=5.")
@click.option("--ratio", type=float, help="Alkane per chlorine, mol/mol; of a case: its own.")
@click.option("--temperature", metavar="T", help='Like "80 degC"; of a case: that of its alkane.')
@click.option("--pressure", metavar="P", help='Like "1.2 bar absolute", for the couplings.')
@click.option("--light", metavar="J", help='Mean photolysis rate like "1e-3 1/s", for the couplings.')
@click.option("--chlorines", type=click.IntRange(1, 8),
              help="Largest number of chlorine atoms in a product; by default 3, of methane 4, one more than fed.")
@click.option("--hours", type=float, default=8000.0, show_default=True, help="Running hours of a year.")
@click.option("--write", "target", metavar="FILE",
              help="Write the pruned mechanism, to be named as chemistry.mechanism; - prints it.")
@click.option("--error", default="0.1 %", show_default=True,
              help="Share of the organic chlorine that the written mechanism may leave out.")
@click.option("--couplings/--no-couplings", default=True, show_default=True,
              help="Whether the written mechanism tells the products of two radicals apart by position.")
@OVERRIDE
@click.option("--json", "as_json", is_flag=True, help="Print one JSON object.")
def slate(case, feeds, ratio, temperature, pressure, light, chlorines, hours, target, error, couplings, overrides,
          as_json):  # fmt: skip
    """Map the products of a feed before any reactor.

    Of a CASE or of --feed: split of isomers and polychlorides against conversion, in plug flow and in a stirred
    tank, whatever the light; couplings and alkenes as traces.
    """
    from reactor.chemistry import network
    from reactor.report import slate as report
    from reactor.units import kinds

    asked = _from_case(case, overrides) if case else _from_feeds(feeds)
    assumed = asked.pop("assumed")
    given = {"T": (kinds.TEMPERATURE, temperature), "pressure": (kinds.PRESSURE, pressure),
             "photolysis": (kinds.RATE, light)}  # fmt: skip
    for name, (kind, typed) in given.items():
        if typed is not None:
            asked[name] = _read(kind, typed, name)
            assumed.pop(name, None)
    asked["ratio"] = ratio or asked["ratio"]
    flow, hottest = asked.pop("flow"), asked.pop("hottest")
    found = network.survey(chlorines=chlorines, **asked) | {"assumed": list(assumed.values())}
    if flow is not None:
        found["flow"] = flow
    if target:
        _mechanism(network, asked, hottest, chlorines, _read(kinds.FRACTION, error, "error"), couplings, target)
        if target == "-":
            return
    show(_json(found) + "\n" if as_json else report.render(found, hours, emphasis()))


def _read(kind, typed, name):
    try:
        return kind.read(typed).si
    except ValueError as error:
        raise CaseError(f"--{name}: {error}") from None


def _from_feeds(feeds):
    """Return what --feed says, and what is assumed beside it."""
    if not feeds:
        raise CaseError("a CASE or --feed is needed, like: reactor slate --feed propane --ratio 8")
    shares = {}
    for typed in feeds:
        name, _, share = typed.partition("=")
        try:
            shares[name] = float(share or 1.0)
        except ValueError:
            raise CaseError(f"--feed {typed}: a number is due after =, like --feed methane=95") from None
    assumed = {"T": "80 degC", "pressure": "1.2 bar absolute, for the couplings",
               "photolysis": "1e-3 1/s, for the couplings"}  # fmt: skip
    return {"feed": shares, "ratio": None, "T": 353.15, "pressure": 1.2e5, "photolysis": 1e-3, "flow": None,
            "hottest": None, "assumed": assumed}  # fmt: skip


def _from_case(path, overrides):
    """Return what a case says, and what is assumed beside it."""
    from reactor.case import load
    from reactor.chemistry import network

    case = load(path, overrides, False)
    moles: dict = {}
    for stream in case.feed.values():
        for key, amount in stream.moles.items():
            moles[key] = moles.get(key, 0.0) + amount
    fed = {key: amount for key, amount in moles.items() if network.find(key)}
    network.structures(fed or moles)
    flow = sum(fed.values())
    main = max(case.feed.values(), key=lambda stream: sum(n for key, n in stream.moles.items() if key in fed))
    light = case.chemistry.photolysis_rate
    assumed = {"T": f"the temperature of the feed {main.name}; the gas runs hotter: set --temperature"}
    if light is None:
        assumed["photolysis"] = "1e-3 1/s, for the couplings: rate the case for its own light"
    return {"feed": fed, "ratio": flow / moles["Cl2"] if moles.get("Cl2") else None, "T": main.temperature,
            "pressure": case.vessel.pressure, "photolysis": light or 1e-3, "flow": flow,
            "hottest": case.limits.hottest, "assumed": assumed}  # fmt: skip


def _mechanism(network, asked, hottest, chlorines, error, couplings, target):
    if not asked["ratio"]:
        raise CaseError("--write needs the ratio of alkane to chlorine: add --ratio 8")
    span = (asked["T"], max(hottest or asked["T"] + SPAN, asked["T"]))
    made = network.mechanism_file(asked["feed"], asked["ratio"], span, chlorines, error, couplings)
    text = made.read_text(encoding="utf-8").partition("\n")[2]  # without the seal of the cache: it may be edited
    write(target, text)
    if target != "-":
        show(f'{target} written; use it with: --set chemistry.mechanism="{target}"\n', to_stderr=True)


def _json(found):
    import json

    return json.dumps(found | {"cited": [cited._asdict() for cited in found["cited"]]}, indent=1)
