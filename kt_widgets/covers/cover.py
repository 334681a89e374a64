"""`Cover`: the infinite cyclic cover of a presentation complex that a weight map gives."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from functools import cached_property
from itertools import chain
from math import gcd
from typing import Any

from kt_widgets.algebra.fitting import fitting_divisor, fitting_ideal
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.covers.chains import ChainComplex, sum_of_visits
from kt_widgets.covers.cycles import chain_of_powers, word_of_cycle
from kt_widgets.covers.cyclic import CyclicCover, branched_cover, cyclic_cover
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.groups.fox import Visit, visits
from kt_widgets.groups.powers import PowerWord
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.places import Place
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import MAX_LATEX_ENTRIES, integer_text

__all__ = ["MAX_WEIGHT", "MAX_WINDOW", "Cover"]

MAX_WEIGHT = 10_000
"""Largest weight of a generator in absolute value."""
MAX_WINDOW = 1_000_000
"""Most vertices and edges in a window."""


@dataclass(frozen=True, init=False, repr=False)
class Cover(Portable, kind="cover"):
    """The infinite cyclic cover of the 2-complex of a presentation.

    The complex has one vertex e, an edge for each generator and a 2-cell for each relator. In the cover the
    edge t^k a runs from t^k e to t^(k + w(a)) e, and the 2-cell t^k r is attached along the lift of the
    relator r, as it is written, that starts at t^k e.

    Parameters
    ----------
    presentation : Presentation
    weights : mapping of str to int, optional
        A weight for each generator. By default all weights are 1, if every relator then has weight 0; else
        they are the unique surjection to Z whose first nonzero weight is positive.

    Raises
    ------
    AlgebraError
        If `presentation` is not one; if a relator has a weight that is not 0, which it names; if a generator
        has no weight; or if no weights are given and there is no unique surjection: the error lists a basis
        of the weight maps.
    LimitError
        If a weight is beyond `MAX_WEIGHT`.

    Examples
    --------
    >>> x = Cover(Presentation.parse("< x, y | x^3 = y^2 >"))
    >>> x.weights
    {'x': 2, 'y': 3}
    >>> print(x.chains().boundary(2), x.order())
    [[1 + t^2 + t^4],
     [-1 - t^3     ]] 1 - t + t^2
    """

    presentation: Presentation
    _weights: tuple[int, ...]

    def __init__(self, presentation: Presentation, weights: Mapping[str, int] | None = None) -> None:
        if not isinstance(presentation, Presentation):
            raise AlgebraError(
                f"an object of type {type(presentation).__name__} is not a presentation",
                accepted="a Presentation, see Presentation.parse; a diagram d has d.cover()",
            )
        if weights is None:
            weights = _default_weights(presentation)
        if not isinstance(weights, Mapping):
            raise AlgebraError(
                f"weights are given by an object of type {type(weights).__name__}",
                where="weights",
                accepted='a weight for each generator by its name, such as {"a": 1, "b": 1}',
            )
        _check_weights(presentation, weights)
        object.__setattr__(self, "presentation", presentation)
        object.__setattr__(self, "_weights", tuple(weights[name] for name in presentation.generators))

    @property
    def weights(self) -> dict[str, int]:
        """The weight of each generator."""
        return dict(zip(self.presentation.generators, self._weights, strict=True))

    @property
    def sheets(self) -> int:
        """The greatest common divisor of the weights: the number of components of the cover; 0 if all are 0.

        Examples
        --------
        >>> Cover(Presentation.parse("< a, b | [a, b] >"), {"a": 2, "b": 4}).sheets
        2
        """
        return gcd(*self._weights)

    def visits(self, relator: int | str, start: int = 0) -> tuple[Visit, ...]:
        """The letters of a relator, as the boundary of the lifted 2-cell at t^start e meets them.

        Parameters
        ----------
        relator : int or str
            Its number, from 1, or "r1", "r2", ...
        start : int

        Raises
        ------
        AlgebraError
            If there is no such relator.

        Examples
        --------
        >>> x = Cover(Presentation.parse("< t, x | t x t^-1 = x^2 >"))
        >>> [(v.generator, v.sign, v.exponent) for v in x.visits("r1")]
        [('t', 1, 0), ('x', 1, 1), ('t', -1, 0), ('x', -1, 0), ('x', -1, 0)]
        """
        number = self.presentation.relator_number(relator)
        return visits(self.presentation.boundary_words[number - 1], self.weights, number, start)

    def chain(self, word: Word | PowerWord, start: int = 0) -> LaurentMatrix:
        """The 1-chain, a column, of the lift of a word that starts at t^start e.

        Raises
        ------
        AlgebraError
            If a letter is no generator.

        Examples
        --------
        >>> print(Cover(Presentation.parse("< a, b | >"), {"a": 1, "b": 1}).chain(Word.parse("a b^-1")))
        [[1 ],
         [-1]]
        """
        if isinstance(word, PowerWord):
            return chain_of_powers(self, word) * LaurentPolynomial.monomial(start)
        return sum_of_visits(visits(word, self.weights, 1, start), self.presentation.generators, 1)

    def word_of_cycle(self, cycle: Sequence[LaurentPolynomial]) -> PowerWord:
        """A word of weight 0 whose lift from e is a given cycle, as a product of powers.

        Modulo a prime the lift of the word is an integer cycle that reduces to the given one.

        Parameters
        ----------
        cycle : sequence of LaurentPolynomial
            A coefficient for each generator, such as the `cycle` of a summand.

        Raises
        ------
        AlgebraError
            If it is no cycle or not whole, or the cover is not connected.

        Examples
        --------
        >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
        >>> (summand,) = x.chains().homology(1).over("Q").summands()
        >>> print(summand, "|", x.word_of_cycle(summand.cycle))
        Q[t,1/t]/(1 - t + t^2) generated by a - b | (b a^-1)^-1
        """
        return word_of_cycle(self, cycle)

    def window(self, lo: int, hi: int) -> Any:
        """The part of the 1-skeleton between t^lo e and t^hi e.

        Returns
        -------
        networkx.MultiDiGraph
            A node k for each vertex t^k e; for each edge t^k a with both ends there, an edge with the key
            (a, k). Both carry their `Place` as the attribute "place".

        Raises
        ------
        LimitError
            Beyond `MAX_WINDOW` vertices and edges.

        Examples
        --------
        >>> graph = Cover(Presentation.parse("< x, y | x^3 = y^2 >")).window(0, 3)
        >>> sorted(graph.edges(keys=True))
        [(0, 2, ('x', 0)), (0, 3, ('y', 0)), (1, 3, ('x', 1))]
        """
        cells = max(hi - lo + 1, 0) * (1 + len(self._weights))
        if cells > MAX_WINDOW:
            raise LimitError(f"a window of {cells} vertices and edges", accepted=f"at most {MAX_WINDOW}")
        import networkx

        graph = networkx.MultiDiGraph()
        for k in range(lo, hi + 1):
            graph.add_node(k, place=Place("vertex", (k,)))
        for name, weight in self.weights.items():
            for k in range(max(lo, lo - weight), min(hi, hi - weight) + 1):
                graph.add_edge(k, k + weight, key=(name, k), place=Place("edge", (name, k)))
        return graph

    @cached_property
    def _chains(self) -> ChainComplex:
        names = self.presentation.generators
        count = len(self.presentation.boundary_words)
        ends = ((0, i, weight, 1) for i, weight in enumerate(self._weights))
        starts = ((0, i, 0, -1) for i in range(len(names)))
        boundary1 = LaurentMatrix.from_monomials(chain(ends, starts), (1, len(names)))
        weights = self.weights
        traced = (visits(word, weights, j) for j, word in enumerate(self.presentation.boundary_words, 1))
        boundary2 = sum_of_visits(chain.from_iterable(traced), names, count)
        return ChainComplex(boundary1, boundary2, names, tuple(f"r{j}" for j in range(1, count + 1)), self)

    def chains(self) -> ChainComplex:
        """The cellular chain complex over Z[t,1/t], made once.

        boundary(1) adds up the ends of the edges t^0 a, boundary(2) the visits of the 2-cells t^0 r.
        """
        return self._chains

    def order(self) -> LaurentPolynomial:
        """The order of H_1 up to units: lowest exponent 0, positive leading coefficient.

        Examples
        --------
        >>> print(Cover(Presentation.parse("< t, x | t x t^-1 = x^2 >")).order())
        -2 + t
        """
        return self.chains().homology(1).order()

    def alexander_ideal(self, k: int) -> Ideal:
        """E_k, the k-th Fitting ideal of H_1 relative to the vertices (the cokernel of boundary(2)).

        Numbered as in R. H. Crowell, R. H. Fox, Introduction to Knot Theory, ch. VII: for a knot E_1 is
        generated by the Alexander polynomial.

        Examples
        --------
        >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
        >>> print(x.alexander_ideal(0), x.alexander_ideal(1), x.alexander_ideal(2))
        (0) (1 - t + t^2) (1)
        """
        return fitting_ideal(self.chains().boundary(2), k)

    def alexander_polynomial(self, k: int) -> LaurentPolynomial:
        """The k-th Alexander polynomial: the gcd of the Alexander ideal E_k, up to units in normal form.

        Examples
        --------
        >>> x = Cover(Presentation.parse("< a, b | a b a = b a b >"))
        >>> print(x.alexander_polynomial(1), x.alexander_polynomial(2))
        1 - t + t^2 1
        """
        return fitting_divisor(self.chains().boundary(2), k)

    def cyclic_cover(self, n: int) -> CyclicCover:
        """The unbranched n-fold cyclic cover: this cover divided by t^n.

        Raises
        ------
        AlgebraError
            Unless n is 1 or more.

        Examples
        --------
        >>> Cover(Presentation.parse("< a, b | a b a = b a b >")).cyclic_cover(2).invariant_factors()
        (3, 0)
        """
        return cyclic_cover(self, n)

    def branched_cover(self, n: int, meridians: Sequence[Word | str] | None = None) -> CyclicCover:
        """The n-fold cyclic cover with its boundary filled in along the lifts of powers of meridians.

        Parameters
        ----------
        n : int
        meridians : sequence of Word or str, optional
            One for each component to branch over; by default those that the presentation carries as marks
            "meridian:1", ..., as the Wirtinger presentation of a diagram does.

        Raises
        ------
        AlgebraError
            Unless n is 1 or more, and where there are no meridians or a letter of one is no generator.
        ParseError
            If a text is no word.

        Examples
        --------
        >>> x = Cover(Presentation.parse("< x, y | x^3 = y^2 >"))
        >>> print(x.branched_cover(5, meridians=["y x^-1"]), "|", x.branched_cover(3, meridians=["y x^-1"]))
        5-fold branched cyclic cover, H_1 = 0 | 3-fold branched cyclic cover, H_1 = Z/2 + Z/2
        """
        return branched_cover(self, n, meridians)

    def __str__(self) -> str:
        weights = ", ".join(f"{name} -> {weight}" for name, weight in self.weights.items())
        return f"{self.presentation} with {weights or 'no generators'}"

    def __repr__(self) -> str:
        values = set(self._weights)
        weights = f"all weights {values.pop()}" if len(values) == 1 else f"weights {self._weights}"
        return f"Cover({self.presentation!r}, {weights if len(self._weights) <= 20 else 'weights given'})"

    def latex(self) -> str:
        """The presentation and the weights in LaTeX, without dollar signs."""
        weights = ", ".join(
            f"{Word(((name, 1),)).latex()} \\mapsto {weight}" for name, weight in self.weights.items()
        )
        return f"{self.presentation.latex()}, \\quad {weights}"

    def _repr_latex_(self) -> str | None:
        return f"${self.latex()}$" if self.presentation.size() <= MAX_LATEX_ENTRIES else None

    def to_data(self) -> dict[str, Any]:
        """The presentation and the weights by generator."""
        return {"presentation": self.presentation.to_data(), "weights": self.weights}

    @classmethod
    def from_data(cls, data: Any) -> Cover:
        """Read `to_data` back."""
        return cls(Presentation.from_data(data["presentation"]), dict(data["weights"]))


def _default_weights(presentation: Presentation) -> dict[str, int]:
    if all(sum(sign for _, sign in word) == 0 for word in presentation.boundary_words):
        return dict.fromkeys(presentation.generators, 1)
    basis = presentation.weights()
    if len(basis) == 1:
        return basis[0]
    if not basis:
        raise AlgebraError(
            "every weight map is 0: the group has finite abelianisation and no infinite cyclic cover",
            accepted="a presentation whose abelianisation is infinite",
        )
    listed = "; ".join(", ".join(f"{name}: {w}" for name, w in weights.items()) for weights in basis[:5])
    more = f"; and {len(basis) - 5} more" if len(basis) > 5 else ""
    raise AlgebraError(
        f"the weights are not determined; the weight maps have the basis {listed}{more}",
        accepted="weights that are an integer combination of these",
    )


def _check_weights(presentation: Presentation, weights: Mapping[str, int]) -> None:
    names = ", ".join(presentation.generators[:30])
    known = frozenset(presentation.generators)
    for name, weight in weights.items():
        if name not in known:
            raise AlgebraError(f"{name!r} has a weight but is no generator", accepted=f"weights of {names}")
        if type(weight) is not int:
            raise AlgebraError(f"the weight of {name} is {weight!r}", accepted="an integer")
        if abs(weight) > MAX_WEIGHT:
            raise LimitError(
                f"the weight of {name} is {integer_text(weight)}",
                accepted=f"at most {MAX_WEIGHT} in absolute value",
            )
    for name in presentation.generators:
        if name not in weights:
            raise AlgebraError(f"{name} has no weight", accepted=f"weights of {names}")
    for j, word in enumerate(presentation.boundary_words, 1):
        if total := word.weight(weights):
            raise AlgebraError(
                f"the relator r{j}, {word.text() if len(word) <= 40 else 'a long word'}, has weight {total}",
                where=str(Place("relator", (j,))),
                accepted="weights under which every relator has weight 0",
            )
