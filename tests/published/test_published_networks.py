"""Substitution networks against published splits, totals, property tables, and other codes for structures and names."""

import itertools
import shutil
from functools import cache

import cantera as ct
import numpy as np
import pytest

from reactor import library
from reactor.chemistry.network import enumerate as made
from reactor.chemistry.network import names, prune, rates, thermo, tree, volatility, write
from reactor.chemistry.network.slate import Slate

approx = pytest.approx


@cache
def split(structure, T, measured=True):
    """Return {name: per cent} of the first products of a molecule; `measured`: overrides before the rule."""
    code = tree.molecule(structure).code
    mol = tree.molecule(code)
    if measured:
        k = {names.name(step.product): step.rate(T) for step in made.substitutions(code)}
    else:
        k = {names.name(tree.with_chlorine(tree.radical(code, at))): rates.rule(code, at, n)(T) for at, n in mol.sites()}
    return {name: 100 * value / sum(k.values()) for name, value in k.items()}


# ---------------------------------------------------------------- splits, all in per cent


@pytest.mark.parametrize("measured", [True, False])
@pytest.mark.parametrize(("structure", "T", "expected", "within"), [
    # Kind of evidence: measured. The source and its status stand behind each.
    ("CCC", 298.0, {"1-chloropropane": 44.1}, 2.0),  # iupac, seen
    ("CCC", 195.0, {"1-chloropropane": 40.0}, 3.0),  # choi2006, seen
    ("CCC", 423.0, {"1-chloropropane": 49.0}, 3.0),  # sarzynski2002, seen
    ("CCC", 298.0, {"1-chloropropane": 45.0, "2-chloropropane": 55.0}, 3.0),  # morrison, memory
    ("CCCC", 298.0, {"1-chlorobutane": 29.3}, 2.0),  # iupac_butane and sarzynski2002, seen
    ("CCCC", 298.0, {"1-chlorobutane": 28.0, "2-chlorobutane": 72.0}, 3.0),  # morrison, memory
    ("CC(C)C", 298.0, {"1-chloro-2-methylpropane": 62.0}, 5.0),  # choi2006, seen
    ("CC(C)C", 298.0, {"1-chloro-2-methylpropane": 65.3}, 5.0),  # sarzynski2002, seen
    ("CC(C)C", 298.0, {"1-chloro-2-methylpropane": 64.0, "2-chloro-2-methylpropane": 36.0}, 4.0),  # morrison, memory
    ("CCCCC", 298.0, {"1-chloropentane": 24.0, "2-chloropentane": 49.0, "3-chloropentane": 27.0}, 5.0),  # recalled, memory
    ("CCC(C)C", 573.0, {"1-chloro-2-methylbutane": 33.5, "2-chloro-2-methylbutane": 22.0, "2-chloro-3-methylbutane": 28.0,
                        "1-chloro-3-methylbutane": 16.5}, 4.0),  # morrison, memory; the rule is extrapolated above 470 K
    ("CCCCCl", 308.0, {"1,1-dichlorobutane": 9.9, "1,2-dichlorobutane": 25.9, "1,3-dichlorobutane": 45.7,
                       "1,4-dichlorobutane": 18.5}, 3.0),  # fredricks1960, memory; the factors were fitted to it
])  # fmt: skip
def test_isomers_come_as_published(structure, T, expected, within, measured):
    found = split(structure, T, measured)
    for name, value in expected.items():
        assert found[name] == approx(value, abs=within)


def test_isobutane_at_195_kelvin_misses_its_measurement_and_lies_outside_the_range_of_the_rate():
    # Source: choi2006, 49 +- 4 % primary at 195 K, seen. The rate is measured from 295 K up; extrapolated it gives 54 %.
    # Kind: measured; recorded as a miss.
    assert split("CC(C)C", 195.0)["1-chloro-2-methylpropane"] == approx(54.3, abs=0.5)
    assert next(s for s in made.substitutions(tree.molecule("CC(C)C").code)).rate.low == 295.0


def test_propane_at_298_kelvin_lies_between_two_seen_measurements_that_disagree():
    # Source: choi2006, 48 +- 3 % 1-chloropropane, seen; the evaluated rates used here give 44 %, as iupac and jpl do
    # (43 to 45, seen). Kind: measured; recorded as a miss of the first.
    found = split("CCC", 298.0)["1-chloropropane"]
    assert found == approx(44.1, abs=0.3)
    assert found < 48.0 - 3.0


def test_dimethylbutane_in_the_gas_misses_the_split_that_was_measured_in_the_liquid():
    # Source: Russell 1958, neat liquid, 60 +- 5 % primary (memory); a gas value was not found. Kind: measured, other
    # phase; recorded as a miss by a hair.
    found = split("CC(C)C(C)C", 298.0)["1-chloro-2,3-dimethylbutane"]
    assert found == approx(54.9, abs=0.3)
    assert found < 60.0 - 5.0


@pytest.mark.parametrize(("T", "percent", "within"), [(298.0, 81.5, 3.0), (473.0, 73.0, 4.0)])
def test_chloroethane_gives_dichlorides_as_published(T, percent, within):
    # Source: sarzynski2012, seen. Kind: measured.
    assert split("CCCl", T)["1,1-dichloroethane"] == approx(percent, abs=within)


def test_dichloropropanes_of_a_slate_come_as_in_an_independent_model():
    # Source: independent model of the same rules, 313 K, 8:1, 90 % of the chlorine: 12.7, 53.0, 22.6, 11.7 % (computed).
    # The small mechanism's own estimates for the chloropropanes stand here in place of the rule: within 2 %.
    propane = names.alkane("propane")
    slate = Slate(made.network((propane,), 3), {propane: 1.0}, 313.0)
    x, _ = slate.at_uptake(0.9 / 8.0)
    two = {names.name(c): n for c, n in zip(slate.codes, x, strict=True) if slate.chlorine[slate.codes.index(c)] == 2}
    expected = {"1,1-": 12.7, "1,2-": 53.0, "1,3-": 22.6, "2,2-": 11.7}
    for place, percent in expected.items():
        assert 100 * two[place + "dichloropropane"] / sum(two.values()) == approx(percent, abs=2.0)


@pytest.mark.parametrize(("structure", "k", "percent"), [
    ("CC", 5.75e-11, 10), ("CCC", 1.39e-10, 10), ("CCCC", 2.06e-10, 10), ("CC(C)C", 1.43e-10, 10), ("CCCCC", 2.8e-10, 10),
    ("CCC(C)C", 2.2e-10, 10), ("CC(C)(C)C", 1.11e-10, 10), ("CCCCCC", 3.4e-10, 10), ("CCCC(C)C", 2.9e-10, 10),
    ("CCC(C)CC", 2.8e-10, 10), ("CCC(C)(C)C", 1.71e-10, 10), ("CC(C)C(C)C", 2.3e-10, 10),
])  # fmt: skip
def test_totals_of_alkanes_by_rule_are_the_evaluated_ones(structure, k, percent):
    # Source: evaluated totals at 298 K in cm3/molecule/s: jpl2019, iupac and a table of a public box model after the MCM,
    # seen; stated to 6 to 10 %. Kind: measured (twelve of them were fitted to; three numbers carry all).
    code = tree.molecule(structure).code
    total = sum(rates.rule(code, at, n)(298.0) for at, n in tree.molecule(code).sites())
    assert total == approx(k, rel=percent / 100)


# ---------------------------------------------------------------- slate against the full chemistry


@pytest.mark.parametrize(("feed", "T", "ratio", "within"), [
    ("propane", 353.0, 8.0, 0.01), ("isobutane", 353.0, 8.0, 0.01), ("ethane", 353.0, 6.0, 0.01),
    ("methane", 353.0, 2.0, 0.10),  # CH3 + HCl goes back to methane, which a slate leaves out and says so
])  # fmt: skip
def test_a_slate_is_what_the_full_mechanism_makes_in_cantera(feed, T, ratio, within, tmp_path):
    # Kind: limit: all light, radicals, terminations and reverse steps in, isothermal, J 1e-3 1/s, to 90 % of the chlorine.
    code = names.alkane(feed)
    net = made.network((code,), 4 if feed == "methane" else 3)
    path = tmp_path / "network.yaml"
    path.write_text(write.text(prune.prune(net, {code: 1.0}, ratio, (T, T), 1e-12), feed), encoding="utf-8")
    gas = ct.Solution(str(path), "gas-lit")
    roles = {r.input_data.get("role"): i for i, r in enumerate(gas.reactions())}
    gas.set_multiplier(1e-3, roles["photolysis"])
    gas.set_multiplier(0.0, roles["wall"])
    gas.TPX = T, 1.1e5, {names.key(code): ratio, "Cl2": 1.0}
    vessel = ct.IdealGasConstPressureReactor(gas, energy="off", clone=False)
    run = ct.ReactorNet([vessel])
    run.rtol, run.atol = 1e-8, 1e-20
    start = gas["Cl2"].X[0]
    while gas["Cl2"].X[0] > 0.1 * start:
        run.step()
        assert run.time < 1e4
    slate = Slate(net, {code: 1.0}, T)
    there = np.array([gas[key].X[0] for key in slate.keys])
    there /= there.sum()
    here, _ = slate.at_uptake(float(there @ slate.chlorine))
    plenty = here > 1e-5
    assert there[plenty] == approx(here[plenty], rel=within)


def test_oxygen_makes_phosgene_and_the_chain_goes_on_in_chloroform(tmp_path):
    # Kind: limit: with CCl3O2 as an end 1000 ppm of oxygen stop the chain for the first 0.3 s; carried on, it runs as
    # without oxygen or faster, and every O2 gives at most two COCl2.
    code = names.alkane("methane")
    net = made.network((code,), 4)
    path = tmp_path / "network.yaml"
    path.write_text(write.text(prune.prune(net, {code: 1.0}, 1.0, (353.0, 353.0), 1e-12), "methane"), encoding="utf-8")

    def run(oxygen, carried=True):
        gas = ct.Solution(str(path), "gas-lit")
        roles = {r.input_data.get("role"): i for i, r in enumerate(gas.reactions())}
        gas.set_multiplier(1e-3, roles["photolysis"])
        gas.set_multiplier(0.0, roles["wall"])
        for i, reaction in enumerate(gas.reactions()):
            if not carried and ("CCl3O2" in reaction.reactants or "CHCl2O2" in reaction.reactants):
                gas.set_multiplier(0.0, i)
        gas.TPX = 353.0, 1.1e5, {"CHCl3": 1.0, "Cl2": 0.5, "O2": oxygen}
        start = gas.X
        vessel = ct.IdealGasConstPressureReactor(gas, energy="off", clone=False)
        net = ct.ReactorNet([vessel])
        net.rtol, net.atol = 1e-8, 1e-20
        net.advance(0.3)
        return dict(zip(gas.species_names, gas.X, strict=True)), dict(zip(gas.species_names, start, strict=True))

    (with_ends, _), (carried, fed), (clean, _) = run(1e-3, carried=False), run(1e-3), run(0.0)
    assert with_ends["HCl"] < 0.1 * clean["HCl"]
    assert carried["HCl"] > 0.9 * clean["HCl"]
    assert 1.5 * fed["O2"] < carried["COCl2"] <= 2.0 * fed["O2"]
    assert clean["COCl2"] == approx(0.0, abs=1e-15)


# ---------------------------------------------------------------- properties against packages


def test_groups_predict_enthalpies_and_heat_capacities_of_the_tables_within_the_stated_error():
    # Source: the tables' own values (chemicals 1.5.2, thermo 0.6.1, seen); stated mean errors 2.5 kJ/mol and about
    # 1 J/mol/K. Kind: measured (the groups were fitted to them).
    H = library.table("networks/enthalpy.csv")
    gaps = [thermo.by_groups(tree.molecule(s).code)[0] - h
            for s, h in zip(H.text("structure"), H.si("enthalpy"), strict=True)]  # fmt: skip
    assert np.mean(np.abs(gaps)) < 2.55e3
    heat = library.table("networks/heat_capacity.csv")
    cp = np.array([heat.si(f"cp_{T:.0f}") for T in thermo.GRID]).T
    own = np.array([thermo.by_groups(tree.molecule(s).code)[2] for s in heat.text("structure")])
    known = np.isfinite(cp[:, 1])
    assert np.mean(np.abs(own - cp)[known, 1:5]) < 1.0
    assert np.nanmean(np.abs(own - cp)[:, 6:]) < 2.5


def test_listed_properties_are_those_of_the_package():
    # Source: chemicals 1.5.2, method in the column `place`. Kind: measured (transcription).
    chemicals = pytest.importorskip("chemicals")
    for row in library.table("networks/boiling.csv").rows:
        method, _, number = row["place"].partition(", CAS ")
        assert chemicals.Tb(number, method=method) == approx(float(row["temperature [K]"]), abs=0.006)
    for row in library.table("networks/enthalpy.csv").rows:
        method, _, number = row["place"].partition(", CAS ")
        found = chemicals.Hfg(number, method=method)
        assert found / 1e3 == approx(float(row["enthalpy [kJ/mol]"]), abs=0.006), row


def test_boiling_points_by_groups_are_within_the_stated_error():
    # Stated: mean error 5.1 K on all chlorides listed, 4.9 K on the 81 fitted to. Kind: measured (fitted).
    rows = library.table("networks/boiling.csv")
    pairs = [(tree.molecule(s).code, T) for s, T in zip(rows.text("structure"), rows.si("temperature"), strict=True)]
    gaps = [abs(volatility.boiling_by_groups(code) - T) for code, T in pairs
            if tree.molecule(code).carbons > 1 and sum(tree.molecule(code).chlorine)]  # fmt: skip
    assert np.mean(gaps) < 5.15


def test_vapour_pressures_are_lee_and_keslers():
    # Source: chemicals 1.5.2, Lee_Kesler and LK_omega. Kind: worked.
    chemicals = pytest.importorskip("chemicals")
    for structure in ("CCCCl", "CC(Cl)CCl", "ClCC(Cl)CCl", "CC(C)CCl"):
        code = tree.molecule(structure).code
        found = volatility.volatility(code)
        omega = chemicals.LK_omega(found.boiling, found.critical_temperature, found.critical_pressure)
        P = chemicals.Lee_Kesler(310.0, found.critical_temperature, found.critical_pressure, omega)
        assert volatility.vapour_pressure(code, 310.0) == approx(P, rel=1e-3)


def test_critical_constants_are_jobacks():
    # Source: thermo 0.6.1, Joback. Kind: worked: the group numbers typed here against those of the package.
    joback = pytest.importorskip("thermo.group_contribution.joback")
    table = {group.group: group for group in joback.JOBACK_GROUPS_LIST}
    for H, name in ((3, "-CH3"), (2, "-CH2-"), (1, ">CH-"), (0, ">C<")):
        assert volatility.JOBACK[H] == approx((table[name].Tc, table[name].Pc, table[name].Vc))
    for H, name in ((2, "=CH2"), (1, "=CH-"), (0, "=C<")):
        assert volatility.UNSATURATED[H] == approx((table[name].Tc, table[name].Pc, table[name].Vc))
    assert approx((table["-Cl"].Tc, table["-Cl"].Pc, table["-Cl"].Vc)) == volatility.CHLORINE


def test_alkenes_from_the_balance_of_chlorine_agree_with_tables():
    # Source: nasa1993: enthalpies of propene and the butenes, seen. Kind: measured; stated 10 kJ/mol.
    for structure in ("CC=C", "C=CCC", "CC=CC", "C=C(C)C"):
        code = tree.molecule(structure).code
        assert approx(thermo.thermo(code).H, abs=10e3) == thermo._alkene(code).H


# ---------------------------------------------------------------- structures and names against other codes


@cache
def many():
    """Return some 1300 structures: chlorides, radicals, alkenes and couplings of all skeletons C1 to C6."""
    found = set()
    for carbons in range(1, 7):
        for alkane in tree.alkanes(carbons):
            net = made.network((alkane,), 4 if carbons < 6 else 2)
            found |= {*net.molecules, *net.radicals}
            for code in net.radicals:
                found |= {*tree.without_chlorine(code), *tree.without_hydrogen(code)}
    few = sorted(code for code in found if tree.molecule(code).free is not None and tree.molecule(code).carbons <= 4
                 and sum(tree.molecule(code).chlorine) <= 1)  # fmt: skip
    return sorted(found | {tree.coupled(a, b) for a, b in itertools.combinations_with_replacement(few, 2)})


def test_rdkit_tells_the_same_structures_apart():
    # Kind: worked, against RDKit's canonical SMILES.
    chem = pytest.importorskip("rdkit.Chem")
    other = [chem.MolToSmiles(chem.MolFromSmiles(code)) for code in many()]
    assert len(set(other)) == len(many()) > 1300


def test_networkx_tells_the_same_structures_apart():
    # Kind: worked, against networkx's isomorphism of labelled trees, all pairs with one formula and one hash.
    nx = pytest.importorskip("networkx")
    groups: dict = {}
    for code in many()[::4]:
        mol = tree.molecule(code)
        graph = nx.Graph()
        for i in range(mol.carbons):
            graph.add_node(i, kind=f"{mol.chlorine[i]} {i == mol.free} {mol.double is not None and i in mol.double}")
        graph.add_edges_from(mol.bonds)
        kinds = tuple(sorted(graph.nodes[i]["kind"] for i in graph))
        groups.setdefault((mol.formula, kinds, tuple(sorted(d for _, d in graph.degree()))), []).append(graph)
    assert sum(map(len, groups.values())) > 300
    for graphs in groups.values():
        for one, other in itertools.combinations(graphs, 2):
            assert not nx.is_isomorphic(one, other, node_match=lambda a, b: a["kind"] == b["kind"])


def test_a_name_parser_reads_back_every_name():
    # Kind: worked, against OPSIN.
    py2opsin = pytest.importorskip("py2opsin").py2opsin
    chem = pytest.importorskip("rdkit.Chem")
    if shutil.which("java") is None:
        pytest.skip("OPSIN needs java")
    spoken = [names.name(code) for code in many()]
    read = py2opsin(spoken, output_format="SMILES", allow_radicals=True)
    for code, name, back in zip(many(), spoken, read, strict=True):
        assert back, name
        assert chem.MolToSmiles(chem.MolFromSmiles(back)) == chem.MolToSmiles(chem.MolFromSmiles(code)), name
