"""Dossiers: what the folder holds, that it is the same each time, and that it stands alone."""

from __future__ import annotations

import hashlib
import json
import os
import random
import re
import shutil
import subprocess
import sys
from html.parser import HTMLParser
from pathlib import Path
from typing import Any

import pytest

import kt_widgets
from kt_widgets import verify as verifier
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import CertificateError, KtError, LimitError
from kt_widgets.exchange import from_json
from kt_widgets.figures.dossier_folder import dossier, page
from kt_widgets.figures.evidence import Evidence
from kt_widgets.figures.typeset import latex_document

ROOT = Path(kt_widgets.__file__).parent.parent
NAMES = [
    *("dossier.html", "dossier.json", "verify.py"),
    *("diagram.svg", "diagram.pdf", "cover.svg", "cover.pdf", "formulas.tex"),
]

# Two knots in four notations. 9_46 from a diagram drawn after its Conway notation 3,3,21- (Conway 1970,
# recalled from memory); its braid was found from the planar diagram code. T(2,5) is right-handed.
KNOTS = {
    "9_46": [
        "dowker 8 12 -16 -14 18 4 2 -6 10",
        "planar 1,12,2,13; 11,2,12,3; 3,10,4,11; 13,6,14,7; 5,14,6,15; 15,4,16,5; 18,8,1,7; 8,18,9,17; "
        "16,10,17,9",
        "gauss -1 2 -3 6 -5 4 7 -8 9 3 -2 1 -4 5 -6 -9 8 -7 signs - - - - - - + + +",
        "braid -4 -7 -2 5 -6 7 -4 -5 3 7 3 -5 -6 -1 2 1 -3 -4 3 2 -5 -1 -4 3 -2 1 6",
    ],
    "T(2,5)": [
        "dowker 6 8 10 2 4",
        "planar 6,2,7,1; 2,8,3,7; 8,4,9,3; 4,10,5,9; 10,6,1,5",
        "gauss 1 -2 3 -4 5 -1 2 -3 4 -5 signs + + + + +",
        "braid 1 1 1 1 1",
    ],
}

# Alexander polynomials: D. Rolfsen, Knots and Links (1976), App. C, recalled from memory. E_2 of 9_46: R. H.
# Crowell, R. H. Fox, Introduction to Knot Theory (1963), from memory; a torus knot's module is cyclic.
POLYNOMIAL = {
    "9_46": {"lowest": -1, "coefficients": [-2, 5, -2]},
    "T(2,5)": {"lowest": -2, "coefficients": [1, -1, 1, -1, 1]},
}
SECOND_IDEAL = {
    "9_46": [{"lowest": 0, "coefficients": [3]}, {"lowest": 0, "coefficients": [1, 1]}],
    "T(2,5)": [{"lowest": 0, "coefficients": [1]}],
}
CASES = [(name, line) for name, lines in KNOTS.items() for line in lines]


@pytest.mark.parametrize(("name", "line"), CASES, ids=[f"{n} {line.split()[0]}" for n, line in CASES])
def test_two_knots_in_four_notations(tmp_path, name, line):
    folder = tmp_path / "dossier"
    written = dossier(Diagram.parse(line), folder)
    assert [path.name for path in written] == NAMES
    assert {path.name for path in folder.iterdir()} == set(NAMES)
    data = json.loads((folder / "dossier.json").read_text())["data"]
    assert data["subject"]["line"] == line
    assert data["alexander_polynomial"] == POLYNOMIAL[name]
    assert data["ideals"]["alexander"][1]["basis"] == SECOND_IDEAL[name]
    assert (folder / "verify.py").read_bytes() == Path(verifier.__file__).read_bytes()
    answer = subprocess.run(
        [sys.executable, "-I", "-S", "verify.py", "dossier.json"], cwd=folder, capture_output=True, text=True
    )
    assert answer.returncode == 0, answer.stdout
    changed = (folder / "dossier.json").read_text().replace('"lowest": 0', '"lowest": 1', 1)
    (folder / "dossier.json").write_text(changed)
    answer = subprocess.run(
        [sys.executable, "-I", "-S", "verify.py", "dossier.json"], cwd=folder, capture_output=True
    )
    assert answer.returncode == 1


@pytest.mark.parametrize(
    "line",
    [
        "planar circles 1",
        "braid 1",
        "braid 1 -1",
        "braid 1 1 strands 4",
        "gauss 1 -2 / -1 2 / 3 -4 / -3 4 signs + + - -",
        "planar 1,3,2,4; 2,3,1,4 signs + -",
        "dowker 6 8 / 2 4",
        "braid 1 2 1 2 1 2 1 2 1 2 1 2 1 2 1 2 1 2 1 2 1 2",
    ],
)
def test_unusual_diagrams(tmp_path, line):
    dossier(Diagram.parse(line), tmp_path)
    assert verifier.verify(json.loads((tmp_path / "dossier.json").read_text())) == []


def random_braid(seed: int, letters: int, strands: int) -> Diagram:
    source = random.Random(seed)
    return Diagram.from_braid(
        [source.choice((-1, 1)) * source.randint(1, strands - 1) for _ in range(letters)], strands
    )


@pytest.mark.parametrize("seed", range(25))
def test_the_verifier_accepts_random_braids(seed):
    source = random.Random(seed)
    evidence = Evidence.of(random_braid(seed, source.randint(1, 14), source.randint(2, 6)))
    assert evidence.verify()


@pytest.mark.slow
def test_fifty_crossings():
    assert Evidence.of(random_braid(3, 50, 6)).verify()


def test_too_large_diagrams_leave_no_folder(tmp_path):
    with pytest.raises(LimitError, match="101 crossings"):
        dossier(Diagram.from_braid([1] * 101), tmp_path / "out")
    assert not (tmp_path / "out").exists()


def test_earlier_dossiers_are_replaced_and_other_files_left(tmp_path):
    dossier(Diagram.from_braid([1, 1, 1]), tmp_path)
    (tmp_path / "notes.txt").write_text("mine")
    before = (tmp_path / "diagram.svg").read_bytes()
    dossier(Diagram.from_braid([1, -2, 1, -2]), tmp_path)
    assert (tmp_path / "diagram.svg").read_bytes() != before
    assert (tmp_path / "notes.txt").read_text() == "mine"
    assert {path.name for path in tmp_path.iterdir()} == {*NAMES, "notes.txt"}


@pytest.mark.parametrize("name", NAMES)
def test_files_that_are_not_from_a_dossier_are_kept(tmp_path, name):
    (tmp_path / name).write_text("mine")
    with pytest.raises(KtError, match="not from a dossier") as caught:
        dossier(Diagram.from_braid([1, 1, 1]), tmp_path)
    assert name in str(caught.value)
    assert [path.name for path in tmp_path.iterdir()] == [name]
    assert (tmp_path / name).read_text() == "mine"


def test_a_file_is_no_folder(tmp_path):
    occupied = tmp_path / "file"
    occupied.write_text("mine")
    with pytest.raises(KtError, match="not a folder"):
        dossier(Diagram.from_braid([1, 1, 1]), occupied)


def written_under(seed: str, folder: Path) -> dict[str, str]:
    subprocess.run(
        [sys.executable, "-m", "kt_widgets", "dossier", KNOTS["9_46"][1], "--out", str(folder)],
        env={**os.environ, "PYTHONPATH": str(ROOT), "PYTHONHASHSEED": seed},
        check=True,
        capture_output=True,
    )
    return {path.name: hashlib.sha256(path.read_bytes()).hexdigest() for path in folder.iterdir()}


def test_the_same_bytes_under_two_hash_seeds(tmp_path):
    first, second = (written_under(seed, tmp_path / seed) for seed in ("1", "2"))
    assert first == second
    assert set(first) == set(NAMES)


class Outward(HTMLParser):
    """Collects what a page refers to, and its places."""

    def __init__(self) -> None:
        super().__init__()
        self.references: list[tuple[str, str]] = []
        self.places: set[str] = set()

    def handle_starttag(self, tag: str, attributes: list[tuple[str, str | None]]) -> None:
        for name, value in attributes:
            if name.split(":")[-1] in ("src", "href", "srcset", "data", "action", "poster"):
                self.references.append((tag, value or ""))
            if name == "data-place":
                self.places.add(value or "")


@pytest.fixture(scope="module")
def trefoil_page() -> str:
    return page(Evidence.of(Diagram.from_braid([1, 1, 1])))


def test_the_page_refers_to_nothing_outside(trefoil_page):
    parser = Outward()
    parser.feed(trefoil_page)
    assert [ref for ref in parser.references if not ref[1].startswith("#")] == []
    addresses = set(re.findall(r"https?://[^\s\"'<)]+", trefoil_page))
    assert addresses <= {"http://www.w3.org/2000/svg", "http://www.w3.org/1999/xlink"}
    assert re.findall(r"url\((?!#)[^)]*\)", trefoil_page) == []
    assert "@import" not in trefoil_page
    assert "default-src 'none'" in trefoil_page


def test_the_page_holds_each_entry_with_its_links(trefoil_page):
    parser = Outward()
    parser.feed(trefoil_page)
    entries = {f"entry:2:{i}:{j}" for i in (1, 2, 3) for j in (1, 2, 3)}
    assert entries <= parser.places
    state = json.loads(re.search(r'id="state">(.*?)</script>', trefoil_page, re.DOTALL)[1])
    assert set(state["links"]["entry:2:1:1"]) >= {
        "letter:1:2",
        "letter:1:4",
        "arc:1",
        "crossing:1",
        "relator:1",
    }
    assert len(state["steps"]) == 3 * 5
    assert all(
        other in parser.places or other.startswith("component") for other in state["links"]["entry:2:1:1"]
    )


def test_the_page_says_what_was_verified(trefoil_page):
    evidence = Evidence.of(Diagram.from_braid([1, 1, 1]))
    for _, sentence, holds in verifier.results(json.loads(evidence.to_json())):
        assert holds
        assert sentence.replace("'", "&#x27;") in trefoil_page


def test_shown_generators_are_those_of_the_evidence():
    """Page and formulas show the cycles of the module; the data file holds the very same."""
    d = Diagram.parse(KNOTS["9_46"][1])
    data = Evidence.of(d).to_data()
    for section in data["fields"]:
        summands = d.cover().chains().homology(1).over(section["ring"]).summands()
        shown = {
            (i, j): f.to_data()["coefficients"]
            for j, summand in enumerate(summands, 1)
            for i, f in enumerate(summand.cycle, 1)
            if f
        }
        assert {(i, j): f["coefficients"] for i, j, f in section["cycles"]["entries"]} == shown


@pytest.mark.skipif(shutil.which("pdflatex") is None, reason="no LaTeX here")
@pytest.mark.parametrize(
    "line", ["braid 1 -2 1 -2", KNOTS["9_46"][1], "braid 1 1 strands 3", "planar circles 1"]
)
def test_the_formulas_compile(tmp_path, line):
    (tmp_path / "formulas.tex").write_text(latex_document(Diagram.parse(line)))
    answer = subprocess.run(
        ["pdflatex", "-interaction=nonstopmode", "-halt-on-error", "formulas.tex"],
        cwd=tmp_path,
        capture_output=True,
        text=True,
    )
    assert answer.returncode == 0, answer.stdout[-2000:]
    assert "Overfull" not in answer.stdout


def test_evidence_travels_as_json():
    evidence = Evidence.of(Diagram.from_braid([1, -2, 1, -2]))
    again = from_json(evidence.to_json())
    assert again == evidence
    assert again.diagram.source == "braid 1 -2 1 -2"
    assert hash(again) == hash(evidence)


def test_evidence_that_does_not_hold_is_not_read():
    document: Any = json.loads(Evidence.of(Diagram.from_braid([1, 1, 1])).to_json())
    document["data"]["homology"]["h0"]["lowest"] = 1
    with pytest.raises(CertificateError, match="does not hold"):
        from_json(json.dumps(document))


def test_data_files_are_laid_out_for_reading(tmp_path):
    dossier(Diagram.from_braid([1, 1, 1]), tmp_path)
    text = (tmp_path / "dossier.json").read_text()
    assert json.loads(text) == json.loads(Evidence.of(Diagram.from_braid([1, 1, 1])).to_json())
    lines = text.splitlines()
    assert len(lines) > 50
    assert max(map(len, lines)) < 140


def test_only_a_diagram_has_a_dossier(tmp_path):
    for wrong in ("braid 1 1 1", Diagram.from_braid([1, 1, 1]).cover(), None):
        with pytest.raises(KtError, match="is not a diagram; accepted: a Diagram"):
            dossier(wrong, tmp_path / "out")
    assert not (tmp_path / "out").exists()
