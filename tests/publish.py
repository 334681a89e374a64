"""Run the notebooks, store their outputs, and draw README's pictures: `python -m tests.publish`.

What is stored must show in any viewer, so live views are dropped and their pictures stay; the cells
in question carry the tag ``nbval-ignore-output``, since running them gives the view again.
"""

from __future__ import annotations

from pathlib import Path

import nbformat
from nbconvert.preprocessors import ExecutePreprocessor

import kt_widgets as kt

NOTEBOOKS = Path(__file__).parents[1] / "notebooks"
PICTURES = NOTEBOOKS / "pictures"
VIEW = "application/vnd.jupyter.widget-view+json"
TAG = "nbval-ignore-output"


def pictures() -> dict[str, kt.figures.Drawing]:
    """README's pictures by file name."""
    d = kt.Diagram.from_braid([1, -2, 1, -2])
    x = d.cover()
    return {
        "figure-eight.svg": kt.figures.diagram(d),
        "figure-eight-cover.svg": kt.figures.cover(x, trace=3),
        "figure-eight-entry.svg": kt.figures.explain(x.chains(), entry=("c", "r3")),
    }


def publish(path: Path) -> None:
    """Run one notebook in place."""
    notebook = nbformat.read(path, as_version=4)
    ExecutePreprocessor(timeout=120).preprocess(notebook, {"metadata": {"path": str(path.parent)}})
    notebook.metadata.pop("widgets", None)
    for cell in notebook.cells:
        cell.metadata.pop("execution", None)
        for output in cell.get("outputs", []):
            if output.get("data", {}).pop(VIEW, None) is not None:
                cell.metadata["tags"] = [TAG]
    nbformat.write(notebook, path)


if __name__ == "__main__":
    for name, drawing in pictures().items():
        drawing.save(PICTURES / name)
    for found in sorted(NOTEBOOKS.glob("*.ipynb")):
        publish(found)
