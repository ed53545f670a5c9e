"""The mechanism that comes with the program, its tables, users' own files, and the loss of atoms at walls."""

import dataclasses
import hashlib
import os
import warnings

import cantera as ct
import numpy as np
import pytest

from reactor import chemistry, library
from reactor.chemistry import kept, load, wall
from reactor.chemistry.tables import LINDEMANN, NEVER, tables
from reactor.errors import CaseError

approx = pytest.approx

FILE = library.folder() / "mechanism" / "light_alkanes.yaml"
R = 8.31446261815324  # J/mol/K


@pytest.fixture(scope="module")
def gas():
    return chemistry.mechanism()


# ---------------------------------------------------------------- the file itself


@pytest.mark.parametrize(("phase", "more"), [("gas", 0), ("gas-lit", 2)])
def test_both_phases_load_in_cantera_without_a_remark(phase, more, gas):
    with warnings.catch_warnings():
        warnings.simplefilter("error")
        solution = ct.Solution(str(FILE), phase)
    assert solution.n_reactions == len(gas.equations) - 2 + more
    assert solution.transport_model == "mixture-averaged"


def test_the_dark_phase_holds_neither_light_nor_wall():
    roles = {reaction.input_data.get("role") for reaction in ct.Solution(str(FILE), "gas").reactions()}
    assert roles == {None, "start"}


def test_photolysis_and_wall_have_no_reverse_and_start_has(gas):
    assert gas.equations[gas.photolysis] == "Cl2 => 2 Cl"
    assert gas.equations[gas.wall] == "Cl => 0.5 Cl2"
    assert not gas.tables.reversible[[gas.photolysis, gas.wall]].any()
    assert [gas.equations[number] for number in gas.start] == ["2 Cl + M <=> Cl2 + M"]
    assert gas.tables.reversible[gas.start].all()


def test_every_reaction_keeps_its_atoms(gas):
    # Kind: limit (conservation of atoms).
    assert (gas.tables.products - gas.tables.reactants) @ gas.atoms == approx(0.0, abs=1e-12)


def test_every_rate_and_species_says_where_it_comes_from(gas):
    for entry in gas.cited:
        assert entry.source in library.sources()
        assert entry.status in library.STATUS
    assert {entry.what for entry in gas.cited} == {"rate constants", "thermodynamic data", "transport data"}
    assert len(set(gas.cited)) == len(gas.cited)


def test_nothing_recalled_is_called_seen(gas):
    for entry in gas.cited:
        if library.sources()[entry.source]["seen"].startswith("memory"):
            assert entry.status in ("memory", "estimate")


def test_every_rate_states_its_range_and_factor(gas):
    assert np.all(gas.valid[:, 0] <= gas.valid[:, 1])
    assert np.all(gas.f298 >= 1.0)
    assert np.all(np.isnan(gas.g))  # the sources at hand state none
    assert gas.uncertainty(500.0) == approx(gas.f298)


def test_the_species_list_and_the_mechanism_name_the_same_species(gas):
    rows = library.table("species.csv")
    assert tuple(rows.text("key")) == gas.species
    for formula, atoms in zip(rows.text("formula"), gas.atoms, strict=True):
        assert formula == "".join(
            element + (f"{number:.0f}" if number > 1 else "")
            for element, number in zip(gas.elements, atoms, strict=True) if number
        )  # fmt: skip


def test_no_two_species_share_a_name():
    rows = library.table("species.csv").rows
    words = [word for r in rows for word in (r["key"], r["name"], *r["synonyms"].split(";"))]
    spellings = [word.lower() for word in words if word]
    assert len(spellings) == len(set(spellings))


def test_a_radical_has_an_odd_number_of_electrons_and_a_molecule_an_even_one(gas):
    numbers = np.array([ct.Element(element).atomic_number for element in gas.elements])
    odd = (gas.atoms @ numbers) % 2 == 1
    assert list(odd) == [kind != "molecule" for kind in gas.kinds]


# ---------------------------------------------------------------- thermo


def test_heat_capacities_are_smooth_and_bounded_to_1700_kelvin(gas):
    # Kind: limit. Classical bound: 4 R of translation, rotation and work (3.5 R if linear), R per vibration;
    # an atom has 2.5 R; 0.3 R more for the electronic part of Cl and the anharmonic one of two atoms.
    T = np.arange(200.0, 1701.0, 5.0)
    cp = gas.heat_capacity(T) / R
    number = gas.atoms.sum(axis=1)
    linear = np.isin(gas.species, ["CO2", "Cl2", "HCl", "O2", "N2"])
    bound = np.where(number == 1, 2.8, 3 * number - np.where(linear, 1.5, 2.0)) + 0.3 * (number == 2)
    assert np.all(cp > 2.4)
    assert np.all(cp < bound)
    assert np.all(np.abs(np.diff(cp, n=2, axis=0)) < 2e-3 * cp[1:-1])
    many = number > 3
    assert np.all(np.diff(cp[:, many], axis=0) > 0.0)


def test_polynomials_meet_at_the_middle_temperature(gas):
    t = gas.tables
    for at in (gas.heat_capacity, gas.enthalpy, gas.entropy):
        below, above = (np.diagonal(at(t.t_mid + step)) for step in (-1e-6, 1e-6))
        assert above == approx(below, rel=2e-5, abs=1e-2)


def test_every_fit_holds_from_200_to_1700_kelvin(gas):
    assert np.all(gas.tables.t_low <= 200.0)
    assert np.all(gas.tables.t_high >= 1700.0)


@pytest.mark.parametrize("T", [250.0, 298.15, 999.0, 1001.0, 1600.0])
def test_molar_properties_are_those_of_cantera(gas, T):
    solution = ct.Solution(str(FILE), "gas")
    solution.TP = T, solution.reference_pressure
    assert gas.heat_capacity(T) == approx(solution.standard_cp_R * R, rel=1e-12)
    assert gas.enthalpy(T) == approx(solution.standard_enthalpies_RT * R * T, rel=1e-12, abs=1e-6)
    assert gas.entropy(T) == approx(solution.standard_entropies_R * R, rel=1e-12)


def test_an_array_of_temperatures_gives_a_row_for_each(gas):
    T = np.array([[300.0, 900.0], [1000.0, 1400.0]])
    assert gas.enthalpy(T).shape == (2, 2, len(gas.species))
    assert np.array_equal(gas.entropy(T)[1, 0], gas.entropy(1000.0))
    assert gas.heat_capacity(300.0).shape == (len(gas.species),)


# ---------------------------------------------------------------- the tables prove right against Cantera


def constants(t, T, c):
    """Return forward and reverse rate constants from the tables, [M] left out of three-body ones."""

    def rate(A, b, E):
        return A * T**b * np.exp(-E / T)

    k = rate(t.A, t.b, t.E)
    for r in np.flatnonzero(t.falloff):
        a, T3, T1, T2 = t.troe[r]
        center = np.log10((1 - a) * np.exp(-T / T3) + a * np.exp(-T / T1) + np.exp(-T2 / T))
        Pr = rate(t.low_A[r], t.low_b[r], t.low_E[r]) * (t.efficiencies[r] @ c) / k[r]
        x = np.log10(Pr) - 0.4 - 0.67 * center
        F = 10 ** (center / (1 + (x / (0.75 - 1.27 * center - 0.14 * x)) ** 2))
        k[r] *= Pr / (1 + Pr) * F
    a = np.where((t.t_mid >= T)[:, None], t.nasa_low, t.nasa_high)
    i = np.arange(1, 6)
    h_RT = a[:, :5] @ (T ** (i - 1) / i) + a[:, 5] / T
    s_R = a[:, 0] * np.log(T) + a[:, 1:5] @ (T ** i[:4] / i[:4]) + a[:, 6]
    net = t.products - t.reactants
    K = np.exp(net @ (s_R - h_RT)) * (t.reference_pressure / (R * T)) ** net.sum(axis=1)
    return k, np.where(t.reversible, k / K, 0.0)


@pytest.mark.parametrize("file", [str(FILE), "gri30.yaml"], ids=["own", "another"])
@pytest.mark.parametrize(("T", "P"), [(290.0, 2e4), (420.0, 1.1e5), (1000.0, 1e6), (1600.0, 3e5)])
def test_rate_constants_recomputed_from_the_tables_are_those_of_cantera(file, T, P):
    solution = ct.Solution(file, "gas-lit" if file == str(FILE) else "")
    mole = np.random.default_rng(7).random(solution.n_species)
    solution.TPX = T, P, mole
    t = tables(solution, file)
    c = solution.concentrations * 1e3
    forward, reverse = constants(t, T, c)
    order = t.reactants.sum(axis=1) + t.third_body
    back = t.products.sum(axis=1) + t.third_body
    assert forward == approx(solution.forward_rate_constants * 1e3 ** (1 - order), rel=1e-10)
    assert reverse == approx(solution.reverse_rate_constants * 1e3 ** (1 - back), rel=1e-10)
    M = np.where(t.third_body, t.efficiencies @ c, 1.0)
    q = M * forward * np.prod(c**t.reactants, axis=1)
    assert q == approx(solution.forward_rates_of_progress * 1e3, rel=1e-10)


def test_falloff_without_troe_numbers_has_a_blending_factor_of_one():
    # Kind: limit. F_c = 1 makes log F = 0 at any reduced pressure.
    a, T3, T1, T2 = LINDEMANN
    for T in (200.0, 3000.0):
        assert (1 - a) * np.exp(-T / T3) + a * np.exp(-T / T1) + np.exp(-T2 / T) == 1.0


def test_a_missing_fourth_troe_number_never_acts(gas):
    rows = gas.tables.troe[gas.tables.falloff]
    assert set(rows[:, 3]) == {NEVER, 9999.0}
    assert np.all(gas.tables.troe[~gas.tables.falloff] == LINDEMANN)
    assert not gas.tables.efficiencies[~(gas.tables.falloff | gas.tables.third_body)].any()


# ---------------------------------------------------------------- users' own files

HEAD = """
units: {length: cm, quantity: molec, activation-energy: K}
phases:
  - {name: mine, thermo: ideal-gas, species: [Cl, Cl2, HCl, H, X, Y], kinetics: bulk}
species:
"""
SPECIES = "".join(
    f"  - {{name: {name}, composition: {atoms}, thermo: {{model: NASA7, temperature-ranges: [200.0, 3000.0], "
    "data: [[3.5, 0, 0, 0, 0, 0, 0]]}}\n"
    for name, atoms in [
        ("Cl", "{Cl: 1}"), ("Cl2", "{Cl: 2}"), ("HCl", "{H: 1, Cl: 1}"), ("H", "{H: 1}"),
        ("X", "{C: 1, H: 3, O: 2}"), ("Y", "{C: 1, H: 2}"),
    ]
)  # fmt: skip
LIGHT = "  - {equation: Cl2 => 2 Cl, rate-constant: {A: 1.0, b: 0.0, Ea: 0.0}, role: photolysis}\n"
WALL = "  - {equation: Cl => 0.5 Cl2, rate-constant: {A: 1.0, b: 0.0, Ea: 0.0}, role: wall}\n"
RATE = "rate-constant: {A: 1.0e-30, b: 0.0, Ea: 0.0}"


@pytest.fixture
def mine(tmp_path):
    def write(reactions, head=HEAD, species=SPECIES):
        path = tmp_path / "mine.yaml"
        path.write_text(head + species + "reactions:\n" + reactions)
        return chemistry.mechanism(path)

    return write


def test_a_file_with_one_phase_and_unmarked_start_is_taken(mine):
    gas = mine(f"  - {{equation: 2 Cl + M <=> Cl2 + M, type: three-body, {RATE}}}\n" + LIGHT + WALL)
    assert (gas.phase, gas.photolysis, gas.wall, list(gas.start)) == ("mine", 1, 2, [0])
    assert gas.tables.reference_pressure == 101325.0
    assert gas.status == ("not stated",) * 3
    assert np.isnan(gas.valid).all()
    assert {entry.source for entry in gas.cited} == {"mine.yaml"}


def test_the_kind_of_an_unknown_species_follows_from_its_electrons(mine):
    gas = mine(LIGHT + WALL)
    assert [gas.kinds[gas.index[name]] for name in ("H", "X", "Y")] == ["radical", "radical", "molecule"]


@pytest.mark.parametrize(("lines", "role"), [(WALL, "photolysis"), (LIGHT, "wall")])
def test_a_file_without_light_or_wall_is_told_which_line_to_add(mine, lines, role):
    with pytest.raises(CaseError, match=rf"0 reactions of role {role}.*add this line.*role: {role}"):
        mine(lines)


@pytest.mark.parametrize("wrong", [
    LIGHT.replace("=>", "<=>"), LIGHT.replace("A: 1.0", "A: 0.001"),
    LIGHT.replace("Cl2 => 2 Cl", "2 Cl => Cl2"),
])  # fmt: skip
def test_photolysis_with_a_reverse_or_its_own_rate_is_refused(mine, wrong):
    with pytest.raises(CaseError, match="has no reverse and a rate of 1 1/s"):
        mine(wrong)


@pytest.mark.parametrize(("line", "said"), [
    (f"  - {{equation: H + Cl => HCl, {RATE}, orders: {{Cl: 1.5}}}}\n", "Cl + H => HCl: `orders` differ"),
    ("  - {equation: H + Cl => HCl, type: pressure-dependent-Arrhenius, rate-constants: "
     "[{P: 1 atm, A: 1.0e-30, b: 0, Ea: 0}, {P: 2 atm, A: 1.0e-30, b: 0, Ea: 0}]}\n",
     "Cl + H => HCl: rates of type pressure-dependent-Arrhenius are not supported"),
    (f"  - {{equation: 2 H + 2 Cl => 2 HCl, {RATE}}}\n", "=> 2 HCl: whole numbers and at most three"),
])  # fmt: skip
def test_rate_laws_beyond_the_tables_are_refused_by_name(mine, line, said):
    with pytest.raises(CaseError) as caught:
        mine(line + LIGHT + WALL)
    assert said in str(caught.value)
    assert "mine.yaml" in str(caught.value)


def with_thermo(thermo):
    """Return the species with another thermo for H."""
    before, after = SPECIES.split("  - {name: H,")
    _, end = after.split("thermo: {", 1)[1].split("}}", 1)
    return f"{before}  - {{name: H, composition: {{H: 1}}, thermo: {{{thermo}}}}}{end}"


def nine(*limits):
    """Return a NASA9 polynomial in ranges between these temperatures: cp/R = 3.5 + 2/T + 1/T^2."""
    rows = ", ".join(["[1, 2, 3.5, 0, 0, 0, 0, 0, 0]"] * (len(limits) - 1))
    return f"model: NASA9, temperature-ranges: {list(limits)}, data: [{rows}]"


def test_other_thermo_is_refused_by_name(mine):
    with pytest.raises(CaseError, match="H: its thermo is no NASA polynomial"):
        mine(LIGHT + WALL, species=with_thermo("model: constant-cp, T0: 300 K, h0: 0 J/mol, s0: 0 J/mol/K, cp0: 20 J/mol/K"))


@pytest.mark.parametrize(("limits", "kept", "remarks"), [
    ((200.0, 3000.0), (200.0, 3000.0, 3000.0), 0),
    ((200.0, 1000.0, 6000.0), (200.0, 1000.0, 6000.0), 0),
    ((200.0, 1000.0, 6000.0, 20000.0), (200.0, 1000.0, 6000.0), 1),
    ((50.0, 200.0, 1000.0, 6000.0, 20000.0), (200.0, 1000.0, 6000.0), 1),
])  # fmt: skip
def test_of_nine_coefficient_thermo_the_ranges_between_200_and_3000_kelvin_are_taken(mine, limits, kept, remarks):
    gas = mine(LIGHT + WALL, species=with_thermo(nine(*limits)))
    H, t = gas.index["H"], gas.tables
    assert (t.t_low[H], t.t_mid[H], t.t_high[H]) == kept
    assert [remark for remark in gas.remarks if "NASA9" in remark] == ([
        "NASA9 polynomials of 1 species: ranges outside 200 to 3000 K are left out"] * remarks)
    assert gas.heat_capacity(250.0)[H] == approx(R * (3.5 + 2 / 250.0 + 1 / 250.0**2), rel=1e-14)


def test_nine_coefficient_thermo_of_three_useful_ranges_is_refused_by_name(mine):
    with pytest.raises(CaseError, match=r"H: the tables hold two ranges of its NASA9 polynomial .*, it has 3 there"):
        mine(LIGHT + WALL, species=with_thermo(nine(200.0, 600.0, 1000.0, 6000.0)))


@pytest.mark.parametrize(("reactions", "said"), [
    (f"  - {{equation: Cl + Q => Cl2, {RATE}}}\n", "undeclared species"),
    (f"  - {{equation: Cl => Cl2, {RATE}}}\n", "unbalanced"),
    ("  - {equation: [", "mine.yaml"),
])  # fmt: skip
def test_what_cantera_says_of_a_broken_file_reaches_the_user(mine, reactions, said):
    with pytest.raises(CaseError) as caught:
        mine(reactions)
    assert said in str(caught.value)
    assert "Cantera cannot use this file" in str(caught.value)
    assert "****" not in str(caught.value)


def test_a_remark_of_cantera_is_kept_beside_the_mechanism(mine):
    even = "[200.0, 3000.0], data: [[3.5, 0, 0, 0, 0, 0, 0]]"
    step = SPECIES.replace(even, f"[200.0, 1000.0, 3000.0], data: [[4, 0, 0, 0, 0, 0, 0], {even[24:]}", 1)
    assert "discontinuity in cp/R" in mine(LIGHT + WALL, species=step).remarks[0]


def test_a_file_without_chlorine_is_refused(mine):
    renamed = HEAD.replace("HCl", "CLH"), SPECIES.replace("name: HCl", "name: CLH")
    with pytest.raises(CaseError, match="species HCl missing"):
        mine(LIGHT + WALL, *renamed)


def test_a_file_without_transport_data_names_the_remedy(mine):
    gas = mine(LIGHT + WALL)
    with pytest.raises(CaseError, match=r"add `transport: mixture-averaged` to the phase"):
        gas.transport(300.0, 1e5, np.ones(len(gas.species)))


def test_a_missing_file_is_named(tmp_path):
    with pytest.raises(CaseError, match=r"none\.yaml: cannot be read"):
        chemistry.mechanism(tmp_path / "none.yaml")


def test_a_mechanism_is_read_once_and_again_when_it_changes(mine):
    first = mine(LIGHT + WALL)
    assert chemistry.mechanism(first.path) is first
    os.utime(first.path, ns=(first.stamp + 10**9, first.stamp + 10**9))
    assert chemistry.mechanism(first.path) is not first
    assert chemistry.mechanism() is chemistry.mechanism()


def test_the_dark_phase_of_the_shipped_file_is_passed_over_for_the_lit_one(gas):
    assert chemistry.mechanism(FILE).phase == gas.phase == "gas-lit"


# ---------------------------------------------------------------- transport


def test_transport_of_a_mixture_is_that_of_cantera(gas):
    mole = np.zeros(len(gas.species))
    mole[[gas.index["CH4"], gas.index["Cl2"], gas.index["HCl"]]] = 8.0, 0.6, 0.4
    found = gas.transport(350.0, 1.5e5, 3.0 * mole)
    solution = ct.Solution(str(FILE), "gas")
    solution.TPX = 350.0, 1.5e5, mole
    assert found.viscosity == approx(solution.viscosity, rel=1e-12)
    assert found.conductivity == approx(solution.thermal_conductivity, rel=1e-12)
    assert found.density == approx(mole @ gas.molar_mass / mole.sum() * 1.5e5 / (R * 350.0), rel=1e-12)
    mass = mole @ gas.molar_mass
    assert found.heat_capacity_mass == approx(mole @ gas.heat_capacity(350.0) / mass, rel=1e-12)
    assert found.diffusivity_chlorine_atom == approx(solution.mix_diff_coeffs[solution.species_index("Cl")])


def random_states(gas, count, seed):
    """Yield (T, P, mole fractions), half of the species absent."""
    rng = np.random.default_rng(seed)
    for _ in range(count):
        x = rng.dirichlet(np.full(len(gas.species), 0.1)) * (rng.random(len(gas.species)) < 0.5)
        x[gas.index["Cl2"]] += 0.1
        yield rng.uniform(250.0, 1500.0), 10 ** rng.uniform(4.0, 6.0), x / x.sum()


def test_transport_is_that_of_cantera_at_random_states(gas):
    solution = ct.Solution(str(FILE), "gas-lit")
    atom = solution.species_index("Cl")
    for T, P, x in random_states(gas, 100, 5):
        solution.TPX = T, P, x
        found = gas.transport(T, P, x)
        ours = found.viscosity, found.conductivity, found.diffusivity_chlorine_atom
        theirs = solution.viscosity, solution.thermal_conductivity, solution.mix_diff_coeffs[atom]
        assert ours == approx(theirs, rel=1e-10)


# ---------------------------------------------------------------- the cache folder


@pytest.fixture
def cached(tmp_path, monkeypatch):
    """Return a function that reads a file as a new process would, and the cache folder."""
    monkeypatch.setenv("REACTOR_CACHE", str(tmp_path / "cache"))

    def read(path=None):
        load._read.cache_clear()
        return chemistry.mechanism(path)

    yield read, tmp_path / "cache"
    load._read.cache_clear()


def all_of(value):
    """Return a mechanism as nested plain values, for comparison digit by digit."""
    if dataclasses.is_dataclass(value):
        return {f.name: all_of(getattr(value, f.name)) for f in dataclasses.fields(value)}
    if isinstance(value, np.ndarray):
        return value.dtype.str, value.shape, value.tobytes()
    if isinstance(value, tuple):
        return type(value), *map(all_of, value)
    return value


def test_a_mechanism_is_kept_whole_and_found_again_without_cantera(cached, monkeypatch):
    read, folder = cached
    first = read()
    assert len(list(folder.glob("*.mechanism"))) == 1
    monkeypatch.setattr(load, "_made", None)
    assert all_of(read()) == all_of(first)


def spoil_end(data):
    return data[:-9]


def spoil_bit(data):
    return data[:5000] + bytes([data[5000] ^ 1]) + data[5001:]


def spoil_key(data):
    return bytes(32) + data[32:]


def spoil_all(data):
    return b"PK\x03\x04 not ours"


def signed(body):
    return hashlib.sha256(body).digest() + body


def spoil_sizes(data):
    """Return a file with a right digest, one of whose arrays is of another shape."""
    return data[:32] + signed(data[64:].replace(b'["E", [', b'["E", [1', 1))


def spoil_names(data):
    return data[:32] + signed(data[64:].replace(b'"wall"', b'"well"', 1))


@pytest.mark.parametrize("spoil", [spoil_end, spoil_bit, spoil_key, spoil_all, spoil_sizes, spoil_names])
def test_a_stale_broken_or_foreign_mechanism_is_made_anew(cached, spoil):
    read, folder = cached
    first, file = read(), next(folder.glob("*.mechanism"))
    good = file.read_bytes()
    file.write_bytes(spoil(good))
    assert file.read_bytes() != good
    assert all_of(read()) == all_of(first)
    assert file.read_bytes() == good


def test_a_changed_file_is_another_mechanism(cached, tmp_path):
    read, folder = cached
    file = tmp_path / "mine.yaml"
    for rate in (RATE, RATE.replace("1.0e", "2.0e")):
        file.write_text(HEAD + SPECIES + f"reactions:\n{LIGHT}{WALL}  - {{equation: H + Cl => HCl, {rate}}}\n")
        read(file)
    assert len(list(folder.glob("*.mechanism"))) == 2


def test_a_file_that_takes_species_from_another_is_not_kept():
    assert kept.key(b"species: [{nasa_gas.yaml/species: [O2]}]", "mine.yaml", False) is None
    assert kept.key(b"species: [O2]", "mine.yaml", False) != kept.key(b"species: [N2]", "mine.yaml", False)


# ---------------------------------------------------------------- walls


def test_a_wall_that_takes_nothing_costs_nothing():
    assert wall.wall_loss(0.0, 400.0, 1e-5, 100.0, 1e4) == 0.0


def test_a_sticky_wall_is_limited_by_diffusion_and_a_slippery_one_by_hits():
    # Kind: limit.
    assert wall.wall_loss(1.0, 400.0, 1e-9, 100.0, 1e4) == approx(1e-5, rel=1e-6)
    assert wall.wall_loss(1e-9, 400.0, 1.0, 100.0, 1e4) == approx(1e-9 * 400.0 * 100.0 / 4.0, rel=1e-6)


@pytest.mark.parametrize("gap", [1e-2, 1e-4])
def test_a_narrow_ring_gap_diffuses_like_a_flat_one(gap):
    # Kind: limit. The first correction is of the order of the gap over the radius, squared.
    assert wall.annulus_eigenvalue(1.0, 1.0 + gap) == approx((np.pi / gap) ** 2, rel=gap**2)


def test_a_ring_gap_round_a_vanishing_wire_tends_to_the_tube():
    # Kind: limit; the approach is logarithmic, so only the order of the values is asked for.
    rising = [wall.annulus_eigenvalue(r1, 1.0) for r1 in (1e-30, 1e-9, 1e-3)]
    assert wall.tube_eigenvalue(1.0) < rising[0] < rising[1] < rising[2]
    assert rising[0] == approx(wall.tube_eigenvalue(1.0), rel=0.06)


@pytest.mark.parametrize("radii", [(0.0, 1.0), (1.0, 1.0), (2.0, 1.0)])
def test_radii_that_make_no_gap_are_a_programming_mistake(radii):
    with pytest.raises(ValueError, match="no ring gap"):
        wall.annulus_eigenvalue(*radii)


def test_the_sticking_of_each_surface_lies_within_its_band():
    for surface in ("glass", "fused silica", "metal"):
        datum = wall.default_sticking(surface)
        assert datum.low <= datum.value <= datum.high
        assert datum.source in library.sources()
