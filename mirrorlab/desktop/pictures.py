"""Which pictures there are, and where each one comes from."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench import Bench, BenchSlot, NoPicture, PictureMaker
from mirrorlab.desktop.document import Document
from mirrorlab.drawing.model import Drawing


@dataclass(frozen=True, slots=True)
class CorePicture:
    """A picture that needs no bench.

    Attributes
    ----------
    fits : callable
        Whether there is such a picture of the document's arrangement.
    """

    name: str
    make: Callable[[Document], Drawing]
    fits: Callable[[Document], bool]


def _space(document: Document) -> Drawing:
    from mirrorlab.drawing.space import space_drawing

    return space_drawing(document.arrangement, document.finding, document.orbit)


def _in_space(document: Document) -> bool:
    return document.finding.rank <= 3


CORE: tuple[CorePicture, ...] = (CorePicture("Space", _space, _in_space),)


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
