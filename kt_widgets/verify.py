"""Verify the chain of evidence in a dossier, or one certificate: ``python verify.py FILE.json``.

This file stands alone: it needs Python's standard library (3.11 or later) and nothing else, and a copy
travels in every dossier. It takes no result on trust. Whatever follows from the line that was typed is worked
out again (planar code, relators, boundary matrices, minors); whatever was found by a search is checked by
multiplying (inverse matrices, Smith forms, generators of ideals). One line is printed for each check. Exit
code 0: all hold; 1: some fail, with their places; 2: the file cannot be read.

The file, version 1
-------------------
All that is numbered is numbered from 1. A polynomial in t is ``{"lowest": -1, "coefficients": [1, -3, 1]}``
for t^-1 - 3 + t: neither end is 0, and zero is ``{"lowest": 0, "coefficients": []}``. Coefficients are
integers; over Q also strings "p/q" in lowest terms; over F_p integers from 0 to p - 1. A matrix is
``{"shape": [rows, columns], "entries": [[i, j, polynomial], ...]}``, with the entries that are not zero, row
by row. A word is ``[["a", 1], ["b", -1], ...]``, its letters as they stand.

``format``, ``version``, ``kind``
    "kt_widgets", 1 and "dossier"; ``data`` holds what follows.
``subject``
    ``line``: the line that was typed, a notation's name and the code.
``diagram``
    ``crossings``: four edge labels round each crossing, incoming under-edge first, counter-clockwise;
    ``signs``; ``circles``: the number of components without crossings; ``arcs``: the edges of each arc, from
    one under-crossing to the next (an empty list for a circle).
``presentation``
    ``generators``: a name for each arc; ``relators``: a word for each crossing; ``generator_places`` and
    ``relator_places``: the arc and the crossing of each; ``peripheral``: ``meridian`` and ``longitude`` of
    each component, freely reduced, read from its edge of lowest number on.
``chains``
    ``weights``: the power of t of each generator; ``boundary1`` (a row) and ``boundary2`` (a column for each
    relator).
``homology``
    ``kernel`` and ``kernel_inverse``: V and its inverse with boundary1 V = (h0, 0, ..., 0), so that the other
    columns of V are a basis of the 1-cycles and H_0 is Z[t,1/t]/(h0); ``h0``; ``h1_relations``: boundary2 in
    that basis, so that H_1 is its cokernel.
``fields``
    for each of Q, F_2, F_3, F_5 a Smith form ``U`` A ``V`` = D of A = h1_relations: ``ring`` ("Q" or the
    prime), ``U``, ``U_inverse``, ``V``, ``V_inverse``, ``diagonal`` (of D), ``invariant_factors`` (of H_1:
    without units, a 0 for each free summand), ``cycles`` (a matrix: column i is a 1-cycle that generates the
    summand of invariant factor i).
``ideals``
    ``P`` boundary2 ``Q`` = [1 0; 0 ``core``], with ``P_inverse`` and ``Q_inverse``; ``alexander``: for
    k = 1, 2, ... up to the first unit ideal (or until an ideal has more than `MAX_MINORS` minors) the k-th
    Alexander ideal: ``k``; ``basis``; ``minors``: for each minor of the core that is not 0 its rows, its
    columns and for each basis element the cofactor with which they sum to the minor; ``from_minors``: for
    each basis element the rows, columns and cofactors of the minors that sum to it.
``alexander_polynomial``
    the generator of the first Alexander ideal; for a knot the symmetric one with value 1 at 1.
``digests``
    the SHA-256 of each of the sections from ``subject`` on, as JSON with sorted keys and without spaces. They
    guard against accidents and prove nothing.

Certificates
------------
The package's ``to_json`` writes them with the same ``format`` and ``version``. Here all that is numbered
in the file is numbered from 0, a polynomial has also ``over`` ("Z", "Q" or a prime), and so has a matrix; a
combination is ``[[index, cofactor], ...]``. The places named here count from 1 all the same. By ``kind``:

``smith form``, ``integer smith form``
    ``U`` ``matrix`` ``V`` = ``D``, with ``U_inverse`` and ``V_inverse``; over a field, or of integers.
``module certificate``
    ``smith`` and the ``factors`` of the cokernel: without units, a 0 for each free summand.
``isomorphism``
    of cokernels, ``source`` A to ``target`` B: ``forward`` A = B ``forward_relations``, ``backward`` B =
    A ``backward_relations``, ``backward`` ``forward`` = 1 + A ``source_identity``, ``forward`` ``backward`` =
    1 + B ``target_identity``.
``ideal certificate``
    ``generators`` and the canonical ``basis``; ``basis_cofactors`` and ``generator_cofactors``: each as a
    combination of the others.
``fitting certificate``
    ``P`` ``matrix`` ``Q`` = [1 0; 0 ``core``], with inverses; ``k``; ``minors``: rows and columns of the
    minors of the core that are not 0; ``basis``; ``basis_cofactors`` and ``minor_cofactors`` as above.

Comparisons, operators, cyclicity and cyclic covers are left to the package's own ``verify``.

A crossing is positive when turning the over-strand counter-clockwise by less than 180 degrees gives the
under-strand. Braid letter i is a positive crossing of strands i and i + 1. Where the strand b leaves as c
under the arc a, c = a^-1 b a at a positive and c = a b a^-1 at a negative crossing.
"""

from __future__ import annotations

import hashlib
import json
import re
import sys
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, field
from fractions import Fraction
from functools import partial
from itertools import combinations, pairwise
from math import comb, gcd, isqrt
from typing import Any

__all__ = [
    "CERTIFICATES",
    "FIELDS",
    "FORMAT",
    "KIND",
    "MAX_CORE",
    "MAX_CROSSINGS",
    "MAX_MINORS",
    "SECTIONS",
    "VERSION",
    "main",
    "results",
    "verify",
]

FORMAT = "kt_widgets"
KIND = "dossier"
VERSION = 1
SECTIONS = (
    "subject",
    "diagram",
    "presentation",
    "chains",
    "homology",
    "fields",
    "ideals",
    "alexander_polynomial",
)

Ring = str | int
"""The integers "Z", the rationals "Q", or the integers modulo a prime."""
FIELDS: tuple[Ring, ...] = ("Q", 2, 3, 5)

MAX_BYTES = 200_000_000
"""Largest file that is read."""
MAX_CROSSINGS = 100
"""Most crossings, most components without crossings and most strands of a braid."""
MAX_EXPONENT = 10**6
"""Largest exponent of t, up to sign."""
MAX_MINORS = 2000
"""An Alexander ideal with more minors of the core is left out, with those after it."""
MAX_CORE = 12
"""Most rows of the core: minors of larger ones would take too long to expand."""

MAX_WORK = 50_000_000
"""Most products of coefficients in one product of matrices, one combination, or all minors of the core."""

Number = int | Fraction
Poly = dict[int, Number]
Word = tuple[tuple[str, int], ...]
Spot = tuple[tuple[int, ...], tuple[int, ...]]
"""The rows and the columns of a minor."""


class Refusal(Exception):
    """A statement that does not hold: its place in the file, and what is wrong."""

    def __init__(self, place: str, what: str) -> None:
        super().__init__(f"{place}: {what}")


# ------------------------------------------------------------------------------------------ arithmetic


def _kept(f: Poly, p: int) -> Poly:
    """f modulo the prime p (as it is if p is 0), without coefficients that are 0."""
    return {e: c % p for e, c in f.items() if c % p} if p else {e: c for e, c in f.items() if c}


def _plus(f: Poly, g: Poly, p: int = 0, factor: Number = 1, shift: int = 0) -> Poly:
    """f + factor t^shift g."""
    total = dict(f)
    for e, c in g.items():
        total[e + shift] = total.get(e + shift, 0) + factor * c
    return _kept(total, p)


def _check_work(products: int) -> None:
    if products > MAX_WORK:
        raise OverflowError(f"{products} products of coefficients, at most {MAX_WORK} are worked out")


def _add_product(total: Poly, f: Poly, g: Poly) -> None:
    for e1, c1 in f.items():
        for e2, c2 in g.items():
            total[e1 + e2] = total.get(e1 + e2, 0) + c1 * c2


def _combination(terms: Sequence[tuple[Poly, Poly]]) -> Poly:
    """The sum of the products."""
    _check_work(sum(len(f) * len(g) for f, g in terms))
    total: Poly = {}
    for f, g in terms:
        _add_product(total, f, g)
    return _kept(total, 0)


def _normal(f: Poly) -> Poly:
    """f times the unit +-t^k that makes the lowest exponent 0 and the leading coefficient positive."""
    return {e - min(f): c if f[max(f)] > 0 else -c for e, c in f.items()}


def _rest(f: Poly, divisor: Poly, p: int) -> Poly:
    """What remains of f, without negative exponents, after division by a monic polynomial."""
    degree = max(divisor)
    while f and max(f) >= degree:
        f = _plus(f, divisor, p, -f[max(f)], max(f) - degree)
    return f


def _show(f: Poly) -> str:
    text = ""
    for e in sorted(f):
        size = str(abs(f[e])) if abs(f[e]) != 1 or not e else ""
        size += " " if e and "/" in size else ""
        power = "" if e == 0 else "t" if e == 1 else f"t^{e}"
        sign = "-" if f[e] < 0 else "" if not text else "+"
        text += f" {sign} {size}{power}" if text else f"{sign}{size}{power}"
    return text or "0"


@dataclass
class Matrix:
    """A matrix by its entries that are not 0; rows and columns count from 1."""

    rows: int
    columns: int
    entries: dict[tuple[int, int], Poly] = field(default_factory=dict)


def _product(a: Matrix, b: Matrix, p: int = 0) -> Matrix:
    by_row: dict[int, list[tuple[int, Poly]]] = {}
    for (k, j), g in b.entries.items():
        by_row.setdefault(k, []).append((j, g))
    _check_work(sum(len(f) * len(g) for (_, k), f in a.entries.items() for _, g in by_row.get(k, ())))
    sums: dict[tuple[int, int], Poly] = {}
    for (i, k), f in a.entries.items():
        for j, g in by_row.get(k, ()):
            _add_product(sums.setdefault((i, j), {}), f, g)
    kept = {spot: _kept(total, p) for spot, total in sums.items()}
    return Matrix(a.rows, b.columns, {spot: f for spot, f in kept.items() if f})


def _identity(n: int) -> Matrix:
    return Matrix(n, n, {(i, i): {0: 1} for i in range(1, n + 1)})


def _compare(place: str, found: Matrix, expected: Matrix) -> None:
    """Refuse at the first entry, row by row, in which the two differ."""
    for i, j in sorted(found.entries.keys() | expected.entries.keys()):
        f, g = found.entries.get((i, j), {}), expected.entries.get((i, j), {})
        if f != g:
            raise Refusal(f"{place}[{i},{j}]", f"{_show(f)}, where {_show(g)} is expected")


# ------------------------------------------------------------------------- reading, with strict types


@dataclass
class Item:
    """A value of the file, the value that holds it, and the key, index or entry at which it is held."""

    __slots__ = ("at", "holder", "value")
    value: Any
    holder: Item | None
    at: str | int | tuple[int, int]

    @property
    def place(self) -> str:
        before = self.holder.place if self.holder else ""
        if isinstance(self.at, str):
            return f"{before}.{self.at}".strip(".")
        return f"{before}[{self.at}]" if isinstance(self.at, int) else f"{before}[{self.at[0]},{self.at[1]}]"

    def refuse(self, what: str) -> Refusal:
        return Refusal(self.place or "dossier", what)

    def fields(self, *keys: str) -> list[Item]:
        """The values of an object that has just these keys."""
        if type(self.value) is not dict:
            raise self.refuse("an object is expected")
        for key in self.value:
            if key not in keys:
                raise self.refuse(f"unknown key {json.dumps(key)}")
        for key in keys:
            if key not in self.value:
                raise self.refuse(f"key {json.dumps(key)} is missing")
        return [Item(self.value[key], self, key) for key in keys]

    def items(self, length: int | None = None) -> list[Item]:
        if type(self.value) is not list:
            raise self.refuse("a list is expected")
        if length is not None and len(self.value) != length:
            raise self.refuse(f"{len(self.value)} items, where {length} are expected")
        return [Item(value, self, i) for i, value in enumerate(self.value, 1)]

    def integer(self, low: int, high: int) -> int:
        # type(), not isinstance(): True is no number here.
        if type(self.value) is not int or not low <= self.value <= high:
            raise self.refuse(f"an integer from {low} to {high} is expected")
        return self.value

    def sign(self) -> int:
        if not self.integer(-1, 1):
            raise self.refuse("1 or -1 is expected")
        return self.integer(-1, 1)

    def text(self) -> str:
        if type(self.value) is not str:
            raise self.refuse("a text is expected")
        return self.value

    def texts(self, length: int) -> list[str]:
        return [item.text() for item in self.items(length)]

    def indices(self, most: int) -> tuple[int, ...]:
        return tuple(item.integer(1, most) for item in self.items())

    def number(self, ring: Ring) -> Number:
        if type(self.value) is int and (ring in ("Z", "Q") or 0 <= self.value < int(ring)):
            return self.value
        if ring == "Q" and type(self.value) is str and re.fullmatch(r"-?[1-9][0-9]*/[1-9][0-9]*", self.value):
            try:
                fraction = Fraction(self.value)
            except ValueError as error:  # more digits than Python reads
                raise self.refuse(str(error)) from None
            if str(fraction) == self.value and fraction.denominator > 1:
                return fraction
        raise self.refuse(f"not a coefficient over {ring} in its one form")

    def poly(self, ring: Ring = "Z") -> Poly:
        start, numbers = self.fields("lowest", "coefficients")
        lowest = start.integer(-MAX_EXPONENT, MAX_EXPONENT)
        read = [item.number(ring) for item in numbers.items()]
        if not (read[0] and read[-1] if read else lowest == 0):
            raise self.refuse("neither end is 0, and zero has lowest exponent 0")
        return {lowest + i: c for i, c in enumerate(read) if c}

    def polys(self, ring: Ring = "Z", length: int | None = None) -> list[Poly]:
        return [item.poly(ring) for item in self.items(length)]

    def matrix(self, rows: int, columns: int, ring: Ring = "Z") -> Matrix:
        shape, entries = self.fields("shape", "entries")
        if [side.integer(0, 10**6) for side in shape.items(2)] != [rows, columns]:
            raise shape.refuse(f"[{rows}, {columns}] is expected")
        matrix, last = Matrix(rows, columns), (0, 0)
        for item in entries.items():
            i, j, entry = item.items(3)
            spot = (i.integer(1, rows), j.integer(1, columns))
            if spot <= last:
                raise item.refuse("entries are listed row by row, each once")
            matrix.entries[spot] = Item(entry.value, self, spot).poly(ring)
            if not matrix.entries[spot]:
                raise item.refuse("entries that are 0 are left out")
            last = spot
        return matrix

    def word(self, length: int | None = None) -> Word:
        pairs = [item.items(2) for item in self.items(length)]
        return tuple((name.text(), sign.sign()) for name, sign in pairs)


@dataclass
class Diagram:
    """A planar diagram code as it is stated."""

    crossings: list[tuple[int, ...]]
    signs: list[int]
    circles: int
    arcs: list[tuple[int, ...]]

    def following(self) -> dict[int, int]:
        """The edge after each edge, in the direction of travel."""
        after: dict[int, int] = {}
        for number, ((a, b, c, d), sign) in enumerate(zip(self.crossings, self.signs, strict=True), 1):
            for start, end in ((a, c), (d, b) if sign > 0 else (b, d)):
                if start in after:
                    raise Refusal(f"diagram.crossings[{number}]", f"edge {start} ends at two crossings")
                after[start] = end
        if sorted(after) != sorted(after.values()) or len(after) != 2 * len(self.crossings):
            raise Refusal("diagram.crossings", "an edge does not have one beginning and one end")
        return after

    def components(self) -> list[list[int]]:
        """The edges of each component that has crossings: runs of consecutive labels."""
        after, components, used = self.following(), [], 0
        while used < len(after):
            run = [used + 1]
            while after[run[-1]] != run[0]:
                if after[run[-1]] != run[-1] + 1:
                    raise Refusal("diagram.crossings", f"edge {run[-1]} is followed by {after[run[-1]]}")
                run.append(run[-1] + 1)
            components.append(run)
            used += len(run)
        return components

    def passes(self) -> dict[int, int]:
        """The crossing at the end of each edge, negative where the edge goes under."""
        ends = {}
        for number, ((a, b, _, d), sign) in enumerate(zip(self.crossings, self.signs, strict=True), 1):
            ends[a] = -number
            ends[d if sign > 0 else b] = number
        return ends

    def gauss(self) -> list[list[int]]:
        ends = self.passes()
        return [[ends[edge] for edge in run] for run in self.components()]

    def mates(self) -> dict[int, int]:
        """The other end of the edge at each end; end 4c + s is slot s of crossing c + 1, both from 0."""
        ends: dict[int, list[int]] = {edge: [] for edge in self.following()}
        for number, row in enumerate(self.crossings):
            for slot, edge in enumerate(row):
                ends[edge].append(4 * number + slot)
        return {one: other for one, two in ends.values() for one, other in ((one, two), (two, one))}

    def faces(self) -> dict[int, int]:
        """The number of the face on the left of each end, seen from its crossing."""
        mate, face_of, count = self.mates(), {}, 0
        for dart in mate:
            count += dart not in face_of
            while dart not in face_of:
                face_of[dart] = count
                # Arriving at a crossing, the walk round a face leaves by the slot clockwise of its own.
                dart = mate[dart] - mate[dart] % 4 + (mate[dart] - 1) % 4
        return face_of

    def summands(self) -> list[int]:
        """The lowest crossing of the summand of each crossing: cut through edges between the same faces."""
        ends, face_of, mate = self.passes(), self.faces(), self.mates()
        parallel: dict[frozenset[int], list[int]] = {}
        after = self.following()
        starts = {after[edge]: abs(ends[edge]) for edge in after}
        for dart, other in sorted(mate.items()):
            if dart < other:
                edge = self.crossings[dart // 4][dart % 4]
                parallel.setdefault(frozenset((face_of[dart], face_of[other])), []).append(edge)
        first = list(range(len(self.crossings) + 1))
        for edges in map(sorted, parallel.values()):
            for before, then in zip(edges, [*edges[1:], edges[0]], strict=True):
                low, high = sorted((first[abs(ends[before])], first[starts[then]]))
                first = [low if number == high else number for number in first]
        return first[1:]

    def arc_of(self) -> dict[int, int]:
        return {edge: number for number, arc in enumerate(self.arcs, 1) for edge in arc}


@dataclass
class Smith:
    ring: Ring
    U: Matrix
    U_inverse: Matrix
    V: Matrix
    V_inverse: Matrix
    diagonal: list[Poly]
    factors: list[Poly]
    cycles: Matrix


@dataclass
class Ideal:
    k: int
    basis: list[Poly]
    minors: list[tuple[Spot, list[Poly]]]
    from_minors: list[list[tuple[Spot, Poly]]]


@dataclass
class Dossier:
    """What a file states, with the right types and shapes; nothing else is known of it yet."""

    sections: dict[str, Any]
    digests: dict[str, str]
    line: str
    diagram: Diagram
    generators: list[str]
    relators: list[Word]
    generator_places: list[str]
    relator_places: list[str]
    peripheral: list[tuple[Word, Word]]
    weights: list[int]
    boundary1: Matrix
    boundary2: Matrix
    kernel: Matrix
    kernel_inverse: Matrix
    h0: Poly
    h1_relations: Matrix
    smith: list[Smith]
    P: Matrix
    P_inverse: Matrix
    Q: Matrix
    Q_inverse: Matrix
    core: Matrix
    ideals: list[Ideal]
    polynomial: Poly


def _read_diagram(section: Item) -> Diagram:
    crossings, signs, circles, arcs = section.fields("crossings", "signs", "circles", "arcs")
    rows = crossings.items()
    if len(rows) > MAX_CROSSINGS:
        raise crossings.refuse(f"at most {MAX_CROSSINGS} are read")
    most = 2 * len(rows)
    read = Diagram(
        [tuple(edge.integer(1, most) for edge in row.items(4)) for row in rows],
        [item.sign() for item in signs.items(len(rows))],
        circles.integer(0, MAX_CROSSINGS),
        [arc.indices(most) for arc in arcs.items()],
    )
    if not 0 < len(read.arcs) <= most + read.circles:
        raise arcs.refuse("there are arcs, and no more than edges and circles")
    return read


def _read_smith(section: Item, ring: Ring, g: int, r: int) -> Smith:
    """The Smith form of a g x r matrix."""
    keys = ("ring", "U", "U_inverse", "V", "V_inverse", "diagonal", "invariant_factors", "cycles")
    name, u, u_inverse, v, v_inverse, diagonal, factors, cycles = section.fields(*keys)
    if type(name.value) is not type(ring) or name.value != ring:
        raise name.refuse(f"{json.dumps(ring)} is expected")
    return Smith(
        ring,
        u.matrix(g, g, ring),
        u_inverse.matrix(g, g, ring),
        v.matrix(r, r, ring),
        v_inverse.matrix(r, r, ring),
        diagonal.polys(ring, min(g, r)),
        factors.polys(ring),
        cycles.matrix(g + 1, len(factors.items()), ring),
    )


def _read_ideal(item: Item, k: int, core: Matrix) -> Ideal:
    number, basis, minors, sums = item.fields("k", "basis", "minors", "from_minors")
    elements = basis.polys()

    def spot(rows: Item, columns: Item) -> Spot:
        return rows.indices(core.rows), columns.indices(core.columns)

    def terms(item: Item) -> list[tuple[Spot, Poly]]:
        read = [term.items(3) for term in item.items()]
        return [(spot(rows, columns), cofactor.poly()) for rows, columns, cofactor in read]

    combined = [minor.items(3) for minor in minors.items()]
    return Ideal(
        number.integer(k, k),
        elements,
        [(spot(rows, columns), c.polys("Z", len(elements))) for rows, columns, c in combined],
        [terms(item) for item in sums.items(len(elements))],
    )


def _body(data: Any, expected: str) -> Item:
    """What a file of this kind holds."""
    form, version, kind, body = Item(data, None, "").fields("format", "version", "kind", "data")
    for item, name in ((form, FORMAT), (kind, expected)):
        if item.text() != name:
            raise item.refuse(f"{json.dumps(name)} is expected")
    version.integer(VERSION, VERSION)
    return Item(body.value, None, "")


def _read(data: Any) -> Dossier:
    digests, *sections = _body(data, KIND).fields("digests", *SECTIONS)
    subject, planar, presentation, chains, homology, smith, ideals, polynomial = sections
    diagram = _read_diagram(planar)
    g, r = len(diagram.arcs), len(diagram.crossings)
    generators, relators, generator_places, relator_places, peripheral = presentation.fields(
        "generators", "relators", "generator_places", "relator_places", "peripheral"
    )
    pairs = [item.fields("meridian", "longitude") for item in peripheral.items()]
    weights, boundary1, boundary2 = chains.fields("weights", "boundary1", "boundary2")
    kernel, inverse, h0, relations = homology.fields("kernel", "kernel_inverse", "h0", "h1_relations")
    left, left_inverse, right, right_inverse, core, alexander = ideals.fields(
        "P", "P_inverse", "Q", "Q_inverse", "core", "alexander"
    )
    size = core.fields("shape", "entries")[0].items(2)[0].integer(max(0, g - r), min(g, MAX_CORE))
    remainder = core.matrix(size, r - g + size)
    return Dossier(
        {name: item.value for name, item in zip(SECTIONS, sections, strict=True)},
        {name: item.text() for name, item in zip(SECTIONS, digests.fields(*SECTIONS), strict=True)},
        subject.fields("line")[0].text(),
        diagram,
        generators.texts(g),
        [item.word(4) for item in relators.items(r)],
        generator_places.texts(g),
        relator_places.texts(r),
        [(meridian.word(), longitude.word()) for meridian, longitude in pairs],
        [item.integer(-MAX_EXPONENT, MAX_EXPONENT) for item in weights.items(g)],
        boundary1.matrix(1, g),
        boundary2.matrix(g, r),
        kernel.matrix(g, g),
        inverse.matrix(g, g),
        h0.poly(),
        relations.matrix(g - 1, r),
        [
            _read_smith(item, ring, g - 1, r)
            for item, ring in zip(smith.items(len(FIELDS)), FIELDS, strict=True)
        ],
        left.matrix(g, g),
        left_inverse.matrix(g, g),
        right.matrix(r, r),
        right_inverse.matrix(r, r),
        remainder,
        [_read_ideal(item, k, remainder) for k, item in enumerate(alexander.items(), 1)],
        polynomial.poly(),
    )


# ------------------------------------------------------------------------------------------- the checks
# Each takes what the file states and refuses, or says in words what holds now.


def _digests(d: Dossier) -> str:
    for name, section in d.sections.items():
        text = json.dumps(section, sort_keys=True, separators=(",", ":"))
        if hashlib.sha256(text.encode("ascii")).hexdigest() != d.digests[name]:
            raise Refusal(f"digests.{name}", "not the SHA-256 of this section")
    return "each section has its digest"


def _braid(letters: list[int], strands: int) -> tuple[list[list[int]], int]:
    """Gauss code and circles of a closed braid: walk up from the bottom of each strand."""
    passes: list[list[int]] = [[] for _ in range(strands)]
    at = list(range(strands))
    for number, letter in enumerate(letters, 1):
        left = abs(letter) - 1
        # Going up, the strand that comes from the left passes over at a positive letter.
        passes[at[left]].append(number if letter > 0 else -number)
        passes[at[left + 1]].append(-number if letter > 0 else number)
        at[left], at[left + 1] = at[left + 1], at[left]
    top = {strand: position for position, strand in enumerate(at)}
    walks, seen = [], set()
    for bottom in range(strands):
        walk, strand = [], bottom
        while strand not in seen:
            seen.add(strand)
            walk += passes[strand]
            strand = top[strand]
            if strand == bottom:
                walks.append(walk)
    return [walk for walk in walks if walk], sum(not walk for walk in walks)


def _dowker(diagram: Diagram) -> list[list[int]]:
    """The even partners of 1, 3, 5, ..., negative where the even-numbered pass is over."""
    ends = diagram.passes()
    number_of = {crossing: edge for edge, crossing in ends.items()}
    code = []
    for run in diagram.components():
        partners = [number_of[-ends[edge]] for edge in run if edge % 2]
        if any(partner % 2 for partner in partners):
            raise Refusal("diagram.crossings", "two passes with odd numbers meet")
        code.append([-partner if ends[partner] > 0 else partner for partner in partners])
    return code


OPTIONS = {
    "braid": {"strands"},
    "gauss": {"signs", "circles"},
    "dowker": {"circles"},
    "planar": {"signs", "circles"},
}


def _typed(line: Item) -> tuple[str, list[list[int]], list[int], int]:
    """The notation of a line, its rows of numbers (a braid's Gauss code), its signs, its circles."""
    head, *rest = re.split(r"\b(signs|circles|strands)\b", line.text())
    notation, _, code = head.strip().partition(" ")
    options = dict(zip(rest[::2], rest[1::2], strict=True))
    if (
        options.keys() - OPTIONS.get(notation, set())
        or 2 * len(options) < len(rest)
        or notation not in OPTIONS
    ):
        raise line.refuse("not in braid, gauss, dowker or planar notation")

    def numbers(text: str) -> list[int]:
        words = text.replace(",", " ").split()
        if not all(re.fullmatch(r"[+-]?[0-9]{1,7}", word) for word in words):
            raise line.refuse(f"{text!r} is no list of numbers")
        return [int(word) for word in words]

    def count(name: str, default: int) -> int:
        stated = numbers(options[name]) if name in options else [default]
        if len(stated) != 1 or not 0 <= stated[0] <= MAX_CROSSINGS:
            raise line.refuse(f"one number of {name}, at most {MAX_CROSSINGS}, is expected")
        return stated[0]

    if notation == "braid":
        letters = numbers(code)
        needed = max(map(abs, letters), default=0) + 1
        strands = count("strands", needed)
        if 0 in letters or not needed <= strands <= MAX_CROSSINGS:
            raise line.refuse("no braid word on these strands")
        rows, circles = _braid(letters, strands)
        return notation, rows, [1 if letter > 0 else -1 for letter in letters], circles
    groups = code.split(";" if notation == "planar" else "/") if code.strip() else []
    signs = numbers(re.sub(r"([+-])(?=\s|$)", r"\g<1>1", options.get("signs", "")))
    return notation, [numbers(group) for group in groups], signs, count("circles", 0)


def _subject(d: Dossier) -> str:
    line, diagram = Item(d.line, None, "subject.line"), d.diagram
    notation, rows, signs, circles = _typed(line)
    if notation == "planar":
        stated = [list(row) for row in diagram.crossings]
    else:
        stated = _dowker(diagram) if notation == "dowker" else diagram.gauss()
    if rows != stated:
        raise line.refuse(f"{rows}, where the planar code gives {stated}")
    # A Dowker-Thistlethwaite code tells no signs, and a planar code need not tell them again.
    if signs != diagram.signs and (signs or notation in ("braid", "gauss")):
        raise line.refuse(f"the signs {signs}, where the diagram has {diagram.signs}")
    if circles != diagram.circles:
        raise line.refuse(f"{circles} components without crossings, where the diagram has {diagram.circles}")
    if notation != "dowker":
        return f"{d.line!r} is this diagram"
    for number, first in enumerate(diagram.summands(), 1):
        if abs(diagram.passes()[2 * number - 1]) != number:
            raise line.refuse(f"crossing {number} is not met at pass {2 * number - 1}")
        if diagram.signs[first - 1] < 0:
            raise line.refuse(f"the code leaves mirror images open, but crossing {first} is to be positive")
    return f"{d.line!r} is this diagram, with the first crossing of each summand positive"


def _planar(d: Dossier) -> str:
    diagram, count = d.diagram, len(d.diagram.crossings)
    after, passes, components = diagram.following(), diagram.passes(), diagram.components()
    mate, faces = diagram.mates(), len(set(diagram.faces().values()))
    pieces, reached = 0, set()
    for first in range(count):
        pieces += first not in reached
        ahead = [first]
        while ahead:
            number = ahead.pop()
            if number not in reached:
                reached.add(number)
                ahead += [mate[4 * number + slot] // 4 for slot in range(4)]
    # Each piece lies on its own sphere: n vertices, 2n edges, n - 2n + faces = 2.
    if faces != count + 2 * pieces:
        raise Refusal("diagram.crossings", f"not planar: {faces} faces, {count + 2 * pieces} on spheres")

    before = {end: start for start, end in after.items()}
    drawn = [arc for arc in diagram.arcs if arc]
    for number, arc in enumerate(drawn, 1):
        place = f"diagram.arcs[{number}]"
        for one, two in pairwise(arc):
            if after[one] != two or passes[one] < 0:
                raise Refusal(place, f"edge {two} does not follow edge {one} over a crossing")
        round_trip = after[arc[-1]] == arc[0] == min(arc) and passes[arc[-1]] > 0
        if not round_trip and (passes[arc[-1]] > 0 or passes[before[arc[0]]] > 0):
            raise Refusal(place, "does not run from one under-crossing to the next")
    if diagram.arcs[len(drawn) :] != [()] * diagram.circles:
        raise Refusal("diagram.arcs", "at the end, an arc without edges for each circle is expected")
    if sorted(edge for arc in drawn for edge in arc) != sorted(after):
        raise Refusal("diagram.arcs", "each edge lies in one arc")
    total = len(components) + diagram.circles
    return f"planar; crossings {count}, faces {faces}, arcs {len(diagram.arcs)}, components {total}"


def _reduced(word: Word) -> Word:
    letters: list[tuple[str, int]] = []
    for name, sign in word:
        if letters and letters[-1] == (name, -sign):
            letters.pop()
        else:
            letters.append((name, sign))
    return tuple(letters)


def _presentation(d: Dossier) -> str:
    diagram, count = d.diagram, len(d.generators)
    names = list("abcdefghijklmnopqrs"[:count]) if count <= 19 else [f"a{i}" for i in range(1, count + 1)]
    if d.generators != names:
        raise Refusal("presentation.generators", f"the arcs are called {', '.join(names)}")
    if d.generator_places != [f"arc:{i}" for i in range(1, count + 1)]:
        raise Refusal("presentation.generator_places", "generator i is arc:i")
    if d.relator_places != [f"crossing:{i}" for i in range(1, len(d.relators) + 1)]:
        raise Refusal("presentation.relator_places", "relator i is crossing:i")
    arc_of = diagram.arc_of()
    name_of = {edge: names[arc_of[edge] - 1] for edge in arc_of}
    for i, (row, sign) in enumerate(zip(diagram.crossings, diagram.signs, strict=True)):
        b, a, c = (name_of[edge] for edge in row[:3])
        word = ((c, 1), (a, -sign), (b, -1), (a, sign))
        if d.relators[i] != word:
            raise Refusal(f"presentation.relators[{i + 1}]", "not the Wirtinger relator of its crossing")
    passes = diagram.passes()
    pairs: list[tuple[Word, Word]] = []
    for run in diagram.components():
        own, framing, x, letters = set(run), 0, name_of[run[0]], []
        for number in (-passes[edge] for edge in run if passes[edge] < 0):
            over, sign = diagram.crossings[number - 1][1], diagram.signs[number - 1]
            letters.append((name_of[over], sign))
            framing += sign * (over in own)
        back = [(x, -1 if framing > 0 else 1)] * abs(framing)
        pairs.append((((x, 1),), _reduced((*letters, *back))))
    pairs += [(((name, 1),), ()) for name in names[count - diagram.circles :]]
    if d.peripheral != pairs:
        wrong = [i for i, (p, q) in enumerate(zip(d.peripheral, pairs, strict=False), 1) if p != q]
        place = f"presentation.peripheral[{min(wrong, default=len(pairs))}]"
        raise Refusal(place, "the meridian and the longitude of each component are expected")
    return "the Wirtinger relators, meridians and longitudes are those of the diagram"


def _chains(d: Dossier) -> str:
    for i, weight in enumerate(d.weights, 1):
        if weight != 1:
            raise Refusal(f"chains.weights[{i}]", "1 is expected: every meridian goes to t")
    row = {name: i for i, name in enumerate(d.generators, 1)}
    first = Matrix(1, len(row))
    for j, weight in enumerate(d.weights, 1):
        first.entries[1, j] = {0: -1, weight: 1}
    _compare("chains.boundary1", d.boundary1, first)
    sums: dict[tuple[int, int], Poly] = {}
    for number, relator in enumerate(d.relators, 1):
        prefix = 0
        for name, sign in relator:
            # The lift runs along the edge that starts at t^prefix e, or back along the one that ends there.
            weight, spot = d.weights[row[name] - 1], (row[name], number)
            sums[spot] = _plus(sums.get(spot, {}), {prefix if sign > 0 else prefix - weight: sign})
            prefix += sign * weight
        if prefix:
            raise Refusal(f"presentation.relators[{number}]", "its lift does not close up")
    second = Matrix(len(row), len(d.relators), {spot: f for spot, f in sums.items() if f})
    _compare("chains.boundary2", d.boundary2, second)
    _compare("boundary1 boundary2", _product(d.boundary1, d.boundary2), Matrix(1, len(d.relators)))
    return "the boundary matrices are sums over the letters, and boundary1 boundary2 = 0"


def _homology(d: Dossier) -> str:
    g = len(d.generators)
    _compare("homology: kernel kernel_inverse", _product(d.kernel, d.kernel_inverse), _identity(g))
    if not d.h0 or d.h0 != _normal(d.h0):
        raise Refusal("homology.h0", "lowest exponent 0 and a positive leading coefficient are expected")
    _compare("homology: boundary1 kernel", _product(d.boundary1, d.kernel), Matrix(1, g, {(1, 1): d.h0}))
    moved = _product(d.kernel_inverse, d.boundary2)
    lower = {(i - 1, j): f for (i, j), f in moved.entries.items() if i > 1}
    _compare("homology.h1_relations", d.h1_relations, Matrix(g - 1, moved.columns, lower))
    return f"H_0 = Z[t,1/t]/({_show(d.h0)}); the 1-cycles have a basis of {g - 1}; relations of H_1"


def _check_equivalence(
    place: str, names: Sequence[str], a: Matrix, form: Matrix, transforms: Sequence[Matrix], p: int = 0
) -> None:
    """Refuse unless U a V is the form; the transforms are U, its inverse, V and its inverse."""
    left, left_inverse, right, right_inverse = transforms
    u, middle, v = names
    _compare(f"{place}: {u} {u}_inverse", _product(left, left_inverse, p), _identity(left.rows))
    _compare(f"{place}: {v} {v}_inverse", _product(right, right_inverse, p), _identity(right.rows))
    _compare(f"{place}: {u} {middle} {v}", _product(_product(left, a, p), right, p), form)


def _check_diagonal(place: str, diagonal: Sequence[Poly], p: int) -> None:
    for i, f in enumerate(diagonal, 1):
        if f and (min(f) != 0 or f[max(f)] != 1):
            raise Refusal(f"{place}[{i}]", "monic with lowest exponent 0 is expected")
        if i > 1 and f and (not diagonal[i - 2] or _rest(f, diagonal[i - 2], p)):
            raise Refusal(f"{place}[{i}]", "the entry before does not divide it")


def _field(d: Dossier, s: Smith) -> str:
    place, p = f"fields[{s.ring}]", s.ring if isinstance(s.ring, int) else 0
    size = d.h1_relations.rows
    stated = {(i, i): f for i, f in enumerate(s.diagonal, 1) if f}
    form = Matrix(size, d.h1_relations.columns, stated)
    transforms = (s.U, s.U_inverse, s.V, s.V_inverse)
    _check_equivalence(place, ("U", "h1_relations", "V"), d.h1_relations, form, transforms, p)
    _check_diagonal(f"{place}.diagonal", s.diagonal, p)
    whole = s.diagonal + [{}] * (size - len(s.diagonal))
    kept = [i for i, f in enumerate(whole, 1) if f != {0: 1}]
    if s.factors != [whole[i - 1] for i in kept]:
        raise Refusal(
            f"{place}.invariant_factors", "the diagonal without units and a 0 for each free summand"
        )
    basis = {(i, j - 1): f for (i, j), f in d.kernel.entries.items() if j > 1}
    chosen = {(i, kept.index(j) + 1): f for (i, j), f in s.U_inverse.entries.items() if j in kept}
    cycles = _product(Matrix(size + 1, size, basis), Matrix(size, len(kept), chosen), p)
    _compare(f"{place}.cycles", s.cycles, cycles)
    name = f"F_{p}" if p else "Q"
    summands = [f"{name}[t,1/t]/({_show(f)})" if f else f"{name}[t,1/t]" for f in s.factors]
    how = "with cycles that generate the summands" if summands else "by a Smith form"
    return f"over {name}, H_1 = {' + '.join(summands) or '0'}, {how}"


def _with_ones(pivots: int, core: Matrix) -> Matrix:
    """[1 0; 0 core]."""
    form = Matrix(pivots + core.rows, pivots + core.columns, _identity(pivots).entries)
    form.entries.update({(pivots + i, pivots + j): f for (i, j), f in core.entries.items()})
    return form


def _elimination(d: Dossier) -> str:
    pivots = d.P.rows - d.core.rows
    form, transforms = _with_ones(pivots, d.core), (d.P, d.P_inverse, d.Q, d.Q_inverse)
    _check_equivalence("ideals", ("P", "boundary2", "Q"), d.boundary2, form, transforms)
    return f"boundary2 is equivalent to {pivots} times 1 and a core of {d.core.rows} x {d.core.columns}"


class _Minors:
    """Minors of a matrix, by expansion along the first row; smaller minors are worked out once."""

    def __init__(self, matrix: Matrix) -> None:
        self.matrix = matrix
        self.known: dict[Spot, Poly] = {((), ()): {0: 1}}
        self.work = 0

    def value(self, rows: tuple[int, ...], columns: tuple[int, ...]) -> Poly:
        if (rows, columns) not in self.known:
            total: Poly = {}
            for i, column in enumerate(columns):
                entry = self.matrix.entries.get((rows[0], column))
                if entry:
                    smaller = self.value(rows[1:], columns[:i] + columns[i + 1 :])
                    self.work += len(entry) * len(smaller)
                    _check_work(self.work)
                    _add_product(total, entry if i % 2 == 0 else _plus({}, entry, 0, -1), smaller)
            self.known[rows, columns] = _kept(total, 0)
        return self.known[rows, columns]

    def nonzero(self, size: int) -> dict[Spot, Poly]:
        """The minors of this size that are not 0, in order of rows, then columns."""
        rows, columns = range(1, self.matrix.rows + 1), range(1, self.matrix.columns + 1)
        spots = [(i, j) for i in combinations(rows, size) for j in combinations(columns, size)]
        return {spot: f for spot in spots if (f := self.value(*spot))}


def _count(core: Matrix, k: int) -> int:
    """The number of minors that generate the k-th Alexander ideal."""
    size = max(core.rows - k, 0)
    return comb(core.rows, size) * comb(core.columns, size)


def _canonical(basis: list[Poly], place: str) -> None:
    """Refuse a basis that is not the canonical one of its ideal.

    That is the reduced strong Groebner basis in Z[t] of an ideal saturated by t: G. Szekeres, A canonical
    basis for the ideals of a polynomial domain, Amer. Math. Monthly 59 (1952).
    """
    for number, f in enumerate(basis, 1):
        where, lower, degree = f"{place}.basis[{number}]", basis[: number - 1], max(f, default=0)
        if not f or f != _normal(f):
            raise Refusal(where, "lowest exponent 0 and a positive leading coefficient are expected")
        if lower:
            before = max(lower[-1])
            ratio, rest = divmod(lower[-1][before], f[degree])
            if before >= degree or rest or ratio < 2:
                raise Refusal(
                    where, "degrees rise, and each leading coefficient properly divides the one before"
                )
            if _remainder({e: ratio * c for e, c in f.items()}, lower):
                raise Refusal(where, "the multiple with the leading coefficient before does not reduce to 0")
        for e, c in f.items():
            below = [g for g in lower if max(g) <= e]
            if e < degree and below and not 0 <= c < below[-1][max(below[-1])]:
                raise Refusal(where, f"the coefficient of t^{e} is not reduced")
    if basis:
        # The first element is the gcd times an integer. Modulo the ideal divided by the gcd, which has finite
        # index, t is invertible exactly when the constant terms have no common factor.
        ratio = basis[0][max(basis[0])] // basis[-1][max(basis[-1])]
        common = gcd(*(int(f[0]) for f in basis))
        if any(c % ratio for c in basis[0].values()) or common * ratio != abs(basis[0][0]):
            raise Refusal(f"{place}.basis", "t is not invertible modulo this ideal of Z[t]")


def _remainder(f: Poly, basis: list[Poly]) -> Poly:
    """What remains of f modulo elements of rising degree whose leading coefficients divide each other."""
    while f:
        fitting = [g for g in basis if max(g) <= max(f)]
        if not fitting or f[max(f)] % fitting[-1][max(fitting[-1])]:
            break
        g = fitting[-1]
        f = _plus(f, g, 0, -(f[max(f)] // g[max(g)]), max(f) - max(g))
    return f


def _show_ideal(basis: list[Poly]) -> str:
    return f"({', '.join(map(_show, basis)) or '0'})"


def _ideal(d: Dossier, ideal: Ideal, minors: _Minors) -> str:
    place, size = f"ideals.alexander[{ideal.k}]", max(d.core.rows - ideal.k, 0)
    found = minors.nonzero(size)
    if [spot for spot, _ in ideal.minors] != list(found):
        raise Refusal(
            f"{place}.minors", f"the {len(found)} minors of size {size} that are not 0 are expected"
        )
    for number, (spot, cofactors) in enumerate(ideal.minors, 1):
        total = _combination(list(zip(cofactors, ideal.basis, strict=True)))
        if total != found[spot]:
            what = f"the minor is {_show(found[spot])}, its combination {_show(total)}"
            raise Refusal(f"{place}.minors[{number}]", what)
    for number, (terms, f) in enumerate(zip(ideal.from_minors, ideal.basis, strict=True), 1):
        where = f"{place}.from_minors[{number}]"
        spots = [spot for spot, _ in terms]
        if spots != sorted(set(spots)) or any(spot not in found or not c for spot, c in terms):
            raise Refusal(where, "minors that are not 0, in order, each once, are expected")
        total = _combination([(c, found[spot]) for spot, c in terms])
        if total != f:
            raise Refusal(where, f"the sum is {_show(total)}, the basis element {_show(f)}")
    _canonical(ideal.basis, place)
    name = f"E_{ideal.k} = {_show_ideal(ideal.basis)}"
    return f"{name}: this canonical basis and the {len(found)} nonzero minors generate each other"


def _ideals(d: Dossier) -> str:
    expected = 1
    while expected <= len(d.ideals) and d.ideals[expected - 1].basis != [{0: 1}]:
        expected += 1
    stopped = _count(d.core, expected) > MAX_MINORS
    if len(d.ideals) != expected - stopped:
        raise Refusal(
            "ideals.alexander", "the ideals for k = 1, 2, ... up to the first unit ideal are expected"
        )
    end = "where the minors become too many" if stopped else "the first unit ideal"
    return f"the Alexander ideals are listed up to {end}"


def _polynomial(d: Dossier) -> str:
    f, place = d.polynomial, "alexander_polynomial"
    if not d.ideals or d.ideals[0].basis != ([_normal(f)] if f else []):
        raise Refusal(place, "does not generate the first Alexander ideal")
    if len(d.diagram.components()) + d.diagram.circles == 1:
        if f != {-e: c for e, c in f.items()} or sum(f.values()) != 1:
            raise Refusal(place, "a knot's is symmetric with value 1 at 1")
        return f"the Alexander polynomial is {_show(f)}, symmetric with value 1 at 1"
    if f and f != _normal(f):
        raise Refusal(place, "lowest exponent 0 and a positive leading coefficient are expected")
    return f"the Alexander polynomial is {_show(f)}, up to units"


# ------------------------------------------------------------------------------- certificates alone
# Each takes the data of its kind and refuses, or says in words what holds now.


def _ring(item: Item) -> Ring:
    ring = item.value
    if ring in ("Z", "Q") and type(ring) is str:
        return str(ring)
    p = item.integer(2, 2**31)
    if any(p % q == 0 for q in range(2, isqrt(p) + 1)):
        raise item.refuse('"Z", "Q" or a prime is expected')
    return p


def _over(item: Item, ring: Ring) -> None:
    if type(item.value) is not type(ring) or item.value != ring:
        raise item.refuse(f"{json.dumps(ring)} is expected")


def _poly(item: Item, ring: Ring) -> Poly:
    """A polynomial that names its ring."""
    lowest, coefficients, over = item.fields("lowest", "coefficients", "over")
    _over(over, ring)
    return Item({"lowest": lowest.value, "coefficients": coefficients.value}, item.holder, item.at).poly(ring)


def _polys(item: Item, ring: Ring) -> list[Poly]:
    return [_poly(one, ring) for one in item.items()]


def _matrix(item: Item, ring: Ring, rows: int | None = None, columns: int | None = None) -> Matrix:
    """A matrix that names its ring and counts from 0; a side that is not given is as stated."""
    shape, over, entries = item.fields("shape", "over", "entries")
    _over(over, ring)
    height, width = (side.integer(0, 10**6) for side in shape.items(2))
    if rows is not None and (height, width) != (rows, columns):
        raise shape.refuse(f"[{rows}, {columns}] is expected")
    matrix, last = Matrix(height, width), (-1, -1)
    for one in entries.items():
        i, j, entry = one.items(3)
        spot = (i.integer(0, height - 1), j.integer(0, width - 1))
        f = _poly(Item(entry.value, item, (spot[0] + 1, spot[1] + 1)), ring)
        if spot <= last or not f:
            raise one.refuse("entries are listed row by row, each once, without zeros")
        matrix.entries[spot[0] + 1, spot[1] + 1], last = f, spot
    return matrix


def _smith(item: Item, integers: bool = False) -> tuple[Matrix, list[Poly], Ring]:
    """The matrix, the diagonal and the ring of a Smith form that holds."""
    a, d, *sides = item.fields("matrix", "D", "U", "U_inverse", "V", "V_inverse")
    ring = _ring(a.fields("shape", "over", "entries")[1])
    if (ring == "Z") != integers:
        raise a.refuse("the integers are expected" if integers else "a field is expected")
    matrix, p = _matrix(a, ring), ring if isinstance(ring, int) else 0
    form = _matrix(d, ring, matrix.rows, matrix.columns)
    sizes = (matrix.rows, matrix.rows, matrix.columns, matrix.columns)
    transforms = [_matrix(side, ring, n, n) for side, n in zip(sides, sizes, strict=True)]
    if integers:
        for side, m in zip((a, d, *sides), (matrix, form, *transforms), strict=True):
            for (i, j), f in m.entries.items():
                if f.keys() != {0}:
                    raise Refusal(f"{side.place}[{i},{j}]", "an integer is expected")
    _check_equivalence(item.place or "smith form", ("U", "matrix", "V"), matrix, form, transforms, p)
    diagonal = [form.entries.get((i, i), {}) for i in range(1, min(form.rows, form.columns) + 1)]
    for i, j in form.entries:
        if i != j:
            raise Refusal(f"{d.place}[{i},{j}]", "0 is expected off the diagonal")
    if integers:
        for i, f in enumerate(diagonal, 1):
            if f and (f[0] < 0 or (i > 1 and (not diagonal[i - 2] or f[0] % diagonal[i - 2][0]))):
                raise Refusal(
                    f"{d.place}[{i},{i}]", "not negative, and divided by the one before, is expected"
                )
    else:
        _check_diagonal(d.place, diagonal, p)
    return matrix, diagonal, ring


def _smith_form(item: Item) -> str:
    _, diagonal, ring = _smith(item)
    return f"U A V = D over {ring}, with diagonal {_show_ideal(diagonal)}"


def _integer_smith_form(item: Item) -> str:
    _, diagonal, _ = _smith(item, integers=True)
    return f"U A V = D over the integers, with diagonal {_show_ideal(diagonal)}"


def _module_certificate(item: Item) -> str:
    smith, factors = item.fields("smith", "factors")
    matrix, diagonal, ring = _smith(smith)
    expected = [f for f in diagonal if f != {0: 1}]
    expected += [{}] * (matrix.rows - len(diagonal))
    stated = _polys(factors, ring)
    for i, (f, g) in enumerate(zip(stated, expected, strict=False), 1):
        if f != g:
            raise Refusal(f"factors[{i}]", f"{_show(f)}, where {_show(g)} is expected")
    if len(stated) != len(expected):
        raise factors.refuse(f"{len(expected)} factors are expected")
    return f"over {ring} the invariant factors are {_show_ideal(stated)}"


def _isomorphism(item: Item) -> str:
    a, b, f, g, x, y, z, w = item.fields(
        "source",
        "target",
        "forward",
        "backward",
        "forward_relations",
        "backward_relations",
        "source_identity",
        "target_identity",
    )
    ring = _ring(a.fields("shape", "over", "entries")[1])
    p = ring if isinstance(ring, int) else 0
    A, B = _matrix(a, ring), _matrix(b, ring)
    F, G = _matrix(f, ring, B.rows, A.rows), _matrix(g, ring, A.rows, B.rows)
    X, Y = _matrix(x, ring, B.columns, A.columns), _matrix(y, ring, A.columns, B.columns)
    Z, W = _matrix(z, ring, A.columns, A.rows), _matrix(w, ring, B.columns, B.rows)
    _compare("forward source", _product(F, A, p), _product(B, X, p))
    _compare("backward target", _product(G, B, p), _product(A, Y, p))
    _compare("backward forward", _product(G, F, p), _one_plus(_product(A, Z, p), p))
    _compare("forward backward", _product(F, G, p), _one_plus(_product(B, W, p), p))
    return f"the cokernels of source and target over {ring} are isomorphic"


def _one_plus(matrix: Matrix, p: int) -> Matrix:
    entries = dict(matrix.entries)
    for i in range(1, matrix.rows + 1):
        entries[i, i] = _plus(entries.get((i, i), {}), {0: 1}, p)
    return Matrix(matrix.rows, matrix.columns, {spot: f for spot, f in entries.items() if f})


def _check_combinations(item: Item, targets: Sequence[Poly], elements: Sequence[Poly]) -> None:
    """Refuse unless each target is the stated combination of the elements."""
    for row, target in zip(item.items(len(targets)), targets, strict=True):
        last, terms = -1, []
        for pair in row.items():
            index, cofactor = pair.items(2)
            k, f = index.integer(0, len(elements) - 1), _poly(cofactor, "Z")
            if k <= last or not f or not elements[k]:
                raise pair.refuse("rising indices, cofactors and elements that are not 0 are expected")
            terms.append((f, elements[k]))
            last = k
        total = _combination(terms)
        if total != target:
            raise row.refuse(f"the combination is {_show(total)}, where {_show(target)} is expected")


def _ideal_certificate(item: Item) -> str:
    generators, basis, from_generators, from_basis = item.fields(
        "generators", "basis", "basis_cofactors", "generator_cofactors"
    )
    given, canonical = _polys(generators, "Z"), _polys(basis, "Z")
    _check_combinations(from_generators, canonical, given)
    _check_combinations(from_basis, given, canonical)
    _canonical(canonical, "ideal")
    return f"the generators span the ideal with canonical basis {_show_ideal(canonical)}"


def _fitting_certificate(item: Item) -> str:
    a, left, left_inverse, right, right_inverse, c, index, minors, basis, from_minors, from_basis = (
        item.fields(
            "matrix",
            "P",
            "P_inverse",
            "Q",
            "Q_inverse",
            "core",
            "k",
            "minors",
            "basis",
            "basis_cofactors",
            "minor_cofactors",
        )
    )
    matrix, core, k = _matrix(a, "Z"), _matrix(c, "Z"), index.integer(0, 10**6)
    pivots = matrix.rows - core.rows
    if pivots < 0 or core.columns != matrix.columns - pivots:
        raise c.refuse("the shape of the matrix without as many rows as columns is expected")
    if core.rows > MAX_CORE or _count(core, k) > MAX_MINORS:
        raise c.refuse(f"more than {MAX_CORE} rows or {MAX_MINORS} minors: left to the package")
    rows, columns = matrix.rows, matrix.columns
    transforms = [_matrix(side, "Z", rows, rows) for side in (left, left_inverse)]
    transforms += [_matrix(side, "Z", columns, columns) for side in (right, right_inverse)]
    _check_equivalence(
        "fitting certificate", ("P", "matrix", "Q"), matrix, _with_ones(pivots, core), transforms
    )
    found = _Minors(core).nonzero(max(core.rows - k, 0))
    stated = []
    for one in minors.items():
        sides = [side.items() for side in one.items(2)]
        stated.append(tuple(tuple(n.integer(0, 10**6) + 1 for n in side) for side in sides))
    if stated != list(found):
        raise minors.refuse(f"the {len(found)} minors that are not 0 are expected, in order")
    canonical = _polys(basis, "Z")
    _check_combinations(from_minors, canonical, list(found.values()))
    _check_combinations(from_basis, list(found.values()), canonical)
    _canonical(canonical, "fitting certificate")
    return f"Fitting ideal {k} has the canonical basis {_show_ideal(canonical)}"


CERTIFICATES: dict[str, Callable[[Item], str]] = {
    "fitting certificate": _fitting_certificate,
    "ideal certificate": _ideal_certificate,
    "integer smith form": _integer_smith_form,
    "isomorphism": _isomorphism,
    "module certificate": _module_certificate,
    "smith form": _smith_form,
}
"""The check of each kind of certificate."""


def _kind(data: Any) -> str | None:
    """The kind that the data state, if it is a text."""
    kind = data.get("kind") if type(data) is dict else None
    return kind if type(kind) is str else None


def _outcome(name: str, check: Callable[[], str]) -> tuple[str, str, bool]:
    try:
        return name, check(), True
    except Refusal as refusal:
        return name, str(refusal), False
    except (ArithmeticError, LookupError, TypeError, ValueError, RecursionError) as error:
        # Statements that contradict each other so badly that this check cannot be set up.
        return name, f"{name}: cannot be checked ({type(error).__name__}: {error})", False


def _certificate(data: Any, kind: str) -> str:
    return CERTIFICATES[kind](_body(data, kind))


def results(data: Any) -> Iterator[tuple[str, str, bool]]:
    """Name, sentence and outcome of each check."""
    kind = _kind(data)
    if kind in CERTIFICATES:
        yield _outcome(kind, partial(_certificate, data, kind))
        return
    try:
        dossier = _read(data)
    except Refusal as refusal:
        yield "format", str(refusal), False
        return
    yield "format", "keys, types and shapes are as described", True
    minors = _Minors(dossier.core)
    checks: list[tuple[str, Callable[[], str]]] = [
        ("digests", partial(_digests, dossier)),
        ("subject", partial(_subject, dossier)),
        ("diagram", partial(_planar, dossier)),
        ("presentation", partial(_presentation, dossier)),
        ("chains", partial(_chains, dossier)),
        ("homology", partial(_homology, dossier)),
        *((f"field {s.ring}", partial(_field, dossier, s)) for s in dossier.smith),
        ("core", partial(_elimination, dossier)),
        ("ideals", partial(_ideals, dossier)),
    ]
    # A dossier that states ideals beyond the limit has failed by now; their minors are not worked out.
    small = [ideal for ideal in dossier.ideals if _count(dossier.core, ideal.k) <= MAX_MINORS]
    checks += [(f"ideal {ideal.k}", partial(_ideal, dossier, ideal, minors)) for ideal in small]
    checks.append(("polynomial", partial(_polynomial, dossier)))
    for name, check in checks:
        yield _outcome(name, check)


def verify(data: Any) -> list[str]:
    """The failures of a dossier or certificate, given as `json.load` makes it: empty if all checks hold.

    Examples
    --------
    >>> verify({"format": "kt_widgets", "version": 1, "kind": "dossier"})
    ['dossier: key "data" is missing']
    """
    return [sentence for _, sentence, holds in results(data) if not holds]


def _pairs(pairs: list[tuple[str, Any]]) -> dict[str, Any]:
    data = dict(pairs)
    if len(data) != len(pairs):
        raise ValueError("a key occurs twice in one object")
    return data


def _no_constant(name: str) -> Any:
    raise ValueError(f"{name} is not a JSON value")


def main(arguments: Sequence[str] | None = None) -> int:
    """Check the file named on the command line and print a line for each check."""
    arguments = sys.argv[1:] if arguments is None else arguments
    if len(arguments) != 1 or arguments[0].startswith("-"):
        print("usage: python verify.py FILE.json", file=sys.stderr)
        return 2
    try:
        with open(arguments[0], "rb") as file:
            content = file.read(MAX_BYTES + 1)
        if len(content) > MAX_BYTES:
            raise ValueError(f"more than {MAX_BYTES} bytes")
        data = json.loads(content.decode("utf-8"), object_pairs_hook=_pairs, parse_constant=_no_constant)
    except (OSError, ValueError, RecursionError) as error:
        print(f"{arguments[0]}: cannot be read: {error}", file=sys.stderr)
        return 2
    kind = _kind(data)
    if kind is not None and kind not in (KIND, *CERTIFICATES):
        known = ", ".join((KIND, *CERTIFICATES))
        print(
            f"{arguments[0]}: kind {json.dumps(kind)} is not verified here; known: {known}", file=sys.stderr
        )
        return 2
    outcomes = []
    for name, sentence, holds in results(data):
        # A text from the file need not fit the encoding of this terminal.
        said = sentence.encode("ascii", "backslashreplace").decode("ascii")
        print(f"{'holds' if holds else 'FAILS'}  {name}: {said}")
        outcomes.append(holds)
    failed = outcomes.count(False)
    print(f"{failed} of {len(outcomes)} checks fail" if failed else f"all {len(outcomes)} checks hold")
    return 1 if failed else 0


if __name__ == "__main__":
    sys.exit(main())
