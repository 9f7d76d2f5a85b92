"""The images: how many light finds, how bright they are, and which sectors are cut or overlap."""

from __future__ import annotations

from functools import partial
from typing import Any

import numpy as np
from PySide6.QtWidgets import QWidget

from mirrorlab.desktop.bench_parts import FactRows
from mirrorlab.desktop.document import Document
from mirrorlab.desktop.glass.answers import Answer
from mirrorlab.desktop.glass.glass_section import GlassSection, told
from mirrorlab.desktop.parts import button, label
from mirrorlab.desktop.rows import Column, fixed
from mirrorlab.desktop.words import PARITIES
from mirrorlab.drawing.model import Key
from mirrorlab.mirrors import Arrangement, Orbit
from mirrorlab.optics.assembly import Assembly
from mirrorlab.optics.images import Image, ImageCount, count_images

SAME_PLACE = 1e-6
"""Of the seed's length: two images nearer than this are one, for both are made of the same normals."""

MOST_ROWS_SHOWN = 6
MOST_LINKED = 5000
"""Images linked with the pictures; beyond, nobody points at one of them."""


class ImagesSection(GlassSection):
    """What the mirrors make of the object."""

    name = "Images"
    about = "How many images, how bright, and which sectors are cut or overlap"

    def __init__(self, document: Document, parent: QWidget | None = None) -> None:
        super().__init__(document, parent)
        self.count = label("", "title", wrap=True)
        self.error = label("", "wrong", wrap=True)
        self.facts = FactRows()
        self.light_heading = label("By bounces", "heading")
        self.light = FactRows()
        self.sectors_heading = label("Around each edge", "heading")
        self.sectors = FactRows()
        self.again = button("Count again", "tight", "Counting was stopped")
        self.answer = Answer(document.work, "count of images", self)
        for part in (
            self.count,
            self.error,
            self.again,
            self.facts,
            self.light_heading,
            self.light,
            self.sectors_heading,
            self.sectors,
        ):
            self.column.addWidget(part)
        self.again.clicked.connect(self.answer.again)
        self.answer.changed.connect(self._came)

    def refresh(self) -> None:
        made, error = self.assembly()
        self.error.setText("" if error is None else told(error))
        self.error.setVisible(error is not None)
        if made is None:
            self.answer.forget()
        else:
            # A ball is the seed itself; of a card a place off its middle is counted.
            point = made.place.centre if made.place.shape == "ball" and self.state.thing == "seed" else None
            self.answer.ask(made, partial(_counted, made, point))
        self._show()

    def _came(self) -> None:
        if self.isVisible():
            self._show()

    def _show(self) -> None:
        found: ImageCount | None = self.answer.value
        self.again.setVisible(self.answer.stopped)
        if found is None:
            words = str(self.answer.error or ("Stopped." if self.answer.stopped else "Counting …"))
            self.count.setText(words if self.answer.key is not None else "")
            for facts in (self.facts, self.light, self.sectors):
                facts.show_facts({})
            self.model.set_columns(())
            self.title, self.note = "No images", words if self.answer.key is not None else self.error.text()
        else:
            more = "" if found.complete else " and more"
            self.count.setText(f"{found.count:,} image{'s' if found.count != 1 else ''}{more}")
            self.facts.show_facts(figures(found))
            self.light.show_facts(light_words(found))
            self.sectors.show_facts({edge.pair: edge.sentence.partition(": ")[2] for edge in found.edges})
            document = self.document
            keys = linked_keys(found.images, document.arrangement, document.orbit)
            self.model.set_columns(image_columns(found), keys)
            self.title = f"{found.count:,} images"
            self.note = "; ".join((*found.notes, "places in mm, x right, y up, z towards the eye"))
        self.light_heading.setVisible(bool(self.light.texts))
        self.sectors_heading.setVisible(bool(self.sectors.texts))
        self.rows_changed.emit()


def _counted(made: Assembly, point: Any, progress: Any) -> ImageCount:
    return count_images(made, point, progress=progress)


def figures(found: ImageCount) -> dict[str, str]:
    """Figures of a count."""
    odd = sum(image.parity for image in found.images)
    dimmest = min((image.brightness for image in found.images), default=1.0)
    most = max((image.bounces for image in found.images), default=0)
    overlaps = len(found.overlaps)
    return {
        "Seen by the eye": f"{found.seen:,}",
        "Mirror-inverted": f"{odd:,}, and {found.count - odd:,} not",
        "Most bounces": f"{most}, down to {100 * dimmest:.1f} % of the light",
        "Counted until": "" if found.complete else found.stopped_by,
        "Rule of two": "" if found.rule is None else f"{found.rule} (common practice)",
        "Overlapping": f"{overlaps} pairs of images claim the same space" if overlaps else "",
    }


def linked_keys(images: tuple[Image, ...], arrangement: Arrangement, orbit: Orbit | None) -> list[Key]:
    """For each image its key in the picture in space, found by its word, or one of its own."""
    own: list[Key] = [("light", k) for k in range(len(images))]
    normals = arrangement.normals
    if orbit is None or normals is None or len(images) > MOST_LINKED or len(orbit) > MOST_LINKED:
        return own
    place = {letter: k for k, letter in enumerate(arrangement.letters)}
    if not set("".join(image.word for image in images)) <= set(place):
        return own  # of other mirrors: the count of these has not come yet
    size = float(np.linalg.norm(orbit.seed)) or 1.0
    for k, image in enumerate(images):
        spot = orbit.seed.copy()
        for letter in reversed(image.word):
            normal = normals[place[letter]]
            spot = spot - 2 * (normal @ spot) * normal
        apart = np.abs(orbit.points - spot).max(axis=1)
        nearest = int(apart.argmin())
        if apart[nearest] < SAME_PLACE * size:
            own[k] = ("image", nearest)
    return own


def light_words(found: ImageCount) -> dict[str, str]:
    """How many images there are of so many bounces, and what light is left of the brightest."""
    return {
        f"{bounces} bounce{'s' if bounces != 1 else ''}": f"{images:,}, at most {100 * left:.0f} % of the light"
        for bounces, images, left in found.by_bounces()[:MOST_ROWS_SHOWN]
    }


def image_columns(found: ImageCount) -> list[Column]:
    """The table of images."""
    images = found.images
    places = np.array([image.position for image in images]).reshape(-1, 3)
    columns = [
        Column("image", np.arange(1, len(images) + 1)),
        Column(
            "word",
            [image.word for image in images],
            hint="the eye's ray meets the first letter first",
            text=True,
        ),
        Column(
            "words", np.array([image.words for image in images]), hint="ways of light that lead to this place"
        ),
        Column(
            "parity",
            [PARITIES[image.parity] for image in images],
            hint="odd images are mirror-inverted",
            text=True,
        ),
        Column("bounces", np.array([image.bounces for image in images])),
        Column("light %", np.array([100 * image.brightness for image in images]), lambda v: f"{v:.2f}"),
        Column(
            "seen",
            ["yes" if image.seen else "no" for image in images],
            hint="by the eye, past all rims",
            text=True,
        ),
    ]
    return columns + [Column(f"{axis} mm", places[:, k], fixed(2)) for k, axis in enumerate("xyz")]
