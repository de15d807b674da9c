"""The results file: exact round trip, stable bytes, and refusal of what is not one."""

from __future__ import annotations

import dataclasses
import json
import math
import struct
from collections.abc import Iterator
from typing import Any

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from fourfold.errors import FourfoldError
from fourfold.results import json_file, tree

finite = st.floats(allow_nan=False, allow_infinity=False)
words = st.text(st.characters(codec="utf-8"), max_size=8)
plain = st.recursive(
    st.none() | st.booleans() | st.integers(-(10**18), 10**18) | finite | words,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(words, inner, max_size=3),
    max_leaves=6,
)
st.register_type_strategy(float, finite)
st.register_type_strategy(str, words)


def trees() -> st.SearchStrategy[tree.Results]:
    """Any tree the types allow, short lists."""
    finding = st.builds(
        tree.Finding, values=st.dictionaries(words, plain, max_size=3), about=st.lists(words, max_size=2)
    )
    return st.builds(
        tree.Results,
        format=st.just(json_file.FORMAT),
        findings=st.lists(finding, max_size=2),
        variables=st.lists(st.builds(tree.Variable), max_size=2),
        tables=st.lists(st.builds(tree.FourfoldTable), max_size=2),
        term_tests=st.lists(st.builds(tree.TermTest), max_size=2),
        risk_distribution=st.lists(st.builds(tree.RiskBin), max_size=2),
        curves=st.lists(st.builds(tree.OddsRatioCurve), max_size=1),
        outcome_by_quantity=st.lists(st.builds(tree.OutcomeByQuantity), max_size=1),
    )


def doubles(value: Any) -> Iterator[bytes]:
    """Every double of the tree as its eight bytes, so that -0.0 and the last bit count."""
    if isinstance(value, float):
        yield struct.pack("<d", value)
    elif dataclasses.is_dataclass(value):
        for field in dataclasses.fields(value):
            yield from doubles(getattr(value, field.name))
    elif isinstance(value, list):
        for item in value:
            yield from doubles(item)
    elif isinstance(value, dict):
        for item in value.values():
            yield from doubles(item)


@given(trees())
@settings(
    max_examples=60,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large, HealthCheck.filter_too_much],
)
def test_round_trip_is_exact_and_bytes_are_stable(results: tree.Results) -> None:
    text = json_file.dumps(results)
    again = json_file.loads(text)
    assert again == results
    assert list(doubles(again)) == list(doubles(results))
    assert json_file.dumps(again) == text


@given(finite)
def test_every_double_comes_back_bit_for_bit(smallest: tree.Results, value: float) -> None:
    model = dataclasses.replace(smallest.model, log_likelihood=value)
    again = json_file.loads(json_file.dumps(dataclasses.replace(smallest, model=model)))
    assert again.model.log_likelihood is not None
    assert struct.pack("<d", again.model.log_likelihood) == struct.pack("<d", value)


def test_keys_stand_in_the_order_of_the_tree(smallest: tree.Results) -> None:
    found = json.loads(json_file.dumps(smallest))
    assert list(found) == [field.name for field in dataclasses.fields(tree.Results)]
    assert list(found["participants"]) == [field.name for field in dataclasses.fields(tree.Participants)]


def test_whole_number_in_the_place_of_a_double_is_written_as_a_double(smallest: tree.Results) -> None:
    analysis = dataclasses.replace(smallest.analysis, confidence=90)
    text = json_file.dumps(dataclasses.replace(smallest, analysis=analysis))
    assert '"confidence": 90.0' in text
    assert json_file.dumps(json_file.loads(text)) == text


def test_array_scalars_are_written_as_plain_numbers(smallest: tree.Results) -> None:
    values = {"share": np.float64(0.1), "count": np.int64(7)}
    finding = tree.Finding(id="x", grade="remark", section="trust", values=values, source="")
    again = json_file.loads(json_file.dumps(dataclasses.replace(smallest, findings=[finding])))
    assert again.findings[0].values == {"share": 0.1, "count": 7}
    assert [type(value) for value in again.findings[0].values.values()] == [float, int]


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_a_number_that_is_not_finite_is_refused_with_its_place(smallest: tree.Results, value: float) -> None:
    model = dataclasses.replace(smallest.model, covariance=[[1.0, value]])
    with pytest.raises(FourfoldError, match=r"model\.covariance\[0\]\[1\] is -?(nan|inf)"):
        json_file.dumps(dataclasses.replace(smallest, model=model))


@pytest.mark.parametrize(
    ("values", "message"),
    [
        ({"when": object()}, r"findings\[0\]\.values\.when holds a object"),
        ({"set": {1}}, r"holds a set"),
        ({"map": {1: "a"}}, r"findings\[0\]\.values\.map holds a int"),
        ({"half": "\ud800"}, "no file can carry"),
    ],
)
def test_what_has_no_json_form_is_refused(
    smallest: tree.Results, values: dict[str, Any], message: str
) -> None:
    finding = tree.Finding(id="x", grade="remark", section="trust", values=values, source="")
    with pytest.raises(json_file.ResultsNotWritable, match=message):
        json_file.dumps(dataclasses.replace(smallest, findings=[finding]))


def test_a_wrong_type_in_the_tree_is_not_written(smallest: tree.Results) -> None:
    participants = dataclasses.replace(smallest.participants, read=1.5)
    with pytest.raises(json_file.ResultsNotWritable, match=r"participants\.read"):
        json_file.dumps(dataclasses.replace(smallest, participants=participants))


@pytest.mark.parametrize(
    ("text", "message"),
    [
        ("", "not JSON"),
        ("title: a description", "not JSON"),
        ("[1, 2]", "not a results file"),
        ('{"type": "FeatureCollection"}', "not a results file"),
        ('{"format": 2, "study": {}}', "has format 2; this version reads format 1"),
        ('{"format": true, "study": {}}', "has format True"),
        ('{"format": "1", "study": {}}', "has format 1; this"),
        ('{"format": 1, "study": NaN}', "holds NaN"),
        ('{"format": 1, "study": 1e999}', "too large"),
        ('{"format": 1, "format": 1, "study": {}}', "gives `format` twice"),
        ("[" * 200_000, "nested more deeply|not JSON"),
        ('{"format": 1, "study": ' + "9" * 5000 + "}", "cannot be read"),
    ],
)
def test_a_foreign_file_is_refused_in_a_sentence(text: str, message: str) -> None:
    with pytest.raises(json_file.ResultsUnreadable, match=message) as caught:
        json_file.loads(text)
    assert all(problem.advice for problem in caught.value.problems)


def test_a_file_cut_short_is_refused_at_every_length(smallest: tree.Results) -> None:
    text = json_file.dumps(smallest)
    for length in range(1, len(text) - 2, 97):
        with pytest.raises(json_file.ResultsUnreadable):
            json_file.loads(text[:length])


@pytest.mark.parametrize(
    ("path", "value", "message"),
    [
        (("participants", "read"), "250", r"participants\.read: .*found 250"),
        (("participants", "read"), 250.5, r"participants\.read"),
        (("participants", "read"), True, r"participants\.read"),
        (("model", "converged"), 1, r"model\.converged"),
        (("model", "aic"), "12", r"model\.aic"),
        (("study", "title"), None, r"study\.title"),
        (("study", "colour"), "red", r"study\.colour: there is no such key"),
        (("variables",), {}, "variables"),
    ],
)
def test_wrong_types_are_refused_and_named(
    smallest: tree.Results, path: tuple[str, ...], value: Any, message: str
) -> None:
    found = json.loads(json_file.dumps(smallest))
    place = found
    for part in path[:-1]:
        place = place[part]
    place[path[-1]] = value
    with pytest.raises(json_file.ResultsUnreadable, match=message):
        json_file.loads(json.dumps(found))


def test_a_missing_key_is_named(smallest: tree.Results) -> None:
    found = json.loads(json_file.dumps(smallest))
    del found["model"]["n"]
    with pytest.raises(json_file.ResultsUnreadable, match=r"model\.n is missing"):
        json_file.loads(json.dumps(found))


def test_many_problems_are_counted_not_listed(smallest: tree.Results) -> None:
    found = json.loads(json_file.dumps(smallest))
    found["cautions"] = list(range(500))
    with pytest.raises(json_file.ResultsUnreadable) as caught:
        json_file.loads(json.dumps(found))
    assert len(caught.value.problems) == json_file.MOST_PROBLEMS + 1
    assert "490 more" in str(caught.value)


def test_too_long_a_file_is_refused(monkeypatch: pytest.MonkeyPatch, smallest: tree.Results) -> None:
    monkeypatch.setattr(json_file, "LARGEST_FILE", 100)
    with pytest.raises(json_file.ResultsUnreadable, match="longer than 100"):
        json_file.loads(json_file.dumps(smallest))
