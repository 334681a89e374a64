"""The LaTeX that values print is compiled by a real engine."""

from __future__ import annotations

import os
import shutil
import subprocess
from pathlib import Path

import pytest

import kt_widgets as kt

PREAMBLE = r"\documentclass{article}\usepackage{amsmath,amssymb}\begin{document}"


def engine() -> str:
    found = shutil.which("pdflatex")
    if found is None:
        if os.environ.get("KT_LATEX_REQUIRED"):
            pytest.fail("pdflatex is required here and is not installed")
        pytest.skip("pdflatex is not installed")
    return found


def compiled(body: str, folder: Path) -> subprocess.CompletedProcess[str]:
    (folder / "page.tex").write_text(PREAMBLE + body + r"\end{document}", encoding="utf-8")
    command = [engine(), "-interaction=nonstopmode", "-halt-on-error", "page.tex"]
    return subprocess.run(command, cwd=folder, capture_output=True, text=True, check=False)


def test_the_engine_notices_a_mistake(tmp_path: Path) -> None:
    assert compiled(r"$t^{-1$", tmp_path).returncode != 0


def test_every_value_compiles(tmp_path: Path) -> None:
    d = kt.Diagram.from_braid([1, -2, 1, -2])
    x = d.cover()
    c = x.chains()
    h = c.homology(1)
    values = [
        kt.LaurentPolynomial.parse("t^-3 - 3 + t^12"),
        kt.LaurentPolynomial.parse("1/2 t - 5/3", over="Q"),
        kt.LaurentPolynomial([], 0),
        kt.Ideal(["3", "1 + t"]),
        c.boundary(1),
        c.boundary(2),
        d.wirtinger(),
        kt.Presentation.parse("< x_1, x_12 | x_1^2 = x_12^-3 >"),
        kt.Word.parse("a b^-2 a^-1"),
        c,
        x,
        h,
        h.over("Q"),
        h.over(5),
        c.relative_homology(1),
        kt.Module.from_matrix([["t - 2", "0"], ["0", "2t - 1"]]),
        kt.Module.from_matrix([["2"]]),
        h.over("Q").operator(),
        h.cyclicity(),
        kt.compare(h, h),
        kt.compare(h.over("Q"), h.over("Q")),
        kt.compare(h, kt.Module.from_matrix([["2"]])),
        x.branched_cover(3),
        x.cyclic_cover(4),
        h.over("Q").summands()[0],
    ]
    texts = [value._repr_latex_() for value in values]
    assert all(text.startswith("$") for text in texts)
    done = compiled("\n\n".join(texts), tmp_path)
    assert done.returncode == 0, done.stdout[-2000:]
