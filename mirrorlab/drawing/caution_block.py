"""The cautions in their frame, for every sheet and report."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from mirrorlab.drawing.lettering import text_width, wrapped
from mirrorlab.drawing.sheet import Layer, Sheet, Stroke, Text, moved

WIDEST_TITLES = 0.4
"""Part of the width up to which titles get a column of their own; on narrower frames they stand above."""


def caution_block(cautions: Sequence[tuple[str, str]], width: float, height: float) -> Sheet:
    """Titles in bold and their sentences, in a frame of this width.

    Parameters
    ----------
    cautions : sequence of (title, text)
    width : float
        mm
    height : float
        mm, of the capitals.
    """
    pad, pitch = 2.5 * height, 1.7 * height
    column = max(text_width(title, height, bold=True) for title, _ in cautions) + 2 * height
    indent = 0.0 if column > WIDEST_TITLES * width else column
    texts = [Text(Layer.CAUTION, "CAUTION", np.array([pad, 0.0]), 1.3 * height, anchor="start", bold=True)]
    level = -0.8 * height
    for title, sentence in cautions:
        level -= pitch
        texts.append(Text(Layer.CAUTION, title, np.array([pad, level]), height, anchor="start", bold=True))
        for number, line in enumerate(wrapped(sentence, height, width - 2 * pad - indent)):
            if number or not indent:
                level -= pitch
            texts.append(Text(Layer.CAUTION, line, np.array([pad + indent, level]), height, anchor="start"))
    tall = -level + 2 * pad + 0.6 * height
    frame = Stroke(Layer.CAUTION, np.array([(0, 0), (width, 0), (width, tall), (0, tall)]), closed=True)
    words = moved(Sheet("", 0, 0, texts=tuple(texts)), np.array([0.0, tall - pad])).texts
    return Sheet("cautions", width, tall, (frame,), words)
