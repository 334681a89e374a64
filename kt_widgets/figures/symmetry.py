"""Rotational symmetries of a planar map, and the outer face that shows most of them."""

from __future__ import annotations

from collections.abc import Sequence

from kt_widgets.diagrams.planar_map import PlanarMap

__all__ = ["automorphisms", "outer_face"]


def automorphisms(planar_map: PlanarMap) -> tuple[tuple[int, ...], ...]:
    """The orientation-preserving automorphisms of a connected map, each as the list of images of the darts.

    Such an automorphism is known from the image of one dart, so each candidate is followed or refuted by one
    walk through the map. Crossings may go to crossings of the other sign: this is symmetry of the shadow.

    Examples
    --------
    The shadow of the trefoil has the six rotations of a triangular prism.

    >>> trefoil = PlanarMap((9, 4, 7, 10, 1, 8, 11, 2, 5, 0, 3, 6))
    >>> len(automorphisms(trefoil)), len(automorphisms(PlanarMap((1, 0, 3, 2))))
    (6, 2)
    """
    mate = planar_map.mate
    if not mate:
        return ()
    size = [len(walk) for walk in planar_map.faces]
    kind = [
        (size[planar_map.face_of_dart[dart]], size[planar_map.face_of_dart[mate[dart]]])
        for dart in range(len(mate))
    ]
    found = (_followed(mate, kind, image) for image in range(len(mate)) if kind[image] == kind[0])
    return tuple(images for images in found if images)


def _followed(mate: Sequence[int], kind: Sequence[object], first: int) -> tuple[int, ...]:
    """The automorphism that takes dart 0 to dart `first`, or nothing."""
    images = [-1] * len(mate)
    images[0] = first
    todo = [0]
    for dart in todo:
        image = images[dart]
        for next_dart, next_image in (
            (mate[dart], mate[image]),
            (dart & ~3 | (dart + 1) & 3, image & ~3 | (image + 1) & 3),
        ):
            if images[next_dart] == -1:
                if kind[next_dart] != kind[next_image]:
                    return ()
                images[next_dart] = next_image
                todo.append(next_dart)
            elif images[next_dart] != next_image:
                return ()
    return tuple(images)


def outer_face(planar_map: PlanarMap) -> int:
    """The face (index in `planar_map.faces`) to draw outside.

    It has three sides or more where there is such a face (a strand round everything squeezes the rest), is
    fixed by as many rotations as possible, has as many sides as possible, and is the first of these.

    Examples
    --------
    >>> outer_face(PlanarMap((9, 4, 7, 10, 1, 8, 11, 2, 5, 0, 3, 6)))
    0
    """
    faces, owner = planar_map.faces, planar_map.face_of_dart
    fixed = [0] * len(faces)
    for images in automorphisms(planar_map):
        for index, walk in enumerate(faces):
            fixed[index] += owner[images[walk[0]]] == index
    sizes = [len(walk) for walk in faces]
    return max(
        range(len(faces)), key=lambda index: (min(sizes[index], 3), fixed[index], sizes[index], -index)
    )
