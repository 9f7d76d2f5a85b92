"""The crystallographer's place in the window."""

from __future__ import annotations

from mirrorlab.desktop.crystal.crystal_bench import CrystalBench

__all__ = ["CrystalBench"]
