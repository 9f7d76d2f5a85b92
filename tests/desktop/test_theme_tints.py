"""Tints stay apart for eyes that see fewer colours, and writing stays readable.

The matrices simulate complete protanopia, deuteranopia and tritanopia in linear sRGB: G. M. Machado,
M. M. Oliveira, L. A. F. Fernandes, IEEE Trans. Vis. Comput. Graph. 15 (2009) 1291–1298 (values from memory).
Contrast is that of W3C WCAG 2.1, 1.4.3; distances are CIE 1976 ΔE*ab under D65.
"""

from __future__ import annotations

import itertools

import numpy as np
import pytest

from mirrorlab.desktop.theme import THEMES, Theme
from mirrorlab.drawing.look import PATTERN_NAMES, PATTERNS, rgb

EYES = {
    "full": np.eye(3),
    "protanopia": np.array(
        [[0.152286, 1.052583, -0.204868], [0.114503, 0.786281, 0.099216], [-0.003882, -0.048116, 1.051998]]
    ),
    "deuteranopia": np.array(
        [[0.367322, 0.860646, -0.227968], [0.280085, 0.672501, 0.047413], [-0.011820, 0.042940, 0.968881]]
    ),
    "tritanopia": np.array(
        [[1.255528, -0.076749, -0.178779], [-0.078411, 0.930809, 0.147602], [0.004733, 0.691367, 0.303900]]
    ),
}
TO_XYZ = np.array(
    [[0.4124564, 0.3575761, 0.1804375], [0.2126729, 0.7151522, 0.0721750], [0.0193339, 0.1191920, 0.9503041]]
)


def linear(tint: str) -> np.ndarray:
    c = rgb(tint)
    return np.where(c <= 0.04045, c / 12.92, ((c + 0.055) / 1.055) ** 2.4)


def lab(light: np.ndarray) -> np.ndarray:
    x = TO_XYZ @ np.clip(light, 0, 1) / (TO_XYZ @ np.ones(3))
    f = np.where(x > (6 / 29) ** 3, np.cbrt(x), x * (29 / 6) ** 2 / 3 + 4 / 29)
    return np.array([116 * f[1] - 16, 500 * (f[0] - f[1]), 200 * (f[1] - f[2])])


def distance(one: str, other: str, eye: str) -> float:
    m = EYES[eye]
    return float(np.linalg.norm(lab(m @ linear(one)) - lab(m @ linear(other))))


def contrast(one: str, other: str) -> float:
    a, b = sorted((float(TO_XYZ[1] @ linear(t)) for t in (one, other)), reverse=True)
    return (a + 0.05) / (b + 0.05)


themes = pytest.mark.parametrize("theme", THEMES.values(), ids=THEMES)
eyes = pytest.mark.parametrize("eye", EYES)


def test_the_matrices_leave_grey_alone():
    for m in EYES.values():
        np.testing.assert_allclose(m @ np.full(3, 0.5), 0.5, atol=1e-5)


def test_lab_of_known_colours():
    """White, and sRGB red L* 53.24, a* 80.09, b* 67.20 (value from memory)."""
    np.testing.assert_allclose(lab(linear("#FFFFFF")), [100, 0, 0], atol=1e-2)
    np.testing.assert_allclose(lab(linear("#FF0000")), [53.24, 80.09, 67.20], atol=2e-2)


@themes
@eyes
def test_typed_mirrors_stay_apart(theme: Theme, eye: str):
    tints = theme.picture.mirrors
    assert len(tints) == 8
    worst = min((distance(p, q, eye), p, q) for p, q in itertools.combinations(tints, 2))
    assert worst[0] > 18, worst


@themes
@eyes
def test_parity_shows_in_lightness(theme: Theme, eye: str):
    even, odd = (lab(EYES[eye] @ linear(t)) for t in (theme.picture.silver_light, theme.picture.silver_dark))
    assert even[0] - odd[0] > 20


@themes
@eyes
def test_seed_and_region_stand_out(theme: Theme, eye: str):
    look = theme.picture
    for chamber in (look.silver_light, look.silver_dark):
        assert distance(look.region, chamber, eye) > 25
        assert distance(look.seed, chamber, eye) > 25
    assert distance(look.seed, look.region, eye) > 25
    assert distance(look.seed, look.image, eye) > 25


@themes
@eyes
def test_good_warn_bad_stay_apart(theme: Theme, eye: str):
    for p, q in itertools.combinations((theme.good, theme.warn, theme.bad), 2):
        assert distance(p, q, eye) > 12, (p, q)
    assert len(set(theme.marks)) == 3


@themes
def test_writing_is_readable(theme: Theme):
    for ground in (theme.ground, theme.panel, theme.raised):
        for ink in (theme.text, theme.muted, theme.accent, theme.good, theme.warn, theme.bad):
            assert contrast(ink, ground) >= 4.5, (ink, ground)
    assert contrast(theme.accent_text, theme.accent) >= 4.5
    assert contrast(theme.text, theme.select) >= 4.5
    assert contrast(theme.picture.ink, theme.picture.ground) >= 7


@themes
def test_mirror_tints_stand_on_the_ground(theme: Theme):
    """WCAG 2.1, 1.4.11 asks 3:1 of graphical objects; the later mirrors lean on letter and pattern."""
    for tint in theme.picture.mirrors[:3]:
        assert contrast(tint, theme.picture.ground) >= 3, tint
    for tint in theme.picture.mirrors:
        assert contrast(tint, theme.picture.ground) >= 2.4, tint


def test_patterns_differ():
    assert len(set(PATTERNS)) == len(PATTERNS) == len(PATTERN_NAMES) == 8
