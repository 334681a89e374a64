"""Finite quotients of a group by a naive search over permutations, independent of what it tests."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from itertools import permutations

from kt_widgets.groups.presentations import Presentation
from kt_widgets.groups.words import Word

__all__ = ["CLASSES", "Permutation", "commute", "image", "quotients"]

Permutation = tuple[int, ...]
Images = Mapping[str, Permutation]


def _times(f: Permutation, g: Permutation) -> Permutation:
    """First f, then g: loops compose from left to right."""
    return tuple([g[point] for point in f])


def _inverse(f: Permutation) -> Permutation:
    back = [0] * len(f)
    for point, target in enumerate(f):
        back[target] = point
    return tuple(back)


def _cycle_lengths(f: Permutation) -> tuple[int, ...]:
    seen: set[int] = set()
    lengths = []
    for start in range(len(f)):
        cycle = []
        while start not in seen:
            seen.add(start)
            cycle.append(start)
            start = f[start]
        lengths += [len(cycle)] if cycle else []
    return tuple(sorted(lengths))


CLASSES = {
    lengths: [f for f in permutations(range(sum(lengths))) if _cycle_lengths(f) == lengths]
    for lengths in [(1, 3), (4,), (5,), (1, 2, 2)]
}
"""The permutations with given lengths of cycles."""


def image(word: Word, images: Images) -> Permutation:
    """The permutation of a word.

    Examples
    --------
    >>> image(Word.parse("a b"), {"a": (1, 0, 2), "b": (0, 2, 1)})
    (2, 0, 1)
    """
    (degree,) = {len(f) for f in images.values()}
    result = tuple(range(degree))
    for name, sign in word:
        result = _times(result, images[name] if sign > 0 else _inverse(images[name]))
    return result


def commute(one: Word, other: Word, images: Images) -> bool:
    """Whether the images of two words commute."""
    f, g = image(one, images), image(other, images)
    return _times(f, g) == _times(g, f)


def quotients(group: Presentation) -> Iterator[dict[str, Permutation]]:
    """Every way to send all generators into one of `CLASSES`, the first one to the first element.

    For a knot's Wirtinger presentation these are all homomorphisms, up to conjugation, that send meridians to
    such permutations.

    Examples
    --------
    >>> len(list(quotients(Presentation.parse("< a, b | a b a = b a b >"))))
    20
    """
    for members in CLASSES.values():
        yield from _extensions(group, members, {group.generators[0]: members[0]})


def _extensions(
    group: Presentation, members: list[Permutation], known: Images
) -> Iterator[dict[str, Permutation]]:
    found = _solved(group, members, known)
    if found is None:
        return
    missing = [name for name in group.generators if name not in found]
    if not missing:
        yield found
        return
    # of two letters left in a relator either decides, of three the one that occurs twice
    left = [[name for name, _ in word if name not in found] for word in group.relators]
    deciding = [names[0] for names in left if len(names) == 2]
    twice = [name for names in left if len(set(names)) == 2 for name in names if names.count(name) == 2]
    choice = [*deciding, *twice, *missing][0]
    for member in members:
        yield from _extensions(group, members, {**found, choice: member})


def _solved(group: Presentation, members: list[Permutation], known: Images) -> dict[str, Permutation] | None:
    """What follows from the known images by relators with one letter left; None if that is impossible."""
    found = dict(known)
    identity = tuple(range(len(members[0])))
    pending = [word for word in group.relators if word]
    progress = True
    while progress:
        progress = False
        for word in list(pending):
            left = [at for at, (name, _) in enumerate(word) if name not in found]
            if len(left) > 1:
                continue
            pending.remove(word)
            if not left:
                if image(word, found) != identity:
                    return None
                continue
            (at,) = left
            name, sign = word.letters[at]
            # u x v = 1 says x = (v u)^-1
            rest = image(Word(word.letters[at + 1 :] + word.letters[:at]), found)
            found[name] = _inverse(rest) if sign > 0 else rest
            if found[name] not in members:
                return None
            progress = True
    return found
