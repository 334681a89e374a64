"""Values of every room travel as JSON and come back equal; what is wrong is refused."""

from __future__ import annotations

import json
import subprocess
import sys
from pathlib import Path

import pytest

import kt_widgets
from kt_widgets import exchange
from kt_widgets.algebra.fitting import fitting_certificate
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import smith_form
from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import KtError, ParseError
from kt_widgets.exchange import from_json
from kt_widgets.figures.evidence import Evidence
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.modules.comparison import compare
from kt_widgets.modules.module import Module

TREFOIL = Diagram.from_braid([1, 1, 1])
MATRIX = LaurentMatrix([["t - 2", 0], [0, "2t - 1"]])
VALUES = [
    LaurentPolynomial.parse("t^-1 - 3 + t"),
    LaurentPolynomial.parse("1/2 t", over="Q"),
    MATRIX,
    Ideal(["3", "1 + t"]),
    Ideal.certificate(["2 - t", "1 - 2t"]),
    fitting_certificate(MATRIX, 1),
    smith_form(MATRIX.change_ring("Q")),
    compare(Module(MATRIX), Module.from_matrix([["2"]])).witness,
    Module.from_matrix([["1 - t + t^2"]]).operator(),
    Module(MATRIX).cyclicity(),
    TREFOIL.cover().branched_cover(2).certificate(),
    Word.parse("a b^-1 a"),
    Presentation.parse("< a, b | a b a = b a b >"),
    Cover(Presentation.parse("< x, y | x^3 = y^2 >")),
    TREFOIL.cover().chains(),
    TREFOIL,
    Evidence.of(TREFOIL),
]


@pytest.mark.parametrize("value", VALUES, ids=[type(value).__name__ for value in VALUES])
def test_values_come_back_equal(value):
    again = from_json(value.to_json())
    assert type(again) is type(value)
    assert again == value
    assert again.to_json() == value.to_json()


def test_a_module_comes_back_with_its_presentation():
    module = TREFOIL.cover().chains().homology(1)
    again = from_json(module.to_json())
    assert again.presentation_matrix() == module.presentation_matrix()
    assert again.to_json() == module.to_json()


def test_every_kind_is_known_to_exchange():
    """No class of the package travels as JSON without `from_json` knowing it."""
    kinds = set()
    for path in Path(kt_widgets.__file__).parent.rglob("*.py"):
        if path.name not in ("portable.py", "evidence.py"):
            kinds |= {
                line.split('"')[1] for line in path.read_text().splitlines() if "(Portable, kind=" in line
            }
    assert len(kinds) > 8
    code = (
        "import sys, kt_widgets.exchange\nfrom kt_widgets.text import portable\n"
        "print('\\n'.join(sorted(portable._kinds)))"
    )
    known = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert kinds | {"dossier"} <= set(known.stdout.splitlines())


def test_the_public_name_is_this_function():
    assert kt_widgets.from_json is exchange.from_json


@pytest.mark.parametrize(
    ("change", "said"),
    [
        ({"kind": "knotted thing"}, "kind"),
        ({"version": 2}, "version"),
        ({"version": True}, "version"),
        ({"format": "other"}, "format"),
        ({"data": None}, "data"),
        ({"data": {"slots": [[1, 2]], "signs": [1], "circles": 0, "source": ""}}, "crossing 1"),
    ],
)
def test_wrong_documents_are_refused(change, said):
    document = json.loads(TREFOIL.to_json())
    with pytest.raises(KtError, match=said):
        from_json(json.dumps({**document, **change}))


@pytest.mark.parametrize("text", ["", "[]", "{", "nonsense", '{"a": 1, "a": 1}'])
def test_text_that_is_not_a_document_is_refused(text):
    with pytest.raises(ParseError):
        from_json(text)
