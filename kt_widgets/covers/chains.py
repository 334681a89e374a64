"""`ChainComplex`: C_2 -> C_1 -> C_0 over a ring of Laurent polynomials, checked, and its homology."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING, Any, NamedTuple

from kt_widgets.algebra.elimination import Operations
from kt_widgets.algebra.flint_rings import RingName, ring
from kt_widgets.algebra.laurent import LaurentPolynomial, subtract_product
from kt_widgets.algebra.matrix import Entry, LaurentMatrix
from kt_widgets.errors import AlgebraError
from kt_widgets.groups.fox import Visit
from kt_widgets.modules.module import Module
from kt_widgets.places import Place
from kt_widgets.text.portable import Portable

if TYPE_CHECKING:
    from kt_widgets.covers.cover import Cover

__all__ = ["ChainComplex", "KernelBasis", "sum_of_visits"]


def sum_of_visits(
    visits: Iterable[Visit], generators: Sequence[str], columns: int, over: RingName = "Z"
) -> LaurentMatrix:
    """Add up visits: each adds sign * t^exponent to the row of its generator and the column of its relator.

    Every boundary(2) is made here, so that the pictures, which draw visits, and the formulas are one sum.

    Examples
    --------
    >>> from kt_widgets.groups.fox import visits
    >>> from kt_widgets.groups.words import Word
    >>> word = Word.parse("a b a b^-1 a^-1 b^-1")
    >>> print(sum_of_visits(visits(word, {"a": 1, "b": 1}), ["a", "b"], 1))
    [[1 - t + t^2 ],
     [-1 + t - t^2]]
    """
    row = {name: i for i, name in enumerate(generators)}
    monomials = ((row[v[2]], v[0] - 1, v[4], v[3]) for v in visits)
    return LaurentMatrix.from_monomials(monomials, (len(generators), columns), over)


class KernelBasis(NamedTuple):
    """An invertible V with boundary(1) V in column echelon form, zero columns last, and its inverse.

    For one row that is boundary(1) V = (d, 0, ..., 0); the columns of V over the zeros are a basis of the
    kernel.
    """

    V: LaurentMatrix
    V_inverse: LaurentMatrix


@dataclass(frozen=True, repr=False)
class ChainComplex(Portable, kind="chain complex"):
    """Free chain modules C_2 -> C_1 -> C_0 with boundary(1) boundary(2) = 0; chains are column vectors.

    Parameters
    ----------
    boundary1, boundary2 : LaurentMatrix
        Of shapes (vertices, edges) and (edges, 2-cells), over one ring.
    generators, relators : tuple of str
        Names of the edges and of the 2-cells.
    cover : Cover, optional
        What it was made from; takes no part in equality.

    Raises
    ------
    AlgebraError
        If the shapes or rings do not fit, or an entry of boundary(1) boundary(2) is not 0.

    Examples
    --------
    >>> c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2; -1 + t - t^2")
    >>> print(c.homology(1).order())
    1 - t + t^2
    """

    boundary1: LaurentMatrix
    boundary2: LaurentMatrix
    generators: tuple[str, ...]
    relators: tuple[str, ...]
    cover: Cover | None = field(default=None, compare=False)

    def __post_init__(self) -> None:
        edges, cells = self.boundary2.shape
        if self.boundary1.shape[1] != edges:
            raise AlgebraError(
                f"boundary(1) has {self.boundary1.shape[1]} columns, boundary(2) has {edges} rows",
                accepted="one column and one row for each generator",
            )
        if self.boundary1.over != self.boundary2.over:
            raise AlgebraError(
                f"boundary(1) is over {self.boundary1.over!r}, boundary(2) over {self.boundary2.over!r}",
                accepted="one ring",
            )
        for what, names, count in (
            ("generators", self.generators, edges),
            ("relators", self.relators, cells),
        ):
            if len(names) != count:
                raise AlgebraError(f"{len(names)} names of {what} for {count}", accepted=f"{count} names")
        self.check()

    @classmethod
    def from_matrices(
        cls,
        boundary1: LaurentMatrix | Sequence[Sequence[Entry]] | str,
        boundary2: LaurentMatrix | Sequence[Sequence[Entry]] | str,
        over: RingName = "Z",
        generators: Sequence[str] | None = None,
        relators: Sequence[str] | None = None,
    ) -> ChainComplex:
        """A complex from its matrices: text, rows of numbers, polynomials or texts, or matrices.

        Generators are called x1, x2, ... and relators r1, r2, ... unless names are given.

        Raises
        ------
        AlgebraError
            If the shapes do not fit, or an entry of boundary(1) boundary(2) is not 0, which it names.
        ParseError
            If a text is no matrix.

        Examples
        --------
        >>> ChainComplex.from_matrices([["t - 1", "t^2 - 1"]], [[1], [1]])
        Traceback (most recent call last):
        kt_widgets.errors.AlgebraError: boundary(1) boundary(2) is -2 + t + t^2, not 0 (at entry (1, 1));
        accepted: matrices whose product is 0
        """
        first, second = _matrix(boundary1, over), _matrix(boundary2, over)
        edges, cells = second.shape
        return cls(
            first,
            second,
            tuple(generators or (f"x{i}" for i in range(1, edges + 1))),
            tuple(relators or (f"r{j}" for j in range(1, cells + 1))),
        )

    @property
    def ring(self) -> RingName:
        """The ring of coefficients: "Z", "Q" or a prime."""
        return self.boundary2.over

    def boundary(self, n: int) -> LaurentMatrix:
        """boundary(1): C_1 -> C_0, or boundary(2): C_2 -> C_1; columns are images of cells.

        Raises
        ------
        AlgebraError
            For another n.
        """
        if n not in (1, 2):
            raise AlgebraError(f"there is no boundary({n})", accepted="boundary(1) and boundary(2)")
        return self.boundary1 if n == 1 else self.boundary2

    def check(self) -> bool:
        """Multiply boundary(1) boundary(2) out.

        Raises
        ------
        AlgebraError
            Naming the first entry that is not 0.
        """
        product = self.boundary1 @ self.boundary2
        for i, j, f in product.entries():
            raise AlgebraError(
                f"boundary(1) boundary(2) is {f}, not 0",
                where=f"entry ({i + 1}, {j + 1})",
                accepted="matrices whose product is 0",
            )
        return True

    def over(self, name: RingName) -> ChainComplex:
        """The complex with its coefficients changed to "Q" or a prime.

        ``c.over(p).homology(1)`` may differ from ``c.homology(1).over(p)`` by a Tor term.

        Raises
        ------
        AlgebraError
            If there is no map of rings.
        """
        return ChainComplex(
            self.boundary1.change_ring(name),
            self.boundary2.change_ring(name),
            self.generators,
            self.relators,
            self.cover,
        )

    @cached_property
    def _echelon(self) -> tuple[KernelBasis, int]:
        return _column_echelon(self.boundary1)

    def kernel(self) -> KernelBasis:
        """Invertible V, and its inverse, such that boundary(1) V = (d, 0, ..., 0).

        Found by Euclid's algorithm on the entries of boundary(1), which for t^w - 1 is Euclid's algorithm on
        the weights w. If a generator a_1 has weight 1 or -1, the kernel's basis consists of the
        a_i - (t^w_i - 1)/(t^w_1 - 1) a_1.

        Raises
        ------
        AlgebraError
            If Euclid's algorithm stops over Z, which it cannot do over a field or for a cover.

        Examples
        --------
        >>> c = ChainComplex.from_matrices("t^2 - 1, t^3 - 1", "0; 0")
        >>> print(c.boundary(1) @ c.kernel().V)
        [[-1 + t, 0]]
        """
        return self._echelon[0]

    def cycles(self) -> LaurentMatrix:
        """The basis of the kernel of boundary(1), as columns."""
        (V, _), rank = self._echelon
        return V.submatrix(range(V.shape[0]), range(rank, V.shape[1]))

    def homology(self, n: int) -> Module:
        """H_0, H_1 or H_2 as a finitely presented module.

        H_1 is presented on the basis `cycles` of the kernel of boundary(1): its relations are the columns of
        boundary(2) in that basis. H_2 is free, since the kernel of a map of free modules over a regular
        ring of dimension two is projective, hence free over these rings (R. G. Swan, Projective modules over
        Laurent polynomial rings, Trans. Amer. Math. Soc. 237 (1978); cited from memory); it is H_2 of the
        presentation complex, in which each redundant relator adds a summand.

        Raises
        ------
        AlgebraError
            For another n, or as `kernel`.

        Examples
        --------
        >>> c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2; -1 + t - t^2")
        >>> print(c.homology(0).presentation_matrix(), c.homology(1).presentation_matrix())
        [[-1 + t, -1 + t]] [[-1 + t - t^2]]
        """
        if n == 0:
            return Module(self.boundary1, title="H_0")
        if n == 1:
            return self._first_homology
        if n == 2:
            return Module(LaurentMatrix.zero(self.rank(2), 0, self.ring), title="H_2")
        raise AlgebraError(f"there is no H_{n} here", accepted="n = 0, 1, 2")

    @cached_property
    def _first_homology(self) -> Module:
        (_, V_inverse), rank = self._echelon
        edges = len(self.generators)
        relations = V_inverse.submatrix(range(rank, edges), range(edges)) @ self.boundary2
        return Module(relations, basis=self.cycles(), ambient=self.generators, title="H_1")

    def relative_homology(self, n: int = 1) -> Module:
        """H_1 relative to the vertices, the cokernel of boundary(2): generators are the lifted edges.

        Raises
        ------
        AlgebraError
            For n other than 1.
        """
        if n != 1:
            raise AlgebraError(f"relative H_{n} is not offered", accepted="n = 1")
        return Module(self.boundary2, ambient=self.generators, title="H_1 relative to the vertices")

    @cached_property
    def _ranks(self) -> tuple[int, int]:
        return self.boundary1.rank(), self.boundary2.rank()

    def rank(self, n: int) -> int:
        """The rank of H_n over the field of fractions.

        Raises
        ------
        AlgebraError
            Unless n is 0, 1 or 2.

        Examples
        --------
        >>> c = ChainComplex.from_matrices("t - 1, t - 1", "1 - t + t^2; -1 + t - t^2")
        >>> c.rank(0), c.rank(1), c.rank(2)
        (0, 0, 0)
        """
        first, second = self._ranks
        vertices, edges = self.boundary1.shape
        cells = self.boundary2.shape[1]
        ranks = {0: vertices - first, 1: edges - first - second, 2: cells - second}
        if n not in ranks:
            raise AlgebraError(f"there is no H_{n} here", accepted="n = 0, 1, 2")
        return ranks[n]

    def place(self, n: int, row: int | str, column: int | str) -> Place:
        """The place of an entry of boundary(n): rows and columns by number from 1 or by name.

        Raises
        ------
        AlgebraError
            If there is no such row or column.

        Examples
        --------
        >>> c = ChainComplex.from_matrices("t - 1, t - 1", "0; 0", generators=["a", "b"])
        >>> str(c.place(2, "b", "r1"))
        'entry:2:2:1'
        """
        shape = self.boundary(n).shape
        vertices = tuple(f"e{i}" for i in range(1, shape[0] + 1))
        names = (vertices, self.generators) if n == 1 else (self.generators, self.relators)
        numbers = (
            _number(index, known, what)
            for index, known, what in zip((row, column), names, ("row", "column"), strict=True)
        )
        return Place("entry", (n, *numbers))

    def __str__(self) -> str:
        vertices, edges = self.boundary1.shape
        text = ring(self.ring).text
        return f"{text}^{self.boundary2.shape[1]} -> {text}^{edges} -> {text}^{vertices}"

    def __repr__(self) -> str:
        return f"ChainComplex({self})"

    def latex(self) -> str:
        """The ranks of the chain modules in LaTeX, without dollar signs."""
        vertices, edges = self.boundary1.shape
        symbol = ring(self.ring).latex
        powers = (f"{symbol}^{{{n}}}" for n in (self.boundary2.shape[1], edges, vertices))
        two, one, zero = powers
        return f"{two} \\xrightarrow{{\\partial_2}} {one} \\xrightarrow{{\\partial_1}} {zero}"

    def _repr_latex_(self) -> str:
        return f"${self.latex()}$"

    def to_data(self) -> dict[str, Any]:
        """Both matrices and the names; the cover, if any, travels as a `Cover`."""
        return {
            "boundary1": self.boundary1.to_data(),
            "boundary2": self.boundary2.to_data(),
            "generators": list(self.generators),
            "relators": list(self.relators),
        }

    @classmethod
    def from_data(cls, data: Any) -> ChainComplex:
        """Read `to_data` back; the product of the matrices is checked."""
        return cls(
            LaurentMatrix.from_data(data["boundary1"]),
            LaurentMatrix.from_data(data["boundary2"]),
            tuple(map(str, data["generators"])),
            tuple(map(str, data["relators"])),
        )


def _matrix(value: LaurentMatrix | Sequence[Sequence[Entry]] | str, over: RingName) -> LaurentMatrix:
    if isinstance(value, LaurentMatrix):
        return value.change_ring(over)
    if isinstance(value, str):
        return LaurentMatrix.parse(value, over)
    return LaurentMatrix(value, over)


def _number(index: int | str, names: Sequence[str], what: str) -> int:
    if isinstance(index, str) and index in names:
        return names.index(index) + 1
    if isinstance(index, int) and 1 <= index <= len(names):
        return index
    raise AlgebraError(
        f"there is no {what} {index!r}", accepted=f"1 to {len(names)}, or {', '.join(names[:30])}"
    )


def _column_echelon(matrix: LaurentMatrix) -> tuple[KernelBasis, int]:
    """Column operations that bring a matrix to echelon form, and the number of its nonzero columns."""
    rows, width = matrix.sparse_rows(), matrix.shape[1]
    operations = Operations((0, width), matrix.over)
    pivots: list[int] = []
    for row in range(len(rows)):
        active = [j for j in sorted(rows[row]) if j not in pivots]
        while len(active) > 1:
            pivot = _reduce_row(rows, row, active, operations)
            if pivot is None:
                raise AlgebraError(
                    "Euclid's algorithm on the entries of boundary(1) stops over Z[t,1/t]: "
                    + ", ".join(str(rows[row][j]) for j in active[:4]),
                    where=f"row {row + 1} of boundary(1)",
                    accepted='a complex over a field, .over("Q"), or entries such as t^w - 1',
                )
            active = [j for j in active if j in rows[row]]
        pivots += active
    rest = [j for j in range(width) if j not in pivots]
    transforms = operations.transforms([], pivots + rest)
    return KernelBasis(transforms.right, transforms.right_inverse), len(pivots)


def _reduce_row(
    rows: list[dict[int, LaurentPolynomial]], row: int, active: Sequence[int], operations: Operations
) -> int | None:
    """Subtract multiples of one column, of the shortest entry that does something, from the other columns."""
    entries = rows[row]
    for pivot in sorted(active, key=lambda j: (entries[j].span(), j)):
        factors = {j: q for j in active if j != pivot and (q := _quotient(entries[j], entries[pivot]))}
        for j, factor in factors.items():
            operations.subtract_column(j, factor, pivot)
            for line in rows[row:]:
                if value := line.get(pivot):
                    left = subtract_product(line[j], factor, value) if j in line else -(factor * value)
                    if left:
                        line[j] = left
                    else:
                        line.pop(j, None)
        if factors:
            return pivot
    return None


def _quotient(f: LaurentPolynomial, g: LaurentPolynomial) -> LaurentPolynomial | None:
    """A q for which f - q g is 0 or has smaller span than g, if one is at hand; None or 0 if not."""
    if f == g:
        return LaurentPolynomial.constant(1, f.over)
    if f.span() < g.span():
        return None
    if ring(f.over).is_field:
        return divmod(f, g)[0]
    if abs(g.coefficients[-1]) == 1:
        # The leading coefficient is a unit, so the division over Q stays over Z.
        return divmod(f.change_ring("Q"), g.change_ring("Q"))[0].change_ring("Z")
    if abs(g.coefficients[0]) == 1:
        quotient = _quotient(f.conjugate(), g.conjugate())
        return quotient and quotient.conjugate()
    return f.exact_division(g) if g.divides(f) else None
