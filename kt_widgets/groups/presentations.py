"""`Presentation`: generators and relators of a group, where they came from, and Tietze moves with a log."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from functools import cached_property
from typing import Any

from kt_widgets.algebra.flint_rings import integer_kernel
from kt_widgets.errors import AlgebraError, LimitError
from kt_widgets.groups.words import Word, check_name
from kt_widgets.places import Place
from kt_widgets.text.parsing import parse_presentation
from kt_widgets.text.portable import Portable
from kt_widgets.text.printing import MAX_LATEX_ENTRIES, Style, presentation_text

__all__ = ["MAX_GENERATORS", "MAX_GROWTH", "Presentation", "Simplification", "Step"]

MAX_GENERATORS = 100_000
"""Most generators, and most relators, of a presentation."""
MAX_GROWTH = 10
"""`Presentation.simplified` lets the total length of the relators grow by this factor at most."""


@dataclass(frozen=True, init=False, repr=False)
class Presentation(Portable, kind="presentation"):
    """A finitely presented group.

    Two presentations are equal when their generators and literal relators are; where they came from takes
    no part in it.

    Parameters
    ----------
    generators : sequence of str
        One letter each, or a letter and a number; order matters.
    relators : sequence of Word
        Literal words: the boundary of 2-cell j is traced along relator j as it is written.
    places : mapping of str to Place, optional
        Where a generator or relator came from: ``{"generator:a": Place("arc", (1,)), "relator:1": ...}``.
    marks : mapping of str to Word, optional
        Words that the moves carry along, such as meridians and longitudes.

    Attributes
    ----------
    generators : tuple of str
    boundary_words : tuple of Word
        The relators as written.
    places, marks : tuple of pairs

    Raises
    ------
    ParseError
        If a name is not one.
    AlgebraError
        If a name is listed twice, or a word has a letter that is no generator.
    LimitError
        Beyond `MAX_GENERATORS`.

    Examples
    --------
    >>> p = Presentation.parse("< a, b | a b a = b a b >")
    >>> print(p)
    < a, b | a b a b^-1 a^-1 b^-1 >
    >>> p.weights()
    ({'a': 1, 'b': 1},)
    """

    generators: tuple[str, ...]
    boundary_words: tuple[Word, ...]
    places: tuple[tuple[str, Place], ...] = field(compare=False)
    marks: tuple[tuple[str, Word], ...] = field(compare=False)

    def __init__(
        self,
        generators: Sequence[str],
        relators: Sequence[Word] = (),
        places: Mapping[str, Place] | Iterable[tuple[str, Place]] = (),
        marks: Mapping[str, Word] | Iterable[tuple[str, Word]] = (),
    ) -> None:
        places, marks = dict(places), dict(marks)
        object.__setattr__(self, "generators", tuple(generators))
        object.__setattr__(self, "boundary_words", tuple(relators))
        object.__setattr__(self, "places", tuple(places.items()))
        object.__setattr__(self, "marks", tuple(marks.items()))
        for what, count in (("generators", len(self.generators)), ("relators", len(self.boundary_words))):
            if count > MAX_GENERATORS:
                raise LimitError(f"{count} {what}", accepted=f"at most {MAX_GENERATORS}")
        # x1 and x_1 are one name in the typeset forms.
        listed = Counter(check_name(name).replace("_", "") for name in self.generators)
        if len(listed) < len(self.generators):
            twice = listed.most_common(1)[0][0]
            raise AlgebraError(f"the generator {twice} is listed twice", accepted="each generator once")
        known = frozenset(self.generators)
        for j, word in enumerate(self.boundary_words, 1):
            _check_letters(word, known, f"relator {j}")
        for name, word in marks.items():
            _check_letters(word, known, name)
        ours = {f"generator:{name}" for name in self.generators}
        ours.update(f"relator:{j}" for j in range(1, len(self.boundary_words) + 1))
        if strange := [key for key in places if key not in ours]:
            raise AlgebraError(
                f"{strange[0]!r} has a place but does not exist", accepted="generator:a or relator:1"
            )

    @classmethod
    def parse(cls, text: str) -> Presentation:
        """Read "< a, b | a b a = b a b >", plain, unicode or LaTeX; a relation u = v is the relator u v^-1.

        Raises
        ------
        ParseError, LimitError
            As `kt_widgets.text.parsing.parse_presentation`.

        Examples
        --------
        >>> print(Presentation.parse("<x, y | x^3 = y^2, [x, y]>"))
        < x, y | x^3 y^-2, x y x^-1 y^-1 >
        """
        generators, relators = parse_presentation(text)
        return cls(generators, [Word(letters) for letters in relators])

    @cached_property
    def relators(self) -> tuple[Word, ...]:
        """The relators, freely reduced."""
        return tuple(word.reduced() for word in self.boundary_words)

    @cached_property
    def _place_of(self) -> dict[str, Place]:
        return dict(self.places)

    def place_of(self, kind: str, index: int | str) -> Place | None:
        """Where a generator (by name) or a relator (by number) came from, if that is known.

        Examples
        --------
        >>> Presentation(["a"], places={"generator:a": Place("arc", (1,))}).place_of("generator", "a")
        Place(kind='arc', indices=(1,))
        """
        return self._place_of.get(f"{kind}:{index}")

    def relator_number(self, relator: int | str) -> int:
        """The number, from 1, of a relator given by its number or as "r2".

        Raises
        ------
        AlgebraError
            If there is no such relator.

        Examples
        --------
        >>> Presentation.parse("< a, b | a, b >").relator_number("r2")
        2
        """
        count = len(self.boundary_words)
        text = str(relator).removeprefix("r")
        number = int(text) if text.isascii() and text.isdigit() and len(text) < 10 else 0
        if not 1 <= number <= count:
            accepted = (
                f"r1 to r{count}, or a number from 1 to {count}" if count else "a presentation with relators"
            )
            raise AlgebraError(f"there is no relator {relator!r}", accepted=accepted)
        return number

    def exponent_matrix(self) -> tuple[tuple[int, ...], ...]:
        """The exponent sum of generator i in relator j: boundary(2) at t = 1.

        Examples
        --------
        >>> Presentation.parse("< x, y | x^3 = y^2 >").exponent_matrix()
        ((3,), (-2,))
        """
        columns = [_exponents(word) for word in self.boundary_words]
        return tuple(tuple(column[name] for column in columns) for name in self.generators)

    def weights(self) -> tuple[dict[str, int], ...]:
        """A basis of the weight maps: the maps of the generators to Z under which every relator has weight 0.

        Every weight map is an integer combination of these; the first nonzero weight of each is positive.

        Examples
        --------
        >>> Presentation.parse("< x, y | x^3 = y^2 >").weights()
        ({'x': 2, 'y': 3},)
        >>> Presentation.parse("< a | a^2 >").weights()
        ()
        """
        columns = {tuple(map(_exponents(word).__getitem__, self.generators)) for word in self.boundary_words}
        rows = sorted(column for column in columns if any(column))
        basis = integer_kernel(rows, len(self.generators))
        return tuple(dict(zip(self.generators, vector, strict=True)) for vector in basis)

    def without_relator(self, relator: int | str) -> Presentation:
        """The presentation without one relator; the later ones move up, places go with them.

        Whether the group stays the same is the caller's business: any one relator of a connected diagram's
        Wirtinger presentation follows from the others.

        Raises
        ------
        AlgebraError
            If there is no such relator.

        Examples
        --------
        >>> print(Presentation.parse("< a, b | a b, a^2 b^2 >").without_relator("r1"))
        < a, b | a^2 b^2 >
        """
        gone = self.relator_number(relator)
        kept = [j for j in range(1, len(self.boundary_words) + 1) if j != gone]
        return self._part(self.generators, {j: self.boundary_words[j - 1] for j in kept}, dict(self.marks))

    def _part(
        self, generators: Sequence[str], relators: Mapping[int, Word], marks: Mapping[str, Word]
    ) -> Presentation:
        # Relators are keyed by their numbers here; they and the generators keep their places.
        places = {
            f"generator:{name}": place for name in generators if (place := self.place_of("generator", name))
        }
        for new, old in enumerate(relators, 1):
            if place := self.place_of("relator", old):
                places[f"relator:{new}"] = place
        return Presentation(generators, list(relators.values()), places, marks)

    def simplified(self) -> tuple[Presentation, Simplification]:
        """Eliminate generators that occur once in a relator, and drop trivial and repeated relators.

        Tietze moves (H. Tietze, Über die topologischen Invarianten mehrdimensionaler Mannigfaltigkeiten,
        Monatsh. Math. Phys. 19 (1908)): cheapest growth first, and never beyond `MAX_GROWTH`; ties go to the
        first relator, then to the last generator. The group is the same; marks and places are carried
        along. Remaining generators keep their weights, so that
        ``Cover(q, {g: weights[g] for g in q.generators})`` is the same cover. Dropping a repeated relator
        takes a free summand from H_2 of the presentation complex.

        Returns
        -------
        (Presentation, Simplification)

        Examples
        --------
        >>> q, log = Presentation.parse("< a, b, c | c a = a b, a b = b c, b c = c a >").simplified()
        >>> print(q)
        < a, b | a b a b^-1 a^-1 b^-1 >
        >>> print(log)
        r1: c = a b a^-1
        r3: dropped, trivial or repeated
        >>> print(log.image(Word.parse("c a")))
        a b
        """
        relators = {j: word.cyclically_reduced() for j, word in enumerate(self.boundary_words, 1)}
        generators = list(self.generators)
        limit = MAX_GROWTH * sum(map(len, relators.values()))
        steps: list[Step] = []
        while True:
            for j in _redundant(relators):
                del relators[j]
                steps.append(Step(j))
            choice = _cheapest(relators, generators, limit)
            if choice is None:
                break
            j, name = choice
            word = _solve(relators.pop(j), name)
            generators.remove(name)
            steps.append(Step(j, name, word))
            for k, relator in relators.items():
                if any(name == letter for letter, _ in relator):
                    relators[k] = relator.substitute({name: word}).cyclically_reduced()
        log = Simplification(self.generators, tuple(steps))
        marks = {name: log.image(word) for name, word in self.marks}
        return self._part(generators, relators, marks), log

    def text(self, style: Style = "plain") -> str:
        """Print it as "plain", "unicode" or "latex"; relators as they are written."""
        return presentation_text(self.generators, self.boundary_words, style)

    def latex(self) -> str:
        """Its LaTeX, without dollar signs."""
        return self.text("latex")

    def __str__(self) -> str:
        return self.text()

    def __repr__(self) -> str:
        if self.size() <= 40:
            return f"Presentation({str(self)!r})"
        return f"Presentation({len(self.generators)} generators, {len(self.boundary_words)} relators)"

    def size(self) -> int:
        """The number of generators and of letters of the relators, as written.

        Examples
        --------
        >>> Presentation.parse("< a, b | a b a = b a b >").size()
        8
        """
        return len(self.generators) + sum(map(len, self.boundary_words))

    def _repr_latex_(self) -> str | None:
        return f"${self.latex()}$" if self.size() <= MAX_LATEX_ENTRIES else None

    def to_data(self) -> dict[str, Any]:
        """Generators, relators as lists of [name, sign], places as texts, marks."""
        return {
            "generators": list(self.generators),
            "relators": [word.to_data()["letters"] for word in self.boundary_words],
            "places": {key: str(place) for key, place in self.places},
            "marks": {name: word.to_data()["letters"] for name, word in self.marks},
        }

    @classmethod
    def from_data(cls, data: Any) -> Presentation:
        """Read `to_data` back."""
        return cls(
            data["generators"],
            [Word.from_data({"letters": letters}) for letters in data["relators"]],
            {key: Place.parse(text) for key, text in data["places"].items()},
            {name: Word.from_data({"letters": letters}) for name, letters in data["marks"].items()},
        )


@dataclass(frozen=True, slots=True)
class Step:
    """One Tietze move: relator `relator` of the first presentation gives generator = word, or is dropped."""

    relator: int
    generator: str | None = None
    word: Word | None = None

    def __str__(self) -> str:
        if self.generator is None:
            return f"r{self.relator}: dropped, trivial or repeated"
        return f"r{self.relator}: {self.generator} = {self.word}"


@dataclass(frozen=True)
class Simplification:
    """The log of `Presentation.simplified`: its steps in order, and what became of the old generators.

    Relators are numbered as in the first presentation.
    """

    generators: tuple[str, ...]
    steps: tuple[Step, ...]

    @cached_property
    def images(self) -> dict[str, Word]:
        """Each old generator as a word in the generators that are left."""
        images: dict[str, Word] = {}
        for step in reversed(self.steps):
            if step.generator is not None and step.word is not None:
                images[step.generator] = step.word.substitute(images)
        return {name: images.get(name, Word(((name, 1),))) for name in self.generators}

    def image(self, word: Word) -> Word:
        """A word in the old generators, written in those that are left."""
        return word.substitute(self.images)

    def __str__(self) -> str:
        return "\n".join(map(str, self.steps)) or "nothing to do"


def _check_letters(word: Word, known: frozenset[str], where: str) -> None:
    if not isinstance(word, Word):
        raise AlgebraError(f"{word!r} is no Word", where=where, accepted='Word.parse("a b^-1")')
    for position, (name, _) in enumerate(word, 1):
        if name not in known:
            accepted = ", ".join(sorted(known)[:30]) or "no letters: there are no generators"
            raise AlgebraError(
                f"{name} is not a generator", where=f"{where}, letter {position}", accepted=accepted
            )


def _exponents(word: Word) -> Counter[str]:
    exponents: Counter[str] = Counter()
    for name, sign in word:
        exponents[name] += sign
    return exponents


def _redundant(relators: Mapping[int, Word]) -> list[int]:
    """Relators that are empty, or another one or its inverse up to rotation."""
    code: dict[tuple[str, int], str] = {}
    kept: dict[int, list[str]] = {}
    found = []
    for j, relator in relators.items():
        if not relator:
            found.append(j)
            continue
        # A letter becomes one sign, so that a rotation is found by searching in a text.
        text, back = (
            "".join(code.setdefault(letter, chr(0x100 + len(code))) for letter in word)
            for word in (relator, relator.inverse())
        )
        if any(text in twice or back in twice for twice in kept.setdefault(len(text), [])):
            found.append(j)
        else:
            kept[len(text)].append(text + text)
    return found


def _cheapest(relators: Mapping[int, Word], generators: Sequence[str], limit: int) -> tuple[int, str] | None:
    """The relator and the generator, once in it, whose elimination lets the relators grow least."""
    counts = {j: Counter(name for name, _ in relator) for j, relator in relators.items()}
    totals: Counter[str] = Counter()
    for count in counts.values():
        totals.update(count)
    length = sum(totals.values())
    order = {name: -i for i, name in enumerate(generators)}
    best: tuple[int, int, int, str] | None = None
    for j, count in counts.items():
        size = len(relators[j])
        for name, times in count.items():
            if times == 1:
                growth = (totals[name] - 1) * (size - 2) - size
                choice = (growth, j, order[name], name)
                if length + growth <= limit and (best is None or choice < best):
                    best = choice
    return None if best is None else (best[1], best[3])


def _solve(relator: Word, name: str) -> Word:
    """The word w for which the relator, in which the name occurs once, says name = w."""
    letters = relator.letters
    (at,) = (i for i, letter in enumerate(letters) if letter[0] == name)
    rest = Word(letters[at + 1 :] + letters[:at])
    return rest ** -letters[at][1]
