"""Which pictures there are, and where each one comes from."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench import Bench, BenchSlot, NoPicture, PictureMaker
from mirrorlab.desktop.document import Document
from mirrorlab.drawing.model import Drawing

SeedReader: TypeAlias = "Callable[[Document, Place], Place]"
"""From where the pointer holds the seed, in the drawing's coordinates, to a point in the arrangement's frame."""

Place: TypeAlias = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class CorePicture:
    """A picture that needs no bench.

    Attributes
    ----------
    fits : callable
        Whether there is such a picture of the document's arrangement.
    seed_of : callable
        Reads where the seed is dragged.
    """

    name: str
    make: Callable[[Document], Drawing]
    fits: Callable[[Document], bool]
    seed_of: SeedReader


def _need_planes(document: Document) -> None:
    if document.finding.kind == "unbuildable":
        msg = "No planes have these angles. Evidence lists the nearest that close."
        raise NoPicture(msg)


def _space(document: Document) -> Drawing:
    _need_planes(document)
    from mirrorlab.drawing.space import space_drawing

    return space_drawing(document.arrangement, document.finding, document.orbit)


def _along_the_edge(document: Document) -> Drawing:
    from mirrorlab.drawing.space import SpaceOptions, space_drawing

    return space_drawing(document.arrangement, document.finding, document.orbit, SpaceOptions(flat=True))


def chamber(document: Document) -> Drawing:
    """The map of the chamber, in which the seed is moved."""
    from mirrorlab.drawing.chambermap import chamber_drawing

    return chamber_drawing(document.arrangement, document.finding, document.orbit)


def _coxeter(document: Document) -> Drawing:
    _need_planes(document)
    from mirrorlab.drawing.coxeterplane import coxeter_drawing

    return coxeter_drawing(document.arrangement, document.finding, document.orbit)


def has_map(document: Document) -> bool:
    """Whether the arrangement has a chamber that can be drawn on paper."""
    group = document.finding.group
    return group is not None and 1 <= group.rank <= 3


def _seed_in_space(document: Document, place: Place) -> Place:
    from mirrorlab.drawing.placing import picture_axes

    normals = document.arrangement.normals
    assert normals is not None
    return place @ picture_axes(normals, document.finding.rank)


def _seed_along_the_edge(document: Document, place: Place) -> Place:
    from mirrorlab.drawing.placing import common_axes, picture_axes

    normals = document.arrangement.normals
    assert normals is not None
    axes = picture_axes(normals, document.finding.rank)
    return place[:2] @ common_axes(normals @ axes.T)[:2] @ axes


def seed_on_map(document: Document, place: Place) -> Place:
    """The direction that a place on the chamber's map stands for."""
    from mirrorlab.drawing.chambermap import chamber_map

    group = document.finding.group
    assert group is not None
    return chamber_map(group).to_seed(place)


CORE: tuple[CorePicture, ...] = (
    CorePicture("Space", _space, lambda document: document.finding.rank <= 3, _seed_in_space),
    CorePicture(
        "Along the edge",
        _along_the_edge,
        lambda document: document.finding.rank <= 2 and document.finding.group is not None,
        _seed_along_the_edge,
    ),
    CorePicture("Chamber map", chamber, has_map, seed_on_map),
    CorePicture(
        "Coxeter plane",
        _coxeter,
        lambda document: document.finding.rank > 2 or document.finding.group is None,
        _seed_in_space,
    ),
)


class Shelf:
    """All pictures by name. A bench is loaded when one of its pictures is taken.

    Parameters
    ----------
    slots : tuple of BenchSlot
        The benches there are.
    bench : callable
        Gives the bench of a title, loading it when needed.
    """

    def __init__(
        self, document: Document, slots: tuple[BenchSlot, ...], bench: Callable[[str], Bench]
    ) -> None:
        self._document = document
        self._slots = slots
        self._bench = bench

    def names(self) -> tuple[str, ...]:
        """Names of the pictures that fit the arrangement, those of the benches last."""
        core = [picture.name for picture in CORE if picture.fits(self._document)]
        return (*core, *(name for slot in self._slots for name in slot.pictures))

    def fits(self, name: str) -> bool:
        """Whether the picture is among those that fit."""
        return name in self.names()

    def first(self) -> str:
        """The picture to fall back on."""
        return self.names()[0]

    def take(self, name: str) -> Drawing | QWidget:
        """Make the picture. Raises `NoPicture` where there is nothing to show."""
        return self.maker(name)(self._document)

    def seed_of(self, name: str, place: Place) -> Place:
        """The point of the arrangement's frame for a place where the seed is held in a picture."""
        reader = next((picture.seed_of for picture in CORE if picture.name == name), _seed_in_space)
        return reader(self._document, place)

    def maker(self, name: str) -> PictureMaker:
        """What makes the picture of that name."""
        for picture in CORE:
            if picture.name == name:
                return picture.make
        for slot in self._slots:
            if name in slot.pictures:
                makers = self._bench(slot.title).pictures()
                if name in makers:
                    return makers[name]
        msg = f"There is no picture called {name} of this arrangement."
        raise NoPicture(msg)
