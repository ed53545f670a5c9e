"""Finite arcs in every geometry against rays traced one by one, merged lines, local radical pools, the photon report."""

from pathlib import Path
from types import SimpleNamespace

import numpy as np
import pytest
from ray_tracer import ABSORBED, ENDS, MISSED, Tracer

import reactor
from reactor import photons
from reactor.errors import CaseError
from reactor.photons import Annulus, Channel, Immersed, Tubes, chlorine, field, lamps, merge
from reactor.photons.energy import photon_energy
from reactor.photons.laws import ISOTROPIC, LAMBERTIAN, SINE, VOLUMETRIC

approx = pytest.approx
LENGTH, ARC = 1.0, (0.15, 0.65)


@pytest.fixture(scope="module")
def clear(tmp_path_factory):
    """Return a window that passes all light and a lamp of one line, for comparison with the bare rays."""
    folder = tmp_path_factory.mktemp("light")
    (folder / "line.csv").write_text("wavelength [nm],radiant_share [%]\n365,50\n")
    (folder / "clear.csv").write_text("wavelength [nm],transmission [%]\n300,100\n450,100\n")

    def of(shape, law, radius=None, arc=ARC):
        lamp = SimpleNamespace(kind=None, spectrum=folder / "line.csv", power=100.0, number=1, lit_from=arc[0],
                               lit_to=arc[1], end_of_life=1.0, driver=1.0, hot_junction=1.0, emission=law, radius=radius)
        sleeve = SimpleNamespace(material=None, thickness=2e-3, transmission=folder / "clear.csv", deposit=0.0)
        return photons.light([lamp], sleeve, shape, LENGTH)

    return of


def count(request):
    return 1_000_000 if request.config.getoption("--run-slow", default=False) else 100_000


B, D = 0.025, 0.08  # bore and distance of the tubes
RING = D * np.stack((np.cos(np.arange(4) * np.pi / 2), np.sin(np.arange(4) * np.pi / 2)), 1)
FOCUS = D / 2
TUBE = {"gas": "tubes", "bore": B, "body": 0.01}
CASES = {
    "annulus, line": (Annulus(0.03, 0.077), ISOTROPIC, None, {"gas": "between", "body": 0.03, "shell": 0.077}, "line"),
    "annulus, sine line": (Annulus(0.03, 0.077), SINE, None,
                           {"gas": "between", "body": 0.03, "shell": 0.077}, "line, sine"),
    "annulus, surface": (Annulus(0.03, 0.077), LAMBERTIAN, 0.02,
                         {"gas": "between", "body": 0.03, "shell": 0.077, "lamp_radius": 0.02}, "surface"),
    "annulus, volume": (Annulus(0.03, 0.077), VOLUMETRIC, 0.02,
                        {"gas": "between", "body": 0.03, "shell": 0.077, "lamp_radius": 0.02}, "volume"),
    "annulus, bright shell": (Annulus(0.03, 0.077, 0, 0.6), ISOTROPIC, None,
                              {"gas": "between", "body": 0.03, "shell": 0.077, "reflectance": 0.6}, "line"),
    "annulus, bright shell, clear lamp": (
        Annulus(0.03, 0.077, 0, 0.6, 1.0), ISOTROPIC, None,
        {"gas": "between", "body": 0.03, "shell": 0.077, "reflectance": 0.6, "clear": True}, "line"),
    "immersed lamps": (Immersed(0.03, 0.2, 4, 0.2, 0.0, 0.5), LAMBERTIAN, 0.02,
                       {"gas": "between", "body": 0.03, "shell": 0.2, "reflectance": 0.5, "lamp_radius": 0.02,
                        "lamps": RING / D * 0.1}, "surface"),
    "tube beside a lamp": (Tubes(B, 2e-3, D, pane=1.0), LAMBERTIAN, 0.01,
                           {**TUBE, "tubes": np.array([[D, 0.0]]), "lamp_radius": 0.01}, "surface"),
    "flat reflector": (Tubes(B, 2e-3, D, reflector="flat", size=0.03, reflectance=0.85, pane=1.0, body=0.004),
                       LAMBERTIAN, 0.004,
                       {**TUBE, "tubes": np.array([[D, 0.0]]), "lamp_radius": 0.004, "body": 0.004, "plane": -0.03,
                        "reflectance": 0.85}, "surface"),
    "elliptical reflector": (Tubes(B, 2e-3, D, reflector="elliptical", size=0.1, reflectance=0.85, pane=1.0),
                             LAMBERTIAN, 0.01,
                             {**TUBE, "lamps": np.array([[-FOCUS, 0.0]]), "tubes": np.array([[FOCUS, 0.0]]),
                              "lamp_radius": 0.01, "ellipse": (0.1, float(np.sqrt(0.01 - FOCUS**2))),
                              "reflectance": 0.85}, "surface"),
    "tubes round a lamp": (Tubes(B, 2e-3, D, tubes=4, reflector="circular", size=0.15, reflectance=0.8, pane=1.0),
                           LAMBERTIAN, 0.01,
                           {**TUBE, "tubes": RING, "lamp_radius": 0.01, "shell": 0.15, "reflectance": 0.8}, "surface"),
    "lamps round a tube": (Tubes(B, 2e-3, D, lamps=4, reflector="circular", size=0.15, reflectance=0.8, pane=1.0),
                           LAMBERTIAN, 0.01,
                           {**TUBE, "lamps": RING, "tubes": np.zeros((1, 2)), "lamp_radius": 0.01, "shell": 0.15,
                            "reflectance": 0.8}, "surface"),
    "channel": (Channel(0.02, 0.2, reflectance=0.7), LAMBERTIAN, None,
                {"gas": "channel", "gap": 0.02, "reflectance": 0.7}, "surface"),
}  # fmt: skip
LATTICE = 1.5e-3  # of the emitted light: the lattice of rays of the tube scenes


@pytest.mark.parametrize("name", CASES)
def test_a_finite_arc_feeds_absorbed_light_and_ends_like_rays_traced_one_by_one(name, clear, request):
    # Source: Monte Carlo of tests/ray_tracer.py, seeded; 3 standard errors, for scenes of tubes also the lattice of
    # rays (computed). Kind: worked; it knows nothing of the closed forms.
    shape, law, radius, scene, tracer_law = CASES[name]
    found, total = clear(shape, law, radius), 100.0 * 0.5 / photon_energy(365e-9)
    N = count(request)
    tau = 0.8
    fate, _ = Tracer(length=LENGTH, arc=ARC, **scene).shoot(N, tracer_law, tau / shape.gap, 20261201)
    x, flow = np.log(tau), found.entering.sum() / total * shape.tubes
    mine = {"entering": flow, "absorbed": flow * tau * found.absorbed[0](x)[0], "ends": flow * found.ends[0](x)[0]}
    theirs = {"entering": (fate != MISSED).mean(), "absorbed": (fate == ABSORBED).mean(), "ends": (fate == ENDS).mean()}
    even = LATTICE if isinstance(shape, Tubes | Immersed) else 3e-4
    if isinstance(shape, Tubes):  # light that leaves a tube sideways for good counts as outer wall, wherever it flies
        del theirs["ends"]
    for key, value in theirs.items():
        error = 3 * np.sqrt(max(value * (1 - value), 1 / N) / N)
        assert mine[key] == approx(value, abs=error + even), key


@pytest.mark.parametrize(("law", "radius", "how", "worst"), [(LAMBERTIAN, 0.02, "surface", 0.008),
                                                             (ISOTROPIC, None, "line", 0.025)])  # fmt: skip
@pytest.mark.parametrize(("start", "fall"), [(2.0, 0.3), (6.0, 0.2), (0.5, 0.3)])
def test_light_along_a_bleaching_tube_stays_close_to_traced_rays(law, radius, how, worst, start, fall, clear, request):
    # Source: Monte Carlo of tests/ray_tracer.py through a gas whose chlorine falls by e in `fall` m, a length that is
    # four to six gaps (computed). Kind: worked; states the error of taking kappa at one station.
    found = clear(Annulus(0.03, 0.077), law, radius)

    def kappa(z):
        return start / 0.047 * np.exp(-z / fall)

    scene = Tracer("between", LENGTH, ARC, body=0.03, shell=0.077, lamp_radius=radius or 0.0)
    fate, _ = scene.shoot(count(request), how, kappa, 7)
    z = (np.arange(4000) + 0.5) / 4000 * LENGTH
    tau = kappa(z) * 0.047
    share = found.along(z)[0] * found.absorbed[0](np.log(tau))[0] * tau
    mine = share.mean() * found.entering.sum() / (50.0 / photon_energy(365e-9))
    traced = (fate == ABSORBED).mean()
    assert mine == approx(traced, rel=worst + 3 * np.sqrt((1 - traced) / traced / len(fate)))


def test_light_at_the_end_plane_of_an_arc_is_half_of_that_at_its_middle(clear):
    # Source: closed form of a finite line in clear gas, at mid-gap (computed). Kind: limit.
    found = clear(Annulus(0.01, 0.02), ISOTROPIC, arc=(0.3, 0.7))
    ratio = field.finite_fluence(0.015, 0.2, 0.4) / field.finite_fluence(0.015, 0.0, 0.4)
    assert ratio == approx(0.5, abs=0.02)
    assert found.along(0.3)[0] / found.along(0.5)[0] == approx(ratio, rel=3e-3)


def test_two_arcs_with_a_dark_gap_add_up(clear):
    # Kind: limit; superposition.
    one, two = (clear(Annulus(0.03, 0.077), ISOTROPIC, arc=arc) for arc in ((0.1, 0.3), (0.6, 0.9)))
    z = np.linspace(0, 1, 11)
    assert one.along(0.45)[0] < 0.2 * one.along(0.2)[0]
    mean = (one.entering.sum() * one.along(z)[0] + two.entering.sum() * two.along(z)[0]) / 2
    assert np.all(mean > 0)
    assert one.entering.sum() == approx(two.entering.sum(), rel=5e-3)


@pytest.mark.parametrize("name", CASES)
def test_what_enters_is_absorbed_or_leaves_in_every_geometry(name, clear):
    # Kind: conservation law, from thin to black.
    found = clear(*CASES[name][:3])
    x = np.linspace(np.log(1e-6), np.log(1e3), 60)
    for absorbed, passed, ends in zip(found.absorbed, found.transmitted, found.ends, strict=True):
        assert np.exp(x) * absorbed(x)[0] + passed(x)[0] == approx(1.0, abs=1e-6)
        assert np.all(ends(x)[0] <= passed(x)[0] + 1e-7)


@pytest.mark.parametrize("kind", lamps.kinds())
def test_merged_lines_absorb_like_all_bins_of_the_spectrum(kind):
    # Source: all bins, isotropic line (computed). Kind: limit; from thin to black, 280 to 700 K.
    spectrum = lamps.lamp(kind).spectrum
    band = (spectrum.wavelength >= 260e-9) & (spectrum.wavelength <= 550e-9)
    wavelength, flow = spectrum.wavelength[band], (spectrum.share / photon_energy(spectrum.wavelength))[band]
    lines = merge.merged(wavelength, flow)
    assert len(lines.energy) <= 30
    assert lines.mix @ flow @ lines.energy == approx(flow @ photon_energy(wavelength), rel=1e-12)
    annulus = field.Field(ISOTROPIC, 0.03, 0.077)
    for T in (280.0, 450.0, 700.0):
        t = ((T - 550) / 350) ** np.arange(chlorine.FIT_TERMS)
        for column in np.geomspace(1e18, 1e27, 19):
            every = flow @ field.absorbed(annulus, chlorine.sigma_fit(wavelength) @ t * column)
            few = lines.mix @ flow @ field.absorbed(annulus, lines.sigma @ t * column)
            assert few == approx(every, rel=1e-4)


LIT = [
    ("lapwing_ten_mercury", ()), ("lapwing_ten_oxygen_200", ()), ("lapwing_ten_oxygen_20", ()), ("fulmar", ()),
    ("lapwing_ten_mercury", ("lamp.1.power=2 W", "chemistry.wall_loss=20 1/s")),
]  # fmt: skip


@pytest.mark.parametrize(("name", "changes"), LIT)
def test_the_effective_rate_of_local_pools_agrees_with_explicit_pools(name, changes):
    # Source: all radicals of the mechanism at rest in each of 32 rings, molecules shared (computed). Kind: limit, 1 %.
    from reactor import chemistry
    from reactor.kernel.light import absorb
    from reactor.kernel.rates import Rates
    from reactor.models import SOLVERS, pools
    from reactor.models.assemble import sections
    from reactor.photons import even
    from reactor.rating.plant import lamps as lamps_of
    from reactor.rating.plant import plant

    case = reactor.load(f"cases/{name}.toml", overrides=[*changes, "chemistry.radicals=local"])
    gas = chemistry.mechanism(None)
    settled, profile, mixed = pools.settle(case, plant(case, gas, lamps_of(case)), SOLVERS["plug flow"])
    light, rates = settled.light, Rates(gas.tables, gas.photolysis, gas.wall)
    radical, acid, atom = np.flatnonzero(gas.radical), gas.index["HCl"], gas.index["Cl2"]
    stretches = sections(case, gas, light, settled.even)
    assert profile.outlet.moles[atom] > mixed.outlet.moles[atom]  # one mixed pool flatters
    for i in np.linspace(4, len(profile.z) - 2, 5).astype(int):
        c, T, z = np.maximum(profile.concentrations[i], 0), profile.temperature[i], profile.z[i]
        beam = next(s for s in stretches if s.start <= z <= s.stop).beam
        mean, counted = (absorb(b, c[atom], T, z).J for b in (beam._replace(even=None), beam))
        sigma = pools.sigma_at(light, T)[0]
        J = mean * even.local(light.cells, sigma * 6.02214076e23 * c[atom] * light.path, light.entering * sigma)
        explicit, _ = pools.explicit(rates, c, T, J, light.cells.volume, settled.wall_loss, radical)
        one = pools.at_rest(rates, c, T, counted, settled.wall_loss, radical)
        ours = rates.production(one, T, counted, settled.wall_loss)
        assert ours[acid] == approx(explicit[acid], rel=1e-2)
        large = (np.abs(explicit) > 1e-3 * explicit[acid]) & ~gas.radical
        assert ours[large] == approx(explicit[large], rel=1e-2)


def test_local_pools_leave_the_photon_account_to_the_true_mean():
    # Kind: conservation law; what is absorbed and passed is what enters.
    result = reactor.rate(reactor.load("cases/lapwing_ten_mercury.toml", overrides=["chemistry.radicals=local"]))
    assert result.closures["photons"] < 1e-6
    assert result.results["mixed_pool"][0]["chlorine_slip"]["value"] < result["chlorine_slip"]


def test_the_kernel_has_exact_slopes_of_uneven_light():
    # Kind: limit; central differences of the compiled kernel itself, and J of the light room's own arithmetic.
    from reactor import chemistry
    from reactor.kernel.plugflow import Balance
    from reactor.models import SOLVERS, assemble, pools
    from reactor.models.plug_flow import tube_of
    from reactor.rating.plant import lamps as lamps_of
    from reactor.rating.plant import plant

    case = reactor.load("cases/lapwing_ten_mercury.toml", overrides=["chemistry.radicals=local"])
    gas = chemistry.mechanism(None)
    settled, profile, _ = pools.settle(case, plant(case, gas, lamps_of(case)), SOLVERS["plug flow"])
    tube = tube_of(case, settled)
    inlet = assemble.mixed_inlet(case, gas)
    balance = Balance(tube, tube.sections[0], inlet.mass(gas) / 4)
    y = np.concatenate((profile.moles[40] / inlet.mass(gas), (420.0, 303.0, 1.5e5)))
    exact, atom = balance.jacobian(y), gas.index["Cl2"]
    for column in (atom, len(y) - 3):
        step = 1e-6 * max(y[column], 1e-9)
        plus, minus = y.copy(), y.copy()
        plus[column] += step
        minus[column] -= step
        numeric = (balance.slope(plus) - balance.slope(minus))[: len(y)] / (2 * step)
        scale = np.abs(exact[:, column]).max()
        assert np.max(np.abs(numeric - exact[:, column])) < 1e-5 * scale


GEOMETRIES = {
    "tube beside lamp": 'geometry = "tube beside lamp"\nshell_inside = "50 mm"\naxis_distance = "80 mm"',
    "flat reflector": 'geometry = "tube beside lamp"\nshell_inside = "50 mm"\naxis_distance = "80 mm"\n'
                      'reflector = "flat"\nreflector_size = "40 mm"\nreflectance = "85 %"',
    "elliptical reflector": 'geometry = "tube beside lamp"\nshell_inside = "50 mm"\naxis_distance = "80 mm"\n'
                            'reflector = "elliptical"\nreflector_size = "100 mm"\nreflectance = "85 %"',
    "tubes around lamp": 'geometry = "tubes around lamp"\nshell_inside = "50 mm"\naxis_distance = "80 mm"\nring = 4',
    "lamps around tube": 'geometry = "lamps around tube"\nshell_inside = "50 mm"\naxis_distance = "80 mm"',
    "channel": 'geometry = "channel"\ngap = "30 mm"\nwidth = "250 mm"\nwall_reflectance = "60 %"\nlit_sides = 1',
}  # fmt: skip


def rewritten(vessel):
    """Return a shipped case as text with another gas space."""
    text = Path("cases/lapwing_ten_mercury.toml").read_text()
    head, rest = text.split('geometry = "annulus"\n')
    rest = rest.split("\n", 1)[1].replace('outside = "60 mm"\n', "").replace('shell_material = "carbon steel"\n', "")
    return head + vessel + "\n" + rest


@pytest.mark.parametrize("name", GEOMETRIES)
def test_every_geometry_is_rated_from_a_case_and_closes_its_balances(name):
    result = reactor.rate(reactor.case.loads(rewritten(GEOMETRIES[name]), overrides=["vessel.parallel=12"]))
    assert result.closures["photons"] < 1e-6
    assert result.closures["enthalpy"] < 1e-6
    assert result["conversion_chlorine"] > 0.3


@pytest.mark.parametrize(
    ("vessel", "says"),
    [
        ('geometry = "tube beside lamp"\nshell_inside = "50 mm"', "axis_distance: missing; tube beside lamp needs it"),
        ('geometry = "channel"\ngap = "30 mm"', "vessel.width: missing; channel needs it"),
        ('geometry = "channel"\ngap = "30 mm"\nwidth = "0.2 m"\nring = 4', "vessel.ring: does not belong to channel"),
        (GEOMETRIES["tubes around lamp"] + '\nreflector = "elliptical"\nreflector_size = "0.2 m"\nreflectance = 0.8',
         "vessel.reflector: \"elliptical\" belongs to tube beside lamp"),
        (GEOMETRIES["tube beside lamp"] + '\nreflector = "flat"', "vessel.reflector_size: missing; lamp axis to mirror"),
    ],
)  # fmt: skip
def test_a_geometry_says_what_it_needs(vessel, says):
    with pytest.raises(CaseError) as caught:
        reactor.case.loads(rewritten(vessel))
    assert any(says in fault for fault in caught.value.faults)


def test_the_photon_report_and_the_lamp_sheet_say_what_rests_on_memory():
    from reactor.rating.photonic import photonic
    from reactor.report.photons import lamp_sheet, render

    record = photonic(reactor.load("cases/lapwing_ten_mercury.toml"))
    assert {row["name"] for row in record["ledger"]} >= {"mains", "never enters", "absorbed", "outer wall", "ends"}
    whole = next(row for row in record["ledger"] if row["name"] == "absorbed")["photons"]["value"]
    assert sum(row["absorbed"] for row in record["bands"]) == approx(whole, rel=1e-9)
    assert 330e-9 < record["overlay"]["best"] < 380e-9
    for text in (render(record), lamp_sheet(record)):
        assert max(len(line) for line in text.splitlines()) <= 80
        assert "spectrum of medium-pressure mercury" in " ".join(text.split())


def test_figures_of_merit_follow_their_definitions():
    # Kind: worked from the result's own numbers.
    from reactor.rating.photonic import photonic

    case = reactor.load("cases/lapwing_ten.toml")
    merit, result = photonic(case)["merit"], reactor.rate(case)
    organics = sum(q for s, q in result["products"].items() if s in result["share_mol"]) / 3600
    assert merit["energy_per_mass"] == approx(1000.0 / organics, rel=1e-6)
    assert merit["absorbed_per_joule"] == approx(result["photons_absorbed"] / 1000.0, rel=1e-9)
    assert merit["photochemical_yield"] * merit["photons_per_mole"] == approx(merit["absorbed_per_joule"], rel=1e-9)


@pytest.mark.parametrize("ending", [".svg", ".png", ".pdf"])
def test_the_photon_figure_is_drawn(tmp_path, ending):
    pytest.importorskip("matplotlib")
    from reactor.rating.photonic import photonic
    from reactor.report.figures.photons import draw

    path = tmp_path / f"light{ending}"
    draw(photonic(reactor.load("cases/dunnock_tank.toml")), path)
    assert path.stat().st_size > 5000
    with pytest.raises(CaseError, match="ends in"):
        draw({}, tmp_path / "light.doc")
