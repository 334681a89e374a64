"""`Diagram`: an oriented link diagram, kept as its planar diagram code."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

from kt_widgets.algebra.evaluation import Reciprocal
from kt_widgets.algebra.laurent import LaurentPolynomial
from kt_widgets.covers.cover import Cover
from kt_widgets.diagrams.braid import read_braid
from kt_widgets.diagrams.checkerboard import (
    checkerboard_edges,
    seifert_circles,
    spanning_trees_at_most,
)
from kt_widgets.diagrams.dowker import dowker_of, read_dowker
from kt_widgets.diagrams.entries import circle_count, whole
from kt_widgets.diagrams.gauss import gauss_of, read_gauss
from kt_widgets.diagrams.notation import read_line
from kt_widgets.diagrams.planar_diagram import planar_text, read_planar
from kt_widgets.diagrams.planar_map import Code, PlanarMap, Slots, ends_of_edges
from kt_widgets.diagrams.wirtinger import arc_names, longitude, wirtinger
from kt_widgets.errors import DiagramError
from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word
from kt_widgets.text.portable import Portable

__all__ = ["Arc", "Component", "Crossing", "Diagram", "Face", "Relabelling"]


@dataclass(frozen=True, slots=True)
class Crossing:
    """A crossing: its edges (incoming under-edge first, counter-clockwise), its sign, its arcs."""

    number: int
    edges: Slots
    sign: int
    over_arc: int
    under_in: int
    under_out: int


@dataclass(frozen=True, slots=True)
class Arc:
    """An arc, from one under-crossing to the next: its component and its edges in order of travel.

    A component that never goes under has one arc; that of a crossingless component has no edges.
    """

    number: int
    component: int
    edges: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Component:
    """A component: its edges from the base edge on, and its arcs, the first of which holds the base edge."""

    number: int
    edges: tuple[int, ...]
    arcs: tuple[int, ...]


@dataclass(frozen=True, slots=True)
class Face:
    """A face: its boundary as pairs (edge, side), walked with the face on the left.

    The side is +1 where the walk follows the edge's direction (the face is on the left of the edge), else -1.
    """

    number: int
    boundary: tuple[tuple[int, int], ...]

    @property
    def edges(self) -> tuple[int, ...]:
        """The edges of the boundary; an edge with the face on both sides would occur twice."""
        return tuple(edge for edge, _ in self.boundary)


@dataclass(frozen=True, slots=True)
class Relabelling:
    """Where crossings 1, 2, ... and edges 1, 2, ... of one diagram go in another."""

    crossings: tuple[int, ...]
    edges: tuple[int, ...]


@dataclass(frozen=True, init=False, repr=False)
class Diagram(Portable, kind="diagram"):
    """An oriented link diagram.

    The edges are numbered 1 to 2n, consecutively along each component in its direction; the lowest edge of a
    component is its base edge. Crossing c has the edges ``slots[c - 1]``: incoming under-edge first, then
    counter-clockwise. Equality compares this labelled data; `same_diagram` looks for a relabelling.

    Parameters
    ----------
    slots : sequence of 4-tuples of int
        The planar diagram code.
    signs : sequence of +1 and -1, optional
        Needed only where a component of two edges is over at both its crossings.
    circles : int, optional
        The number of crossingless components; they come last.

    Raises
    ------
    DiagramError
        If the code is inconsistent or not planar; the message names the crossing and what would be accepted.
    LimitError
        Beyond 100 000 crossings or 10 000 crossingless components.

    Examples
    --------
    >>> d = Diagram.from_braid([1, -2, 1, -2])
    >>> d
    Diagram(4 crossings, 1 component, 'braid 1 -2 1 -2')
    >>> print(d)
    planar 4,2,5,1; 2,7,3,8; 8,6,1,5; 6,3,7,4
    >>> print(d.alexander_polynomial())
    -t^-1 + 3 - t
    """

    slots: tuple[Slots, ...]
    signs: tuple[int, ...]
    circles: int
    source: str = field(compare=False)

    def __init__(
        self, slots: Iterable[Sequence[int]], signs: Iterable[int] | None = None, circles: int = 0
    ) -> None:
        self._set(*read_planar(slots, signs, circles))

    def _set(self, code: Code, source: str) -> None:
        self.__dict__.update(slots=code[0], signs=code[1], circles=code[2], source=source)

    @classmethod
    def _trusted(cls, code: Code, source: str) -> Diagram:
        """A diagram of a code that is known to be consistent and planar."""
        diagram = object.__new__(cls)
        diagram._set(code, source)
        return diagram

    # notations

    @classmethod
    def from_braid(cls, word: Iterable[int], strands: int | None = None) -> Diagram:
        """The closure of a braid.

        Strands run upwards and the closure is oriented with them. Crossings are in the order of the letters;
        components by their lowest strand at the bottom, where their base edges are.

        Parameters
        ----------
        word : iterable of int
            Letter +i is a positive (right-handed) crossing of strands i and i + 1, letter -i a negative one.
        strands : int, optional
            The least number that the letters need, unless given; unused strands are crossingless components.

        Raises
        ------
        DiagramError
            For a letter 0, what is no whole number, too few strands, or no letters and no strands.
        LimitError
            Beyond 100 000 letters or 10 000 strands.

        Examples
        --------
        >>> Diagram.from_braid([1, 1, 1]).signs
        (1, 1, 1)
        """
        return cls._trusted(*read_braid(word, strands))

    @classmethod
    def from_gauss(cls, components: Iterable[Iterable[int]], signs: Iterable[int]) -> Diagram:
        """The diagram of a signed Gauss code; crossings in the order of their numbers.

        Parameters
        ----------
        components : iterable of iterables of int
            The crossings along each component: +i passes over crossing i, -i under. The edge that leads into
            the first of them is the component's base edge; an empty list is a crossingless component.
        signs : iterable of +1 and -1
            The signs of crossings 1, 2, ...

        Raises
        ------
        DiagramError
            If a crossing is not met once over and once under, numbers are left out, signs do not fit, or the
            code is not planar: then with the connected piece and its genus.
        LimitError
            Beyond 100 000 crossings or 10 000 crossingless components.

        Examples
        --------
        >>> Diagram.from_gauss([[1, -2, 3, -1, 2, -3]], signs=[1, 1, 1]).writhe
        3
        """
        return cls._trusted(*read_gauss(components, signs))

    @classmethod
    def from_dowker(cls, components: Iterable[int] | Iterable[Iterable[int]]) -> Diagram:
        """The diagram of a Dowker-Thistlethwaite code; crossing i is the one with the odd label 2i - 1.

        The code leaves the mirror image of each summand open: each is mirrored so that its first crossing is
        positive. The summands are what is left when the diagram is cut through all edges that border the
        same two faces (a crossing that this isolates is one too). Components run in the direction of their
        numbers.

        Parameters
        ----------
        components : iterable of int, or of iterables of int
            The even partners of 1, 3, 5, ..., with a minus sign where the even pass is over. A flat list is a
            knot. For a link there is a list per component: passes are numbered along one component after the
            other so that each crossing gets an odd and an even number; an empty list is a crossingless
            component.

        Raises
        ------
        DiagramError
            If an even number is missing, repeated or out of range, or no curve in the plane has this code:
            then with the first stretch of the curve that cannot be drawn.
        LimitError
            Beyond 2 000 crossings, or 10 000 crossingless components.

        Examples
        --------
        >>> Diagram.from_dowker([4, 6, 2]).signs
        (1, 1, 1)
        """
        return cls._trusted(*read_dowker(components))

    @classmethod
    def from_planar_diagram(
        cls, tuples: Iterable[Sequence[int]], signs: Iterable[int] | None = None, circles: int = 0
    ) -> Diagram:
        """The diagram of a planar diagram code: the same as the constructor.

        The labels are 1 to 2n, consecutive along each component in its direction (M. Mastin, Links and planar
        diagram codes, J. Knot Theory Ramifications 24 (2015)).

        Raises
        ------
        DiagramError, LimitError
            As the constructor.

        Examples
        --------
        >>> Diagram.from_planar_diagram([(1, 4, 2, 5), (5, 2, 6, 3), (3, 6, 4, 1)]).writhe
        -3
        """
        return cls(tuples, signs, circles)

    @classmethod
    def parse(cls, text: str) -> Diagram:
        """Read one line of text: a notation's name, then the code.

        ``braid`` letters, perhaps ``strands`` n; ``gauss`` components separated by ``/``, ``signs``;
        ``dowker`` components separated by ``/``; ``planar`` crossings separated by ``;``, perhaps ``signs``.
        The last three may end with ``circles`` k for crossingless components. Numbers are separated by spaces
        or commas. The codes are those of `from_braid`, `from_gauss`, `from_dowker` and `from_planar_diagram`.

        Raises
        ------
        ParseError
            If the line cannot be read; with line and column.
        DiagramError
            If the code is inconsistent, not planar or not realisable.
        LimitError
            Beyond the sizes of these.

        Examples
        --------
        >>> Diagram.parse("braid 1 -2 1 -2")
        Diagram(4 crossings, 1 component, 'braid 1 -2 1 -2')
        >>> Diagram.parse("gauss 1 -2 / -1 2 signs - -").linking_matrix()
        ((0, -1), (-1, 0))
        >>> Diagram.parse("dowker 4 / 2").linking_matrix()
        ((0, 1), (1, 0))
        >>> Diagram.parse("planar 1,4,2,5; 5,2,6,3; 3,6,4,1").writhe
        -3
        """
        line = read_line(text)
        circles = circle_count(line.single("circles") or 0)
        if line.notation == "braid":
            return cls.from_braid(line.groups[0] if line.groups else [], line.single("strands"))
        if line.notation == "planar":
            return cls(line.groups, line.options.get("signs"), circles)
        crossingless: list[list[int]] = [[]] * circles
        if line.notation == "dowker":
            return cls.from_dowker([*line.groups, *crossingless])
        return cls.from_gauss([*line.groups, *crossingless], line.options.get("signs", []))

    def to_gauss(self) -> tuple[tuple[tuple[int, ...], ...], tuple[int, ...]]:
        """The signed Gauss code: the passes of each component from its base edge on, and the signs.

        Examples
        --------
        >>> Diagram.from_braid([1, 1]).to_gauss()
        (((1, -2), (-1, 2)), (1, 1))
        """
        return gauss_of((self.slots, self.signs, self.circles))

    def to_dowker(self) -> tuple[tuple[int, ...], ...]:
        """The Dowker-Thistlethwaite code, a tuple per component.

        The first component of each connected piece is numbered from its base edge on; another one from its
        base edge or the edge after, so that odd meets even at each crossing.

        Examples
        --------
        >>> Diagram.from_braid([1, 1, 1]).to_dowker()
        ((4, 6, 2),)
        """
        return dowker_of(self.to_gauss()[0])

    def __str__(self) -> str:
        return planar_text((self.slots, self.signs, self.circles))

    def __repr__(self) -> str:
        source = self.source if len(self.source) <= 60 else self.source[:57] + "..."
        counts = f"{_counted(len(self.slots), 'crossing')}, {_counted(len(self.components), 'component')}"
        return f"Diagram({counts}, {source!r})"

    def __reduce__(self) -> tuple[object, ...]:
        # the derived data are not pickled
        return Diagram._trusted, ((self.slots, self.signs, self.circles), self.source)

    def to_data(self) -> dict[str, Any]:
        """Plain data for `to_json`."""
        return {
            "slots": [list(row) for row in self.slots],
            "signs": list(self.signs),
            "circles": self.circles,
            "source": self.source,
        }

    @classmethod
    def from_data(cls, data: dict[str, Any]) -> Diagram:
        """The diagram of `to_data`; everything is checked again."""
        diagram = cls(data["slots"], data["signs"], data["circles"])
        if not isinstance(data["source"], str):
            raise TypeError("the source is not a text")
        diagram.__dict__["source"] = data["source"]
        return diagram

    # what the code determines

    @cached_property
    def _ends(self) -> tuple[list[int], list[int]]:
        """The darts where each edge starts and ends, by edge."""
        return ends_of_edges(self.slots, self.signs)

    @cached_property
    def planar_map(self) -> PlanarMap:
        """The map of the diagram on the sphere; dart 4c + s is slot s of crossing c + 1."""
        return PlanarMap.from_ends(*self._ends)

    @cached_property
    def _spans(self) -> tuple[tuple[int, int], ...]:
        """The first and last edge of each component that has crossings."""
        closing = []
        for (under_in, right, under_out, left), sign in zip(self.slots, self.signs, strict=True):
            over_in, over_out = (left, right) if sign > 0 else (right, left)
            if under_out < under_in:
                closing.append((under_out, under_in))
            if over_out < over_in:
                closing.append((over_out, over_in))
        return tuple(sorted(closing))

    @cached_property
    def _arc_edges(self) -> tuple[tuple[tuple[int, ...], ...], ...]:
        """The edges of each arc, per component; crossingless components come last."""
        ends_arc = {row[0] for row in self.slots}
        components = []
        for first, last in self._spans:
            arcs: list[list[int]] = [[]]
            for edge in range(first, last + 1):
                arcs[-1].append(edge)
                if edge in ends_arc:
                    arcs.append([])
            # the last stretch runs on into the first
            if len(arcs) > 1:
                arcs[0] = arcs.pop() + arcs[0]
            components.append(tuple(map(tuple, arcs)))
        return (*components, *[((),)] * self.circles)

    @cached_property
    def arc_of_edge(self) -> tuple[int, ...]:
        """The number of the arc that holds each edge 1, 2, ...; entry 0 is unused."""
        owner = [0] * (2 * len(self.slots) + 1)
        number = 0
        for component in self._arc_edges:
            for edges in component:
                number += 1
                for edge in edges:
                    owner[edge] = number
        return tuple(owner)

    @cached_property
    def crossings(self) -> tuple[Crossing, ...]:
        """The crossings, in the order of the code."""
        arc = self.arc_of_edge
        return tuple(
            Crossing(number, row, sign, arc[row[1]], arc[row[0]], arc[row[2]])
            for number, (row, sign) in enumerate(zip(self.slots, self.signs, strict=True), start=1)
        )

    @cached_property
    def arcs(self) -> tuple[Arc, ...]:
        """The arcs, component by component; the first of a component holds its base edge."""
        owners = [
            (component, edges) for component, arcs in enumerate(self._arc_edges, start=1) for edges in arcs
        ]
        return tuple(Arc(number, *owned) for number, owned in enumerate(owners, start=1))

    @cached_property
    def components(self) -> tuple[Component, ...]:
        """The components, by base edge; crossingless ones last."""
        spans: list[tuple[int, ...]] = [tuple(range(first, last + 1)) for first, last in self._spans]
        spans += [()] * self.circles
        components = []
        arc = 1
        for number, (edges, arcs) in enumerate(zip(spans, self._arc_edges, strict=True), start=1):
            components.append(Component(number, edges, tuple(range(arc, arc + len(arcs)))))
            arc += len(arcs)
        return tuple(components)

    @cached_property
    def faces(self) -> tuple[Face, ...]:
        """The faces of the connected pieces, each on its own sphere; circles have none here."""
        tails = self._ends[0]
        edge_of_dart = [label for row in self.slots for label in row]
        return tuple(
            Face(
                number,
                tuple((edge_of_dart[dart], 1 if tails[edge_of_dart[dart]] == dart else -1) for dart in walk),
            )
            for number, walk in enumerate(self.planar_map.faces, start=1)
        )

    @cached_property
    def pieces(self) -> tuple[tuple[int, ...], ...]:
        """The components of each connected piece of the diagram; each crossingless component is a piece."""
        component = self._component_of_edge
        found = []
        for crossings in self.planar_map.pieces:
            found.append(tuple(sorted({component[label] for c in crossings for label in self.slots[c]})))
        knotted = len(self._spans)
        return (*found, *((knotted + circle,) for circle in range(1, self.circles + 1)))

    @cached_property
    def _component_of_edge(self) -> tuple[int, ...]:
        owner = [0]
        for number, (first, last) in enumerate(self._spans, start=1):
            owner += [number] * (last - first + 1)
        return tuple(owner)

    @property
    def writhe(self) -> int:
        """The sum of the signs of all crossings."""
        return sum(self.signs)

    def linking_matrix(self) -> tuple[tuple[int, ...], ...]:
        """The linking numbers of the components; the diagonal is 0.

        Examples
        --------
        >>> Diagram.from_braid([1, 1]).linking_matrix()
        ((0, 1), (1, 0))
        """
        size = len(self._spans) + self.circles
        twice = [[0] * size for _ in range(size)]
        component = self._component_of_edge
        for (under, over, _, _), sign in zip(self.slots, self.signs, strict=True):
            one, other = component[under] - 1, component[over] - 1
            if one != other:
                twice[one][other] += sign
                twice[other][one] += sign
        return tuple(tuple(entry // 2 for entry in row) for row in twice)

    # the group and its cover

    @cached_property
    def _names(self) -> tuple[str, ...]:
        return arc_names(self.components[-1].arcs[-1])

    def _component(self, number: int) -> Component:
        """A component by its number, counted from 1."""
        count = len(self.components)
        if not 1 <= whole(number, "component") <= count:
            raise DiagramError(
                f"there is no component {number}", where="component", accepted=f"a number from 1 to {count}"
            )
        return self.components[number - 1]

    def meridian(self, component: int = 1) -> Word:
        """The meridian of a component at its base edge: the generator of the arc there.

        Raises
        ------
        DiagramError
            If there is no such component.

        Examples
        --------
        >>> Diagram.from_braid([1, 1]).meridian(2)
        Word('b')
        """
        return Word(((self._names[self._component(component).arcs[0] - 1], 1),))

    def longitude(self, component: int = 1) -> Word:
        """The longitude of a component at its base edge, with linking number 0 with it, as a literal word.

        It commutes with the meridian in the group of the link.

        Raises
        ------
        DiagramError
            If there is no such component.

        Examples
        --------
        >>> d = Diagram.from_braid([1, 1, 1])
        >>> print(d.longitude())
        c a b a^-3
        """
        names, arc, heads = self._names, self.arc_of_edge, self._ends[1]
        own = self._component(component)
        under = [heads[edge] // 4 for edge in own.edges if heads[edge] % 4 == 0]
        passes = [(names[arc[self.slots[c][1]] - 1], self.signs[c]) for c in under]
        return longitude(passes, names[own.arcs[0] - 1], frozenset(names[a - 1] for a in own.arcs))

    @cached_property
    def _wirtinger(self) -> Presentation:
        marks = {}
        for number in range(1, len(self.components) + 1):
            marks[f"meridian:{number}"] = self.meridian(number)
            marks[f"longitude:{number}"] = self.longitude(number)
        return wirtinger(self.slots, self.signs, self.arc_of_edge, self._names, marks)

    def wirtinger(self) -> Presentation:
        """Wirtinger's presentation of the group: a generator per arc, a relator per crossing, none dropped.

        Generators are a, b, c, ... in the order of the arcs (a1, a2, ... beyond 19 arcs). With the
        under-strand entering as b and leaving as c under the arc a the relator is c a^-1 b^-1 a at a positive
        crossing and c a b^-1 a^-1 at a negative one. Meridians and longitudes are its marks.

        Examples
        --------
        >>> print(Diagram.from_braid([1, 1, 1]).wirtinger())
        < a, b, c | c a^-1 b^-1 a, b c^-1 a^-1 c, a b^-1 c^-1 b >
        """
        return self._wirtinger

    @cached_property
    def _cover(self) -> Cover:
        return Cover(self._wirtinger)

    def cover(self) -> Cover:
        """The infinite cyclic cover of the Wirtinger presentation's complex, all meridians to t.

        Examples
        --------
        >>> Diagram.from_braid([1, -2, 1, -2]).cover().alexander_ideal(1)
        Ideal(['1 - 3t + t^2'])
        """
        return self._cover

    def alexander_polynomial(self) -> LaurentPolynomial:
        """The Alexander polynomial, of all meridians to t.

        For a knot it is normalised so that Delta(t) = Delta(1/t) and Delta(1) = 1. For a link it is defined
        up to units and has lowest exponent 0 and positive leading coefficient; 0 if the diagram is split.

        Any relator and any generator of a connected diagram's Wirtinger presentation may be left out: the
        determinant of the rest of boundary(2) is the polynomial up to units (R. H. Crowell, R. H. Fox,
        Introduction to Knot Theory, ch. VIII).

        Examples
        --------
        >>> print(Diagram.from_braid([1, -2, 1, -2]).alexander_polynomial())
        -t^-1 + 3 - t
        >>> print(Diagram.from_braid([1, 1]).alexander_polynomial())
        -1 + t
        """
        if len(self.pieces) > 1:
            return LaurentPolynomial()
        if not self.slots:
            return LaurentPolynomial((1,))
        boundary = self._cover.chains().boundary(2)
        if boundary.shape[0] > boundary.shape[1]:
            # A component that never goes under can be lifted off.
            return LaurentPolynomial()
        order = boundary.delete(row=0, column=0).determinant(self._symmetry)
        return order.symmetric_form() if len(self.components) == 1 else order.normal_form()

    def _symmetry(self) -> Reciprocal:
        """What the connected diagram tells of its polynomial det(t V - V^T).

        V is a Seifert matrix of the surface with crossings - (Seifert circles) + 1 generators of H_1. The sum
        of the coefficients' absolute values is at most the number of states, which are the spanning trees of
        the checkerboard graph (L. H. Kauffman, Formal Knot Theory, 1983).
        """
        span = len(self.slots) - seifert_circles(self.slots, self.signs) + 1
        return Reciprocal(span, spanning_trees_at_most(checkerboard_edges(self.planar_map)))

    # new diagrams

    def mirror(self) -> Diagram:
        """The mirror image in the plane of the diagram: every crossing switched, edges labelled as before.

        Examples
        --------
        >>> Diagram.from_braid([1, 1, 1]).mirror() == Diagram.from_braid([-1, -1, -1])
        True
        """
        slots = tuple(
            (left, under_in, right, under_out) if sign > 0 else (right, under_out, left, under_in)
            for (under_in, right, under_out, left), sign in zip(self.slots, self.signs, strict=True)
        )
        return self._relabelled(slots, tuple(-sign for sign in self.signs))

    def reverse(self) -> Diagram:
        """The diagram with every component reversed; the base edges stay.

        Examples
        --------
        >>> d = Diagram.from_braid([1, 1, 1])
        >>> d.reverse().reverse() == d, d.reverse().writhe
        (True, 3)
        """
        relabelled = [0] * (2 * len(self.slots) + 1)
        for first, last in self._spans:
            relabelled[first] = first
            for edge in range(first + 1, last + 1):
                relabelled[edge] = first + last + 1 - edge
        slots = tuple(
            (relabelled[under_out], relabelled[left], relabelled[under_in], relabelled[right])
            for under_in, right, under_out, left in self.slots
        )
        return self._relabelled(slots, self.signs)

    def _relabelled(self, slots: tuple[Slots, ...], signs: tuple[int, ...]) -> Diagram:
        code = slots, signs, self.circles
        return Diagram._trusted(code, planar_text(code))

    def same_diagram(self, other: Diagram) -> Relabelling | None:
        """A relabelling that turns this diagram into the other one on the sphere; None if there is none.

        It keeps orientations, crossings and the order round them: mirror images and reversed diagrams
        count as different unless they happen to agree.

        Examples
        --------
        >>> trefoil = Diagram.from_braid([1, 1, 1])
        >>> trefoil.same_diagram(Diagram.from_dowker([4, 6, 2])).crossings
        (1, 3, 2)
        >>> trefoil.same_diagram(trefoil.mirror()) is None
        True
        """
        if not isinstance(other, Diagram):
            raise DiagramError(f"{type(other).__name__} is no diagram", accepted="a Diagram to compare with")
        if (len(self.slots), self.circles, self.writhe) != (len(other.slots), other.circles, other.writhe):
            return None
        image: dict[int, int] = {}
        taken: set[int] = set()
        for piece in self.planar_map.pieces:
            found = _piece_image(self, other, piece, taken)
            if found is None:
                return None
            image.update(found)
            taken.update(found.values())
        edges = [0] * (2 * len(self.slots))
        for crossing, target in image.items():
            for ours, theirs in zip(self.slots[crossing], other.slots[target], strict=True):
                edges[ours - 1] = theirs
        return Relabelling(tuple(image[c] + 1 for c in range(len(self.slots))), tuple(edges))


def _piece_image(
    ours: Diagram, theirs: Diagram, piece: Sequence[int], taken: set[int]
) -> dict[int, int] | None:
    """An image of a connected piece in the other diagram away from the crossings taken, if there is one."""
    # pieces are alike or not, so that the first image that fits never has to be taken back
    targets = (
        target
        for theirs_piece in theirs.planar_map.pieces
        if len(theirs_piece) == len(piece)
        for target in theirs_piece
        if target not in taken
    )
    for target in targets:
        found = _follow(ours, theirs, piece[0], target)
        if found is not None:
            return found
    return None


def _follow(ours: Diagram, theirs: Diagram, start: int, target: int) -> dict[int, int] | None:
    """The map of a connected piece that sends one crossing to another, slot by slot, if there is one."""
    mate, their_mate = ours.planar_map.mate, theirs.planar_map.mate
    image = {start: target}
    queue = [start]
    for crossing in queue:
        there = image[crossing]
        if ours.signs[crossing] != theirs.signs[there]:
            return None
        for slot in range(4):
            end, their_end = mate[4 * crossing + slot], their_mate[4 * there + slot]
            if end % 4 != their_end % 4:
                return None
            if end // 4 not in image:
                image[end // 4] = their_end // 4
                queue.append(end // 4)
            elif image[end // 4] != their_end // 4:
                return None
    return image


def _counted(number: int, what: str) -> str:
    return f"{number} {what}{'' if number == 1 else 's'}"
