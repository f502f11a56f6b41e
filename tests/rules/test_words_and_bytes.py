"""Numbers in sentences, and canonical JSON against the reference implementation of RFC 8785."""
import math
from decimal import ROUND_HALF_UP, Context, Decimal
from types import SimpleNamespace

import pytest
import rfc8785
from hypothesis import given
from hypothesis import strategies as st
from precontact_rules.authoring.units import bundled
from precontact_rules.canonical import canonical_bytes, digest
from precontact_rules.phrase import _rounded, capitalised, joined, number_text
from precontact_rules.problems import in_order, shown
from precontact_rules.readers import reader

UNITS = bundled()
UNWRITTEN = "a value that cannot be written here"


@pytest.mark.parametrize("value, unit, language, text", [
    (2497123.0, "ohm", "en", "2.497 MΩ"), (0.8889, "volt", "en", "888.9 mV"), (-0.0769, "percent", "en", "-7.69 %"), (0.00004, "ampere", "en", "40 µA"),
    (999.96, "volt", "en", "1 kV"), (12.5, "volt", "es", "12,5 V"), (0.0, "ampere", "en", "0 A"), (-0.0, "ampere", "en", "0 A"), (None, "ohm", "es", "(sin valor)"),
    (1e-10, "farad", "en", "100 pF"), (0.25, "ratio", "en", "0.25"), (3e13, "ohm", "en", "30000 GΩ"), (math.pi / 2, "radian", "en", "1.571 rad"),
    (1e307, "percent", "en", "(no value)"), (-1e307, "percent", "es", "(sin valor)"),
])
def test_numbers_as_a_person_reads_them(value, unit, language, text):
    assert number_text(value, unit, UNITS, language).replace("\u00a0", " ") == text


# Exactly representable values half-way between two four-digit numbers, with and without a fraction, and written with an exponent by Python.
@pytest.mark.parametrize("value, text", [(1000.5, "1001"), (1002.5, "1003"), (10005.0, "10010"), (100050.0, "100100"), (0.0078125, "0.007813"),
                                         (1.0005e16, "1.001e16"), (10015.0, "10020"), (-10005.0, "-10010")])
def test_ties_round_half_up_on_the_exact_value(value, text):
    assert number_text(value, "ratio", UNITS, "en") == text


@given(st.floats(allow_nan=False, allow_infinity=False).map(abs).filter(lambda x: x > 1e-300) | st.integers(1, 10 ** 9).map(float))
def test_the_quick_rounding_is_the_exact_one(value):
    exact = Decimal(value)
    rounded = exact.quantize(Decimal(1).scaleb(exact.adjusted() - 3), rounding=ROUND_HALF_UP, context=Context(prec=400, Emin=-999999, Emax=999999))
    assert _rounded(value) == (rounded.adjusted(), "".join(map(str, rounded.as_tuple().digits)).rstrip("0"))


@given(st.floats(allow_nan=False, allow_infinity=False).filter(lambda x: x == 0 or 1e-11 < abs(x) < 1e12))
def test_four_digits_are_within_half_a_unit_of_the_fourth(value):
    text = number_text(value, "ratio", UNITS, "en").replace("\u00a0", "")
    assert float(text) == pytest.approx(value, rel=5.0001e-4)


def test_lists_in_a_sentence():
    assert joined([], "en") == "" and joined(["a"], "en") == "a"
    assert joined(["a", "b", "c"], "en") == "a, b and c" and joined(["a", "b"], "es") == "a y b"


JSON = st.recursive(st.none() | st.booleans() | st.floats(allow_nan=False, allow_infinity=False) | st.integers(1 - 2 ** 53, 2 ** 53 - 1) | st.text(),
                    lambda inner: st.lists(inner, max_size=4) | st.dictionaries(st.text(), inner, max_size=4), max_leaves=12)


@given(JSON)
def test_canonical_bytes_are_rfc_8785(data):
    assert canonical_bytes(data) == rfc8785.dumps(data)


@pytest.mark.parametrize("number", [1.0, 1e21, 1e-7, 123456789012345680000.0, 5e-324, 1e16, 0.00001, 9007199254740991, -0.0, 1.7976931348623157e308])
def test_awkward_numbers(number):
    assert canonical_bytes([number]) == rfc8785.dumps([number])


def test_a_digest_does_not_depend_on_spelling():
    assert digest({"a": 1.0, "b": [2]}) == digest({"b": [2.0], "a": 1})


@pytest.mark.parametrize("value, text", [
    (1.0, "1"), (1e-7, "1e-7"), ({"b": 1, "a": [2.50, None]}, '{"a":[2.5,null],"b":1}'), (2 ** 70, "1.1805916207174113e+21"), (10 ** 400, UNWRITTEN),
    (math.inf, UNWRITTEN), ("\ud800", UNWRITTEN), ({"\ud800": 1}, UNWRITTEN), ("𝒜" * 58, f'"{"𝒜" * 58}"'), ("𝒜" * 59, f'"{"𝒜" * 58}…')])
def test_a_value_is_quoted_as_canonical_json_of_sixty_code_points(value, text):
    assert shown(value) == text


def test_a_value_too_deep_is_not_written_out():
    deep = 1
    for _ in range(32):
        deep = [deep]
    assert shown(deep).startswith("[[[") and shown([deep]) == UNWRITTEN


def test_keys_have_the_order_of_utf_16():
    assert in_order({"𝒜": 1, "\ue000": 2, "b": 3}) == ["b", "𝒜", "\ue000"]


def read(field, value):
    run = SimpleNamespace(problems=[], branch=None)
    made = reader(field, SimpleNamespace(field=field, factor=1))(value, run, "/x")
    return made if not run.problems else run.problems[0].detail


@pytest.mark.parametrize("value, made", [
    (2 ** 53 - 1, 9007199254740991.0), (2 ** 53, "9007199254740992 volt is outside the range; it must be between -9007199254740991 and 9007199254740991"),
    (2 ** 53 + 1, "9007199254740992 volt is outside the range; it must be between -9007199254740991 and 9007199254740991"),
    (-10 ** 400, "-Infinity is not a finite number; give one in volt"), (1e-9, 1e-9)])
def test_whole_numbers_reach_as_far_as_every_reader_of_json_has_them(value, made):
    assert read({"kind": "number", "unit": "volt"}, value) == made


@pytest.mark.parametrize("letter, fine", [("é", True), ("𝒜", True), ("\ufffd", True), ("\u0378", True), ("\u00ad", False), ("\u202e", False), ("\u200b", False),
                                          ("\n", False), ("\ue000", False), ("\uffff", False), ("\ud800", False)])
def test_what_a_text_may_hold_does_not_hang_on_a_unicode_version(letter, fine):
    assert (read({"kind": "text", "longest": 9}, letter) == letter) is fine


@pytest.mark.parametrize("name, sentence", [("éa", "Éa"), ("ß", "SS"), ("ſa", "Sa"), ("ƛ", "ƛ"), ("აბ", "აბ"), ("𐐨", "𐐨"), ("", "")])
def test_a_sentence_gets_the_capital_that_every_runtime_knows(name, sentence):
    assert capitalised(name) == sentence
