"""Texts that come from below the window, as the window prints them."""

from __future__ import annotations

import re

PI = re.compile(r"(?<![a-z])pi(?![a-z])")
LETTER_FIRST = re.compile(r"\w(?::| and \w\b)")


def with_pi(text: str) -> str:
    """π where an angle has pi, which is what one types."""
    return PI.sub("π", text)


def as_sentence(text: str) -> str:
    """A reason or an error as a sentence of its own. Letters keep their case: "b and c make …", "α: …"."""
    head = text if LETTER_FIRST.match(text) else text[:1].upper() + text[1:]
    return head + ("" if not text or text.endswith((".", "…")) else ".")
