"""The light field against closed forms, quadrature and Monte-Carlo values found apart from this program."""

import numpy as np
import pytest

from reactor.photons import even, field, rays, scene, spread
from reactor.photons.bickley import bickley
from reactor.photons.laws import ISOTROPIC, LAMBERTIAN, RADIAL, SINE, VOLUMETRIC, slopes
from reactor.photons.scene import Mirror, Scene

approx = pytest.approx
GAP = (0.0125, 0.0375)


def share(found, law, tau, gap):
    """Return the absorbed share of what enters, for long lamps, from the spread of paths."""
    phi, weight = slopes(law)
    died = (found.weight - found.next_weight) * (found.share / found.share.sum())[found.ray]
    path = (found.after[:, None] / np.cos(phi) / gap).ravel()
    lots = spread.spread(path, (died[:, None] * weight).ravel(), np.zeros(path.size, int), 1)
    return float(spread.absorbed_per_depth(lots, tau)[0, 0] * tau)


@pytest.mark.parametrize(
    ("L", "r", "z", "G", "q"),
    [
        (0.5, 0.02, 0.0, 11.8647, 7.9324), (0.5, 0.05, 0.0, 4.37167, 3.12129), (0.5, 0.05, 0.15, 4.06416, 3.00278),
        (0.5, 0.05, 0.25, 2.34137, 1.58365), (0.5, 0.05, 0.35, 0.605595, 0.162527), (0.5, 0.2, 0.0, 0.713058, 0.621396),
    ],
)  # fmt: skip
def test_a_finite_line_in_clear_gas_has_the_fluence_and_flux_of_its_closed_form(L, r, z, G, q):
    # Source: closed forms, equal to scipy quadrature apart from this program (computed). Kind: worked.
    assert field.finite_fluence(r, z, L) == approx(G, rel=1e-5)
    assert field.finite_flux(r, z, L) == approx(q, rel=1e-5)


@pytest.mark.parametrize(
    ("r", "z", "G"), [(0.03, 0, 7.69974), (0.04, 0, 2.46668), (0.055, 0, 0.641226), (0.055, 0.25, 0.320702)]
)
def test_a_finite_line_with_an_absorber_has_the_fluence_of_quadrature(r, z, G):
    # Source: scipy quadrature apart from this program, r1 30 mm, kappa 52.5 1/m, arc 0.5 m (computed). Kind: worked.
    assert field.finite_fluence(r, z, 0.5, 52.5, 0.03) == approx(G, rel=1e-5)


LONG = [  # tau, isotropic line, sine-law line, radial
    (0.01, 0.0153969, 0.0126338, 0.00995017), (0.1, 0.137479, 0.118226, 0.0951626), (0.5, 0.493626, 0.457144, 0.393469),
    (1.0, 0.726379, 0.697166, 0.632121), (2.0, 0.914509, 0.902007, 0.864665), (5.0, 0.996822, 0.996198, 0.993262),
]  # fmt: skip


@pytest.mark.parametrize(("tau", "isotropic", "sine", "radial"), LONG)
def test_the_traced_annulus_absorbs_what_the_closed_forms_say(tau, isotropic, sine, radial):
    # Source: 1 - Ki_2, 1 - (4/pi) Ki_3, 1 - exp, each beside a Monte Carlo of 2e6 rays (computed). Kind: limit.
    for law, value in ((ISOTROPIC, isotropic), (SINE, sine), (RADIAL, radial)):
        assert share(rays.annulus(*GAP, law), law, tau, 0.025) == approx(value, rel=1e-5)


@pytest.mark.parametrize(
    ("a", "r", "lambertian", "volumetric"),
    [
        (0.01, 0.01, 31.831, 31.831), (0.01, 0.0125, 18.7909, 22.2037), (0.01, 0.02, 10.6103, 12.9329),
        (0.01, 0.05, 4.08036, 5.02538),
    ],
)  # fmt: skip
def test_extended_lamps_have_the_fluence_of_their_closed_forms(a, r, lambertian, volumetric):
    # Source: 2 asin(a/r)/(pi^2 a) and quadrature over the disc, apart from this program (computed). Kind: worked.
    annulus = field.Field(LAMBERTIAN, max(a, 0.01), 0.06, a)
    assert field.fluence_rate(annulus, r, 0.0) == approx(lambertian, rel=1e-4)
    assert field.volumetric_fluence(a, r) == approx(volumetric, rel=1e-4)


@pytest.mark.parametrize(
    ("tau", "lambertian", "error", "volumetric", "its"),
    [
        (0.1, 0.122853, 3.1e-5, 0.141299, 5.8e-5), (1.0, 0.711264, 5.6e-5, 0.736035, 7.2e-5),
        (3.0, 0.97131, 1.0e-5, 0.974627, 1.2e-5),
    ],
)  # fmt: skip
def test_extended_lamps_absorb_what_a_monte_carlo_found(tau, lambertian, error, volumetric, its):
    # Source: Monte Carlo apart from this program, lamp 10 mm, gas 12.5 to 37.5 mm; 3 standard errors (computed).
    # Kind: worked.
    for law, value, sigma in ((LAMBERTIAN, lambertian, error), (VOLUMETRIC, volumetric, its)):
        assert share(rays.annulus(*GAP, law, 0.010), law, tau, 0.025) == approx(value, abs=3 * sigma)


@pytest.mark.parametrize(
    ("D", "b", "a", "value"),
    [
        (0.06, 0.02, 0, 0.108173), (0.1, 0.02, 0, 0.0640942), (0.06, 0.0125, 0, 0.0668039), (0.06, 0.02, 0.01, 0.10877),
        (0.05, 0.025, 0.0125, 0.169384), (0.1, 0.02, 0.01, 0.0642076),
    ],
)  # fmt: skip
def test_a_tube_beside_a_lamp_catches_the_share_of_the_closed_form(D, b, a, value):
    # Source: asin(b/D)/pi and crossed strings, each beside a Monte Carlo of 2e6 rays (computed). Kind: worked; the
    # traced share is a lattice of rays, good to 1e-3.
    assert field.captured(D, b, a) == approx(value, rel=1e-5)
    law = LAMBERTIAN if a else ISOTROPIC
    aim = (0.0, float(np.arcsin((a + b) / D)))
    found = scene.follow(Scene(np.zeros((1, 2)), a, np.array([[D, 0.0]]), b, b, aim=aim), law)
    assert found.capture == approx(value, rel=1e-3)


def across(b):
    """Return rays that cross a tube: evenly over its width, as from all round or from one side."""
    s, weight = np.polynomial.legendre.leggauss(200)
    u = np.sin(s * np.pi / 2)  # offset over the radius
    part = weight * np.cos(s * np.pi / 2)
    chord = 2 * b * np.sqrt(1 - u**2)
    one = np.ones(len(u))
    return rays.Rays(part / part.sum(), one, np.arange(len(u)), one, 0 * one, chord, 0 * one, np.zeros(len(u), int), one[:1])


@pytest.mark.parametrize(
    ("x", "beam", "round_about"),
    [(0.1, 0.0753025, 0.0938787), (0.5, 0.320367, None), (1.0, 0.531549, 0.595953), (2.0, 0.766356, None),
     (3.0, None, 0.904718), (5.0, 0.954143, None)],
)  # fmt: skip
def test_a_tube_absorbs_what_quadrature_says_of_a_beam_and_of_light_from_all_round(x, beam, round_about):
    # Source: modified Bessel and Struve functions; quadrature of Ki_3 beside a Monte Carlo (computed). Kind: limit.
    if beam is not None:
        assert share(across(1.0), RADIAL, x, 2.0) == approx(beam, rel=1e-4)
    if round_about is not None:
        assert share(across(1.0), SINE, x, 2.0) == approx(round_about, rel=1e-4)


@pytest.mark.parametrize(
    ("A", "e", "a", "b", "rho", "value", "error"),
    [
        (0.15, 0.4, 0.0005, 0.02, 1.0, 0.996947, 5.5e-5), (0.15, 0.4, 0.01, 0.02, 1.0, 0.937959, 2.4e-4),
        (0.15, 0.4, 0.01, 0.02, 0.85, 0.803117, 4.0e-4), (0.15, 0.4, 0.01, 0.01, 0.85, 0.682509, 4.7e-4),
        (0.15, 0.7, 0.01, 0.02, 0.85, 0.751214, 4.3e-4), (0.15, 0.2, 0.01, 0.02, 0.85, 0.798348, 4.0e-4),
        (0.08, 0.5, 0.01, 0.02, 0.85, 0.754224, 4.3e-4),
    ],
)  # fmt: skip
def test_an_elliptical_reflector_brings_the_share_that_a_monte_carlo_found(A, e, a, b, rho, value, error):
    # Source: Monte Carlo apart from this program, Lambertian lamp and black tube in the foci; 3 standard errors
    # (computed). Kind: worked.
    mirror = Mirror("ellipse", (A, A * np.sqrt(1 - e**2)), rho)
    found = scene.follow(Scene(np.array([[-e * A, 0.0]]), a, np.array([[e * A, 0.0]]), b, b, mirror), LAMBERTIAN)
    assert found.capture == approx(value, abs=3 * error)


@pytest.mark.parametrize(
    ("tau", "ratio"),
    [(0.1, 0.999896), (1.0, 0.989785), (2.0, 0.961371), (5.0, 0.823788), (10.0, 0.628208), (20.0, 0.447193)],
)
def test_the_square_root_mean_of_a_beam_in_a_slab_is_as_tabulated(tau, ratio):
    # Source: <e^0.5>/<e>^0.5 by quadrature apart from this program (computed). Kind: limit.
    phi, weight = slopes(RADIAL)
    found = rays.slab(0.02, RADIAL, layers=200)
    flat = sum(sign * spread.spread(depth / 0.02, np.ones(200), found.cell, 200)
               for depth, sign in ((found.after, 1.0), (found.before, -1.0)))  # fmt: skip
    cells = even.Cells(found.volume, flat @ spread.tilted(phi, weight))
    assert even.unevenness(cells, tau) ** 0.5 == approx(ratio, rel=1e-4)


@pytest.mark.parametrize(
    ("ratio", "tau", "value"),
    [
        (1.5, 0.01, 0.998005), (1.5, 1.0, 0.962942), (1.5, 5.0, 0.729601), (3.0, 0.01, 0.988259),
        (3.0, 1.0, 0.934723), (3.0, 5.0, 0.667701), (5.0, 0.01, 0.978543), (5.0, 1.0, 0.91405), (5.0, 5.0, 0.627031),
    ],
)  # fmt: skip
def test_the_square_root_mean_of_an_annulus_is_as_tabulated(ratio, tau, value):
    # Source: <G^0.5>/<G>^0.5 over the annulus, isotropic line, by quadrature apart from this program (computed).
    # Kind: limit; the cells of the program (32 rings) hold to 1e-3, nodes of the closed form to 1e-4.
    from reactor.photons.shapes import Annulus

    cells = even.cells(Annulus(0.01, 0.01 * ratio), ISOTROPIC, 0.0)
    assert even.unevenness(cells, tau) ** 0.5 == approx(value, rel=1e-3)
    s, weight = np.polynomial.legendre.leggauss(400)
    x = (s + 1) / 2
    r = 0.01 * (1 + (ratio - 1) * x**2)
    volume = weight * x * r
    G = field.fluence_rate(field.Field(ISOTROPIC, 0.01, 0.01 * ratio), r, tau / (0.01 * (ratio - 1)))
    assert (volume @ np.sqrt(G) / volume.sum()) / np.sqrt(volume @ G / volume.sum()) == approx(value, rel=1e-4)


@pytest.mark.parametrize(
    ("N", "kappa", "value"), [(1, 0.0, 4.16667), (3, 0.0, 12.5), (3, 52.5, 2.45072), (6, 52.5, 4.90145)]
)
def test_lamps_round_a_tube_add_up_on_its_axis(N, kappa, value):
    # Source: N Ki_1(kappa b)/(2 pi D), D 60 mm, b 20 mm, by scipy apart from this program (computed). Kind: worked.
    assert N * bickley(1, kappa * 0.02) / (2 * np.pi * 0.06) == approx(value, rel=1e-5)


@pytest.mark.parametrize(
    ("tau", "rho", "black", "clear"),
    [
        (0.05, 0.6, 0.111597, 0.222635), (0.05, 0.9, 0.131008, 0.559293), (0.3, 0.6, 0.469721, 0.632088),
        (0.3, 0.9, 0.532655, 0.883961), (1.0, 0.6, 0.839257, 0.883357), (1.0, 0.9, 0.895696, 0.969836),
        (3.0, 0.6, 0.988174, 0.988819), (3.0, 0.9, 0.996224, 0.997203),
    ],
)  # fmt: skip
def test_a_bright_outer_wall_adds_its_passes(tau, rho, black, clear):
    # Source: series of Ki_2, the first beside a Monte Carlo of 1e6 rays (computed). Kind: limit.
    for returning, value in ((0.0, black), (1.0, clear)):
        found = rays.annulus(*GAP, ISOTROPIC, 0.0, rho, returning)
        assert share(found, ISOTROPIC, tau, 0.025) == approx(value, rel=1e-4)


@pytest.mark.parametrize(("tau", "value"), [(0.1, 0.167417), (1.0, 0.780616), (3.0, 0.982139)])
def test_a_slab_under_a_lambertian_panel_absorbs_what_the_exponential_integral_says(tau, value):
    # Source: 1 - 2 E3(tau), beside a Monte Carlo of 1e6 rays (computed). Kind: limit.
    assert share(rays.slab(0.02, LAMBERTIAN), SINE, tau, 0.02) == approx(value, rel=1e-4)


@pytest.mark.parametrize(
    ("tau", "r1", "r2", "isotropic", "sine", "radial"),
    [
        (0.3, 0.0125, 0.0375, 0.343852, 0.310079, 0.259182), (1.3125, 0.03, 0.055, 0.811114, 0.788078, 0.730854),
        (4.0, 0.03, 0.08, 0.990653, 0.988924, 0.981684),
    ],
)  # fmt: skip
def test_the_volume_integral_of_absorption_is_what_is_lost(tau, r1, r2, isotropic, sine, radial):
    # Source: closed forms, integral by quadrature apart from this program (computed). Kind: conservation law, 1e-6.
    s, weight = np.polynomial.legendre.leggauss(300)
    x = (s + 1) / 2
    r, dr = r1 + (r2 - r1) * x**3, weight / 2 * 3 * x**2 * (r2 - r1)
    for law, value in ((ISOTROPIC, isotropic), (SINE, sine), (RADIAL, radial)):
        annulus, kappa = field.Field(law, r1, r2), tau / (r2 - r1)
        integral = (kappa * field.fluence_rate(annulus, r, kappa) * 2 * np.pi * r) @ dr
        assert integral == approx(field.absorbed(annulus, tau), rel=1e-6)
        assert integral == approx(value, rel=5e-6)
