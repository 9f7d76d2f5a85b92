"""Arrangements of mirrors of any rank from 1 to 8, the finite groups they generate, and orbits."""

from mirrorlab.mirrors.arrangement import Arrangement
from mirrorlab.mirrors.families import Family, FamilyError, parse_family
from mirrorlab.mirrors.finding import Evidence, Finding
from mirrorlab.mirrors.flags import Flag
from mirrorlab.mirrors.group import ReflectionGroup, TooLarge
from mirrorlab.mirrors.normals import ArrangementError
from mirrorlab.mirrors.orbit import Orbit, OrbitError, make_orbit
from mirrorlab.mirrors.suggestions import Suggestion
from mirrorlab.mirrors.symbols import PointGroup
from mirrorlab.mirrors.tube import Tube
from mirrorlab.mirrors.walk import OrbitCancelled

__all__ = [
    "Arrangement",
    "ArrangementError",
    "Evidence",
    "Family",
    "FamilyError",
    "Finding",
    "Flag",
    "Orbit",
    "OrbitCancelled",
    "OrbitError",
    "PointGroup",
    "ReflectionGroup",
    "Suggestion",
    "TooLarge",
    "Tube",
    "make_orbit",
    "parse_family",
]
