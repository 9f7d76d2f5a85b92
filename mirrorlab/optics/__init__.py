"""Assemblies of real mirrors: what they show, how exact they must be, and the panels to cut.

Names load on first use, so that importing the package costs nothing.
"""

from __future__ import annotations

import importlib

_HOMES: dict[str, str] = {
    # assemblies
    "Assembly": "assembly",
    "AssemblyError": "lengths",
    "MirrorSpec": "mirror",
    "ObjectPlace": "assembly",
    "PRESETS": "mirror",
    "Panel": "assembly",
    "assembly_for": "build",
    "assembly_from": "build",
    "corner": "build_corner",
    "parse_length": "lengths",
    "tube": "build_tube",
    "wedge": "build_wedge",
    "with_angles": "build",
    # images
    "Image": "images",
    "ImageCount": "images",
    "count_images": "images",
    "edge_views": "sectors",
    "two_mirror_rule": "images",
    # tolerance
    "Intent": "intent",
    "SeamChances": "montecarlo",
    "Tolerance": "tolerance",
    "intent_of": "intent",
    "return_error": "returns",
    "seam_chances": "montecarlo",
    "tolerance_of": "tolerance",
    # what the eye sees
    "Lights": "scene",
    "PATTERNS": "pattern",
    "Scene": "scene",
    "TraceCancelled": "tracer",
    "make_scene": "scene",
    "preview_size": "tracer",
    "spot_at_heights": "scene",
    "trace": "tracer",
    "warm_up": "tracer",
    "with_ball": "scene",
    "with_card": "scene",
    # the workshop: panes, layout, cut job, choosing
    "Choice": "chooser",
    "Closing": "closing",
    "CutJob": "cutjob",
    "Cutting": "nesting",
    "FlatPanel": "panels",
    "GlassPanel": "glass",
    "JointKind": "joints",
    "JointSettings": "glass",
    "Place": "cautions",
    "Report": "report",
    "Section": "report",
    "Stock": "nesting",
    "Surface": "joints",
    "cautions_for": "cautions",
    "choices": "chooser",
    "closing_assemblies": "closing",
    "cut_list": "cutlist",
    "edge_angles": "panels",
    "flatten_panels": "panels",
    "hazards_of": "cautions",
    "job_report": "report",
    "make_cut_job": "cutjob",
    "make_panes": "glass",
    "nearest": "chooser",
    "nest": "nesting",
}
"""Public name to the module of this package that holds it."""

__all__ = sorted(_HOMES)


def __getattr__(name: str) -> object:
    if name not in _HOMES:
        msg = f"module {__name__!r} has no attribute {name!r}"
        raise AttributeError(msg)
    return getattr(importlib.import_module(f"{__name__}.{_HOMES[name]}"), name)


def __dir__() -> list[str]:
    return list(__all__)
