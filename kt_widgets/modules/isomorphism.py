"""`Isomorphism`: two cokernels are isomorphic, with the matrices that prove it by multiplication."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import product
from typing import Any

from kt_widgets.algebra.elimination import Transforms, check_equal, eliminate, spare_columns
from kt_widgets.algebra.factoring import irreducible_factors
from kt_widgets.algebra.fitting import fitting_ideal
from kt_widgets.algebra.flint_rings import RingName
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.shortening import shorten
from kt_widgets.algebra.smith import invariant_factors, smith_form
from kt_widgets.algebra.solving import homomorphisms, quotient, scaled_right_inverses
from kt_widgets.errors import AlgebraError, CertificateError
from kt_widgets.text.portable import Portable

__all__ = [
    "MAX_TRIALS",
    "Isomorphism",
    "companion_form",
    "cyclic_form",
    "diagonal_form",
    "direct_sum",
    "found_isomorphism",
    "primary_form",
    "reduced_form",
    "short_form",
]

MAX_TRIALS = 1000
"""Most elements, or homomorphisms, that a search tries."""


@dataclass(frozen=True)
class Isomorphism(Portable, kind="isomorphism"):
    """An isomorphism of the cokernel of A onto that of B, and its inverse.

    ``forward`` writes the generators of A's cokernel in those of B's, ``backward`` those of B's in A's.

    Attributes
    ----------
    source, target : LaurentMatrix
        A and B; rows are generators, columns relations.
    forward, backward : LaurentMatrix
        F and G.
    forward_relations, backward_relations : LaurentMatrix
        X and Y with F A = B X and G B = A Y: relations go to relations.
    source_identity, target_identity : LaurentMatrix
        Z and W with G F = 1 + A Z and F G = 1 + B W: both ways round it is the identity up to relations.

    Examples
    --------
    >>> i = reduced_form(LaurentMatrix([["t", "1 + t"], ["-1", "t"]]))
    >>> print(i.target, "|", i.forward, "|", i.verify())
    [[t^-1 + 1 + t]] | [[t^-1, 1]] | True
    """

    source: LaurentMatrix
    target: LaurentMatrix
    forward: LaurentMatrix
    backward: LaurentMatrix
    forward_relations: LaurentMatrix
    backward_relations: LaurentMatrix
    source_identity: LaurentMatrix
    target_identity: LaurentMatrix

    def verify(self) -> bool:
        """Multiply everything out.

        Raises
        ------
        CertificateError
            Naming the first wrong entry of the first wrong product.
        """
        A, B, F, G = self.source, self.target, self.forward, self.backward
        one_A, one_B = (LaurentMatrix.identity(m.shape[0], m.over) for m in (A, B))
        try:
            check_equal(F @ A, B @ self.forward_relations, "forward source")
            check_equal(G @ B, A @ self.backward_relations, "backward target")
            check_equal(G @ F, one_A + A @ self.source_identity, "backward forward")
            check_equal(F @ G, one_B + B @ self.target_identity, "forward backward")
        except AlgebraError as error:
            raise CertificateError(f"the matrices do not fit: {error.what}", where="shapes") from None
        return True

    def inverse(self) -> Isomorphism:
        """The same, read from the target to the source."""
        return Isomorphism(
            self.target,
            self.source,
            self.backward,
            self.forward,
            self.backward_relations,
            self.forward_relations,
            self.target_identity,
            self.source_identity,
        )

    def __matmul__(self, other: Isomorphism) -> Isomorphism:
        """First `other`, then this."""
        if not isinstance(other, Isomorphism):
            return NotImplemented
        if other.target != self.source:
            raise AlgebraError(
                "the first isomorphism does not end where the second one starts",
                accepted="one whose target is the other's source",
            )
        return Isomorphism(
            other.source,
            self.target,
            self.forward @ other.forward,
            other.backward @ self.backward,
            self.forward_relations @ other.forward_relations,
            other.backward_relations @ self.backward_relations,
            other.source_identity + other.backward_relations @ self.source_identity @ other.forward,
            self.target_identity + self.forward_relations @ other.target_identity @ self.backward,
        )

    def __str__(self) -> str:
        one, two = (
            f"of shape {m.shape}" if max(m.shape) > 4 else str(m) for m in (self.forward, self.backward)
        )
        return f"forward {one}, backward {two}"

    def latex(self) -> str:
        """Both matrices in LaTeX, without dollar signs."""
        return f"{self.forward.latex()}, \\quad {self.backward.latex()}"

    def _repr_latex_(self) -> str | None:
        shown = self.forward._repr_latex_() and self.backward._repr_latex_()
        return f"$\\displaystyle {self.latex()}$" if shown else None

    def to_data(self) -> dict[str, Any]:
        """The eight matrices by name."""
        return {name: getattr(self, name).to_data() for name in _NAMES}

    @classmethod
    def from_data(cls, data: Any) -> Isomorphism:
        """Read `to_data` back; call `verify` before believing it."""
        return cls(*(LaurentMatrix.from_data(data[name]) for name in _NAMES))


_NAMES = (
    "source",
    "target",
    "forward",
    "backward",
    "forward_relations",
    "backward_relations",
    "source_identity",
    "target_identity",
)


def _without_units(matrix: LaurentMatrix, transforms: Transforms, core: LaurentMatrix) -> Isomorphism:
    """From a matrix A to a core, where the transforms make A diag(1, ..., 1, core)."""
    (height, width), (low, narrow) = matrix.shape, core.shape
    units = height - low
    rows, columns = range(height), range(width)
    P, P_inverse, Q, Q_inverse = (
        transforms.left,
        transforms.left_inverse,
        transforms.right,
        transforms.right_inverse,
    )
    return Isomorphism(
        matrix,
        core,
        P.submatrix(range(units, height), rows),
        P_inverse.submatrix(rows, range(units, height)),
        Q_inverse.submatrix(range(units, width), columns),
        Q.submatrix(columns, range(units, width)),
        -(Q.submatrix(columns, range(units)) @ P.submatrix(range(units), rows)),
        LaurentMatrix.zero(narrow, low, matrix.over),
    )


def _without_columns(
    matrix: LaurentMatrix, spares: list[tuple[int, dict[int, LaurentPolynomial]]]
) -> Isomorphism:
    """From a matrix to that of its other columns; spare ones come with vectors, as in `spare_columns`."""
    (height, width), over = matrix.shape, matrix.over
    one = LaurentPolynomial.constant(1, over)
    spans = {j: {j: one} for j in range(width)}
    for spare, vector in spares:
        factor = -vector[spare].inverse()
        span = spans.pop(spare)
        for j, f in vector.items():
            if j != spare:
                for k, g in span.items():
                    spans[j][k] = spans[j].get(k, one - one) + factor * f * g
    kept = list(spans)
    span_entries = {(i, k): f for i, j in enumerate(kept) for k, f in spans[j].items()}
    identity = LaurentMatrix.identity(height, over)
    return Isomorphism(
        matrix,
        matrix.submatrix(range(height), kept),
        identity,
        identity,
        LaurentMatrix.from_entries(span_entries, (len(kept), width), over),
        LaurentMatrix.from_entries({(j, i): one for i, j in enumerate(kept)}, (width, len(kept)), over),
        LaurentMatrix.zero(width, height, over),
        LaurentMatrix.zero(len(kept), height, over),
    )


def reduced_form(matrix: LaurentMatrix) -> Isomorphism:
    """To a smaller matrix: unit pivots and spare columns are taken out.

    Examples
    --------
    >>> reduced_form(LaurentMatrix([["2", "1 - t"], ["0", "1"]])).target
    LaurentMatrix([['2']])
    """
    elimination = eliminate(matrix)
    first = _without_units(matrix, elimination.transforms(), elimination.core)
    return _without_columns(first.target, spare_columns(first.target)) @ first


def short_form(matrix: LaurentMatrix) -> Isomorphism:
    """`reduced_form`, and then row and column operations that make the entries shorter.

    Examples
    --------
    >>> print(short_form(LaurentMatrix([["t - 2", "t^3 - 2t^2"], [0, "2t - 1"]])).target)
    [[-2 + t, 0      ],
     [0,      -1 + 2t]]
    """
    result = reduced_form(matrix)
    while True:
        core, transforms = shorten(result.target)
        result = _without_units(result.target, transforms, core) @ result
        if not any(f.is_unit() for _, _, f in core.entries()):
            return result
        result = reduced_form(core) @ result


def diagonal_form(matrix: LaurentMatrix) -> Isomorphism:
    """Over a field: to the diagonal matrix of the invariant factors, with rows of zeros for free summands.

    Examples
    --------
    >>> print(diagonal_form(LaurentMatrix([["t - 2", 0], [0, "2t - 1"]], over="Q")).target)
    [[1 - 5/2 t + t^2]]
    """
    smith = smith_form(matrix)
    units = sum(1 for f in smith.diagonal if f.is_unit())
    (height, width), D = matrix.shape, smith.D
    core = D.submatrix(range(units, height), range(units, width))
    first = _without_units(matrix, Transforms(smith.U, smith.U_inverse, smith.V, smith.V_inverse), core)
    one = LaurentPolynomial.constant(1, matrix.over)
    zeros = set(range(core.shape[1])) - {j for _, j, _ in core.entries()}
    return _without_columns(core, [(j, {j: one}) for j in sorted(zeros)]) @ first


def direct_sum(parts: Sequence[Isomorphism], over: RingName) -> Isomorphism:
    """The isomorphism of the sums: every matrix is block diagonal.

    Examples
    --------
    >>> f = companion_form(LaurentPolynomial.parse("t - 2", "Q"))
    >>> print(direct_sum([f, f], "Q").target)
    [[-2 + t, 0     ],
     [0,      -2 + t]]
    """
    empty = LaurentMatrix.zero(0, 0, over)
    blocks = (LaurentMatrix.blocks(empty, *(getattr(part, name) for part in parts)) for name in _NAMES)
    return Isomorphism(*blocks)


def primary_form(matrix: LaurentMatrix) -> Isomorphism:
    """Over a field: to the diagonal matrix of prime powers, with rows of zeros for free summands.

    Examples
    --------
    >>> i = primary_form(LaurentMatrix([["(1 - t)^2 (2 - t)"]], over="Q"))
    >>> print(i.target, i.verify())
    [[-2 + t, 0           ],
     [0,      1 - 2t + t^2]] True
    """
    first = diagonal_form(matrix)
    factors = [first.target[i, i] for i in range(first.target.shape[1])]
    free = LaurentMatrix.zero(first.target.shape[0] - len(factors), 0, matrix.over)
    parts = [*map(_split_factor, factors), _without_columns(free, [])]
    return direct_sum(parts, matrix.over) @ first


def _split_factor(f: LaurentPolynomial) -> Isomorphism:
    """Over a field: from R/f to the sum of the R/p^e of its irreducible factors.

    The summand of p^e in R/f is generated by g = f/p^e. With u the inverse of g modulo p^e, 1 is the sum of
    the u g modulo f (Chinese remainder theorem).
    """
    over = f.over
    one = LaurentPolynomial.constant(1, over)
    powers = [p**e for p, e in irreducible_factors(f)]
    rest = [f.exact_division(power) for power in powers]
    shares = []
    for power, g in zip(powers, rest, strict=True):
        divisor, u, _ = g.bezout(power)
        shares.append(divmod(u * divisor.inverse(), power)[1])
    parts = [u * g for u, g in zip(shares, rest, strict=True)]
    size = len(powers)
    crossed = {
        (i, j): (u * g - (one if i == j else 0)).exact_division(power)
        for i, (u, power) in enumerate(zip(shares, powers, strict=True))
        for j, g in enumerate(rest)
    }
    column = {(i, 0): u for i, u in enumerate(shares)}
    return Isomorphism(
        LaurentMatrix([[f]]),
        LaurentMatrix.from_entries({(i, i): power for i, power in enumerate(powers)}, (size, size), over),
        LaurentMatrix.from_entries(column, (size, 1), over),
        LaurentMatrix([rest], over, (1, size)),
        LaurentMatrix.from_entries({(i, 0): g for i, g in enumerate(parts)}, (size, 1), over),
        LaurentMatrix([[one] * size], over, (1, size)),
        LaurentMatrix([[(sum(parts, one - one) - one).exact_division(f)]]),
        LaurentMatrix.from_entries(crossed, (size, size), over),
    )


def companion_form(f: LaurentPolynomial) -> Isomorphism:
    """From R/f, f monic with lowest exponent 0, to the cokernel of t - C, C the companion matrix of f.

    The generators of the latter are the powers 1, t, ..., t^(d-1) of t in R/f.

    Examples
    --------
    >>> i = companion_form(LaurentPolynomial.parse("1 - 3t + t^2", "Q"))
    >>> print(i.target, i.backward, i.verify())
    [[t,  1     ],
     [-1, -3 + t]] [[1, t]] True
    """
    over, size = f.over, f.span()
    t, one = LaurentPolynomial.monomial(1, 1, over), LaurentPolynomial.constant(1, over)
    target = {(i, i): t for i in range(size)} | {(i + 1, i): -one for i in range(size - 1)}
    for i, c in enumerate(f.coefficients[:-1]):
        target[i, size - 1] = target.get((i, size - 1), t - t) + c
    # f e_1 is the sum over k of its coefficients above k, as a polynomial, times column k + 1 of t - C.
    tails = {(k, 0): LaurentPolynomial(f.coefficients[k + 1 :], 0, over) for k in range(size)}
    lower = {(i, j): t ** (j - 1 - i) for j in range(size) for i in range(j)}
    return Isomorphism(
        LaurentMatrix([[f]]),
        LaurentMatrix.from_entries(target, (size, size), over),
        LaurentMatrix.from_entries({(0, 0): one} if size else {}, (size, 1), over),
        LaurentMatrix([[t**k for k in range(size)]], over, (1, size)),
        LaurentMatrix.from_entries(tails, (size, 1), over),
        LaurentMatrix.from_entries({(0, size - 1): one} if size else {}, (1, size), over),
        LaurentMatrix.zero(1, 1, over),
        LaurentMatrix.from_entries(lower, (size, size), over),
    )


# Over Z


def cyclic_form(matrix: LaurentMatrix) -> Isomorphism | None:
    """Over Z: to the canonical basis of an ideal I, as a matrix of one row, whose cokernel is Z[t,1/t]/I.

    The forward matrix writes each generator as a multiple of the one that is found, the backward matrix is
    that one; I is Fitt_0. None if Fitt_1 is not (1), so that the module is not cyclic, or if none of at most
    `MAX_TRIALS` elements generates it, which proves nothing.

    Examples
    --------
    >>> i = cyclic_form(LaurentMatrix([["2", 0], [0, "1 - 2t"]]))
    >>> print(i.target, i.backward, i.verify())
    [[-2 + 4t]] [[1],
     [1]] True
    """
    reduced = short_form(matrix)
    core = reduced.target
    if not fitting_ideal(core, 1).is_unit():
        return None
    generator = next(filter(lambda v: _generates(core, v), _elements(core.shape[0])), None)
    return None if generator is None else _by_generator(core, generator) @ reduced


def _elements(size: int) -> Iterator[LaurentMatrix]:
    """Columns to try as generators: first the unit vectors, then with more and larger coefficients."""
    pool = [LaurentPolynomial.parse(f) for f in ("0", "1", "-1", "t", "-t", "1 - t", "1 + t", "2", "-2")]
    vectors = product(range(len(pool)), repeat=min(size, 4))
    ordered = sorted((v for v in vectors if not v or 1 in v), key=lambda v: (sum(v), v))
    for vector in ordered[:MAX_TRIALS]:
        yield LaurentMatrix.from_entries({(i, 0): pool[k] for i, k in enumerate(vector) if k}, (size, 1))


def _generates(matrix: LaurentMatrix, columns: LaurentMatrix) -> bool:
    """Whether the columns generate the cokernel; checked modulo 2 and 3 first, which is quick."""
    together = _beside(matrix, columns)
    height = matrix.shape[0]
    for p in (2, 3):
        factors = invariant_factors(together.change_ring(p))
        if len(factors) < height or not all(f.is_unit() for f in factors):
            return False
    return fitting_ideal(together, 0).is_unit()


def _beside(left: LaurentMatrix, right: LaurentMatrix) -> LaurentMatrix:
    width = left.shape[1]
    entries = {(i, j): f for i, j, f in left.entries()}
    entries.update(((i, width + j), f) for i, j, f in right.entries())
    return LaurentMatrix.from_entries(entries, (left.shape[0], width + right.shape[1]), left.over)


def _by_generator(matrix: LaurentMatrix, generator: LaurentMatrix) -> Isomorphism:
    """From a matrix A to the basis of I = Fitt_0, given a column v that generates the cokernel.

    (A v)(Y, g) = 1 gives the multiples g; with A T = f for f in I the relations f v are A (T v). What lies in
    I is a combination of its basis.
    """
    width = matrix.shape[1]
    height = matrix.shape[0]
    scaled = scaled_right_inverses(matrix)
    ideal = Ideal([f for f, _ in scaled])
    row = LaurentMatrix([[f for f, _ in scaled]], "Z", (1, len(scaled)))
    ((_, right),) = scaled_right_inverses(_beside(matrix, generator))
    multiples = right.submatrix([width], range(height))
    rest = right.submatrix(range(width), range(height))
    backward_entries = {(i, j): f for j, (_, T) in enumerate(scaled) for i, _, f in (T @ generator).entries()}
    return Isomorphism(
        matrix,
        row,
        multiples,
        generator,
        _over_basis(ideal, multiples @ matrix),
        LaurentMatrix.from_entries(backward_entries, (width, len(scaled))),
        -rest,
        _over_basis(ideal, multiples @ generator - LaurentMatrix.identity(1)),
    )


def _over_basis(ideal: Ideal, row: LaurentMatrix) -> LaurentMatrix:
    """The X with basis X = row, for a row of elements of the ideal."""
    entries: dict[tuple[int, int], LaurentPolynomial] = {}
    for _, j, f in row.entries():
        cofactors = ideal.cofactors(f)
        assert cofactors is not None
        entries.update(((i, j), q) for i, q in enumerate(cofactors))
    return LaurentMatrix.from_entries(entries, (len(ideal.basis), row.shape[1]))


def found_isomorphism(source: LaurentMatrix, target: LaurentMatrix) -> Isomorphism | None:
    """Over Z: an isomorphism of the cokernels found by searching among small homomorphisms, or None.

    None proves nothing. For each homomorphism F that is onto, (B F)(Y, G) = 1 gives the inverse G; what is
    left is to divide by A and B.

    Examples
    --------
    >>> one, other = LaurentMatrix([["2", 0], [0, "3t"]]), LaurentMatrix([["3", 0], [0, "2"]])
    >>> found_isomorphism(one, other).verify()
    True
    """
    start, end = short_form(source), short_form(target)
    A, B = start.target, end.target
    for count, F in enumerate(homomorphisms(A, B)):
        if count == MAX_TRIALS:
            break
        if _generates(B, F) and (inner := _with_inverse(A, B, F)):
            return end.inverse() @ inner @ start
    return None


def _with_inverse(A: LaurentMatrix, B: LaurentMatrix, F: LaurentMatrix) -> Isomorphism | None:
    height, width = B.shape
    ((_, right),) = scaled_right_inverses(_beside(B, F))
    G = right.submatrix(range(width, width + A.shape[0]), range(height))
    rest = right.submatrix(range(width), range(height))
    X, Y = quotient(B, F @ A), quotient(A, G @ B)
    Z = quotient(A, G @ F - LaurentMatrix.identity(A.shape[0]))
    return None if X is None or Y is None or Z is None else Isomorphism(A, B, F, G, X, Y, Z, -rest)
