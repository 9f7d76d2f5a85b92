"""The stage: views that show a `Drawing` and say what is pointed at, picked and dragged.

Call `prepare_opengl` before the application object is made, then `make_view` for each picture.
"""

from mirrorlab.desktop.stage.gl_setup import prepare_opengl, why_no_opengl
from mirrorlab.desktop.stage.view import StageView, make_view

__all__ = ["StageView", "make_view", "prepare_opengl", "why_no_opengl"]
