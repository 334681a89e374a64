"""The verifier accepts what is right, and refuses any one changed statement, or a coherent lie."""

from __future__ import annotations

import copy
import hashlib
import io
import json
import random
import subprocess
import sys
from collections.abc import Callable, Iterator
from pathlib import Path
from typing import Any

import pytest

from kt_widgets import verify as verifier
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.figures.evidence import Evidence

VERIFY = Path(verifier.__file__)

# A diagram of 9_46, derived from its Conway notation 3,3,21- (Conway 1970, recalled from memory).
NINE_46 = (
    "planar 1,12,2,13; 11,2,12,3; 3,10,4,11; 13,6,14,7; 5,14,6,15; 15,4,16,5; 18,8,1,7; 8,18,9,17; 16,10,17,9"
)
LINES = {
    "trefoil": "braid 1 1 1",
    "figure-eight": "braid 1 -2 1 -2",
    "T(2,5)": "gauss 1 -2 3 -4 5 -1 2 -3 4 -5 signs + + + + +",
    "split": "braid 1 1 strands 3",
    "circle": "planar circles 1",
    "Whitehead": "braid 1 -2 1 -2 -2",
    "dowker": "dowker 4 6 2",
}


def document(line: str) -> Any:
    """The JSON data of a diagram's dossier."""
    return json.loads(Evidence.of(Diagram.parse(line)).to_json())


def signed(data: Any) -> Any:
    """The same data with all digests made anew."""
    body = data.get("data", {})
    for name in body:
        if name in verifier.SECTIONS and "digests" in body:
            text = json.dumps(body[name], sort_keys=True, separators=(",", ":"))
            body["digests"][name] = hashlib.sha256(text.encode()).hexdigest()
    return data


@pytest.fixture(scope="module")
def trefoil() -> Any:
    return document(LINES["trefoil"])


@pytest.mark.parametrize("name", LINES)
def test_right_dossiers_are_accepted(name):
    assert verifier.verify(document(LINES[name])) == []


Change = tuple[str, Callable[[Any], None]]


def changes(value: Any, path: tuple[Any, ...] = (), thorough: bool = False) -> Iterator[Change]:
    """Every small change of a JSON value: its name, and a function that makes it in a copy."""

    def at(root: Any) -> Any:
        for step in path:
            root = root[step]
        return root

    def replacing(key: Any, new: Any) -> Callable[[Any], None]:
        return lambda root: at(root).__setitem__(key, new)

    def put(new: list[Any]) -> Callable[[Any], None]:
        return lambda root: at(root).__setitem__(slice(None), new)

    place = ".".join(map(str, path))
    if isinstance(value, list):
        for i in range(len(value)):
            yield f"{place}[{i}] dropped", put(value[:i] + value[i + 1 :])
            yield f"{place}[{i}] doubled", put(value[: i + 1] + value[i:])
            if i and value[i] != value[i - 1]:
                yield f"{place}[{i}] swapped", put([*value[: i - 1], value[i], value[i - 1], *value[i + 1 :]])
    elif isinstance(value, dict):
        for key in value:
            yield f"{place}.{key} dropped", lambda root, key=key: at(root).pop(key)
        yield f"{place}: key added", lambda root: at(root).__setitem__("extra", 0)
    for key, item in value.items() if isinstance(value, dict) else enumerate(value):
        if isinstance(item, dict | list):
            yield from changes(item, (*path, key), thorough)
            continue
        assert type(item) in (int, str), "nothing else belongs in a dossier"
        if type(item) is int:
            others: list[Any] = [item + 1, item - 1, float(item)]
            others += [-item or 7, bool(item), str(item), None] if thorough else []
        else:
            others = [item + "x", item[:-1], item.replace("1", "2", 1)]
            others += [item.upper(), item + " 1", 1, None] if thorough else []
        for other in others:
            if type(other) is not type(item) or other != item:
                yield f"{place}.{key}: {item!r} -> {other!r}", replacing(key, other)


def accepted_changes(data: Any, chosen: list[Change]) -> list[str]:
    text = json.dumps(data)
    accepted = []
    for name, change in chosen:
        changed = json.loads(text)
        change(changed)
        # As `verify`, but done at the first failure.
        if all(holds for _, _, holds in verifier.results(signed(changed))):
            accepted.append(name)
    return accepted


def statements(data: Any, thorough: bool = False) -> list[Change]:
    """The changes of everything but the digests, which `signed` makes anew."""
    return [c for c in changes(data, thorough=thorough) if not c[0].startswith("data.digests")]


def test_every_change_of_the_trefoil_is_refused(trefoil):
    everything = statements(trefoil)
    assert len(everything) > 1000
    assert accepted_changes(trefoil, everything) == []


@pytest.mark.parametrize("name", [name for name in LINES if name != "trefoil"])
def test_sampled_changes_are_refused(name):
    data = document(LINES[name])
    everything = statements(data, thorough=True)
    chosen = random.Random(name).sample(everything, min(250, len(everything)))
    assert accepted_changes(data, chosen) == []


@pytest.mark.slow
@pytest.mark.parametrize("name", LINES)
def test_every_change_is_refused(name):
    data = document(LINES[name])
    assert accepted_changes(data, statements(data, thorough=True)) == []


@pytest.mark.slow
def test_every_change_of_9_46_is_refused():
    data = document(NINE_46)
    assert accepted_changes(data, statements(data)) == []


def test_wrong_digests_are_refused(trefoil):
    for name in verifier.SECTIONS:
        changed = copy.deepcopy(trefoil)
        changed["data"]["digests"][name] = "0" * 64
        assert verifier.verify(changed) == [f"digests.{name}: not the SHA-256 of this section"]


def test_failures_name_the_place(trefoil):
    changed = copy.deepcopy(trefoil)
    changed["data"]["chains"]["boundary2"]["entries"][0][2]["coefficients"] = [1, 1]
    failures = verifier.verify(signed(changed))
    assert failures[0].startswith("chains.boundary2[1,1]: ")
    changed = copy.deepcopy(trefoil)
    changed["data"]["diagram"]["signs"][1] = True
    assert verifier.verify(signed(changed)) == ["diagram.signs[2]: an integer from -1 to 1 is expected"]


# Lies that hold together: several statements are changed so that the products still agree.


def monomial(exponent: int, coefficient: int = 1) -> dict[str, Any]:
    return {"lowest": exponent, "coefficients": [coefficient]}


def refused(data: Any, *places: str) -> bool:
    failures = verifier.verify(signed(data))
    return bool(failures) and all(any(f.startswith(place) for f in failures) for place in places)


def times_unit(f: dict[str, Any], shift: int) -> None:
    if f["coefficients"]:
        f["lowest"] += shift


def test_a_unit_multiple_of_an_ideal_is_refused(trefoil):
    ideal = trefoil["data"]["ideals"]["alexander"][0]
    changed = copy.deepcopy(trefoil)
    record = changed["data"]["ideals"]["alexander"][0]
    for f in record["basis"]:
        times_unit(f, 1)
    for _, _, cofactors in record["minors"]:
        for f in cofactors:
            times_unit(f, -1)
    for terms in record["from_minors"]:
        for _, _, f in terms:
            times_unit(f, 1)
    assert record != ideal
    assert refused(changed, "ideals.alexander[1].basis[1]")


def test_a_unit_multiple_of_the_polynomial_is_refused(trefoil):
    changed = copy.deepcopy(trefoil)
    times_unit(changed["data"]["alexander_polynomial"], 1)
    assert refused(changed, "alexander_polynomial")


def test_a_smith_form_that_is_not_monic_is_refused(trefoil):
    changed = copy.deepcopy(trefoil)
    section = changed["data"]["fields"][3]
    assert section["ring"] == 5
    last = len(section["diagonal"])
    while not section["diagonal"][last - 1]["coefficients"]:
        last -= 1
    for f in [section["diagonal"][last - 1], *section["invariant_factors"][:1]]:
        f["coefficients"] = [2 * c % 5 for c in f["coefficients"]]
    for i, _, f in section["U"]["entries"]:
        if i == last:
            f["coefficients"] = [2 * c % 5 for c in f["coefficients"]]
    for matrix, column in ((section["U_inverse"], last), (section["cycles"], 1)):
        for _, j, f in matrix["entries"]:
            if j == column:
                f["coefficients"] = [3 * c % 5 for c in f["coefficients"]]
    failures = verifier.verify(signed(changed))
    assert failures == [f"fields[5].diagonal[{last}]: monic with lowest exponent 0 is expected"]


def test_the_evidence_of_another_diagram_is_refused(trefoil):
    other = document("braid -1 -1 -1")
    for section in verifier.SECTIONS:
        if other["data"][section] != trefoil["data"][section]:
            changed = copy.deepcopy(trefoil)
            changed["data"][section] = other["data"][section]
            assert verifier.verify(signed(changed)), section


def test_a_shorter_list_of_ideals_is_refused(trefoil):
    changed = copy.deepcopy(trefoil)
    changed["data"]["ideals"]["alexander"].pop()
    assert refused(changed, "ideals.alexander")


@pytest.mark.parametrize(
    ("basis", "said"),
    [
        ([{0: 1, 1: 1}, {0: 3}], "degrees rise"),
        ([{0: 3}, {0: 4, 1: 1}], "is not reduced"),
        ([{0: 6}, {0: 1, 1: 4}], "divides the one before"),
        ([{0: 3}, {0: -1, 1: -1}], "positive leading"),
        ([{0: 4}, {0: 2, 1: 2}, {0: 2, 2: 1}], "does not reduce to 0"),
        ([{0: 2}, {1: 1}], "lowest exponent 0"),
        ([{0: 4}, {0: 2, 1: 1}], "not invertible"),
    ],
)
def test_bases_that_are_not_canonical_are_refused(basis, said):
    with pytest.raises(verifier.Refusal, match=said):
        verifier._canonical(basis, "here")


@pytest.mark.parametrize(
    "basis", [[], [{0: 1}], [{0: 2, 1: -5, 2: 2}], [{0: 3}, {0: 1, 1: 1}], [{0: 2}, {0: 1, 1: 1, 2: 1}]]
)
def test_canonical_bases_are_accepted(basis):
    # (3, 1 + t) and (2, 1 + t + t^2) are E_2 of 9_46 and of 10_140.
    verifier._canonical(basis, "here")


def test_division_and_printing():
    assert verifier._rest({0: 1, 3: 1}, {0: 1, 1: 1}, 0) == {}
    assert verifier._rest({0: 1, 2: 1}, {0: 1, 1: 1}, 0) == {0: 2}
    assert verifier._rest({0: 1, 2: 1}, {0: 1, 1: 1}, 2) == {}
    assert verifier._show({-1: -1, 0: 3, 2: -2}) == "-t^-1 + 3 - 2t^2"
    assert verifier._show({}) == "0"


# The program


def run(*arguments: object) -> subprocess.CompletedProcess[str]:
    # -I: no packages of this environment but the standard library's, no current folder.
    return subprocess.run(
        [sys.executable, "-I", "-S", *map(str, arguments)], capture_output=True, text=True, timeout=120
    )


def test_the_copy_runs_alone(tmp_path, trefoil):
    program = tmp_path / "verify.py"
    program.write_bytes(VERIFY.read_bytes())
    good = tmp_path / "dossier.json"
    good.write_text(json.dumps(trefoil))
    answer = run(program, good)
    assert answer.returncode == 0, answer.stdout
    assert answer.stdout.splitlines()[-1].endswith("checks hold")
    assert all(line.startswith("holds  ") for line in answer.stdout.splitlines()[:-1])
    changed = copy.deepcopy(trefoil)
    changed["data"]["homology"]["h0"] = monomial(0)
    good.write_text(json.dumps(signed(changed)))
    answer = run(program, good)
    assert answer.returncode == 1
    assert "FAILS  homology: homology: boundary1 kernel[1,1]" in answer.stdout


@pytest.mark.parametrize(
    "text",
    ["", "{", '{"a": 1, "a": 2}', "NaN", "[" * 100000, "1" * 5000, '{"a": Infinity}', "\ufeff{}"],
    ids=["empty", "cut", "doubled", "nan", "deep", "long", "infinity", "mark"],
)
def test_unreadable_files_give_exit_code_2(tmp_path, text):
    file = tmp_path / "dossier.json"
    file.write_text(text)
    answer = run(VERIFY, file)
    assert (answer.returncode, answer.stdout) == (2, "")
    assert "cannot be read" in answer.stderr


def test_missing_files_and_arguments_give_exit_code_2(tmp_path):
    assert run(VERIFY, tmp_path / "nothing.json").returncode == 2
    assert run(VERIFY).returncode == 2
    assert run(VERIFY, "--help").returncode == 2


def test_what_python_does_not_read_or_a_terminal_print_is_refused(tmp_path, monkeypatch, trefoil):
    long, typed = copy.deepcopy(trefoil), copy.deepcopy(trefoil)
    long["data"]["fields"][0]["U"]["entries"][0][2]["coefficients"][0] = "1" * 5000 + "/2"
    assert verifier.verify(signed(long))[0].startswith("fields[1].U[1,1].coefficients[1]: ")
    typed["data"]["subject"]["line"] = "braid 1 1 é"
    file = tmp_path / "dossier.json"
    file.write_text(json.dumps(signed(typed)))
    printed = io.BytesIO()
    monkeypatch.setattr(sys, "stdout", io.TextIOWrapper(printed, encoding="ascii", write_through=True))
    assert verifier.main([str(file)]) == 1
    assert rb"FAILS  subject: subject.line: '1 1 \xe9' is no list of numbers" in printed.getvalue()


def test_long_polynomials_are_refused_at_once(trefoil):
    changed = copy.deepcopy(trefoil)
    ones = {"lowest": 0, "coefficients": [1] * 5000}
    places = [[i, j, ones] for i in (1, 2, 3) for j in (1, 2, 3)]
    changed["data"]["homology"]["kernel"]["entries"] = places
    changed["data"]["homology"]["kernel_inverse"]["entries"] = places
    (said, *_) = verifier.verify(signed(changed))
    assert said == (
        "homology: cannot be checked (OverflowError: 675000000 products of coefficients, "
        "at most 50000000 are worked out)"
    )


def test_long_relators_are_refused_at_once(trefoil):
    changed = copy.deepcopy(trefoil)
    changed["data"]["presentation"]["relators"][0] = [["a", 1]] * 100_000
    assert verifier.verify(signed(changed)) == [
        "presentation.relators[1]: 100000 items, where 4 are expected"
    ]


@pytest.mark.parametrize("code", [[4, 6, 2], [4, 6, 2, 10, 12, 8], [4, 8, 12, 10, 2, 6]])
def test_a_dowker_code_stands_for_the_image_with_positive_first_crossings(code):
    # The code does not tell the reflected diagram apart, what it is read as does.
    d = Diagram.from_dowker(code)
    line = {"line": d.source}
    assert verifier.verify(document(d.source)) == []
    reflected = Diagram([(a, d, c, b) for a, b, c, d in d.slots], [-sign for sign in d.signs])
    changed = document(str(reflected))
    changed["data"]["subject"] = line
    (said,) = verifier.verify(signed(changed))
    assert said.startswith("subject.line: the code leaves mirror images open, but crossing 1 is to be")


@pytest.mark.parametrize("value", [0, "text", [], {}, None, [[]], {"data": []}])
def test_other_json_fails(tmp_path, value):
    assert len(verifier.verify(value)) == 1
    file = tmp_path / "dossier.json"
    file.write_text(json.dumps(value))
    assert run(VERIFY, file).returncode == 1
