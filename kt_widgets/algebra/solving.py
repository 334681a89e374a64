"""Linear equations over Laurent polynomials: scaled right inverses, quotients of matrices, spare columns."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import combinations, product

from kt_widgets.algebra.fitting import minors
from kt_widgets.algebra.flint_rings import integer_kernel, integer_solution, ring
from kt_widgets.algebra.ideals import Ideal
from kt_widgets.algebra.laurent import LaurentPolynomial, gcd_of
from kt_widgets.algebra.matrix import LaurentMatrix
from kt_widgets.algebra.sparse import fraction_free, scaled_inverse
from kt_widgets.errors import LimitError

__all__ = ["MAX_UNKNOWNS", "homomorphisms", "quotient", "scaled_right_inverses"]

MAX_UNKNOWNS = 300
"""Most unknown integers of a linear system that a bounded search sets up."""


def scaled_right_inverses(matrix: LaurentMatrix) -> tuple[tuple[LaurentPolynomial, LaurentMatrix], ...]:
    """For each f of the canonical basis of Fitt_0, over Z, a T with A T = f times the identity.

    The minor of g columns times the identity is A times their adjugate, and f is a combination of minors.

    Raises
    ------
    LimitError
        As `kt_widgets.algebra.fitting.fitting_ideal`.

    Examples
    --------
    >>> a = LaurentMatrix([["2", "1 - 2t"]])
    >>> ((f, T),) = scaled_right_inverses(a)
    >>> print(f, "|", T, "|", a @ T)
    1 | [[t],
     [1]] | [[1]]
    """
    height, width = matrix.shape
    rows = matrix.sparse_rows()
    found = dict(minors(matrix, height))
    places = list(found)
    proof = Ideal.certificate(tuple(found.values()))
    results = []
    for f, combination in zip(proof.basis, proof.basis_cofactors, strict=True):
        total = LaurentMatrix.zero(width, height, matrix.over)
        for k, cofactor in combination:
            columns = places[k][1]
            determinant, adjugate = scaled_inverse(rows, columns, ring(matrix.over))
            unit = determinant.unit_to(found[places[k]])
            assert unit is not None
            entries = {
                (columns[i], j): g * unit * cofactor
                for i, line in enumerate(adjugate)
                for j, g in enumerate(line)
            }
            total = total + LaurentMatrix.from_entries(entries, (width, height), matrix.over)
        results.append((f, total))
    return tuple(results)


def quotient(matrix: LaurentMatrix, target: LaurentMatrix) -> LaurentMatrix | None:
    """An X with B X = V, or None.

    With independent columns there is at most one, found by exact division, so that None means that there is
    none. Otherwise, over Z, entries within a few powers of t of those of V are tried, and None means that no
    X was found.

    Examples
    --------
    >>> print(quotient(LaurentMatrix([["1 - t"], ["2"]]), LaurentMatrix([["1 - t^2"], ["2 + 2t"]])))
    [[1 + t]]
    >>> quotient(LaurentMatrix([["2"]]), LaurentMatrix([["3"]])) is None
    True
    >>> print(quotient(LaurentMatrix([["2", "1 - t"]]), LaurentMatrix([["1 + t"]])))
    [[1 ],
     [-1]]
    """
    width = matrix.shape[1]
    rows = matrix.sparse_rows()
    found = fraction_free(rows, range(width), ring(matrix.over))
    if found.rank < width:
        return _small_quotient(matrix, target)
    determinant, inverse = scaled_inverse([rows[i] for i in found.rows], range(width), ring(matrix.over))
    scaled = LaurentMatrix(inverse, matrix.over, (width, width)) @ target.submatrix(
        found.rows, range(target.shape[1])
    )
    if not all(determinant.divides(f) for _, _, f in scaled.entries()):
        return None
    result = scaled._mapped(lambda f: f.exact_division(determinant))
    return result if matrix @ result == target else None


def _small_quotient(matrix: LaurentMatrix, target: LaurentMatrix) -> LaurentMatrix | None:
    if matrix.over != "Z":
        return None
    (height, width), count = matrix.shape, target.shape[1]
    entries: dict[tuple[int, int], LaurentPolynomial] = {}
    for j in range(count):
        column = target.column(j)
        window = _window([f for f in column if f])
        unknowns = [(i, e) for i in range(width) for e in window]
        if len(unknowns) > MAX_UNKNOWNS:
            return None
        products = [_coefficients([matrix[i, k] for i in range(height)], e) for k, e in unknowns]
        aim = _coefficients(list(column), 0)
        places = sorted({*aim, *(place for product in products for place in product)})
        solution = integer_solution(
            [[product.get(place, 0) for place in places] for product in products],
            [aim.get(place, 0) for place in places],
        )
        if solution is None:
            return None
        for i in range(width):
            terms = {e: c for (k, e), c in zip(unknowns, solution, strict=True) if k == i}
            entries[i, j] = LaurentPolynomial.from_terms(terms)
    return LaurentMatrix.from_entries(entries, (width, count))


def _window(polynomials: list[LaurentPolynomial]) -> range:
    """The exponents of some polynomials, and a few more on both sides."""
    low = min((f.lowest for f in polynomials), default=0)
    high = max((f.highest for f in polynomials), default=0)
    return range(low - 2, high + 3)


def _coefficients(column: list[LaurentPolynomial], shift: int) -> dict[tuple[int, int], int]:
    """The coefficients of t^shift times a column, by row and exponent."""
    return {(i, e + shift): c for i, f in enumerate(column) for e, c in f.terms().items()}


def homomorphisms(source: LaurentMatrix, target: LaurentMatrix) -> Iterator[LaurentMatrix]:
    """Matrices F over Z with F A = B X for some X: homomorphisms of the cokernels, small ones first.

    An integer basis of those with F and X within a few powers of t, then signed sums of two and of three.

    Raises
    ------
    LimitError
        Beyond `MAX_UNKNOWNS` unknown integers, and as `kt_widgets.algebra.fitting.fitting_ideal`.

    Examples
    --------
    >>> [str(F) for F in homomorphisms(LaurentMatrix([["2"]]), LaurentMatrix([["6"]]))]
    ['[[3]]']
    """
    (g, r), (h, s) = source.shape, target.shape
    span = min(gcd_of(f for _, f in minors(target, h)).span(), 12)
    if h == 0:
        yield LaurentMatrix.zero(0, g)
    window = range(span + 1)
    outer = range(-span - 1, span + 2)
    unknowns = [("F", i, j, e) for i in range(h) for j in range(g) for e in window]
    unknowns += [("X", i, j, e) for i in range(s) for j in range(r) for e in outer]
    if len(unknowns) > MAX_UNKNOWNS:
        raise LimitError(
            f"{len(unknowns)} unknown coefficients of homomorphisms", accepted=f"at most {MAX_UNKNOWNS}"
        )
    images: list[dict[tuple[int, int, int], int]] = []
    for kind, i, j, e in unknowns:
        if kind == "F":
            image = {(i, k, x + e): c for k in range(r) for x, c in source[j, k].terms().items()}
        else:
            image = {(k, j, x + e): -c for k in range(h) for x, c in target[k, i].terms().items()}
        images.append(image)
    places = sorted({place for image in images for place in image})
    kernel = integer_kernel([[image.get(p, 0) for image in images] for p in places], len(unknowns))
    maps = []
    for vector in kernel:
        terms = ((i, j, e, c) for (kind, i, j, e), c in zip(unknowns, vector, strict=True) if kind == "F")
        maps.append(LaurentMatrix.from_monomials(terms, (h, g)))
    for size in range(1, 4):
        for chosen in combinations([F for F in maps if not F.is_zero()], size):
            for signs in product((1, -1), repeat=size - 1):
                yield sum((F * sign for F, sign in zip(chosen[1:], signs, strict=True)), chosen[0])
