"""Light: limits, conservation, defaults and the messages a user can meet."""

from dataclasses import replace
from types import SimpleNamespace

import numpy as np
import pytest

from reactor import library
from reactor.errors import CaseError, RangeError
from reactor.photons import Annulus, chlorine, energy, field, lamps, ledger, light, lot, windows
from reactor.photons.bickley import bickley, bickley_deficit
from reactor.photons.field import Field
from reactor.photons.laws import ISOTROPIC, LAMBERTIAN, RADIAL, SINE

approx = pytest.approx
RADII = (0.030, 0.077)


def a_lamp(**given):
    usual = dict(kind="LED 365 nm", spectrum=None, power=400.0, number=1,
                 lit_from=0.0, lit_to=1.2, end_of_life=0.8,
                 driver=None, hot_junction=None, emission=None)  # fmt: skip
    return SimpleNamespace(**(usual | given))


def a_sleeve(**given):
    usual = dict(material="fused silica", thickness=2.5e-3, transmission=None, deposit=0.0)
    return SimpleNamespace(**(usual | given))


def a_light(*some, sleeve=None, length=1.2):
    return light(some or (a_lamp(),), sleeve or a_sleeve(), Annulus(*RADII, 2.5e-3), length)


def accounts(found):
    return {account.name: account.watts for account in found.accounts}


def fields(lamp=0.02):
    return [Field(law, *RADII, lamp if law == LAMBERTIAN else 0.0) for law in (ISOTROPIC, LAMBERTIAN, SINE, RADIAL)]


# --- chlorine


def test_polynomials_follow_the_formula_to_one_part_in_a_million():
    # Source: our own formula on a grid of 1 nm and 1 K, 200 to 900 K. Kind: limit.
    wavelength, T = np.linspace(260e-9, 550e-9, 291), np.linspace(200, 900, 701)
    fit = np.polynomial.polynomial.polyval((T - 550) / 350, chlorine.sigma_fit(wavelength).T)
    assert np.max(abs(fit / chlorine._formula(wavelength[:, None], T) - 1)) < 1e-6


@pytest.mark.parametrize(("nm", "T"), [(240, 298), (560, 298), (365, 190), (365, 601)])
def test_cross_section_refuses_what_lies_outside_its_range(nm, T):
    with pytest.raises(RangeError, match="250-550 nm and 195-300 K"):
        chlorine.cross_section(nm * 1e-9, T)


@pytest.mark.parametrize(("T", "grade"), [
    (190, "beyond"), (195, "fitted"), (300, "fitted"), (301, "extrapolated"), (600, "extrapolated"),
    (601, "beyond"),
])  # fmt: skip
def test_cross_section_says_how_far_it_is_trusted(T, grade):
    assert chlorine.cross_section_grade(T) == grade


def test_every_source_named_in_the_light_data_is_described():
    known = library.sources()
    files = ["cl2_cross_section.csv", "constants.csv", "lamps.csv", "windows.csv"]
    files += [f"lamps/{name}" for name in library.table("photons/lamps.csv").text("file")]
    for file in files:
        table = library.table(f"photons/{file}")
        assert set(table.text("source")) <= set(known), file
        assert set(table.text("status")) <= set(library.STATUS), file


# --- the field


@pytest.mark.parametrize("n", [2, 3])
def test_deficit_of_a_bickley_function_is_its_fall_over_the_depth(n):
    # Kind: limit; the subtraction loses digits at small x, so it is tested where it does not.
    x = np.array([0.5, 1.0, 4.0, 30.0])
    assert bickley_deficit(n, x) == approx((bickley(n, 0.0) - bickley(n, x)) / x, rel=1e-13)


@pytest.mark.parametrize(("law", "gain"), [(ISOTROPIC, np.pi / 2), (SINE, 4 / np.pi), (RADIAL, 1.0)])
def test_thin_gas_absorbs_in_proportion_to_its_depth(law, gain):
    # Source: thin limits pi/2, 4/pi and 1. Kind: limit.
    assert field.absorbed_per_depth(Field(law, *RADII), 1e-9) == approx(gain, rel=1e-6)


def test_a_thin_lambertian_cylinder_is_a_sine_law_line():
    # Kind: limit a -> 0.
    tau = np.array([1e-3, 0.3, 2.0])
    thin, line = Field(LAMBERTIAN, *RADII, 1e-6), Field(SINE, *RADII)
    assert field.absorbed(thin, tau) == approx(field.absorbed(line, tau), rel=1e-8)
    assert field.fluence_rate(thin, 0.05, 20.0) == approx(field.fluence_rate(line, 0.05, 20.0), rel=1e-8)


@pytest.mark.parametrize("annulus", fields(), ids=lambda each: each.law)
def test_absorbed_and_transmitted_light_add_up_to_what_enters(annulus):
    # Kind: conservation law; the two are separate integrals.
    tau = np.geomspace(1e-6, 50, 40)
    assert field.absorbed(annulus, tau) + field.transmitted(annulus, tau) == approx(1.0, abs=1e-12)


@pytest.mark.parametrize(
    "annulus", [*fields(0.02), *fields(0.03)[1:2]], ids=lambda each: f"{each.law}-{each.lamp}"
)
@pytest.mark.parametrize("tau", [0.01, 1.0, 40.0])
def test_fluence_rate_times_absorption_adds_up_to_the_absorbed_share(annulus, tau):
    # Kind: conservation law, int kappa G 2 pi r dr = S f.
    nodes, weights = np.polynomial.legendre.leggauss(200)
    s, kappa = (nodes + 1) / 2, tau / (annulus.outside - annulus.inside)
    r = annulus.inside + (annulus.outside - annulus.inside) * s**3
    dr = weights / 2 * 3 * s**2 * (annulus.outside - annulus.inside)
    total = (kappa * field.fluence_rate(annulus, r, kappa) * 2 * np.pi * r) @ dr
    assert total == approx(field.absorbed(annulus, tau), rel=1e-9)


# --- sleeves


def test_light_outside_the_data_of_a_sleeve_does_not_pass():
    T = windows.transmission("soda-lime", 2e-3, np.array([300e-9, 313e-9, 365e-9, 600e-9]), RADIAL)
    assert T[0] == 0
    assert T[3] == 0
    assert 0 < T[1] < T[2]


def test_slanted_light_loses_more_in_an_absorbing_wall_than_straight_light():
    # Kind: limit.
    each = [
        windows.transmission("borosilicate tube", 3e-3, 320e-9, law)[0] for law in (RADIAL, SINE, ISOTROPIC)
    ]
    assert each == sorted(each, reverse=True)


def test_a_wall_without_reflection_absorbs_as_beer_and_lambert_say():
    # Kind: limit, index 1.
    assert windows.wall_transmission(1.0, 100.0, 2e-3, 0.5) == approx(np.exp(-0.2 / np.cos(0.5)), rel=1e-12)


def test_a_misspelt_sleeve_material_gets_the_nearest_one():
    with pytest.raises(CaseError, match="did you mean 'fused silica'"):
        windows.transmission("fused silika", 2e-3, 365e-9, SINE)


# --- lamps and files


def test_a_misspelt_lamp_gets_the_nearest_kind_and_the_list():
    with pytest.raises(CaseError, match=r"did you mean 'LED 365 nm'\?.*excimer 308 nm"):
        lamps.lamp("LED 365nm")


def test_capitals_and_blanks_of_a_lamp_kind_do_not_matter():
    assert lamps.lamp(" led  365 NM").kind == "LED 365 nm"


HEAD = "wavelength [nm],radiant_share [%]\n"


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("wavelength,share\n365,38\n", "column `wavelength \\[nm\\]` is missing"),
        ("wavelength [m],radiant_share [%]\n365,38\n", "accepted: a CSV file"),
        (HEAD, "holds no row"),
        (HEAD + "365,thirty\n", "no plain number"),
        (HEAD + "365\n", "no plain number"),
        (HEAD + "365,nan\n", "not a finite number"),
        (HEAD + "365,-1\n", "negative at 365 nm"),
        (HEAD + "365,1\n355,1\n", "355 nm repeats or falls"),
        (HEAD + "365,1\n365,1\n", "365 nm repeats or falls"),
        (HEAD + "0.365,38\n", "outside 100 to 3000 nm"),
        (HEAD + "365,60\n366,60\n", "120 W per 100 W"),
        (HEAD + "365,0\n", "add up to nothing"),
    ],
)  # fmt: skip
def test_a_spectrum_that_cannot_be_used_is_refused_with_what_is_accepted(tmp_path, text, says):
    path = tmp_path / "mine.csv"
    path.write_text(text)
    with pytest.raises(CaseError, match=says):
        lamps.spectrum_from_csv(path)


def test_all_faults_of_a_spectrum_come_at_once(tmp_path):
    path = tmp_path / "mine.csv"
    path.write_text(HEAD + "365,-1\n355,300\n")
    with pytest.raises(CaseError) as caught:
        lamps.spectrum_from_csv(path)
    assert len(caught.value.faults) == 3


def test_a_missing_spectrum_is_a_case_error(tmp_path):
    with pytest.raises(CaseError, match="cannot be read"):
        lamps.spectrum_from_csv(tmp_path / "none.csv")


def test_own_spectrum_is_read_with_its_remarks_and_extra_columns(tmp_path):
    path = tmp_path / "mine.csv"
    path.write_text("\ufeff" + HEAD.strip() + ",remark\n# measured\n365,20,peak\n405,5,\n", encoding="utf-8")
    spectrum = lamps.spectrum_from_csv(path)
    assert spectrum.wavelength == approx([365e-9, 405e-9])
    assert spectrum.share == approx([0.20, 0.05])
    found = a_light(a_lamp(kind=None, spectrum=path, end_of_life=None))
    assert accounts(found)["radiant"] == approx(400 * 0.90 * 0.25 * 0.80)
    assert found.emission == ISOTROPIC
    assert any("as typed" in note for note in found.notes)
    assert any("Own spectrum without a kind" in note for note in found.notes)


def test_own_sleeve_transmission_is_taken_as_typed_and_opaque_outside(tmp_path):
    path = tmp_path / "sleeve.csv"
    path.write_text("wavelength [nm],transmission [%]\n360,80\n370,90\n")
    found = a_light(sleeve=a_sleeve(material=None, transmission=path))
    lines = found.spectrum
    per_line = lines.at_window * lines.passed * energy.photon_energy(lines.wavelength)
    at_365 = np.argmin(abs(lines.wavelength - 365e-9))
    source = lamps.lamp("LED 365 nm").spectrum
    emitted = 400 * 0.9 * 0.9 * 0.8 * source.share[np.argmin(abs(source.wavelength - 365e-9))]
    assert per_line[at_365] == approx(0.85 * emitted)
    assert np.all(per_line[lines.wavelength > 371e-9] == 0)
    assert any("counts as opaque" in note for note in found.notes)


# --- the light of a tube


def test_each_factor_between_mains_and_light_counts_once():
    # Kind: worked by hand: 400 W x 0.90 driver = 360 W; x 38 % x 0.90 hot = 123.12 W fresh; x 0.8 = 98.50 W.
    watts = accounts(a_light())
    assert watts["driver loss"] == approx(40.0)
    assert watts["radiant"] == approx(98.496, rel=1e-5)
    assert watts["lost to ageing"] == approx(24.624, rel=1e-5)
    assert watts["lamp heat"] == approx(236.88, rel=1e-5)
    lost = watts["lost in sleeve and deposit"] + watts["never enters"]
    assert watts["into gas"] == approx(watts["radiant"] - lost - watts["out of band"], rel=1e-9)


@pytest.mark.parametrize("kind", lamps.kinds())
def test_ledger_closes_for_every_lamp_and_an_overhanging_one(kind):
    # Kind: conservation law.
    found = a_light(a_lamp(kind=kind, lit_from=0.3, lit_to=1.5), sleeve=a_sleeve(deposit=0.1))
    entering = np.diff(found.edges) @ found.spectrum.into_gas
    x = np.log(0.7)
    absorbed, left, ends = (entering * curves[0](x)[0] for curves in (found.absorbed, found.transmitted, found.ends))
    book = ledger(found, 0.7 * absorbed, left - ends, ends, parallel=4)
    assert max(book.closure.values()) < 1e-7
    watts = {row.name: row.watts for row in book.rows}
    assert watts["mains"] == approx(4 * 400)
    emitted = watts["radiant"] - watts["no data"] - watts["out of band"] - watts["lost in sleeve and deposit"]
    assert watts["never enters"] == approx(emitted / 4, rel=0.1)  # a quarter of the arc overhangs
    assert 0 < watts["ends"] < 0.05 * watts["into gas"]


def test_ledger_shows_photons_that_the_model_lost():
    found = a_light()
    entering = np.diff(found.edges) @ found.spectrum.into_gas
    book = ledger(found, 0.5 * entering, 0.4 * entering)
    assert book.closure["into gas"] == approx(0.1)
    assert book.closure["radiant"] < 1e-12


def test_mercury_light_below_260_nm_is_booked_as_no_data():
    found = a_light(a_lamp(kind="low-pressure mercury"))
    watts = accounts(found)
    assert watts["no data"] == approx(400 * 0.9 * 0.8 * (0.066 + 0.33), rel=1e-12)
    assert watts["out of band"] == approx(400 * 0.9 * 0.8 * 0.000462, rel=1e-12)  # 578 nm
    assert found.spectrum.wavelength.min() > 260e-9
    assert any("no data" in note for note in found.notes)


def test_lamps_of_two_spectra_make_sections_and_a_far_dark_end_gets_almost_nothing():
    found = a_light(
        a_lamp(lit_from=0.2, lit_to=0.6), a_lamp(kind="LED 405 nm", lit_from=0.5, lit_to=1.0), length=4.0
    )
    assert {0.2, 0.5, 0.6, 1.0} <= set(np.round(found.edges, 9))
    assert found.along is None
    total = found.into_gas.sum(axis=1)
    assert total[-1] < 1e-4 * total.max()
    assert found.entering @ found.photon_energy == approx(accounts(found)["into gas"])


def test_two_equal_lamps_give_twice_the_light_of_one():
    # Kind: limit.
    one, two = a_light(), a_light(a_lamp(number=2))
    both = a_light(a_lamp(), a_lamp())
    assert two.into_gas == approx(2 * one.into_gas)
    assert both.into_gas == approx(2 * one.into_gas)


def test_a_tube_without_lamps_is_dark():
    found = light((), a_sleeve(), Annulus(*RADII), 2.0)
    assert found.into_gas.shape == (1, 0)
    assert found.edges == approx([0.0, 2.0])
    assert found.sleeve_heat.shape == (1,)
    assert found.sleeve_heat == approx([0.0])


def test_a_lamp_of_no_watts_sends_nothing():
    assert a_light(a_lamp(power=0.0)).into_gas.sum() == 0


def test_arc_heats_the_sleeve_with_its_share_and_the_light_the_wall_keeps():
    # Kind: worked by hand; 0.475 x 360 W over 1.2 m = 142.5 W/m, the rest is light lost in the wall.
    found = a_light(a_lamp(kind="medium-pressure mercury"))
    lost = accounts(found)["lost in sleeve and deposit"]
    assert found.sleeve_heat == approx([(0.475 * 360 + lost) / 1.2])


def test_deposit_takes_its_share_of_the_light():
    # Kind: limit.
    clean, dirty = a_light(), a_light(sleeve=a_sleeve(deposit=0.25))
    assert dirty.into_gas == approx(0.75 * clean.into_gas)


def test_typed_factors_and_law_override_those_of_the_kind():
    found = a_light(a_lamp(driver=1.0, hot_junction=1.0, end_of_life=1.0, emission="Isotropic line"))
    assert accounts(found)["radiant"] == approx(400 * 0.38, rel=1e-5)
    assert found.emission == ISOTROPIC


def test_lamp_radius_is_taken_when_known_and_three_quarters_of_the_bore_when_not():
    assert a_light().lamp_radius == approx(0.75 * 0.0275)
    assert a_light(a_lamp(radius=0.010)).lamp_radius == approx(0.010)
    with pytest.raises(CaseError, match="does not fit the sleeve bore"):
        a_light(a_lamp(radius=0.028))


def test_lamps_of_different_laws_in_one_tube_are_refused():
    with pytest.raises(CaseError, match="different emission laws"):
        a_light(a_lamp(), a_lamp(kind="medium-pressure mercury"))


def test_all_faults_of_a_tube_come_at_once():
    with pytest.raises(CaseError) as caught:
        light((a_lamp(kind=None, lit_to=-1.0, power=-1.0),), a_sleeve(deposit=2.0), Annulus(0.08, 0.07), 1.0)
    assert len(caught.value.faults) == 5


def test_polynomials_and_lines_of_a_light_belong_together():
    found = a_light()
    n = len(found.wavelength)
    assert found.sigma.shape == (n, chlorine.FIT_TERMS)
    assert found.photon_energy == approx(energy.photon_energy(found.wavelength))
    assert found.quantum_yield == approx(np.ones(n))
    assert found.area == approx(np.pi * (0.077**2 - 0.030**2))
    assert found.path == approx(0.047)
    assert 0 < found.unevenness(np.full(n, 3.0), found.sigma[:, 0]) < 1


def test_light_is_a_frozen_record():
    found = a_light()
    assert replace(found, notes=()).notes == ()
    with pytest.raises(AttributeError):
        found.path = 1.0


def test_faint_lines_are_booked_but_not_followed():
    found = a_light()
    source = lamps.lamp("LED 365 nm").spectrum
    faint = source.share < lot.FAINT * source.share.sum()
    assert len(found.spectrum.wavelength) == np.count_nonzero(~faint)
    assert accounts(found)["out of band"] == approx(400 * 0.9 * 0.9 * 0.8 * source.share[faint].sum())
