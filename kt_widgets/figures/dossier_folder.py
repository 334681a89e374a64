"""`dossier`: a folder with the whole chain of evidence for a diagram: page, data, verifier, figures."""

from __future__ import annotations

import json
import os
from collections.abc import Iterator, Mapping
from html import escape
from importlib.resources import files
from pathlib import Path
from typing import Any

from kt_widgets import verify as verifier
from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.diagram import Diagram
from kt_widgets.errors import KtError
from kt_widgets.figures import bodies
from kt_widgets.figures.cover_figure import cover, cover_scene
from kt_widgets.figures.diagram_figure import arc_colours
from kt_widgets.figures.diagram_figure import diagram as diagram_drawing
from kt_widgets.figures.drawing import Drawing
from kt_widgets.figures.evidence import Evidence, terms
from kt_widgets.figures.links import links
from kt_widgets.figures.steps import steps
from kt_widgets.figures.typeset import latex_document
from kt_widgets.text.printing import polynomial_text

__all__ = ["dossier", "page"]

DATA = "dossier.json"
FILES = (
    "dossier.html",
    DATA,
    "verify.py",
    "diagram.svg",
    "diagram.pdf",
    "cover.svg",
    "cover.pdf",
    "formulas.tex",
)
"""The files of a dossier."""

LINE = 100
"""Longest value of the data file that stands on one line."""


def dossier(d: Diagram, out: str | os.PathLike[str]) -> tuple[Path, ...]:
    """Write the whole chain of evidence for a diagram to a folder.

    ``dossier.html`` is one file that needs no network; focus and stepping work in it. ``dossier.json`` holds
    the exact data and ``verify.py`` checks them with Python's standard library alone. Beside them are the
    diagram and the cover as SVG and PDF, and the formulas as ``formulas.tex``. The same diagram gives the
    same bytes. Files of an earlier dossier in the folder are replaced, other files are left alone.

    Parameters
    ----------
    d : Diagram
    out : path
        The folder; it is made where it does not exist.

    Returns
    -------
    tuple of Path
        The files, the page first.

    Raises
    ------
    KtError
        If `d` is no diagram, or `out` is a file, or holds a file of one of these names that is not from a
        dossier.
    LimitError
        If the diagram is too large for a dossier.
    OSError
        If the folder cannot be written.

    Examples
    --------
    >>> import tempfile
    >>> with tempfile.TemporaryDirectory() as folder:
    ...     written = dossier(Diagram.from_braid([1, 1, 1]), folder)
    >>> [path.name for path in written][:3]
    ['dossier.html', 'dossier.json', 'verify.py']
    """
    if not isinstance(d, Diagram):
        raise KtError(
            f"an object of type {type(d).__name__} is not a diagram", accepted="a Diagram, see Diagram.parse"
        )
    folder = Path(out)
    _check_folder(folder)
    # Everything is made before anything is written, so that an error leaves the folder as it was.
    contents = dict(zip(FILES, _contents(d), strict=True))
    folder.mkdir(parents=True, exist_ok=True)
    for name, content in contents.items():
        part = folder / f".{name}.part"
        part.write_bytes(content)
        part.replace(folder / name)
    return tuple(folder / name for name in contents)


def _contents(d: Diagram) -> Iterator[bytes]:
    """The contents of `FILES`, in order."""
    evidence = Evidence.of(d)
    evidence.verify()
    yield page(evidence).encode()
    yield (_laid_out(json.loads(evidence.to_json())) + "\n").encode()
    yield Path(verifier.__file__).read_bytes()
    for drawing in (diagram_drawing(d), cover(d.cover())):
        yield drawing.svg().encode()
        yield drawing.pdf()
    yield latex_document(d).encode()


def _check_folder(folder: Path) -> None:
    """Refuse a folder in which a file that is not ours would be lost."""
    if folder.exists() and not folder.is_dir():
        raise KtError("this is a file, not a folder", where=str(folder), accepted="a folder, or a new name")
    taken = [name for name in FILES if (folder / name).exists()]
    if taken and not _is_dossier(folder / DATA):
        raise KtError(
            f"{taken[0]} is there already and is not from a dossier",
            where=str(folder),
            accepted="a new or an empty folder, or that of an earlier dossier",
        )


def _is_dossier(path: Path) -> bool:
    try:
        with path.open(encoding="utf-8") as file:
            data = json.load(file)
    except (OSError, ValueError):
        return False
    return isinstance(data, dict) and (data.get("format"), data.get("kind")) == (
        verifier.FORMAT,
        verifier.KIND,
    )


def _laid_out(value: Any, indent: str = "") -> str:
    """JSON text in which what is short stands on one line, so that it can be read and compared."""
    text = json.dumps(value, sort_keys=True)
    if len(text) <= LINE or not isinstance(value, dict | list):
        return text
    inner = indent + " "
    if isinstance(value, dict):
        items = [f"{json.dumps(key)}: {_laid_out(value[key], inner)}" for key in sorted(value)]
    else:
        items = [_laid_out(item, inner) for item in value]
    left, right = "{}" if isinstance(value, dict) else "[]"
    return f"{left}\n{inner}" + f",\n{inner}".join(items) + f"\n{indent}{right}"


PAGE = """<!DOCTYPE html>
<html lang="en">
<head>
<meta charset="utf-8">
<meta name="viewport" content="width=device-width, initial-scale=1">
<meta http-equiv="Content-Security-Policy" content="{policy}">
<title>{title}</title>
<style>
{style}
</style>
<noscript><style>
[data-traces] [data-place^="letter:"]:not([data-place^="letter:1:"]),
[data-traces] [data-place^="cell:"]:not([data-place^="cell:1:"]) {{ display: none; }}
</style></noscript>
</head>
<body>
<header class="kt-view">
<h1><code>{line}</code></h1>
<p>{summary}</p>
</header>
<main>
{sections}
</main>
<script type="application/json" id="state">{state}</script>
<script type="module">
{script}
linkPage(document, JSON.parse(document.getElementById("state").textContent));
</script>
</body>
</html>
"""

POLICY = "default-src 'none'; style-src 'unsafe-inline'; script-src 'unsafe-inline'; img-src data: blob:"
"""What the page may load: nothing but itself; pictures that it makes for saving are data and blobs."""


SAYS = "Point at an arc, a crossing, a letter, an edge or an entry: all that belongs to it lights up."


def page(evidence: Evidence) -> str:
    """The page of a dossier: one HTML text that loads nothing, with the script that links its views.

    Examples
    --------
    >>> text = page(Evidence.of(Diagram.from_braid([1, 1, 1])))
    >>> text.count("<h2>"), 'data-place="entry:2:1:1"' in text
    (6, True)
    """
    d = evidence.diagram
    static = files("kt_widgets.figures") / "static"
    style = [(static / name).read_text(encoding="utf-8") for name in ("view.css", "dossier.css")]
    return PAGE.format(
        policy=POLICY,
        title=escape(f"{d.source}: infinite cyclic cover and homology"),
        style="\n".join(style),
        line=escape(d.source),
        summary=_summary(evidence),
        sections=_sections(evidence),
        state=_embedded({"links": links(d.cover(), d), "steps": steps(d.cover())}),
        script=(static / "view.js").read_text(encoding="utf-8"),
    )


def _embedded(state: Any) -> str:
    # "</script>" would end the element, whatever stands around it.
    return json.dumps(state, ensure_ascii=False, separators=(",", ":")).replace("<", "\\u003c")


_SUBSCRIPTS = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


def _counted(number: int, one: str) -> str:
    return f"{number} {one}{'' if number == 1 else 's'}"


def _unicode(polynomial: Mapping[str, Any]) -> str:
    return polynomial_text(terms(polynomial), "unicode")


def _maths(text: str) -> str:
    return f'<span class="kt-math">{bodies.maths(text)}</span>'


def _summary(evidence: Evidence) -> str:
    d, data = evidence.diagram, evidence.to_data()
    counts = f"{_counted(len(d.components), 'component')}, {_counted(len(d.crossings), 'crossing')}"
    writhe = polynomial_text({0: d.writhe}, "unicode")
    ideals = []
    for record in data["ideals"]["alexander"]:
        number = str(record["k"]).translate(_SUBSCRIPTS)
        ideals.append(f"E{number} = ({', '.join(map(_unicode, record['basis'])) or '0'})")
    return (
        f"{counts}, writhe {writhe}. "
        f"Alexander polynomial {_maths(_unicode(data['alexander_polynomial']))}"
        f"{'' if len(d.components) == 1 else ' up to units'}. Alexander ideals {_maths(', '.join(ideals))}."
    )


def _sections(evidence: Evidence) -> str:
    d = evidence.diagram
    x = d.cover()
    c = x.chains()
    relators = range(1, len(x.presentation.boundary_words) + 1)
    colours = dict(zip(x.presentation.generators, arc_colours(d), strict=True))
    strip = Drawing(cover_scene(x, relators, colours=colours))
    typed = f"kt.Diagram.parse({d.source!r})"
    drawn = bodies.picture(diagram_drawing(d, preset="screen"), "diagram", f"kt.figures.diagram({typed})")
    traced = bodies.picture(strip, "cover", f"kt.figures.cover({typed}.cover(), trace=1)", traces=True)
    hint = (
        "<p class='kt-quiet'>The boundary of a 2-cell, lifted to start at <i>e</i>. Each letter that is read "
        "adds one term to a column of ∂<sub>2</sub>.</p>"
    )
    parts = [
        ("diagram", "Diagram", drawn + f'<p class="kt-says" data-says="{SAYS}"></p>'),
        ("presentation", "Wirtinger presentation", bodies.presentation(x.presentation) + _peripheral(d)),
        ("cover", "Infinite cyclic cover", hint + bodies.stepper() + traced),
        ("chains", "Chain complex", bodies.matrix(c, 1) + bodies.matrix(c, 2)),
        ("homology", "Homology", _homology(x)),
        ("certificate", "Certificates", _certificate(evidence)),
    ]
    written = [
        f'<section id="{name}"><h2>{heading}</h2>\n<div class="kt-view" data-view>{body}</div></section>'
        for name, heading, body in parts
    ]
    columns = ("\n".join(part) for part in (written[:2], written[2:]))
    return "\n".join(f'<div class="column">\n{column}\n</div>' for column in columns)


def _peripheral(d: Diagram) -> str:
    """Meridian and longitude of each component."""
    items = []
    for number, _ in enumerate(d.components, 1):
        meridian = bodies.maths(d.meridian(number).text("unicode"))
        longitude = bodies.maths(d.longitude(number).reduced().text("unicode"))
        items.append(f"<dt>component {number}</dt><dd>meridian {meridian}, longitude {longitude}</dd>")
    return f'<dl class="kt-facts kt-math">{"".join(items)}</dl>'


def _homology(x: Cover) -> str:
    """What there is to say over each ring: on paper all are wanted at once."""
    parts, noted = [], set()
    for ring in ("Z", *verifier.FIELDS):
        rows = ""
        for fact in bodies.facts(x, ring):
            note = "" if fact.note in noted else f" <small>{escape(fact.note)}</small>"
            noted.add(fact.note)
            rows += (
                f"<dt>{bodies.maths(fact.name, italic=False)}</dt><dd>{bodies.maths(fact.value)}{note}</dd>"
            )
        head = f"<h3>over {bodies.maths(bodies.ring_text(ring))}</h3>"
        parts.append(f'<section>{head}<dl class="kt-facts kt-math">{rows}</dl></section>')
    return f'<div class="rings">{"".join(parts)}</div>'


def _certificate(evidence: Evidence) -> str:
    """What the verifier says of the data, line by line."""
    lines = "".join(
        f"<li><b>{escape(name)}</b>: {escape(sentence)}</li>"
        for name, sentence, _ in verifier.results(json.loads(evidence.to_json()))
    )
    return (
        "<p>The file <code>dossier.json</code> holds the exact data with witnesses: inverse matrices, Smith "
        "forms, cofactors. <code>python verify.py dossier.json</code> works everything out again from the "
        "typed line, or multiplies it out, with Python's standard library alone. Every check holds:</p>"
        f'<ol class="checks">{lines}</ol>'
    )
