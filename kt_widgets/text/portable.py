"""Versioned JSON for values: the `Portable` mixin, and `read`, which dispatches on the kind."""

from __future__ import annotations

import json
from typing import Any, ClassVar, Self

from kt_widgets.errors import KtError, LimitError, ParseError

__all__ = ["FORMAT", "MAX_JSON", "VERSION", "Portable", "parse_json", "read"]

FORMAT = "kt_widgets"
VERSION = 1
MAX_JSON = 100_000_000
"""Longest JSON text that is read, in characters."""

_kinds: dict[str, type[Portable]] = {}


class Portable:
    """A value that travels as JSON: `class Word(Portable, kind="word")`.

    A subclass gives `to_data` (plain JSON data) and `from_data` (the value again, checked).

    Examples
    --------
    >>> class Pair(Portable, kind="example pair"):
    ...     def __init__(self, a, b): self.a, self.b = a, b
    ...     def to_data(self): return {"b": self.b, "a": self.a}
    ...     @classmethod
    ...     def from_data(cls, data): return cls(data["a"], data["b"])
    >>> Pair(1, 2).to_json()
    '{"data": {"a": 1, "b": 2}, "format": "kt_widgets", "kind": "example pair", "version": 1}'
    >>> read(Pair(1, 2).to_json()).b
    2
    """

    __slots__ = ()
    kind: ClassVar[str]

    def __init_subclass__(cls, kind: str | None = None, **options: Any) -> None:
        super().__init_subclass__(**options)
        if kind is not None:
            cls.kind = kind
        # A dataclass with slots makes its class a second time, without the keyword but with the attribute.
        if "kind" in cls.__dict__:
            _kinds[cls.kind] = cls

    def to_data(self) -> dict[str, Any]:
        """Give the value as plain JSON data."""
        raise NotImplementedError(f"{type(self).__name__} has no to_data")

    @classmethod
    def from_data(cls, data: Any) -> Self:
        """Make the value from plain JSON data again."""
        raise NotImplementedError(f"{cls.__name__} has no from_data")

    def to_json(self, indent: int | None = None) -> str:
        """Give the value as JSON text: format, version, kind and data, keys sorted.

        Raises
        ------
        LimitError
            If an integer has more digits than Python writes to JSON and reads from it (4300).
        """
        document = {"format": FORMAT, "version": VERSION, "kind": self.kind, "data": self.to_data()}
        try:
            return json.dumps(document, indent=indent, sort_keys=True, ensure_ascii=False)
        except ValueError as error:
            accepted = "integers of at most 4300 digits"
            raise LimitError(f"this {self.kind} cannot be JSON: {error}", accepted=accepted) from None


def _object(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    data = dict(pairs)
    if len(data) != len(pairs):
        raise ValueError("a key occurs twice in one object")
    return data


def _constant(name: str) -> Any:
    raise ValueError(f"{name} is not a JSON value")


def parse_json(text: str) -> Any:
    """Read JSON text; doubled keys, NaN and infinities are refused.

    Raises
    ------
    LimitError
        If the text is longer than `MAX_JSON`.
    ParseError
        If it is not JSON.

    Examples
    --------
    >>> parse_json('{"a": [1, 2]}')
    {'a': [1, 2]}
    """
    if not isinstance(text, str):
        raise ParseError(f"{type(text).__name__} is no text", accepted="the text that to_json gives")
    if len(text) > MAX_JSON:
        raise LimitError(f"JSON text of {len(text)} characters", accepted=f"at most {MAX_JSON}")
    try:
        return json.loads(text, object_pairs_hook=_object, parse_constant=_constant)
    except json.JSONDecodeError as error:
        where = f"line {error.lineno}, column {error.colno}"
        raise ParseError(
            f"not JSON: {error.msg}", where=where, accepted="the text that to_json gives"
        ) from None
    except (ValueError, RecursionError) as error:
        raise ParseError(
            f"not JSON that can be read: {error}", accepted="the text that to_json gives"
        ) from None


def read(text: str) -> Portable:
    """Read the value that `Portable.to_json` wrote; the kinds known are those of the rooms imported so far.

    Raises
    ------
    ParseError
        If the text is no such JSON, or its format, version, kind or data are not known here.

    Examples
    --------
    >>> read('{"format": "kt_widgets", "version": 99, "kind": "word", "data": {}}')
    Traceback (most recent call last):
    kt_widgets.errors.ParseError: the version is 99 (at version); accepted: 1
    """
    document = parse_json(text)
    if not isinstance(document, dict) or document.get("format") != FORMAT:
        raise ParseError("the JSON is not a value of this package", where="format", accepted=repr(FORMAT))
    # `True == 1` in Python, so the type is compared too.
    version = document.get("version")
    if type(version) is not int or version != VERSION:
        raise ParseError(f"the version is {version!r}", where="version", accepted=str(VERSION))
    kind = document.get("kind")
    if not isinstance(kind, str) or kind not in _kinds:
        raise ParseError(f"the kind {kind!r} is not known", where="kind", accepted=", ".join(sorted(_kinds)))
    if "data" not in document:
        raise ParseError(f"the {kind} has no data", where="data", accepted="the text that to_json gives")
    try:
        return _kinds[kind].from_data(document["data"])
    except KtError:
        raise
    except (LookupError, TypeError, ValueError, AttributeError, ArithmeticError, RecursionError) as error:
        detail = f"{type(error).__name__}: {error}"
        raise ParseError(
            f"the data of this {kind} are malformed ({detail})",
            where="data",
            accepted="the text that to_json gives",
        ) from None
