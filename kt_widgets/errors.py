"""The errors that kt_widgets raises: each says what is wrong, where, and what would be accepted."""

from __future__ import annotations

__all__ = ["AlgebraError", "CertificateError", "DiagramError", "KtError", "LimitError", "ParseError"]


class KtError(ValueError):
    """Base of every error of this package; also a `ValueError`.

    Parameters
    ----------
    what : str
        What is wrong, in words.
    where : str, optional
        The place: a position in the text, a line, a crossing, an entry.
    accepted : str, optional
        What would be accepted instead.

    Examples
    --------
    >>> print(KtError("b has no weight", where="weights", accepted="an integer for each generator"))
    b has no weight (at weights); accepted: an integer for each generator
    """

    def __init__(self, what: str, *, where: str = "", accepted: str = "") -> None:
        self.what = what
        self.where = where
        self.accepted = accepted
        super().__init__(what)

    def __str__(self) -> str:
        where = f" (at {self.where})" if self.where else ""
        accepted = f"; accepted: {self.accepted}" if self.accepted else ""
        return f"{self.what}{where}{accepted}"

    def __reduce__(self) -> tuple[object, ...]:
        return (_rebuild, (type(self), self.what, self.where, self.accepted))


def _rebuild(kind: type[KtError], what: str, where: str, accepted: str) -> KtError:
    return kind(what, where=where, accepted=accepted)


class ParseError(KtError):
    """A text that the grammar does not read; `where` gives line and column."""


class DiagramError(KtError):
    """A code that is inconsistent, not planar or not realisable, or a crossing that does not exist."""


class AlgebraError(KtError):
    """An operation that the ring, the shapes or the weights do not allow."""


class CertificateError(KtError):
    """A certificate whose check by multiplication fails; `where` names the entry."""


class LimitError(KtError):
    """Input or output beyond a stated size limit."""
