"""Versioned JSON: what is written is read back, and what is not ours is refused with the place."""

from __future__ import annotations

import json
from dataclasses import dataclass

import pytest

from kt_widgets.errors import KtError, LimitError, ParseError
from kt_widgets.text import portable
from kt_widgets.text.portable import Portable, parse_json, read


@dataclass(frozen=True, slots=True)
class Sample(Portable, kind="sample for a test"):
    number: int

    def to_data(self):
        return {"number": self.number}

    @classmethod
    def from_data(cls, data):
        if data["number"] < 0:
            raise KtError("negative")
        return cls(data["number"])


def test_round_trip():
    text = Sample(7).to_json()
    assert read(text) == Sample(7)
    assert type(read(text)) is Sample
    assert json.loads(text) == {
        "format": "kt_widgets",
        "version": 1,
        "kind": "sample for a test",
        "data": {"number": 7},
    }
    assert list(json.loads(text)) == sorted(json.loads(text))
    assert read(Sample(7).to_json(indent=2)) == Sample(7)


def changed(**items):
    document = json.loads(Sample(7).to_json())
    document.update(items)
    return json.dumps(document)


@pytest.mark.parametrize(
    ("text", "where"),
    [
        ("", "line 1, column 1"),
        ("{", "line 1, column 2"),
        ("[]", "format"),
        ("3", "format"),
        (changed(format="other"), "format"),
        (changed(version=2), "version"),
        (changed(version=True), "version"),
        (changed(version="1"), "version"),
        (changed(kind="no such kind"), "kind"),
        (changed(kind=["sample for a test"]), "kind"),
        (changed(data=None), "data"),
        (changed(data={}), "data"),
        (changed(data={"number": "x"}), "data"),
        ('{"a": 1, "a": 2}', ""),
        ("[NaN]", ""),
        ("[" * 100_000, ""),
        ("[" + "9" * 5000 + "]", ""),
    ],
)
def test_other_texts_are_refused(text, where):
    with pytest.raises(ParseError) as caught:
        read(text)
    assert caught.value.where == where
    assert caught.value.accepted


def test_the_errors_of_a_value_pass_through():
    with pytest.raises(KtError, match="negative"):
        read(changed(data={"number": -1}))


def test_long_texts_are_refused(monkeypatch):
    monkeypatch.setattr(portable, "MAX_JSON", 10)
    with pytest.raises(LimitError):
        parse_json("[1, 2, 3, 4, 5]")
