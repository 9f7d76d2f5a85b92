"""Mirrorlab: mirrors, the group their reflections generate, and what each trade makes of it."""

from mirrorlab.angles import Angle, AngleError, AngleSettings, parse_angle, write_angle
from mirrorlab.mirrors import (
    Arrangement,
    ArrangementError,
    FamilyError,
    Finding,
    Orbit,
    OrbitError,
    ReflectionGroup,
    TooLarge,
)

__version__ = "0.1.0"

__all__ = [
    "Angle",
    "AngleError",
    "AngleSettings",
    "Arrangement",
    "ArrangementError",
    "FamilyError",
    "Finding",
    "Orbit",
    "OrbitError",
    "ReflectionGroup",
    "TooLarge",
    "parse_angle",
    "write_angle",
]
