"""The stand-alone verifier accepts the package's certificates and refuses any one changed statement."""

from __future__ import annotations

import json
from typing import Any

import pytest

from kt_widgets import verify as verifier
from kt_widgets.algebra.fitting import fitting_certificate
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.integers import integer_smith_form
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.smith import smith_form
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.modules.isomorphism import reduced_form
from kt_widgets.text.portable import Portable
from tests.test_verify import changes

SMALL = LaurentMatrix([["t - 2", 0, "t"], [0, "2t - 1", 1]])
POLYNOMIALS = tuple(LaurentPolynomial.parse(f) for f in ("6", "2 - 4t", "0", "t^2 + 5"))
KNOTS = {"trefoil": [1, 1, 1], "figure-eight": [1, -2, 1, -2], "9 crossings": [1, -2, 1, -2, 1, -2, 1, 1, -2]}

CERTIFICATES: dict[str, Portable] = {
    "smith Q": smith_form(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]], over="Q")),
    "smith 3": smith_form(SMALL.change_ring(3)),
    "no rows": smith_form(LaurentMatrix([], over="Q", shape=(0, 2))),
    "integers": integer_smith_form(LaurentMatrix([[4, 6, 0], [2, 8, 0]])),
    "ideal": Ideal.certificate(POLYNOMIALS),
    "zero ideal": Ideal.certificate(()),
    "fitting 0": fitting_certificate(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]]), 0),
    "fitting 1": fitting_certificate(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]]), 1),
    "isomorphism": reduced_form(LaurentMatrix([["t", "1 + t"], ["-1", "t"]])),
    "isomorphism 5": reduced_form(LaurentMatrix([["t", "1 + t"], ["-1", "t"]], over=5)),
}
for name, braid in KNOTS.items():
    module = Diagram.from_braid(braid).cover().chains().homology(1)
    CERTIFICATES[f"{name} over Q"] = module.over("Q").certificate()
    CERTIFICATES[f"{name} over 2"] = module.over(2).certificate()
    CERTIFICATES[f"{name} fitting"] = fitting_certificate(module.presentation_matrix(), 0)


def document(name: str) -> Any:
    return json.loads(CERTIFICATES[name].to_json())


@pytest.mark.parametrize("name", CERTIFICATES)
def test_right_certificates_are_accepted(name):
    assert CERTIFICATES[name].verify()  # type: ignore[attr-defined]
    assert verifier.verify(document(name)) == []


@pytest.mark.parametrize("name", [name for name in CERTIFICATES if name.split()[0] not in ("9", "trefoil")])
def test_every_change_is_refused(name):
    text = json.dumps(document(name))
    accepted = []
    for said, change in changes(json.loads(text)):
        changed = json.loads(text)
        change(changed)
        if not verifier.verify(changed):
            accepted.append(said)
    assert accepted == []


def test_failures_name_the_place():
    data = document("smith Q")
    data["data"]["D"]["entries"][1][2]["coefficients"][0] = 7
    assert verifier.verify(data)[0].startswith("smith form: U matrix V[2,2]: ")


def test_a_file_of_each_kind_and_of_no_kind(tmp_path, capsys):
    for name in CERTIFICATES:
        file = tmp_path / "c.json"
        file.write_text(CERTIFICATES[name].to_json())
        assert verifier.main([str(file)]) == 0
    file.write_text(POLYNOMIALS[0].to_json())
    assert verifier.main([str(file)]) == 2
    said = capsys.readouterr().err
    assert all(kind in said for kind in verifier.CERTIFICATES)
