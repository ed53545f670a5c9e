"""The printed report: numbers, folding, blocks, and the same words from a saved result."""

import dataclasses

import pytest
from conftest import CASES

from reactor.report import layout, numbers, provenance
from reactor.report.accounts import band
from reactor.report.listing import listing
from reactor.report.terminal import isomers, render
from reactor.result import Verdict, from_json, quantity


@pytest.mark.parametrize(
    ("value", "text"),
    [
        (None, "not available"),
        (0.0, "0"),
        (1.0, "1.00"),
        (52.3149, "52.3"),
        (999.6, "1000"),
        (14812.0, "14800"),
        (1e6, "1.00e+06"),
        (0.00099999, "0.00100"),
        (0.0012, "0.00120"),
        (0.000123, "1.23e-04"),
        (-7.0, "-7.00"),
    ],
)
def test_a_figure_has_three_digits_and_a_short_form(value, text):
    assert numbers.figure(value) == text


@pytest.mark.parametrize(
    ("share", "text"),
    [
        (None, "not available"),
        (0.0, "0 %"),
        (1.0, "100 %"),
        (0.5, "50.0 %"),
        (0.0464052, "4.64 %"),
        (0.953, "95.3 %"),
        (0.99998, "99.998 %"),
        (0.9933, "99.3 %"),
        (2e-5, "0.00200 %"),
        (1e-9, "below 0.001 %"),
        (-0.5, "-50.0 %"),
    ],
)
def test_a_share_shows_what_is_missing_to_all(share, text):
    assert numbers.percent({"value": share}) == text


@pytest.mark.parametrize(
    ("record", "unit", "text"),
    [
        (quantity(350.0, "K"), "degC", "76.9 degC"),
        (quantity(613.4, "Pa"), "mbar", "6.13 mbar"),
        (quantity(None, "K"), "degC", "not available"),
        (quantity(float("nan"), "K"), "K", "not available"),
        (quantity(1.2, "m"), "m", "1.20 m"),
        (quantity(13.5, "W/m2/K"), "W/m2/K", "13.5 W/m2/K"),
    ],
)
def test_a_result_is_printed_in_a_trade_unit(record, unit, text):
    assert numbers.in_unit(record, unit) == text


def test_a_power_is_in_watts_below_one_kilowatt():
    assert numbers.power(quantity(0.8035, "W")) == "0.803 W"
    assert numbers.power(quantity(38736.7, "W")) == "38.7 kW"
    assert numbers.power(quantity(None, "W")) == "not available"


def test_a_band_names_its_unit_once():
    record = quantity(0.028, "1", (0.027, 0.028, 0.029))
    assert band(record, numbers.percent) == "2.70 to 2.90 % within the band of U"
    assert band(quantity(0.028, "1"), numbers.percent) == ""


def test_isomers_are_given_by_formula():
    shares = {
        "1-C3H7Cl": quantity(0.3, "1"),
        "2-C3H7Cl": quantity(0.6, "1"),
        "1,2-C3H6Cl2": quantity(0.1, "1"),
    }
    (row,) = isomers(shares)
    assert row.split() == ["isomers", "of", "C3H7Cl,", "by", "mol", "1-", "33.3", "%", "2-", "66.7", "%"]


@pytest.mark.parametrize("words", ["x" * 200, "word " * 60, "500 degC " * 30])
def test_folded_text_stays_within_80_columns(words):
    assert max(map(len, layout.paragraph(words, "* ").splitlines())) <= 80
    assert max(map(len, layout.line(words[:30], words, "remark").splitlines())) <= 80
    assert max(map(len, layout.entry(words, words, words[:100]).splitlines())) <= 80


def test_a_number_is_not_parted_from_its_unit():
    assert "500 degC" in layout.paragraph("word " * 15 + "500 degC", "")


def test_a_long_title_and_long_keys_wrap(rated):
    long = dataclasses.replace(
        rated("lapwing"),
        title="Title " * 40,
        deviations=({"key": "feed.alkane.composition.CH4", "old": "9" * 30, "new": "8" * 60},),
        inputs=({"key": "limits.window.1,1,2,2-C2H2Cl4.source", "typed": "words " * 20, "si": ""},),
        verdicts=(Verdict("a name", "CAUTION", "figure " * 20, "limit", "why " * 40),),
    )
    text = render(long)
    assert max(map(len, text.splitlines())) <= 80
    assert text.count("Title") == 40
    assert text.count("words") == 20


def test_a_saved_result_prints_like_the_fresh_one(rated):
    for name in ("lapwing_ten", "dunnock_tank"):
        assert render(from_json(rated(name).to_json())) == render(rated(name))


def test_the_report_does_not_depend_on_the_terminal(rated, monkeypatch):
    first = render(rated("lapwing"))
    monkeypatch.setenv("COLUMNS", "200")
    monkeypatch.setenv("TERM", "dumb")
    assert render(rated("lapwing")) == first


def test_emphasis_changes_no_letter_and_no_column(rated):
    marked = render(rated("lapwing_ten"), lambda text: f"\x1b[1m{text}\x1b[0m")
    assert marked != render(rated("lapwing_ten"))
    assert marked.replace("\x1b[1m", "").replace("\x1b[0m", "") == render(rated("lapwing_ten"))


def test_the_blocks_come_in_the_order_a_reviewer_reads(rated):
    text = render(rated("dunnock_tank"))
    heads = [
        "VERDICTS",
        "KEY RESULTS",
        "PRODUCTS",
        "LIGHT",
        "HEAT",
        "EXPLOSIVE RANGE",
        "STEADY STATES",
        "STREAMS",
        "CLOSURES",
        "DESIGN BASIS",
        "HOW IT WAS FOUND",
        "CAUTIONS",
        "PROVENANCE",
    ]
    places = [text.index(f"\n{head} ") for head in heads]
    assert places == sorted(places)


def test_an_adiabatic_tube_says_so_and_prints_no_transfer_units(rated):
    text = render(rated("lapwing"))
    assert "heat removal: none: adiabatic by choice of the case" in text
    assert "0: adiabatic" in text
    assert "transfer units" not in text


def test_the_data_range_tells_rates_known_near_298_k_from_those_out_of_range(rated):
    verdict = next(v for v in rated("lapwing").verdicts if v.name == "data range")
    assert "known near 298 K only" in verdict.why
    assert "see reactor sources" in verdict.why


def test_a_steel_shell_is_judged_whatever_the_table_that_names_it(rated):
    words = {
        name: next(v for v in rated(name).verdicts if v.name == "shell material")
        for name in ("lapwing", "lapwing_ten", "fulmar")
    }
    assert (words["lapwing"].word, words["lapwing_ten"].word, words["fulmar"].word) == (
        "PASS",
        "CAUTION",
        "PASS",
    )
    assert words["lapwing"].limit == "120 degC"


def test_every_wall_material_has_a_limit_in_chlorine():
    from reactor import library
    from reactor.hazards import materials

    limits = {m.material for m in materials.material_limits()}
    assert set(library.table("heat/walls.csv").text("material")) <= limits


def test_provenance_lists_the_weak_first_and_every_rate():
    from reactor.rating import shipped

    cited, rates = shipped()
    text = provenance.relied_on(cited, rates)
    assert text.index("ESTIMATE") < text.index("COMPUTED") < text.index("SEEN") < text.index("RATE CONSTANTS")
    factors = [rate["factor"] for rate in rates if rate["factor"] > 0]
    assert factors == sorted(factors, reverse=True)
    assert all(rate["what"] in text for rate in rates)
    assert max(map(len, text.splitlines())) <= 80


def test_a_listing_shows_what_is_typed_assumed_and_looked_up():
    import reactor

    text = listing(reactor.load(CASES / "lapwing.toml", ["case.title=" + "Long " * 30, "vessel.length=2 m"]))
    assert "TYPED (" in text
    assert "ASSUMED, not supplied (" in text
    assert "TAKEN FROM THE DATA (" in text
    assert "changed on the command line: vessel.length = 2 m (file: 1.2 m)" in text
    assert max(map(len, text.splitlines())) <= 80
