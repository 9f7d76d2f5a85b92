"""Texts from below the window, as it prints them."""

from __future__ import annotations

import pytest

from mirrorlab.desktop.printed import as_sentence, with_pi


@pytest.mark.parametrize(
    ("text", "printed"),
    [
        ("no angle has an uncertainty", "No angle has an uncertainty."),
        (
            "a finite group of rank 3 has at most 15 mirrors",
            "A finite group of rank 3 has at most 15 mirrors.",
        ),
        ("b and c make mirrors 2° apart", "b and c make mirrors 2° apart."),
        ("α: 190 is no angle", "α: 190 is no angle."),
        ("Stopped.", "Stopped."),
        ("", ""),
    ],
)
def test_a_sentence_begins_with_a_capital_but_letters_keep_their_case(text: str, printed: str) -> None:
    assert as_sentence(text) == printed


def test_pi_is_printed_as_its_letter_and_only_it() -> None:
    assert with_pi("bc 2pi/5, pi/3: spins pile up") == "bc 2π/5, π/3: spins pile up"
