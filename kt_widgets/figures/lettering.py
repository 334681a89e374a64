"""Letters in pictures: a label's text split into runs, and the space that they take.

The widths are those of Times-like type, rounded up a little, so that one reckoning serves every renderer.
"""

from __future__ import annotations

from dataclasses import dataclass

from kt_widgets.errors import KtError

__all__ = ["Extent", "Run", "extent", "runs"]

# Heights above and below the base line, and widths, as parts of the letter size.
_ASCENDERS = frozenset("bdfhijklt")
_DESCENDERS = frozenset("gjpqy")
_WIDTHS = {
    **dict.fromkeys("ijl.,:;'|!", 0.30),
    **dict.fromkeys("ftrs()[]-/ ", 0.39),
    **dict.fromkeys("mwMW", 0.80),
    **dict.fromkeys("+=<>−–±·", 0.66),
}
_SMALL = 0.7
_RISE, _DROP = 0.36, -0.18


@dataclass(frozen=True, slots=True)
class Run:
    """Letters of one style: italic or upright, on the line (level 0), raised (1) or lowered (-1)."""

    text: str
    italic: bool = False
    level: int = 0

    @property
    def scale(self) -> float:
        """The size of these letters as a part of the label's."""
        return _SMALL if self.level else 1.0

    @property
    def shift(self) -> float:
        """The base line of these letters above the label's, as a part of the label's letter size."""
        return {0: 0.0, 1: _RISE, -1: _DROP}[self.level]


@dataclass(frozen=True, slots=True)
class Extent:
    """The width of a text, and how far it reaches above and below its base line, in points."""

    width: float
    above: float
    below: float

    @property
    def middle(self) -> float:
        """The height of the middle of the letters above the base line."""
        return (self.above - self.below) / 2


def runs(text: str) -> tuple[Run, ...]:
    """Split a label: between dollars letters are italic, ``_`` lowers and ``^`` raises one sign or a group.

    Raises
    ------
    KtError
        If a dollar sign or a brace has no partner.

    Examples
    --------
    >>> [(r.text, r.italic, r.level) for r in runs("to $t^{-1} e$")]
    [('to ', False, 0), ('t', True, 0), ('−1', False, 1), (' ', False, 0), ('e', True, 0)]
    """
    parts = text.split("$")
    if len(parts) % 2 == 0:
        raise KtError(
            "a dollar sign has no partner", where=f"label {text!r}", accepted="mathematics as $...$"
        )
    found: list[Run] = []
    for position, part in enumerate(parts):
        if position % 2 == 0:
            if part:
                found.append(Run(part))
            continue
        level, rest = 0, part
        while rest:
            if rest[0] in "_^" and len(rest) > 1:
                level = 1 if rest[0] == "^" else -1
                rest = rest[1:]
                if rest[0] == "{":
                    group, brace, rest = rest[1:].partition("}")
                    if not brace:
                        raise KtError("a brace is not closed", where=f"label {text!r}", accepted="{...}")
                else:
                    group, rest = rest[0], rest[1:]
            else:
                level, group, rest = 0, rest[0], rest[1:]
            for sign in group.replace("-", "−"):
                run = Run(sign, sign.isalpha(), level)
                last = found[-1] if found else None
                if last and (last.italic, last.level) == (run.italic, level):
                    found[-1] = Run(last.text + sign, run.italic, level)
                else:
                    found.append(run)
    return tuple(found)


def extent(text: str, size: float) -> Extent:
    """The space that a label's text takes at a letter size in points.

    Examples
    --------
    >>> extent("$a$", 10)
    Extent(width=5.2, above=4.6, below=0.1)
    """
    width, above, below = 0.0, 0.0, 0.0
    for run in runs(text):
        for sign in run.text:
            width += run.scale * _WIDTHS.get(sign, 0.74 if sign.isupper() else 0.52)
        tall = any(s in _ASCENDERS or not s.islower() for s in run.text if s != " ")
        deep = any(s in _DESCENDERS for s in run.text)
        above = max(above, run.shift + run.scale * (0.69 if tall else 0.46))
        below = max(below, -run.shift + run.scale * (0.22 if deep else 0.01))
    return Extent(round(width * size, 2), round(above * size, 2), round(below * size, 2))
