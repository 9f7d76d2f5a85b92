"""How the user wants angles written and how long orbits may be: theirs, not the sheet's, so kept between starts."""

from __future__ import annotations

from PySide6.QtCore import QSettings

from mirrorlab.angles import STYLES
from mirrorlab.desktop.state import MOST_IMAGES_RANGE, Settings

NOTATION, MOST_IMAGES = "notation", "most images"


def kept_settings(store: QSettings) -> Settings:
    """The settings of the last start; what cannot be read is as at the first."""
    plain = Settings()
    notation = str(store.value(NOTATION, plain.notation))
    try:
        most = int(str(store.value(MOST_IMAGES, plain.most_images)))
    except ValueError:
        most = plain.most_images
    low, high = MOST_IMAGES_RANGE
    return Settings(
        notation=notation if notation in STYLES else plain.notation,
        most_images=most if low <= most <= high else plain.most_images,
    )


def keep_settings(store: QSettings, settings: Settings) -> None:
    """Keep them for the next start."""
    store.setValue(NOTATION, settings.notation)
    store.setValue(MOST_IMAGES, settings.most_images)
