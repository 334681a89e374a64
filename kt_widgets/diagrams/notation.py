"""One line of text for a diagram: a notation's name, then its code, then signs, strands or circles."""

from __future__ import annotations

import difflib
import re
import reprlib
from dataclasses import dataclass, field

from kt_widgets.errors import LimitError, ParseError

__all__ = ["MAX_DIGITS", "MAX_TEXT", "NOTATIONS", "Line", "read_line"]

MAX_TEXT = 5_000_000
"""A line has at most this many characters."""

MAX_DIGITS = 12
"""A number in a line has at most this many digits."""

NOTATIONS = {
    "braid": "braid 1 -2 1 -2",
    "gauss": "gauss 1 -2 3 -1 2 -3 signs + + +",
    "dowker": "dowker 4 6 2",
    "planar": "planar 1,4,2,5; 5,2,6,3; 3,6,4,1",
}
"""The names of the notations, each with an example."""

_GROUP_SEPARATOR = {"braid": "", "gauss": "/", "dowker": "/", "planar": ";"}
_OPTIONS = {
    "braid": ("strands",),
    "gauss": ("signs", "circles"),
    "dowker": ("circles",),
    "planar": ("signs", "circles"),
}
_CLOSING = {"(": ")", "[": "]"}
_TOKEN = re.compile(
    r"(?P<name>[A-Za-z_]+)|(?P<number>[+-]?[0-9]+)|(?P<sign>[+-])|(?P<mark>[,;/])|(?P<bracket>[\[\]()])|(?P<space>\s+)"
)


@dataclass
class Line:
    """A line as read: groups of numbers (per component or per crossing) and the numbers of each option."""

    notation: str
    groups: list[list[int]]
    options: dict[str, list[int]] = field(default_factory=dict)

    def single(self, option: str) -> int | None:
        """The number of an option, None where the option is not there."""
        values = self.options.get(option)
        return values[0] if values else None


def read_line(text: str) -> Line:
    """Read a line such as ``braid 1 -2 1 -2 strands 3`` or ``gauss 1 -2 / -1 2 signs + +``.

    Numbers are separated by spaces or commas, components by ``/``, crossings of a planar code by ``;``. A
    Python list may follow the name instead: brackets must match, and set components or crossings apart.

    Raises
    ------
    ParseError
        With line and column, and what would be accepted.
    LimitError
        If the line is longer than `MAX_TEXT` characters.

    Examples
    --------
    >>> read_line("gauss 1 -2 / -1 2 signs + +")
    Line(notation='gauss', groups=[[1, -2], [-1, 2]], options={'signs': [1, 1]})
    >>> read_line("planar [(1, 4, 2, 5), (5, 2, 6, 3), (3, 6, 4, 1)]").groups
    [[1, 4, 2, 5], [5, 2, 6, 3], [3, 6, 4, 1]]
    """
    if not isinstance(text, str):
        raise ParseError(f"a {type(text).__name__} is not a line of text", accepted=_examples())
    if len(text) > MAX_TEXT:
        raise LimitError(f"a line of {len(text)} characters is too long", accepted=f"at most {MAX_TEXT}")
    tokens = _tokens(text.replace("\u2212", "-"))  # the minus sign of typeset text
    if not tokens:
        raise ParseError("the line is empty", where="line 1, column 1", accepted=_examples())
    kind, first, at = tokens[0]
    notation = first.lower()
    if kind != "name" or notation not in NOTATIONS:
        near = difflib.get_close_matches(notation, NOTATIONS, n=1)
        hint = f"; the nearest is {near[0]}" if near else ""
        raise ParseError(
            f"{reprlib.repr(first)} is not the name of a notation{hint}",
            where=_position(text, at),
            accepted=_examples(),
        )
    return _read_body(text, notation, tokens[1:])


def _read_body(text: str, notation: str, tokens: list[tuple[str, str, int]]) -> Line:
    separator = _GROUP_SEPARATOR[notation]
    line = Line(notation, [[]])
    target = line.groups[0]
    option = ""
    apart = False
    awaited: list[str] = []
    for kind, word, at in tokens:
        problem, accepted = "", NOTATIONS[notation]
        if kind == "bracket":
            apart = bool(separator) and not option
            if word in _CLOSING:
                awaited.append(_CLOSING[word])
            elif not awaited or awaited.pop() != word:
                problem, accepted = f"{word!r} closes nothing", "brackets that match"
        elif kind == "number":
            if apart and target:
                target = []
                line.groups.append(target)
            apart = False
            if len(word) > MAX_DIGITS:
                problem, accepted = f"a number of {len(word)} digits", f"at most {MAX_DIGITS} digits"
            else:
                target.append(int(word))
        elif kind == "sign" and option == "signs":
            target.append(1 if word == "+" else -1)
        elif kind == "name":
            option = word.lower()
            if option not in _OPTIONS[notation]:
                problem, accepted = (
                    f"{reprlib.repr(word)} is not known after {notation}",
                    " or ".join(_OPTIONS[notation]),
                )
            elif option in line.options:
                problem, accepted = f"{option} is given twice", f"{option} once"
            else:
                target = line.options.setdefault(option, [])
        elif word == separator and not option:
            if target:
                target = []
                line.groups.append(target)
            else:
                problem = f"nothing stands before {word!r}"
        elif word != ",":
            problem = f"{word!r} is out of place"
        if problem:
            raise ParseError(problem, where=_position(text, at), accepted=accepted)
    if awaited:
        raise ParseError(
            f"{awaited[-1]!r} is missing", where=_position(text, len(text)), accepted="brackets that match"
        )
    _check_complete(text, line)
    return line


def _check_complete(text: str, line: Line) -> None:
    """Options need their numbers, the last group must not be empty."""
    end = _position(text, len(text))
    for option, values in line.options.items():
        if option != "signs" and len(values) != 1:
            raise ParseError(
                f"{option} with {len(values)} numbers", where=end, accepted=f"{option} and one number"
            )
    if not line.groups[-1]:
        if len(line.groups) > 1:
            raise ParseError(
                "nothing stands after the last separator", where=end, accepted=NOTATIONS[line.notation]
            )
        if "strands" not in line.options and "circles" not in line.options:
            raise ParseError("the code is missing", where=end, accepted=NOTATIONS[line.notation])
        line.groups.pop()


def _tokens(text: str) -> list[tuple[str, str, int]]:
    """Kind, text and position of each token."""
    tokens = []
    at = 0
    while at < len(text):
        match = _TOKEN.match(text, at)
        if match is None:
            raise ParseError(
                f"{text[at]!r} is not read here",
                where=_position(text, at),
                accepted="names, whole numbers, signs, commas, brackets, ; and /",
            )
        kind = match.lastgroup or ""
        if kind != "space":
            tokens.append((kind, match.group(), at))
        at = match.end()
    return tokens


def _position(text: str, at: int) -> str:
    line = text.count("\n", 0, at) + 1
    return f"line {line}, column {at - text.rfind(chr(10), 0, at)}"


def _examples() -> str:
    return ", ".join(f"'{example}'" for example in NOTATIONS.values())
