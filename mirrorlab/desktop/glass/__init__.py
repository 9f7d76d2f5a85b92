"""The maker's place in the window."""

from __future__ import annotations

from mirrorlab.desktop.glass.glass_bench import GlassBench

__all__ = ["GlassBench"]
