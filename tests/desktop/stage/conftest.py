"""A drawing made by hand and real views on screen."""

from __future__ import annotations

import itertools
from collections.abc import Callable, Iterator

import numpy as np
import pytest
from PySide6.QtCore import QEvent, QPoint, QPointF, Qt
from PySide6.QtGui import QMouseEvent
from PySide6.QtWidgets import QApplication, QWidget
from pytestqt.qtbot import QtBot

from mirrorlab.drawing.model import Drawing, Faces, Label, Line, Points, Role


def move(view: QWidget, place: QPoint, button: Qt.MouseButton = Qt.MouseButton.NoButton, keys=None) -> None:
    """Move the pointer over a view. Qt's own helper moves the real cursor, which another window may catch."""
    event = QMouseEvent(
        QEvent.Type.MouseMove,
        QPointF(place),
        view.mapToGlobal(QPointF(place)),
        Qt.MouseButton.NoButton,
        button,
        keys or Qt.KeyboardModifier.NoModifier,
    )
    QApplication.sendEvent(view, event)


@pytest.fixture
def pointer() -> Callable[..., None]:
    """Moves the pointer: view, place, button held, keys held."""
    return move


SEED = np.array([0.86, 0.42, 0.18]) / np.linalg.norm([0.86, 0.42, 0.18])


@pytest.fixture
def ball() -> Drawing:
    """The sphere cut by the nine mirrors of a cube, finely, with images and one typed mirror's ring."""
    corners = np.array([[1.0, 0, 0], [1, 1, 0], [1, 1, 1]])
    corners /= np.linalg.norm(corners, axis=1, keepdims=True)
    steps = 8
    weights = [(i, j, steps - i - j) for i in range(steps + 1) for j in range(steps + 1 - i)]
    number = {(i, j): k for k, (i, j, _) in enumerate(weights)}
    small = []
    for i, j, rest in weights:
        if rest > 0:
            small.append((number[i, j], number[i + 1, j], number[i, j + 1]))
        if rest > 1:
            small.append((number[i + 1, j], number[i + 1, j + 1], number[i, j + 1]))
    blocks, points = {0: [], 1: []}, {0: [], 1: []}
    for k, (order, signs) in enumerate(
        itertools.product(itertools.permutations(range(3)), itertools.product((1.0, -1.0), repeat=3))
    ):
        matrix = np.diag(signs) @ np.eye(3)[list(order)]
        odd = int(np.linalg.det(matrix) < 0)
        vertices = np.array(weights, dtype=float) @ corners @ matrix.T
        vertices /= np.linalg.norm(vertices, axis=1, keepdims=True)
        triangles = np.array(small)
        if np.linalg.det(vertices[triangles[0]]) < 0:
            triangles = triangles[:, ::-1]
        blocks[odd].append((k, vertices, triangles))
        points[odd].append((k, matrix @ SEED))
    faces, marks = [], [Points(Role.SEED, SEED[None], (("image", 0),))]
    for odd, role, image in (
        (0, Role.CHAMBER_EVEN, Role.IMAGE_EVEN),
        (1, Role.CHAMBER_ODD, Role.IMAGE_ODD),
    ):
        count = len(weights)
        faces.append(
            Faces(
                role,
                np.concatenate([v for _, v, _ in blocks[odd]]),
                np.concatenate([t + n * count for n, (_, _, t) in enumerate(blocks[odd])]),
                tuple(("chamber", k) for k, _, t in blocks[odd] for _ in range(len(t))),
            )
        )
        rest = [(k, p) for k, p in points[odd] if k > 0]
        marks.append(Points(image, np.array([p for _, p in rest]), tuple(("image", k) for k, _ in rest)))
    t = np.linspace(0, 2 * np.pi, 181)[:-1]
    ring = np.stack([np.cos(t), np.sin(t), 0 * t], axis=1)
    outer = np.concatenate([1.001 * ring, 1.2 * ring])
    i = np.arange(180)
    j = (i + 1) % 180
    band = np.concatenate([np.stack([i, i + 180, j + 180], axis=1), np.stack([i, j + 180, j], axis=1)])
    return Drawing(
        "by hand",
        (*faces, Faces(Role.TYPED_MIRROR, outer, band, (("mirror", 0),), 0)),
        (
            Line(Role.TYPED_MIRROR, 1.001 * ring, ("mirror", 0), 0, closed=True),
            Line(Role.GENERATED_MIRROR, ring[:, [0, 2, 1]], ("generated", 1), closed=True),
        ),
        tuple(marks),
        (Label("a", np.array([0.0, 1.3, 0.0]), Role.TYPED_MIRROR, ("mirror", 0), 0),),
        toward=np.array([0.75, 0.5, 0.45]),
        seed_on="sphere",
        frame="x y z",
    )


@pytest.fixture
def sheet() -> Drawing:
    """A flat drawing: a square with a seed."""
    square = np.array([[-1.0, -1, 0], [1, -1, 0], [1, 1, 0], [-1, 1, 0]])
    return Drawing(
        "sheet",
        (Faces(Role.REGION, square, np.array([[0, 1, 2], [0, 2, 3]]), (("chamber", 0),)),),
        (Line(Role.TYPED_MIRROR, square[:2], ("mirror", 0), 0),),
        (Points(Role.SEED, np.array([[0.3, 0.2, 0.0]]), (("image", 0),)),),
        flat=True,
        seed_on="plane",
    )


@pytest.fixture
def shown(qtbot: QtBot) -> Iterator[Callable[[QWidget, tuple[int, int]], QWidget]]:
    """Put a view in sight at a size."""
    made: list[QWidget] = []

    def show(view: QWidget, size: tuple[int, int] = (420, 400)) -> QWidget:
        qtbot.addWidget(view)
        made.append(view)
        view.resize(*size)
        with qtbot.waitExposed(view):
            view.show()
        return view

    yield show
    for view in made:
        view.hide()
