"""Commented case files to start from; each runs as delivered. Every scenario in them is invented."""

from string import Template

from reactor.errors import CaseError

_TEXT = Template("""\
# $headline
# The scenario is invented: put your own numbers in its place. Lines that begin with # are remarks.
#
# A value with a dimension stands in quotes with its unit:
#   length        "3 m"  "154 mm"  "6 inch"  "2 ft"
#   temperature   "50 degC"  "320 K"  "120 degF"; a difference is "10 K"
#   pressure      "1.5 bar absolute"  "0.5 barg"  "22 psia"  "7 psig"; a difference is "30 mbar"
#   flow          "100 kg/h"  "2 mol/s"  "320 Nm3/h" (0 degC)  "340 Sm3/h" (15 degC)  "190 scfm" (60 degF)
#   composition   "99 mol%"  "1.5 wt%"  "20 ppm_mol"  "20 ppm_wt"  "balance"
#   share         "2 %" or 0.02
# A key that is left out is either refused or listed as assumed; `reactor check` shows which.

[case]
title = "$title"
revision = "A"
date = 2026-12-01                     # the date on the printed sheet

# Streams have free names and are meant for the whole item, all parallel vessels together.
[feed.alkane]
flow = "$flow"
composition = { $composition }
temperature = "$temperature"

[feed.chlorine]
ratio = $ratio                            # alkane to chlorine, mol/mol; or flow = "50 kg/h"
composition = { Cl2 = "balance", O2 = "20 ppm_mol" }
temperature = "30 degC"
$inject
[vessel]
$vessel
pressure = "$pressure"
shell_wall = "3 mm"
shell_material = "carbon steel"

# Every vessel carries every [[lamp]] entry. The power is drawn from the mains, by each lamp.
[[lamp]]
kind = "$lamp"             # or spectrum = "mine.csv" with driver = "90 %"
power = "$power"
number = $number
$lit# end_of_life = "80 %"                # light left when the lamp is replaced

[sleeve]
outside = "60 mm"
thickness = "2.5 mm"
material = "fused silica"
# deposit = "10 %"                    # light lost in a film on the sleeve; or film = "evaporated carbon"
#                                     # with film_thickness = "0.02 um"

[cooling]
$cooling
[chemistry]
wall_loss = "0.1 1/s"                 # chlorine atoms lost at the wall; or wall_sticking = 1e-4
# radicals = "local"                  # each layer of gas has its own radicals; left out: one mixed pool

# What the result is judged against. A limit that is left out is reported as NOT ASSESSED.
[limits]
hottest = "$hottest"
chlorine_slip = "$slip"
pressure_drop = "50 mbar"
# poly_share_mol = "10 mol%"          # two and more chlorine, of the chlorinated organics
# [limits.window.CH4]                 # your own explosion limits of a fuel in chlorine take precedence
# lel = "5.6 vol%"
# uel = "70 vol%"
# source = "name the report"

# What `reactor size` looks for: results by name, and the inputs that it may change for them.
# [targets]
# find = "lamp.power"                   # or ["lamp.power", "vessel.length"] for two targets
# chlorine_slip = "1 %"
# products = { CH3Cl = "50 kg/h" }

# What goes back to the inlet: shares of what leaves, less a purge. The flow of the alkane stream then is what
# enters the reactor; how much of it is fresh gas is found.
# [recycle]
# purge = "1 %"
# temperature = "40 degC"
# shares = { CH4 = "99 %", N2 = "99 %" }

# Errors of the two flow meters: without them the corners of the mixture are NOT ASSESSED.
[meters]
alkane = "3 %"
chlorine = "3 %"

# What `reactor band` varies: factors, up or down, one standard deviation; 1 holds still.
# [uncertainty]
# lamp_output = 1.1
# impurity = 1.5                      # O2 and other traces of the feeds
# wall_loss = 3
""")

_TUBE = """\
kind = "plug flow"
geometry = "annulus"                  # gas between the sleeve and the shell; or "tube beside lamp",
                                      # "tubes around lamp", "lamps around tube", "channel": see the README
shell_inside = "$shell"
length = "$length"
parallel = $parallel"""
_TANK = """\
kind = "stirred tank"
shell_inside = "450 mm"
length = "500 mm"
stirring = "400 rpm"
impeller = "150 mm"
start = "cold"                        # "hot" follows the state reached from a hot start"""
_INJECT = """
# Shares of the chlorine that enter further down; the rest enters at the inlet.
# [[inject]]
# share = "30 %"
# position = "0.3 m"
"""
_COUNTER = """\
mode = "counter-current"              # "none", "constant", "co-current"
medium = "water"
inlet = "25 degC"
flow = "1500 kg/h"                    # to each vessel
"""
_CONSTANT = """\
mode = "constant"                     # "none", "co-current", "counter-current"
medium = "water"
inlet = "30 degC"
"""
_LIT = 'lit_from = "0 m"\nlit_to = "$length"\n'

_TUBES = {
    "methane": {
        "headline": "Methane to chloromethane past UV LEDs: four annular tubes in parallel.",
        "title": "Siskin: chloromethane, 20:1",
        "flow": "160 Nm3/h",
        "composition": 'CH4 = "98.5 mol%", C2H6 = "0.5 mol%", N2 = "1 mol%"',
        "ratio": "20",
        "power": "0.4 kW",
        "hottest": "220 degC",
    },
    "ethane": {
        "headline": "Ethane to chloroethane past UV LEDs: four annular tubes in parallel.",
        "title": "Avocet: chloroethane, 8:1",
        "flow": "110 kg/h",
        "composition": 'C2H6 = "99 mol%", N2 = "1 mol%"',
        "ratio": "8",
        "power": "0.2 kW",
        "hottest": "250 degC",
    },
    "propane": {
        "headline": "Propane to the two chloropropanes past UV LEDs: four annular tubes in parallel.",
        "title": "Lapwing: chloropropanes, 8:1",
        "flow": "160 kg/h",
        "composition": 'C3H8 = "99 mol%", N2 = "1 mol%"',
        "ratio": "8",
        "power": "0.2 kW",
        "hottest": "220 degC",
    },
}
_COMMON = {
    "temperature": "40 degC",
    "pressure": "0.5 barg",
    "number": "1",
    "lamp": "LED 365 nm",
    "slip": "2 %",
}
_SIZES = {"shell": "130 mm", "length": "1.5 m", "parallel": "4"}


def _tube(values):
    """Return the text of a plug flow case."""
    blocks = {"vessel": _TUBE, "lit": _LIT, "inject": _INJECT, "cooling": _COUNTER}
    filled = {name: Template(text).substitute(_SIZES) for name, text in blocks.items()}
    return _TEXT.substitute(_COMMON | filled | values)


def _tank():
    """Return the text of a stirred tank case."""
    values = {
        "headline": "Methane to chloromethane in a stirred vessel with four immersed LED lamps.",
        "title": "Dipper: chloromethane in a stirred vessel, 20:1",
        "power": "0.5 kW",
        "number": "4",
        "slip": "10 %",
        "vessel": _TANK,
        "lit": "",
        "inject": "",
        "cooling": _CONSTANT,
    }
    return _TEXT.substitute(_COMMON | _TUBES["methane"] | values)


def names():
    """Return what `template` knows."""
    return (*_TUBES, "tank")


def template(name="methane"):
    """
    Return the text of a commented case file: "methane", "ethane", "propane" or "tank".

    Raises
    ------
    CaseError
        For another name.
    """
    if name not in names():
        raise CaseError(f"--from {name}: unknown; known here: {', '.join(names())}")
    return _tank() if name == "tank" else _tube(_TUBES[name])
