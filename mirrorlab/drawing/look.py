"""How the parts of a picture look: tints, line patterns and sizes, known to every translator.

Tints are sRGB strings ``#rrggbb``. No tint carries meaning alone: a typed mirror also has a letter and a
line pattern, and parity also shows as a filled or a hollow mark.
"""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from mirrorlab.drawing.model import Role

PATTERNS: tuple[tuple[float, ...], ...] = (
    (),  # a: solid
    (5.0, 2.5),  # b: dashed
    (6.0, 2.2, 1.2, 2.2),  # c: dash and dot
    (1.2, 1.8),  # d: dotted
    (6.0, 2.0, 1.2, 2.0, 1.2, 2.0),  # e: dash and two dots
    (11.0, 3.0),  # f: long dashes
    (3.0, 1.5, 3.0, 4.5),  # g: dashes in pairs
    (2.6, 2.6),  # h: short dashes
)
"""Line patterns of the typed mirrors a, b, c …: drawn and left out, in turn, in line widths."""

PATTERN_NAMES: tuple[str, ...] = (
    "solid",
    "dashed",
    "dash and dot",
    "dotted",
    "dash and two dots",
    "long dashes",
    "dashes in pairs",
    "short dashes",
)


@dataclass(frozen=True, slots=True)
class Look:
    """Tints and sizes of pictures.

    Attributes
    ----------
    mirrors : tuple of str
        One tint a typed mirror (a, b, c …), told apart in lightness and under colour-vision deficiencies.
    forms : tuple of str
        One tint a form of a crystal; its faces carry their indices too.
    silver_light, silver_dark : str
        Chambers of even and of odd parity.
    ball_alpha, disc_alpha : float
        How much of what is behind a chamber or a mirror is covered, 0 to 1.
    hidden_alpha : float
        How strongly a line or point shows that a solid hides; none does behind the ball, it is silvered.
    far_alpha : float
        How strongly the far half shows where nothing solid hides it.
    typed_width, generated_width, region_width, guide_width : float
        Line widths in pixels at 96 dots an inch.
    mark_size, seed_size, label_size : float
        Diameter of a mark and of the seed, height of a label's text, in the same pixels.
    """

    name: str
    ground: str
    ink: str
    muted: str
    hairline: str
    silver_light: str
    silver_dark: str
    region: str
    region_dark: str
    region_line: str
    seed: str
    seed_ground: str
    ball: str
    ball_edge: str
    image: str
    image_hollow: str
    flagged: str
    accent: str
    axis: str
    face: str
    face_line: str
    panel: str
    guide: str
    net: str
    generated: str
    generated_bare: str
    select: str
    mirrors: tuple[str, ...]
    forms: tuple[str, ...]
    sheen: str = "#ffffff"
    shade: str = "#10161c"
    sheen_alpha: float = 0.62
    shade_alpha: float = 0.3
    ball_alpha: float = 1.0
    disc_alpha: float = 0.22
    hidden_alpha: float = 0.22
    far_alpha: float = 0.42
    typed_width: float = 2.4
    generated_width: float = 1.1
    region_width: float = 2.6
    guide_width: float = 0.8
    mark_size: float = 8.5
    seed_size: float = 15.0
    label_size: float = 15.0
    label_fonts: tuple[str, ...] = field(
        default=(
            "Palatino Linotype",
            "Palatino",
            "P052",
            "Book Antiqua",
            "Georgia",
            "Noto Serif",
            "DejaVu Serif",
        )
    )

    def mirror(self, index: int) -> str:
        """Tint of typed mirror `index` (0 is a); a generated mirror (−1) has none of its own."""
        return self.generated if index < 0 else self.mirrors[index % len(self.mirrors)]

    @staticmethod
    def pattern(index: int) -> tuple[float, ...]:
        """Line pattern of typed mirror `index`, in line widths; solid for −1."""
        return () if index < 0 else PATTERNS[index % len(PATTERNS)]


LIGHT_LOOK = Look(
    name="light",
    ground="#FBF8F1",
    ink="#22262B",
    muted="#6A6861",
    hairline="#D8D1C2",
    silver_light="#E9ECEC",
    silver_dark="#93A3AE",
    region="#E2C078",
    region_dark="#C9A152",
    region_line="#6E4E12",
    seed="#C2410C",
    seed_ground="#FFFDF8",
    ball="#C9D1D4",
    ball_edge="#7E8B93",
    image="#22262B",
    image_hollow="#FFFDF8",
    flagged="#9B2D20",
    accent="#86611B",
    axis="#3C4046",
    face="#D9DEE0",
    face_line="#3C4046",
    panel="#C4D0D6",
    guide="#8E8A80",
    net="#DCD6C8",
    generated="#5C6770",
    generated_bare="#5C6770",
    select="#0B6E99",
    mirrors=("#A24020", "#274D87", "#AA8D26", "#00817A", "#680F4C", "#06A5EA", "#45351F", "#F2766B"),
    forms=("#D8DEE0", "#E6CE98", "#B5CDC4", "#DDB9A5", "#B4BDD6", "#CDC4B4"),
)
"""Ink, silvered glass and brass on paper."""

DARK_LOOK = Look(
    name="dark",
    ground="#17191B",
    ink="#ECE7DB",
    muted="#A39F95",
    hairline="#3B3E41",
    silver_light="#A9B4BB",
    silver_dark="#46525B",
    region="#C79F4E",
    region_dark="#A88137",
    region_line="#F5DFA8",
    seed="#931E18",
    seed_ground="#F6F2E8",
    ball="#6F7C84",
    ball_edge="#3A444B",
    image="#F6F2E8",
    image_hollow="#1B1E21",
    flagged="#F08A78",
    accent="#D2A85A",
    axis="#D8D3C7",
    face="#7F8B93",
    face_line="#DAD6CB",
    panel="#6E7F89",
    guide="#77746C",
    net="#34373A",
    generated="#20272C",
    generated_bare="#8D989F",
    select="#7CC7EC",
    mirrors=("#EE765F", "#45A4FC", "#FBD58D", "#57E1C8", "#916EAF", "#A8DFFD", "#9A770B", "#D98C8D"),
    forms=("#7F8B93", "#A98B4B", "#5F8579", "#99705C", "#66729A", "#857C6C"),
    sheen_alpha=0.32,
    shade_alpha=0.5,
    disc_alpha=0.26,
    hidden_alpha=0.26,
)
"""The same by lamplight."""

LOOKS: dict[str, Look] = {look.name: look for look in (LIGHT_LOOK, DARK_LOOK)}


class LookError(ValueError):
    """A look was asked for that is not there."""


def named_look(look: object) -> Look:
    """Return a `Look` from itself, from its name, or from anything that has a `picture` of that type.

    Raises
    ------
    LookError
        When it is none of these.
    """
    if isinstance(look, Look):
        return look
    if isinstance(look, str) and look in LOOKS:
        return LOOKS[look]
    picture = getattr(look, "picture", None)
    if isinstance(picture, Look):
        return picture
    msg = f"{look!r}: not a look; accepted are {', '.join(repr(n) for n in LOOKS)}, a Look or a Theme"
    raise LookError(msg)


def rgb(tint: str) -> NDArray[np.float64]:
    """Return red, green and blue of ``#rrggbb``, each 0 to 1, shape (3,)."""
    return np.array([int(tint[i : i + 2], 16) for i in (1, 3, 5)], dtype=float) / 255.0


def face_tint(look: Look, role: Role, index: int = -1) -> tuple[str, float]:
    """Return tint and opacity of a face."""
    if role in (Role.TYPED_MIRROR, Role.GENERATED_MIRROR):
        return look.mirror(index), look.disc_alpha
    plain = {
        Role.CHAMBER_EVEN: (look.silver_light, look.ball_alpha),
        Role.CHAMBER_ODD: (look.silver_dark, look.ball_alpha),
        Role.REGION: (look.region_dark if index == 1 else look.region, look.ball_alpha),
        Role.FLAGGED: (look.flagged, 0.35),
        Role.PANEL: (look.mirror(index) if index >= 0 else look.panel, 0.35),
        Role.NET: (look.ball, 1.0),
    }
    return plain.get(role, (look.forms[index % len(look.forms)] if index >= 0 else look.face, 1.0))


def line_style(
    look: Look, role: Role, index: int = -1, bare: bool = False
) -> tuple[str, float, tuple[float, ...]]:
    """Return tint, width in pixels and pattern (in line widths) of a line; `bare` when it lies on the ground."""
    if role is Role.TYPED_MIRROR:
        return look.mirror(index), look.typed_width, look.pattern(index)
    plain: dict[Role, tuple[str, float, tuple[float, ...]]] = {
        Role.GENERATED_MIRROR: (look.generated_bare if bare else look.generated, look.generated_width, ()),
        Role.REGION: (look.region_line, look.region_width, ()),
        Role.FLAGGED: (look.flagged, look.region_width, (2.0, 1.5)),
        Role.AXIS: (look.axis, look.generated_width, (9.0, 3.0, 1.5, 3.0)),
        Role.FACE: (look.face_line, 1.4, ()),
        Role.PANEL: (look.ink, 1.4, ()),
        Role.NET: (look.net, look.guide_width, ()),
        Role.GUIDE: (look.guide, look.guide_width, ()),
        Role.SEED: (look.seed, 1.6, ()),
    }
    return plain.get(role, (look.generated, look.generated_width, ()))


def label_tint(look: Look, role: Role, index: int = -1) -> str:
    """Return the tint of a label's text."""
    if role is Role.TYPED_MIRROR:
        return look.mirror(index)
    plain = {Role.FLAGGED: look.flagged}
    if role in (Role.GUIDE, Role.NET, Role.GENERATED_MIRROR):
        return look.muted
    return plain.get(role, look.ink)
